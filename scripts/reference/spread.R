# Brown-Forsythe by car::leveneTest(center = median); ratio of standard deviations with limits by stats::var.test.
source("scripts/reference/common.R")
suppressPackageStartupMessages(library(car))

brown_forsythe <- function(groups) {
  arm <- factor(rep(seq_along(groups), lengths(groups)))
  result <- leveneTest(unlist(groups), arm, center = median)
  list(f = result[["F value"]][1], df1 = result$Df[1], df2 = result$Df[2], p = result[["Pr(>F)"]][1])
}
# The larger variance is the numerator, so that the limits are those of the larger over the smaller.
sd_ratio <- function(groups) {
  deviations <- vapply(groups, sd, numeric(1))
  ratio <- max(deviations) / min(deviations)
  if (length(groups) != 2) return(list(ratio = ratio))
  limits <- sqrt(var.test(groups[[which.max(deviations)]], groups[[which.min(deviations)]])$conf.int)
  list(ratio = ratio, low = limits[1], high = limits[2])
}
case <- function(name, source, groups) {
  groups <- unname(groups)
  list(name = name, source = source, groups = lapply(groups, vector_of), brownForsythe = brown_forsythe(groups), sdRatio = sd_ratio(groups))
}

input <- read_samples()
published <- lapply(input$groups, function(group) case(group$name, group$source, lapply(group$values, numbers)))
own <- list(
  case("sleep", from_r("sleep"), split(sleep$extra, sleep$group)),
  case("plant-growth", from_r("PlantGrowth"), split(PlantGrowth$weight, PlantGrowth$group)),
  case("insect-sprays", from_r("InsectSprays"), split(as.numeric(InsectSprays$count), InsectSprays$spray)),
  case("insect-sprays-two", from_r("InsectSprays, sprays C and F"), split(as.numeric(InsectSprays$count), InsectSprays$spray)[c("C", "F")]),
  case("unequal-sizes", "lattices: bell of 60, three times bell of 7", list(LATTICE$bell(60), 3 * LATTICE$bell(7))),
  case("small-and-large", "lattices: bell of 2, bell of 300", list(LATTICE$bell(2), LATTICE$bell(300))),
  case("far-apart", "lattices: uniform of 40, heavy of 40", list(LATTICE$uniform(40), LATTICE$heavy(40))),
  case("five-shapes", "the five lattices of 25", lapply(LATTICE, function(shape) shape(25)))
)
write_fixture("spread.R", c("car", "jsonlite"), list(cases = c(published, own)))
