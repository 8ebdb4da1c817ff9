"""Small tables read at a subscript that depends on the code."""

import pytest

from tracing_cases import UNKNOWN, Expected, check, entry

ROWS = "struct row { int gain; int zero; };\n"


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("static const int t[4] = { 10, 20, 30, 40 };", "mv = t[adc() >> 10];",
         "t is a table of 4 entries, read at a subscript that depends on the code"),
        ("static const int t[4] = { 10, 20, 30, 40 };", "mv = adc() * t[adc() >> 10];",
         (1000, 160000)),
        ("static const int t[3] = { 10, 20, 30 };", "mv = adc() + t[adc() >> 10];",
         (110, UNKNOWN)),
        ("static const int t[4] = { [3] = 7 };", "mv = adc() + t[adc() >> 10];", (100, 4007)),
        (ROWS + "static const struct row t[2] = { { 2, 5 }, { 3, 9 } };",
         "uint16_t c = adc(); mv = c * t[c >> 11].gain - t[c >> 11].zero;", (195, 11991)),
        ("static int t[4] = { 10, 20 };\nvoid set(int i) { t[i] = flag(); }",
         "mv = adc() * t[adc() >> 10];", "t"),
        ("static const int t[65] = { 1 };", "mv = adc() * t[adc() >> 6];",
         "read at a subscript that is not constant"),
    ],
)  # fmt: skip
def test_an_entry_is_chosen_by_the_subscript(before: str, body: str, expected: Expected) -> None:
    """A constant table of at most 64 entries is followed; outside of it nothing is known."""
    check(entry(body, before), expected)
