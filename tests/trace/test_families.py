"""Data files of microcontroller families."""

import pytest

from bitweight.errors import RuleError
from bitweight.trace.families import family_from_text, load_families

TEXT = """
document = "an invented data sheet, 3.1"
aliases = ["other"]
architecture = "avr"
[names]
REFS0 = 6
[types]
ADC = "uint16_t"
[[field]]
register = "ADMUX"
mask = 0xC0
subject = "reference"
choices = { 0 = "external", 1 = "supply" }
caution = "take care"
[[field]]
register = "ADMUX"
mask = 0x0F
subject = "input"
"""


def test_a_family_is_read() -> None:
    """Names, types, fields and choices stand as the file has them."""
    found = family_from_text("own", TEXT)
    assert (found.name, found.aliases, found.architecture) == ("own", ("other",), "avr")
    assert found.names == {"REFS0": 6}
    assert found.types == {"ADC": "uint16_t"}
    reference, selected = found.fields
    assert (reference.shift, reference.choices) == (6, {0: "external", 1: "supply"})
    assert (selected.shift, selected.choices, selected.caution) == (0, {}, None)


@pytest.mark.parametrize(
    "text",
    ["document =", "aliases = []", TEXT + "extra = 1\n", TEXT.replace("0xC0", '"high"')],
)
def test_a_file_that_is_no_family_is_an_error(text: str) -> None:
    """The error names the family."""
    with pytest.raises(RuleError, match="family 'own'"):
        family_from_text("own", text)


def test_a_registered_family_is_found_by_its_file() -> None:
    """The families of this distribution are complete: each names its document."""
    found = load_families()
    assert "avr-classic" in found
    assert all(one.document for one in found.values())
