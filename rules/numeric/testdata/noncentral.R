# Rscript noncentral.R > noncentral.tsv
# pt(ncp=) holds about 1e-11 absolute. ptukey holds 1e-7 from about 10 degrees
# of freedom on (by the t distribution, which it is for two groups), less below.
source("common.R")
begin("noncentral.R", c("function", "a", "b", "c", "value"))
for (df in c(1, 2.5, 8, 46, 300)) for (ncp in c(-2, 0, 0.5, 2.8, 6, 20)) for (t in c(-3, -0.4, 0, 1, 2.3, 5, 19, 40)) {
  emit("pt", c(t, df, ncp), pt(t, df, ncp))
}
for (df in c(10, 36, 96, 500, Inf)) for (k in c(2, 3, 4, 10, 25)) for (q in c(0.3, 1, 2.5, 3.4, 4.5, 6, 9)) {
  emit("ptukey", c(q, k, df), ptukey(q, k, df, lower.tail = FALSE))
}
for (df in c(2.5, 8, 16, 46, 96)) {
  crit <- qt(0.975, df)
  power <- function(ncp) pt(crit, df, ncp, lower.tail = FALSE) + pt(-crit, df, ncp)
  for (goal in c(0.5, 0.8, 0.95)) {
    emit("detectable", c(df, goal, crit), uniroot(function(ncp) power(ncp) - goal, c(0, 15), tol = 1e-12)$root)
  }
}
