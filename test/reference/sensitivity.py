"""Values for test/reference/sensitivity.json from the chains of battery.json, with mpmath at 80 digits:

    python3 sensitivity.py > sensitivity.json

meanTime: [from, to, elasticity] of the mean time from `start` to `target`; cost: the same for the long-run cost per time unit with
state costs 1, 2, 3, ... and 10 for each jump; quasi: shares and decay rate given that `target` is not met, where the other states
are one class.
"""
import json
import os
from mpmath import mp, mpf, matrix, lu_solve, nstr, eig

mp.dps = 80
here = os.path.dirname(os.path.abspath(__file__))
cases = json.load(open(os.path.join(here, "battery.json")))["cases"]


def generator(case):
    q = matrix(case["n"], case["n"])
    for i, j, rate in case["rates"]:
        q[i, j] = mpf(rate)
    for i in range(case["n"]):
        q[i, i] = -sum(q[i, j] for j in range(case["n"]) if j != i)
    return q


def reachable(case, begin, stop):
    seen, todo = {begin}, [begin]
    while todo:
        i = todo.pop()
        if i in stop:
            continue
        for a, b, _ in case["rates"]:
            if a == i and b not in seen:
                seen.add(b)
                todo.append(b)
    return seen


def text(x):
    return nstr(x, 20)


rows = []
for case in cases:
    n = case["n"]
    if n > 16:
        continue
    q = generator(case)
    row = {"id": case["id"]}
    targets = set(case["target"])
    inside = [i for i in range(n) if i not in targets]
    if "hit_mean_start" in case["expect"] and all(case["expect"]["hit_mean"][i] != "inf" for i in inside) and \
            any(case["start"][i] > 0 for i in inside):
        t = matrix(len(inside), len(inside))
        for a, i in enumerate(inside):
            for b, j in enumerate(inside):
                t[a, b] = -q[i, j]
        m = lu_solve(t, matrix([1] * len(inside)))
        stay = lu_solve(t.T, matrix([mpf(case["start"][i]) for i in inside]))
        mean = {i: m[a] for a, i in enumerate(inside)}
        total = sum(mpf(case["start"][i]) * mean[i] for i in inside)
        row["meanTime"] = [[i, j, text(mpf(rate) * stay[inside.index(i)] * (mean.get(j, mpf(0)) - mean[i]) / total)]
                           for i, j, rate in case["rates"] if i not in targets]
    if len(case["expect"]["closed_classes"]) == 1 and len(case["expect"]["closed_classes"][0]) == n > 1:
        a = q.T.copy()
        for j in range(n):
            a[n - 1, j] = 1
        pi = lu_solve(a, matrix([0] * (n - 1) + [1]))
        cost = [mpf(i + 1) + 10 * -q[i, i] for i in range(n)]
        gain = sum(pi[i] * cost[i] for i in range(n))
        p = -q
        for j in range(n):  # v_0 = 0
            p[0, j] = 1 if j == 0 else 0
        v = lu_solve(p, matrix([0] + [cost[i] - gain for i in range(1, n)]))
        row["cost"] = [[i, j, text(mpf(rate) * pi[i] * (10 + v[j] - v[i]) / gain)] for i, j, rate in case["rates"]]
    if len(inside) > 1 and all(set(inside) <= reachable(case, i, targets) for i in inside):
        t = matrix(len(inside), len(inside))
        for a, i in enumerate(inside):
            for b, j in enumerate(inside):
                t[a, b] = q[j, i]
        values, vectors = eig(t)
        best = max(range(len(inside)), key=lambda k: mp.re(values[k]))
        x = [mp.re(vectors[k, best]) for k in range(len(inside))]
        total = sum(x)
        shares = ["0"] * n
        for a, i in enumerate(inside):
            shares[i] = text(x[a] / total)
        row["quasi"] = {"shares": shares, "decayRate": text(-mp.re(values[best]))}
    if len(row) > 1:
        rows.append(row)
print(json.dumps({"source": "mpmath, 80 digits: sensitivity.py beside this file, chains of battery.json", "rows": rows}, indent=0))
