# Writes data/*.csv and expected.json: reference values for straight-line fits
# with one line per group.  Run from this folder:  Rscript make.R
# Base R only; MASS and survival serve as sources of data sets.  Written for
# R 4.2.2.  Every quantity is computed here from its formula and then checked
# against the functions of stats (lm, anova, hatvalues, rstudent, ...), and for
# tables of up to 200 rows against refits without each row.
options(warn = 2)
source("functions.R")
dir.create("data", FALSE)

# ---------------------------------------------------------------- data -----
plain <- function(d) { d <- as.data.frame(d); names(d) <- gsub("[ ]", "_", names(d)); d }
write_table(MASS::cabbages, "cabbages.csv")
write_table(datasets::pressure, "pressure.csv")
write_table(MASS::Sitka, "sitka.csv")
write_table(survival::pbc[, c("id", "sex", "stage", "bili", "albumin", "copper")], "pbc.csv")
write_table(datasets::stackloss, "stackloss.csv")
write_table(datasets::quakes, "quakes.csv")
write_table(datasets::iris, "iris.csv")
write_table(data.frame(model = rownames(datasets::mtcars), datasets::mtcars), "mtcars.csv")
write_table(datasets::cars, "cars.csv")
write_table(datasets::ToothGrowth, "toothgrowth.csv")
write_table(plain(datasets::ChickWeight), "chickweight.csv")
write_table(datasets::women, "women.csv")
write_table(plain(datasets::CO2), "co2.csv")
write_table(plain(datasets::Orange), "orange.csv")
write_table(data.frame(datasets::airquality, day_number = seq_len(153)), "airquality.csv")
write_table(datasets::longley, "longley.csv")
write_table(datasets::anscombe, "anscombe.csv")
write_table(datasets::InsectSprays, "insectsprays.csv")
write_table(datasets::chickwts, "chickwts.csv")
write_table(datasets::trees, "trees.csv")
# Cut from iris: 12, 7 and 2 rows per species, interleaved by row number.
pick <- c(seq(1, 45, by = 4), seq(51, 99, by = 8), c(104, 131))
write_table(datasets::iris[pick, c("Species", "Petal.Length", "Sepal.Length")], "small_group.csv")
# Cut from ToothGrowth: supplement VC keeps its ten rows of 0.5 and one of 2,
# whose leverage is 1; OJ keeps all thirty.
tg <- datasets::ToothGrowth
write_table(tg[c(1:10, 25, 31:60), ], "leverage_one.csv")
# Cut from ToothGrowth: VC keeps only its rows of dose 1, so has no slope; OJ is
# split by odd and even rows into two groups.
ns <- tg[c(11:20, 31:60), ]
ns$batch <- ifelse(ns$supp == "VC", "vc", ifelse(seq_len(nrow(ns)) %% 2 == 1, "oj-odd", "oj-even"))
write_table(ns[, c("batch", "dose", "len")], "group_without_slope.csv")
# For remedies.R only.
seat <- data.frame(month_number = 1:192, drivers = as.vector(datasets::Seatbelts[, "drivers"]),
  petrol_price = round(as.vector(datasets::Seatbelts[, "PetrolPrice"]), 6),
  law = ifelse(datasets::Seatbelts[, "law"] == 1, "after", "before"))
write_table(seat, "seatbelts.csv")
write_table(data.frame(year = 1875:1972, level = as.vector(datasets::LakeHuron)), "lakehuron.csv")
write_table(plain(datasets::Theoph), "theoph.csv")
small <- data.frame(model = rownames(datasets::mtcars), datasets::mtcars[, c("mpg", "wt", "am")])
write_table(small[1:7, ], "mtcars_7.csv")
write_table(small[1:8, ], "mtcars_8.csv")
write_table(small[1:14, ], "mtcars_14.csv")
write_table(subset(plain(datasets::Orange), Tree %in% c("3", "4")), "orange_two_trees.csv")
write_table(datasets::stackloss[1:14, ], "stackloss_14.csv")
write_table(datasets::trees[1:14, ], "trees_14.csv")
write_table(datasets::cars[1:14, ], "cars_14.csv")
write_table(data.frame(datasets::ToothGrowth, level = paste(tg$supp, tg$dose, sep = "-")), "toothgrowth_levels.csv")
write_table(data.frame(datasets::cars, level = paste0("v", datasets::cars$speed)), "cars_levels.csv")
write_table(data.frame(plain(datasets::Orange), part = ifelse(datasets::Orange$Tree == "1", "one", "rest")), "orange_parts.csv")

# --------------------------------------------------------------- cases -----
cases <- list(
  roles_of("cabbages", "cabbages.csv", "VitC", "HeadWt", group = "Cult", about = "two groups, one predictor"),
  roles_of("pressure", "pressure.csv", "pressure", "temperature", about = "strong curvature, no groups"),
  roles_of("sitka", "sitka.csv", "size", "Time", group = "treat", subject = "tree", about = "repeated subjects, two unequal groups"),
  roles_of("pbc", "pbc.csv", "copper", "bili", "albumin", group = "stage", about = "missing values, four groups, a covariate"),
  roles_of("stackloss", "stackloss.csv", "stack.loss", "Air.Flow", c("Water.Temp", "Acid.Conc."), about = "three predictors, n 21"),
  roles_of("quakes", "quakes.csv", "stations", "mag", "depth", about = "n 1000, rounded values"),
  roles_of("iris", "iris.csv", "Sepal.Length", "Petal.Length", group = "Species", about = "three groups, little overlap"),
  roles_of("mtcars", "mtcars.csv", "mpg", "wt", "hp", group = "am", about = "labels 0 and 1, a covariate"),
  roles_of("mtcars_simple", "mtcars.csv", "mpg", "wt", group = "am", about = "labels 0 and 1"),
  roles_of("cars", "cars.csv", "dist", "speed", about = "one line, ties in x"),
  roles_of("toothgrowth", "toothgrowth.csv", "len", "dose", group = "supp", about = "three levels of x, two groups"),
  roles_of("chickweight", "chickweight.csv", "weight", "Time", group = "Diet", subject = "Chick", about = "four groups, 50 subjects, unbalanced"),
  roles_of("women", "women.csv", "weight", "height", about = "one line, n 15, a slight bend"),
  roles_of("co2", "co2.csv", "uptake", "conc", group = "Type", subject = "Plant", about = "two groups, 12 subjects, a bend"),
  roles_of("orange", "orange.csv", "circumference", "age", subject = "Tree", about = "one line, five subjects"),
  roles_of("airquality", "airquality.csv", "Ozone", "Temp", "Wind", about = "one line, a covariate, missing values"),
  roles_of("airquality_month", "airquality.csv", "Ozone", "Temp", group = "Month", about = "five groups labelled by numbers, missing values"),
  roles_of("longley", "longley.csv", "Employed", "GNP.deflator", c("GNP", "Unemployed", "Armed.Forces", "Population", "Year"), about = "six nearly dependent predictors"),
  roles_of("anscombe1", "anscombe.csv", "y1", "x1", about = "a sound line"),
  roles_of("anscombe2", "anscombe.csv", "y2", "x2", about = "a curve"),
  roles_of("anscombe3", "anscombe.csv", "y3", "x3", about = "one wild row"),
  roles_of("anscombe4", "anscombe.csv", "y4", "x4", about = "one row of leverage 1"),
  roles_of("small_group", "small_group.csv", "Sepal.Length", "Petal.Length", group = "Species", about = "groups of 12, 7 and 2 rows"),
  roles_of("leverage_one", "leverage_one.csv", "len", "dose", group = "supp", about = "a row of leverage 1 in one group"),
  roles_of("group_without_slope", "group_without_slope.csv", "len", "dose", group = "batch", about = "one group has a single x and so no slope"),
  roles_of("label_covariate", "cabbages.csv", "VitC", "HeadWt", "Date", group = "Cult", label_covariates = "Date", about = "a label column as additive covariate"),
  roles_of("iris_two_covariates", "iris.csv", "Sepal.Length", "Petal.Length", c("Sepal.Width", "Petal.Width"), group = "Species", about = "three groups, two covariates"),
  roles_of("iris_common_slope", "iris.csv", "Sepal.Length", "Petal.Length", group = "Species", common_slope = TRUE, about = "one slope, one offset per group"),
  roles_of("pbc_common_slope", "pbc.csv", "copper", "bili", "albumin", group = "stage", common_slope = TRUE, about = "one slope, offsets, a covariate, missing values"),
  roles_of("insectsprays_means", "insectsprays.csv", "count", group = "spray", about = "group means only, balanced"),
  roles_of("chickwts_means", "chickwts.csv", "weight", group = "feed", about = "group means only, unequal sizes"))
names(cases) <- vapply(cases, function(r) r$name, "")

# ------------------------------------------------------------ one case -----
tied_rows <- function(v, rows) rows[which(v >= max(v, na.rm = TRUE) * (1 - 1e-9))]
largest <- function(v, rows) {
  if (all(is.na(v) | v == 0)) return(list(value = if (all(is.na(v))) NA_real_ else 0, row = NA_real_, rows_tied = arr(numeric(0))))
  t <- tied_rows(v, rows)
  list(value = max(v, na.rm = TRUE), row = t[1], rows_tied = arr(t))
}

one_way_f <- function(v, g) {
  k <- length(unique(g)); n <- length(v)
  between <- sum(tapply(v, g, function(u) length(u) * (mean(u) - mean(v))^2))
  within <- sum(tapply(v, g, function(u) sum((u - mean(u))^2)))
  F <- (between / (k - 1)) / (within / (n - k))
  list(f = F, df1 = k - 1, df2 = n - k, p = pf(F, k - 1, n - k, lower.tail = FALSE),
       between = between, within = within)
}

evaluate <- function(r) {
  m <- prepare(r)
  f <- solve_rows(m$X, m$y)
  n <- m$n; p <- m$p; df <- m$df; rows <- m$rows
  G <- length(m$levels)
  out <- c(roles_json(r), list(rows_in_file = m$rows_in_file, rows_used = n, rows_dropped = m$rows_in_file - n,
    parameters = p, residual_df = df, rss = f$rss, residual_sd = f$s))
  tss <- sum((m$y - mean(m$y))^2)
  out$r_squared <- 1 - f$rss / tss
  out$adjusted_r_squared <- 1 - (f$rss / df) / (tss / (n - 1))
  out$group_rows <- if (!is.null(r$group)) as.list(m$rows_per_level)
  out$size_ratio <- if (G > 1) max(m$rows_per_level) / min(m$rows_per_level)

  # HC3: null where a row of leverage 1 enters the coefficient
  u <- f$e / (1 - f$h); u[f$one] <- NA
  hc3 <- function(c) {
    enters <- abs(c) > 1e-8 * max(abs(c))
    if (any(f$one & enters)) NA_real_ else sqrt(sum((c[enters] * u[enters])^2))
  }
  unit <- function(c) c / sqrt(sum(c^2))

  # slopes and levels
  intercept_at_zero <- function(level, slope_key) {
    c <- f$C[paste0("level:", level), ]
    if (!is.na(slope_key)) c <- c - m$x_centre * f$C[paste0("slope:", slope_key), ]
    for (k in names(m$terms)) c <- c - m$term_centre[k] * f$C[paste0("term:", k), ]
    list(est = sum(c * m$y), se = f$s * sqrt(sum(c^2)))
  }
  per_group <- !is.null(m$x) && !(r$common_slope && !is.null(r$group))
  slope_entry <- function(key) {
    c <- f$C[paste0("slope:", key), ]
    b <- sum(c * m$y)
    mine <- if (r$common_slope || is.null(r$group)) rep(TRUE, n) else m$group == key
    share <- unit(c)^2
    o <- list(group = if (per_group && !is.null(r$group)) key, rows = sum(mine), slope = b)
    if (per_group) { i <- intercept_at_zero(key, key); o$intercept <- i$est; o$intercept_se <- i$se }
    o <- c(o, inference(b, f$s * sqrt(sum(c^2)), df))
    o["hc3_se"] <- list(hc3(c))
    o$largest_share <- list(share = max(share), rows_tied = arr(tied_rows(share, rows)))
    if (per_group && is.null(r$covariates)) {
      xx <- m$x[mine]; yy <- m$y[mine]; k <- sum(mine)
      Sxx <- sum((xx - mean(xx))^2)
      bb <- sum((xx - mean(xx)) * yy) / Sxx
      res <- yy - mean(yy) - bb * (xx - mean(xx))
      stopifnot(close_to(bb, b))
      o$own_line <- c(inference(bb, if (k > 2) sqrt(sum(res^2) / (k - 2) / Sxx) else NA_real_, k - 2),
        list(residual_sd = if (k > 2) sqrt(sum(res^2) / (k - 2)) else NA_real_,
             r_squared = if (k > 2) 1 - sum(res^2) / sum((yy - mean(yy))^2) else NA_real_))
      if (k > 2) {
        s0 <- summary(lm(yy ~ xx))
        stopifnot(close_to(coef(s0)[2, ], c(bb, o$own_line$se, o$own_line$t, o$own_line$p)),
                  close_to(s0$r.squared, o$own_line$r_squared),
                  close_to(confint(lm(yy ~ xx))[2, ], c(o$own_line$ci_low, o$own_line$ci_high)))
      }
    }
    o
  }
  out$slopes <- lapply(m$slope_names, slope_entry)
  if (!is.null(m$x) && !per_group)
    out$intercepts <- lapply(m$levels, function(l) {
      i <- intercept_at_zero(l, ""); list(group = l, rows = sum(m$group == l), intercept = i$est, intercept_se = i$se) })
  if (!is.null(m$x) && per_group && length(m$slope_names) < G)
    out$groups_without_slope <- arr(setdiff(m$levels, m$slope_names))

  # comparisons of a set of coefficients
  compare <- function(keys, labels) {
    k <- length(keys)
    L <- cbind(-1, diag(k - 1))
    Cs <- f$C[keys, , drop = FALSE]
    d <- L %*% Cs %*% m$y
    V <- L %*% tcrossprod(Cs) %*% t(L)
    F <- drop(t(d) %*% solve(V, d)) / (k - 1) / f$s^2
    pairs <- list()
    for (i in seq_len(k - 1)) for (j in (i + 1):k) {
      c <- Cs[j, ] - Cs[i, ]
      est <- sum(c * m$y); se <- f$s * sqrt(sum(c^2))
      o <- c(list(first = labels[i], second = labels[j], difference = est), inference(est, se, df))
      o["hc3_se"] <- list(hc3(c))
      o$p_tukey <- if (k == 2) o$p else 1 - srange(abs(o$t) * sqrt(2), k, df)
      half <- if (k == 2) qt(0.975, df) * se else range_quantile(0.95, k, df) / sqrt(2) * se
      o$tukey_low <- est - half; o$tukey_high <- est + half
      pairs[[length(pairs) + 1]] <- o
    }
    raw <- vapply(pairs, function(o) o$p, 0)
    ord <- order(raw); K <- length(raw)
    holm <- numeric(K); holm[ord] <- pmin(1, cummax((K:1) * raw[ord]))
    stopifnot(close_to(holm, p.adjust(raw, "holm")))
    for (i in seq_len(K)) pairs[[i]]$p_holm <- holm[i]
    list(f = F, df1 = k - 1, df2 = df, p = pf(F, k - 1, df, lower.tail = FALSE), pairs = pairs)
  }
  if (per_group && length(m$slope_names) > 1)
    out$difference <- compare(paste0("slope:", m$slope_names), m$slope_names)
  if (is.null(m$x) && G > 1) {
    out$means <- lapply(m$levels, function(l) {
      c <- f$C[paste0("level:", l), ]; est <- sum(c * m$y)
      o <- c(list(group = l, rows = sum(m$group == l), mean = est), inference(est, f$s * sqrt(sum(c^2)), df))
      o["hc3_se"] <- list(hc3(c))
      o$own_sd <- sd(m$y[m$group == l]); o })
    out$equal_means <- compare(paste0("level:", m$levels), m$levels)
  }
  if (!is.null(m$x) && G > 1) {          # pooled line, and common slope within groups
    simple <- lm(m$y ~ m$x)
    common <- lm(as.formula(paste("m$y ~ 0 + m$group + m$x", if (length(m$terms)) "+ m$X[, paste0('term:', names(m$terms))]")))
    k1 <- coef(summary(simple))["m$x", ]; k2 <- coef(summary(common))["m$x", ]
    entry <- function(k, fit) c(list(slope = k[[1]]), inference(k[[1]], k[[2]], fit$df.residual))
    out$pooled_slope <- entry(k1, simple)
    out$common_slope_within_groups <- entry(k2, common)
  }
  out$covariate_terms <- lapply(names(m$terms), function(k) {
    c <- f$C[paste0("term:", k), ]; est <- sum(c * m$y)
    o <- c(list(name = m$terms[[k]]$name, level = m$terms[[k]]$level, estimate = est),
      inference(est, f$s * sqrt(sum(c^2)), df))
    if (is.null(m$terms[[k]]$level)) o["level"] <- list(NULL)
    o["hc3_se"] <- list(hc3(c)); o })

  # residual checks
  w <- if (n >= 3 && n <= 5000) shapiro.test(f$e)
  z <- f$e - mean(f$e); m2 <- mean(z^2)
  out$shapiro <- list(w = if (!is.null(w)) w$statistic[[1]], p = if (!is.null(w)) w$p.value,
    skewness = mean(z^3) / m2^1.5, excess_kurtosis = mean(z^4) / m2^2 - 3)
  if (p > 1) {
    sq <- f$e^2
    g <- solve_rows(m$X, sq)
    explained <- 1 - sum((sq - g$X %*% g$b)^2) / sum((sq - mean(sq))^2)
    # the fitted values must span the constant: they do, level columns sum to 1
    lm_k <- n * explained
    out$koenker <- list(lm = lm_k, df = p - 1, p = pchisq(lm_k, p - 1, lower.tail = FALSE))
    check <- lm(sq ~ m$X - 1)
    stopifnot(close_to(lm_k, n * (1 - sum(resid(check)^2) / sum((sq - mean(sq))^2)), 1e-7))
  }
  if (G > 1) {
    centre <- tapply(f$e, m$group, median)
    a <- abs(f$e - centre[m$group])
    bf <- one_way_f(a, m$group)
    out$brown_forsythe <- bf[c("f", "df1", "df2", "p")]
    stopifnot(close_to(anova(lm(a ~ factor(m$group)))$F[1], bf$f))
  }
  if (!is.null(m$x)) {
    centred <- (f$fitted - mean(f$fitted)) / sd(f$fitted)
    out$reset <- added_columns(f, cbind(centred^2, centred^3))
    bends <- vapply(m$levels, function(l) {
      at <- m$group == l; v <- numeric(n); v[at] <- (m$x[at] - mean(m$x[at]))^2; v }, numeric(n))
    out$quadratic_per_group <- added_columns(f, bends)
    base <- lm(m$y ~ m$X - 1)
    if (is.finite(out$quadratic_per_group$f)) {
      more <- lm(m$y ~ cbind(m$X, bends) - 1)
      a <- anova(base, more)
      stopifnot(close_to(a$F[2], out$quadratic_per_group$f, 1e-6), a$Df[2] == out$quadratic_per_group$df1)
    }
    if (is.finite(out$reset$f)) {
      a <- anova(base, lm(m$y ~ cbind(m$X, centred^2, centred^3) - 1))
      stopifnot(close_to(a$F[2], out$reset$f, 1e-6), a$Df[2] == out$reset$df1)
    }
  }

  # rows
  ok <- !f$one
  r_in <- ifelse(ok, f$e / (f$s * sqrt(1 - f$h)), NA)
  s_out <- sqrt((f$rss - ifelse(ok, f$e^2 / (1 - f$h), 0)) / (df - 1))
  r_ex <- ifelse(ok, f$e / (s_out * sqrt(1 - f$h)), NA)
  cook <- ifelse(ok, r_in^2 * f$h / ((1 - f$h) * p), NA)
  slope_keys <- if (is.null(m$x)) paste0("level:", m$levels) else paste0("slope:", m$slope_names)
  dfbetas <- lapply(slope_keys, function(k) ifelse(ok, r_ex * unit(f$C[k, ]) / sqrt(1 - f$h), NA))
  names(dfbetas) <- sub("^(slope|level):", "", slope_keys)
  names(dfbetas)[names(dfbetas) == ""] <- "all"
  top <- largest(abs(r_ex), rows); worst <- match(top$row, rows)
  out$outlier <- list(row = top$row, rows_tied = top$rows_tied, t = r_ex[worst], df = df - 1,
    p = 2 * pt(-abs(r_ex[worst]), df - 1), rows_tested = sum(ok),
    p_bonferroni = min(1, sum(ok) * 2 * pt(-abs(r_ex[worst]), df - 1)))
  out$largest_leverage <- largest(f$h, rows)
  out$rows_leverage_one <- arr(rows[f$one])
  out$largest_cook <- largest(cook, rows)
  out$largest_dfbetas <- lapply(names(dfbetas), function(k) {
    b <- largest(abs(dfbetas[[k]]), rows)
    list(of = k, value = if (is.na(b$row)) b$value else dfbetas[[k]][match(b$row, rows)], row = b$row, rows_tied = b$rows_tied) })

  # checks against stats, and against refits without each row
  fit <- lm(m$y ~ m$X - 1)
  sm <- summary(fit)
  influence_ok <- ok & f$h < 1 - 1e-8
  stopifnot(close_to(sm$sigma, f$s), close_to(sm$coefficients[, 1:2], cbind(f$b, f$s * sqrt(rowSums(f$C^2))), 1e-7),
    close_to(hatvalues(fit), f$h, 1e-7), close_to(rstandard(fit)[influence_ok], r_in[influence_ok], 1e-6),
    close_to(rstudent(fit)[influence_ok], r_ex[influence_ok], 1e-6),
    close_to(cooks.distance(fit)[influence_ok], cook[influence_ok], 1e-6))
  db <- dfbetas(fit)
  for (k in seq_along(slope_keys)) {
    j <- match(slope_keys[k], colnames(m$X))
    big <- max(abs(db[influence_ok, j]))
    stopifnot(abs(db[influence_ok, j] - dfbetas[[k]][influence_ok]) < 1e-7 * big + 1e-12)
  }
  if (n <= 200) for (i in which(influence_ok)) {
    g <- lm.fit(m$X[-i, , drop = FALSE], m$y[-i])
    s_i <- sqrt(sum(g$residuals^2) / (n - 1 - p))
    stopifnot(close_to(s_i, s_out[i], 1e-7))
    for (k in seq_along(slope_keys)) {
      j <- match(slope_keys[k], colnames(m$X))
      direct <- (f$b[j] - g$coefficients[j]) / (s_i * sqrt(sum(f$C[j, ]^2)))
      stopifnot(abs(direct - dfbetas[[k]][i]) < 1e-7 * max(abs(dfbetas[[k]]), na.rm = TRUE) + 1e-12)
    }
  }
  # the same model by formula, uncentred
  if (per_group && length(m$slope_names) == G) {
    gg <- factor(m$group, m$levels)
    rhs <- if (G > 1) "0 + gg + gg:xx" else "1 + xx"
    if (length(m$terms)) rhs <- paste(rhs, "+ zz")
    xx <- m$x; yy <- m$y
    zz <- if (length(m$terms)) sweep(m$X[, paste0("term:", names(m$terms)), drop = FALSE], 2, -m$term_centre)
    full <- lm(as.formula(paste("yy ~", rhs)))
    got <- coef(full)
    stopifnot(close_to(got[seq_len(G)], vapply(out$slopes, function(o) o$intercept, 0), 1e-6),
              close_to(got[grepl("xx$", names(got))], vapply(out$slopes, function(o) o$slope, 0), 1e-6))
    if (G == 1) stopifnot(close_to(summary(full)$r.squared, out$r_squared),
                          close_to(summary(full)$adj.r.squared, out$adjusted_r_squared))
    if (G > 1) {
      a <- anova(lm(as.formula(paste("yy ~ 0 + gg + xx", if (length(m$terms)) "+ zz"))), full)
      stopifnot(close_to(a$F[2], out$difference$f, 1e-6), close_to(a$`Pr(>F)`[2], out$difference$p, 1e-5))
    }
  }
  if (is.null(m$x) && G > 1) {
    a <- anova(lm(m$y ~ factor(m$group)))
    stopifnot(close_to(a$F[1], out$equal_means$f))
    hsd <- TukeyHSD(aov(y ~ g, data.frame(y = m$y, g = factor(m$group, m$levels))))$g
    mine <- t(vapply(out$equal_means$pairs, function(o) c(o$difference, o$tukey_low, o$tukey_high, o$p_tukey), numeric(4)))
    stopifnot(abs(hsd[, 1:3] - mine[, 1:3]) < 1e-4 * max(abs(mine[, 1:3])), abs(hsd[, 4] - mine[, 4]) < 1e-9)
  }

  step <- diff(f$e)
  out$durbin_watson <- sum(step^2) / f$rss
  out$lag1 <- sum(f$e[-1] * f$e[-n]) / f$rss

  # several predictors
  if (length(m$numeric) > 1) {
    r2 <- function(target, others, intercepts) {
      fit <- lm.fit(cbind(intercepts, others), target)
      1 - sum(fit$residuals^2) / sum((target - fitted(lm.fit(intercepts, target)))^2)
    }
    Z <- do.call(cbind, lapply(m$numeric, function(v) v - mean(v)))
    dummy <- outer(m$group, m$levels, "==") * 1
    vif <- function(D) as.list(vapply(seq_len(ncol(Z)), function(j) {
      # for the group form the squares stay about the overall mean of the target
      total <- sum(Z[, j]^2)
      resid <- lm.fit(cbind(D, Z[, -j, drop = FALSE]), Z[, j])$residuals
      total / sum(resid^2) }, 0))
    out$vif <- setNames(vif(matrix(1, n, 1)), names(m$numeric))
    if (G > 1) out$vif_with_group_intercepts <- setNames(vif(dummy), names(m$numeric))
    R <- solve(cor(Z)); stopifnot(close_to(diag(R), unlist(out$vif), 1e-6))
    W <- cbind(1, do.call(cbind, m$numeric))
    W <- sweep(W, 2, sqrt(colSums(W^2)), "/")
    sv <- svd(W)$d
    out$condition_scaled_with_intercept <- max(sv) / min(sv)
  }
  # overlap
  if (G > 1 && !is.null(m$x)) {
    ends <- vapply(m$levels, function(l) range(m$x[m$group == l]), numeric(2))
    part <- function(k) {
      at <- m$group %in% m$levels[k]
      lo <- max(ends[1, k]); hi <- min(ends[2, k])
      list(low = lo, high = hi, share_inside = mean(m$x[at] >= lo & m$x[at] <= hi))
    }
    out$overlap <- part(seq_len(G))
    out$overlap$pairs <- list()
    for (i in seq_len(G - 1)) for (j in (i + 1):G)
      out$overlap$pairs[[length(out$overlap$pairs) + 1]] <- c(list(first = m$levels[i], second = m$levels[j]), part(c(i, j)))
  }
  # subjects
  if (!is.null(m$subject)) {
    has <- !is.na(m$subject)
    s <- m$subject[has]; v <- f$e[has]
    a <- one_way_f(v, s)
    k <- a$df1 + 1; N <- length(v); sizes <- table(s)
    n0 <- (N - sum(sizes^2) / N) / (k - 1)
    msb <- a$between / a$df1; msw <- a$within / a$df2
    out$subjects <- list(subjects = k, rows = N, icc = (msb - msw) / (msb + (n0 - 1) * msw),
      between_f = a$f, df1 = a$df1, df2 = a$df2, p = a$p,
      t_share = sum(tapply(v, s, function(u) length(u) * mean(u)^2)) / f$rss)
    stopifnot(close_to(anova(lm(v ~ factor(s)))$F[1], a$f))
  }

  vectors <- list(fitted = f$fitted, residual = f$e, leverage = f$h, internally_studentized = r_in,
    externally_studentized = r_ex, cook = cook)
  full_rows <- c(list(row = arr(rows)), lapply(vectors, arr), list(dfbetas = lapply(dfbetas, arr)))
  if (n <= 200) out$rows <- full_rows
  else {
    digest <- function(v) {
      o <- order(-abs(v))[1:5]
      list(largest_rows = arr(rows[o]), largest_values = arr(v[o]), sum = sum(v, na.rm = TRUE),
           sum_of_squares = sum(v^2, na.rm = TRUE), defined = sum(!is.na(v)))
    }
    out$row_digest <- c(lapply(vectors, digest), list(dfbetas = lapply(dfbetas, digest)))
  }
  attr(out, "full_rows") <- c(list(row = rows), vectors, list(dfbetas = dfbetas))
  out
}

results <- lapply(cases, function(r) tryCatch(evaluate(r), error = function(e) stop(r$name, ": ", conditionMessage(e))))
writeLines(json(list(about = about_file("make.R"), cases = results)), "expected.json")
cat("cases:", length(results), " bytes:", file.size("expected.json"), "\n")
