# Rscript condition.R > condition.tsv
# Singular values of columns of unit length.
source("common.R")
source("samples.R")
begin("condition.R", c("function", "n", "kind", "groups", "value"))
for (n in c(12, 101)) for (kind in 1:3) {
  d <- design(n, 2)
  X <- cbind(1, d$x, sample_of(n, kind))
  s <- svd(sweep(X, 2, sqrt(colSums(X^2)), "/"))$d
  emit("condition", c(n, kind, 2), max(s) / min(s))
}
