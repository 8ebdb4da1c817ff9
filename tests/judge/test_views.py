"""The ways to read a question."""

from fractions import Fraction

from bitweight.judge.views import smallest_answer, views
from operands import Board, const, question, raw

CODE = raw() * const("5000UL", "VREF_MV") / const("1023")


def test_a_stated_unit_and_one_count_make_one_plain_view() -> None:
    """The plain reading is the first, in the stated unit."""
    first, *_ = views(question(Board(), CODE))
    assert first.scale == Fraction(1, 1000)
    assert first.given == ()


def test_every_accepted_count_is_a_view() -> None:
    """Each accepted full-scale count is tried, the preferred first."""
    counts = [view.board.count for view in views(question(Board(counts=(1024, 1023)), CODE))]
    assert counts == [1024, 1023]


def test_an_inferred_unit_tries_the_decades_around() -> None:
    """Without a unit the nearest decade comes first, then both its neighbours."""
    decades = [view.decade for view in views(question(Board(), CODE, None))]
    assert decades == [-3, -2, -4]


def test_a_left_justified_word_may_have_been_read_as_right_justified() -> None:
    """A view takes the missing shift for granted as one fault."""
    given = [view.given for view in views(question(Board(shift=6), CODE)) if view.given]
    assert "justification" in [repairs[0].rule for repairs in given]


def test_a_result_in_another_prefix_is_a_view() -> None:
    """A result a thousand times too large may be in another prefix."""
    given = [view.given for view in views(question(Board(), CODE, Fraction(1))) if view.given]
    assert [(one.rule, one.exact) for (one,) in given] == [("unit-prefix", Fraction(1, 1000))]


def test_computed_counts_are_also_read_in_one_piece() -> None:
    """A count made by a shift is looked at as one number too."""
    count = const("1", line=7) << const("10", "ADC_BITS")
    code = raw() * const("5000UL") / count
    assert len(list(views(question(Board(), code)))) == 2


def test_no_line_no_view() -> None:
    """Code that is no straight line cannot be read this way."""
    assert not list(views(question(Board(), raw() * raw())))
    assert smallest_answer(()) is None


def test_a_mask_that_drops_bits_is_widened_as_one_fault() -> None:
    """A view takes the whole mask for granted; a mask that keeps all bits gives none."""
    for mask, given in (("0xFF", [Fraction(1023)]), ("0x3FF", []), ("0xFFFF", [])):
        code = (raw() & const(mask)) * const("5000UL") / const("1024")
        found = [view.given for view in views(question(Board(), code)) if view.given]
        assert [one.exact for repairs in found for one in repairs] == given


def test_a_shift_of_a_quantity_is_also_a_divisor() -> None:
    """A product shifted right is read as divided by a count; a shift of the bare word is not."""
    product = (raw() * const("5000UL")) >> const("10")
    (plain, divided) = views(question(Board(), product))
    assert [knob.value for knob in plain.search.knobs] == [5000, 10]
    assert [knob.value for knob in divided.search.knobs] == [5000, 1024]
    word = (raw() >> const("2")) * const("5000UL") / const("256")
    assert len(list(views(question(Board(), word)))) == 1


def test_a_power_of_ten_goes_with_no_other_correction() -> None:
    """A free power of ten beside a wrong constant would fit too much by chance."""
    code = raw() * const("4900UL", "VREF_MV") / const("1024")
    answer = smallest_answer(tuple(views(question(Board(), code, Fraction(1)))))
    assert answer is None or len(answer.repairs) != 2
