# Samples by whole-number arithmetic, so that the tests make the same numbers
# to the last bit; sampleOf and design in samples_test.go are their twins.

share <- function(i) ((i * 7919) %% 10007) / 10007

# kind 1 is near the normal shape, 2 skewed, 3 long-tailed.
sample_of <- function(n, kind) {
  i <- seq_len(n)
  u <- share(i)
  if (kind == 1) return(((u + share(2 * i)) + share(3 * i)) + share(5 * i))
  if (kind == 2) return(u * u)
  (u - 0.5) / (u * (1 - u) + 0.01)
}

# Rows in turn over the groups, and an x that fills them unevenly.
design <- function(n, groups) {
  i <- seq_len(n)
  g <- i %% groups
  x <- (i * 13) %% 29 + 10 * g
  list(g = g, x = x)
}
