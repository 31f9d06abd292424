# R's own lm, AIC, BIC, extractAIC and Mallows' Cp on open data.   Rscript models.R OUTDIR
# Writes models.csv: theories of open_data/ on standardised columns, and every AIC and BIC as R prints it and as the
# difference from the first theory (additive constants cancel there); step_swiss.csv; hald_cp.csv.
out <- commandArgs(trailingOnly = TRUE)[1]
script <- sub("^--file=", "", grep("^--file=", commandArgs(), value = TRUE))
open_data <- file.path(dirname(dirname(normalizePath(script))), "open_data")
digits <- function(x) sprintf("%.17g", x)

theories <- list(
  attitude = list(
    two = rating ~ complaints + learning,
    all = rating ~ complaints + privileges + learning + raises + critical + advance,
    product = rating ~ complaints * learning,
    min = rating ~ pmin(complaints, learning)),
  swiss = list(
    all = Fertility ~ Agriculture + Examination + Education + Catholic + Infant.Mortality,
    four = Fertility ~ Agriculture + Education + Catholic + Infant.Mortality,
    product = Fertility ~ Education * Catholic + Infant.Mortality),
  longley = list(
    all = Employed ~ GNP.deflator + GNP + Unemployed + Armed.Forces + Population + Year,
    two = Employed ~ GNP + Unemployed))

lines <- "data,theory,p,aic,bic,aic_minus_first,bic_minus_first,r2,adjusted_r2,f,f_p"
for (name in names(theories)) {
  z <- as.data.frame(scale(read.csv(file.path(open_data, name, "data.csv"))))
  fits <- lapply(theories[[name]], lm, data = z)
  for (theory in names(fits)) {
    fit <- fits[[theory]]; s <- summary(fit); f <- s$fstatistic
    lines <- c(lines, paste(name, theory, length(coef(fit)), digits(AIC(fit)), digits(BIC(fit)),
      digits(AIC(fit) - AIC(fits[[1]])), digits(BIC(fit) - BIC(fits[[1]])), digits(s$r.squared),
      digits(s$adj.r.squared), digits(f[1]), digits(pf(f[1], f[2], f[3], lower.tail = FALSE)), sep = ","))
  }
}
writeLines(lines, file.path(out, "models.csv"))

# help(step): the first two steps of the search on swiss, in the units of the data. With the outcome in standard units
# (as the criteria of a contest have it) the same number is smaller by n ln(variance of Fertility).
swiss <- read.csv(file.path(open_data, "swiss", "data.csv"))
all <- lm(Fertility ~ ., swiss)
less <- lm(Fertility ~ . - Examination, swiss)
shift <- nrow(swiss) * log(var(swiss$Fertility))
writeLines(c("terms,aic_in_data_units,aic_in_standard_units",
  paste("all", digits(extractAIC(all)[2]), digits(extractAIC(all)[2] - shift), sep = ","),
  paste("without Examination", digits(extractAIC(less)[2]), digits(extractAIC(less)[2] - shift), sep = ",")),
  file.path(out, "step_swiss.csv"))

# Heat of cement (Woods, Steinour & Starke 1932; Hald 1952; Draper & Smith): Cp of subsets against all four.
hald <- read.csv(file.path(dirname(normalizePath(script)), "hald.csv"))
if (requireNamespace("MASS", quietly = TRUE)) stopifnot(all.equal(unname(as.matrix(hald)), unname(as.matrix(MASS::cement))))
full <- lm(y ~ x1 + x2 + x3 + x4, hald)
mse <- deviance(full) / df.residual(full)
n <- nrow(hald)
lines <- "terms,p,sse,cp,gm"
for (terms in c("x1 x2", "x1 x4", "x1 x2 x4", "x1 x2 x3", "x4", "x1 x2 x3 x4")) {
  fit <- lm(reformulate(strsplit(terms, " ")[[1]], "y"), hald)
  p <- length(coef(fit)); sse <- deviance(fit)
  lines <- c(lines, paste(terms, p, digits(sse), digits(sse / mse - n + 2 * p), digits(sse / mse + p * log(n)), sep = ","))
}
writeLines(lines, file.path(out, "hald_cp.csv"))
