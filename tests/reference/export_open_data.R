# Writes the open survey data that this folder does not carry (they come under the GPL with R packages) from those packages.
#   Rscript export_open_data.R OUTDIR
# OUTDIR/bfi and OUTDIR/lq2002 then hold data.csv beside the study files, splits and reference numbers of open_data/.
# A package that is missing is said so and skipped (Debian: r-cran-psychtools, r-cran-multilevel).
arguments <- commandArgs(trailingOnly = TRUE)
if (length(arguments) != 1) stop("usage: Rscript export_open_data.R OUTDIR")
script <- sub("^--file=", "", grep("^--file=", commandArgs(), value = TRUE))
here <- dirname(normalizePath(script))

export <- function(package, object, folder) {
  if (!requireNamespace(package, quietly = TRUE)) {
    cat("skipped: ", folder, " needs the R package ", package, "\n", sep = "")
    return(invisible())
  }
  loaded <- new.env()
  data(list = object, package = package, envir = loaded)
  out <- file.path(arguments[1], folder)
  dir.create(out, recursive = TRUE, showWarnings = FALSE)
  write.csv(loaded[[object]], file.path(out, "data.csv"), row.names = FALSE, na = "NA")
  for (name in list.files(file.path(here, "open_data", folder))) {
    from <- file.path(here, "open_data", folder, name)
    if (grepl("\\.gz$", name)) writeLines(readLines(gzfile(from)), file.path(out, sub("\\.gz$", "", name)))
    else file.copy(from, file.path(out, name), overwrite = TRUE)
  }
  cat("written: ", out, "\n", sep = "")
}

export("psychTools", "bfi", "bfi")
export("multilevel", "lq2002", "lq2002")
