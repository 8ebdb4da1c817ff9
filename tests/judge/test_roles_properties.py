"""Right conversions of any magnitude are silent; one broken constant is found, and it alone."""

from fractions import Fraction

from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from bitweight.board.facts import Role
from bitweight.judge.roles import explain
from operands import Board, Operand, const, fact, number, question, raw

QUIET = settings(max_examples=30, deadline=None, suppress_health_check=[HealthCheck.too_slow])
MILLI = Fraction(1, 1000)

millivolts = st.sampled_from([1100, 1250, 2048, 2500, 2560, 3000, 3300, 4096, 5000, 5120])
bits = st.sampled_from([8, 10, 12, 14, 16])
ratios = st.sampled_from([2, 3, 4, 6, 7, 11, 21, 101])
styles = st.sampled_from(["divide last", "divide first", "float", "shift"])


def board(width: int, reference: int, ratio: int) -> Board:
    """A converter behind a divider."""
    return Board(
        bits=width,
        counts=(1 << width,),
        volts=f"{reference} mV",
        per_volt=Fraction(ratio),
        more=(
            number(Role.DIVIDER, "divider", Fraction(1, ratio), "divider-ratio"),
            number(Role.INVERSE_DIVIDER, "inverse divider", ratio, "divider-ratio"),
        ),
    )


def conversion(style: str, width: int, count: int, reference: int, ratio: int) -> Operand:
    """Millivolts before the divider, in one of several styles."""
    factor = const(str(ratio), "DIVIDER")
    if style == "float":
        volts = const(f"{reference}.0", "VREF_MV")
        return raw().cast("double") * volts / const(f"{count}.0") * factor
    product = raw().cast("int64_t") * const(str(reference), "VREF_MV")
    if style == "shift":
        return (product * factor) >> const(str(width), "ADC_BITS")
    if style == "divide first":
        return product / const(str(count)) * factor
    return product * factor / const(str(count))


@QUIET
@given(bits, millivolts, ratios, styles)
def test_right_conversions_are_silent(width: int, reference: int, ratio: int, style: str) -> None:
    """No constant of a right conversion is named, whatever the magnitude and style."""
    code = conversion(style, width, 1 << width, reference, ratio)
    explanation = explain(question(board(width, reference, ratio), code, MILLI))
    assert not explanation.wrong
    assert explanation.residual is None


@QUIET
@given(bits, millivolts, ratios, st.sampled_from(["divide last", "divide first", "float"]))
def test_a_count_less_one_is_full_scale(width: int, reference: int, ratio: int, style: str) -> None:
    """2**N - 1 for 2**N is found as full-scale, and nothing else."""
    code = conversion(style, width, (1 << width) - 1, reference, ratio)
    wrong = explain(question(board(width, reference, ratio), code, MILLI)).wrong
    assert [one.rule for one in wrong] == ["full-scale"]
    assert wrong[0].value == 1 << width


@QUIET
@given(bits, millivolts, millivolts, ratios, styles)
def test_another_reference_is_found(
    width: int, reference: int, written: int, ratio: int, style: str
) -> None:
    """A reference voltage that is not the board's is found, and nothing else."""
    assume(written != reference)
    code = conversion(style, width, 1 << width, written, ratio)
    wrong = explain(question(board(width, reference, ratio), code, MILLI)).wrong
    assert [(one.rule, one.text) for one in wrong] == [("reference-value", "VREF_MV")]
    assert wrong[0].value == reference


@QUIET
@given(bits, millivolts, ratios, ratios, styles)
def test_another_divider_is_found(
    width: int, reference: int, ratio: int, written: int, style: str
) -> None:
    """A divider ratio that is not the board's is found, and nothing else."""
    assume(written != ratio)
    code = conversion(style, width, 1 << width, reference, written)
    wrong = explain(question(board(width, reference, ratio), code, MILLI)).wrong
    assert [(one.rule, one.text) for one in wrong] == [("divider-ratio", "DIVIDER")]
    assert wrong[0].value == ratio


@QUIET
@given(bits, bits, millivolts, ratios, styles)
def test_other_bits_are_found(
    width: int, written: int, reference: int, ratio: int, style: str
) -> None:
    """A conversion for a converter of other bits is found as resolution, and nothing else."""
    assume(written != width)
    code = conversion(style, written, 1 << written, reference, ratio)
    wrong = explain(question(board(width, reference, ratio), code, MILLI)).wrong
    assert [one.rule for one in wrong] == ["resolution"]


@QUIET
@given(st.integers(1, 400), st.sampled_from(["5 V", "3.3 V", "2.048 V"]))
def test_a_hand_folded_constant_is_silent(per_volt: int, volts: str) -> None:
    """A gain per count, rounded to four digits by hand, is never blamed on a constant."""
    plain = Board(bits=12, counts=(4096,), volts=volts, per_volt=Fraction(per_volt))
    exact = plain.line(4096).gain
    text = f"{float(exact):.4g}"
    assume("e" not in text and "." in text)
    code = raw().cast("double") * const(text)
    assert not explain(question(plain, code, Fraction(1))).wrong


@QUIET
@given(st.sampled_from([10, 12]), st.integers(1, 300))
def test_a_q16_constant_is_silent(width: int, per_volt: int) -> None:
    """A gain per count in Q16, rounded down, is never blamed on a constant."""
    plain = Board(bits=width, counts=(1 << width,), volts="3.3 V", per_volt=Fraction(per_volt))
    scaled = plain.line(1 << width).gain * 1000 * 65536
    code = (raw().cast("int64_t") * const(str(int(scaled)))) >> const("16")
    assert not explain(question(plain, code, MILLI)).wrong


def test_the_facts_are_what_the_board_has() -> None:
    """The builder's reference fact is in volts, so that the properties mean what they say."""
    assert fact(Role.REFERENCE, "reference vref", "2500 mV", "reference-value").value == 2.5
