"""Facts that every practitioner knows (common practice: no document is needed for them)."""

import json
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from bitweight.board.chains import SignalChain, ideal, quantity_line
from bitweight.board.hardware import Channel
from bitweight.board.parts import Part
from bitweight.quantities import parse_quantity
from bitweight.report.records import json_report
from board.parts import channel
from outside.published import Firmware, run
from outside.published import Part as Published


def made(converter: str, reference: str, stages: str = "", more: str = "") -> Channel:
    """A channel with this converter at this reference."""
    return channel(
        stages,
        converter=converter,
        channel=more,
        supplies=f'[reference.vref]\nvoltage = "{reference}"\n',
    )


@pytest.mark.parametrize(
    ("bits", "reference", "step"),
    [
        (8, "5.12 V", "0.020"),
        (10, "5.12 V", "0.005"),
        (10, "2.56 V", "0.0025"),
        (12, "4.096 V", "0.001"),
    ],
)
def test_round_references_give_round_steps(bits: int, reference: str, step: str) -> None:
    """References are chosen so that a step is a round number (common practice)."""
    assert ideal(made(f"bits = {bits}", reference)).lsb == Fraction(step)


def test_the_top_code_is_one_step_below_the_reference() -> None:
    """8 bits at 5.12 V: code 255 is 5.100 V (common practice)."""
    line = ideal(made("bits = 8", "5.12 V"))
    assert line.at(255) == Fraction("5.1") == Fraction("5.12") - line.lsb


@pytest.mark.parametrize("bits", [8, 10, 12, 16, 24])
def test_each_bit_weighs_half_of_the_one_above(bits: int) -> None:
    """The most significant bit weighs half of full scale, each next one half of that."""
    line = ideal(made(f"bits = {bits}", "5 V"))
    weights = [line.at(1 << bit) - line.at(0) for bit in reversed(range(bits))]
    assert weights == [Fraction(5, 2 << place) for place in range(bits)]
    assert sum(weights) == line.at((1 << bits) - 1)


def test_half_of_the_codes_is_half_of_the_reference() -> None:
    """128 of 256 is half of the reference (common practice)."""
    assert ideal(made("bits = 8", "5 V")).at(128) == Fraction("2.5")


def test_a_pin_that_takes_half_the_reference_doubles_the_span() -> None:
    """2.56 V at such a pin is 5.12 V full scale, 20 mV a step (common practice)."""
    converter = made("bits = 8\nreference_gain = 2", "2.56 V").converter
    assert (converter.span, converter.lsb) == (Fraction("5.12"), Fraction("0.02"))


def _raised(part: Part) -> Fraction:
    """A part's value, the supply five percent above its nominal."""
    return part.quantity.value * (Fraction(105, 100) if part.key == "supply v5" else 1)


ON_ITS_SUPPLY = '[supply.v5]\nvoltage = "5 V"\n[reference.ratio]\nsupply = "v5"\n'
RATIO = 'bits = 10\nreference = "ratio"'


def test_measuring_against_the_supply_follows_the_supply() -> None:
    """A supply 5 % high lowers the reading of a fixed voltage by 4.8 % (common practice)."""
    fixed = channel(converter=RATIO, supplies=ON_ITS_SUPPLY)
    code = Fraction(2) / quantity_line(fixed, _raised).gain
    error = ideal(fixed).at(code) / 2 - 1
    assert round(float(error) * 100, 1) == -4.8


def test_a_ratiometric_sensor_on_the_same_supply_cancels_it() -> None:
    """Sensor and converter on one supply: its error does not reach the reading."""
    sensor = channel(
        "{kind='linear', sensitivity='100 mV/A', offset='v5 / 2', ratiometric='v5'}",
        converter=RATIO,
        supplies=ON_ITS_SUPPLY,
    )
    assert quantity_line(sensor, _raised) == quantity_line(sensor)


def test_a_current_through_a_resistor_makes_a_reference() -> None:
    """100 uA in 25.6 k is 2.56 V, a full scale of 256 steps of 10 mV (common practice)."""
    through = made("bits = 8", "2.56 V", "{kind='shunt', resistance='25.6k'}")
    assert SignalChain(through.chain).forward(parse_quantity("100 uA").value) == Fraction("2.56")
    assert ideal(through).code_of(Fraction("100e-6")) == 256


def test_the_minus_input_on_ground_uses_the_positive_half() -> None:
    """A differential converter works single-ended, on the positive half of its codes."""
    single = made(
        "bits = 12\ncoding = 'twos-complement'", "2.048 V", more="range = ['0 V', '2.048 V']"
    )
    assert ideal(single).code_bounds == (0, 2047)


def _words(converter: str, codes: list[int]) -> list[int]:
    """The raw words for these codes."""
    return made(converter, "5 V").converter.words(np.array(codes)).tolist()


@pytest.mark.parametrize("bits", [8, 10, 12])
def test_active_low_outputs_give_the_ones_complement(bits: int) -> None:
    """The word is 2**N - 1 - code: not the negation (common practice)."""
    codes = [0, 1, (1 << bits) - 1]
    words = _words(f"bits = {bits}\ncoding = 'complementary'", codes)
    assert words == [(1 << bits) - 1 - code for code in codes]
    assert words != [-code % (1 << bits) for code in codes]


def test_offset_binary_is_twos_complement_with_its_top_bit_inverted() -> None:
    """12 bits, 0x800 is zero (common practice)."""
    codes = [-2048, -1, 0, 1, 2047]
    offset = _words("bits = 12\ncoding = 'offset-binary'", codes)
    twos = _words("bits = 12\ncoding = 'twos-complement'\nword_bits = 12", codes)
    assert offset == [word ^ 0x800 for word in twos]
    assert offset[2] == 0x800


@pytest.mark.parametrize("bits", [8, 10, 12, 14])
def test_a_left_justified_word_is_shifted_right_by_what_is_left_over(bits: int) -> None:
    """N bits in 16: shift right by 16 - N (common practice)."""
    codes = [0, 1, 1 << (bits - 1), (1 << bits) - 1]
    words = _words(f"bits = {bits}\njustified = 'left'", codes)
    assert [word >> (16 - bits) for word in words] == codes


def test_the_high_byte_alone_is_a_converter_of_eight_bits() -> None:
    """The upper byte of a left-justified result has the same span in 256 steps."""
    whole, high = ideal(made("bits = 10", "5 V")), ideal(made("bits = 8", "5 V"))
    words = _words("bits = 10\njustified = 'left'", list(range(1024)))
    for code, word in enumerate(words):
        below = whole.at(code) - high.at(word >> 8)
        assert 0 <= below < high.lsb


def test_a_truncating_code_covers_the_step_above_it_a_rounding_one_half_to_each_side() -> None:
    """[k, k+1) LSB has its middle at k + 1/2, [k-1/2, k+1/2) at k (common practice)."""
    truncating = ideal(made("bits = 12\nfirst_transition = '1 LSB'", "4.096 V"))
    rounding = ideal(made("bits = 12", "4.096 V"))
    assert truncating.at(100) == Fraction("0.1005")
    assert rounding.at(100) == Fraction("0.1")


@pytest.mark.parametrize("power", [1, 2, 4, 6])
def test_a_sum_has_as_many_full_scales_and_its_average_one(power: int) -> None:
    """n samples of N bits: n * 2**N in the sum, 2**N again after >> log2 n."""
    samples = 1 << power
    total = made(f"bits = 12\noversampling = {{ samples = {samples} }}", "5 V").converter
    mean = made(
        f"bits = 12\noversampling = {{ samples = {samples}, shift = {power} }}", "5 V"
    ).converter
    assert (total.full_scale, mean.full_scale) == (samples * 4096, 4096)
    assert (total.code_high, mean.code_high) == (samples * 4095, 4095)


PERCENT = Firmware(
    part=Published(source="common practice", converter="bits = 8", reference="5.12 V"),
    code=(
        "unsigned char read8(void);\nlong result;\n"
        "void update(void) { result = read8() * 5120L * 100 / 256; }\n"
    ),
    slip=("256", "255"),
    reading="read8()",
    count="10 uV",
    rules=("full-scale",),
)


def test_percent_of_the_span_is_the_error_against_the_width_of_the_range(tmp_path: Path) -> None:
    """255 for 256 reads one step high at the top: 100/255 % of the span (common practice)."""
    outcome = run(tmp_path, PERCENT.board, PERCENT.mistaken)
    (reported,) = json.loads(json_report(outcome))["channels"]
    worst = reported["worst_error"]
    assert worst["at_count"] == 255
    assert worst["value"] == pytest.approx(0.020)
    assert worst["percent_of_span"] == pytest.approx(100 * (5.12 - 5.1) / 5.1)
