"""Conversions that documents ask for, through the whole program, then with a known mistake."""

from pathlib import Path

import pytest

from bitweight.judge.cases import Status
from outside.published import Firmware, run
from outside.published_parts import (
    ACS712,
    ADC0800,
    ADC0801,
    ADS1015,
    ADS1115,
    ADS7950_RANGE_2,
    AVR,
    AVR_DA,
    AVR_DIFFERENTIAL,
    AVR_DIFFERENTIAL_LEFT,
    DIVIDER,
    DSPIC_FRACTION,
    INA219,
    LOOP_165,
    MCP3301,
    MCP3421_16,
    MPX5010,
    MSP430_ADC12,
    NRF52_DIFFERENTIAL,
    PIC18,
    RP2040,
    SAMA5,
    SAMA5_DIFFERENTIAL,
    STM32,
    TINYAVR,
    TMP36,
)


def _file(text: str, read: str = "uint16_t part_read(void)") -> str:
    """A file of C around the update of `result`."""
    return f"#include <stdint.h>\n{read};\nint32_t result;\nvoid update(void)\n{{\n{text}}}\n"


FIRMWARE = {
    "AVR, 1023 for 1024": Firmware(
        part=AVR,
        code=_file("    result = (uint32_t)part_read() * 5000UL / 1024UL;\n"),
        slip=("1024", "1023"),
        rules=("full-scale",),
    ),
    "AVR differential, left adjusted and not shifted": Firmware(
        part=AVR_DIFFERENTIAL_LEFT,
        code=_file(
            "    int16_t code = (int16_t)part_read();\n"
            "    code >>= 6;\n"
            "    result = (int32_t)code * 2560L / 512 / 10;\n"
        ),
        slip=("    code >>= 6;\n", ""),
        count="1 mV",
        rules=("justification",),
    ),
    "AVR differential, 1024 for 512": Firmware(
        part=AVR_DIFFERENTIAL_LEFT,
        code=_file(
            "    int16_t code = (int16_t)part_read() >> 6;\n"
            "    result = (int32_t)code * 256000L / 512 / 10;\n"
        ),
        slip=("512", "1024"),
        count="10 uV",
        rules=("full-scale",),
    ),
    "AVR DA, 4095 for 4096": Firmware(
        part=AVR_DA,
        code=_file("    result = (uint32_t)part_read() * 2048u / 4096u;\n"),
        slip=("4096u", "4095u"),
        rules=("full-scale",),
    ),
    "tinyAVR, 1024 for 1023": Firmware(
        part=TINYAVR,
        code=_file("    result = (uint32_t)part_read() * 2500u / 1023u;\n"),
        slip=("1023", "1024"),
        rules=("full-scale",),
    ),
    "MSP430 ADC12, 4096 for 4095": Firmware(
        part=MSP430_ADC12,
        code=_file("    result = (uint32_t)part_read() * 2500u / 4095u;\n"),
        slip=("4095", "4096"),
        rules=("full-scale",),
    ),
    "STM32, 4096 for 4095": Firmware(
        part=STM32,
        code=_file("    result = (uint32_t)part_read() * 3300u / 0xFFFu;\n"),
        slip=("0xFFFu", "0x1000u"),
        rules=("full-scale",),
    ),
    "STM32, 3.0 V for 3.3 V": Firmware(
        part=STM32,
        code=_file("    result = (uint32_t)part_read() * 3300u / 0xFFFu;\n"),
        slip=("3300", "3000"),
        rules=("reference-value",),
    ),
    "nRF52 SAADC, into uint16_t": Firmware(
        part=NRF52_DIFFERENTIAL,
        code=(
            "#include <stdint.h>\nextern int16_t samples[2];\nint32_t result;\n"
            "void update(void)\n{\n    int16_t code = samples[0];\n"
            "    result = (int32_t)code * 60000 / 512;\n}\n"
        ),
        slip=("    int16_t code", "    uint16_t code"),
        reading="samples[0]",
        count="10 uV",
        rules=("sign",),
    ),
    "RP2040, 65535 for 4096": Firmware(
        part=RP2040,
        code=_file(
            "    float volts = part_read() * 3.3f / 4096;\n"
            "    celsius = 27.0f - (volts - 0.706f) / 0.001721f;\n"
        ).replace("int32_t result", "float celsius"),
        slip=("4096", "65535"),
        rules=("resolution", "full-scale"),
        result="celsius",
        count="1 degC",
    ),
    "SAMA5, 4096 for 4095": Firmware(
        part=SAMA5,
        code=_file("    result = (uint32_t)part_read() * 3000u / 4095u;\n"),
        slip=("4095", "4096"),
        rules=("full-scale",),
    ),
    "SAMA5 differential, 2048 for 2047": Firmware(
        part=SAMA5_DIFFERENTIAL,
        code=_file("    result = part_read() * 3000L / 2047;\n", "int16_t part_read(void)"),
        slip=("2047", "2048"),
        rules=("full-scale",),
    ),
    "ADS1115, the range of another gain setting": Firmware(
        part=ADS1115,
        code=_file(
            "    result = (int32_t)part_read() * 4096 / 32768;\n", "int16_t part_read(void)"
        ),
        slip=("4096", "6144"),
        rules=("reference-value",),
    ),
    "ADS1115, 65536 for 32768": Firmware(
        part=ADS1115,
        code=_file(
            "    result = (int32_t)part_read() * 4096LL / 32768;\n", "int16_t part_read(void)"
        ),
        slip=("32768", "65536"),
        rules=("full-scale",),
    ),
    "ADS1015, left-justified and not shifted": Firmware(
        part=ADS1015,
        code=_file(
            "    int16_t code = part_read() >> 4;\n    result = code * 4096L / 2048;\n",
            "int16_t part_read(void)",
        ),
        slip=(" >> 4", ""),
        rules=("justification",),
    ),
    "ADS1015, with the step of the ADS1115": Firmware(
        part=ADS1015,
        code=_file("    result = (part_read() >> 4) * 2.0f;\n", "int16_t part_read(void)"),
        slip=("2.0f", "0.125f"),
        rules=("justification", "resolution", "transfer-gain"),
    ),
    "MCP3301, 4095 for 4096": Firmware(
        part=MCP3301,
        code=_file(
            "    int16_t code = (int16_t)(part_read() << 3) >> 3;\n"
            "    result = code * 40960L / 4096;\n"
        ),
        slip=("/ 4096", "/ 4095"),
        rules=("full-scale",),
        count="0.1 mV",
    ),
    "MCP3301, sign not extended": Firmware(
        part=MCP3301,
        code=_file(
            "    int16_t code = (int16_t)(part_read() << 3) >> 3;\n"
            "    result = code * 40960L / 4096;\n"
        ),
        slip=("(int16_t)(part_read() << 3) >> 3", "part_read() & 0x1FFF"),
        rules=("sign",),
        count="0.1 mV",
    ),
    "MCP3421, gain of the amplifier forgotten": Firmware(
        part=MCP3421_16,
        code=_file(
            "    int16_t code = part_read();\n    result = code * 62.5f / 8;\n",
            "int16_t part_read(void)",
        ),
        slip=(" / 8", ""),
        rules=("chain-constant", "transfer-gain"),
        count="1 uV",
    ),
    "ADC0801, 255 for 256": Firmware(
        part=ADC0801,
        code=_file("    result = part_read() * 5120L / 256;\n", "uint8_t part_read(void)"),
        slip=("256", "255"),
        rules=("full-scale",),
    ),
    "ADC0801, the pin's voltage for the span": Firmware(
        part=ADC0801,
        code=_file("    result = part_read() * 5120L / 256;\n", "uint8_t part_read(void)"),
        slip=("5120", "2560"),
        rules=("reference-value",),
    ),
    "ADC0800, outputs not inverted": Firmware(
        part=ADC0800,
        code=_file(
            "    uint8_t code = (uint8_t)~part_read();\n    result = code * 10240L / 256;\n",
            "uint8_t part_read(void)",
        ),
        slip=("(uint8_t)~", ""),
        rules=("sign",),
    ),
    "PIC18, 1000 for 1024 four times": Firmware(
        part=PIC18,
        code=_file("    result = part_read() * 40960L / 4096;\n"),
        slip=("/ 4096", "/ 4000"),
        rules=("full-scale",),
        count="0.1 mV",
    ),
    "dsPIC fraction, not shifted": Firmware(
        part=DSPIC_FRACTION,
        code=_file("    result = (uint32_t)(part_read() >> 6) * 3300u / 1024u;\n"),
        slip=(" >> 6", ""),
        rules=("justification",),
    ),
    "ADS7950, range 1 for range 2": Firmware(
        part=ADS7950_RANGE_2,
        code=_file("    result = (uint32_t)(part_read() & 0xFFFu) * 5000u / 4096u;\n"),
        slip=("5000", "2500"),
        rules=("reference-value",),
    ),
    "INA219 bus register, not shifted": Firmware(
        part=INA219,
        code=_file("    result = (part_read() >> 3) * 4;\n"),
        slip=(" >> 3", ""),
        rules=("justification",),
    ),
    "TMP36, the offset of no sensor": Firmware(
        part=TMP36,
        code=_file(
            "    float celsius = part_read() * 500.0f / 1024 - 50;\n    result = celsius;\n"
        ).replace("int32_t result", "float result"),
        slip=("- 50", "- 40"),
        rules=("chain-constant", "transfer-offset"),
        count="1 degC",
    ),
    "ACS712-05, the slope of the 20 A part": Firmware(
        part=ACS712,
        code=_file("    result = ((int32_t)part_read() - 512) * 5000L / 1024 * 1000 / 185;\n"),
        slip=("185", "100"),
        rules=("chain-constant",),
        count="1 mA",
    ),
    "MPX5010, the step at 5 V taken for 1023": Firmware(
        part=MPX5010,
        code=_file(
            "    float volts = part_read() * 5.0f / 1024;\n    result = (volts - 0.2f) / 0.45f;\n"
        ).replace("int32_t result", "float result"),
        slip=("1024", "1000"),
        rules=("full-scale",),
        count="1 kPa",
    ),
    "4-20 mA, 250 ohm for 165 ohm": Firmware(
        part=LOOP_165,
        code=_file("    result = (uint32_t)part_read() * 5000u / 1024u * 1000u / 165u;\n"),
        slip=("165u", "250u"),
        rules=("chain-constant",),
        count="1 uA",
    ),
    "divider of 11, taken for 10": Firmware(
        part=DIVIDER,
        code=_file("    result = (uint32_t)part_read() * 5000u * 11u / 1024u;\n"),
        slip=("11u", "10u"),
        rules=("divider-ratio",),
    ),
}

BARE_BITS = Firmware(
    part=AVR_DIFFERENTIAL,
    code=_file(
        "    int16_t code = (int16_t)part_read();\n"
        "    if (code & 0x200) code -= 0x400;\n"
        "    result = (int32_t)code * 256000L / 512 / 10;\n"
    ),
    slip=("    if (code & 0x200) code -= 0x400;\n", ""),
    count="10 uV",
    rules=("sign",),
)
"""A word that the board file states as no wider than the code arrives without its sign extended."""

CASES = pytest.mark.parametrize("firmware", FIRMWARE.values(), ids=FIRMWARE.keys())


@CASES
def test_the_documents_conversion_is_verified(firmware: Firmware, tmp_path: Path) -> None:
    """C that does what the document says is verified, without a finding of any level."""
    outcome = run(tmp_path, firmware.board, firmware.code)
    assert [str(one) for one in outcome.findings] == []
    assert outcome.statuses == {"x": Status.VERIFIED}


@CASES
def test_the_well_known_mistake_is_named(firmware: Firmware, tmp_path: Path) -> None:
    """The same C with the mistake has one finding, under the rule that says what is wrong."""
    outcome = run(tmp_path, firmware.board, firmware.mistaken)
    assert len(outcome.findings) == 1
    assert outcome.findings[0].rule in firmware.rules
    assert outcome.statuses == {"x": Status.MISMATCHED}


def test_bare_bits_with_their_sign_extended_are_verified(tmp_path: Path) -> None:
    """Ten bits whose sign the C extends by hand are verified."""
    outcome = run(tmp_path, BARE_BITS.board, BARE_BITS.code)
    assert (outcome.findings, outcome.statuses) == ((), {"x": Status.VERIFIED})


def test_bare_bits_without_their_sign_are_named(tmp_path: Path) -> None:
    """Ten bits taken for a positive number are a fault of sign (AVR: ADCH 0x02, ADCL 0x70)."""
    outcome = run(tmp_path, BARE_BITS.board, BARE_BITS.mistaken)
    assert [one.rule for one in outcome.findings] == ["sign"]
