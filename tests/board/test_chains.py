"""Chains and the ideal reading for every code."""

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.board.chains import (
    SignalChain,
    ideal,
    in_unit,
    not_computed,
    pin_volts,
    quantity_line,
)
from bitweight.quantities import parse_quantity
from board.parts import channel

DIVIDER = "{ kind='divider', top='100k', bottom='10k' }"
V5 = '[reference.vref]\nvoltage = "5 V"\n'


def reference(voltage: str) -> str:
    """The only voltage of a board."""
    return f'[reference.vref]\nvoltage = "{voltage}"\n'


# Published pairs of code and voltage at the pin, each from the document named.
PUBLISHED = [
    # ATmega48..328 data sheets, ADC conversion result: ADC = Vin * 1024 / Vref
    ("bits = 10", "5 V", 512, "2.5"),
    ("bits = 10", "5 V", 1023, "4.9951171875"),
    # ATmega164A..1284 (DS40002070A): gain 10, 2.56 V, 300 mV - 500 mV is -400
    ("bits = 10\ncoding = 'twos-complement'\ninput_gain = 10", "2.56 V", -400, "-0.2"),
    # ATtiny26: gain 20, 2.56 V, 400 mV - 300 mV is 800
    ("bits = 10\ninput_gain = 20", "2.56 V", 800, "0.1"),
    # AVR DA/DB data sheet 31.3.3.5: V / Vref * 4096
    ("bits = 12", "2.048 V", 2000, "1.0"),
    # MSP430x1xx user's guide, ADC12: 4095 * V / Vref, 1.5 V of 2.5 V is 2457
    ("bits = 12\nfull_scale_count = 4095", "2.5 V", 2457, "1.5"),
    # STM32 LL headers: full scale 4095
    ("bits = 12\nfull_scale_count = 4095", "3.3 V", 4095, "3.3"),
    # ADS1115 (SBAS444): LSB 125 uV at 4.096 V
    ("bits = 16\ncoding = 'twos-complement'", "4.096 V", 26400, "3.3"),
    # ADS1015 (SBASAV7): 3.3 V at 4.096 V is 1650
    ("bits = 12\ncoding = 'twos-complement'", "4.096 V", 1650, "3.3"),
    # MCP3421 (DS22003E): LSB 62.5 uV at 16 bit
    ("bits = 16\ncoding = 'twos-complement'", "2.048 V", 12800, "0.8"),
    # ADC0801 (common practice): the pin takes half the reference, 20 mV a step at 2.56 V
    ("bits = 8\nreference_gain = 2", "2.56 V", 50, "1.0"),
    # ADC0800 (National data sheet): 40 mV a step at 10.240 V
    ("bits = 8", "10.24 V", 1, "0.04"),
    # SAM: 16 samples added, not shifted: 16 bits for the same span (table Accumulation)
    ("bits = 12\noversampling = { samples = 16 }", "3.3 V", 32768, "1.65"),
    # tinyAVR 0/1 data sheet: RES = 1023 * Vin / Vref
    ("bits = 10\nfull_scale_count = 1023", "2.5 V", 1023, "2.5"),
    # PIC FVR: 10 bits at 4.096 V, 4 mV a step
    ("bits = 10", "4.096 V", 250, "1.0"),
    # PIC18F97J94: the code truncates, code 1 is centred at 1.5 LSB of Vref / 4096
    ("bits = 12\nfirst_transition = '1 LSB'", "4.096 V", 1, "0.0015"),
    # dsPIC33F (DS70183A): rounding, code 1 is centred at 1.0 LSB
    ("bits = 12", "4.096 V", 1, "0.001"),
]


@pytest.mark.parametrize(("converter", "voltage", "code", "volts"), PUBLISHED)
def test_a_code_stands_for_the_published_voltage(
    converter: str, voltage: str, code: int, volts: str
) -> None:
    """q(c) without a chain is the voltage at the pin that the document prints."""
    made = channel(converter=converter, supplies=reference(voltage))
    assert ideal(made).at(code) == Fraction(volts)


@pytest.mark.parametrize(
    ("stages", "converter", "voltage", "code", "value"),
    [
        # 100 k over 10 k: 16 V is 1.45455 V (common practice)
        (DIVIDER, "bits = 12", "2.5 V", 2048, "13.75"),
        # TMP36 at 5 V on 10 bits: T = code * 500 / 1024 - 50 (a user's page)
        (
            "{kind='linear', sensitivity='10 mV/degC', offset='500 mV', at='0 degC'}",
            "bits = 10",
            "5 V",
            154,
            "25.1953125",
        ),
        # 4-20 mA over 165 ohm at 3.3 V, 12 bits: 12 mA is 2457.6 counts (common practice)
        (
            "{kind='shunt', resistance='165 ohm'}",
            "bits = 12\nfull_scale_count = 4096",
            "3.3 V",
            1024,
            "0.005",
        ),
        # ACS712-05B at 5 V: +2 A is 2.870 V, 587.776 counts of 10 bits (data sheet)
        (
            "{kind='linear', sensitivity='185 mV/A', offset='2.5 V'}",
            "bits = 10",
            "5 V",
            512,
            "0",
        ),
    ],
)
def test_a_chain_turns_counts_into_the_quantity(
    stages: str, converter: str, voltage: str, code: int, value: str
) -> None:
    """q(c) is the quantity in the channel's unit that puts the code's voltage on the pin."""
    made = channel(stages, converter=converter, supplies=reference(voltage))
    assert ideal(made).at(code) == Fraction(value)


def test_a_sensor_in_celsius_reads_in_celsius() -> None:
    """Gain is degrees a count and offset is where code 0 stands, both in the channel's unit."""
    made = channel(
        "{kind='linear', sensitivity='10 mV/degC', offset='500 mV', at='0 degC'}",
        converter="bits = 10",
        supplies=V5,
    )
    line = ideal(made)
    assert made.unit.text == "degC"
    assert (line.gain, line.offset) == (Fraction(500, 1024), -50)
    assert line.code_of(Fraction(25)) == Fraction("153.6")


def test_range_ends_are_in_range() -> None:
    """Codes whose quantity is inside the range, ends included, are in range; exactly."""
    line = ideal(channel(channel="range = ['1 V', '2 V']", supplies=reference("4.096 V")))
    assert line.code_bounds == (1000, 2000)
    codes = np.array([999, 1000, 2000, 2001])
    assert line.in_range(codes).tolist() == [False, True, True, False]
    assert (line.low, line.high, line.span) == (1, 2, 1)


def test_without_a_range_all_codes_are_in_range() -> None:
    """The span is then from the first to the last code."""
    line = ideal(channel(supplies=reference("4.096 V")))
    assert (line.low, line.high) == (0, Fraction("4.095"))
    assert line.in_range(line.all_codes).all()
    assert line.all_codes.tolist() == list(range(4096))


def test_a_falling_chain_has_its_range_in_order() -> None:
    """An inverting amplifier turns codes round, not the range."""
    stages = "{kind='amplifier', topology='inverting', feedback='1k', input='1k', offset='v33 / 2'}"
    line = ideal(channel(stages, channel="range = ['0 V', '1 V']"))
    low, high = line.code_bounds
    assert line.gain < 0 < line.lsb
    assert low < high
    assert line.quantity(np.array([low, high])).tolist() == sorted(
        line.quantity(np.array([low, high])).tolist(), reverse=True
    )


def test_a_range_up_to_full_scale_stays_within_the_converter() -> None:
    """A range that ends exactly at full scale drives nothing past its range."""
    line = ideal(channel(DIVIDER, channel="range = ['0 V', '27.5 V']"))
    assert line.pin_ends == line.converter_ends == (0, Fraction("2.5"))
    over = ideal(channel(DIVIDER, channel="range = ['0 V', '30 V']"))
    assert over.pin_ends[1] > over.converter_ends[1]


def test_a_bipolar_converter_ends_at_both_references() -> None:
    """From minus full scale to full scale."""
    line = ideal(channel(converter="bits = 12\ncoding = 'twos-complement'"))
    assert line.converter_ends == (Fraction("-2.5"), Fraction("2.5"))


@pytest.mark.parametrize(
    ("stages", "converter", "reason"),
    [
        ("", "kind = 'dac'\nbits = 8", "dac converters are not computed yet"),
        ("", "kind = 'pwm'\nbits = 8", "pwm converters are not computed yet"),
        (
            "{kind='against', voltage='1.1 V'}",
            "bits = 8",
            "against stages are not computed yet",
        ),
        ("{kind='low-pass', resistance='1k', capacitance='1n'}", "bits = 8", None),
    ],
)
def test_what_has_no_line_yet_says_why(stages: str, converter: str, reason: str | None) -> None:
    """A channel that cannot be computed gives its reason, never a number."""
    assert not_computed(channel(stages, converter=converter)) == reason


def test_a_supply_that_is_also_the_reference_cancels() -> None:
    """A ratiometric sensor measured against its own supply reads the same at any supply."""
    made = channel(
        "{kind='linear', sensitivity='10 mV/kPa', offset='v33 / 10', ratiometric='v33'}",
        converter='bits = 12\nreference = "ratio"',
        supplies='[supply.v33]\nvoltage = "3.3 V"\n[reference.ratio]\nsupply = "v33"\n',
    )
    raised = quantity_line(
        made, lambda one: one.quantity.value * (2 if one.key == "supply v33" else 1)
    )
    assert raised == quantity_line(made)


def test_two_mentions_of_one_reference_cancel() -> None:
    """A divider that ends at the reference has its zero at the same code for any voltage."""
    made = channel("{kind='divider', top='1k', bottom='1k', to='vref'}")
    assert ideal(made).code_of(Fraction(0)) == 2048
    moved = quantity_line(
        made, lambda one: one.quantity.value * (2 if one.key == "reference vref" else 1)
    )
    assert -moved.offset / moved.gain == 2048


def test_a_quantity_is_put_in_the_channels_unit() -> None:
    """Kelvins of the board file become the channel's degrees."""
    made = channel("{kind='linear', sensitivity='10 mV/degC'}", channel="unit = 'degC'")
    assert in_unit(parse_quantity("298.15 K"), made) == 25


def test_the_pin_sees_the_middle_of_the_bin() -> None:
    """A PWM that is high for code + 1 counts stands one count higher."""
    made = channel(converter="bits = 8\nkind = 'pwm'\ncode_offset = 1", supplies=V5)
    assert pin_volts(made.converter).at(Fraction(255)) == 5


RESISTORS = st.integers(1, 10**6)


@given(RESISTORS, RESISTORS, st.integers(1, 50), st.fractions(-10, 10))
def test_a_chain_undone_gives_the_quantity_back(
    top: int, bottom: int, gain: int, volts: Fraction
) -> None:
    """forward and inverse are exact opposites, and close to their floating twins."""
    made = channel(
        f"{{kind='divider', top='{top} ohm', bottom='{bottom} ohm'}},"
        f"{{kind='amplifier', gain={gain}, offset='v33 / 2'}}"
    )
    chain = SignalChain(made.chain)
    assert chain.inverse(chain.forward(volts)) == volts
    assert chain.forward(volts) == chain.gain * volts + chain.offset
    there = chain.forward_all(np.array([float(volts)]))
    assert there[0] == pytest.approx(float(chain.forward(volts)), abs=1e-9)
    assert chain.inverse_all(there)[0] == pytest.approx(float(volts), abs=1e-6)


@given(st.integers(2, 16), st.sampled_from(["unsigned", "twos-complement", "offset-binary"]))
def test_the_array_agrees_with_the_exact_value(bits: int, coding: str) -> None:
    """q(c) as an array is the exact q(c), to floating precision, and rises with the code."""
    line = ideal(channel(DIVIDER, converter=f"bits = {bits}\ncoding = '{coding}'"))
    codes = line.all_codes
    values = line.quantity(codes)
    assert (np.diff(values) > 0).all()
    for index in (0, len(codes) // 2, -1):
        exact = float(line.at(int(codes[index])))
        assert values[index] == pytest.approx(exact, rel=1e-12, abs=1e-12)


@given(st.integers(1, 20))
def test_q_scales_with_the_reference(factor: int) -> None:
    """n times the reference reads n times as much."""
    one = ideal(channel(DIVIDER, supplies=reference("1 V")))
    many = ideal(channel(DIVIDER, supplies=reference(f"{factor} V")))
    assert many.at(1000) == factor * one.at(1000)
