# Makes expected/delong_asah.json again. Debian: r-base-core r-cran-proc r-cran-jsonlite. Run in tests/reference: Rscript generators/delong_asah.R
library(pROC); library(jsonlite)
d <- read.csv("data/asah.csv")
names <- c("s100b", "wfns", "ndka")
curves <- lapply(setNames(names, names), function(v) roc(d$poor, d[[v]], direction = "<", quiet = TRUE))
paired <- function(a, b) { t <- roc.test(curves[[a]], curves[[b]], method = "delong", paired = TRUE); list(z = unname(t$statistic), p = t$p.value) }
out <- list(
  auc = lapply(curves, function(r) as.numeric(auc(r))),
  var_delong = lapply(curves, var),
  cov_delong = list(s100b_wfns = cov(curves$s100b, curves$wfns), s100b_ndka = cov(curves$s100b, curves$ndka), wfns_ndka = cov(curves$wfns, curves$ndka)),
  ci95_delong = lapply(curves, function(r) as.numeric(ci.auc(r))),
  paired_test = list(s100b_vs_wfns = paired("s100b", "wfns"), wfns_vs_ndka = paired("wfns", "ndka"), s100b_vs_ndka = paired("s100b", "ndka"))
)
cat(toJSON(out, digits = NA, auto_unbox = TRUE))
