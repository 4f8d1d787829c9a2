"""The digits to which doubles agree: the same count in a certificate, in a report and by the rechecker."""

import pytest

import verify
from verify.certificate.certify import certify
from verify.certificate.opinions import double_precision
from verify.comparison.compare import compare

POISSON = verify.Density(
    "exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0"
)
GAP = verify.Density("exp(-x/t)/t", variable="x", support="reals > 0", parameter="t", space="t > 0")


@pytest.mark.parametrize("density", [POISSON, GAP], ids=["lattice", "continuous"])
@pytest.mark.parametrize("null", ["t <= 8 or t >= 12", "8 <= t <= 12", "t = 8", "t <= 8"])
def test_a_certificate_counts_as_the_report_does(density: verify.Density, null: str) -> None:
    problem = verify.Problem(density, null=null, alpha="0.05", n=10)
    solution = verify.solve(problem, digits=60)
    certificate, comparison = certify(problem, digits=40, solution=solution), compare(solution)
    stated = double_precision(comparison, certificate.predicate["test"])["opinions"]
    assert any(opinion["digits"] for opinion in stated)
    for opinion, shown in zip(stated, comparison.opinions, strict=True):
        assert opinion["digits"].items() <= shown.digits.items()
    assert certificate.recheck().status == 0
