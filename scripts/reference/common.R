# What the R generators share: the samples, and JSON with numbers that read back to the same double.
suppressPackageStartupMessages(library(jsonlite))

options(warn = 2) # A warning is a finding about the reference, not noise.

read_samples <- function() read_json("scripts/reference/samples.json", simplifyVector = FALSE)
numbers <- function(values) vapply(values, as.numeric, numeric(1))

# Sample `name` of R's own data sets, split by group where `by` is given.
from_r <- function(name) sprintf("R %s.%s, datasets::%s", R.version$major, R.version$minor, name)

# Samples of any size by whole-number and rational arithmetic alone, so that every language builds the same
# doubles; tests/reference/lattice.ts builds them too.
lattice_uniform <- function(n, multiplier) ((seq_len(n) * multiplier) %% 10007 + 0.5) / 10007
LATTICE <- list(
  uniform = function(n) lattice_uniform(n, 3571),
  skewed = function(n) { u <- lattice_uniform(n, 4241); u / (1.02 - u) },
  heavy = function(n) { t <- 2 * lattice_uniform(n, 2609) - 1; t / (1.01 - t * t) },
  bell = function(n) {
    total <- lattice_uniform(n, 3571)
    for (multiplier in c(4241, 2609, 5003, 1999, 6151)) total <- total + lattice_uniform(n, multiplier)
    total
  },
  coarse = function(n) floor(12 * lattice_uniform(n, 5003))
)

shortest <- function(x) {
  if (is.nan(x) || is.infinite(x)) stop("not a JSON number")
  for (digits in 15:17) {
    text <- sprintf("%.*g", digits, x)
    if (as.numeric(text) == x) break
  }
  text
}

encode <- function(x, indent = "") {
  deeper <- paste0(indent, "  ")
  if (is.null(x)) return("null")
  if (is.list(x) && !is.null(names(x))) {
    members <- vapply(names(x), function(name) paste0(deeper, "\"", name, "\": ", encode(x[[name]], deeper)), "")
    return(paste0("{\n", paste(members, collapse = ",\n"), "\n", indent, "}"))
  }
  if (is.list(x)) {
    if (length(x) == 0) return("[]")
    return(paste0("[\n", paste0(deeper, vapply(x, encode, "", indent = deeper), collapse = ",\n"), "\n", indent, "]"))
  }
  if (is.character(x)) text <- vapply(x, function(value) as.character(toJSON(value, auto_unbox = TRUE)), "")
  else if (is.logical(x)) text <- ifelse(x, "true", "false")
  else text <- vapply(x, shortest, "")
  if (inherits(x, "vector") || length(x) != 1) return(paste0("[", paste(text, collapse = ", "), "]"))
  unname(text)
}

# Marks a vector that stays an array even if it has one element.
vector_of <- function(x) structure(x, class = c("vector", class(x)))

# Writes the fixture to the file named on the command line.
write_fixture <- function(generator, packages, content) {
  versions <- c(list(R = paste(R.version$major, R.version$minor, sep = ".")),
    sapply(packages, function(name) as.character(packageVersion(name)), simplify = FALSE))
  target <- commandArgs(trailingOnly = TRUE)[1]
  fixture <- c(list(generator = paste0("scripts/reference/", generator), versions = versions), content)
  writeLines(encode(fixture), target, useBytes = TRUE)
}
