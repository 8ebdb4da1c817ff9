"""The numbers of the hardware that a constant may stand for."""

from fractions import Fraction

import pytest

from bitweight.board.decoding.boards import board_from_text
from bitweight.board.facts import BoardFact, Role, chain_facts, stands_for
from bitweight.board.hardware import Channel
from board.parts import board, channel
from board.samples import HATCHERY


def fact(made: Channel, name: str) -> BoardFact:
    """The fact of this name."""
    return next(one for one in chain_facts(made) if one.name == name)


DIVIDER = "{ kind='divider', top='R1 30k', bottom='R2 10k' }"
MOTOR = (
    "{ kind='shunt', resistance='R5 R100' },"
    "{ kind='amplifier', topology='non-inverting', feedback='R8 40k', ground='R9 10k', "
    "offset='v33 / 2' }"
)
SENSOR = "{ kind='linear', sensitivity='10 mV/degC', offset='750 mV', at='25 degC' }"


@pytest.mark.parametrize(
    ("stages", "name", "value", "text", "rule"),
    [
        (DIVIDER, "full-scale adc", "4096", "4096", "full-scale"),
        (DIVIDER, "reference vref", "2.5", "2.5 V", "reference-value"),
        (DIVIDER, "resolution adc", "12", "12", "resolution"),
        (DIVIDER, "divider", "0.25", "0.25", "divider-ratio"),
        (DIVIDER, "inverse divider", "4", "4", "divider-ratio"),
        (DIVIDER, "resistance R1", "30000", "30 kohm", "divider-ratio"),
        (DIVIDER, "resistance R2", "10000", "10 kohm", "divider-ratio"),
        (DIVIDER, "resistance R1 + R2", "40000", "40 kohm", "divider-ratio"),
        (DIVIDER, "R1 / R2", "3", "3", "divider-ratio"),
        (DIVIDER, "R2 / R1", "1/3", "0.333333", "divider-ratio"),
        (DIVIDER, "step at the pin", "25/40960", "610.352 uV", "transfer-gain"),
        (DIVIDER, "step", "100/40960", "2.44141 mV", "transfer-gain"),
        (DIVIDER, "counts per V", "409.6", "409.6 1/V", "transfer-gain"),
        (DIVIDER, "span", "10", "10 V", "transfer-gain"),
        (MOTOR, "shunt R5", "0.1", "100 mohm", "chain-constant"),
        (MOTOR, "inverse shunt", "10", "10 A/V", "chain-constant"),
        (MOTOR, "gain", "5", "5", "chain-constant"),
        (MOTOR, "inverse gain", "0.2", "0.2", "chain-constant"),
        (MOTOR, "resistance R8", "40000", "40 kohm", "chain-constant"),
        (MOTOR, "R8 / R9", "4", "4", "chain-constant"),
        (MOTOR, "shunt and amplifier", "0.5", "500 mohm", "chain-constant"),
        (MOTOR, "inverse of shunt and amplifier", "2", "2 A/V", "chain-constant"),
        (MOTOR, "offset", "1.65", "1.65 V", "chain-constant"),
        (MOTOR, "offset in counts", "2703.36", "2703.36", "chain-constant"),
        (MOTOR, "zero code", "2703.36", "2703.36", "chain-constant"),
        (SENSOR, "sensitivity", "0.01", "10 mV/degC", "chain-constant"),
        (SENSOR, "inverse sensitivity", "100", "100 K/V", "chain-constant"),
        (SENSOR, "offset", "0.75", "750 mV", "chain-constant"),
        (SENSOR, "at", "298.15", "25 degC", "chain-constant"),
        (SENSOR, "zero code", "819.2", "819.2", "chain-constant"),
    ],
)
def test_a_channel_lists_its_numbers(
    stages: str, name: str, value: str, text: str, rule: str
) -> None:
    """Each number of the chain is a fact with its exact value, its text and its rule."""
    one = fact(channel(stages), name)
    assert (one.value, one.text, one.rule) == (Fraction(value), text, rule)


def test_a_reference_pin_that_takes_half_gives_the_span() -> None:
    """With reference_gain the whole span is a fact of its own."""
    made = channel(converter="bits = 8\nreference_gain = 2\ninput_gain = 4")
    assert fact(made, "reference vref span").value == 5
    assert fact(made, "input gain adc").value == 4


def test_a_load_and_another_end_make_facts() -> None:
    """A loaded divider knows its parallel resistance, a lifted one its offset."""
    made = channel("{kind='divider', top='1k', bottom='2k', load='2k', to='v33'}")
    assert fact(made, "resistance bottom with load").value == 1000
    assert fact(made, "resistance top + bottom loaded").value == 2000
    assert fact(made, "offset by v33").value == Fraction("1.65")


def test_all_accepted_full_scales_are_facts_and_no_other_count() -> None:
    """2**N - 1 is a fact only where the board file accepts it."""
    both = channel(converter="bits = 12\nfull_scale_count = [4096, 4095]")
    one = channel(converter="bits = 12")
    counts = [
        [fact.value for fact in chain_facts(made) if fact.role is Role.FULL_SCALE]
        for made in (both, one)
    ]
    assert counts == [[4096, 4095], [4096]]


def test_an_oversampled_converter_has_both_counts() -> None:
    """The count of one conversion and that of the result."""
    made = channel(converter="bits = 10\noversampling = { samples = 16, shift = 2 }")
    counts = [fact.value for fact in chain_facts(made) if fact.role is Role.FULL_SCALE]
    assert counts == [4096, 1024]
    assert fact(made, "resolution adc").value == 12


def test_offset_binary_has_its_zero_as_a_word() -> None:
    """The word that stands for 0 is half the words (common practice)."""
    made = channel(converter="bits = 12\ncoding = 'offset-binary'")
    assert fact(made, "zero code as a word").value == 2048


def test_facts_stand_at_their_keys() -> None:
    """A fact's place is where the board file states the value."""
    board = board_from_text(HATCHERY, file="b")
    lines = HATCHERY.split("\n")
    for name, text in (("resistance R1", '"R1 10k 1%"'), ("full-scale slow", "8")):
        place = fact(board.channels[1], name).place
        assert lines[place.line - 1][place.column - 1 :].startswith(text)


def test_what_is_not_computed_still_lists_what_is_stated() -> None:
    """A thermistor channel knows its beta and its resistor."""
    made = channel("{kind='thermistor', r25='10k', beta='3950 K', with='10k', supply='v5'}")
    roles = {one.role for one in chain_facts(made)}
    assert {Role.BETA, Role.RESISTANCE, Role.REFERENCE} <= roles
    assert Role.STEP not in roles


@pytest.mark.parametrize(
    ("stated", "name", "value"),
    [
        ('"full-scale"', "full-scale adc", "4096"),
        ('{ is = "reference vref", unit = "mV" }', "reference vref", "2.5"),
        ('"reference"', "reference vref", "2.5"),
        ('"resistance R1"', "resistance R1", "30000"),
        ('"divider"', "divider", "0.25"),
        ('"inverse divider x"', "inverse divider", "4"),
        ('{ is = "code x", at = "5 V" }', "code of x at 5 V", "2048"),
    ],
)
def test_a_named_constant_stands_for_its_fact(stated: str, name: str, value: str) -> None:
    """What [constants] says of an expression leads to the board's number."""
    made = board(DIVIDER, rest=f"[constants]\nX = {stated}\n")
    found = stands_for(made.constants[0], made, made.channels[0])
    assert found is not None
    assert (found.name, found.value) == (name, Fraction(value))


def test_a_stand_in_value_is_no_fact() -> None:
    """A number given for run-time data stands for nothing on the board."""
    made = board(DIVIDER, rest="[constants]\nX = { value = 13.164 }\n")
    assert stands_for(made.constants[0], made, made.channels[0]) is None
    assert made.constants[0].value == Fraction("13.164")
