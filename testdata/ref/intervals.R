# Exact and expanded limits from R's own distributions and tests, for the tests of package stats.
# Run from the top of the repository:
#
#   Rscript testdata/ref/intervals.R > testdata/ref/intervals.csv
#
# Needs R without any package.
cat("# Limits of exact intervals, quantiles of Student's t, p-values of the sign test, quantiles of a sample.\n")
cat("# Made by: ", R.version.string, ", ", format(Sys.Date()), ". 17 significant digits.\n", sep = "")
cat("# Command: Rscript testdata/ref/intervals.R > testdata/ref/intervals.csv\n")
cat("# poisson: c confidence, k events; a, b limits of their expected number (poisson.test).\n")
cat("# binomial: c confidence, k of n; a, b limits of the probability (binom.test).\n")
cat("# gamma: c confidence, count k with a fraction; a, b limits of its expectation (qgamma, shapes k and k + 1).\n")
cat("# beta: c confidence, k with a fraction of n; a, b limits of the probability (qbeta).\n")
cat("# expanded: c confidence, n years; a quantile of t (qt), b = pnorm(-sqrt(n/(n-1))*a).\n")
cat("# sign: k better, n worse; a p-value (binom.test(c(k, n))).\n")
cat("# quantile: c probability; a quantile of 5, 1, 4, 1, 9, 2.6, 5.35 (quantile, type 7).\n")
cat("what,c,k,n,a,b\n")
level <- c(0.5, 0.8, 0.9, 0.95, 0.99, 0.999)
row <- function(what, c, k, n, a, b) cat(sprintf("%s,%g,%g,%d,%.17g,%.17g\n", what, c, k, as.integer(n), a, b))
for (c in level) for (k in c(0, 1, 2, 5, 10, 50, 400, 5000)) {
  ci <- poisson.test(k, conf.level = c)$conf.int
  row("poisson", c, k, 0, ci[1], ci[2])
}
for (c in level) for (n in c(1, 2, 4, 20, 40, 120, 1000)) for (k in unique(c(0, 1, n %/% 3, n %/% 2, n - 1, n))) {
  ci <- binom.test(k, n, conf.level = c)$conf.int
  row("binomial", c, k, n, ci[1], ci[2])
}
for (c in level) for (k in c(0.001, 0.05, 0.25, 0.5, 0.9, 0.999, 1.001, 1.5, 2.75, 10.3, 52.6, 400.5)) {
  row("gamma", c, k, 0, qgamma((1 - c) / 2, k), qgamma((1 + c) / 2, k + 1))
}
for (c in level) for (n in c(1, 4, 40, 1000)) for (k in n * c(0.0005, 0.01, 0.17, 0.5, 0.83, 0.99, 0.9995)) {
  if (k != round(k)) row("beta", c, k, n, qbeta((1 - c) / 2, k, n - k + 1), qbeta((1 + c) / 2, k + 1, n - k))
}
for (c in level) for (n in c(2, 3, 5, 10, 20, 30, 40, 60, 120, 1000)) {
  t <- qt((1 + c) / 2, n - 1)
  row("expanded", c, 0, n, t, pnorm(-sqrt(n / (n - 1)) * t))
}
for (k in c(0, 1, 3, 5, 20, 200)) for (n in c(0, 1, 2, 4, 5, 6, 30, 300)) if (k + n > 0) {
  row("sign", 0, k, n, binom.test(c(k, n))$p.value, 0)
}
for (p in c(0, 0.0071, 0.05, 0.25, 0.33, 0.5, 0.9, 0.95, 0.999, 1)) {
  row("quantile", p, 0, 0, quantile(c(5, 1, 4, 1, 9, 2.6, 5.35), p, type = 7), 0)
}
