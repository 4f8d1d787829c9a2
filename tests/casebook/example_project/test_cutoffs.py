"""The developer's tests: every cutoff against the proven one."""

from cutoffs import bead_window, gap_window, share_cutoff

from verify.oracle import assert_cutoffs


def test_bead_window(sidecheck_solution):
    assert_cutoffs(bead_window(8, 12, 0.05, 10), sidecheck_solution("cases/bead-window.case.toml"))


def test_gap_window(sidecheck_solution):
    assert_cutoffs(gap_window(2, 3, 0.05, 12), sidecheck_solution("cases/gap-window.case.toml"))


def test_share_cutoff(sidecheck_solution):
    assert_cutoffs(share_cutoff(0.9, 0.05, 40, 5), sidecheck_solution("cases/intact-share.case.toml"))
