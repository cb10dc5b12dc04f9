# Rscript quantiles.R > quantiles.tsv
source("common.R")
begin("quantiles.R", c("function", "a", "b", "c", "value"))
# Below 1e-100, and in the lower tail of F, base R holds two digits to none.
for (p in c(1e-10, 0.001, 0.025, 0.3, 0.6, 0.95, 0.975, 0.9999)) {
  emit("qnorm", c(p, 0, 0), qnorm(p))
  for (df in c(1, 1.5, 4, 8, 46, 96, 500, 1e5)) emit("qt", c(p, df, 0), qt(p, df))
  if (p >= 0.025) for (d1 in c(1, 2, 3.5)) for (d2 in c(2, 16, 250)) emit("qf", c(p, d1, d2), qf(p, d1, d2))
}
