# Counts of clusters of daily rain over thresholds by runs declustering, for the tests of package stats.
# Run from the root of the repository:
#
#   Rscript testdata/ref/clusters.R > testdata/ref/clusters.csv
#
# Needs R and its package evd (Debian: r-base-core, r-cran-evd).
library(evd)

file <- "testdata/seattle/seattle-weather.csv"
given <- commandArgs(trailingOnly = TRUE)
if (length(given) == 1) file <- given
rain <- read.csv(file, comment.char = "#")$precipitation

cat("# Clusters of daily rain above a threshold by runs declustering.\n")
cat("# Source: column precipitation (mm) of testdata/seattle/seattle-weather.csv,", length(rain), "days.\n")
cat("# Made by: ", R.version.string, ", evd ", as.character(packageVersion("evd")), ", function clusters, ",
    format(Sys.Date()), ".\n", sep = "")
cat("# Command: Rscript testdata/ref/clusters.R > testdata/ref/clusters.csv\n")
cat("# u: threshold, mm. r: a cluster is over after r days at or below u.\n")
cat("# ulow: with a number, r is the whole record and a cluster is over at the first day at or below ulow, mm.\n")
cat("# above: days above u. clusters: their number. sum_of_peaks: of the largest value of each cluster, mm, 1 decimal.\n")
cat("u,r,ulow,above,clusters,sum_of_peaks\n")
row <- function(u, r, ulow) {
  low <- if (is.na(ulow)) -Inf else ulow
  peaks <- clusters(rain, u, r = r, ulow = low, rlow = 1, cmax = TRUE)
  cat(u, r, if (is.na(ulow)) "" else ulow, sum(rain > u), length(peaks), sprintf("%.1f", sum(peaks)), sep = ",")
  cat("\n")
}
for (u in c(0, 0.3, 1, 2.5, 5, 10, 20, 30, 40, 60)) {
  for (r in c(1, 2, 3, 5, 7, 10, 30)) row(u, r, NA)
}
for (u in c(5, 10, 20)) {
  for (ulow in c(0, 0.3, 1, 2.5, 5)) row(u, length(rain), ulow)
}
