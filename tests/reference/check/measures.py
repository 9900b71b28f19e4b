"""Measures what is in the folder given with scikit-learn and SciPy and prints names and numbers. Called by measures.ts.

rows.csv, counts.csv and tails.csv as in measures.R; fit.csv holds lambda.
"""
import csv
import sys

import numpy as np
from scipy import stats
from sklearn.linear_model import LogisticRegression
from sklearn.metrics import brier_score_loss, log_loss, roc_auc_score, roc_curve


def read(name):
    with open(f"{sys.argv[1]}/{name}.csv") as file:
        rows = list(csv.DictReader(file))
    return {key: np.array([float(row[key]) for row in rows]) for key in rows[0]}


def emit(name, values):
    print(name, *(f"{value:.17g}" for value in np.ravel(values)))


d = read("rows")
bad = 1 - d["y"]
for s in ("a", "b"):
    emit(f"auc-{s}", roc_auc_score(d["y"], d[s]))
    emit(f"auc-weighted-{s}", roc_auc_score(d["y"], d[s], sample_weight=d["w"]))
    false, true, _ = roc_curve(d["y"], d[s], sample_weight=d["w"], drop_intermediate=False)
    emit(f"ks-weighted-{s}", np.max(np.abs(true - false)))
    emit(f"ks-{s}", stats.ks_2samp(d[s][d["y"] == 1], d[s][d["y"] == 0]).statistic)
emit("spearman", [stats.spearmanr(d["a"], d[other]).correlation for other in ("b", "pd")])
for name, w in (("plain", None), ("weighted", d["w"])):
    emit(f"brier-{name}", brier_score_loss(bad, d["pd"], sample_weight=w))
    emit(f"log-loss-{name}", log_loss(bad, d["pd"], sample_weight=w))

# scikit-learn never standardises, so columns are z-scored with the weighted population deviation and brought back.
x = np.column_stack([d[key] for key in d if key.startswith("x")])
mean = np.average(x, axis=0, weights=d["w"])
scale = np.sqrt(np.average((x - mean) ** 2, axis=0, weights=d["w"]))
penalty = read("fit")["lambda"][0]
model = LogisticRegression(C=1 / (penalty * d["w"].sum()), solver="newton-cholesky", tol=1e-14, max_iter=1000)
model.fit((x - mean) / scale, d["y"], sample_weight=d["w"])
coefficients = model.coef_[0] / scale
emit("ridge", [model.intercept_[0] - coefficients @ mean, *coefficients])

k = read("counts")
tests = [stats.binomtest(int(events), int(n)) for events, n in zip(k["x"], k["n"])]
for method in ("exact", "wilson"):
    emit(f"interval-{method}", [list(test.proportion_ci(0.95, method)) for test in tests])
emit("binomial-tail", stats.binom.sf(k["x"] - 1, k["n"], k["p"]))
t = read("tails")
emit("chi-square-tail", stats.chi2.sf(t["value"], t["degrees"]))
emit("chi-square-quantile", stats.chi2.ppf(t["probability"], t["degrees"]))
emit("normal-tail", stats.norm.sf(np.sqrt(t["value"])))
emit("beta-quantile", stats.beta.ppf(t["probability"], t["degrees"], t["value"]))
emit("kolmogorov", stats.kstwobign.sf(t["value"] / 20))
