"""Variants: their tables, those that nothing uses, and whose mistakes are whose."""

import pytest

from bitweight.board.decoding.boards import board_from_text
from board.mistaken import BOARD, Case, case, check, stage

CASES = [
    case(
        "reference",
        BOARD + "[variant.ac.reference.¦vreff]\nvoltage = '3.3 V'\n",
        "variant ac has a reference 'vreff' that the base does not define and nothing uses,"
        " did you mean 'vref'?",
    ),
    case(
        "converter",
        BOARD + "[variant.c.converter.¦adcc]\nbits = 10\n",
        "variant c has a converter 'adcc' that the base does not define and nothing uses",
    ),
    case(
        "channel",
        BOARD + "[variant.d.channel.¦zz]\nrange = ['0 V', '1 V']\n",
        "variant d has a channel 'zz' that the base does not define and nothing uses; the base has",
    ),
    case(
        "supply",
        BOARD + "[variant.d.supply.¦v33]\nvoltage = '3.3 V'\n",
        "variant d has a supply 'v33' that the base does not define and nothing uses",
    ),
    case("define", BOARD + "[variant.a]\n¦deifne = { X = '1' }\n", "did you mean 'define'?"),
    case("table", BOARD + "[variant.a.¦zzz]\n", "unknown table 'zzz' in [variant.a]; known: board"),
    case(
        "own mistake",
        BOARD + "[variant.b.converter.adc]\nbits = ¦99\n",
        "in variant b: bits: expected a whole number",
    ),
    case(
        "mistake of the base alone",
        BOARD.replace("12", "¦99") + "[variant.b]\ndefine = { X = '1' }\n",
        "bits: expected a whole number",
    ),
    case(
        "cause and consequence",
        stage("{ kind='divider', top='1k', bottom='1k' }")
        + "range = ['0 V', '1 V']\n[variant.b.channel.tank]\nunit = 'A'\npin = ¦3\n",
        "in variant b: pin: expected a text",
    ),
    case(
        "consequence in the base",
        BOARD + "range = ¦['0 V', '1 V']\n[variant.b.channel.tank]\n"
        "chain = [{ kind='shunt', resistance='1 ohm' }]\n",
        "in variant b: range is in V but the channel's unit is A",
    ),
]


@pytest.mark.parametrize("one", CASES, ids=lambda one: one.name)
def test_a_mistake_of_a_variant_says_so(one: Case) -> None:
    """It stands at the variant's own table, not at places of the base that it makes wrong."""
    check(one)


def test_a_variant_may_add_what_it_uses() -> None:
    """A new reference is used by name, the rest of the board keeps its only one."""
    text = (
        BOARD
        + "[variant.a.reference.fine]\nvoltage = '4.096 V'\n"
        + "[variant.a.converter.second]\nbits = 16\nreference = 'fine'\n"
        + "[variant.a.channel.more]\nconverter = 'second'\nfirmware.reading = 'read(2)'\n"
    )
    board = board_from_text(text, file="board.toml", variant="a")
    assert [
        (one.name, one.converter.name, one.converter.reference.name) for one in board.channels
    ] == [("tank", "adc", "vref"), ("more", "second", "fine")]
    assert len(board_from_text(text, file="board.toml").channels) == 1
