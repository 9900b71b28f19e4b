# Makes computed_R_glm of expected/published_logistic_tables.json (birth weight and the 2 x 2 table) and the fit of expected/german_woe_glm_vif.json.
# Debian: r-base-core r-cran-mass r-cran-jsonlite. Run in tests/reference: Rscript generators/published_tables.R
library(MASS); library(jsonlite)
tight <- glm.control(epsilon = 1e-15, maxit = 100)
show <- function(fit) {
  s <- summary(fit)$coefficients
  list(term = rownames(s), estimate = unname(s[, 1]), se = unname(s[, 2]), loglik = as.numeric(logLik(fit)), deviance = deviance(fit),
       null_deviance = fit$null.deviance, aic = AIC(fit))
}
b <- birthwt
b$race2 <- as.numeric(b$race == 2); b$race3 <- as.numeric(b$race == 3)
bw <- with(birthwt, data.frame(low = factor(low), age, lwt, race = factor(race, labels = c("white", "black", "other")), smoke = smoke > 0,
                               ptd = factor(ptl > 0), ht = ht > 0, ui = ui > 0, ftv = factor(pmin(ftv, 2), labels = c("0", "1", "2+"))))
counts <- data.frame(chd = c(0, 1, 0, 1), aged = c(0, 0, 1, 1), n = c(51, 22, 6, 21))
woe <- read.csv("data/german_credit_woe.csv")
woe_fit <- glm(bad ~ ., binomial, woe, control = tight)
x <- as.matrix(woe[, names(woe) != "bad"])
out <- list(
  birthwt_HL_table2.2 = show(glm(low ~ age + lwt + race2 + race3 + ftv, binomial, b, control = tight)),
  birthwt_HL_table2.3 = show(glm(low ~ lwt + race2 + race3, binomial, b, control = tight)),
  birthwt_8var_manual_example = show(glm(low ~ age + lwt + race2 + race3 + smoke + ptl + ht + ui, binomial, b, control = tight)),
  birthwt_MASS_book = show(glm(low ~ ., binomial, bw, control = tight)),
  chd_aged_HL_table3.2 = show(glm(chd ~ aged, binomial, counts, weights = n, control = tight)),
  german_woe_glm = show(woe_fit),
  german_woe_vif = as.list(diag(solve(cor(x)))),
  german_woe_condition = { e <- eigen(cor(x))$values; max(e) / min(e) }
)
cat(toJSON(out, digits = NA, auto_unbox = TRUE))
