"""Makes the intercepts of expected/sklearn_crosscheck.json again.

Debian: python3-numpy python3-sklearn. Run in tests/reference: python3 generators/sklearn_crosscheck.py
C = 1/(lambda sum w); scikit-learn never standardises, so columns are z-scored with the weighted population deviation and brought back.
"""
import csv
import json

import numpy as np
from sklearn.linear_model import LogisticRegression

cases = {fit["id"]: fit for fit in json.load(open("expected/penalised_logistic_fits.json"))["fits"]}
rows = json.load(open("expected/sklearn_crosscheck.json"))["rows"]
with open("data/german_credit_woe.csv") as file:
    table = list(csv.DictReader(file))
y = np.array([float(row["bad"]) for row in table])
for row in rows:
    case = cases[row["id"]]
    x = np.array([[float(record[name]) for name in case["x"]] for record in table])
    w = np.ones(len(y))
    if case["weights"].startswith("weight of"):
        w = (np.arange(1, len(y) + 1) % 3) + 1.0
    elif case["weights"].startswith("prior"):
        w = np.where(y == 1, 0.05 / y.mean(), 0.95 / (1 - y.mean()))
    mean, scale = np.zeros(x.shape[1]), np.ones(x.shape[1])
    if case["standardize"]:
        mean = np.average(x, axis=0, weights=w)
        scale = np.sqrt(np.average((x - mean) ** 2, axis=0, weights=w))
    # lbfgs and liblinear stop where they stop: no oracles, and liblinear never reaches a tight tolerance on the lasso.
    tight = row["solver"] in ("newton-cholesky", "saga")
    model = LogisticRegression(penalty=row["penalty"], C=1 / (row["lambda"] * w.sum()), solver=row["solver"], tol=1e-14 if tight else 1e-4,
                               max_iter=1000000 if tight else 1000,
                               l1_ratio=case["alpha"] if row["penalty"] == "elasticnet" else None)
    model.fit((x - mean) / scale, y, sample_weight=w)
    coefficients = model.coef_[0] / scale
    intercept = float(model.intercept_[0] - coefficients @ mean)
    print(json.dumps({"id": row["id"], "lambda": row["lambda"], "solver": row["solver"], "intercept": intercept, "was": row["intercept"]}))
