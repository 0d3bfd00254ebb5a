# Tails by R. Run: Rscript oracle.R FOLDER, after arguments.py; for the tables after oracle.py.
#
# Writes FOLDER/NAME.r.f64, little-endian doubles, log of the upper tail (and of the lower one
# where the function has two columns) for every row of NAME.args.f64.
# Central tails are R's own pchisq, pf, pt, pnorm and phyper with log.p. R has no beta-binomial:
# its masses are quotients of R's dnbinom, added up (lchoose and lbeta lose 1e-10 here). R 4.2's
# own noncentral tails lose their digits far out, so these are Poisson mixtures of R's central ones
# (Abramowitz & Stegun 26.4.25 and 26.6.18, from memory), and ncp serves nowhere.

folder <- commandArgs(trailingOnly = TRUE)[1]

read_rows <- function(name, columns) {
  path <- file.path(folder, name)
  values <- readBin(path, "double", file.size(path) / 8, endian = "little")
  matrix(values, ncol = columns, byrow = TRUE)
}

# One row of the matrix after the other.
write_rows <- function(name, values) {
  out <- file(file.path(folder, paste0(name, ".r.f64")), "wb")
  writeBin(as.vector(t(values)), out, endian = "little")
  close(out)
}

log_sum <- function(logs) {
  top <- max(logs)
  if (top == -Inf) -Inf else min(0, top + log(sum(exp(logs - top))))
}

# log P from the two one-sided sums: the smaller side says what the larger one is.
from_smaller <- function(upper, lower) {
  if (upper < lower) c(upper, log1p(-exp(upper))) else c(log1p(-exp(lower)), lower)
}

both <- function(tail) cbind(tail(lower = FALSE), tail(lower = TRUE))

by_row <- function(arguments, one) t(apply(arguments, 1, one))

# Terms beyond this one weigh nothing on either side.
last_term <- function(mean, reach) {
  peak <- mean + sqrt(mean * reach)
  ceiling(peak + 14 * sqrt(peak) + 60)
}

x <- read_rows("chiSquared.args.f64", 2)
chi_squared <- function(lower) pchisq(x[, 1], x[, 2], lower.tail = lower, log.p = TRUE)
write_rows("chiSquared", both(chi_squared))

x <- read_rows("f.args.f64", 3)
write_rows("f", pf(x[, 1], x[, 2], x[, 3], lower.tail = FALSE, log.p = TRUE))

x <- read_rows("t.args.f64", 2)
write_rows("t", pt(x[, 1], x[, 2], lower.tail = FALSE, log.p = TRUE))

x <- read_rows("normal.args.f64", 1)
write_rows("normal", pnorm(x[, 1], lower.tail = FALSE, log.p = TRUE))

# Upper tails include k itself, as the program's do.
x <- read_rows("hypergeometric.args.f64", 4)
urn <- function(k, lower) {
  phyper(k, x[, 2], x[, 1] - x[, 2], x[, 3], lower.tail = lower, log.p = TRUE)
}
write_rows("hypergeometric", cbind(urn(x[, 4] - 1, FALSE), urn(x[, 4], TRUE)))

write_rows("betaBinomial", by_row(read_rows("betaBinomial.args.f64", 4), function(row) {
  n <- row[1]
  y <- 0:n
  p <- (row[2] + row[3]) / (n + row[2] + row[3])
  masses <- dnbinom(y, row[2], p, log = TRUE) + dnbinom(n - y, row[3], p, log = TRUE) -
    dnbinom(n, row[2] + row[3], p, log = TRUE)
  one <- function(kept) if (any(kept)) log_sum(masses[kept]) else -Inf
  c(from_smaller(one(y >= row[4]), one(y < row[4]))[1],
    from_smaller(one(y > row[4]), one(y <= row[4]))[2])
}))

x <- read_rows("noncentralChiSquared.args.f64", 3)
write_rows("noncentralChiSquared", by_row(x, function(row) {
  j <- 0:last_term(row[3] / 2, row[1] / 2)
  weights <- dpois(j, row[3] / 2, log = TRUE)
  side <- function(lower) {
    log_sum(weights + pchisq(row[1], row[2] + 2 * j, lower.tail = lower, log.p = TRUE))
  }
  from_smaller(side(FALSE), side(TRUE))
}))

write_rows("noncentralF", by_row(read_rows("noncentralF.args.f64", 4), function(row) {
  a <- row[2] / 2
  b <- row[3] / 2
  j <- 0:last_term(row[4] / 2, min(a * row[1], b))
  weights <- dpois(j, row[4] / 2, log = TRUE)
  df1 <- row[2] + 2 * j
  side <- function(lower) {
    log_sum(weights + pf(row[1] * row[2] / df1, df1, row[3], lower.tail = lower, log.p = TRUE))
  }
  from_smaller(side(FALSE), side(TRUE))
}))

# Pearson's statistic is chisq.test's. R has no G2, and 2 sum O log(O/E) in doubles cancels: its
# column stays NaN, and its log p is that of the statistic of oracle.py.
x <- read_rows("tables.args.f64", 102)
g2 <- read_rows("tables.mp.f64", 4)[, 3]
write_rows("tables", t(sapply(seq_len(nrow(x)), function(i) {
  cells <- matrix(x[i, 2 + seq_len(x[i, 1] * x[i, 2])], nrow = x[i, 1], byrow = TRUE)
  cells <- cells[rowSums(cells) > 0, colSums(cells) > 0, drop = FALSE]
  df <- prod(dim(cells) - 1)
  statistic <- if (df > 0) suppressWarnings(chisq.test(cells, correct = FALSE))$statistic else 0
  log_p <- function(s) pchisq(s, df, lower.tail = FALSE, log.p = TRUE)
  c(statistic, log_p(statistic), NaN, log_p(g2[i]))
})))
