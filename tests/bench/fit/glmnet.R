# Times glmnet on a sample written by glmnet.ts and prints one JSON object. Debian packages r-base-core and r-cran-glmnet.
#   Rscript glmnet.R FOLDER ROWS COLUMNS MIXING PARTS   (PARTS: path, or path and cv)
suppressMessages(library(glmnet))
args <- commandArgs(trailingOnly = TRUE)
folder <- args[1]; n <- as.integer(args[2]); p <- as.integer(args[3]); mixing <- as.numeric(args[4]); parts <- args[5]
bytes <- function(name) readBin(file.path(folder, name), "raw", file.size(file.path(folder, name)))
doubles <- function(name) readBin(file.path(folder, name), "double", file.size(file.path(folder, name)) / 8)
values <- matrix(doubles("values"), nrow = 256)
x <- matrix(0, n, p)
con <- file(file.path(folder, "codes"), "rb")
for (j in seq_len(p)) x[, j] <- values[as.integer(readBin(con, "raw", n)) + 1, j]
close(con)
y <- as.integer(bytes("outcome"))
folds <- as.integer(bytes("folds"))
elapsed <- function(f) { t <- proc.time(); value <- f(); list(value = value, seconds = (proc.time() - t)[["elapsed"]], cpu = sum((proc.time() - t)[1:2])) }
# Small cases: once before, as ours are.
if (n < 100000) invisible(glmnet(x, y, family = "binomial", alpha = mixing, nlambda = 100, lambda.min.ratio = 1e-4, standardize = TRUE))
path <- elapsed(function() glmnet(x, y, family = "binomial", alpha = mixing, nlambda = 100, lambda.min.ratio = 1e-4, standardize = TRUE))
fit <- path$value
# Optimality residual on the standardised scale, from the exact gradient, at up to twelve places of a path.
residual_of <- function(fit, x, y) {
  deviation <- apply(x, 2, function(column) sqrt(mean((column - mean(column))^2)))
  residual <- 0
  for (k in unique(round(seq(1, length(fit$lambda), length.out = 12)))) {
    b <- as.numeric(fit$beta[, k])
    eta <- as.numeric(fit$a0[k])
    for (j in which(b != 0)) eta <- eta + x[, j] * b[j]
    r <- (plogis(eta) - y) / length(y)
    g <- as.numeric(crossprod(r, x)) / deviation
    lambda <- fit$lambda[k]; t <- b * deviation
    v <- ifelse(t != 0, abs(g + lambda * (mixing * sign(t) + (1 - mixing) * t)), pmax(0, abs(g) - lambda * mixing))
    residual <- max(residual, abs(sum(r)), v)
  }
  residual
}
residual <- residual_of(fit, x, y)
cv <- NULL
if (parts == "cv") cv <- elapsed(function() cv.glmnet(x, y, family = "binomial", alpha = mixing, nlambda = 100, lambda.min.ratio = 1e-4, foldid = folds, type.measure = "deviance"))
fold_residual <- NULL
if (parts == "cv") {
  training <- folds != 1
  fold_residual <- residual_of(glmnet(x[training, ], y[training], family = "binomial", alpha = mixing, lambda = fit$lambda), x[training, ], y[training])
}
status <- readLines("/proc/self/status")
peak <- as.numeric(sub("\\D*(\\d+).*", "\\1", status[grep("VmHWM", status)])) / 1024
writeBin(as.numeric(fit$lambda), file.path(folder, "lambda"))
writeBin(as.numeric(deviance(fit)), file.path(folder, "deviance"))
number <- function(value) if (is.null(value)) "null" else formatC(value, digits = 10, format = "g")
cat(sprintf('{"path":{"seconds":%s,"cpu":%s,"residual":%s},"cv":%s,"peakMemoryMB":%s}\n',
  number(path$seconds), number(path$cpu), number(residual),
  if (is.null(cv)) "null" else sprintf('{"seconds":%s,"cpu":%s,"residual":%s}', number(cv$seconds), number(cv$cpu), number(fold_residual)), number(peak)))
