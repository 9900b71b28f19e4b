# Makes intercept and coefficients of expected/penalised_logistic_fits.json again, for every case whose data file is here.
# Debian: r-base-core r-cran-glmnet r-cran-jsonlite. Run in tests/reference: Rscript generators/penalised_fits.R
# glmnet needs thresh 1e-26 here: at 1e-14 it is good to 1.3e-5 only on the hard designs. The independent Newton solve is not repeated here.
library(glmnet); library(jsonlite)
reference <- fromJSON("expected/penalised_logistic_fits.json", simplifyVector = FALSE)$fits
out <- list()
for (case in reference) {
  if (!file.exists(case$data)) next
  d <- read.csv(case$data, check.names = FALSE)
  x <- as.matrix(d[, unlist(case$x)])
  good <- startsWith(case$y, "good")
  event <- if (good) d$bad else d[[case$y]]
  y <- if (good) 1 - event else event
  w <- rep(1, nrow(d))
  if (startsWith(case$weights, "weight of")) w <- (seq_len(nrow(d)) %% 3) + 1
  if (startsWith(case$weights, "prior")) w <- ifelse(event == 1, 0.05 / mean(event), 0.95 / (1 - mean(event)))
  offset <- if (is.null(case$offset)) NULL else -read.csv("data/german_credit_woe.csv")$checking
  factor <- if (is.null(case$penalty_factor_given)) rep(1, ncol(x)) else unlist(case$penalty_factor_given)
  lower <- if (is.null(case$lower_limits)) -Inf else case$lower_limits
  upper <- if (is.null(case$upper_limits)) Inf else case$upper_limits
  lambda <- sapply(case$lambda_path, function(p) p$lambda)
  fit <- glmnet(x, y, family = "binomial", weights = w, offset = offset, alpha = case$alpha, lambda = lambda, standardize = case$standardize,
                penalty.factor = factor, lower.limits = lower, upper.limits = upper, thresh = 1e-26, maxit = 1e8)
  out[[case$id]] <- list(lambda = fit$lambda, intercept = unname(fit$a0), coef = t(unname(as.matrix(fit$beta))))
  wanted <- sapply(case$lambda_path, function(p) c(p$intercept, unlist(p$coef)))
  message(case$id, ": largest difference ", format(max(abs(rbind(fit$a0, as.matrix(fit$beta)) - wanted))))
}
cat(toJSON(out, digits = NA, auto_unbox = TRUE))
