# Measures what is in the folder given with R and pROC and prints names and numbers. Called by measures.ts.
# rows.csv: y (1 good), w, whole, a (score with ties), b (score), pd, x1..x5. counts.csv: x, n, p. tails.csv: value, degrees, probability.
suppressMessages(library(pROC))
folder <- commandArgs(trailingOnly = TRUE)[1]
emit <- function(name, values) cat(name, sprintf("%.17g", as.numeric(values)), "\n", sep = " ")
d <- read.csv(file.path(folder, "rows.csv"))
bad <- 1 - d$y

# Discrimination: goods score higher.
curve <- function(s) roc(d$y, s, levels = c(0, 1), direction = "<", quiet = TRUE)
curves <- list(a = curve(d$a), b = curve(d$b))
for (s in c("a", "b")) {
  emit(paste0("delong-", s), c(auc(curves[[s]]), sqrt(var(curves[[s]])), ci.auc(curves[[s]])[c(1, 3)]))
  emit(paste0("ks-", s), suppressWarnings(ks.test(d[[s]][d$y == 1], d[[s]][d$y == 0])$statistic))
}
test <- roc.test(curves$a, curves$b, method = "delong", paired = TRUE)
emit("paired", c(test$statistic, test$p.value, cov(curves$a, curves$b)))
emit("spearman", c(cor(d$a, d$b, method = "spearman"), cor(d$a, d$pd, method = "spearman")))
emit("quantiles-a", quantile(d$a, seq(0, 1, 0.05), type = 7))
emit("quantiles-b", quantile(d$b, c(0, 0.001, 0.137, 0.5, 0.999, 1), type = 7))

# Calibration.
logit <- qlogis(d$pd)
line <- function(w) {
  own <- list(w = w, logit = logit, bad = bad)
  tight <- glm.control(epsilon = 1e-15, maxit = 100)
  slope <- suppressWarnings(summary(glm(bad ~ logit, binomial, own, weights = w, control = tight)))$coefficients
  large <- suppressWarnings(summary(glm(bad ~ 1, binomial, own, weights = w, offset = logit, control = tight)))$coefficients
  c(large[1, 1:2], slope[2, 1:2], slope[1, 1:2])
}
emit("calibration", line(rep(1, nrow(d))))
emit("calibration-weighted", line(d$w))
groups <- cut(d$pd, unique(quantile(d$pd, 0:10 / 10, type = 7)), include.lowest = TRUE)
groups <- droplevels(groups) # a quantile between two neighbouring values can leave a group without rows
n <- tapply(bad, groups, length); o <- tapply(bad, groups, sum); e <- tapply(d$pd, groups, sum)
chi <- sum((o - e)^2 / (e * (1 - e / n)))
emit("hosmer-lemeshow", c(chi, length(n), pchisq(chi, length(n) - 2, lower.tail = FALSE), pchisq(chi, length(n), lower.tail = FALSE)))
rate <- tapply(bad * d$w, d$pd, sum) / tapply(d$w, d$pd, sum); share <- tapply(d$w, d$pd, sum) / sum(d$w); base <- sum(bad * d$w) / sum(d$w)
emit("murphy", c(sum(share * (as.numeric(names(rate)) - rate)^2), sum(share * (rate - base)^2), base * (1 - base)))
emit("spiegelhalter", sum((bad - d$pd) * (1 - 2 * d$pd)) / sqrt(sum((1 - 2 * d$pd)^2 * d$pd * (1 - d$pd))))

# Weight of evidence with bins closed on either side, and with each smoothing.
edges <- c(-1, 0, 0.5, 1.25)
for (right in c(TRUE, FALSE)) for (s in c(0, 0.5)) {
  bin <- cut(d$a, c(-Inf, edges, Inf), right = right)
  g <- tapply(d$y, bin, sum); b <- tapply(bad, bin, sum)
  pg <- (g + s) / (sum(g) + s * length(g)); pb <- (b + s) / (sum(b) + s * length(b))
  emit(paste0("woe-", if (right) "right" else "left", "-", s), c(log(pg / pb), sum((pg - pb) * log(pg / pb))))
}

# Stability of the second half against the first, by the same bins.
half <- seq_len(nrow(d)) <= nrow(d) / 2
counts <- table(cut(d$a, c(-Inf, edges, Inf), right = FALSE), half)
p <- counts[, "TRUE"] / sum(counts[, "TRUE"]); q <- counts[, "FALSE"] / sum(counts[, "FALSE"])
psi <- sum((q - p) * log(q / p)); unit <- 1 / sum(half) + 1 / sum(!half)
emit("psi", c(psi, pchisq(psi / unit, length(p) - 1, lower.tail = FALSE), unit * qchisq(0.95, length(p) - 1)))
emit("herfindahl", sum((rowSums(counts) / sum(counts))^2))

# Collinearity and standard errors.
x <- as.matrix(d[, grep("^x", names(d))])
emit("vif", diag(solve(cor(x))))
values <- eigen(cor(x))$values
emit("condition", sqrt(values[1] / values))
fit <- summary(glm(d$y ~ x, binomial, weights = d$whole, control = glm.control(epsilon = 1e-15, maxit = 100)))$coefficients
emit("glm", c(fit[, 1], fit[, 2]))

# Intervals and tests of shares.
k <- read.csv(file.path(folder, "counts.csv"))
by <- function(f) as.numeric(t(sapply(seq_len(nrow(k)), function(i) f(k$x[i], k$n[i], k$p[i]))))
emit("clopper-pearson", by(function(x, n, p) binom.test(x, n)$conf.int))
emit("wilson", by(function(x, n, p) suppressWarnings(prop.test(x, n, correct = FALSE))$conf.int))
emit("jeffreys", by(function(x, n, p) c(if (x == 0) 0 else qbeta(0.025, x + 0.5, n - x + 0.5), if (x == n) 1 else qbeta(0.975, x + 0.5, n - x + 0.5))))
emit("jeffreys-tail", by(function(x, n, p) pbeta(p, x + 0.5, n - x + 0.5)))
emit("binomial-tail", by(function(x, n, p) pbinom(x - 1, n, p, lower.tail = FALSE)))
emit("binomial-critical", by(function(x, n, p) qbinom(0.99, n, p) + 1))

# Tails and quantiles.
t <- read.csv(file.path(folder, "tails.csv"))
emit("chi-square-tail", pchisq(t$value, t$degrees, lower.tail = FALSE))
emit("noncentral-chi-square-tail", pchisq(t$value, t$degrees, 10 * t$probability + t$value / 2, lower.tail = FALSE))
emit("chi-square-quantile", qchisq(t$probability, t$degrees))
emit("normal-tail", pnorm(sqrt(t$value), lower.tail = FALSE))
emit("normal-quantile", qnorm(t$probability))
emit("beta-quantile", qbeta(t$probability, t$degrees, t$value))
emit("kolmogorov", sapply(t$value / 20, function(c) 2 * sum((-1)^(0:99) * exp(-2 * (1:100)^2 * c^2))))
