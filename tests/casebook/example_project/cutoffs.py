"""A plain double-precision solver, as a developer might write it. Three mistakes are planted in it."""

from math import erf, exp, lgamma, log, sqrt


def poisson_pmf(k, mean):
    return exp(k * log(mean) - mean - lgamma(k + 1))


def binomial_pmf(k, trials, p):
    choose = lgamma(trials + 1) - lgamma(k + 1) - lgamma(trials - k + 1)
    return exp(choose + k * log(p) + (trials - k) * log(1 - p))


def gamma_cdf(x, shape, scale):
    """For a whole shape: the waiting time for that many events."""
    return 1 - sum(poisson_pmf(k, x / scale) for k in range(shape)) if x > 0 else 0.0


def normal_cdf(x, mean, variance):
    return (1 + erf((x - mean) / sqrt(2 * variance))) / 2


def bead_window(low, high, alpha, n):
    """Counts with mean lam, null lam <= low or lam >= high: reject between c1 and c2."""
    means = (n * low, n * high)
    size = int(means[1] + 12 * sqrt(means[1])) + 12
    masses = [[poisson_pmf(k, mean) for k in range(size)] for mean in means]
    for c1 in range(size):
        inside = [0.0, 0.0]
        for c2 in range(c1 + 1, size):
            (a, b), (c, d) = ((mass[c1], mass[c2]) for mass in masses)
            left = [alpha - part for part in inside]
            determinant = a * d - b * c
            if determinant:
                gamma1 = (left[0] * d - b * left[1]) / determinant
                gamma2 = (a * left[1] - c * left[0]) / determinant
                if 0 <= gamma1 <= 1 and 0 <= gamma2 <= 1:
                    return {"c1": c1 + 1, "c2": c2 - 1, "gamma1": gamma1, "gamma2": gamma2}
            inside = [part + mass[c2] for part, mass in zip(inside, masses, strict=True)]
            if min(inside) > alpha:
                break
    raise ArithmeticError("no window")


def gap_window(low, high, alpha, n):
    """Exponential times with mean theta, null theta <= low or theta >= high: reject between c1 and c2."""
    cdfs = [lambda x, scale=scale: normal_cdf(x, n * scale, n * scale**2) for scale in (low, high)]

    def upper(c1):
        target = cdfs[0](c1) + alpha
        return bisect(lambda x: cdfs[0](x) - target, c1, 100 * n * high) if target < 1 else 100 * n * high

    c1 = bisect(lambda x: cdfs[1](upper(x)) - cdfs[1](x) - alpha, 0.0, n * high)
    return {"c1": c1, "c2": upper(c1)}


def bisect(function, low, high):
    for _ in range(200):
        middle = (low + high) / 2
        low, high = (middle, high) if function(middle) < 0 else (low, middle)
    return (low + high) / 2


def share_cutoff(share, alpha, beads, n):
    """Intact beads out of so many on each of n slides, null p <= share: reject above c."""
    trials = beads
    above = 0.0
    for c in range(trials, -1, -1):
        mass = binomial_pmf(c, trials, share)
        if above + mass > alpha:
            return {"c": c, "gamma": (alpha - above) / mass}
        above += mass
    raise ArithmeticError("no cutoff")
