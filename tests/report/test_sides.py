"""Both sides of a channel in words."""

from dataclasses import replace
from fractions import Fraction

import pytest

from bitweight.board.parts import Share, Supply
from bitweight.board.stages import Amplifier, LowPass, Stage
from bitweight.judge.cases import Side
from bitweight.quantities import parse_quantity
from bitweight.report import sides
from report import samples

V33 = Supply(name="v33", voltage=parse_quantity("3.3 V"), place=samples.at(3))


def amplifier(offset: Share | None) -> Amplifier:
    """An amplifier of gain 20."""
    return Amplifier(
        gain=samples.part("gain", "20"),
        topology=None,
        feedback=None,
        other=None,
        offset=offset,
        ratiometric=None,
        place=samples.at(3),
    )


FROM_SEVEN = replace(
    samples.DEPTH.chain[0],
    sensitivity=samples.part("sensitivity", "59 mV/pH"),
    offset=samples.part("offset", "0 V"),
    at=samples.part("at", "7 pH"),
)

HALF = Share(source=V33, factor=Fraction(1, 2), text="v33 / 2", place=samples.at(3))

CHAINS: dict[str, tuple[tuple[Stage, ...], str]] = {
    "none": ((), "straight to the pin"),
    "divider": (
        samples.BATTERY.chain,
        "divider R21 27 kohm over R22 10 kohm, x 0.2703",
    ),
    "sensor and shunt": (samples.DEPTH.chain, "sensor 8 mA/m + 4 mA; shunt R41 200 ohm"),
    "sensor without offset": ((FROM_SEVEN,), "sensor 59 mV/pH from 7 pH"),
    "amplifier": ((amplifier(None),), "amplifier x 20"),
    "shifted amplifier": ((amplifier(HALF),), "amplifier x 20 + v33 / 2"),
    "filter": (
        (
            LowPass(
                resistance=samples.part("R", "10k"),
                capacitance=samples.part("C", "100n"),
                place=samples.at(3),
            ),
        ),
        "low-pass 10 kohm, 100 nF",
    ),
}


@pytest.mark.parametrize(("chain", "expected"), CHAINS.values(), ids=CHAINS.keys())
def test_chain_text(chain: tuple[Stage, ...], expected: str) -> None:
    """Each stage is a short phrase with its parts by name and value."""
    assert sides.chain_text(replace(samples.BATTERY, chain=chain)) == expected


def test_reference_text() -> None:
    """The reference is named, with the factor of the converter's pin where there is one."""
    assert sides.reference_text(samples.converter()) == "5 V vref"
    assert sides.reference_text(samples.converter(reference_gain=Fraction(2))) == "5 V vref x 2"


def test_full_scale_text() -> None:
    """The full-scale count says whether it is stated, and names all that are accepted."""
    assert sides.full_scale_text(samples.converter()) == "1024 counts"
    two = samples.converter(full_scale_counts=(1024, 1023), full_scale_stated=False)
    assert sides.full_scale_text(two) == "1024 or 1023 counts (by default)"


def test_hardware_side_of_an_untraced_channel() -> None:
    """The board's line is known although the code's is not."""
    case = samples.outcome().facts.cases[2]
    assert sides.hardware_side(case) == Side(gain=5 / 1024, offset=0.0)


def test_a_side_without_a_line() -> None:
    """A side that is no straight line says so."""
    none = Side(gain=None, offset=None)
    assert sides.gain_text(none, "V") == sides.offset_text(None, "V") == "no straight line"


def test_measures_text() -> None:
    """Range, converter, input and pin are named where they are known."""
    assert sides.measures_text(samples.BATTERY) == "0 V to 16 V, converter adc input 2 (PC2)"
    bare = replace(samples.BATTERY, range=None, input=None, pin=None)
    assert sides.measures_text(bare) == "V, no range stated, all codes, converter adc"
