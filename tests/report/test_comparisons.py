"""What the board has and what the code has in its place."""

from collections.abc import Iterable
from dataclasses import replace

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.board.converters import Coding
from bitweight.board.hardware import Channel
from bitweight.judge.findings import Finding
from bitweight.report import comparisons
from bitweight.report.comparisons import Row
from facts import C
from report import samples


def signs(
    code: Expression, of: Channel | None = None, findings: Iterable[Finding] = ()
) -> dict[str, Row]:
    """The rows of a conversion by their labels."""
    case = facts.case(code, of=of)
    assert case.judgement is not None
    return {row.label: row for row in comparisons.rows(case, case.judgement, findings)}


def scaled(c: C) -> Expression:
    """Millivolts from counts, multiplied first."""
    return c.op(c.op(c.code(), "*", "5000UL"), "/", "1024UL")


def test_rows() -> None:
    """Constants of the code stand beside the board's, and disagree where one is wrong."""
    case = samples.outcome().facts.cases[1]
    assert case.judgement is not None
    rows = {row.label: row for row in comparisons.rows(case, case.judgement)}
    assert list(rows) == [
        "reference",
        "full scale",
        "chain",
        "gain",
        "offset",
        "result",
        "arithmetic",
    ]
    assert (rows["reference"].firmware, rows["reference"].agrees) == ("4900 (VREF_MV)", False)
    assert (rows["full scale"].firmware, rows["full scale"].agrees) == ("1023 (ADC_MAX)", False)
    assert (rows["chain"].firmware, rows["chain"].agrees) == ("", None)
    assert rows["gain"].board == "18.07 mV/count"
    assert rows["gain"].firmware == "17.72 mV/count (-1.90 %)"


def test_rows_of_agreeing_constants() -> None:
    """A recognised constant that is not wrong agrees."""
    case = samples.outcome().facts.cases[1]
    judged = case.judgement
    assert judged is not None
    explained = replace(judged.explanation, wrong=())
    rows = comparisons.rows(case, replace(judged, explanation=explained))
    assert [row.agrees for row in rows] == [True, True, None, False, True, True, True]


def test_rows_name_bits_and_put_the_wrong_first() -> None:
    """A resolution is shown as the count it makes; of several constants the wrong come first."""
    case = samples.outcome().facts.cases[1]
    judged = case.judgement
    assert judged is not None
    bits = replace(samples.FULL_SCALE, name=None, text="10", place=samples.at(9, 9))
    roles = (
        (bits, "resolution"),
        (samples.FULL_SCALE, "full-scale"),
        (samples.FULL_SCALE, "full-scale"),
    )
    explained = replace(judged.explanation, roles=roles)
    full_scale = comparisons.rows(case, replace(judged, explanation=explained))[1]
    assert full_scale.firmware == "1023 (ADC_MAX), 1024: 2**10"
    assert full_scale.agrees is False


def test_a_right_conversion_has_no_other_sign() -> None:
    """Nothing of a right conversion disagrees, and its result and arithmetic are compared."""
    found = signs(scaled(C()))
    assert not [row for row in found.values() if row.agrees is False]
    assert found["result"].agrees
    assert found["arithmetic"].agrees
    assert "coding" not in found


def test_a_narrow_result_disagrees() -> None:
    """A type that cannot hold the range stands against what it must hold."""
    c = C()
    row = signs(c.store("uint8_t", scaled(c)))["result"]
    assert (row.board, row.firmware) == ("0 to 5000", "unsigned char (0 to 255)")
    assert row.agrees is False


@pytest.mark.parametrize(
    ("by", "left", "said"),
    [("16", "64", "divides early"), ("8", "128", "divides early"), ("1024", "1", "divides early")],
)
def test_early_division_disagrees(by: str, left: str, said: str) -> None:
    """Resolution thrown away is a sign in the row of the arithmetic."""
    c = C()
    row = signs(c.op(c.op(c.op(c.code(), "/", by), "*", "5000"), "/", left))["arithmetic"]
    assert (row.board, row.firmware, row.agrees) == ("exact", said, False)


def test_overflow_says_from_where() -> None:
    """The first code at which the arithmetic overflows is named."""
    c = C()
    product = c.op(c.code(), "*", "5000000")
    row = signs(c.op(product, "/", "1024000"))["arithmetic"]
    assert (row.firmware, row.agrees) == ("overflows from code 430", False)


def test_a_missed_coding_disagrees() -> None:
    """A code read in another coding stands against the converter's."""
    c = C()
    of = facts.channel(
        ends=None, converter=facts.converter(coding=Coding.OFFSET_BINARY, full_scale_counts=(512,))
    )
    row = signs(c.op(c.op(c.code(), "*", "5000L"), "/", "512L"), of)["coding"]
    assert (row.board, row.firmware, row.agrees) == ("offset binary", "unsigned", False)


def test_other_findings_have_a_row() -> None:
    """A limit that stands for another quantity is seen in the table, too."""
    limit = samples.finding("threshold", found="3413 (849.8 mA)", expected="3618 (1.0 A)")
    row = signs(scaled(C()), findings=(limit, samples.finding("deviation")))["limit"]
    assert (row.board, row.firmware, row.agrees) == ("3618 (1.0 A)", "3413 (849.8 mA)", False)


def test_a_nameless_constant_is_told_by_its_role() -> None:
    """A bare number of the chain carries what it stands for."""
    case = samples.outcome().facts.cases[1]
    judged = case.judgement
    assert judged is not None
    bare = replace(samples.FULL_SCALE, name=None, text="11", place=samples.at(9, 9))
    explained = replace(judged.explanation, roles=((bare, "inverse divider"),))
    chain = comparisons.rows(case, replace(judged, explanation=explained))[2]
    assert chain.firmware == "11 (inverse divider)"


def test_a_fraction_of_one_digit_has_no_role() -> None:
    """0.002 could stand for many facts: none is named beside it."""
    case = samples.outcome().facts.cases[1]
    judged = case.judgement
    assert judged is not None
    bare = replace(samples.FULL_SCALE, name=None, text="0.002f", place=samples.at(9, 9))
    explained = replace(judged.explanation, roles=((bare, "sensitivity"),))
    assert comparisons.rows(case, replace(judged, explanation=explained))[2].firmware == "0.002f"


def test_rounding_of_the_line_is_no_disagreement() -> None:
    """A coarse result has a slightly different line; that is its rounding, no fault."""
    found = signs(c_volts(C()), facts.channel(count="100 mV"))
    assert found["gain"].agrees is True


def c_volts(c: C) -> Expression:
    """Tenths of a volt from counts."""
    return c.op(c.op(c.code(), "*", "50UL"), "/", "1024UL")
