# Rscript statistics.R > statistics.tsv
source("common.R")
source("samples.R")
begin("statistics.R", c("function", "n", "kind", "extra", "value"))

moment <- function(x, k) mean((x - mean(x))^k)
for (n in c(2, 3, 5, 24, 101)) for (kind in 1:3) {
  x <- sample_of(n, kind)
  emit("mean", c(n, kind, 0), mean(x))
  emit("var", c(n, kind, 0), var(x))
  emit("sd", c(n, kind, 0), sd(x))
  emit("median", c(n, kind, 0), median(x))
  emit("mad", c(n, kind, 0), mad(x, constant = 1))
  for (p in c(0, 0.05, 0.25, 0.5, 0.9, 1)) emit("quantile", c(n, kind, p), quantile(x, p, type = 7))
  if (n > 2) {
    emit("skewness", c(n, kind, 0), moment(x, 3) / moment(x, 2)^1.5)
    emit("kurtosis", c(n, kind, 0), moment(x, 4) / moment(x, 2)^2 - 3)
  }
}

for (n in c(3, 4, 5, 6, 7, 10, 11, 12, 13, 20, 50, 200, 501, 2000, 5000)) for (kind in 1:3) {
  s <- shapiro.test(sample_of(n, kind))
  emit("shapiro_w", c(n, kind, 0), s$statistic)
  emit("shapiro_p", c(n, kind, 0), s$p.value)
}

residuals_of <- function(n, kind, groups) {
  d <- design(n, groups)
  y <- sample_of(n, kind)
  if (groups == 1) lm(y ~ d$x) else lm(y ~ 0 + factor(d$g) + factor(d$g):d$x)
}

for (n in c(12, 24, 101)) for (kind in 1:3) for (groups in c(2, 3)) {
  d <- design(n, groups)
  fit <- residuals_of(n, kind, groups)
  e <- resid(fit)
  g <- factor(d$g)
  z <- abs(e - ave(e, g, FUN = median))
  a <- anova(lm(z ~ g))
  emit("brown_forsythe_f", c(n, kind, groups), a[1, "F value"])
  emit("brown_forsythe_p", c(n, kind, groups), a[1, "Pr(>F)"])
  emit("koenker", c(n, kind, groups), n * summary(lm(e^2 ~ g * d$x))$r.squared)
  emit("durbin_watson", c(n, kind, groups), sum(diff(e)^2) / sum(e^2))
  emit("lag1", c(n, kind, groups), sum(e[-1] * e[-n]) / sum(e^2))
  # Subjects of unequal size that share rows with no group.
  s <- factor(floor(sqrt(seq_len(n))))
  a <- anova(lm(e ~ s))
  msb <- a[1, "Mean Sq"]
  msw <- a[2, "Mean Sq"]
  n0 <- (n - sum(table(s)^2) / n) / (nlevels(s) - 1)
  emit("subjects_f", c(n, kind, groups), a[1, "F value"])
  emit("subjects_p", c(n, kind, groups), a[1, "Pr(>F)"])
  emit("subjects_icc", c(n, kind, groups), (msb - msw) / (msb + (n0 - 1) * msw))
}
