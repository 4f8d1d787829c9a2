"""How a colleague reports a test: sum or mean, open or closed window, rejecting or accepting inside.

A test can be written in several ways; every comparison goes through the same forward map, from the numbers
of a test on the scale of
V to the numbers that this style would print.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from verify.arithmetic.enclosure import Enclosure
from verify.errors import InputError
from verify.problem.numbers import exact
from verify.review.numbers import Numbers, affine

Report = dict[str, Enclosure]
"""The numbers that are printed, by name: c1, c2, gamma1, gamma2, or c, gamma."""

Window = Literal["open", "closed"]
Inside = Literal["reject inside", "accept inside"]
Fractions = Literal["of rejection", "of acceptance"]


@dataclass(frozen=True)
class Style:
    """A way of reporting.

    Attributes
    ----------
    reported_as : str
        "sum", "mean", or the number by which the sum is divided.
    window : {"open", "closed"} or None
        Whether the printed ends belong to the window; None: as in the table of the forms (the ends belong to
        the side that is not rejected). Fractions, where there are any, say themselves what happens at the
        ends.
    region : {"reject inside", "accept inside"} or None
        What happens inside; None: what the form of the null asks for.
    fractions : {"of rejection", "of acceptance"} or None
        What the fractions are probabilities of; None: of acceptance where the region is said to be
        accepted, else of rejection.
    scale, shift : Fraction
        The statistic is reported as scale * T + shift for each observation.
    """

    reported_as: str = "sum"
    window: Window | None = None
    region: Inside | None = None
    fractions: Fractions | None = None
    scale: Fraction = Fraction(1)
    shift: Fraction = Fraction(0)

    def divisor(self, n: int) -> Fraction:
        """The number by which the sum is divided."""
        if self.reported_as in ("sum", "mean"):
            return Fraction(1 if self.reported_as == "sum" else n)
        value = exact(self.reported_as, "reported_as")
        if not isinstance(value, Fraction) or value <= 0:
            raise InputError(f"the divisor {self.reported_as} is not a positive rational number",
                             'write "sum", "mean" or e.g. "10"', key="reported_as")  # fmt: skip
        return value

    @property
    def of_acceptance(self) -> bool:
        """Whether the printed fractions are probabilities of accepting."""
        if self.fractions is not None:
            return self.fractions == "of acceptance"
        return self.region == "accept inside"

    def readings(self, numbers: Numbers, n: int, step: Enclosure | None) -> list[tuple[Report, str]]:
        """Return what is printed for a test, with a remark; more than one where the style leaves a choice.

        Parameters
        ----------
        numbers : Numbers
            The test.
        n : int
            Number of observations.
        step : Enclosure or None
            Distance of neighbouring support points of V; None for a continuous law.
        """
        found = [(self._report(numbers, n), "")]
        if self.window == "closed" and step is not None and numbers.gamma1 is not None and numbers.two_sided:
            inner = self._core(numbers, step)
            found.append(
                (
                    self._report(inner, n),
                    "read with the fractions one support point outside the closed window",
                )
            )
        return found

    def _core(self, numbers: Numbers, step: Enclosure) -> Numbers:
        """The ends of the part in which the test is certain."""
        sure = Enclosure.of(1 if numbers.region == "inside" else 0)
        zero, back = Enclosure.of(0), affine(step, Fraction(-1))
        return numbers.moved(zero if numbers.gamma1 == sure else step, zero if numbers.gamma2 == sure else back)

    def _report(self, numbers: Numbers, n: int) -> Report:
        a, b, divisor = self.scale, self.shift * n, self.divisor(n)
        turned = numbers.exchanged(ends=True, fractions=True) if a < 0 and numbers.two_sided else numbers
        shown = turned.complemented() if self.of_acceptance else turned
        places = {"c1": shown.c1, "c2": shown.c2} if shown.two_sided else {"c": shown.c1}
        fractions = {"gamma1": shown.gamma1, "gamma2": shown.gamma2} if shown.two_sided else {"gamma": shown.gamma1}
        cut = {name: affine(c, a / divisor, b / divisor) for name, c in places.items() if c is not None}
        return cut | {name: gamma for name, gamma in fractions.items() if gamma is not None}
