# Shapiro-Wilk by stats::shapiro.test, Anderson-Darling by nortest::ad.test, on published samples, on residuals
# and differences of published data, and on lattice samples over the whole range of n.
source("scripts/reference/common.R")
library(nortest)

SIZES <- c(3:13, 15, 20, 25, 30, 50, 75, 100, 200, 500, 1000, 2000, 4999, 5000)

shapiro <- function(x) { result <- shapiro.test(x); list(w = unname(result$statistic), p = result$p.value) }
anderson <- function(x) {
  if (length(x) < 8) return(NULL)
  # Above A* = 10 nortest warns of nothing; it returns a constant.
  result <- ad.test(x)
  list(a = unname(result$statistic), p = result$p.value)
}
case <- function(name, source, x) list(name = name, source = source, values = vector_of(x), shapiroWilk = shapiro(x), andersonDarling = anderson(x))
residuals_of <- function(groups) unlist(lapply(groups, function(x) x - mean(x)))

input <- read_samples()
published <- lapply(input$samples, function(sample) case(sample$name, sample$source, numbers(sample$values)))
groups <- lapply(input$groups, function(group) case(paste0(group$name, "-residuals"), group$source, residuals_of(lapply(group$values, numbers))))
own <- list(
  case("sleep-differences", from_r("sleep"), with(sleep, extra[group == 1] - extra[group == 2])),
  case("sleep-first", from_r("sleep"), with(sleep, extra[group == 1])),
  case("sleep-second", from_r("sleep"), with(sleep, extra[group == 2])),
  case("plant-growth-residuals", from_r("PlantGrowth"), residuals_of(split(PlantGrowth$weight, PlantGrowth$group))),
  case("insect-sprays-residuals", from_r("InsectSprays"), residuals_of(split(InsectSprays$count, InsectSprays$spray))),
  case("three-even", "equally spaced", c(1, 2, 3)),
  case("three-uneven", "p near its least value", c(1, 2, 9)),
  case("one-apart-of-four", "least W of four values", c(0, 0, 0, 1)),
  case("one-apart-of-eleven", "least W of eleven values", c(rep(0, 10), 1))
)

lattice <- unlist(lapply(names(LATTICE), function(shape) lapply(SIZES, function(n) {
  x <- LATTICE[[shape]](n)
  list(shape = shape, n = n, shapiroWilk = shapiro(x), andersonDarling = anderson(x))
})), recursive = FALSE)

write_fixture("normality.R", c("nortest", "jsonlite"), list(samples = c(published, groups, own), lattice = lattice))
