"""Drawings of known arrays, compared character by character."""

import numpy as np
import pytest

from bitweight.report.drawings import Ink, bars, curve, drawing

FLAT = np.full(8, 1.0)


def rows(error: list[float], allowed: float, ink: Ink = Ink.PLAIN, height: int = 5) -> list[str]:
    """The rows of a curve with one column a code."""
    band = np.full(len(error), allowed)
    return list(curve(np.array(error), band, width=len(error), height=height, ink=ink).rows)


def test_a_ramp() -> None:
    """A ramp climbs from one edge of the drawing to the other and crosses the band's edges."""
    assert rows([-2, -1, 0, 1, 2], 1.0) == [
        "    *",
        "---*-",
        "  *  ",
        "-*---",
        "*    ",
    ]


def test_fine_dots() -> None:
    """A Braille pattern holds two columns of four dots (Unicode 2800: dot n is bit n - 1)."""
    error = np.array([2.0, 0.9, -0.9, -2.0])
    drawn = curve(error, np.full(4, 1.0), width=2, height=1, ink=Ink.FINE)
    top_left, second_right, third_left, bottom_right = 0x01, 0x10, 0x04, 0x80
    assert drawn.rows == (
        chr(0x2800 + top_left + second_right) + chr(0x2800 + third_left + bottom_right),
    )


def test_the_band_is_visible_around_a_small_error() -> None:
    """An error inside the band leaves both edges of the band in the drawing."""
    drawn = curve(np.zeros(8), FLAT, width=8, height=5, ink=Ink.PLAIN)
    assert drawn.rows == ("--------", "        ", "********", "        ", "--------")
    assert (drawn.top, drawn.bottom, drawn.zero) == (1.2, -1.2, 2)
    assert drawn.outside == " " * 8
    assert not drawn.clipped
    assert not drawn.gaps


def test_codes_without_a_value_leave_a_gap() -> None:
    """Where the error is no number, nothing is drawn and the gap is told."""
    error = np.array([0.0, 0.0, np.nan, np.nan, 0.0, 0.0, 0.0, 0.0])
    drawn = curve(error, FLAT, width=8, height=5, ink=Ink.PLAIN)
    assert drawn.rows[2] == "**  ****"
    assert drawn.gaps
    assert drawn.outside == " " * 8


def test_a_wrap_spike_is_cut_off_and_marked() -> None:
    """One code far away does not flatten the rest: it is marked at the edge, and is outside."""
    error = np.zeros(100)
    error[50] = -4000.0
    drawn = curve(error, np.full(100, 1.0), width=10, height=5, ink=Ink.PLAIN)
    assert drawn.rows[-1] == "-----v----"
    assert drawn.rows[2] == "*" * 10
    assert drawn.clipped
    assert drawn.outside == "     x    "
    assert drawn.bottom == pytest.approx(-1.5)


def test_an_infinite_error_is_marked() -> None:
    """An error without bound stands at the edge."""
    error = np.array([0.0, np.inf, -np.inf, 0.0])
    drawn = curve(error, np.full(4, 1.0), width=4, height=5, ink=Ink.PLAIN)
    assert drawn.rows[0] == "-^--"
    assert drawn.rows[-1] == "--v-"
    assert drawn.outside == " xx "


def test_a_large_error_at_most_codes_is_not_cut_off() -> None:
    """A curve that is wrong nearly everywhere is drawn whole, however narrow the band."""
    error = np.linspace(0.0, 1000.0, 64)
    drawn = curve(error, np.full(64, 1.0), width=16, height=8, ink=Ink.PLAIN)
    assert drawn.top == 1000.0
    assert not drawn.clipped


def test_one_code_outside_among_many_is_never_lost() -> None:
    """A single code outside the band marks its column, whatever the number of codes."""
    error = np.zeros(1 << 21)
    error[1_500_000] = 1.01
    drawn = curve(error, np.full(1 << 21, 1.0), width=64, height=7, ink=Ink.FINE)
    column = 1_500_000 * 64 >> 21
    assert drawn.outside == " " * column + "x" + " " * (63 - column)


def test_few_codes_fill_their_bins() -> None:
    """With fewer codes than columns, each code is as wide as its bin."""
    drawn = curve(np.array([0.0, 2.0]), np.full(2, 1.0), width=6, height=5, ink=Ink.PLAIN)
    assert drawn.rows[0] == "   ***"
    assert drawn.outside == "   xxx"


def test_a_band_that_opens() -> None:
    """A band that grows with the reading is drawn as it is at each code."""
    allowed = np.linspace(0.5, 2.0, 12)
    drawn = curve(np.zeros(12), allowed, width=12, height=9, ink=Ink.PLAIN)
    assert drawn.rows[4] == "*" * 12
    above, below = drawn.rows[:4], drawn.rows[5:]
    assert "".join(above).count("-") == 12
    assert "".join(below).count("-") == 12
    assert above[0].startswith(" ")
    assert above[0].endswith("-")


def test_drawing_labels_its_axes() -> None:
    """The axes name the unit, the codes at both ends and what is allowed."""
    lines = drawing(
        np.arange(100, 150),
        np.linspace(0.0, 0.3, 50),
        np.full(50, 0.1),
        unit="V",
        width=40,
        height=5,
        ink=Ink.PLAIN,
    )
    assert lines == (
        "+300 mV |                      *********",
        "        |             *********",
        "        |----**********-----------------",
        "   0 mV |*****",
        "-120 mV |-------------------------------",
        "too far |          xxxxxxxxxxxxxxxxxxxxx",
        "         code 100               code 149",
        "         --- allowed 100 mV",
    )


def test_drawing_explains_its_marks() -> None:
    """The legend explains cut-off values and gaps where there are some."""
    error = np.zeros(100)
    error[3], error[7] = 1e6, np.nan
    lines = drawing(
        np.arange(100), error, np.linspace(1, 2, 100), unit="bar", width=60, height=5, ink=Ink.FINE
    )
    assert [line.strip() for line in lines[-3:]] == [
        "╌╌╌ allowed 1 bar to 2 bar",
        "^ v beyond the drawing",
        "blank: no value",
    ]


@pytest.mark.parametrize(("band", "said"), [(0.1, False), (0.001, True)])
def test_a_band_below_a_row_is_said(band: float, said: bool) -> None:
    """A band that is thinner than a row of the drawing is named as such."""
    error = np.linspace(0.0, 1.0, 100)
    allowed = np.full(100, band)
    lines = drawing(np.arange(100), error, allowed, unit="V", width=70, height=7, ink=Ink.FINE)
    assert ("(too thin to draw)" in lines[-1]) is said


@pytest.mark.parametrize("ink", Ink)
@pytest.mark.parametrize("count", [1, 2, 7, 256, 5000])
@pytest.mark.parametrize("fill", [0.0, np.nan, np.inf, -1e300, 1e-300])
def test_drawing_never_exceeds_its_width(ink: Ink, count: int, fill: float) -> None:
    """Whatever the values, the lines fit and none fails."""
    lines = drawing(
        np.arange(count),
        np.full(count, fill),
        np.zeros(count),
        unit="V",
        width=58,
        height=7,
        ink=ink,
    )
    assert lines
    assert max(map(len, lines)) <= 58


def test_no_codes_no_drawing() -> None:
    """Without codes in range there is nothing to draw."""
    none = np.array([])
    codes = np.array([], dtype=np.int64)
    assert drawing(codes, none, none, unit="V", width=60, height=7, ink=Ink.FINE) == ()
    assert bars(none, none, width=10, ink=Ink.FINE) == ""


def test_bars_show_the_share_of_what_is_allowed() -> None:
    """Each column tells the largest share of the allowed error in eighths, `x` outside."""
    error = np.array([0.0, 0.13, -0.5, 0.99, 1.0, 1.01, np.nan, 0.0])
    assert bars(error, FLAT, width=8, ink=Ink.PLAIN) == "01477x 0"
    assert bars(error, FLAT, width=8, ink=Ink.FINE) == "▁▂▅██x ▁"
    assert bars(error, FLAT, width=4, ink=Ink.PLAIN) == "17x0"


def test_bars_without_any_allowed_error() -> None:
    """Where nothing is allowed, no error is inside and any other is outside."""
    assert bars(np.array([0.0, 1e-9]), np.zeros(2), width=2, ink=Ink.PLAIN) == "0x"
