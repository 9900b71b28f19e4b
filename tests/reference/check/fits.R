# Fits what is in the folder given with glmnet and prints names and numbers. Called by fresh-fits.ts.
# cases.csv: id, kind (path, cv), mixing, standardize; by id: ID-x.csv, ID-rows.csv (y, w, o, fold), ID-columns.csv (factor, lower, upper), ID-lambda.csv.
suppressMessages(library(glmnet))
folder <- commandArgs(trailingOnly = TRUE)[1]
file <- function(id, part) file.path(folder, paste0(id, "-", part, ".csv"))
emit <- function(name, values) cat(name, sprintf("%.17g", as.numeric(values)), "\n", sep = " ")
cases <- read.csv(file.path(folder, "cases.csv"), colClasses = c("character", "character", "numeric", "logical"))
for (k in seq_len(nrow(cases))) {
  case <- cases[k, ]
  x <- as.matrix(read.csv(file(case$id, "x")))
  rows <- read.csv(file(case$id, "rows"))
  columns <- read.csv(file(case$id, "columns"))
  lambda <- read.csv(file(case$id, "lambda"))$lambda
  arguments <- list(x = x, y = rows$y, family = "binomial", weights = rows$w, alpha = case$mixing, lambda = lambda, standardize = case$standardize,
                    penalty.factor = columns$factor, lower.limits = columns$lower, upper.limits = columns$upper, thresh = 1e-26, maxit = 1e8)
  if (any(rows$o != 0)) arguments$offset <- rows$o
  if (case$kind == "path") {
    fit <- do.call(glmnet, arguments)
    emit(paste0(case$id, "-intercept"), fit$a0)
    emit(paste0(case$id, "-coefficients"), as.matrix(fit$beta))
    emit(paste0(case$id, "-explained"), fit$dev.ratio)
    emit(paste0(case$id, "-null"), fit$nulldev)
  } else {
    cv <- do.call(cv.glmnet, c(arguments, list(foldid = rows$fold, type.measure = "deviance")))
    emit(paste0(case$id, "-mean"), cv$cvm)
    emit(paste0(case$id, "-error"), cv$cvsd)
    emit(paste0(case$id, "-chosen"), c(which(cv$lambda == cv$lambda.min), which(cv$lambda == cv$lambda.1se)))
    areas <- do.call(cv.glmnet, c(arguments, list(foldid = rows$fold, type.measure = "auc")))
    emit(paste0(case$id, "-areas"), areas$cvm)
  }
}
