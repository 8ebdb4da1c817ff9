"""Divisions whose whole part is meant."""

import pytest

from bitweight.arithmetic.expressions import Binary, walk
from bitweight.arithmetic.types import MODELS
from bitweight.arithmetic.wholes import deciding, wholes
from properties.conversions import Conversion

HOST = MODELS["host"]


@pytest.mark.parametrize(
    ("text", "kept"),
    [
        ("x / 64 * 50 + x % 64", ["/"]),
        ("x % 64 + x / 64 * 50", ["/"]),
        ("((x >> 6) * 50) | (x & 63)", [">>"]),
        ("x / 64 * 50 + x % 32", []),
        ("x / 64 * 50 + (x + 1) % 64", []),
        ("(x + 1) / 64 * 50 + (x + 1) % 64", ["/"]),
        ("x / 64 * (x % 64)", []),
        ("x * 50 / 64", []),
        ("(x & 1) ? x >> 1 : x / 3", []),
    ],
)
def test_a_quotient_beside_its_remainder_is_whole(text: str, kept: list[str]) -> None:
    """A sum of a quotient and the remainder of the same division puts a number together again."""
    order = tuple(walk(Conversion(text, "uint16_t").build(HOST)))
    whole = wholes(order) - deciding(order)
    assert [
        node.operator for node in order if isinstance(node, Binary) and id(node) in whole
    ] == kept


@pytest.mark.parametrize(
    ("text", "only"),
    [
        ("(x >> 11) == 1 ? x / 3 : x * 2", [">>", "=="]),
        ("(x / 3 > 5) * x", ["/"]),
        ("x / 3 > 5 && x < 9 ? x : 4", ["/", ">", "<", "&&"]),
        ("x * 2 / 3", []),
    ],
)
def test_what_only_decides_makes_no_value(text: str, only: list[str]) -> None:
    """Conditions and operands of comparisons say which way to go, not how much."""
    order = tuple(walk(Conversion(text, "uint16_t").build(HOST)))
    found = deciding(order)
    assert [
        node.operator for node in order if isinstance(node, Binary) and id(node) in found
    ] == only
