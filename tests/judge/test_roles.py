"""Which constants of a conversion are wrong, at several magnitudes and in several styles."""

from dataclasses import replace
from fractions import Fraction

import pytest

from bitweight.arithmetic.building import binary, choose
from bitweight.arithmetic.expressions import Leaf, Literal
from bitweight.arithmetic.literals import literal
from bitweight.board.converters import Coding
from bitweight.board.facts import Role
from bitweight.judge.findings import Level
from bitweight.judge.knobs import leaf_key
from bitweight.judge.roles import Explanation, StatedRole, explain
from bitweight.judge.substitutions import replaced
from operands import HOST, Board, Operand, const, fact, number, question, raw, stored

MILLI = Fraction(1, 1000)
TEN_BITS = Board()
TWELVE_BITS = Board(bits=12, counts=(4096,), volts="3.3 V")
LEFT = Board(shift=6)
DIVIDED = Board(
    per_volt=Fraction(11),
    more=(
        number(Role.DIVIDER, "divider", Fraction(1, 11), "divider-ratio"),
        number(Role.INVERSE_DIVIDER, "inverse divider", 11, "divider-ratio"),
        fact(Role.RESISTANCE, "resistance R1", "100 kohm", "divider-ratio"),
        fact(Role.RESISTANCE, "resistance R2", "10 kohm", "divider-ratio"),
    ),
)
WARM = Board(
    per_volt=Fraction(100),
    zero=Fraction(-50),
    more=(
        fact(Role.SENSITIVITY, "sensitivity", "10 mV/degC", "chain-constant"),
        fact(Role.OFFSET, "offset", "500 mV", "chain-constant"),
    ),
)
BIPOLAR = Board(
    bits=12,
    counts=(4096,),
    volts="3.3 V",
    per_volt=Fraction(1000, 66),
    zero=Fraction(-25),
    more=(
        fact(Role.OFFSET, "offset", "1.65 V", "chain-constant"),
        fact(Role.SENSITIVITY, "sensitivity", "66 mV/A", "chain-constant"),
        number(Role.ZERO_CODE, "zero code", 2048, "chain-constant"),
    ),
)
CURRENT = Board(
    per_volt=Fraction(100), more=(fact(Role.SHUNT, "shunt R7", "10 mohm", "chain-constant"),)
)
AMPLIFIED = Board(per_volt=Fraction(1, 11), more=(number(Role.GAIN, "gain", 11, "chain-constant"),))
SIGNED = Board(bits=12, counts=(2048,), volts="2.5 V", coding=Coding.TWOS_COMPLEMENT)
OFFSET_BINARY = Board(bits=12, counts=(2048,), volts="2.5 V", coding=Coding.OFFSET_BINARY)
HALVED = Board(
    bits=8,
    counts=(256,),
    volts="5.12 V",
    more=(fact(Role.REFERENCE, "reference vref pin", "2.56 V", "reference-value"),),
)


def found(explanation: Explanation) -> list[tuple[str, str, str]]:
    """Rule, found and expected value of each wrong constant."""
    return [(wrong.rule, wrong.found, wrong.expected) for wrong in explanation.wrong]


def scaled(volts: str, count: str, *, name: str | None = "VREF_MV") -> Operand:
    """raw * VREF / count."""
    return raw() * const(volts, name) / const(count)


def amps(mid: str, reference: str = "3300LL", per_ampere: str = "66") -> Operand:
    """(raw - mid) * reference * 1000 / 4096 / sensitivity, in mA."""
    above = raw().cast("int32_t") - const(mid, "I_ZERO")
    millivolts = above * const(reference, "VREF_MV") * const("1000") / const("4096")
    return millivolts / const(per_ampere, "SENS_MV_PER_A")


def celsius(offset: str, *, rounded: bool = False) -> Operand:
    """raw * 5000 / 1024 - offset, in tenths of a degree."""
    product = raw() * const("5000L", "VREF_MV")
    if rounded:
        product = product + const("512")
    return product / const("1024") - const(offset, "OFFSET_MV")


def by_resistors(top: str, bottom: str) -> Operand:
    """raw * 5000 / 1024 * (R1 + R2) / R2, resistors in kohm."""
    upper, lower = const(top, "R1_K"), const(bottom, "R2_K")
    return scaled("5000UL", "1024") * (upper + lower) / lower


def by_sides(top: Operand, bottom: Operand) -> Operand:
    """raw * 5.0 / 1024 * (top + bottom) / bottom."""
    return raw().cast("float") * const("5.0f") / const("1024.0f") * (top + bottom) / bottom


def of_ten(divisor: str) -> Operand:
    """The sum of ten readings, divided."""
    total = raw("uint32_t")
    for _ in range(9):
        total = total + raw("uint32_t")
    return total / const(divisor)


RIGHT = {
    "integer": (TEN_BITS, scaled("5000UL", "1024"), MILLI),
    "rounded to nearest": (
        TEN_BITS,
        (raw() * const("5000UL") + const("512")) / const("1024"),
        MILLI,
    ),
    "bin edge": (
        TEN_BITS,
        ((raw() * const("2") + const("1")) * const("5000UL")) / const("2048"),
        MILLI,
    ),
    "float": (
        TEN_BITS,
        raw().cast("float") * const("5.0f") / const("1024.0f"),
        Fraction(1),
    ),
    "shift": (TEN_BITS, (raw() * const("5000UL")) >> const("10", "ADC_BITS"), MILLI),
    "count made by a shift": (
        TEN_BITS,
        scaled("5000UL", "1") / (const("1", line=7) << const("10", "ADC_BITS")),
        MILLI,
    ),
    "folded, 4 digits": (TEN_BITS, raw() * const("4883") / const("1000"), MILLI),
    "folded, 3 digits": (TEN_BITS, raw().cast("float") * const("0.00488f"), Fraction(1)),
    "folded, reciprocal": (TEN_BITS, raw() * const("1000") / const("205"), MILLI),
    "folded in Q16": (DIVIDED, (raw() * const("3520000")) >> const("16"), MILLI),
    "two rounded constants": (
        DIVIDED,
        raw().cast("float") * const("0.00488f") * const("11.0f"),
        Fraction(1),
    ),
    "tenths": (TEN_BITS, raw() * const("50", "VREF_DV") / const("1024"), Fraction(1, 10)),
    "divider": (DIVIDED, scaled("5000UL", "1024") * const("11"), MILLI),
    "rounded divider": (
        DIVIDED,
        raw().cast("float") * const("5.0f") / const("1024.0f") / const("0.0909f", "DIVIDER"),
        Fraction(1),
    ),
    "resistors in another unit": (DIVIDED, by_resistors("100", "10"), MILLI),
    "temperature": (WARM, celsius("500"), Fraction(1, 10)),
    "temperature, rounded to nearest": (WARM, celsius("500", rounded=True), Fraction(1, 10)),
    "zero in mid-scale": (BIPOLAR, amps("2048"), MILLI),
    "two's complement": (
        SIGNED,
        raw().cast("int16_t") * const("2500", "VREF_MV") / const("2048"),
        MILLI,
    ),
    "offset binary": (
        OFFSET_BINARY,
        (raw().cast("int32_t") - const("2048", "MID")) * const("2500") / const("2048"),
        MILLI,
    ),
    "left-justified": (
        LEFT,
        (raw() >> const("6")) * const("5000UL", "VREF_MV") / const("1024"),
        MILLI,
    ),
    "left-justified, whole word": (LEFT, scaled("5000ULL", "65536"), MILLI),
    "half the reference at the pin": (HALVED, scaled("5120", "256"), MILLI),
}


@pytest.mark.parametrize(("board", "code", "scale"), RIGHT.values(), ids=RIGHT.keys())
def test_right_conversions_have_no_wrong_constant(
    board: Board, code: Operand, scale: Fraction
) -> None:
    """A conversion that agrees with its board is not blamed, however it is written."""
    explanation = explain(question(board, code, scale))
    assert not explanation.wrong
    assert not explanation.cancelling
    assert explanation.residual is None


WRONG = {
    "F - 1": (TEN_BITS, scaled("5000UL", "1023"), MILLI, [("full-scale", "1023", "1024")]),
    "F - 1 in hexadecimal": (
        TEN_BITS,
        scaled("5000UL", "0x3FF"),
        MILLI,
        [("full-scale", "0x3FF", "0x400")],
    ),
    "F - 1 in float": (
        TEN_BITS,
        raw().cast("float") * const("5.0f") / const("1023.0f"),
        Fraction(1),
        [("full-scale", "1023.0", "1024.0")],
    ),
    "F - 1, coarse reference": (
        TEN_BITS,
        raw() * const("50", "VREF_DV") / const("1023"),
        Fraction(1, 10),
        [("full-scale", "1023", "1024")],
    ),
    "F - 1 beside a rounded divider": (
        DIVIDED,
        raw().cast("float") * const("5.0f") / const("1023.0f") / const("0.0909f"),
        Fraction(1),
        [("full-scale", "1023.0", "1024.0")],
    ),
    "F - 1 made by a shift": (
        TEN_BITS,
        raw()
        * const("5000UL", "VREF_MV")
        / ((const("1", line=7) << const("10", "ADC_BITS")) - const("1", line=8)),
        MILLI,
        [("full-scale", "1023", "1024")],
    ),
    "a sum of 16": (
        Board(bits=12, counts=(65536,), volts="3.3 V"),
        raw("uint32_t") * const("3300", "VREF_MV") / const("65520"),
        MILLI,
        [("full-scale", "65520", "65536")],
    ),
    "signed F - 1": (
        SIGNED,
        raw().cast("int16_t") * const("2500", "VREF_MV") / const("2047"),
        MILLI,
        [("full-scale", "2047", "2048")],
    ),
    "unsigned F for a signed code": (
        SIGNED,
        raw().cast("int16_t") * const("2500", "VREF_MV") / const("4096"),
        MILLI,
        [("full-scale", "4096", "2048")],
    ),
    "reference": (
        TEN_BITS,
        scaled("4900UL", "1024"),
        MILLI,
        [("reference-value", "4900 mV", "5000 mV")],
    ),
    "nameless reference": (
        TWELVE_BITS,
        scaled("3000", "4096", name=None),
        MILLI,
        [("reference-value", "3000 mV", "3300 mV")],
    ),
    "half the reference": (
        HALVED,
        scaled("2560", "256"),
        MILLI,
        [("reference-value", "2560 mV", "5120 mV")],
    ),
    "other bits": (TEN_BITS, scaled("5000UL", "4096"), MILLI, [("resolution", "4096", "1024")]),
    "other bits less one": (
        TWELVE_BITS,
        scaled("3300", "1023"),
        MILLI,
        [("resolution", "1023", "4096")],
    ),
    "other shift": (
        TEN_BITS,
        (raw() * const("5000UL", "VREF_MV")) >> const("12", "ADC_BITS"),
        MILLI,
        [("resolution", "12 bits", "10 bits")],
    ),
    "other bits in a shift": (
        TEN_BITS,
        raw() * const("5000UL") / (const("1", line=7) << const("12", "ADC_BITS")),
        MILLI,
        [("resolution", "12 bits", "10 bits")],
    ),
    "shift for a count of 2**n - 1": (
        Board(counts=(1023,)),
        (raw() * const("5000UL", "VREF_MV")) >> const("10"),
        MILLI,
        [("full-scale", "1024", "1023")],
    ),
    "mask that drops bits": (
        TWELVE_BITS,
        (raw() & const("0x3FF", "ADC_MASK")) * const("3300UL") / const("4096"),
        MILLI,
        [("resolution", "0x3FF", "0xFFF")],
    ),
    "mask and count of other bits": (
        TWELVE_BITS,
        (raw() & const("0x3FF", "ADC_MASK")) * const("3300UL") / const("1024", line=7),
        MILLI,
        [("resolution", "0x3FF", "0xFFF"), ("resolution", "1024", "4096")],
    ),
    "resistors swapped, named by their side": (
        DIVIDED,
        by_sides(const("10000.0f", "R_TOP"), const("100e3f", "R_BOT")),
        Fraction(1),
        [
            ("divider-ratio", "10000.0 ohm", "100000.0 ohm"),
            ("divider-ratio", "100e3 ohm", "10e3 ohm"),
        ],
    ),
    "left read as right": (
        LEFT,
        scaled("5000ULL", "1024"),
        MILLI,
        [("justification", "1024", "65536")],
    ),
    "right read as left": (
        TEN_BITS,
        (raw() >> const("6")) * const("5000UL", "VREF_MV") / const("1024"),
        MILLI,
        [("justification", "6", "0")],
    ),
    "divider": (
        DIVIDED,
        scaled("5000UL", "1024") * const("12", "DIVIDER"),
        MILLI,
        [("divider-ratio", "12", "11")],
    ),
    "lower resistor": (
        DIVIDED,
        by_resistors("100", "12"),
        MILLI,
        [("divider-ratio", "12 kohm", "10 kohm")],
    ),
    "shunt tenfold": (
        CURRENT,
        raw().cast("float") * const("5.0f") / const("1024") / const("0.1f", "SHUNT_OHM"),
        Fraction(1),
        [("chain-constant", "0.1 ohm", "0.01 ohm")],
    ),
    "amplifier gain": (
        AMPLIFIED,
        scaled("5000UL", "1024") / const("10", "AMP_GAIN"),
        MILLI,
        [("chain-constant", "10", "11")],
    ),
    "sensor offset": (
        WARM,
        celsius("400"),
        Fraction(1, 10),
        [("chain-constant", "400 mV", "500 mV")],
    ),
    "sensor offset beside a rounding idiom": (
        WARM,
        celsius("400", rounded=True),
        Fraction(1, 10),
        [("chain-constant", "400 mV", "500 mV")],
    ),
    "zero code, one off": (BIPOLAR, amps("2047"), MILLI, [("chain-constant", "2047", "2048")]),
    "millivolts that hold volts": (
        TEN_BITS,
        raw().cast("float") * const("5.0f", "VREF_MV") / const("1024"),
        MILLI,
        [("unit-prefix", "5.0", "5000.0 mV")],
    ),
    "result in another prefix": (
        TEN_BITS,
        scaled("5000UL", "1024"),
        Fraction(1),
        [("unit-prefix", "one count stands for 0.001 V", "1 V")],
    ),
    "reference and full scale": (
        TEN_BITS,
        scaled("4900UL", "1023"),
        MILLI,
        [("full-scale", "1023", "1024"), ("reference-value", "4900 mV", "5000 mV")],
    ),
    "resistors swapped": (
        DIVIDED,
        by_resistors("10", "100"),
        MILLI,
        [
            ("divider-ratio", "10 kohm", "100 kohm"),
            ("divider-ratio", "100 kohm", "10 kohm"),
        ],
    ),
    "gain and offset": (
        BIPOLAR,
        amps("2000", "3000LL"),
        MILLI,
        [("chain-constant", "2000", "2048"), ("reference-value", "3000 mV", "3300 mV")],
    ),
    "three": (
        DIVIDED,
        scaled("3300UL", "1023") * const("12", "DIVIDER"),
        MILLI,
        [
            ("divider-ratio", "12", "11"),
            ("full-scale", "1023", "1024"),
            ("reference-value", "3300 mV", "5000 mV"),
        ],
    ),
}


@pytest.mark.parametrize(("board", "code", "scale", "expected"), WRONG.values(), ids=WRONG.keys())
def test_wrong_constants_are_named(
    board: Board, code: Operand, scale: Fraction, expected: list[tuple[str, str, str]]
) -> None:
    """Exactly the constants that contradict the board are named, each under its rule."""
    assert sorted(found(explain(question(board, code, scale)))) == sorted(expected)


@pytest.mark.parametrize(("board", "code", "scale", "expected"), WRONG.values(), ids=WRONG.keys())
def test_replacements_make_the_channel_right(
    board: Board, code: Operand, scale: Fraction, expected: list[tuple[str, str, str]]
) -> None:
    """With every offered replacement written, the same question finds nothing wrong."""
    wrong = explain(question(board, code, scale)).wrong
    assert len(wrong) == len(expected)
    edits = {leaf_key(one.leaf): one for one in wrong if one.leaf and one.replacement}
    if len(edits) < len(wrong):
        assert not all(one.replacement for one in wrong)
        return
    literals = {
        key: rewritten(one.leaf, one.replacement)
        for key, one in edits.items()
        if one.leaf and one.replacement
    }
    again = explain(question(board, Operand(replaced(code.node, literals)), scale))
    assert not again.wrong
    assert again.residual is None


def rewritten(leaf: Leaf, text: str) -> Literal:
    """A constant spelled anew at its place."""
    value, type_ = literal(text, HOST)
    return Literal(value=value, type=type_, leaf=replace(leaf, text=text))


@pytest.mark.parametrize("count", ["4096", "4095"])
def test_every_accepted_count_is_right(count: str) -> None:
    """Where the maker's documents disagree, either count is right and is told as the one used."""
    board = Board(bits=12, counts=(4096, 4095), volts="3.3 V")
    explanation = explain(question(board, scaled("3300", count)))
    assert not explanation.wrong
    assert explanation.count == int(count)


def test_a_count_beside_the_accepted_ones_is_held_against_the_first() -> None:
    """A count that is none of the accepted ones should be the preferred one."""
    board = Board(bits=12, counts=(4096, 4095), volts="3.3 V")
    explanation = explain(question(board, scaled("3300", "4094")))
    assert found(explanation) == [("full-scale", "4094", "4096")]


def test_an_assumed_count_is_said_to_be_assumed() -> None:
    """Where the board file states no full-scale count the finding says that 2**N is assumed."""
    board = Board(count_stated=False)
    wrong = explain(question(board, scaled("5000UL", "1023"))).wrong
    assert "2**10 is assumed" in wrong[0].remark


def test_constants_that_cancel_are_listed_and_not_wrong() -> None:
    """A trimmed reference that makes up for a wrong divider is no fault, but both are listed."""
    code = scaled("4900UL", "1024") * const("11.2245", "DIVIDER")
    explanation = explain(question(DIVIDED, code))
    assert not explanation.wrong
    assert [(one.text, one.expected) for one in explanation.cancelling] == [
        ("VREF_MV", "5000 mV"),
        ("DIVIDER", "11.0000"),
    ]


@pytest.mark.parametrize(
    ("volts", "scale", "decade"),
    [("5000UL", MILLI, -3), ("5", Fraction(1), 0), ("50", Fraction(1, 10), -1)],
)
def test_the_decade_of_an_inferred_unit_is_told(volts: str, scale: Fraction, decade: int) -> None:
    """Without a stated unit the nearest power of ten is taken, and F - 1 is still seen."""
    explanation = explain(question(TEN_BITS, scaled(volts, "1023", name=None), None))
    assert explanation.decade == decade
    assert [rule for rule, _, _ in found(explanation)] == ["full-scale"]
    assert scale == Fraction(10) ** explanation.decade


@pytest.mark.parametrize(
    ("code", "scale", "residual"),
    [
        (raw() * const("49") / const("10"), MILLI, "gain"),
        (raw().cast("float") * const("0.00588f"), Fraction(1), "gain"),
        (scaled("5000UL", "1024") + const("100"), MILLI, "offset"),
        (raw() * raw() / const("200"), MILLI, "curve"),
    ],
)
def test_what_nothing_explains_is_left_over(code: Operand, scale: Fraction, residual: str) -> None:
    """A line that no board fact mends is a residual where it leaves the allowed error."""
    explanation = explain(question(TEN_BITS, code, scale))
    assert not explanation.wrong
    assert explanation.residual == residual


def test_a_residual_inside_the_allowed_error_is_none() -> None:
    """A constant folded too coarsely is silent while the reading stays inside the allowed error."""
    asked = question(TEN_BITS, raw() * const("49") / const("10"), allowed=0.05)
    assert explain(asked).residual is None


def test_the_one_unexplained_constant_is_offered_its_right_value() -> None:
    """A single folded constant that is wrong is offered the value that would be right."""
    asked = question(TEN_BITS, raw().cast("float") * const("0.00588f"), Fraction(1))
    culprit = explain(asked).culprit
    assert culprit is not None
    assert culprit.replacement == "0.00488281f"


def test_levels_follow_from_the_own_effect() -> None:
    """Each alone, the reference leaves the allowed error and F - 1 does not."""
    wrong = explain(question(TEN_BITS, scaled("4900UL", "1023"))).wrong
    levels = {one.rule: one.level for one in wrong}
    assert levels == {"reference-value": Level.ERROR, "full-scale": Level.WARNING}


def test_faults_that_leave_the_allowed_error_only_together_are_errors() -> None:
    """Two faults, each inside the allowed error, are both errors if their sum is outside."""
    code = raw().cast("float") * const("5.01f", "VREF") / const("1020.0f")
    asked = question(TEN_BITS, code, Fraction(1), allowed=0.025)
    assert [one.level for one in explain(asked).wrong] == [Level.ERROR, Level.ERROR]


def test_a_wrong_constant_without_any_effect_is_a_note() -> None:
    """F - 1 that changes no result, because whole volts are reported, is a note."""
    code = raw() * const("5", "VREF_V") / const("1023")
    asked = question(TEN_BITS, code, Fraction(1))
    low = replace(asked, in_range=asked.codes < 200)
    assert [one.level for one in explain(low).wrong] == [Level.NOTE]


def test_a_stated_role_goes_first() -> None:
    """A constant that [constants] names takes that role, whatever its own name suggests."""
    code = raw() * const("4900UL", "GAIN_A") / const("1024")
    stated = (StatedRole(name="GAIN_A", role="reference", subject="vref", unit=MILLI),)
    explanation = explain(question(TEN_BITS, code, stated=stated))
    assert found(explanation) == [("reference-value", "4900 mV", "5000 mV")]


def test_a_missed_coding_is_not_explained_by_constants() -> None:
    """Offset binary read as unsigned is for the rule about codings: nothing is left over here."""
    code = raw().cast("int32_t") * const("2500", "VREF_MV") / const("2048")
    explanation = explain(question(OFFSET_BINARY, code))
    assert not explanation.wrong
    assert explanation.residual is None


def test_a_clamp_is_no_curve() -> None:
    """A result held at a bound stays a line."""
    volts = scaled("5000UL", "1024")
    bound = const("4000").node
    place = bound.leaf.use if bound.leaf else None
    assert place is not None
    above = binary(HOST, ">", volts.node, bound, place)
    clamped = Operand(choose(HOST, above, bound, volts.node, place))
    explanation = explain(question(TEN_BITS, stored(clamped, "uint16_t")))
    assert explanation.residual is None
    assert not explanation.wrong


def test_no_board_line_needs_no_explanation() -> None:
    """Where the board's side is no straight line there is nothing to explain."""
    asked = question(TEN_BITS, scaled("5000UL", "1023"))
    assert explain(replace(asked, lines=())) == Explanation()


UNEXPLAINED = {
    "a factor two too many": scaled("5000UL", "1024", name=None) * const("11") * const("2", line=8),
    "a fact that is another one already": scaled("5000UL", "1024", name=None) * const("22"),
    "samples divided by too few": (raw("uint32_t") + raw("uint32_t") + raw("uint32_t"))
    / const("2")
    * const("5000UL")
    * const("11")
    / const("1024"),
    "a missing pair of parentheses": raw().cast("float")
    * const("5.0f")
    / const("1024.0f")
    * const("100e3f", "R_TOP")
    + const("10e3f", "R_LO") / const("10e3f", "R_LO"),
}


@pytest.mark.parametrize("code", UNEXPLAINED.values(), ids=UNEXPLAINED.keys())
def test_a_constant_that_is_a_fact_is_not_blamed(code: Operand) -> None:
    """A count, a reference or a resistance that is the board's stands, whatever else is wrong."""
    explanation = explain(question(DIVIDED, code, MILLI))
    board = {"5000UL", "5.0f", "1024", "1024.0f", "11", "100e3f", "10e3f"}
    assert not board & {wrong.leaf.text for wrong in explanation.wrong if wrong.leaf}
    assert all(wrong.leaf for wrong in explanation.wrong)


def test_nameless_constant_alone_is_no_resistance() -> None:
    """A divisor of samples is no resistor of 8 kohm, unless its neighbour is one."""
    code = of_ten("8") * const("5000UL") * const("11") / const("1024", line=8)
    rules = {wrong.rule for wrong in explain(question(DIVIDED, code, MILLI)).wrong}
    assert "divider-ratio" not in rules
