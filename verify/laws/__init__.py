"""The laws of the statistic: one file a law, written once, evaluated in any arithmetic."""

from verify.laws.base import Law
from verify.laws.binomial import Binomial
from verify.laws.gamma import Gamma
from verify.laws.inverse_gaussian import InverseGaussian
from verify.laws.negative_binomial import NegativeBinomial
from verify.laws.normal import Normal
from verify.laws.poisson import Poisson

CLOSED_FORMS: dict[str, type[Law]] = {
    law.name: law for law in (Poisson, Binomial, NegativeBinomial, Gamma, Normal, InverseGaussian)
}
"""The laws with closed forms, by name."""

__all__ = [
    "CLOSED_FORMS",
    "Binomial",
    "Gamma",
    "InverseGaussian",
    "Law",
    "NegativeBinomial",
    "Normal",
    "Poisson",
]
