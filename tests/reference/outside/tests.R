# R's t.test, p.adjust and distribution functions.   Rscript tests.R OUTDIR
# Writes paired_t.csv, holm.csv and quantiles.csv.
out <- commandArgs(trailingOnly = TRUE)[1]
script <- sub("^--file=", "", grep("^--file=", commandArgs(), value = TRUE))
digits <- function(x) sprintf("%.17g", x)

sleep_pairs <- read.csv(file.path(dirname(normalizePath(script)), "sleep.csv"))
stopifnot(all.equal(sleep_pairs$first, sleep$extra[sleep$group == 1]),
          all.equal(sleep_pairs$second, sleep$extra[sleep$group == 2]))
test <- t.test(sleep_pairs$first, sleep_pairs$second, paired = TRUE)
writeLines(c("data,mean,se,t,df,p,low,high", paste("sleep", digits(test$estimate), digits(test$stderr),
  digits(test$statistic), digits(test$parameter), digits(test$p.value), digits(test$conf.int[1]),
  digits(test$conf.int[2]), sep = ",")), file.path(out, "paired_t.csv"))

examples <- list(rising = c(.001, .01, .02, .04, .3), unsorted = c(.04, .001, .5, .03, .012, .2), ties = c(.02, .02, .02),
                 above_one = c(.4, .6, .9, 1), running_maximum = c(.01, .011, .012, .9), single = .03,
                 tiny = c(1e-12, 3e-300, .05, 0, .2))
lines <- "example,p,p_holm"
for (name in names(examples)) {
  p <- examples[[name]]
  lines <- c(lines, paste(name, digits(p), digits(p.adjust(p, "holm")), sep = ","))
}
writeLines(lines, file.path(out, "holm.csv"))

lines <- "what,x,df1,df2,value"
add <- function(what, x, df1, df2, value) lines <<- c(lines, paste(what, digits(x), df1, df2, digits(value), sep = ","))
for (df in c(1, 2, 5, 9, 29, 99, 499, 2041, 1e6)) {
  for (p in c(.75, .9, .95, .975, .995, .9995, 1 - 1e-9)) add("t_quantile", p, df, "", qt(p, df))
  for (t in c(0, 1e-8, .1, 1, 2, 5, 10, 20, 40, 1e3, 1e6)) add("t_two_sided_p", t, df, "", 2 * pt(t, df, lower.tail = FALSE))
}
for (df in list(c(1, 1), c(1, 28), c(2, 27), c(6, 9), c(3, 96), c(10, 409), c(24, 1e6)))
  for (f in c(1e-6, .1, .5, 1, 2, 10, 100, 1e4)) add("f_upper_p", f, df[1], df[2], pf(f, df[1], df[2], lower.tail = FALSE))
for (p in c(1e-300, 1e-20, 1e-9, .001, .025, .05, .3, .5, .975, .999)) add("normal_quantile", p, "", "", qnorm(p))
for (z in c(-5, -1, 0, .5, 1.96, 3, 6, 10, 20, 37)) add("normal_upper_p", z, "", "", pnorm(z, lower.tail = FALSE))
writeLines(lines, file.path(out, "quantiles.csv"))
