# Rscript holm.R > holm.tsv
source("common.R")
begin("holm.R", c("function", "case", "index", "p", "value"))
cases <- list(0.03, c(0.01, 0.02, 0.03), c(0.04, 0.01, 0.03, 0.01), c(0.9, 0.5, 0.6), c(0.2, NA, 0.01, 0.02), numeric())
for (k in seq_along(cases)) {
  adjusted <- p.adjust(cases[[k]], "holm")
  for (i in seq_along(adjusted)) emit("holm", c(k, i, cases[[k]][i]), adjusted[i])
}
