"""Law of the statistic -> SciPy distribution, and what its class loses.

SciPy is imported here and in the other files of this folder only.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import sqrt
from typing import Any

from scipy import stats
from scipy.stats import _distn_infrastructure as generic

from verify.errors import NotAttempted


@dataclass(frozen=True)
class Shifted:
    """``offset`` + a frozen SciPy distribution, with the few functions that the route needs.

    SciPy's own ``loc`` does the same for a continuous law; for a lattice law with large numbers it does too,
    but this way one object serves the size-biased laws as well.
    """

    frozen: Any
    offset: int = 0

    def below(self, v: Any) -> Any:
        """P(Y <= v)."""
        return self.frozen.cdf(v - self.offset)

    def above(self, v: Any) -> Any:
        """P(Y > v)."""
        return self.frozen.sf(v - self.offset)

    def at(self, v: Any) -> Any:
        """Mass or density at v."""
        return (self.frozen.pmf if hasattr(self.frozen.dist, "pmf") else self.frozen.pdf)(v - self.offset)

    def lower_quantile(self, tail: Any) -> Any:
        """Smallest v with P(Y <= v) >= tail."""
        return self.frozen.ppf(tail) + self.offset

    def upper_quantile(self, tail: Any) -> Any:
        """Smallest v with P(Y > v) <= tail."""
        return self.frozen.isf(tail) + self.offset

    def support(self) -> tuple[float, float]:
        """Smallest and largest support point."""
        low, high = self.frozen.support()
        return low + self.offset, high + self.offset


@dataclass(frozen=True)
class ReciprocalInverseGaussian:
    """The size-biased inverse Gaussian law: mean**2 / Y with Y inverse Gaussian.

    Its density is y f(y) / mean; putting w = mean**2 / y into the density f gives exactly that.
    """

    frozen: Any
    mean: float

    def below(self, v: Any) -> Any:
        """P(mean**2 / Y <= v)."""
        return self.frozen.sf(self.mean**2 / v)

    def above(self, v: Any) -> Any:
        """P(mean**2 / Y > v)."""
        return self.frozen.cdf(self.mean**2 / v)

    def at(self, v: Any) -> Any:
        """Density at v."""
        return v * self.frozen.pdf(v) / self.mean


def scipy_law(name: str, p: Mapping[str, float]) -> Shifted:
    """SciPy's distribution for a named law with these parameters.

    Parameters
    ----------
    name : str
        As the derived law is called.
    p : mapping of str to float
        Its parameters, each rounded to a double.

    Raises
    ------
    NotAttempted
        When SciPy has no such law.

    Examples
    --------
    >>> float(scipy_law("gamma", {"shape": 1.0, "rate": 2.0}).frozen.mean())
    0.5
    """
    match name:
        case "Poisson":
            return Shifted(stats.poisson(p["mean"]))
        case "binomial":
            return Shifted(stats.binom(p["trials"], p["probability"]))
        case "negative binomial":
            return Shifted(stats.nbinom(p["size"], p["probability"]))
        case "gamma":
            return Shifted(stats.gamma(p["shape"], scale=1 / p["rate"]))
        case "normal":
            return Shifted(stats.norm(p["mean"], sqrt(p["variance"])))
        case "inverse Gaussian":
            return Shifted(stats.invgauss(p["mean"] / p["shape"], scale=p["shape"]))
    raise NotAttempted(f"SciPy has no such law: {name}")


def size_biased(name: str, p: Mapping[str, float]) -> Shifted | ReciprocalInverseGaussian:
    """The law with mass proportional to y times the law's own, so that E[Y psi] = E[Y] E*[psi].

    With it the second side condition of a point null, E[Y phi] = alpha E[Y], reads E*[phi] = alpha. Each
    follows from     absorbing the factor y into the factorial, the binomial coefficient or the power; a
    normal law has none.
    """
    match name:
        case "Poisson":
            return Shifted(stats.poisson(p["mean"]), 1)
        case "binomial":
            return Shifted(stats.binom(p["trials"] - 1, p["probability"]), 1)
        case "negative binomial":
            return Shifted(stats.nbinom(p["size"] + 1, p["probability"]), 1)
        case "gamma":
            return Shifted(stats.gamma(p["shape"] + 1, scale=1 / p["rate"]))
        case "inverse Gaussian":
            return ReciprocalInverseGaussian(scipy_law(name, p).frozen, p["mean"])
    raise NotAttempted(f"SciPy has no such law: size-biased {name}")


def lost_tail_hint(distribution: Any) -> str:
    """Say whether a SciPy distribution class inherits a generic function that loses a small tail, else "".

    The generic ``_sf`` is 1 - cdf and the generic ``_isf`` is ppf(1 - q): both lose every tail below 1e-16.

    Examples
    --------
    >>> lost_tail_hint(stats.poisson)
    'poisson inherits the generic _isf, ppf(1 - q): a small tail is lost'
    >>> lost_tail_hint(stats.gamma)
    ''
    """
    ways = {"_sf": "1 - cdf", "_isf": "ppf(1 - q)", "_ppf": "a search on cdf"}
    lost = [f"{name}, {way}" for name, way in ways.items() if _defining_module(distribution, name) == generic.__name__]
    if not lost:
        return ""
    return f"{distribution.name} inherits the generic {' and '.join(lost)}: a small tail is lost"


def _defining_module(distribution: Any, name: str) -> str:
    return next((kind.__module__ for kind in type(distribution).__mro__ if name in vars(kind)), "")
