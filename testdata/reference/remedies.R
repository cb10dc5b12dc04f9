# Writes remedies.json: reference values for distributions, refits with one
# remedy, exact randomization tests and deletion results.  Run after make.R,
# from this folder:  Rscript remedies.R
# Base R only.  Written for R 4.2.2.  Everything is computed from definitions,
# with full n x n matrices and actual refits where that is the plain way.
options(warn = 2)
source("functions.R")
entries <- list()
add <- function(quantity, values, roles = NULL, settings = NULL) {
  e <- list(quantity = quantity)
  if (!is.null(roles)) e <- c(e, list(case = roles$name), roles_json(roles)[-1])
  if (!is.null(settings)) e$settings <- settings
  e$values <- values
  entries[[length(entries) + 1]] <<- e
}
seconds <- function() cat(sprintf("%-22s %5.1f s\n", tail(entries, 1)[[1]]$quantity, proc.time()[["elapsed"]]))

R <- function(...) { r <- roles_of(...); r }
cabbages <- R("cabbages", "cabbages.csv", "VitC", "HeadWt", group = "Cult")
iris3 <- R("iris", "iris.csv", "Sepal.Length", "Petal.Length", group = "Species")
mtcars2 <- R("mtcars_simple", "mtcars.csv", "mpg", "wt", group = "am")
mtcarshp <- R("mtcars", "mtcars.csv", "mpg", "wt", "hp", group = "am")
cars1 <- R("cars", "cars.csv", "dist", "speed")
tooth <- R("toothgrowth", "toothgrowth.csv", "len", "dose", group = "supp")
chick <- R("chickweight", "chickweight.csv", "weight", "Time", group = "Diet", subject = "Chick")
co2 <- R("co2", "co2.csv", "uptake", "conc", group = "Type", subject = "Plant")
orange <- R("orange", "orange.csv", "circumference", "age", subject = "Tree")
sitka <- R("sitka", "sitka.csv", "size", "Time", group = "treat", subject = "tree")
women <- R("women", "women.csv", "weight", "height")
pbc <- R("pbc", "pbc.csv", "copper", "bili", "albumin", group = "stage")
stack3 <- R("stackloss", "stackloss.csv", "stack.loss", "Air.Flow", c("Water.Temp", "Acid.Conc."))
stack1 <- R("stackloss_simple", "stackloss.csv", "stack.loss", "Air.Flow")
airwind <- R("airquality", "airquality.csv", "Ozone", "Temp", "Wind", order = "day_number")
airmonth <- R("airquality_month", "airquality.csv", "Ozone", "Temp", group = "Month")
quakes2 <- R("quakes", "quakes.csv", "stations", "mag", "depth")
smallg <- R("small_group", "small_group.csv", "Sepal.Length", "Petal.Length", group = "Species")
levone <- R("leverage_one", "leverage_one.csv", "len", "dose", group = "supp")
labelc <- R("label_covariate", "cabbages.csv", "VitC", "HeadWt", "Date", group = "Cult", label_covariates = "Date")
iriscommon <- R("iris_common_slope", "iris.csv", "Sepal.Length", "Petal.Length", group = "Species", common_slope = TRUE)
pressure <- R("pressure", "pressure.csv", "pressure", "temperature")
trees1 <- R("trees", "trees.csv", "Volume", "Girth")
treesh <- R("trees_height", "trees.csv", "Volume", "Girth", "Height")
seat <- R("seatbelts", "seatbelts.csv", "drivers", "petrol_price", group = "law", order = "month_number")
huron <- R("lakehuron", "lakehuron.csv", "level", "year", order = "year")
longleyo <- R("longley_two", "longley.csv", "Employed", "GNP", "Unemployed", order = "Year")
theoph <- R("theoph", "theoph.csv", "conc", "Wt", subject = "Subject", order = "Time")
chicko <- R("chickweight_ordered", "chickweight.csv", "weight", "Time", group = "Diet", subject = "Chick", order = "Time")
ansc <- lapply(1:4, function(i) R(paste0("anscombe", i), "anscombe.csv", paste0("y", i), paste0("x", i)))

slope_keys <- function(m) paste0("slope:", m$slope_names)
slope_label <- function(m) ifelse(m$slope_names == "", "all", m$slope_names)
# slopes, and pairs of them, as rows of weights on the coefficients
contrasts_of <- function(m) {
  k <- slope_keys(m); q <- length(k); out <- list()
  for (i in seq_len(q)) out[[i]] <- list(of = slope_label(m)[i], l = (colnames(m$X) == k[i]) * 1)
  if (q > 1) for (i in seq_len(q - 1)) for (j in (i + 1):q)
    out[[length(out) + 1]] <- list(of = paste(m$slope_names[j], "less", m$slope_names[i]),
      l = (colnames(m$X) == k[j]) - (colnames(m$X) == k[i]))
  out
}
wald <- function(f, V, keys, df2) {
  q <- length(keys); if (q < 2) return(NULL)
  L <- matrix(0, q - 1, f$p, dimnames = list(NULL, names(f$b)))
  for (i in seq_len(q - 1)) { L[i, keys[1]] <- -1; L[i, keys[i + 1]] <- 1 }
  d <- L %*% f$b
  F <- drop(t(d) %*% solve(L %*% V %*% t(L), d)) / (q - 1)
  list(f = F, df1 = q - 1, df2 = df2, p = pf(F, q - 1, df2, lower.tail = FALSE))
}
estimates <- function(m, f, V, df) lapply(contrasts_of(m), function(k) {
  est <- sum(k$l * f$b)
  c(list(of = k$of, estimate = est), inference(est, sqrt(drop(k$l %*% V %*% k$l)), df)) })

# --------------------------------------------------- distributions ---------
grid <- expand.grid(t = c(-5, -2, -1, -0.3, 0, 0.5, 1, 2, 3, 5, 8, 12), ncp = c(0, 0.5, 1, 2, 2.8, 4, 5.5, 7, 10),
                    df = c(1, 2, 3, 4, 5, 8, 10, 16, 24, 36, 46, 72, 96, 150, 200))
# pt warns of lost digits in the far lower tail; the comparison below judges it
grid$p <- suppressWarnings(mapply(function(t, df, ncp) pt(t, df, ncp), grid$t, grid$df, grid$ncp))
own <- mapply(nct, grid$t, grid$df, grid$ncp)
off <- max(abs(own - grid$p))
cat("noncentral t: largest difference between pt and direct integration", format(off), "\n")
stopifnot(off < 1e-9)
add("noncentral_t_cdf", list(columns = arr(c("t", "ncp", "df", "p")),
  largest_difference_from_integration = off,
  rows = lapply(seq_len(nrow(grid)), function(i) arr(unlist(grid[i, ], use.names = FALSE)))))

detect <- function(df, crit) uniroot(function(d) pt(-crit, df, d) + pt(crit, df, d, lower.tail = FALSE) - 0.8, c(0.1, 200), tol = 1e-13)$root
det <- rbind(
  do.call(rbind, lapply(c(3, 5, 8, 16, 30, 46, 96, 150, 198), function(df) c(2, df, detect(df, qt(0.975, df))))),
  do.call(rbind, lapply(list(c(3, 36), c(4, 96), c(3, 10), c(5, 60), c(6, 66), c(10, 180)),
    function(a) c(a, detect(a[2], range_quantile(0.95, a[1], a[2]) / sqrt(2))))))
add("detectable_ncp", list(columns = arr(c("groups", "df", "ncp")), power = 0.8, confidence = 0.95,
  rows = lapply(seq_len(nrow(det)), function(i) arr(det[i, ]))))

tg <- expand.grid(q = c(0.5, 1, 2, 3, 3.5, 4, 5, 7, 10, 15), k = c(2, 3, 4, 5, 8, 12, 20), df = c(2, 3, 4, 5, 8, 12, 20, 40, 100, 200))
tg$p <- mapply(function(q, k, df) ptukey(q, k, df), tg$q, tg$k, tg$df)
own <- mapply(srange, tg$q, tg$k, tg$df)
off <- abs(own - tg$p)
cat("studentized range: largest difference between ptukey and direct integration", format(max(off)),
    "at", unlist(tg[which.max(off), ]), "\n")
two <- tg$k == 2
exact2 <- 1 - 2 * pt(-tg$q[two] / sqrt(2), tg$df[two])
cat("  of two groups against t: ptukey", format(max(abs(tg$p[two] - exact2))), " integration", format(max(abs(own[two] - exact2))), "\n")
cat("  by df:", sprintf("%d: %.0e", sort(unique(tg$df)), tapply(off, tg$df, max)), "\n")
stopifnot(max(abs(own[two] - exact2)) < 1e-12, off[tg$df >= 12] < 1e-7, off < 1e-3)
for (i in c(which.max(off), order(-off * (tg$k == 20 & tg$df > 10))[1:2], 313, 457)) {   # adaptive, nested
  W <- function(w) integrate(function(z) tg$k[i] * dnorm(z) * (pnorm(z) - pnorm(z - w))^(tg$k[i] - 1), -9, 9, rel.tol = 1e-12, subdivisions = 1000)$value
  P <- integrate(function(u) vapply(u, function(s) W(tg$q[i] * s), 0) * 2 * tg$df[i] * u * dchisq(tg$df[i] * u^2, tg$df[i]),
    0, 1 + 12 / sqrt(tg$df[i]), rel.tol = 1e-12, subdivisions = 2000)$value
  stopifnot(abs(P - own[i]) < 1e-11)
}
add("studentized_range_cdf", list(columns = arr(c("q", "groups", "df", "p", "p_ptukey")),
  largest_difference_from_ptukey = max(off),
  note = "p by direct integration; p_ptukey is R's ptukey, which loses digits at low df",
  rows = lapply(seq_len(nrow(tg)), function(i) arr(c(tg$q[i], tg$k[i], tg$df[i], own[i], tg$p[i])))))
qg <- expand.grid(p = c(0.5, 0.9, 0.95, 0.99), k = c(2, 3, 4, 5, 8, 12, 20), df = c(2, 3, 5, 8, 16, 36, 60, 96, 200))
qg$q <- mapply(range_quantile, qg$p, qg$k, qg$df)
qg$r <- mapply(qtukey, qg$p, qg$k, qg$df)
off <- abs(qg$q / qg$r - 1); two <- qg$k == 2
cat("quantiles: largest relative difference from qtukey", format(max(off)), " from df 16 on", format(max(off[qg$df >= 16])), "\n")
stopifnot(off[qg$df >= 16] < 1e-6, close_to(qg$q[two], sqrt(2) * qt((1 + qg$p[two]) / 2, qg$df[two]), 1e-11))
add("studentized_range_quantile", list(columns = arr(c("p", "groups", "df", "q")),
  rows = lapply(seq_len(nrow(qg)), function(i) arr(c(qg$p[i], qg$k[i], qg$df[i], qg$q[i])))))
seconds()

# ---------------------------------------------------- robust standard errors
hc3_matrix <- function(f) { stopifnot(!f$one); f$C %*% diag((f$e / (1 - f$h))^2) %*% t(f$C) }
for (r in list(cabbages, iris3, mtcarshp, cars1, chick, airmonth, labelc, iriscommon)) {
  m <- prepare(r); f <- solve_rows(m$X, m$y); V <- hc3_matrix(f)
  add("hc3", list(estimates = estimates(m, f, V, f$df), equal_slopes = wald(f, V, slope_keys(m), f$df)), r)
}

# -------------------------------------------------------------- CR2 --------
cr2 <- function(m) {
  f <- solve_rows(m$X, m$y); n <- f$n
  H <- m$X %*% f$C
  M <- diag(n) - H
  s <- m$subject; ids <- unique(s)
  A <- matrix(0, n, n)
  for (k in ids) {
    at <- which(s == k)
    ev <- eigen((M[at, at, drop = FALSE] + t(M[at, at, drop = FALSE])) / 2, symmetric = TRUE)
    root <- ifelse(ev$values > 1e-10, 1 / sqrt(pmax(ev$values, 1e-300)), 0)
    A[at, at] <- ev$vectors %*% (root * t(ev$vectors))
  }
  member <- outer(s, ids, "==") * 1
  lapply(contrasts_of(m), function(k) {
    c <- drop(k$l %*% f$C)
    a <- drop(A %*% c)
    V <- sum(drop(crossprod(member, a * f$e))^2)
    Gm <- M %*% (member * a)
    K <- crossprod(Gm)
    # the same df through the expected value and variance of the quadratic form
    form <- M %*% tcrossprod(member * a) %*% M
    stopifnot(close_to(sum(diag(form)), sum(diag(K))), close_to(sum(form^2), sum(K^2)))
    df <- sum(diag(K))^2 / sum(K^2)
    est <- sum(c * m$y)
    c(list(of = k$of, estimate = est), inference(est, sqrt(V), df)) })
}
for (r in list(orange, co2, sitka, chick, R("airquality_by_month", "airquality.csv", "Ozone", "Temp", "Wind", subject = "Month"),
               R("co2_common", "co2.csv", "uptake", "conc", group = "Type", subject = "Plant", common_slope = TRUE),
               # the levels of x as subjects
               R("toothgrowth_levels", "toothgrowth_levels.csv", "len", "dose", group = "supp", subject = "level"),
               R("cars_levels", "cars_levels.csv", "dist", "speed", subject = "level"))) {
  m <- prepare(r)
  add("cr2", list(subjects = length(unique(m$subject)), estimates = cr2(m)), r)
}
# A block that the model fits by itself: Tree 1 has a group of its own, so its
# matrix is singular.  Only the slope of the other trees is given.
r <- R("orange_parts", "orange_parts.csv", "circumference", "age", group = "part", subject = "Tree")
add("cr2", list(subjects = 5, estimates = cr2(prepare(r))[2]), r)
seconds()

# ------------------------------------------------ order: lag, drift, refits
order_parts <- function(m) {
  s <- if (is.null(m$subject)) rep("", m$n) else m$subject
  o <- order(m$order)                       # stable: ties keep file order
  by_subject <- split(o, factor(s[o], unique(s[o])))
  pairs <- do.call(rbind, lapply(by_subject, function(v) if (length(v) > 1) cbind(v[-length(v)], v[-1])))
  list(sequences = by_subject, before = pairs[, 1], after = pairs[, 2], rank = rank(m$order))
}
lag_of <- function(f, o) {
  H <- f$X %*% f$C
  r1 <- sum(f$e[o$before] * f$e[o$after]) / f$rss
  m0 <- -sum(H[cbind(o$before, o$after)]) / f$df
  list(r1 = r1, m = m0, rho = max(-0.9, min(0.9, r1 - m0)), distance = abs(r1 - m0))
}
prais_winsten <- function(X, y, rho, o) {
  TX <- X; Ty <- y
  for (v in o$sequences) {
    TX[v[1], ] <- sqrt(1 - rho^2) * X[v[1], ]; Ty[v[1]] <- sqrt(1 - rho^2) * y[v[1]]
    if (length(v) > 1) {
      a <- v[-length(v)]; b <- v[-1]
      TX[b, ] <- X[b, , drop = FALSE] - rho * X[a, , drop = FALSE]
      Ty[b] <- y[b] - rho * y[a]
    }
  }
  fit <- lm.fit(TX, Ty)
  list(b = fit$coefficients, rss = sum(fit$residuals^2), inv = chol2inv(qr.R(fit$qr)), sequences = length(o$sequences))
}
# check of the transform: generalized least squares with the AR(1) matrix
gls_check <- function(X, y, rho, o) {
  W <- matrix(0, nrow(X), nrow(X))
  for (v in o$sequences) W[v, v] <- rho^abs(outer(seq_along(v), seq_along(v), "-")) / (1 - rho^2)
  Wi <- solve(W); b <- solve(t(X) %*% Wi %*% X, t(X) %*% Wi %*% y); e <- y - X %*% b
  list(b = drop(b), rss = drop(t(e) %*% Wi %*% e))
}
serial <- function(m, f, o, lost) {
  lag <- lag_of(f, o)
  pw <- prais_winsten(f$X, f$y, lag$rho, o)
  if (f$n <= 200) { g <- gls_check(f$X, f$y, lag$rho, o); stopifnot(close_to(g$b, pw$b, 1e-6), close_to(g$rss, pw$rss, 1e-7)) }
  df <- f$df - lost
  g <- list(b = pw$b, p = f$p); names(g$b) <- colnames(f$X)
  dimnames(pw$inv) <- list(colnames(f$X), colnames(f$X))
  list(r1 = lag$r1, m = lag$m, rho = lag$rho, rss_transformed = pw$rss, sequences = pw$sequences, df = df,
       estimates = lapply(contrasts_of(list(slope_names = m$slope_names, X = f$X)), function(k) {
         est <- sum(k$l * g$b); unit <- drop(k$l %*% pw$inv %*% k$l)
         c(list(of = k$of, estimate = est), inference(est, sqrt(pw$rss / df * unit), df),
           list(se_residual_df_without_rho = sqrt(pw$rss / f$df * unit))) }),
       equal_slopes = wald(g, pw$rss / df * pw$inv, slope_keys(m), df))
}
for (r in list(huron, longleyo, airwind, seat, theoph, chicko)) {
  m <- prepare(r); f <- solve_rows(m$X, m$y); o <- order_parts(m)
  q0 <- o$rank - mean(o$rank); q <- qr.resid(qr(m$X), q0)
  kept <- sqrt(sum(q^2) / sum(q0^2))
  # left over by rounding only when the rank is a line in x
  if (kept < 1e-8) kept <- 0
  q <- q / sqrt(sum(q^2)); qe <- sum(q * f$e)
  drift <- kept >= 0.3
  t_drift <- if (drift) abs(qe / sqrt((f$rss - qe^2) / (f$df - 1))) else NA_real_
  lag <- lag_of(f, o)
  e <- f$e
  add("independence", list(pairs = length(o$before), r1 = lag$r1, m = lag$m, lag_distance = lag$distance,
    drift_asked = drift, drift_share_kept = kept, drift_t = t_drift,
    drift_p = if (drift) 2 * pt(-t_drift, f$df - 1) else NA_real_,
    drift_rms = if (drift) sqrt(max(0, qe^2 - f$s^2) / f$n) / (kept * f$s) else NA_real_,
    durbin_watson = sum((e[o$after] - e[o$before])^2) / f$rss), r)
  s1 <- serial(m, f, o, 1)
  add("serial_errors", s1, r)
  n <- f$n
  scores <- list(none = n * log(f$rss / n), serial_errors = n * log(s1$rss_transformed / n) - log(1 - s1$rho^2) + log(n))
  if (drift) {
    X2 <- cbind(m$X, "order" = o$rank - mean(o$rank))
    f2 <- solve_rows(X2, m$y); m2 <- m; m2$X <- X2
    V <- f2$s^2 * tcrossprod(f2$C)
    add("order_term", list(rss = f2$rss, df = f2$df, estimates = estimates(m2, f2, V, f2$df),
      equal_slopes = wald(f2, V, slope_keys(m), f2$df),
      order_coefficient = f2$b[["order"]], with_serial_errors = serial(m2, f2, o, 1)), r)
    scores$order_term <- n * log(f2$rss / n) + log(n)
  }
  add("cause_scores_order", scores, r)
}
seconds()

# ------------------------------------------------------- own variances -----
for (r in list(cabbages, mtcars2, tooth, iris3, chick, airmonth, smallg)) {
  m <- prepare(r)
  per <- lapply(m$levels, function(l) {
    at <- m$group == l; k <- sum(at)
    if (k < 3) return(list(group = l, rows = k, skipped = TRUE))
    s <- summary(lm(m$y[at] ~ m$x[at]))$coefficients[2, ]
    c(list(group = l, rows = k, slope = s[[1]]), inference(s[[1]], s[[2]], k - 2)) })
  use <- Filter(function(o) is.null(o$skipped), per)
  b <- vapply(use, function(o) o$slope, 0); v <- vapply(use, function(o) o$se^2, 0); d <- vapply(use, function(o) o$rows - 2, 0)
  G <- length(b)
  test <- if (G == 2) {
    df <- (v[1] + v[2])^2 / (v[1]^2 / d[1] + v[2]^2 / d[2])
    c(list(kind = "welch t", difference = b[2] - b[1]), inference(b[2] - b[1], sqrt(v[1] + v[2]), df))
  } else {
    a <- 1 / v; bt <- sum(a * b) / sum(a); k <- sum((1 - a / sum(a))^2 / d)
    F <- (sum(a * (b - bt)^2) / (G - 1)) / (1 + 2 * (G - 2) * k / (G^2 - 1)); df2 <- (G^2 - 1) / (3 * k)
    list(kind = "welch F", f = F, df1 = G - 1, df2 = df2, p = pf(F, G - 1, df2, lower.tail = FALSE))
  }
  if (r$name == "mtcars_simple") {           # Welch's t is F of two groups
    a <- 1 / v; k <- sum((1 - a / sum(a))^2 / d)
    stopifnot(close_to(test$df, 3 / (3 * k)), close_to(test$t^2, sum(a * (b - sum(a * b) / sum(a))^2)))
  }
  add("own_variance", list(groups = per, test = test), r)
}

# -------------------------------------------------------------- curves -----
group_bends <- function(m) {
  B <- vapply(m$levels, function(l) { at <- m$group == l; ifelse(at, (m$x - mean(m$x[at]))^2, 0) }, numeric(m$n))
  keep <- vapply(m$levels, function(l) length(unique(m$x[m$group == l])) > 2, NA)
  colnames(B) <- paste0("bend:", m$levels)
  B[, keep, drop = FALSE]
}
for (r in list(women, co2, tooth, iris3, mtcarshp, cars1, levone, iriscommon)) {
  m <- prepare(r); m$X <- cbind(m$X, group_bends(m)); f <- solve_rows(m$X, m$y)
  V <- f$s^2 * tcrossprod(f$C)
  add("curve", list(parameters = f$p, rss = f$rss, df = f$df, estimates = estimates(m, f, V, f$df),
    equal_slopes = wald(f, V, slope_keys(m), f$df),
    score = f$n * log(f$rss / f$n) + (f$p - prepare(r)$p) * log(f$n)), r)
}
for (r in list(iris3, mtcars2, co2, mtcarshp)) {
  m <- prepare(r); m$X <- cbind(m$X, bend = (m$x - mean(m$x))^2); f <- solve_rows(m$X, m$y)
  V <- f$s^2 * tcrossprod(f$C)
  add("common_curve", list(equal_slopes = wald(f, V, slope_keys(m), f$df),
    curve = c(list(estimate = f$b[["bend"]]), inference(f$b[["bend"]], sqrt(V["bend", "bend"]), f$df))), r)
}

# --------------------------------------------------- linearity, variance ---
score_t <- function(f, q) {
  q <- q / sqrt(sum(q^2)); qe <- sum(q * f$e)
  list(t = qe / sqrt((f$rss - qe^2) / (f$df - 1)), qe = qe)
}
for (r in list(cabbages, women, cars1, iris3, co2, mtcarshp, stack3, airwind, tooth, chick, levone, smallg, labelc)) {
  m <- prepare(r); f <- solve_rows(m$X, m$y); QR <- qr(m$X, tol = 1e-10)
  clear <- function(q, also = NULL) {
    before <- sqrt(sum(q^2)); if (before == 0) return(NULL)
    z <- qr.resid(QR, q); z <- qr.resid(QR, z)
    for (a in also) z <- z - a * sum(a * z) / sum(a^2)
    if (sqrt(sum(z^2)) < 1e-8 * before) NULL else z
  }
  d <- m$x - ave(m$x, m$group)
  cols <- list()
  put <- function(kind, of, q, raw) if (!is.null(q)) {
    t <- score_t(f, q); nq <- sum(raw != 0)
    cols[[length(cols) + 1]] <<- list(kind = kind, of = of, t = t$t, rms = sqrt(max(0, t$qe^2 - f$s^2) / nq) / f$s) }
  a <- clear(d^2); put("bend", "all", a, d * 0 + 1)
  b <- clear(d^3, if (!is.null(a)) list(a)); put("wave", "all", b, d * 0 + 1)
  if (length(m$levels) > 1) { done <- list(); for (l in m$levels) {
    raw <- ifelse(m$group == l, d^2, 0); q <- clear(raw, done)
    if (!is.null(q)) done <- c(done, list(q))
    put("bend", l, q, (m$group == l) * 1) } }
  for (z in setdiff(names(m$numeric), r$predictor)) {
    v <- m$numeric[[z]]; put("covariate", z, clear((v - mean(v))^2), d * 0 + 1) }
  ts <- vapply(cols, function(o) abs(o$t), 0)
  add("linearity_scores", list(columns = cols, statistic = max(ts), df = f$df - 1), r)

  # constant variance
  u <- f$e^2 - f$rss / f$n; tss <- sum(u^2)
  mem <- lapply(names(m$numeric), function(z) {
    v <- m$numeric[[z]]
    per_group <- z == r$predictor && !r$common_slope
    q <- if (per_group) v - ave(v, m$group) else v - mean(v)
    q <- q - mean(q); q <- q / sqrt(sum(q^2))
    list(predictor = z, lm = f$n * sum(q * u)^2 / tss) })
  add("variance_members", list(per_predictor = mem, koenker_lm = f$n * (1 - sum(lm.fit(m$X, u)$residuals^2) / tss)), r)
}

# -------------------------------------------------------- lack of fit ------
for (r in list(cars1, tooth, co2, orange, sitka, airmonth, quakes2, levone)) {
  m <- prepare(r); f <- solve_rows(m$X, m$y)
  cell <- do.call(paste, c(list(m$group), m$numeric, sep = "\r"))
  k <- length(unique(cell)); sspe <- sum(tapply(m$y, cell, function(v) sum((v - mean(v))^2)))
  ok <- k > m$p && m$n > k
  F <- if (ok) ((f$rss - sspe) / (k - m$p)) / (sspe / (m$n - k)) else NA_real_
  if (ok && m$n < 500) { a <- anova(lm(m$y ~ m$X - 1), lm(m$y ~ factor(cell))); stopifnot(close_to(a$F[2], F, 1e-7)) }
  v <- sspe / (m$n - k)
  add("lack_of_fit", list(distinct = k, member = ok && m$n >= 3 * k, sspe = sspe, f = F, df1 = if (ok) k - m$p else NA_real_,
    df2 = if (ok) m$n - k else NA_real_, p = if (ok) pf(F, k - m$p, m$n - k, lower.tail = FALSE) else NA_real_,
    rms = if (ok) sqrt(max(0, f$rss - sspe - (k - m$p) * v) / (m$n * v)) else NA_real_), r)
}

# ------------------------------------------------------------- Box-Cox -----
for (r in list(trees1, treesh, cars1, pressure, tooth, co2, mtcars2, chick, iris3)) {
  m <- prepare(r); stopifnot(m$y > 0)
  lg <- log(m$y); gm <- exp(mean(lg)); QR <- qr(m$X)
  lambda <- (-200:200) / 100
  ll <- vapply(lambda, function(L) {
    z <- if (L == 0) gm * lg else expm1(L * lg) / (L * gm^(L - 1))
    -m$n / 2 * log(sum(qr.resid(QR, z)^2)) }, 0)
  inside <- which(ll >= max(ll) - 1.9207)
  stopifnot(diff(inside) == 1)
  f <- solve_rows(m$X, lg); V <- f$s^2 * tcrossprod(f$C)
  est <- lapply(estimates(m, f, V, f$df)[seq_along(m$slope_names)], function(o)
    c(o, list(percent = 100 * expm1(o$estimate), percent_low = 100 * expm1(o$ci_low), percent_high = 100 * expm1(o$ci_high))))
  at <- function(L) ll[match(round(100 * L), -200:200)]
  named <- c(-1, -0.5, 0.5, 2); hits <- named[vapply(named, function(L) match(round(100 * L), -200:200) %in% inside, NA)]
  best <- lambda[which.max(ll)]
  add("box_cox", list(lambda = best, set_low = lambda[min(inside)], set_high = lambda[max(inside)],
    zero_in_set = at(0) >= max(ll) - 1.9207, one_in_set = at(1) >= max(ll) - 1.9207, named_powers_in_set = arr(hits),
    nearest_named = if (length(hits)) hits[which.min(abs(hits - best))] else NA_real_,
    log_likelihood = list(maximum = max(ll), at_minus_one = at(-1), at_zero = at(0), at_half = at(0.5), at_one = at(1)),
    log_slopes = est, log_equal_slopes = wald(f, V, slope_keys(m), f$df)), r)
}
seconds()

# ---------------------------------------------- log-linear variance --------
harvey <- function(m) {
  f <- solve_rows(m$X, m$y)
  Z <- m$X
  use <- !f$one
  w <- f$e[use]^2 / (1 - f$h[use]); Zu <- Z[use, , drop = FALSE]
  Q <- qr.Q(qr(Zu))
  lnv <- rep(log(mean(w)), sum(use)); start <- lnv
  objective <- function(g) { l <- start + drop(Q %*% g); sum(l) + sum(w * exp(-l)) }
  slope <- function(g) { l <- start + drop(Q %*% g); drop(crossprod(Q, 1 - w * exp(-l))) }
  # plain scoring: at most 30 steps, none longer than 1, stop at 1e-6
  steps <- 0; converged <- FALSE
  repeat {
    step <- drop(Q %*% crossprod(Q, w / exp(lnv) - 1))
    longest <- max(abs(step)); if (longest > 1) step <- step / longest
    lnv <- lnv + step; steps <- steps + 1
    converged <- max(abs(step)) < 1e-6
    if (converged || steps == 30) break
  }
  plain <- lnv
  # the minimum itself: Newton steps on a convex function, halved while it rises
  g <- numeric(ncol(Q)); value <- objective(g)
  for (k in 1:200) {
    l <- start + drop(Q %*% g)
    move <- solve(crossprod(Q * sqrt(w * exp(-l))), -slope(g)); size <- 1
    while (objective(g + size * move) > value && size > 1e-12) size <- size / 2
    if (size <= 1e-12) break
    g <- g + size * move; value <- objective(g)
    if (max(abs(size * move)) < 1e-14) break
  }
  lnv <- start + drop(Q %*% g)
  stopifnot(abs(slope(g)) < 1e-8)
  op <- optim(rep(0, ncol(Q)), objective, slope, method = "BFGS", control = list(maxit = 5000, reltol = 1e-15))
  stopifnot(abs(op$value - (sum(lnv) + sum(w * exp(-lnv)))) < 1e-7 * abs(op$value))
  v <- exp(lnv)
  ratio <- function(l) exp((max(l) - min(l)) / 2)
  rw <- lm.fit(m$X[use, ] / sqrt(v), m$y[use] / sqrt(v))
  n <- m$n
  list(rows = sum(use), spread_ratio = ratio(lnv), spread_ratio_by_optim = ratio(start + drop(Q %*% op$par)),
    objective = sum(lnv) + sum(w * exp(-lnv)), sum_log_v = sum(lnv), rss_weighted = sum(rw$residuals^2),
    score_none = n * log(f$rss / n), score_weights = sum(lnv) + n * log(sum(rw$residuals^2) / n) + (m$p - 1) * log(n),
    plain_scoring = list(steps = steps, converged = converged, spread_ratio = ratio(plain)),
    largest_log_v = max(lnv), smallest_log_v = min(lnv))
}
for (r in list(cabbages, cars1, iris3, mtcarshp, tooth, chick, airwind, quakes2, trees1)) add("log_linear_variance", harvey(prepare(r)), r)

# ------------------------------------------------- set aside, scores -------
for (r in list(cabbages, cars1, mtcarshp, ansc[[3]], stack3)) {
  m <- prepare(r); f <- solve_rows(m$X, m$y)
  t <- f$e / sqrt((f$rss - f$e^2 / (1 - f$h)) / (f$df - 1) * (1 - f$h))
  i <- which.max(abs(t)); g <- solve_rows(m$X[-i, ], m$y[-i]); V <- g$s^2 * tcrossprod(g$C); n <- m$n
  add("set_aside_one", list(row = m$rows[i], rss = g$rss, score_none = n * log(f$rss / n), score = n * log(g$rss / n) + 2 * log(n),
    estimates = estimates(m, g, V, g$df), equal_slopes = wald(g, V, slope_keys(m), g$df)), r)
}

# --------------------------------------------------------- MM lines --------
rho_b <- function(u, c) ifelse(abs(u) > c, 1, 1 - (1 - (u / c)^2)^3)
psi_b <- function(u, c) ifelse(abs(u) > c, 0, u * (1 - (u / c)^2)^2)
dpsi_b <- function(u, c) ifelse(abs(u) > c, 0, (1 - (u / c)^2) * (1 - 5 * (u / c)^2))
w_b <- function(u, c) ifelse(abs(u) > c, 0, (1 - (u / c)^2)^2)
stopifnot(abs(integrate(function(u) rho_b(u, 1.547645) * dnorm(u), -Inf, Inf, rel.tol = 1e-10)$value - 0.5) < 1e-5)
mm_line <- function(x, y) {
  n <- length(y); X <- cbind(1, x - mean(x)); c0 <- 1.547645; c1 <- 4.685061
  scale_of <- function(r) {
    if (mean(abs(r) > 1e-10 * max(abs(y))) <= 0.5) return(0)
    g <- function(s) mean(rho_b(r / s, c0)) - 0.5
    uniroot(g, c(max(abs(r)) * 1e-8, max(abs(r)) * 10), tol = max(abs(r)) * 1e-15, maxiter = 10000)$root
  }
  weighted <- function(w) { s <- sqrt(w); qr.coef(qr(X * s), y * s) }
  improve <- function(b, steps) {
    s <- scale_of(drop(y - X %*% b)); k <- 0
    while (k < steps && s > 0) {
      b1 <- weighted(w_b(drop(y - X %*% b) / s, c0)); if (anyNA(b1)) break
      s1 <- scale_of(drop(y - X %*% b1)); k <- k + 1
      fall <- s - s1; b <- b1; s <- s1
      if (steps > 2 && abs(fall) <= 1e-14 * s) break
    }
    list(b = b, s = s)
  }
  pairs <- combn(n, 2); pairs <- pairs[, x[pairs[1, ]] != x[pairs[2, ]], drop = FALSE]
  stopifnot(ncol(pairs) <= 500)
  starts <- lapply(seq_len(ncol(pairs)), function(j) solve(X[pairs[, j], ], y[pairs[, j]]))
  two <- lapply(starts, improve, steps = 2)
  best2 <- improve(two[[which.min(vapply(two, function(o) o$s, 0))]]$b, 2000)
  if (best2$s == 0) return(list(rows = n, pairs = ncol(pairs), scale = 0, s_slope = best2$b[[2]],
    note = "more than half of the rows lie on one line: no scale, no estimate"))
  all <- lapply(starts, improve, steps = 2000)           # every candidate to the end
  best <- all[[which.min(vapply(all, function(o) o$s, 0))]]
  s <- best2$s; b <- best2$b
  for (k in 1:5000) {
    b1 <- weighted(w_b(drop(y - X %*% b) / s, c1))
    if (max(abs(b1 - b)) < 1e-14 * max(abs(b1), s)) { b <- b1; break }
    b <- b1
  }
  r <- drop(y - X %*% b) / s
  stopifnot(abs(crossprod(X, psi_b(r, c1))) < 1e-8 * n * max(abs(X)))
  dp <- dpsi_b(r, c1); m <- mean(dp); Sxx <- sum((x - mean(x))^2)
  K <- 1 + 2 / n * mean((dp - m)^2) / m^2
  se <- function(K) sqrt(K^2 * (sum(psi_b(r, c1)^2) * s^2 / (n - 2)) / m^2 / Sxx)
  c(list(rows = n, pairs = ncol(pairs), scale = s, s_slope = best2$b[[2]], lowest_scale_of_all_candidates = best$s,
         intercept = b[[1]] - b[[2]] * mean(x), slope = b[[2]], correction = K), inference(b[[2]], se(K), n - 2),
    list(se_with_variance_over_n_minus_1 = se(1 + 2 / n * var(dp) / m^2), rows_of_weight_zero = sum(abs(r) > c1)))
}
for (r in list(cabbages, stack1, trees1, R("mtcars_line", "mtcars.csv", "mpg", "wt"), mtcars2, ansc[[1]], ansc[[3]], women)) {
  m <- prepare(r)
  add("mm_line", list(groups = lapply(m$levels, function(l) c(list(group = l), mm_line(m$x[m$group == l], m$y[m$group == l])))), r)
}
seconds()

# ----------------------------------------- all permutations, all signs -----
all_permutations <- function(n) {
  if (n == 1) return(matrix(1L, 1, 1))
  p <- all_permutations(n - 1); k <- nrow(p)
  do.call(rbind, lapply(n:1, function(pos) cbind(p[, seq_len(pos - 1), drop = FALSE], n, p[, seq_len(n - pos) + pos - 1, drop = FALSE])))
}
for (r in list(R("mtcars_7", "mtcars_7.csv", "mpg", "wt", group = "am"), R("mtcars_8", "mtcars_8.csv", "mpg", "wt", group = "am"))) {
  m <- prepare(r); f <- solve_rows(m$X, m$y); n <- m$n
  X0 <- cbind(outer(m$group, m$levels, "==") * 1, m$x - mean(m$x)); f0 <- solve_rows(X0, m$y)
  M1 <- diag(n) - m$X %*% f$C; M0 <- diag(n) - X0 %*% f0$C
  F_of <- function(Y) { a <- colSums((M0 %*% Y)^2); b <- colSums((M1 %*% Y)^2); ((a - b) / (m$p - ncol(X0))) / (b / f$df) }
  P <- all_permutations(n); stopifnot(nrow(P) == factorial(n), !duplicated(P))
  Y <- matrix(f0$e[t(P)], n) + f0$fitted
  F <- F_of(Y); F_obs <- F_of(cbind(m$y))
  show <- list(seq_len(n), rev(seq_len(n)), c(2:n, 1), c(n, seq_len(n - 1)), c(2, 1, 4, 3, seq(5, n)), c(3, 1, 2, seq(n, 4)))
  add("permuted_groups", list(f = F_obs, permutations = nrow(P), at_least_as_large = sum(F >= F_obs * (1 - 1e-10)),
    p = mean(F >= F_obs * (1 - 1e-10)), tied = sum(abs(F - F_obs) <= 1e-10 * F_obs), largest_f = max(F), mean_f = mean(F),
    examples = lapply(show, function(v) list(permutation = arr(v), f = F_of(cbind(f0$fitted + f0$e[v]))))), r)
}
signs <- function(n) { k <- 0:(2^n - 1); vapply(seq_len(n), function(i) 1 - 2 * (floor(k / 2^(i - 1)) %% 2), numeric(2^n)) }
wild <- function(m) {
  f <- solve_rows(m$X, m$y); n <- m$n; S <- t(signs(n))
  lapply(contrasts_of(m), function(k) {
    # the restricted design: coefficients whose contrast is zero
    N <- qr.Q(qr(cbind(k$l)), complete = TRUE)[, -1, drop = FALSE]
    X0 <- m$X %*% N; colnames(X0) <- paste0("r", seq_len(ncol(X0)))
    f0 <- solve_rows(X0, m$y)
    c <- drop(k$l %*% f$C); est <- sum(c * m$y)
    t_of <- function(Y, centre) {
      b <- drop(c %*% Y); E <- Y - m$X %*% (f$C %*% Y)
      (b - centre) / sqrt(colSums((c * E / (1 - f$h))^2)) }
    t_obs <- t_of(cbind(m$y), 0)
    t_null <- t_of(f0$fitted + S * (f0$e / (1 - f0$h)), 0)
    t_held <- t_of(f$fitted + S * (f$e / (1 - f0$h)), est)   # contrast held at its estimate
    t_held_full <- t_of(f$fitted + S * (f$e / (1 - f$h)), est)
    se <- est / t_obs
    q <- quantile(abs(t_held), 0.95, type = 7)[[1]]
    tol <- 1e-10
    list(of = k$of, estimate = est, hc3_se = se, t = t_obs, sign_vectors = 2^n,
      at_least_as_large = sum(abs(t_null) >= abs(t_obs) * (1 - tol)), tied = sum(abs(abs(t_null) - abs(t_obs)) <= tol * abs(t_obs)),
      p = mean(abs(t_null) >= abs(t_obs) * (1 - tol)),
      quantile_type_7 = q, quantile_smallest_with_share = sort(abs(t_held))[ceiling(0.95 * 2^n)],
      ci_low = est - q * se, ci_high = est + q * se,
      quantile_type_7_full_leverage = quantile(abs(t_held_full), 0.95, type = 7)[[1]],
      t_null = arr(t_null), t_held = arr(t_held)) })
}
for (r in list(R("mtcars_8", "mtcars_8.csv", "mpg", "wt", group = "am"), R("mtcars_8_line", "mtcars_8.csv", "mpg", "wt")))
  add("wild_bootstrap", list(estimates = wild(prepare(r))), r,
      list(sign_vectors = "number k = 0 .. 2^n - 1; row i has sign minus when bit i - 1 of k is set"))
seconds()

# --------------------------------------------------------- fragility -------
greedy <- function(X, y, l, rows, limit, confidence = 0.95) {
  fit_t <- function(keep) {
    f <- solve_rows(X[keep, , drop = FALSE], y[keep])
    est <- sum(l * f$b); list(est = est, t = est / (f$s * sqrt(drop(l %*% tcrossprod(f$C) %*% l))), df = f$df, one = f$one) }
  keep <- seq_along(y); start <- fit_t(keep); side <- sign(start$t)
  clear <- function(o) abs(o$t) > qt(1 - (1 - confidence) / 2, o$df)
  out <- list(t = start$t, df = start$df, clear = clear(start)); if (!out$clear) return(out)
  path <- list(); k <- k_sign <- NA_real_
  now <- start
  for (step in seq_len(limit)) {
    if (now$df <= 1) break
    can <- which(!now$one); if (!length(can)) break
    tries <- lapply(can, function(i) fit_t(keep[-i]))
    v <- side * vapply(tries, function(o) o$t, 0)
    i <- which.min(v)
    tied <- keep[can[v <= v[i] + 1e-9 * abs(v[i])]]
    now <- tries[[i]]; gone <- keep[can[i]]; keep <- keep[-can[i]]
    path[[step]] <- list(row = rows[gone], tied = arr(rows[tied]), estimate = now$est, t = now$t, df = now$df)
    if (is.na(k) && !clear(now)) k <- step
    if (is.na(k_sign) && side * now$est < 0) { k_sign <- step; break }
  }
  out$k <- k; out$k_rows <- arr(if (is.na(k)) numeric(0) else vapply(path[seq_len(k)], function(o) o$row, 0))
  out$k_sign <- k_sign
  out$path <- path
  # fewest of all subsets, for comparison
  if (!is.na(k)) {
    least <- NA_real_
    for (s in seq_len(k)) {
      sets <- combn(length(y), s)
      for (j in seq_len(ncol(sets))) {
        kp <- seq_along(y)[-sets[, j]]; QR <- qr(X[kp, , drop = FALSE])
        if (QR$rank < ncol(X) || length(kp) <= ncol(X)) next
        if (!clear(fit_t(kp))) { least <- s; break }
      }
      if (!is.na(least)) break
    }
    out$k_of_all_subsets <- least
  }
  out
}
frag_cases <- list(ansc[[1]], ansc[[2]], ansc[[3]], ansc[[4]],
  R("orange_two_trees", "orange_two_trees.csv", "circumference", "age", group = "Tree"),
  R("mtcars_14", "mtcars_14.csv", "mpg", "wt"), R("mtcars_14_am", "mtcars_14.csv", "mpg", "wt", group = "am"),
  R("stackloss_14", "stackloss_14.csv", "stack.loss", "Air.Flow", "Water.Temp"),
  R("trees_14", "trees_14.csv", "Volume", "Girth"), R("trees_14_height", "trees_14.csv", "Volume", "Girth", "Height"),
  R("cars_14", "cars_14.csv", "dist", "speed"))
for (r in frag_cases) {
  m <- prepare(r); limit <- max(10, ceiling(m$n / 5)); res <- list()
  for (k in contrasts_of(m)) {
    single <- sum(k$l != 0) == 1
    if (single && is.null(r$covariates)) {
      at <- if (is.null(r$group)) rep(TRUE, m$n) else m$group == k$of
      X <- cbind(1, m$x[at] - mean(m$x[at])); colnames(X) <- c("a", "b")
      o <- greedy(X, m$y[at], c(0, 1), m$rows[at], limit)
    } else if (single || length(m$levels) == 2) o <- greedy(m$X, m$y, k$l, m$rows, limit)
    else next
    res[[length(res) + 1]] <- c(list(of = k$of), o)
  }
  add("fragility", list(limit = limit, answers = res), r)
}
seconds()

# -------------------------------------------------- Anderson-Darling -------
ad <- function(e) {
  n <- length(e); z <- sort((e - mean(e)) / sd(e))
  l <- pnorm(z, log.p = TRUE); u <- pnorm(z, lower.tail = FALSE, log.p = TRUE)
  A <- -n - mean((2 * seq_len(n) - 1) * (l + rev(u)))
  S <- A * (1 + 0.75 / n + 2.25 / n^2)
  p <- if (S > 13) 0 else if (S >= 0.6) exp(1.2937 - 5.709 * S + 0.0186 * S^2) else if (S > 0.34) exp(0.9177 - 4.279 * S - 1.38 * S^2) else
    if (S > 0.2) 1 - exp(-8.318 + 42.796 * S - 59.938 * S^2) else 1 - exp(-13.436 + 101.14 * S - 223.73 * S^2)
  list(a_squared = A, a_star = S, p = p)
}
for (r in list(cabbages, iris3, cars1, airwind, quakes2, pbc, sitka, chick, women, mtcarshp, stack1)) {
  m <- prepare(r); f <- solve_rows(m$X, m$y); o <- ad(f$e)
  # the integral the statistic stands for: n * int (Fn - F)^2 / (F (1 - F)) dF,
  # in closed form between the points
  z <- pnorm(sort((f$e - mean(f$e)) / sd(f$e))); n <- length(z)
  F <- function(a, k) a^2 * log(k) - (1 - a)^2 * log1p(-k) - k   # antiderivative of (k - a)^2 / (k (1 - k))
  ends <- c(z, NA); parts <- vapply(seq_len(n - 1), function(i) F(i / n, z[i + 1]) - F(i / n, z[i]), 0)
  direct <- n * (sum(parts) + (-log1p(-z[1]) - z[1]) + (-log(z[n]) - (1 - z[n])))
  stopifnot(close_to(direct, o$a_squared, 1e-7))
  add("anderson_darling", o, r)
}

# ------------------------------------------- Tukey-Kramer, detectable ------
for (r in list(iris3, chick, airmonth, pbc, cabbages, R("insectsprays_means", "insectsprays.csv", "count", group = "spray"),
               R("chickwts_means", "chickwts.csv", "weight", group = "feed"))) {
  m <- prepare(r); f <- solve_rows(m$X, m$y)
  keys <- if (is.null(m$x)) paste0("level:", m$levels) else slope_keys(m)
  k <- length(keys); crit <- if (k == 2) qt(0.975, f$df) else range_quantile(0.95, k, f$df) / sqrt(2)
  pairs <- list(); widest <- 0
  for (i in seq_len(k - 1)) for (j in (i + 1):k) {
    c <- f$C[keys[j], ] - f$C[keys[i], ]; est <- sum(c * m$y); se <- f$s * sqrt(sum(c^2)); widest <- max(widest, se)
    pairs[[length(pairs) + 1]] <- list(first = sub("^[a-z]+:", "", keys[i]), second = sub("^[a-z]+:", "", keys[j]), difference = est, se = se,
      low = est - crit * se, high = est + crit * se,
      p = if (k == 2) 2 * pt(-abs(est / se), f$df) else 1 - srange(abs(est / se) * sqrt(2), k, f$df)) }
  ncp <- detect(f$df, crit)
  add("tukey_kramer", list(groups = k, df = f$df, critical_t = crit, pairs = pairs, detectable_ncp = ncp, detectable_difference = ncp * widest), r)
}

# --------------------------------------- fan, union bound, error in x ------
fan <- function(m) {
  pieces <- list()
  f <- solve_rows(m$X, m$y)
  for (l in m$levels) { at <- which(m$group == l); if (length(at) < 3 || length(unique(m$x[at])) < 2) next
    g <- solve_rows(cbind(a = 1, b = m$x[at] - mean(m$x[at])), m$y[at]); c <- numeric(m$n); c[at] <- g$C[2, ]
    h <- rep(NA, m$n); h[at] <- g$h; pieces[[length(pieces) + 1]] <- list(of = if (l == "") "all" else l, c = c, at = at, h = h, df = g$df) }
  for (k in contrasts_of(m)) if (sum(k$l != 0) > 1)
    pieces[[length(pieces) + 1]] <- list(of = k$of, c = drop(k$l %*% f$C), at = seq_len(m$n), h = f$h, df = f$df)
  u <- (m$x - min(m$x)) / (max(m$x) - min(m$x))
  coverage <- function(rho, mirror) {
    v <- rho^(2 * (if (mirror) 1 - u else u) - 1)
    v <- v / mean(v)
    vapply(pieces, function(o) {
      E <- sum(v[o$at] * (1 - o$h[o$at])) / o$df
      2 * pnorm(1.959964 / sqrt(sum(o$c^2 * v) / (sum(o$c^2) * E))) - 1 }, 0) }
  smallest <- function(mirror) {
    low <- function(rho) min(coverage(rho, mirror)) < 0.9
    if (low(2)) return(2); if (!low(10)) return(10)
    a <- log(2); b <- log(10); for (i in 1:200) { mid <- (a + b) / 2; if (low(exp(mid))) b <- mid else a <- mid }
    exp(b) }
  rho <- c(smallest(FALSE), smallest(TRUE)); cov <- c(min(coverage(rho[1], FALSE)), min(coverage(rho[2], TRUE)))
  pick <- if (abs(rho[1] - rho[2]) > 1e-9) which.min(rho) else which.min(cov)
  list(rho_up = rho[1], rho_down = rho[2], coverage_up = cov[1], coverage_down = cov[2],
    rho = rho[pick], coverage = cov[pick], direction = c("up", "down")[pick],
    worst = pieces[[which.min(coverage(rho[pick], pick == 2))]]$of)
}
for (r in list(cabbages, iris3, mtcars2, cars1, chick, trees1, co2)) add("consequential_fan", fan(prepare(r)), r)
made <- function(n, G, shape) {
  k <- n / G; u <- (seq_len(k) - 0.5) / k
  x <- switch(shape, normal = qnorm(u), uniform = u, lognormal = exp(qnorm(u)))
  m <- list(n = n, group = rep(as.character(seq_len(G)), each = k), x = rep(x, G), y = numeric(n), levels = as.character(seq_len(G)))
  D <- outer(m$group, m$levels, "==") * 1; m$slope_names <- m$levels
  m$X <- cbind(D, D * m$x); colnames(m$X) <- c(paste0("level:", m$levels), paste0("slope:", m$levels)); m
}
for (shape in c("normal", "uniform", "lognormal"))
  add("consequential_fan", fan(made(50, 2, shape)), NULL, list(rows = 50, groups = 2, shape = shape,
    x = "in each group at u = (i - 1/2)/25: the normal quantile of u, u itself, or exp of the normal quantile"))

for (r in list(cabbages, iris3, cars1, mtcarshp, quakes2)) {
  m <- prepare(r); f <- solve_rows(m$X, m$y); ok <- !f$one
  W <- f$C[slope_keys(m), , drop = FALSE]; W <- W / sqrt(rowSums(W^2))
  t <- f$e / sqrt((f$rss - f$e^2 / (1 - f$h)) / (f$df - 1) * (1 - f$h))
  D <- abs(sweep(W, 2, t / sqrt(1 - f$h), "*")); T <- max(D[, ok])
  a <- apply(abs(W), 2, max) / sqrt(1 - f$h)
  add("influence_bound", list(statistic = T, p = min(1, sum((2 * pt(-T / a, f$df - 1))[ok])), sum = sum((2 * pt(-T / a, f$df - 1))[ok])), r)
}
for (a in list(list(cabbages, 0.2), list(cars1, 1), list(mtcars2, 0.2))) {
  m <- prepare(a[[1]]); f <- solve_rows(m$X, m$y)
  add("predictor_error", list(groups = lapply(seq_along(m$slope_names), function(i) {
    at <- if (is.null(a[[1]]$group)) rep(TRUE, m$n) else m$group == m$slope_names[i]
    s <- summary(lm(m$y[at] ~ m$x[at]))$coefficients[2, ]; lam <- 1 - a[[2]]^2 / var(m$x[at]); pooled <- f$s * sqrt(sum(f$C[slope_keys(m)[i], ]^2))
    list(group = slope_label(m)[i], lambda = lam, slope = s[[1]], corrected = s[[1]] / lam,
         own_se = s[[2]], own_se_corrected = s[[2]] / lam, pooled_se = pooled, pooled_se_corrected = pooled / lam) })), a[[1]], list(sd_u = a[[2]]))
}

names_of <- vapply(entries, function(e) e$quantity, "")
writeLines(json(list(about = about_file("remedies.R"), counts = as.list(table(names_of)), entries = entries)), "remedies.json")
cat("entries:", length(entries), " bytes:", file.size("remedies.json"), "\n"); seconds()
