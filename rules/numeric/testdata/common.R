# What the scripts beside this file share: where they came from, and how they
# print. Run each from this folder, with base R only.

digits <- function(v) ifelse(is.na(v), "NaN", sprintf("%.17g", v))

begin <- function(script, header) {
  cat("# ", R.version.string, "; ", script, "\n", sep = "")
  cat(header, sep = "\t")
  cat("\n")
}

emit <- function(name, args, value) {
  stopifnot(length(args) == 3)
  cat(name, digits(args), digits(value), sep = "\t")
  cat("\n")
}
