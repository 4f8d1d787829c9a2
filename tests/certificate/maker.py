# ruff: noqa: E501 (tables of cases, one a line)
"""An independent producer of certificates for the tests: mpmath and fractions, no part of the package.

Masses and distribution functions come from their textbook formulas; the tests are found by trying pairs of cutoffs
(lattice) or by
mpmath's root finder (continuous); the numbers are rounded outward with Python's decimal module.
"""

from __future__ import annotations

import decimal
import hashlib
import json
import re
from fractions import Fraction
from functools import cache
from itertools import accumulate
from math import comb
from typing import Any

import mpmath

mp = mpmath.mp.clone() if hasattr(mpmath.mp, "clone") else mpmath.MPContext()
mp.dps = 110

THEOREMS = {
    "one-sided": "Lehmann and Romano 2005, Theorem 3.4.1: a test of this form with these side conditions is uniformly most powerful",
    "outside null": "Lehmann and Romano 2005, Theorem 3.7.1: a test of this form with these side conditions is uniformly most powerful",
    "interval null": "Lehmann and Romano 2005, section 4.2: a test of this form with these side conditions is uniformly most powerful unbiased",
    "point null": "Lehmann and Romano 2005, section 4.2: a test of this form with these side conditions is uniformly most powerful unbiased",
    "two levels": "Lehmann and Romano 2005, Theorem 3.6.1: a test of this form with these side conditions is most powerful at every alternative among the tests with these two expectations at the limits",
}
STEPS = ("support", "nonnegativity", "normalisation", "factorisation", "monotonicity", "law")


def canonical(value: Any) -> bytes:
    return json.dumps(value, sort_keys=True, separators=(",", ":"), ensure_ascii=False).encode()


def number(text: str, names: dict[str, Any]) -> Any:
    """Evaluate an expression: a Fraction when no irrational function stands in it, else an mpf."""
    irrational = re.search(r"\b(sqrt|log|exp|pi)\b", text) or any(isinstance(v, mp.mpf) for v in names.values())
    make = "M" if irrational else "F"
    code = re.sub(r"(?<![\w.])(\d+(?:\.\d+)?(?:e-?\d+)?)", rf"{make}('\1')", text)
    known = {"F": Fraction, "M": mp.mpf, "sqrt": mp.sqrt, "log": mp.log, "exp": mp.exp, "pi": mp.pi}
    values = {
        k: mp.mpf(v.numerator) / v.denominator if irrational and isinstance(v, Fraction) else v
        for k, v in names.items()
    }
    return eval(code, known | values)


def real(x: Any) -> Any:
    return mp.mpf(x.numerator) / x.denominator if isinstance(x, Fraction) else mp.mpf(x)


def decimals(x: Any, digits: int, up: bool) -> str:
    """Round to significant digits, up or down; plain from 1e-5 to below 1e21, else with an exponent."""
    context = decimal.Context(digits, decimal.ROUND_CEILING if up else decimal.ROUND_FLOOR, -(10**9), 10**9)
    if isinstance(x, Fraction):
        value = context.divide(decimal.Decimal(x.numerator), decimal.Decimal(x.denominator))
    else:
        value = context.create_decimal(decimal.Decimal(mp.nstr(x, 100, strip_zeros=False)))
    if value == 0:
        return "0"
    sign, figures, exponent = value.as_tuple()
    text, exponent = "".join(map(str, figures)).lstrip("0"), int(exponent)
    lead = exponent + len(text) - 1
    minus = "-" if sign else ""
    if -5 <= lead <= 20:
        plain = format(value.copy_abs(), "f")
        return minus + (plain.rstrip("0").rstrip(".") if "." in plain else plain)
    text = text.rstrip("0")
    return minus + text[0] + ("." + text[1:] if text[1:] else "") + f"e{lead}"


def enclosure(low: Any, digits: int, high: Any = None) -> Any:
    """Exact short fractions as text, everything else rounded outward."""
    high = low if high is None else high
    if isinstance(low, Fraction) and isinstance(high, Fraction) and low == high and len(str(low)) <= 60:
        return str(low)
    if (
        not isinstance(low, Fraction)
        or not isinstance(high, Fraction)
        or low == high == Fraction(decimals(low, digits, False))
    ):
        tiny = Fraction(1, 10 ** (digits + 25)) if isinstance(low, Fraction) else mp.mpf(10) ** -(digits + 25)
        low, high = low - abs(low) * tiny, high + abs(high) * tiny
    return {"lower": decimals(low, digits, False), "upper": decimals(high, digits, True)}


# ---- laws ----------------------------------------------------------------------------------------------------------


@cache
def poisson(mean: Any) -> dict[int, Any]:
    m = real(mean)
    top = int(m + 40 * mp.sqrt(m) + 200)
    return {k: mp.exp(k * mp.log(m) - m - mp.loggamma(k + 1)) for k in range(top)}


@cache
def binomial(trials: Any, p: Any) -> dict[int, Any]:
    N = int(trials)
    return {k: comb(N, k) * p**k * (1 - p) ** (N - k) for k in range(N + 1)}


@cache
def negative_binomial(size: Any, p: Any) -> dict[int, Any]:
    r, q = real(size), real(p)
    top = int(40 * (r + 10) / q / q) + 400
    out, w = {}, q**r
    for k in range(top):
        out[k] = w
        w = w * (r + k) * (1 - q) / (k + 1)
    return out


@cache
def table(
    weights: tuple[Fraction, ...], first: int, theta: Any, n: int, total: Any = None, length: int = 0
) -> dict[int, Any]:
    poly: list[Any] = [Fraction(1)]
    for _ in range(n):
        new: list[Any] = [Fraction(0)] * (len(poly) + len(weights) - 1)
        for i, a in enumerate(poly):
            for j, b in enumerate(weights):
                new[i + j] += a * b
        poly = new[: length or len(new)]
    raw = {
        n * first + j: c * theta ** (n * first + j)
        if isinstance(theta, Fraction)
        else real(c) * theta ** (n * first + j)
        for j, c in enumerate(poly)
    }
    whole = sum(raw.values()) if total is None else total**n
    return {k: v / whole for k, v in raw.items() if v}


def gamma_law(shape: Any, rate: Any) -> dict[str, Any]:
    a, b = real(shape), real(rate)
    p = lambda s, y: mp.gammainc(s, 0, b * y, regularized=True) if y > 0 else mp.mpf(0)  # noqa: E731
    return {
        "cdf": lambda y: p(a, y),
        "part": lambda y: a / b * p(a + 1, y),
        "mean": a / b,
        "sd": mp.sqrt(a) / b,
        "positive": True,
    }


def normal_law(mean: Any, variance: Any) -> dict[str, Any]:
    m, s = real(mean), mp.sqrt(real(variance))
    pdf = lambda y: mp.exp(-((y - m) ** 2) / (2 * s * s)) / s / mp.sqrt(2 * mp.pi)  # noqa: E731
    cdf = lambda y: mp.erfc((m - y) / s / mp.sqrt(2)) / 2  # noqa: E731
    return {"cdf": cdf, "part": lambda y: m * cdf(y) - s * s * pdf(y), "mean": m, "sd": s, "positive": False}


def inverse_gaussian(mean: Any, shape: Any) -> dict[str, Any]:
    m, lam = real(mean), real(shape)
    phi = lambda z: mp.erfc(-z / mp.sqrt(2)) / 2  # noqa: E731
    first = lambda y: phi(mp.sqrt(lam / y) * (y / m - 1))  # noqa: E731
    second = lambda y: mp.exp(2 * lam / m) * phi(-mp.sqrt(lam / y) * (y / m + 1))  # noqa: E731
    cdf = lambda y: first(y) + second(y) if y > 0 else mp.mpf(0)  # noqa: E731
    part = lambda y: m * (first(y) - second(y)) if y > 0 else mp.mpf(0)  # noqa: E731
    return {"cdf": cdf, "part": part, "mean": m, "sd": mp.sqrt(m**3 / lam), "positive": True}


LATTICE = {
    "Poisson": (poisson, ("mean",), (1,)),
    "binomial": (binomial, ("trials", "probability"), (1, 0)),
    "negative binomial": (negative_binomial, ("size", "probability"), (1, 0)),
}
SMOOTH = {
    "gamma": (gamma_law, ("shape", "rate"), (1, 0)),
    "normal": (normal_law, ("mean", "variance"), (1, 1)),
    "inverse Gaussian": (inverse_gaussian, ("mean", "shape"), (1, 2)),
}


class Case:
    """One problem with what its certificate needs, in texts."""

    def __init__(
        self,
        density: dict[str, Any],
        Q: str,
        T: str,
        A: str,
        rising: bool,
        law: dict[str, Any],
        null: str,
        alpha: list[str],
        n: int,
        digits: int = 20,
        tolerance: str = "1/1000000",
        breaks: dict[str, Any] | None = None,
    ) -> None:
        self.density, self.Q, self.T, self.A, self.rising, self.law = density, Q, T, A, rising, law
        self.null, self.alpha, self.n, self.digits, self.tolerance = null, alpha, n, digits, tolerance
        self.breaks = breaks or {}
        t = density["parameter"]
        if " or " in null:
            self.form, self.bounds = (
                "outside null",
                [re.split(r"[<>]= ", part)[1] for part in null.split(" or ")],
            )
        elif null.count("<=") == 2:
            self.form, self.bounds = "interval null", [null.split(" <= ")[0], null.split(" <= ")[2]]
        elif re.match(rf"{t} = ", null):
            self.form, self.bounds = "point null", [null.split(" = ")[1]]
        else:
            self.form, self.bounds = "one-sided", [re.split(" [<>]= ", null)[1]]
        self.below = not null.startswith(f"{t} >= ")
        side = "above" if rising == self.below else "below"
        self.rejects = {"outside null": "inside", "one-sided": side}.get(self.form, "outside")

    def names(self) -> dict[str, Any]:
        return {k: number(v, {}) for k, v in self.density["constants"].items()}

    def limits(self) -> list[Any]:
        return [number(b, self.names()) for b in self.bounds]

    def y_law(self, t: Any) -> Any:
        name, names = self.law["name"], {**self.names(), self.density["parameter"]: t}
        n = self.n + self.breaks.get("n", 0)
        if name == "lattice":
            values = {k: number(v, names) for k, v in self.law["parameters"].items()}
            total = real(values["total"]) if "total" in values else None
            base = real(values["base"]) if total is not None else values["base"]
            return table(
                tuple(map(Fraction, self.law["weights"])),
                self.law["first"],
                base,
                n,
                total,
                len(self.law["weights"]) if total is not None else 0,
            )
        make, keys, grows = (LATTICE | SMOOTH)[name]
        values = [number(self.law["parameters"][k], names) * n**g for k, g in zip(keys, grows, strict=True)]
        change = self.breaks.get("law")
        return make(*(change(*values) if change else values))

    def mean(self, t: Any) -> Any:
        names = {**self.names(), self.density["parameter"]: t}
        return number(self.law["parameters"]["mean"], names) * self.n


def find_lattice(case: Case, laws: list[dict[int, Any]], alphas: list[Any], mean: Any) -> tuple[int, int, Any, Any]:
    """Try all pairs of ends; a pair with both fractions in (0, 1] is the answer."""
    inner = case.rejects == "inside"
    betas = [a if inner else 1 - a for a in alphas]
    keys = sorted(set(laws[0]).intersection(*laws[1:]))
    sums = [[0, *accumulate(law[k] for k in keys)] for law in laws]
    moment = [0, *accumulate(k * laws[0][k] for k in keys)]
    one = lambda d: 0 < d <= 1 + (0 if isinstance(d, Fraction) else mp.mpf(10) ** -80)  # noqa: E731
    j_low = 0
    for i, lo in enumerate(keys):
        for j in range(max(i, j_low), len(keys)):
            hi = keys[j]
            if sums[0][j + 1] - sums[0][i] < betas[0]:
                continue
            if sums[0][j] - sums[0][i + 1] > betas[0]:
                break
            inside = [s[j] - s[i + 1] if j > i else 0 for s in sums]
            m = [(law[lo], law[hi]) for law in laws]
            if i == j:
                d = [b / law[lo] for b, law in zip(betas, laws, strict=True)]
                if (len(laws) == 2 and d[0] == d[1]) or (len(laws) == 1 and mean == lo):
                    return lo, hi, d[0], d[0]
                continue
            if len(laws) == 2:
                det = m[0][0] * m[1][1] - m[0][1] * m[1][0]
                r = [b - s for b, s in zip(betas, inside, strict=True)]
                d1, d2 = (r[0] * m[1][1] - r[1] * m[0][1]) / det, (m[0][0] * r[1] - m[1][0] * r[0]) / det
            else:
                first = moment[j] - moment[i + 1] - lo * inside[0]
                d2 = (betas[0] * (mean - lo) - first) / (hi - lo) / m[0][1]
                d1 = (betas[0] - inside[0] - d2 * m[0][1]) / m[0][0]
            if one(d1) and one(d2):
                return lo, hi, d1, d2
    raise ValueError("no pair fits")


def find_one_sided(law: dict[int, Any], alpha: Any, above: bool) -> tuple[int, Any]:
    left = alpha
    for k in sorted(law, reverse=above):
        if left <= law[k]:
            return k, left / law[k]
        left -= law[k]
    raise ValueError("no cutoff")


def find_smooth(case: Case, laws: list[dict[str, Any]], alphas: list[Any]) -> tuple[Any, Any]:
    inner = case.rejects == "inside"
    betas = [real(a) if inner else 1 - real(a) for a in alphas]
    first = laws[0]

    def equations(u: Any, v: Any) -> list[Any]:
        x, y = (mp.exp(u), mp.exp(v)) if first["positive"] else (u, v)
        out = [law["cdf"](y) - law["cdf"](x) - b for law, b in zip(laws, betas, strict=True)]
        return out if len(laws) == 2 else [*out, first["part"](y) - first["part"](x) - betas[0] * first["mean"]]

    low, high = case.start
    start = [mp.log(low), mp.log(high)] if first["positive"] else [mp.mpf(low), mp.mpf(high)]
    root = mp.findroot(equations, start, tol=mp.mpf(10) ** -180, maxsteps=60)
    return (mp.exp(root[0]), mp.exp(root[1])) if first["positive"] else (root[0], root[1])


# ---- the certificate -----------------------------------------------------------------------------------------------


def make(case: Case) -> dict[str, Any]:
    limits = case.limits()
    alphas = [number(a, {}) for a in case.alpha]
    laws = [case.y_law(t) for t in limits]
    scale = number(case.law["scale"], case.names())
    shift = number(case.law["shift"], case.names()) * case.n
    build = lattice_numbers if isinstance(laws[0], dict) and "cdf" not in laws[0] else smooth_numbers
    test, size, targets, values = build(case, laws, alphas, scale, shift)
    conditions = []
    for i, (at, of, target) in enumerate(targets):
        low, high = size(i, of)
        conditions.append(
            {
                "at": at,
                "of": of,
                "target": enclosure(target, case.digits),
                "expectation": enclosure(low, case.digits, high),
            }
        )
    rows, first = [], 0
    tolerance = Fraction(case.tolerance)
    for k in range(1, 10):
        texts = {key: fixed(v, k) for key, v in values.items()}
        found = [size(i, "phi", {key: Fraction(text) for key, text in texts.items()})[0] for i in range(len(limits))]
        pairs = [enclosure(e, min(case.digits, 15)) for e in found]
        rows.append(
            {
                "decimals": k,
                "numbers": texts,
                "expectations": pairs,
                "size": max(pairs, key=lambda p: upper(p)),
            }
        )
        if all(abs(real(e) - real(a)) < real(tolerance) for e, a in zip(found, alphas, strict=True)):
            first = k
            break
    predicate = {
        "problem": {
            "title": "An invented case",
            "source": "",
            "density": case.density,
            "null": case.null,
            "alternative": alternative(case),
            "alpha": case.alpha,
            "n": case.n,
            "digits": case.digits,
        },
        "derivation": {
            "grade": "proved",
            "natural_parameter": case.Q,
            "statistic": case.T,
            "log_normaliser": case.A,
            "rising": case.rising,
            "steps": [{"name": s, "grade": "proved", "statement": sentence(case, s), "reason": ""} for s in STEPS],
        },
        "law": case.law,
        "test": {"form": case.form, "rejects": case.rejects, **test},
        "side_conditions": conditions,
        "rounding": {"tolerance": case.tolerance, "decimals": first, "rows": rows},
        "double_precision": {
            "opinions": [opinion(values, test)],
            "flags": [{"kind": "few digits", "number": "c", "text": "an invented flag"}],
            "condition": "1e3",
        },
        "versions": {"sidecheck": "0.0", "build": "tests"},
        "issued": "",
        "assumptions": assumptions(case),
    }
    return statement(predicate)


def sentence(case: Case, step: str) -> str:
    """What a step states: of T, Q and a named law the words that the format asks for."""
    law, t = case.law, case.density["parameter"]
    if step == "factorisation":
        return f"f = h(x) exp(Q T - A) with T(x) = {case.T}, Q({t}) = {case.Q}, h(x) = h, A({t}) = {case.A}"
    if step == "law" and law["name"] != "lattice":
        named = f"{law['name']}({', '.join(f'{key} = {text}' for key, text in law['parameters'].items())})"
        plain = (law["scale"], law["shift"]) == ("1", "0")
        return f"T has the law {named}" if plain else f"T = {law['scale']}*Y + {law['shift']} with Y of law {named}"
    return f"the step {step}"


def opinion(values: dict[str, Any], test: dict[str, Any]) -> dict[str, Any]:
    numbers = {key: decimals(v, 9, False) for key, v in values.items()}
    digits = {}
    for key, text in numbers.items():
        claim = test[key]
        ends = [Fraction(claim)] * 2 if isinstance(claim, str) else [Fraction(claim["lower"]), Fraction(claim["upper"])]
        worst = max(abs(Fraction(float(text)) - e) for e in ends)
        digits[key] = max((d for d in range(17) if worst * 10**d <= min(map(abs, ends))), default=0)
    return {"route": "invented", "numbers": numbers, "digits": digits, "note": ""}


def assumptions(case: Case) -> list[str]:
    out = [
        f"theorem: {THEOREMS[case.form if len(set(case.alpha)) == 1 else 'two levels']}",
        *(f"derivation, step {s}: proved" for s in STEPS),
    ]
    if "total" in case.law["parameters"]:
        out.append("the table of weights: its normaliser, and its mean where one is stated")
    return [
        *out,
        "the double-precision numbers: they are reported by another library and compared here, not computed",
    ]


def statement(predicate: dict[str, Any], case: bytes = b"") -> dict[str, Any]:
    """The statement about a case file with a fresh seal, that is the digest of all of it but the seal."""
    predicate = {k: v for k, v in predicate.items() if k != "seal"}
    found = {
        "_type": "https://in-toto.io/Statement/v1",
        "predicateType": "tag:sidecheck.invalid,2026:certificate/v1",
        "subject": [{"name": "invented.case.toml", "digest": {"sha256": hashlib.sha256(case).hexdigest()}}],
        "predicate": predicate,
    }
    seal = hashlib.sha256(canonical(found)).hexdigest()
    return {**found, "predicate": {**predicate, "seal": seal}}


def alternative(case: Case) -> str:
    t, b = case.density["parameter"], case.bounds
    return {
        "outside null": f"{b[0]} < {t} < {b[-1]}",
        "interval null": f"{t} < {b[0]} or {t} > {b[-1]}",
        "point null": f"{t} != {b[0]}",
        "one-sided": f"{t} {'>' if case.below else '<'} {b[0]}",
    }[case.form]


def upper(claim: Any) -> Fraction:
    return Fraction(claim) if isinstance(claim, str) else Fraction(claim["upper"])


def fixed(x: Any, k: int) -> str:
    scaled = Fraction(decimals(x, 60, False)) if not isinstance(x, Fraction) else x
    units = (abs(scaled) * 10**k * 2 + 1) // 2
    text = str(units).rjust(k + 1, "0")
    return ("-" if scaled < 0 and units else "") + text[:-k] + "." + text[-k:]


def lattice_numbers(case: Case, laws: list[Any], alphas: list[Any], scale: Any, shift: Any) -> Any:
    inner = case.form in ("outside null", "one-sided")
    flip = scale < 0
    above = case.form == "one-sided" and (case.rejects == "above") != flip
    exact = isinstance(next(iter(laws[0].values())), Fraction)
    al = alphas if exact else [real(a) for a in alphas]
    mean = None
    if case.form == "one-sided":
        y, g = find_one_sided(laws[0], al[0], above)
        ys, gs, keys = [y], [g], [""]
    else:
        if case.form == "point null":
            mean = (
                sum(k * w for k, w in laws[0].items())
                if "total" not in case.law["parameters"]
                else real(case.mean(case.limits()[0]))
            )
        lo, hi, d1, d2 = find_lattice(case, laws, al, mean)
        ys, gs, keys = [lo, hi], [d if inner else 1 - d for d in (d1, d2)], ["1", "2"]
        if flip:
            ys, gs = ys[::-1], gs[::-1]
    change = case.breaks.get("numbers")
    ys, gs = change(ys, gs) if change else (ys, gs)
    claims = [enclosure(g, case.digits) for g in gs]
    test = {f"y{k}": y for k, y in zip(keys, ys, strict=True)}
    test |= {
        f"c{k}": enclosure(
            scale * y + shift
            if isinstance(scale, Fraction) and isinstance(shift, Fraction)
            else real(scale) * y + real(shift),
            case.digits,
        )
        for k, y in zip(keys, ys, strict=True)
    }
    test |= {f"gamma{k}": claim for k, claim in zip(keys, claims, strict=True)}

    def phi(k: int, values: list[Any]) -> Any:
        if k in ys:
            return values[ys.index(k)]
        if case.form == "one-sided":
            return int((k > ys[0]) == above)
        return int((min(ys) < k < max(ys)) == inner)

    def expect(i: int, of: str, values: list[Any]) -> Any:
        law = laws[i if of == "phi" else 0]
        conv = (lambda v: v) if exact else real
        weight = (lambda k: 1) if of == "phi" else (lambda k: conv(scale * k + shift))
        values = [conv(v) for v in values]
        if inner and not (above and "total" in case.law["parameters"]):
            return sum(w * phi(k, values) * weight(k) for k, w in law.items() if phi(k, values))
        whole = 1 if of == "phi" else conv(scale) * conv(mean) + conv(shift)
        return whole - sum(w * (1 - phi(k, values)) * weight(k) for k, w in law.items() if phi(k, values) != 1)

    def size(i: int, of: str, given: dict[str, Fraction] | None = None) -> tuple[Any, Any]:
        if given is not None:
            e = expect(i, of, list(given.values()))
            return e, e
        ends = [
            (Fraction(c), Fraction(c)) if isinstance(c, str) else (Fraction(c["lower"]), Fraction(c["upper"]))
            for c in claims
        ]
        flips = [of == "V phi" and scale * y + shift < 0 for y in ys]
        return (
            expect(i, of, [e[f] for e, f in zip(ends, flips, strict=True)]),
            expect(i, of, [e[1 - f] for e, f in zip(ends, flips, strict=True)]),
        )

    targets = [(b, "phi", number(a, {})) for b, a in zip(case.bounds, case.alpha, strict=True)]
    if case.form == "point null":
        whole = scale * mean + shift if isinstance(mean, Fraction) else real(scale) * real(mean) + real(shift)
        targets.append(
            (
                case.bounds[0],
                "V phi",
                alphas[0] * whole if isinstance(whole, Fraction) else real(alphas[0]) * whole,
            )
        )
        rational_mean = case.law["name"] == "Poisson" and isinstance(case.limits()[0], Fraction)
        if rational_mean:
            names = {**case.names(), case.density["parameter"]: case.limits()[0]}
            m = number(case.law["parameters"]["mean"], names) * case.n
            targets[-1] = (case.bounds[0], "V phi", alphas[0] * (scale * m + shift))
        elif case.law["name"] == "negative binomial" and isinstance(case.limits()[0], Fraction):
            names = {**case.names(), case.density["parameter"]: case.limits()[0]}
            r, p = (number(case.law["parameters"][k], names) for k in ("size", "probability"))
            targets[-1] = (case.bounds[0], "V phi", alphas[0] * (scale * r * case.n * (1 - p) / p + shift))
    return test, size, targets, {f"gamma{k}": g for k, g in zip(keys, gs, strict=True)}


def smooth_numbers(case: Case, laws: list[Any], alphas: list[Any], scale: Any, shift: Any) -> Any:
    inner = case.form in ("outside null", "one-sided")
    flip = scale < 0
    above = (case.rejects == "above") != flip
    first = laws[0]
    if case.form == "one-sided":
        goal = lambda y: (1 - first["cdf"](y) if above else first["cdf"](y)) - real(alphas[0])  # noqa: E731
        start = case.start[0]
        if first["positive"]:
            ys = [mp.exp(mp.findroot(lambda u: goal(mp.exp(u)), mp.log(start), tol=mp.mpf(10) ** -180))]
        else:
            ys = [mp.findroot(goal, mp.mpf(start), tol=mp.mpf(10) ** -180)]
        keys = ["c"]
    else:
        ys = list(find_smooth(case, laws, alphas))
        ys = ys[::-1] if flip else ys
        keys = ["c1", "c2"]
    s, h = real(scale), real(shift)
    cs = [s * y + h for y in ys]
    change = case.breaks.get("numbers")
    cs = change(cs) if change else cs
    claims = [enclosure(c, case.digits) for c in cs]

    def expect(i: int, of: str, values: list[Any]) -> Any:
        law = laws[i if of == "phi" else 0]
        y = [(real(v) - h) / s for v in values]
        y = y[::-1] if flip else y
        part = law["cdf"] if of == "phi" else law["part"]
        whole = mp.mpf(1) if of == "phi" else law["mean"]
        if case.form == "one-sided":
            out = whole - part(y[0]) if above else part(y[0])
        else:
            out = part(y[1]) - part(y[0])
            out = out if inner else whole - out
        return out if of == "phi" else s * out + h * expect(0, "phi", values)

    def size(i: int, of: str, given: dict[str, Fraction] | None = None) -> tuple[Any, Any]:
        if given is not None:
            e = expect(i, of, list(given.values()))
            return e, e
        corners = [(Fraction(c["lower"]), Fraction(c["upper"])) for c in claims]
        values = [expect(i, of, list(v)) for v in _product(corners)]
        return min(values), max(values)

    targets = [(b, "phi", number(a, {})) for b, a in zip(case.bounds, case.alpha, strict=True)]
    if case.form == "point null":
        names = {**case.names(), case.density["parameter"]: case.limits()[0]}
        p = {k: number(v, names) for k, v in case.law["parameters"].items()}
        m = (p["shape"] / p["rate"] if case.law["name"] == "gamma" else p["mean"]) * case.n
        whole = scale * m + shift
        targets.append((case.bounds[0], "V phi", alphas[0] * whole))
    return dict(zip(keys, claims, strict=True)), size, targets, dict(zip(keys, cs, strict=True))


def _product(corners: list[tuple[Any, Any]]) -> list[tuple[Any, ...]]:
    if len(corners) == 1:
        return [(v,) for v in corners[0]]
    return [(a, b) for a in corners[0] for b in corners[1]]
