"""Whether stages fit each other, and the unit of a channel that states none."""

import pytest

from board.mistaken import mistakes_of
from board.parts import SUPPLIES, channel

FEED = "supply='v5'"


@pytest.mark.parametrize(
    ("stages", "unit"),
    [
        ("", "V"),
        ("{kind='divider', top='1k', bottom='1k'}", "V"),
        ("{kind='amplifier', gain=2}", "V"),
        ("{kind='shunt', resistance='1k'}", "A"),
        ("{kind='linear', sensitivity='10 mV/degC'}", "degC"),
        ("{kind='linear', sensitivity='10 mV/K', at='25 degC'}", "degC"),
        ("{kind='linear', sensitivity='59 mV/pH'}", "pH"),
        ("{kind='linear', sensitivity='5 V/(mg/l)'}", "mg/l"),
        ("{kind='linear', sensitivity='16 uA/kPa'}, {kind='shunt', resistance='1k'}", "kPa"),
        (f"{{kind='thermistor', r25='1k', beta=3950, with='1k', {FEED}}}", "degC"),
        ("{kind='rtd', r0='100 ohm', current='1 mA'}", "degC"),
        ("{kind='table', points=[['0 NTU','0 V'],['9 NTU','1 V']]}", "NTU"),
        ("{kind='polynomial', coefficients=[1], unit_in='rpm', unit_out='V'}", "rpm"),
        ("{kind='against', voltage='1.1 V'}", "V"),
    ],
)
def test_a_channel_without_a_unit_takes_that_of_its_chain(stages: str, unit: str) -> None:
    """What the first stage takes is what the channel measures."""
    assert channel(stages).unit.text == unit


def test_an_output_has_the_unit_that_its_chain_gives() -> None:
    """A DAC's chain runs from the pin to the output."""
    made = channel("{kind='linear', sensitivity='2 A/V'}", converter="kind='dac'\nbits=8")
    assert made.unit.text == "A"


@pytest.mark.parametrize(
    ("stages", "unit", "message"),
    [
        ("", "kPa", "unit is kPa, but without a chain it is V, as at the pin"),
        (
            "{kind='shunt', resistance='1k'}, {kind='shunt', resistance='1k'}",
            "A",
            "a shunt stage takes A, but the shunt stage before it gives V",
        ),
        (
            "{kind='amplifier', gain=2}",
            "A",
            "an amplifier stage takes V, but the channel's unit is A",
        ),
        (
            "{kind='linear', sensitivity='10 mV/A'}",
            "kPa",
            "the sensitivity is per A, but the channel's unit is kPa",
        ),
        (
            "{kind='linear', sensitivity='10 mV/A', at='3 kPa'}",
            "A",
            "at is in kPa, but the channel's unit is A",
        ),
        (
            "{kind='linear', sensitivity='10 mV/A', offset='4 mA'}",
            "A",
            "the offset is in A, but the stage gives V",
        ),
        (
            "{kind='amplifier', gain=2, offset='4 mA'}",
            "V",
            "the offset is in A, but the stage gives V",
        ),
        ("{kind='linear', sensitivity='1 mA/kPa'}", "kPa", "the chain ends in A, but the pin"),
        (
            "{kind='polynomial', coefficients=[1], unit_in='rpm', unit_out='A'}",
            "rpm",
            "the chain ends in A, but the pin takes V",
        ),
    ],
)
def test_stages_that_do_not_fit_are_named(stages: str, unit: str, message: str) -> None:
    """The mistake says what the stage takes, and what enters it in the words of the file."""
    text = (
        f"{SUPPLIES}[converter.adc]\nbits = 12\n[channel.x]\nunit = '{unit}'\nchain = [{stages}]\n"
    )
    (mistake,) = mistakes_of(text)
    assert message in mistake.message


def test_an_output_must_end_in_its_unit() -> None:
    """A DAC whose chain gives amperes cannot be in kPa."""
    (mistake,) = mistakes_of(
        f"{SUPPLIES}[converter.dac]\nkind = 'dac'\nbits = 8\n[channel.x]\nunit = 'kPa'\n"
        "chain = [{kind='linear', sensitivity='2 A/V'}]\n"
    )
    assert mistake.message == "the chain ends in A, but the channel's unit is kPa"
