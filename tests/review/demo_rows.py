"""The rows of the demonstration table: what an invented colleague printed, and under which slip.

``python tests/review/demo_rows.py`` writes casebook/demo/claims.csv. All numbers come from the
double-precision oracle beside
this file, not from the package.
"""

import csv
from pathlib import Path

from slip_oracle import Setup, binomial, gamma, normal, poisson, solve, tail

TABLE = Path(__file__).parents[2] / "casebook" / "demo" / "claims.csv"
HEADER = ["lot", "about", "lower cutoff", "upper cutoff", "lower fraction", "upper fraction", "single cutoff",
          "single fraction", "reported_as", "window", "region"]  # fmt: skip


def lot(n=10, alpha=0.05, limits=(8, 12)):
    return solve(Setup(tuple(poisson(n * t) for t in limits), (alpha,) * len(limits), "inside", True))


def drift(n=25, alpha=0.05, limits=(9, 11), region="outside"):
    return solve(Setup(tuple(poisson(n * t) for t in limits), (alpha,) * len(limits), region, True))


def target(n=16, alpha=0.01):
    return solve(Setup((poisson(10 * n),), (alpha,), "outside", True))


def share(n=8, alpha=0.05):
    return solve(Setup((binomial(50 * n, 0.9), binomial(50 * n, 0.99)), (alpha,) * 2, "inside", True))


def gap(n=30, alpha=0.05, scales=(40, 90), region="inside"):
    return solve(Setup(tuple(gamma(n, s) for s in scales), (alpha,) * 2, region, False))


def diameter(n=24, alpha=0.05):
    return solve(Setup((normal(5.9 * n, n / 25), normal(6.1 * n, n / 25)), (alpha,) * 2, "inside", False))


def row(name, about, test, digits=4, **style):
    """Print a test as a colleague would."""

    def text(x, places):
        return "" if x is None else str(x) if isinstance(x, int) else f"{x:.{places}f}"

    get = test.get
    cells = [text(get(key), digits) for key in ("c1", "c2", "gamma1", "gamma2", "c", "gamma")]
    return [name, about, *cells, *(style.get(key, "") for key in ("reported_as", "window", "region"))]


def one(law, level, above, discrete=True):
    c, g = tail(law, level, above=above, discrete=discrete)
    return {"c": c} if g is None else {"c": c, "gamma": g}


def scaled(test, factor):
    return {key: value / factor if key.startswith("c") else value for key, value in test.items()}


def tails(low, high, a, b, *, outside, discrete):
    """Window from two one-sided cutoffs."""
    c1, g1 = tail(low, a, above=not outside, discrete=discrete)
    c2, g2 = tail(high, b, above=outside, discrete=discrete)
    return {"c1": c1, "c2": c2, "gamma1": g1, "gamma2": g2} if discrete else {"c1": c1, "c2": c2}


def right_rows():
    """(row, None): what is right, in many ways of writing it."""
    t, closed = lot(), lot()
    closed = {**closed, "c1": closed["c1"] + 1, "c2": closed["c2"] - 1}
    d = drift()
    accepted = {**d, "gamma1": 1 - d["gamma1"], "gamma2": 1 - d["gamma2"]}
    yield row("A01", "lot-release", t)
    yield row("A02", "lot-release", t, 2)
    yield row("A03", "lot-release", scaled(t, 10), 3, reported_as="mean")
    yield row("A04", "lot-release", closed, 5, window="closed")
    yield row("A05", "lot-drift", d)
    yield row("A06", "lot-drift", accepted, 4, region="accept inside")
    yield row("A07", "lot-target", target(), 3)
    yield row("A08", "lot-enough", one(poisson(96), 0.025, True))
    yield row("A09", "intact-share", share())
    yield row("A10", "nozzle-gap", gap(), 2)
    yield row("A11", "nozzle-gap", scaled(gap(), 30), 4, reported_as="mean", window="closed", region="reject inside")
    yield row("A12", "diameter", diameter(), 3)
    yield row("A13", "nozzle-gap-rate", gap(scales=(90, 40), region="outside"), 3, region="accept inside")
    yield row("A14", "diameter", scaled(diameter(), 24), 5, reported_as="mean")
    yield row("A15", "lot-release", {key: t[key] for key in ("c1", "c2")}, window="open")


def slip_rows():
    """(row, slip): one thing wrong."""
    t, d, s = lot(), drift(), share()
    yield row("B01", "lot-release", {**t, "c1": t["c2"], "c2": t["c1"]}), "ends-exchanged"
    yield (
        row("B02", "lot-release", {**t, "gamma1": t["gamma2"], "gamma2": t["gamma1"]}),
        "fractions-exchanged",
    )
    yield (
        row("B03", "lot-drift", {**d, "gamma1": 1 - d["gamma1"], "gamma2": 1 - d["gamma2"]}),
        "fractions-complemented",
    )
    yield row("B04", "intact-share", {**s, "c1": s["c1"] - 1}), "lower-off-by-one"
    yield row("B05", "lot-drift", {**d, "c2": d["c2"] + 1}), "upper-off-by-one"
    yield row("B06", "lot-release", {**t, "c1": t["c1"] + 1, "c2": t["c2"] - 1}), "closed-for-open"
    yield row("B07", "lot-target", target(n=1)), "n-left-out"
    yield row("B08", "nozzle-gap", gap(n=900), 1), "n-twice"
    yield row("B09", "lot-release", lot(alpha=0.025)), "alpha-halved"
    yield row("B10", "diameter", diameter(alpha=0.1)), "alpha-doubled"
    yield (
        row("B11", "lot-target", tails(poisson(160), poisson(160), 0.005, 0.005, outside=True, discrete=True)),
        "equal-tails",
    )
    yield (
        row("B12", "lot-release", tails(poisson(80), poisson(120), 0.05, 0.05, outside=False, discrete=True)),
        "two-one-sided",
    )
    z = tails(normal(160, 160), normal(160, 160), 0.005, 0.005, outside=True, discrete=False)
    yield row("B13", "lot-target", z, 2), "normal-approximation"
    yield (
        row("B14", "lot-target", {"c1": z["c1"] - 0.5, "c2": z["c2"] + 0.5}, 2),
        "normal-approximation-corrected",
    )
    yield row("B15", "nozzle-gap", gap(scales=(1 / 90, 1 / 40)), 5), "rate-for-scale"
    yield row("B16", "lot-release", scaled(t, 10), 3), "mean-for-sum"
    first = drift(limits=(9,))
    yield row("B17", "lot-drift", first), "first-limit-twice"
    yield row("B18", "lot-drift", drift(region="inside")), "region-complemented"
    yield (
        row(
            "B19",
            "intact-share",
            {**s, "gamma1": int(s["gamma1"] * 1000) / 1000, "gamma2": int(s["gamma2"] * 1000) / 1000},
            3,
        ),
        "truncated",
    )
    yield from more_slip_rows()


def more_slip_rows():
    g = gap(scales=(90, 40), region="outside")
    e = one(poisson(96), 0.025, True)
    yield row("C01", "nozzle-gap-rate", {"c1": g["c2"], "c2": g["c1"]}, 2), "ends-exchanged"
    yield row("C02", "lot-enough", {**e, "gamma": 1 - e["gamma"]}), "fractions-complemented"
    yield row("C03", "lot-enough", one(poisson(96), 0.05, True)), "alpha-doubled"
    yield row("C04", "nozzle-gap", scaled(gap(), 30), 3), "mean-for-sum"
    yield (
        row("C05", "diameter-target", {"c1": 144 - 2.326348 * 0.96**0.5, "c2": 144 + 2.326348 * 0.96**0.5}, 3),
        "alpha-doubled",
    )
    yield (
        row("C06", "dispensed-volume-limit", one(normal(40, 160), 0.05, False, False), 3),
        "normal-approximation",
    )
    yield row("C07", "dispensed-volume", gap(n=10, scales=(0.5, 8), alpha=0.1), 4), "alpha-doubled"
    yield row("C08", "intact-share", share(n=1)), "n-left-out"
    low, high = gamma(30, 40), gamma(30, 90)
    yield (
        row("C09", "nozzle-gap", tails(low, high, 0.05, 0.05, outside=False, discrete=False), 2),
        "two-one-sided",
    )
    yield (
        row("C10", "nozzle-gap-rate", tails(low, high, 0.025, 0.025, outside=True, discrete=False), 2),
        "equal-tails",
    )
    yield row("C11", "nozzle-drop-outs", {"c": 201, "gamma": 0.1616}), "upper-off-by-one"
    yield row("C12", "diameter", {"c1": 1432063 / 10**4, "c2": 144.7936}, 4), "truncated"


def odd_rows():
    """Rows that are wrong in no known way."""
    yield row("D01", "lot-release", {"c1": 91, "c2": 108, "gamma1": 0.32, "gamma2": 0.51}, 2)
    yield row("D02", "nozzle-gap", {"c1": 1601.7, "c2": 1971.2}, 1)
    yield row("D03", "diameter", {"c1": 143.1, "c2": 144.4}, 1)


def all_rows():
    return [*right_rows(), *(cells for cells, _ in slip_rows()), *odd_rows()]


if __name__ == "__main__":
    with open(TABLE, "w", encoding="utf-8", newline="") as stream:
        csv.writer(stream, lineterminator="\n").writerows([HEADER, *all_rows()])
