# Functions shared by make.R and remedies.R: reading the tables, building the
# straight-line design, and writing JSON.  Base R only (base, stats).
# Written for R 4.2.2.

# ---------------------------------------------------------------- JSON -----
# A vector wrapped by arr() is always written as an array; other vectors of
# length one are written as plain values.  NA, NaN and infinite become null.
arr <- function(v) structure(list(v = v), class = "json_array")

json_text <- function(s) paste0("\"", gsub("\"", "\\\\\"", gsub("\\", "\\\\", s, fixed = TRUE)), "\"")

json_atoms <- function(v) {
  if (is.null(v)) return("null")
  if (is.logical(v)) return(ifelse(is.na(v), "null", ifelse(v, "true", "false")))
  if (is.numeric(v)) return(ifelse(is.finite(v), sprintf("%.17g", as.numeric(v)), "null"))
  v <- as.character(v)
  ifelse(is.na(v), "null", json_text(v))
}

json <- function(o, indent = "") {
  deeper <- paste0(indent, " ")
  if (is.null(o)) return("null")
  if (inherits(o, "json_array")) {
    if (is.list(o$v)) return(json(unname(o$v), indent))
    return(paste0("[", paste(json_atoms(o$v), collapse = ","), "]"))
  }
  if (!is.list(o)) {
    a <- json_atoms(o)
    return(if (length(a) == 1) a else paste0("[", paste(a, collapse = ","), "]"))
  }
  if (length(o) == 0) return(if (is.null(names(o))) "[]" else "{}")
  inner <- vapply(o, json, "", indent = deeper)
  if (is.null(names(o)))
    return(paste0("[\n", paste0(deeper, inner, collapse = ",\n"), "\n", indent, "]"))
  paste0("{\n", paste0(deeper, json_text(names(o)), ": ", inner, collapse = ",\n"), "\n", indent, "}")
}

about_file <- function(script, note = NULL)
  c(list(made_by = paste("testdata/reference", script, sep = "/"),
         r_version = R.version.string,
         missing = "null means undefined or not applicable",
         rows = "row numbers are data rows of the file counted from 1, dropped rows included"),
    note)

# ------------------------------------------------------------- tables ------
shortest <- function(v) {
  out <- character(length(v))
  for (i in seq_along(v)) {
    if (is.na(v[i])) { out[i] <- "NA"; next }
    for (digits in 1:17) {
      s <- sprintf("%.*g", digits, v[i])
      if (as.numeric(s) == v[i]) break
    }
    if (grepl("e", s)) {                      # plain decimals read better
      plain <- format(v[i], digits = min(digits, 15), scientific = FALSE, trim = TRUE)
      if (as.numeric(plain) == v[i]) s <- plain
    }
    out[i] <- s
  }
  out
}

write_table <- function(d, file) {
  columns <- lapply(d, function(v) {
    if (is.numeric(v)) return(shortest(as.vector(v)))
    v <- as.character(v)
    stopifnot(!grepl("[,\"\n]", v))
    ifelse(is.na(v), "NA", v)
  })
  writeLines(c(paste(names(d), collapse = ","),
               do.call(paste, c(unname(columns), sep = ","))), file.path("data", file))
}

read_table <- function(file)
  read.csv(file.path("data", file), colClasses = "character", na.strings = "NA",
           check.names = FALSE)

byte_levels <- function(v) sort(unique(v[!is.na(v)]), method = "radix")

# -------------------------------------------------------------- design -----
# roles: data, response, predictor, covariates, group, subject, order,
# common_slope.  Columns of the design are centred at the overall mean, so the
# group columns estimate the height of each line there.
roles_of <- function(name, data, response, predictor = NULL, covariates = NULL,
                     group = NULL, subject = NULL, order = NULL, common_slope = FALSE,
                     label_covariates = NULL, about = NULL)
  list(name = name, data = data, response = response, predictor = predictor,
       covariates = covariates, label_covariates = label_covariates, group = group,
       subject = subject, order = order, common_slope = common_slope, about = about)

roles_json <- function(r)
  list(about = r$about, data = r$data, response = r$response, predictor = r$predictor,
       covariates = arr(as.character(r$covariates)), label_covariates = arr(as.character(r$label_covariates)),
       group = r$group, subject = r$subject, order = r$order, common_slope = r$common_slope)

prepare <- function(r) {
  d <- read_table(r$data)
  number <- function(col) { v <- as.numeric(d[[col]]); stopifnot(is.na(v) == is.na(d[[col]])); v }
  need <- c(r$response, r$predictor, r$covariates, r$group)
  stopifnot(need %in% names(d))
  used <- which(complete.cases(d[need]))
  m <- list(roles = r, rows_in_file = nrow(d), rows = used, n = length(used))
  m$y <- number(r$response)[used]
  m$group <- if (is.null(r$group)) rep("", m$n) else d[[r$group]][used]
  m$levels <- byte_levels(m$group)
  m$rows_per_level <- vapply(m$levels, function(l) sum(m$group == l), 0L)
  m$subject <- if (!is.null(r$subject)) d[[r$subject]][used]
  m$order <- if (!is.null(r$order)) number(r$order)[used]
  D <- outer(m$group, m$levels, "==") * 1
  colnames(D) <- paste0("level:", m$levels)
  X <- D
  m$slope_names <- character(0)
  if (!is.null(r$predictor)) {
    m$x <- number(r$predictor)[used]
    m$x_centre <- mean(m$x)
    if (r$common_slope || is.null(r$group)) {
      S <- cbind(m$x - m$x_centre)
      m$slope_names <- ""
    } else {
      able <- vapply(m$levels, function(l) length(unique(m$x[m$group == l])) > 1, NA)
      S <- (D * (m$x - m$x_centre))[, able, drop = FALSE]
      m$slope_names <- m$levels[able]
    }
    colnames(S) <- paste0("slope:", m$slope_names)
    X <- cbind(X, S)
  }
  m$numeric <- list()                          # x and the numeric covariates
  if (!is.null(m$x)) m$numeric[[r$predictor]] <- m$x
  m$terms <- list(); m$term_centre <- numeric(0)
  for (z in r$covariates) {
    if (z %in% r$label_covariates) {
      v <- d[[z]][used]
      for (l in byte_levels(v)[-1]) {
        key <- paste0(z, ":", l)
        X <- cbind(X, (v == l) * 1); colnames(X)[ncol(X)] <- paste0("term:", key)
        m$terms[[key]] <- list(name = z, level = l); m$term_centre[key] <- 0
      }
    } else {
      v <- number(z)[used]
      m$numeric[[z]] <- v
      X <- cbind(X, v - mean(v)); colnames(X)[ncol(X)] <- paste0("term:", z)
      m$terms[[z]] <- list(name = z, level = NULL); m$term_centre[z] <- mean(v)
    }
  }
  m$X <- X
  m$p <- ncol(X)
  m$df <- m$n - m$p
  m
}

# Least squares with everything that follows from the catchers: row j of C
# times y is coefficient j.
solve_rows <- function(X, y) {
  QR <- qr(X, tol = 1e-10)
  stopifnot(QR$rank == ncol(X))
  C <- qr.coef(QR, diag(nrow(X)))
  C[abs(C) < 1e-13 * apply(abs(C), 1, max)] <- 0   # rounding, where a row has no part
  h <- rowSums(qr.Q(QR)^2)
  e <- qr.resid(QR, y)
  one <- h > 1 - 1e-10
  e[one] <- 0
  h[one] <- 1
  f <- list(X = X, y = y, n = nrow(X), p = ncol(X), df = nrow(X) - ncol(X), C = C,
            b = drop(C %*% y), e = e, fitted = y - e, h = h, one = one, rss = sum(e^2))
  names(f$b) <- rownames(f$C) <- colnames(X)
  f$s <- if (f$df > 0) sqrt(f$rss / f$df) else NA_real_
  f
}

# Estimate, SE, t, p and 95 % interval from an estimate, its SE and its df.
inference <- function(estimate, se, df, level = 0.95) {
  if (is.na(df) || df <= 0 || is.na(se))
    return(list(se = NA_real_, df = if (is.na(df)) NA_real_ else df, t = NA_real_, p = NA_real_,
                ci_low = NA_real_, ci_high = NA_real_))
  t <- estimate / se
  half <- qt(1 - (1 - level) / 2, df) * se
  list(se = se, df = df, t = t, p = 2 * pt(-abs(t), df),
       ci_low = estimate - half, ci_high = estimate + half)
}

# F test of adding columns to X; columns are first cleared of X, and those
# that keep less than 1e-8 of their length (or add no rank) are left out.
added_columns <- function(f, Z) {
  QR <- qr(f$X, tol = 1e-10)
  keep <- matrix(0, f$n, 0)
  for (j in seq_len(ncol(Z))) {
    z <- Z[, j]
    before <- sqrt(sum(z^2))
    if (before == 0) next
    r <- qr.resid(QR, z); r <- qr.resid(QR, r)
    if (ncol(keep)) { r <- r - keep %*% crossprod(keep, r); r <- r - keep %*% crossprod(keep, r) }
    if (sqrt(sum(r^2)) < 1e-8 * before) next
    keep <- cbind(keep, r / sqrt(sum(r^2)))
  }
  df1 <- ncol(keep); df2 <- f$df - df1
  if (df1 == 0 || df2 <= 0) return(list(f = NA_real_, df1 = NA_real_, df2 = NA_real_, p = NA_real_))
  gain <- sum(crossprod(keep, f$e)^2)
  F <- (gain / df1) / ((f$rss - gain) / df2)
  list(f = F, df1 = df1, df2 = df2, p = pf(F, df1, df2, lower.tail = FALSE))
}

# Distributions by trapezoid sums over u = chi / sqrt(df), u = exp(v): analytic and falling off
# at both ends, so correct nearly to rounding.
over_chi <- function(df, g, step = 0.004) {
  v <- seq(-40 / df - 12 / sqrt(df), log(1 + 12 / sqrt(df) + 60 / df), by = step / max(1, sqrt(df) / 4))
  u <- exp(v)
  dens <- 2 * df * u * dchisq(df * u^2, df) * u
  sum(dens * g(u)) * (v[2] - v[1])
}
nct <- function(t, df, ncp) over_chi(df, function(u) pnorm(t * u - ncp))
range_cdf <- function(w, k) {
  z <- seq(-9, 9, by = 0.06)
  drop(crossprod((pnorm(z) - pnorm(outer(z, w, "-")))^(k - 1), dnorm(z))) * k * 0.06
}
# Studentized range.  ptukey is not used: at low df it is off by up to 2e-4, and
# qtukey stops at 1e-4.
srange <- function(q, k, df) over_chi(df, function(u) range_cdf(q * u, k), 0.02)

range_quantile <- function(p, k, df) {
  guess <- qtukey(p, k, df)
  uniroot(function(q) srange(q, k, df) - p, guess * c(0.99, 1.01), tol = 1e-13 * guess, extendInt = "upX")$root
}

close_to <- function(a, b, tol = 1e-8) {
  a <- unname(a); b <- unname(b)
  ok <- (is.na(a) & is.na(b)) | abs(a - b) <= tol * pmax(abs(a), abs(b), 1e-8)
  isTRUE(all(ok))
}
