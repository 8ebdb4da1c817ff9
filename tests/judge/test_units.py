"""What one count of a result stands for."""

from fractions import Fraction

import pytest

import facts
from bitweight.judge.units import result_unit, unit_in_name
from bitweight.units import parse_unit

NAMES = [
    ("tank_kpa_x10", "kPa", Fraction(1, 10)),
    ("tankMv", "V", Fraction(1, 1000)),
    ("tank.levelKPa", "kPa", Fraction(1)),
    ("state->batt_mV", "V", Fraction(1, 1000)),
    ("probe_uv", "mV", Fraction(1, 1000)),
    ("temp_centi_c", "degC", Fraction(1, 100)),
    ("temp_dc", "degC", Fraction(1, 10)),
    ("ph_x100", "pH", Fraction(1, 100)),
    ("oxygen_mg_l", "mg/l", Fraction(1)),
    ("TANK_MV(raw)", "V", Fraction(1, 1000)),
    ("pump_ma_filtered", "A", Fraction(1, 1000)),
]


@pytest.mark.parametrize(("name", "unit", "size"), NAMES)
def test_unit_in_name(name: str, unit: str, size: Fraction) -> None:
    """A name says the unit of its value by its words, a factor behind them included."""
    wanted = parse_unit(unit)
    found = unit_in_name(name, wanted)
    assert found is not None
    assert found.convert_to(wanted) == size


@pytest.mark.parametrize(
    ("name", "unit"),
    [
        ("i_a", "A"),
        ("v_c", "V"),
        ("tank_raw", "V"),
        ("motor_dc", "%"),
        ("tank_mv", "kPa"),
        ("", "V"),
    ],
)
def test_no_unit_in_name(name: str, unit: str) -> None:
    """A single letter, or a unit of another kind, is no unit."""
    assert unit_in_name(name, parse_unit(unit)) is None


def test_board_goes_before_name() -> None:
    """The unit of the board file wins over that of the name."""
    found = result_unit(facts.channel(count="10 mV"), "tank_mv")
    assert (found.scale, found.unit_from) == (Fraction(1, 100), "board")


def test_name_when_board_is_silent() -> None:
    """Without a unit in the board file the name gives it."""
    found = result_unit(facts.channel(count=None), "tank_mv")
    assert (found.scale, found.unit_from) == (Fraction(1, 1000), "name")


def test_inferred_when_nothing_says() -> None:
    """A name without a unit leaves the size open."""
    found = result_unit(facts.channel(count=None), "tank_level")
    assert (found.scale, found.unit_from) == (None, "inferred")


def test_kelvin_for_celsius() -> None:
    """A result in kelvin stands 273.15 below in degrees Celsius."""
    found = result_unit(facts.channel(unit="degC", ends=None, count="0.1 K"), "t")
    assert (found.scale, found.zero) == (Fraction(1, 10), Fraction(-27315, 100))
