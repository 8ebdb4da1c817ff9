"""The keys of every kind of stage."""

from fractions import Fraction

import pytest

from bitweight.board.decoding.stage_fields import FIELDS, ChainTables, OffsetText, ShareText
from bitweight.documents import Value, parse_document
from bitweight.errors import BoardError
from bitweight.quantities import Quantity


def value(text: str) -> Value:
    """The value of a TOML text."""
    found = parse_document(f"v = {text}", file="b").get("v")
    assert found is not None
    return found


@pytest.mark.parametrize(
    ("kind", "names"),
    [
        ("divider", "top bottom load to"),
        ("amplifier", "gain topology feedback ground input offset ratiometric"),
        ("shunt", "resistance"),
        ("linear", "sensitivity offset at ratiometric"),
        ("thermistor", "r25 beta steinhart_hart with side supply"),
        ("rtd", "r0 current with side supply"),
        ("low-pass", "resistance capacitance"),
        ("table", "points with side supply"),
        ("polynomial", "coefficients unit_in unit_out"),
        ("against", "voltage"),
    ],
)
def test_a_stage_has_the_documented_keys(kind: str, names: str) -> None:
    """Each kind has its keys and no others."""
    assert [field.name for field in FIELDS[kind]] == ["kind", *names.split()]


@pytest.mark.parametrize(
    ("text", "name", "factor"),
    [("v33 / 2", "v33", "1/2"), ("v33", "v33", "1"), ("v33*0.25", "v33", "0.25")],
)
def test_an_offset_may_be_a_share(text: str, name: str, factor: str) -> None:
    """A supply divided or multiplied by a number is a share of it."""
    assert OffsetText().decode(value(f"'{text}'")) == ShareText(
        name=name, factor=Fraction(factor), text=text
    )


def test_an_offset_may_be_a_quantity() -> None:
    """A voltage is a voltage, with or without a designator."""
    found = OffsetText().decode(value("'U3 500 mV 1%'"))
    assert isinstance(found, Quantity)
    assert (found.value, found.designator) == (Fraction(1, 2), "U3")


@pytest.mark.parametrize("text", ["'v33 / 0'", "'v33 / x'", "'v33 + 2'", "3"])
def test_other_offsets_are_refused(text: str) -> None:
    """Anything else says both forms, or what number was expected."""
    with pytest.raises(BoardError, match="expected a"):
        OffsetText().decode(value(text))


def test_stages_come_in_order() -> None:
    """A chain is its stages' fields, in the order of the file."""
    chain = ChainTables().decode(
        value("[{ kind='shunt', resistance='1k' }, { kind='amplifier', gain=2 }]")
    )
    assert [decoded.where for decoded in chain] == ["a shunt stage", "an amplifier stage"]


def test_the_mistakes_of_all_stages_come_together() -> None:
    """Three wrong stages are three mistakes."""
    with pytest.raises(BoardError) as caught:
        ChainTables().decode(value("[3, { kind='x' }, { kind='shunt' }]"))
    assert len(caught.value.mistakes) == 3


def test_a_chain_is_bounded() -> None:
    """A chain of hundreds of stages is refused."""
    with pytest.raises(BoardError, match="at most 64 stages"):
        ChainTables().decode(value("[" + "3," * 65 + "]"))
