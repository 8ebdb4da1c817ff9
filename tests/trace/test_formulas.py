"""A traced expression as one line of C."""

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.trace.formulas import formula
from facts import C


def clamped(c: C, *, low_first: bool) -> Expression:
    """A reading held between two constants."""
    code, low, high = c.code(), c.number("4", "LOW"), c.number("900", "HIGH")
    upper = c.choose(c.op(code, ">", high), high, code)
    lower = c.choose(c.op(code, "<", low), low, code)
    if low_first:
        return c.choose(c.op(code, "<", low), low, upper)
    return c.choose(c.op(code, ">", high), high, lower)


@pytest.mark.parametrize("low_first", [True, False])
def test_a_clamp_is_written_as_one(low_first: bool) -> None:
    """Both ends of a clamp, whichever is tested first, stand in one call."""
    c = C()
    text = formula(clamped(c, low_first=low_first))
    assert text == f"clamp({formula(c.code())}, LOW, HIGH)"


@pytest.mark.parametrize(
    ("operator", "swapped", "name"),
    [("<", False, "max"), ("<", True, "min"), (">=", False, "min"), (">=", True, "max")],
)
def test_a_bound_is_written_as_one(operator: str, swapped: bool, name: str) -> None:
    """The larger or the smaller of two values, by what the condition compares."""
    c = C()
    code, limit = c.code(), c.number("900", "LIMIT")
    arms = (code, limit) if swapped else (limit, code)
    text = formula(c.choose(c.op(code, operator, limit), *arms))
    assert text == f"{name}({formula(code)}, LIMIT)"


def test_another_choice_stays_a_choice() -> None:
    """A choice of something else than what is compared is shown as the code has it."""
    c = C()
    code = c.code()
    chosen = c.choose(c.op(code, "<", c.number("4", "LOW")), c.number("0"), code)
    assert formula(chosen) == f"{formula(code)} < LOW ? 0 : {formula(code)}"


def test_a_long_formula_ends_before_an_operator() -> None:
    """What is too long is cut between names, with one mark."""
    c = C()
    whole: Expression = c.code()
    for _ in range(60):
        whole = c.op(whole, "*", c.number("3", "FACTOR"))
    text = formula(whole)
    assert len(text) <= 240
    assert text.endswith("FACTOR ...")
