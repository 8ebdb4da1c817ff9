"""Published figures of converters and sensors: the document's numbers, the program's answer."""

import math
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from bitweight.judge.cases import Status
from outside.published import Firmware, Part, half_digit, run

AVR = Part(
    source="ATmega48..328 and 164..1284 data sheets, ADC Conversion Result: 1024 Vin / Vref",
    converter="bits = 10",
    reference="5 V",
    target="avr",
)
AVR_BANDGAP = Part(source=AVR.source, converter="bits = 10", reference="1.1 V")
AVR_DIFFERENTIAL = Part(
    source="ATmega164A..1284 (DS40002070A), Differential Channels: 512 gain (Vp - Vn) / Vref",
    converter='bits = 10\ncoding = "twos-complement"\ninput_gain = 10\njustified = "right"',
    reference="2.56 V",
    target="avr",
)
AVR_DIFFERENTIAL_LEFT = Part(
    source=AVR_DIFFERENTIAL.source,
    converter='bits = 10\ncoding = "twos-complement"\ninput_gain = 10\njustified = "left"',
    reference="2.56 V",
    target="avr",
)
AVR_GAIN_1 = Part(
    source="ATmega169P and 329 data sheets, differential channels with gain 1",
    converter='bits = 10\ncoding = "twos-complement"',
    reference="1.1 V",
)
ATTINY26 = Part(
    source="ATtiny26 data sheet, unipolar differential: 1024 gain (Vp - Vn) / Vref",
    converter='bits = 10\ninput_gain = 20\njustified = "left"',
    reference="2.56 V",
)
TINYAVR = Part(
    source="tinyAVR 0/1 and megaAVR 0 data sheets, conversion result: 1023 Vin / Vref",
    converter="bits = 10\nfull_scale_count = 1023",
    reference="2.5 V",
)
TINYAVR_64 = Part(
    source="tinyAVR 0/1 data sheet, accumulation of 64 results",
    converter="bits = 10\nfull_scale_count = 1023\noversampling = { samples = 64 }",
    reference="2.5 V",
)
AVR_DA = Part(
    source="AVR DA/DB data sheet 31.3.3.5: 4096 V / Vref in [0, 4095]",
    converter="bits = 12",
    reference="2.048 V",
)
AVR_DA_2V5 = Part(source=AVR_DA.source, converter="bits = 12", reference="2.5 V")
AVR_DA_16 = Part(
    source="AVR DA/DB data sheet, accumulation: the sum of 2..16 results is not scaled",
    converter="bits = 12\noversampling = { samples = 16 }",
    reference="2.048 V",
)
AVR_EA = Part(
    source="AVR EA and tinyAVR 2 data sheets: Vin gain / Vref 4096",
    converter="bits = 12\ninput_gain = 4",
    reference="1.024 V",
)
MSP430_ADC10 = Part(
    source="MSP430x1xx/x2xx user's guides, ADC10: 1023 (Vin - Vr-) / (Vr+ - Vr-)",
    converter="bits = 10\nfull_scale_count = 1023",
    reference="2.5 V",
)
MSP430_ADC12 = Part(
    source="MSP430x1xx user's guide, ADC12 core: 4095 (Vin - Vr-) / (Vr+ - Vr-)",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="2.5 V",
    target="msp430",
)
STM32 = Part(
    source="RM0365 and the LL headers (__LL_ADC_DIGITAL_SCALE): VDDA data / (2**12 - 1)",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="3.3 V",
)
NRF52_10 = Part(
    source="nRF52 product specification, SAADC, digital output; example of the vendor's forum",
    converter='bits = 10\ninput_gain = "1/3"',
    reference="0.6 V",
)
NRF52_UNITY = Part(source=NRF52_10.source, converter="bits = 10", reference="0.6 V")
NRF52_DIFFERENTIAL = Part(
    source=f"{NRF52_10.source}: 2**(bits - 1) for a differential input",
    converter='bits = 10\ncoding = "twos-complement"',
    reference="0.6 V",
)
NRF52_12 = Part(source=NRF52_10.source, converter='bits = 12\ninput_gain = "1/6"', reference="0.6 V")
RP2040 = Part(
    source="RP2040 data sheet 4.9.5 and its published example: T = 27 - (V - 0.706) / 0.001721",
    converter="bits = 12",
    reference="3.3 V",
    unit="degC",
    stages='{ kind = "linear", sensitivity = "-1.721 mV/degC", offset = "706 mV", at = "27 degC" }',
)
SAMA5 = Part(
    source="SAMA5 data sheet 67.10.4: single-ended 4095 Vin / Vref",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="3 V",
)
SAMA5_DIFFERENTIAL = Part(
    source="SAMA5 data sheet 67.10.4: differential 2047 Vin / Vref",
    converter='bits = 12\ncoding = "twos-complement"\nfull_scale_count = 2047',
    reference="3 V",
)
SAM_SUM = Part(
    source="SAM D21 data sheet, table Accumulation: 16 results of 12 bits make 16 bits",
    converter="bits = 12\noversampling = { samples = 16 }",
    reference="3.3 V",
)
SAM_1024 = Part(
    source="SAM D21 data sheet, table Accumulation: 1024 results, 6 bits dropped, 16 bits",
    converter="bits = 12\noversampling = { samples = 1024, shift = 6 }",
    reference="3.3 V",
)
SAM_14_BITS = Part(
    source="SAM C/D data sheets, table Oversampling and Decimation: 14 bits of 16 results, >> 2",
    converter="bits = 12\noversampling = { samples = 16, shift = 2 }",
    reference="3.3 V",
)
ADS1115 = Part(
    source="ADS1115 (SBAS444), tables FSR and ideal output code",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="4.096 V",
)
ADS1115_2V = Part(source=ADS1115.source, converter=ADS1115.converter, reference="2.048 V")
ADS1015 = Part(
    source="ADS1015 (SBASAV7): 12 bits, left-justified in 16, code FSR / 2048",
    converter='bits = 12\ncoding = "twos-complement"\njustified = "left"',
    reference="4.096 V",
)
ADS7950 = Part(
    source="ADS7950..61 data sheet, table of ideal codes, range 1",
    converter="bits = 12",
    reference="2.5 V",
)
ADS7950_RANGE_2 = Part(
    source="ADS7950..61 data sheet, table of ideal codes, range 2: 2 Vref",
    converter="bits = 12\nreference_gain = 2",
    reference="2.5 V",
)
MCP3301 = Part(
    source="MCP3301 (DS21700E) and MCP3302/04 (DS21697F, table 6-1): 13 bits signed",
    converter='bits = 13\ncoding = "twos-complement"',
    reference="4.096 V",
)
MCP3421_18 = Part(
    source="MCP3421 (DS22003E 4.9): Vin = code LSB / PGA, 18 bits",
    converter='bits = 18\ncoding = "twos-complement"\nword_bits = 24',
    reference="2.048 V",
)
MCP3421_16 = Part(
    source="MCP3421 (DS22003E 4.9): code = 32768 PGA Vin / 2.048 V, 16 bits",
    converter='bits = 16\ncoding = "twos-complement"\ninput_gain = 8',
    reference="2.048 V",
)
MCP3423 = Part(
    source="MCP3423 evaluation board: F907h is 0.996 V at 15.625 uV a count",
    converter='bits = 18\ncoding = "twos-complement"\nword_bits = 24',
    reference="2.048 V",
)
ADC0801 = Part(
    source="ADC0801..05 data sheets: pin 9 takes half the reference",
    converter="bits = 8\nreference_gain = 2\nword_bits = 8",
    reference="2.56 V",
)
ADC0800 = Part(
    source="ADC0800 data sheet (National), testing: LSB = Vref / 256, complementary outputs",
    converter='bits = 8\ncoding = "complementary"\nword_bits = 8',
    reference="10.24 V",
)
ADC0844 = Part(
    source="ADC0844 data sheet 4.2: first transition at half an LSB",
    converter="bits = 8",
    reference="5 V",
)
PIC18 = Part(
    source="PIC18F97J94 data sheet 22: first transition at 1 LSB of (Vr+ - Vr-) / 4096",
    converter='bits = 12\nfirst_transition = "1 LSB"',
    reference="4.096 V",
)
PIC18_FVR = Part(
    source="PIC18F1xK22 data sheet, fixed voltage reference: 4.096 V is 4 mV a step at 10 bits",
    converter="bits = 10",
    reference="4.096 V",
)
DSPIC = Part(
    source="dsPIC33F (DS70183A 16.18): first transition at half an LSB",
    converter="bits = 12",
    reference="4.096 V",
)
DSPIC_FRACTION = Part(
    source="dsPIC33F (DS70183A 16.18), data formats: fractional, left-justified",
    converter='bits = 10\njustified = "left"',
    reference="3.3 V",
)
INA219 = Part(
    source="INA219 (SBOS448F, table 3): bus voltage is (register >> 3) 4 mV",
    converter="bits = 13\nshift = 3",
    reference="32.768 V",
)
INA219_SHUNT = Part(
    source="INA219 (SBOS448F, table 3): 10 uV a count, 2 mohm",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="327.68 mV",
    unit="A",
    stages='{ kind = "shunt", resistance = "2 mohm" }',
)
INA226 = Part(
    source="INA226 (SBOS547, table 1): bus voltage 1.25 mV a count",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="40.96 V",
)
INA236 = Part(
    source="INA236 (SBOSA81D): bus voltage 1.6 mV a count",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="52.4288 V",
)
ESP32 = Part(
    source="ESP32 guide 4.4 (adc.h): 4095 at 12 bits; 1.5 V at 2.5 dB",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="1.5 V",
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
    if form is converter.presentations[0] or len(converter.presentations) == 1:
        assert converter.words(np.array([code])).tolist() == [word]


@pytest.mark.parametrize(("part", "code"), TOP_CODES)
def test_the_highest_code_is_the_printed_one(part: Part, code: int) -> None:
    """No code above the printed one exists."""
    assert part.ideal.channel.converter.code_high == code, part.source


# Worked numbers of our own: the document gives the equation only, which is written out here.
WORKED = [
    (TINYAVR, lambda volts: 1023 * volts / Fraction("2.5"), "0.55"),
    (MSP430_ADC10, lambda volts: 1023 * volts / Fraction("2.5"), "1.0"),
    (SAM_SUM, lambda volts: 16 * 4096 * volts / Fraction("3.3"), "1.65"),
    (SAM_1024, lambda volts: 1024 * 4096 * volts / Fraction("3.3") / 64, "1.65"),
    (ADS7950_RANGE_2, lambda volts: 4096 * volts / (2 * Fraction("2.5")), "4.0"),
    (INA226, lambda volts: volts / Fraction("0.00125"), "11.98"),
]
