"""A strategy for testing problems of a given law and form."""

from __future__ import annotations

from fractions import Fraction

from hypothesis import strategies as st

from verify.errors import InputError
from verify.problem.hypothesis import Form
from verify.problem.problem import Problem
from verify.strategies.adversarial import ADVERSARIAL
from verify.strategies.families import FAMILIES, LAWS, Family
from verify.strategies.sane import SANE, Profile, null_text
from verify.strategies.ties import tie

PROFILES: dict[str, Profile] = {"sane": SANE, "adversarial": ADVERSARIAL}


def problems(
    law: str | None = None, form: Form | str | None = None, profile: str = "sane", levels: int = 1
) -> st.SearchStrategy[Problem]:
    """Return a strategy for problems that have a solution.

    Parameters
    ----------
    law : str, optional
        Name of the law of the statistic, one of ``LAWS``; any of them by default.
    form : Form or str, optional
        "one-sided", "outside null", "interval null" or "point null"; any by default.
    profile : {"sane", "adversarial"}
        Everyday problems, or those that break solvers: levels down to 1e-200 and next to 1, limits that differ by one
        part in 1e20 or by a factor of 1e4, irrational limits, up to 10 000 000 observations, windows at the end of the
        support, and ties.
    levels : {1, 2}
        With 2, a null with two limits gets two different levels; then there may be no such test, and ``solve`` says so.

    Raises
    ------
    InputError
        For a law, form or profile that is not known.

    Examples
    --------
    A team's own solver against proven answers::

        @given(problems("Poisson", "outside null"))
        def test_my_cutoffs(problem):
            solution = verify.solve(problem, digits=15)
            assert my_solver(problem) == pytest.approx(float(solution.c1.mid))

    >>> problems("Poisson", "point null", profile="adversarial").validate()
    >>> problems("Cauchy")
    Traceback (most recent call last):
    ...
    verify.errors.InputError: law: no generated problems for 'Cauchy'; known: Poisson, binomial, negative binomial, ...
    """
    families = [family for family in FAMILIES if law in (None, family.law)]
    if not families:
        raise InputError(f"no generated problems for {law!r}", f"known: {', '.join(LAWS)}", key="law")
    if profile not in PROFILES:
        raise InputError(f"no profile {profile!r}", f"known: {', '.join(PROFILES)}", key="profile")
    if levels not in (1, 2):
        raise InputError(f"{levels!r} levels", "ask for 1 or 2", key="levels")
    forms = tuple(Form) if form is None else (_form(form),)
    return _problem(families, forms, PROFILES[profile], levels)


def _form(form: Form | str) -> Form:
    try:
        return Form(form)
    except ValueError:
        known = ", ".join(known.value for known in Form)
        raise InputError(f"no form {form!r}", f"known: {known}", key="form") from None


@st.composite
def _problem(
    draw: st.DrawFn, families: list[Family], forms: tuple[Form, ...], profile: Profile, levels: int
) -> Problem:
    family, form = draw(st.sampled_from(families)), draw(st.sampled_from(forms))
    if profile.ties and family.trials and draw(st.integers(0, 4)) == 0:
        null, tied, n = draw(tie(family, form))
        return Problem(family.density, null, tied, n)
    two = form in (Form.OUTSIDE, Form.INTERVAL)
    low, high = draw(profile.limits(family.room))
    null = null_text(form, low, high, below=draw(st.booleans()))
    level = draw(profile.alpha)
    n = draw(profile.n)
    if levels == 1 or not two:
        return Problem(family.density, null, level, n)
    other = str(Fraction(level) * draw(st.sampled_from([Fraction(1, 2), Fraction(9, 10), Fraction(99, 100)])))
    return Problem(family.density, null, draw(st.sampled_from([(level, other), (other, level)])), n)
