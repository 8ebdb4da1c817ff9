"""Why a reading is nowhere, and what may have been meant."""

import pytest

from bitweight.limits import Limits
from tracing_cases import entry, traced

READ = "uint16_t adc_read(int ch);\n"
BODY = "mv = adc_read(3) * 2;"


@pytest.mark.parametrize(
    ("reading", "hint"),
    [
        ("adc_read(4)", "adc_read() is called, but otherwise, as adc_read(3) (main.c:8:6)"),
        ("adc_raed(3)", "did you mean adc_read(3) (main.c:8:6)?"),
        ("spi_transfer(1)", "spi_transfer(1) is nowhere in the code that was followed"),
        ("buf[2]", "buf is used, but otherwise, as buf[1] (main.c:8:28)"),
    ],
)
def test_the_nearest_there_is_is_named(reading: str, hint: str) -> None:
    """A call with other arguments, another element, a similar name; else nothing is made up."""
    source = entry(BODY + " mv = buf[1];", READ + "uint16_t buf[4];")
    reason = traced(source.replace("\n\n", "\n"), reading, "mv").reason
    assert reason is not None
    assert reason.endswith(hint)


def test_a_function_given_up_is_the_reason_only_where_it_names_the_reading() -> None:
    """A function that was cut short elsewhere says nothing of this reading."""
    deep = "(" * 400 + "adc()" + ")" * 400
    nested = traced(entry(f"mv = {deep};"), value="mv").reason
    assert nested == "an expression nested too deeply at line 7 is not followed"


def test_a_unit_that_is_too_large_is_the_reason() -> None:
    """A unit above the limit is not parsed, and the channels it names say so."""
    limits = Limits(parsed_bytes=1 << 20)
    source = entry("mv = adc();") + " " * (1 << 20)
    reason = traced(source, value="mv", limits=limits).reason
    assert reason == "main.c is larger than 1 MB and is not read"
