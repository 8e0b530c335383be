"""Chi-square points for test/reference/rate-interval.json, with mpmath at 50 digits: python3 rate-interval.py > rate-interval.json"""
import json
from mpmath import mp, mpf, gammainc, findroot, log, nstr, sqrt, erfinv

mp.dps = 50


def point(shape, lower_tail):
    """x with P(Gamma(shape) <= x) = lower_tail, from the incomplete gamma function alone."""
    z = sqrt(2) * erfinv(2 * lower_tail - 1)
    start = shape * (1 - 1 / (9 * mpf(shape)) + z / (3 * sqrt(mpf(shape)))) ** 3
    if start <= 0:
        start = mpf("1e-3") if shape > 1 else lower_tail

    def gap(u):
        x = mp.exp(u)
        if lower_tail < mpf("0.5"):
            return log(gammainc(shape, 0, x, regularized=True)) - log(lower_tail)
        return log(1 - lower_tail) - log(gammainc(shape, x, mp.inf, regularized=True))

    return mp.exp(findroot(gap, log(start), tol=mpf(10) ** -40))


rows = []
for count in (1, 2, 3, 5, 10, 16, 17, 40, 150, 1000, 30000):
    for confidence in (0.5, 0.9, 0.95, 0.999, 0.999999):
        tail = (1 - mpf(confidence)) / 2  # of the double, as the code gets it
        rows.append({
            "count": count,
            "confidence": confidence,
            "lower": nstr(point(count, tail), 20),
            "upper": nstr(point(count + 1, 1 - tail), 20),
            "upperFailureTruncated": nstr(point(count, 1 - tail), 20),
        })
print(json.dumps({"source": "mpmath, 50 digits: rate-interval.py beside this file; exposure 1", "rows": rows}, indent=1))
