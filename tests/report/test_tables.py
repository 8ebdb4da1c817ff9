"""The tables of a sheet."""

import pytest

from bitweight.judge.cases import Judgement
from bitweight.report.tables import points_table, sides_table
from report import samples


def judged() -> Judgement:
    """The battery's judgement."""
    judgement = samples.outcome().facts.cases[1].judgement
    assert judgement is not None
    return judgement


def lines(width: int) -> list[str]:
    """Both tables of the battery."""
    case = samples.outcome().facts.cases[1]
    found = (*sides_table(case, judged(), (), width), *points_table(judged(), width))
    return [line.plain.rstrip() for line in found]


def test_the_sign_stands_between_the_sides() -> None:
    """On a wide sheet the sides stand next to each other."""
    assert "  full scale  1024 counts                     <>  1023 (ADC_MAX)" in lines(80)
    assert "  bottom      0         0.000 V       0.000 V       0 V" in lines(80)


@pytest.mark.parametrize("width", [30, 45, 59])
def test_a_narrow_sheet_is_stacked(width: int) -> None:
    """On a narrow one the firmware's side stands below the board's, and no cell is folded."""
    found = lines(width)
    row = found.index("  full scale: 1024 counts")
    assert found[row + 1] == "    <> 1023 (ADC_MAX)"
    assert max(map(len, found)) <= width
