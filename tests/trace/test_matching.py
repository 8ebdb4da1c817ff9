"""The board file's expressions where they stand in the code."""

import pytest

from tracing_cases import HEAD, Expected, at_codes, check, entry, traced

INPUTS = "enum { IN_TANK = 2, IN_SUMP };\n#define TANK IN_TANK\n#define BASE 1\n"
DRIVER = "uint16_t adc_read(int input);\nint adc_get(int input, uint16_t *out);\n"


@pytest.mark.parametrize(
    ("reading", "body", "expected"),
    [
        ("adc_read(2)", "mv = adc_read(2) * 2;", (200, 8000)),
        ("adc_read(IN_TANK)", "mv = adc_read(BASE + 1) * 2;", (200, 8000)),
        ("adc_read(TANK)", "int n = IN_TANK; mv = adc_read(n) * 2;", (200, 8000)),
        ("adc_read($any)", "mv = adc_read(7) * 2;", (200, 8000)),
        ("adc_read(2)", "mv = adc_read(3) * 2;", "is nowhere in the code"),
        ("buf[2]", "mv = buf[IN_TANK] * 2;", (200, 8000)),
        ("buf[TANK]", "mv = buf[2] * 2;", (200, 8000)),
        ("buf[2]", "mv = buf[1] * 2;", "is nowhere in the code"),
        ("dev.raw", "mv = dev.raw * 2;", (200, 8000)),
        ("dev.raw", "dev.raw = 5; mv = dev.raw * 2;", (200, 8000)),
        ("raw", "mv = raw * 2;", (200, 8000)),
        ("raw", "raw = 5; mv = raw * 2;", (200, 8000)),
        ("*(volatile uint16_t *)0x40", "mv = *(volatile uint16_t *)0x40 * 2;", (200, 8000)),
        ("ADC1->DR", "mv = ADC1->DR * 2;", (200, 8000)),
        ("ADC1->DR & 0xFFF", "mv = (ADC1->DR & 0xFFF) * 2;", (200, 8000)),
        ("adc_read(2) >> 4", "mv = (adc_read(2) >> 4) * 2;", (200, 8000)),
        ("adc_get(2, &$code)", "uint16_t v; adc_get(2, &v); mv = v * 2;", (200, 8000)),
        ("adc_get(2, $code)", "uint16_t v; adc_get(TANK, &v); mv = v * 2;", (200, 8000)),
        ("adc_get(2, $code)", "uint8_t b[2]; adc_get(2, (uint16_t *)b); mv = b[1];", "b[1]"),
        ("adc_get(2, &$code)", "uint16_t v; if (adc_get(2, &v) == 0) mv = v * 2;", (200, 8000)),
        ("adc_get(2, &$code)", "adc_get(2, &dev.raw); mv = dev.raw * 2;", (200, 8000)),
        ("adc_read(2) @ entry", "mv = adc_read(2) * 2;", (200, 8000)),
        ("adc_read(2) @ main.c", "mv = adc_read(2) * 2;", (200, 8000)),
        ("adc_read(2) @ elsewhere", "mv = adc_read(2) * 2;", "is nowhere in the code"),
    ],
)  # fmt: skip
def test_readings_are_matched_by_structure(reading: str, body: str, expected: Expected) -> None:
    """Same names and calls, equal constants; the code arrives where the pattern says."""
    before = INPUTS + DRIVER + "uint16_t buf[8], raw; struct { uint16_t raw; } dev;"
    check(entry(body, before), expected, reading=reading)


def test_the_outermost_match_wins() -> None:
    """What lies inside a matching expression is not followed, nor are writes to a reading."""
    source = HEAD + "uint16_t adc_read(int n) { return adc() * 16 + n; }\n"
    check(source + "void entry(void) { mv = adc_read(2) * 2; }", (200, 8000), reading="adc_read(2)")


def test_a_local_of_the_name_is_not_the_object() -> None:
    """A reading that names an object does not mean a local of that name elsewhere."""
    source = HEAD + "uint16_t raw;\nvoid entry(void) { int raw = 3; mv = raw * 2; }\n"
    check(source, "is nowhere in the code", reading="raw")


def test_readings_narrow_to_their_declared_type() -> None:
    """A reading has the type that the C declares for it, else that of the raw word."""
    check(HEAD + "uint8_t rd(void);\nvoid entry(void) { mv = rd() + 1; }", (101, 161), "rd()")
    check(HEAD + "void entry(void) { mv = rd() + 1; }", (101, 4001), "rd()")


@pytest.mark.parametrize(
    ("given", "body", "expected"),
    [
        ({"vref_mv()": 3000}, "mv = adc() * vref_mv() / 4096;", [73, 2929]),
        ({"cfg->scale": 2.5}, "mv = adc() * cfg->scale;", [250, 10000]),
        ({"cal[1]": -7}, "mv = adc() + cal[1];", [93, 3993]),
        ({"offset @ entry": 5}, "mv = adc() + offset;", [105, 4005]),
        ({"offset @ other": 5}, "mv = adc() + offset;", None),
    ],
)
def test_stated_values_stand_in(
    given: dict[str, int | float], body: str, expected: list[int] | None
) -> None:
    """An expression whose value the board file states has that value where it applies."""
    before = "struct c { float scale; } *cfg;\nint vref_mv(void);\nint cal[2], offset;\n"
    trace = traced(entry(body, before), value="mv", given=given)
    if expected is None:
        assert trace.reason is not None
    else:
        assert at_codes(trace.conversions[0].expression, (100, 4000)) == expected


def test_channels_may_share_a_reading() -> None:
    """A reading that two channels name is the code of both."""
    source = entry("mv = adc() * 2;")
    trace = traced(source, value="mv", others={"sump": "adc()"})
    assert trace.conversions[0].other_readings == ("sump",)
