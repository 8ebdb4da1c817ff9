"""Published figures of converters and sensors: the document's numbers, the program's answer."""

import math
from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest

from bitweight.board.chains import SignalChain
from bitweight.quantities import parse_quantity
from outside.published import Part, half_digit
from outside.published_parts import (
    ACS712,
    ADC0800,
    ADC0801,
    ADC0844,
    ADS1015,
    ADS1115,
    ADS1115_2V,
    ADS7950,
    ADS7950_RANGE_2,
    ATTINY26,
    AVR,
    AVR_BANDGAP,
    AVR_DA,
    AVR_DA_2V5,
    AVR_DA_16,
    AVR_DIFFERENTIAL,
    AVR_DIFFERENTIAL_LEFT,
    AVR_EA,
    AVR_GAIN_1,
    DIVIDER,
    DSPIC,
    DSPIC_FRACTION,
    ESP32,
    INA219,
    INA219_SHUNT,
    INA226,
    INA236,
    INVERTING,
    LOADED,
    LOOP_165,
    LOOP_250,
    MCP3301,
    MCP3421_16,
    MCP3421_18,
    MCP3423,
    MCP9700,
    MPX4115A,
    MPX4250A,
    MPX5010,
    MPXV6115V,
    MSP430_ADC10,
    MSP430_ADC12,
    NON_INVERTING,
    NRF52_10,
    NRF52_12,
    NRF52_DIFFERENTIAL,
    NRF52_UNITY,
    PIC18,
    PIC18_FVR,
    RP2040,
    SAM_14_BITS,
    SAM_1024,
    SAM_SUM,
    SAMA5,
    SAMA5_DIFFERENTIAL,
    STM32,
    TINYAVR,
    TINYAVR_64,
    TMP35,
    TMP36,
    TMP37,
    TMP235,
    TMP236,
)

# A voltage in, the code the document prints. How a fraction of a code is dropped is the
# document's: it prints codes that are exact, floored, or nearest.
PRINTED_CODES = [
    (AVR, "2.5", 512, "exact"),
    (AVR, "3.3", 675, "floor"),
    (AVR_BANDGAP, "1.0", 930, "floor"),
    (AVR_DIFFERENTIAL, "-0.2", -400, "exact"),
    (AVR_GAIN_1, "-0.2", -93, "nearest"),
    (ATTINY26, "0.1", 800, "exact"),
    (AVR_DA, "1.0", 2000, "exact"),
    (AVR_DA_2V5, "2.0", 3276, "floor"),
    (AVR_EA, "0.1", 1600, "exact"),
    (MSP430_ADC12, "1.0", 1638, "exact"),
    (MSP430_ADC12, "1.5", 2457, "exact"),
    (NRF52_10, "1.5", 853, "nearest"),
    (NRF52_UNITY, "0.1", 171, "nearest"),
    (NRF52_DIFFERENTIAL, "0.1", 85, "nearest"),
    (NRF52_12, "0.6", 682, "floor"),
    (SAMA5, "3", 4095, "exact"),
    (SAMA5, "1.5", 2047, "floor"),
    (SAMA5_DIFFERENTIAL, "3", 2047, "exact"),
    (ADS1115, "3.3", 26400, "exact"),
    (ADS1115_2V, "-2.048", -0x8000, "exact"),
    (ADS1015, "3.3", 1650, "exact"),
    (ADS7950, "1.25", 0x800, "exact"),
    (MCP3301, "-4.096", -4096, "exact"),
    (MCP3421_16, "0.1", 12800, "exact"),
    (ADC0801, "1.0", 50, "exact"),
    (INA219, "11.98", 2995, "exact"),
    (INA219_SHUNT, "10", 2000, "exact"),
    (INA226, "11.98", 9584, "exact"),
    (INA236, "12", 7500, "exact"),
]

# A code in, the quantity the document prints (right to half of its last digit).
PRINTED_QUANTITIES = [
    (AVR, 1023, "4.99512"),
    (STM32, 2048, "1.65040"),
    (STM32, 4095, "3.3"),
    (RP2040, 876, "27.138"),
    (RP2040, 891, "20.116"),
    (ADS1115, 1, "0.000125"),
    (ADS1115_2V, 1, "0.0000625"),
    (MCP3421_18, 2, "0.00003125"),
    (MCP3423, 0xF907, "0.996"),
    (ADC0801, 0xB6, "3.640"),
    (ADC0800, 1, "0.040"),
    (PIC18, 1, "0.0015"),
    (PIC18, 2048, "2.0485"),
    (PIC18_FVR, 1, "0.004"),
    (DSPIC, 1, "0.001"),
    (DSPIC, 2048, "2.048"),
    (INA219, 0x0BB3, "11.98"),
    (ESP32, 4095, "1.5"),
]

# Where a code changes, as the document prints it: `code - 1` to `code` at this voltage.
TRANSITIONS = [
    (ADC0844, 1, "0.0098"),
    (ADC0800, 1, "0.020"),
    (ADC0800, 255, "10.180"),
    (ADC0801, 255, "5.090"),
    (PIC18, 1, "0.001"),
    (PIC18, 4095, "4.095"),
    (DSPIC, 1, "0.0005"),
]

# A code, and the word that the document prints for it: (code, word, presentation).
PRINTED_WORDS = [
    (AVR_DIFFERENTIAL, -400, 0x0270, "bare"),
    (AVR_DIFFERENTIAL_LEFT, -400, 0x9C00, "bare"),
    (AVR_GAIN_1, -93, 0x03A3, "bare"),
    (ATTINY26, 800, 0xC800, "bare"),
    (ADS1115, 1, 0x0001, "bare"),
    (ADS1115, -1, 0xFFFF, "bare"),
    (ADS1115, -0x8000, 0x8000, "bare"),
    (ADS1015, 1650, 0x6720, "bare"),
    (ADS1015, -1, 0xFFF0, "bare"),
    (ADS1015, -2048, 0x8000, "bare"),
    (MCP3301, 1, 0b0_0000_0000_0001, "bare"),
    (MCP3301, -1, 0b1_1111_1111_1111, "bare"),
    (MCP3301, -4096, 0b1_0000_0000_0000, "bare"),
    (MCP3301, -1, 0xFFFF, "sign-extended"),
    (ADC0800, 0, 0xFF, "bare"),
    (ADC0800, 255, 0x00, "bare"),
    (DSPIC_FRACTION, 1023, 0xFFC0, "bare"),
    (DSPIC_FRACTION, 513, 0x8040, "bare"),
    (INA219, 0x0BB3, 0x5D98, "bare"),
]

# The highest code of a part, as the document prints it.
TOP_CODES = [
    (AVR, 0x3FF),
    (TINYAVR_64, 65472),
    (AVR_DA_16, 65520),
    (SAM_SUM, 65520),
    (SAM_1024, 65520),
    (SAM_14_BITS, 16380),
    (ADS7950, 0xFFF),
    (ADS1015, 0x7FF),
    (MCP3301, 4095),
]


def _dropped(code: Fraction, how: str) -> int:
    """A real-valued code as the document prints it."""
    match how:
        case "exact":
            assert code.denominator == 1
            return int(code)
        case "floor":
            return math.floor(code)
        case "nearest":
            return math.floor(code + Fraction(1, 2))
    raise AssertionError(how)


@pytest.mark.parametrize(("part", "quantity", "code", "how"), PRINTED_CODES)
def test_a_voltage_has_the_printed_code(part: Part, quantity: str, code: int, how: str) -> None:
    """The code for a quantity is the one that the document prints."""
    assert _dropped(part.ideal.code_of(Fraction(quantity)), how) == code, part.source


@pytest.mark.parametrize(("part", "code", "printed"), PRINTED_QUANTITIES)
def test_a_code_stands_for_the_printed_quantity(part: Part, code: int, printed: str) -> None:
    """q(c) is the printed quantity, to the digits that the document prints."""
    assert abs(part.ideal.at(code) - Fraction(printed)) <= half_digit(printed), part.source


@pytest.mark.parametrize(("part", "code", "printed"), TRANSITIONS)
def test_a_transition_stands_at_the_printed_voltage(part: Part, code: int, printed: str) -> None:
    """T[c] is half an LSB below the middle of its bin, where the document prints the transition."""
    transition = part.ideal.at(code) - part.ideal.lsb / 2
    assert abs(transition - Fraction(printed)) <= half_digit(printed), part.source


@pytest.mark.parametrize(("part", "code", "word", "name"), PRINTED_WORDS)
def test_a_code_reaches_the_firmware_as_the_printed_word(
    part: Part, code: int, word: int, name: str
) -> None:
    """The raw word is the printed one: two's complement, justified, shifted, complementary."""
    converter = part.ideal.channel.converter
    (form,) = [one for one in converter.presentations if one.name == name]
    assert form.words(np.array([code])).tolist() == [word], part.source
    if name == converter.presentations[0].name:
        assert converter.words(np.array([code])).tolist() == [word]


@pytest.mark.parametrize(("part", "code"), TOP_CODES)
def test_the_highest_code_is_the_printed_one(part: Part, code: int) -> None:
    """No code above the printed one exists."""
    assert part.ideal.channel.converter.code_high == code, part.source


# A quantity, and the voltage that the document prints for it.
SENSORS = [
    (TMP36, "0 degC", "0.5"),
    (TMP36, "25 degC", "0.75"),
    (TMP36, "50 degC", "1.0"),
    (MCP9700, "25 degC", "0.750"),
    (TMP236, "25 degC", "0.8875"),
    (TMP235, "100 degC", "1.500"),
    (TMP35, "25 degC", "0.250"),
    (TMP37, "25 degC", "0.500"),
    (ACS712, "2 A", "2.870"),
    (ACS712, "-5 A", "1.575"),
    (ACS712, "1 A", "2.685"),
    (MPX5010, "0 kPa", "0.2"),
    (MPX5010, "10 kPa", "4.7"),
    (MPX4115A, "15 kPa", "0.204"),
    (MPX4115A, "115 kPa", "4.794"),
    (MPX4250A, "250 kPa", "4.896"),
    (MPX4250A, "20 kPa", "0.204"),
    (MPXV6115V, "-60 kPa", "2.30"),
    (LOOP_250, "4 mA", "1"),
    (LOOP_250, "20 mA", "5"),
    (LOOP_165, "4 mA", "0.66"),
    (LOOP_165, "20 mA", "3.3"),
    (INA219_SHUNT, "10 A", "0.020"),
    (DIVIDER, "16 V", "1.45455"),
    (LOADED, "1 V", "0.0900901"),
    (NON_INVERTING, "0.1 V", "1.1"),
    (INVERTING, "-0.1 V", "1.0"),
]


@pytest.mark.parametrize(("part", "quantity", "printed"), SENSORS)
def test_a_quantity_puts_the_printed_voltage_on_the_pin(
    part: Part, quantity: str, printed: str
) -> None:
    """A sensor's output is the printed one, to the digits that the document prints."""
    chain = SignalChain(part.ideal.channel.chain)
    volts = chain.forward(parse_quantity(quantity).value)
    assert abs(volts - Fraction(printed)) <= half_digit(printed), part.source


def _parallel(bottom: int, load: int, top: int) -> Fraction:
    """The ratio of a divider whose bottom resistor is loaded."""
    both = Fraction(bottom * load, bottom + load)
    return both / (both + top)


# Our own worked numbers: the document gives the equation alone, which is written out here.
# Each: the part, a quantity in the channel's unit, and the document's equation from it to a code.
EQUATIONS: list[tuple[Part, str, Callable[[Fraction], Fraction]]] = [
    (AVR, "3.3", lambda volts: 1024 * volts / 5),
    (TINYAVR, "2.5", lambda volts: 1023 * volts / Fraction("2.5")),
    (TINYAVR, "0.55", lambda volts: 1023 * volts / Fraction("2.5")),
    (MSP430_ADC10, "1.0", lambda volts: 1023 * volts / Fraction("2.5")),
    (SAM_SUM, "1.65", lambda volts: 16 * 4096 * volts / Fraction("3.3")),
    (SAM_1024, "1.65", lambda volts: 1024 * 4096 * volts / Fraction("3.3") / 64),
    (ADS7950_RANGE_2, "4.0", lambda volts: 4096 * volts / (2 * Fraction("2.5"))),
    (INA226, "11.98", lambda volts: volts / Fraction("0.00125")),
    # TMP36 at 5 V on 10 bits, a user's page: T = code 500 / 1024 - 50
    (TMP36, "25.1953125", lambda degrees: (degrees + 50) * 1024 / 500),
    # ACS712-05B at 5 V on 10 bits: +2 A is 587.8
    (ACS712, "2", lambda ampere: (Fraction("2.5") + Fraction("0.185") * ampere) * 1024 / 5),
    # MPX5010: Vs (0.09 P + 0.04) on the same supply
    (MPX5010, "10", lambda kpa: (Fraction("0.09") * kpa + Fraction("0.04")) * 1024),
    # 4-20 mA over 165 ohm: I R / 5 V
    (LOOP_165, "12", lambda milli: milli * 165 / 1000 * 1024 / 5),
    # 100 k over 10 k, and 1 M across the 10 k
    (DIVIDER, "16", lambda volts: volts / 11 * 1024 / 5),
    (LOADED, "16", lambda volts: volts * _parallel(10_000, 10**6, 100_000) * 1024 / 5),
]


@pytest.mark.parametrize(("part", "quantity", "equation"), EQUATIONS)
def test_a_code_follows_the_documents_equation(
    part: Part, quantity: str, equation: Callable[[Fraction], Fraction]
) -> None:
    """The real-valued code is the one that the document's equation gives."""
    assert part.ideal.code_of(Fraction(quantity)) == equation(Fraction(quantity)), part.source


def test_the_top_of_a_ratiometric_converter_is_one_step_below_its_reference() -> None:
    """Code 1023 at 5 V is not 5 V (AVR data sheets: 0x3FF is the reference minus one LSB)."""
    assert AVR.ideal.at(1023) == 5 - AVR.ideal.lsb


def test_the_rows_cover_the_families() -> None:
    """At least thirty published figures over at least ten documents."""
    rows = [*PRINTED_CODES, *PRINTED_QUANTITIES, *TRANSITIONS, *PRINTED_WORDS, *SENSORS]
    assert len(rows) >= 30
    assert len({row[0].source for row in rows}) >= 10
