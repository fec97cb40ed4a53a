# What the whole path should find in three of R's own data sets. The committed files are compared with R's first;
# then R's procedures judge the quantities of the plans in tests/reference/openPlans.ts: shapiro.test, car's
# leveneTest(center = median), var.test, and G1, G2 by their formulas (Joanes & Gill 1998).
source("scripts/reference/common.R")
suppressPackageStartupMessages(library(car))

read_extract <- function(name) read.csv(file.path("tests/reference/data", name), colClasses = c(USUBJID = "character"))
same <- function(found, expected) if (!identical(as.numeric(found), as.numeric(expected))) stop("a committed file is not R's data set")

moments <- function(x) {
  n <- length(x)
  d <- x - mean(x)
  m <- function(r) mean(d^r)
  g1 <- m(3) / m(2)^1.5 * sqrt(n * (n - 1)) / (n - 2)
  g2 <- ((n + 1) * (m(4) / m(2)^2 - 3) + 6) * (n - 1) / ((n - 2) * (n - 3))
  half <- 1.96 * sqrt(6 * n * (n - 1) / ((n - 2) * (n + 1) * (n + 3)))
  list(skewness = g1, low = g1 - half, high = g1 + half, kurtosis = g2)
}
shape <- function(x) {
  test <- shapiro.test(x)
  c(list(n = length(x)), moments(x), list(w = unname(test$statistic), p = test$p.value))
}
spread <- function(x, arm) {
  deviations <- tapply(x, arm, sd)
  test <- leveneTest(x, factor(arm), center = median)
  found <- list(ratio = max(deviations) / min(deviations), f = test[["F value"]][1], df1 = test$Df[1], df2 = test$Df[2], p = test[["Pr(>F)"]][1])
  if (length(deviations) > 2) return(found)
  limits <- sqrt(var.test(x[arm == names(which.max(deviations))], x[arm == names(which.min(deviations))])$conf.int)
  c(found, list(low = limits[1], high = limits[2]))
}
residuals_of <- function(x, arm) x - ave(x, arm)
by_own_sd <- function(x, arm) residuals_of(x, arm) / ave(x, arm, FUN = sd)

drugs <- read_extract("sleep.csv")
first <- drugs$AVAL[drugs$AVISIT == "Drug 1"]
second <- drugs$AVAL[drugs$AVISIT == "Drug 2"]
same(c(first, second), sleep$extra)

plants <- read_extract("plant-growth.csv")
same(plants$AVAL, PlantGrowth$weight)
if (!identical(plants$TRTP, as.character(PlantGrowth$group))) stop("a committed file is not R's data set")
pair <- plants[plants$TRTP != "ctrl", ]

insects <- merge(read_extract("insect-sprays.csv"), read_extract("insect-sprays-list.csv"))
same(insects$AVAL, InsectSprays$count)
if (!identical(insects$TRT01P, paste("Spray", InsectSprays$spray))) stop("a committed file is not R's data set")
logged <- log10(insects$AVAL + 1)

write_fixture("decision.R", c("car", "jsonlite"), list(
  sleep = list(differences = shape(second - first)),
  plantGrowth = list(
    residuals = shape(residuals_of(plants$AVAL, plants$TRTP)),
    byOwnSd = shape(by_own_sd(plants$AVAL, plants$TRTP)),
    spread = spread(plants$AVAL, plants$TRTP),
    withinArms = lapply(split(plants$AVAL, plants$TRTP), shape),
    pairByOwnSd = shape(by_own_sd(pair$AVAL, pair$TRTP)),
    pairSpread = spread(pair$AVAL, pair$TRTP)
  ),
  insectSprays = list(
    residuals = shape(residuals_of(insects$AVAL, insects$TRT01P)),
    spread = spread(insects$AVAL, insects$TRT01P),
    loggedResiduals = shape(residuals_of(logged, insects$TRT01P)),
    loggedSpread = spread(logged, insects$TRT01P),
    aboutMedian = shape(insects$AVAL - median(insects$AVAL))
  )
))
