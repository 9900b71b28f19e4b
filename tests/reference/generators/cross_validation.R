# Makes mean, standard error and both choices of expected/cross_validation.json again with cv.glmnet.
# Debian: r-base-core r-cran-glmnet r-cran-jsonlite. Run in tests/reference: Rscript generators/cross_validation.R
library(glmnet); library(jsonlite)
cases <- fromJSON("expected/cross_validation.json", simplifyVector = FALSE)$cases
out <- list()
for (name in names(cases)) {
  case <- cases[[name]]
  d <- read.csv(case$data)
  n <- nrow(d)
  k <- length(case$fold_weight)
  fold <- if (grepl("mod", case$folds)) ((seq_len(n) - 1) %% k) + 1 else ceiling(seq_len(n) * k / n)
  w <- if (case$weights == "all 1") rep(1, n) else (seq_len(n) %% 3) + 1
  cv <- cv.glmnet(as.matrix(d[, unlist(case$x)]), d[[case$y]], family = "binomial", weights = w, foldid = fold, lambda = unlist(case$lambda),
                  alpha = case$alpha, standardize = case$standardize, type.measure = "deviance", thresh = 1e-20, maxit = 1e8)
  out[[name]] <- list(cvm = cv$cvm, cvsd = cv$cvsd, index_min = which(cv$lambda == cv$lambda.min), index_1se = which(cv$lambda == cv$lambda.1se))
  message(name, ": largest difference ", format(max(abs(cv$cvm - unlist(case$cvm_deviance)))))
}
cat(toJSON(out, digits = NA, auto_unbox = TRUE))
