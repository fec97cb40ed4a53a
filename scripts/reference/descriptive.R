# Moments from their definitions, quantiles of type 7, positions and band of the normal quantile plot, bins of
# the histogram, adjusted p-values.
source("scripts/reference/common.R")

moments <- function(x) {
  n <- length(x)
  d <- x - mean(x)
  g1 <- mean(d^3) / mean(d^2)^1.5
  g2 <- mean(d^4) / mean(d^2)^2 - 3
  list(mean = mean(x), variance = var(x), median = median(x), quantiles = quantile(x, PROBABILITIES, type = 7, names = FALSE),
    skewness = g1 * sqrt(n * (n - 1)) / (n - 2),
    excessKurtosis = if (n > 3) (n - 1) / ((n - 2) * (n - 3)) * ((n + 1) * g2 + 6))
}
PROBABILITIES <- c(0, 0.1, 0.25, 0.3, 0.5, 0.75, 0.9, 1)

input <- read_samples()
samples <- c(
  lapply(input$samples, function(sample) list(name = sample$name, values = numbers(sample$values))),
  list(
    list(name = "plant-growth", values = PlantGrowth$weight),
    list(name = "insect-sprays", values = as.numeric(InsectSprays$count)),
    list(name = "three", values = c(2, 3, 7)),
    list(name = "heavy-99", values = LATTICE$heavy(99)),
    list(name = "skewed-800", values = LATTICE$skewed(800))
  )
)
cases <- lapply(samples, function(sample) c(list(name = sample$name, values = vector_of(sample$values)), moments(sample$values)))

plot_points <- function(n) {
  i <- seq_len(n)
  list(n = n, theoretical = qnorm(ppoints(n, a = 3 / 8)), low = qnorm(qbeta(0.025, i, n - i + 1)), high = qnorm(qbeta(0.975, i, n - i + 1)))
}
bins <- function(sample) {
  x <- sample$values
  list(name = sample$name, freedmanDiaconis = nclass.FD(x), sturges = nclass.Sturges(x), interquartileRange = IQR(x))
}
adjustments <- lapply(list(c(0.01, 0.02, 0.03, 0.04), c(0.04, 0.01, 0.03), c(0.5, 0.9, 0.02), c(0.01, 0.01, 0.2), c(1e-300, 0.3), 0.7),
  function(p) list(p = vector_of(p), bonferroni = vector_of(p.adjust(p, "bonferroni")), holm = vector_of(p.adjust(p, "holm"))))

write_fixture("descriptive.R", "jsonlite", list(probabilities = PROBABILITIES, cases = cases,
  plots = lapply(c(2, 3, 10, 47), plot_points), bins = lapply(samples, bins), adjustments = adjustments))
