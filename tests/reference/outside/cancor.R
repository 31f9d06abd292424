# First canonical pair of two blocks by R's cancor: what two constructs in mode B settle at (Wold 1982).
#   Rscript cancor.R OUTDIR
# Writes cancor.csv: weights of standardised indicators, scaled to scores of standard deviation 1; the sign of each
# block such that its loadings add up to a positive number; and the correlation of the two scores.
out <- commandArgs(trailingOnly = TRUE)[1]
script <- sub("^--file=", "", grep("^--file=", commandArgs(), value = TRUE))
here <- dirname(normalizePath(script))
digits <- function(x) sprintf("%.17g", x)
blocks <- list(
  linnerud = list(file = file.path(here, "linnerud.csv"), x = c("Weight", "Waist", "Pulse"), y = c("Chins", "Situps", "Jumps")),
  swiss = list(file = file.path(here, "..", "open_data", "swiss", "data.csv"),
               x = c("Agriculture", "Examination", "Education"), y = c("Fertility", "Catholic", "Infant.Mortality")))
unit <- function(z, w) { s <- drop(z %*% w); w <- w / sd(s); if (sum(cor(z, s)) < 0) -w else w }
lines <- "data,quantity,value"
for (name in names(blocks)) {
  b <- blocks[[name]]
  z <- scale(read.csv(b$file)[c(b$x, b$y)])
  pair <- cancor(z[, b$x], z[, b$y])
  wx <- unit(z[, b$x], pair$xcoef[, 1]); wy <- unit(z[, b$y], pair$ycoef[, 1])
  lines <- c(lines, paste(name, c(b$x, b$y), digits(c(wx, wy)), sep = ","), paste(name, "correlation", digits(pair$cor[1]), sep = ","))
}
writeLines(lines, file.path(out, "cancor.csv"))
