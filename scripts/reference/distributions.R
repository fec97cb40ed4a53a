# Both tails and quantiles of the distributions by R's own functions, from the body down to 1e-300.
source("scripts/reference/common.R")

Z <- c(-37, -20, -8, -3, -1.96, -0.5, -1e-3, 0, 1e-3, 0.7, 1, 2.5, 6, 12, 25, 37)
P <- c(1e-300, 1e-100, 1e-16, 1e-6, 0.001, 0.025, 0.2, 0.5, 0.7, 0.975, 0.999)
DF <- c(1, 2, 4.5, 8, 30, 137.3, 1000, 1e5)
PAIRS <- list(c(1, 1), c(1, 8), c(2, 27), c(9, 90), c(5, 30.042561), c(59, 6), c(299, 1), c(1, 299), c(499, 498), c(2, 1e5))
X <- c(0.001, 0.05, 0.4, 0.9, 1, 1.2, 2, 4.8, 21, 60, 1e3)

normal <- list(
  tails = lapply(Z, function(z) list(z = z, cdf = pnorm(z), sf = pnorm(z, lower.tail = FALSE), logCdf = pnorm(z, log.p = TRUE))),
  quantiles = lapply(P, function(p) list(p = p, z = qnorm(p)))
)
student <- list(
  tails = unlist(lapply(DF, function(df) lapply(c(-X, 0, X), function(x) list(x = x, df = df, cdf = pt(x, df), sf = pt(x, df, lower.tail = FALSE)))), recursive = FALSE),
  quantiles = unlist(lapply(DF, function(df) lapply(P[P > 1e-17], function(p) list(p = p, df = df, x = qt(p, df)))), recursive = FALSE)
)
fisher <- list(
  tails = unlist(lapply(PAIRS, function(d) lapply(X, function(x) list(x = x, df1 = d[1], df2 = d[2], cdf = pf(x, d[1], d[2]), sf = pf(x, d[1], d[2], lower.tail = FALSE)))), recursive = FALSE),
  quantiles = unlist(lapply(PAIRS, function(d) lapply(c(0.001, 0.025, 0.2, 0.5, 0.95, 0.975), function(p)
    list(p = p, df1 = d[1], df2 = d[2], x = qf(p, d[1], d[2]), upper = qf(p, d[1], d[2], lower.tail = FALSE)))), recursive = FALSE)
)
write_fixture("distributions.R", "jsonlite", list(normal = normal, t = student, f = fisher))
