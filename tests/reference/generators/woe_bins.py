"""Makes the tables of expected/german_woe_bins.json again from its bin specifications. Standard library only.

Run in tests/reference: python3 generators/woe_bins.py
"""
import bisect
import csv
import json
import math

file = json.load(open("expected/german_woe_bins.json"))
with open("data/german_credit.csv") as handle:
    rows = list(csv.DictReader(handle))
total_bad = sum(int(row["bad"]) for row in rows)
total_good = len(rows) - total_bad


def bin_of(value, spec):
    if spec["type"] == "categorical":
        return next(i for i, group in enumerate(spec["groups"]) if value in group)
    find = bisect.bisect_left if spec["closed"] == "right" else bisect.bisect_right
    return find(spec["edges"], float(value))


for name, variable in file["variables"].items():
    counts = [[0, 0] for _ in variable["table"]]
    for row in rows:
        counts[bin_of(row[name], variable["spec"])][int(row["bad"])] += 1
    table = []
    for good, bad in counts:
        share_good, share_bad = good / total_good, bad / total_bad
        woe = math.log(share_good / share_bad)
        table.append({"good": good, "bad": bad, "woe": woe, "iv": (share_good - share_bad) * woe})
    gap = max(abs(own["woe"] - was["woe"]) for own, was in zip(table, variable["table"]))
    print(json.dumps({name: {"table": table, "iv": sum(entry["iv"] for entry in table), "largest_difference": gap}}))
