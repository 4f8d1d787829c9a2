"""Which questions are the same."""

from questions import NULLS, POISSON, ask, derivation

from verify.memory.key import key_of


def test_other_digits_level_size_or_null_are_other_questions(memory):
    known = derivation(POISSON)
    base = ask(POISSON, NULLS[0])
    others = [ask(POISSON, NULLS[0], "0.01"), ask(POISSON, NULLS[1]), ask(POISSON, NULLS[0], n=11)]
    keys = {key_of(problem, 20, known) for problem in (base, *others)} | {key_of(base, 21, known)}
    assert len(keys) == 5
    assert key_of(ask(POISSON, NULLS[0], "1/20"), 20, known) == key_of(base, 20, known)
