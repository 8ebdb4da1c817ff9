"""Channels: copies, units, limits, firmware."""

from fractions import Fraction

from bitweight.board.decoding.boards import board_from_text
from bitweight.board.hardware import LimitMeasure
from board.mistaken import BOARD, mistakes_of
from board.parts import channel
from board.samples import HATCHERY


def test_a_copied_channel_replaces_only_what_it_gives() -> None:
    """`like` copies every key; given ones stand in their place."""
    board = board_from_text(HATCHERY, file="b")
    motor, copy = board.channels[2], board.channels[3]
    assert copy.chain == motor.chain
    assert copy.range == motor.range
    assert (copy.input, motor.input, copy.like) == (5, None, "motor")
    assert copy.reading == ("adc_motor_b",)


def test_copies_of_copies_work() -> None:
    """A channel may copy a copy; keys of the nearest count."""
    board = board_from_text(
        BOARD + "unit = 'V'\ninput = 1\nhazard = 'x'\n"
        "[channel.b]\nlike = 'tank'\ninput = 2\n[channel.c]\nlike = 'b'\npin = 'P'\n",
        file="b",
    )
    last = board.channels[2]
    assert (last.input, last.hazard, last.pin) == (2, "x", "P")


def test_a_circle_of_copies_is_a_mistake_of_each() -> None:
    """Channels that copy each other are named, and nothing hangs."""
    mistakes = mistakes_of(BOARD + "like = 'b'\n[channel.b]\nlike = 'tank'\n")
    assert [mistake.place.line for mistake in mistakes] == [6, 8]
    assert all("copies itself" in mistake.message for mistake in mistakes)


def test_endless_copying_is_refused() -> None:
    """A chain of copies longer than anybody writes is a mistake, and costs little."""
    names = "".join(f"[channel.c{n}]\nlike = 'c{n + 1}'\n" for n in range(40))
    mistakes = mistakes_of(BOARD + names + "[channel.c40]\n")
    assert {mistake.message for mistake in mistakes} == {
        "like: copied through more than 16 channels"
    }


def test_a_mistake_in_a_copied_channel_is_said_once() -> None:
    """Copies do not multiply the mistakes of what they copy."""
    mistakes = mistakes_of(BOARD + "input = -1\n[channel.b]\nlike = 'tank'\n")
    assert len(mistakes) == 1


def test_a_channel_keeps_every_key() -> None:
    """All that the file states arrives typed."""
    tank = board_from_text(HATCHERY, file="b").channels[0]
    assert (tank.input, tank.pin, tank.hazard) == (3, "PC3", "the tank runs over")
    assert tank.range is not None
    assert tank.range[1].number == 180
    assert tank.pin_limit is not None
    assert tank.pin_limit[0].text == "-0.3 V"
    assert tank.sample_rate is not None
    assert tank.sample_rate.value == 100
    assert tank.nominal is not None
    assert tank.allowed_error is not None
    assert tank.allowed_error.absolute == 1
    assert tank.firmware.unit is not None
    assert tank.firmware.unit.text == "0.1 kPa"
    assert tank.value == ("tank_kpa_x10",)


def test_a_limit_stands_for_counts_unless_it_says_value() -> None:
    """The first of the two words is the default; the constant names the limit."""
    made = channel(
        channel="limit = [{ at = '1 V', constant = 'A' },"
        " { at = '2 V', constant = 'B', in = 'value', name = 'high' }]"
    )
    first, second = made.limits
    assert (first.measure, first.name, first.bits) == (LimitMeasure.COUNTS, "A", None)
    assert (second.measure, second.name, second.bits) == (LimitMeasure.VALUE, "high", None)


def test_an_allowed_error_in_steps_is_put_in_the_channels_unit() -> None:
    """Two LSB of 2.5 V / 4096 behind a divider by two, and what is added to them."""
    made = board_from_text(
        BOARD + "unit = 'mV'\nallowed_error = '2 LSB + 1 mV'\n"
        "chain = [{ kind = 'divider', top = '1k', bottom = '1k' }]\n",
        file="b",
    ).channels[0]
    assert made.allowed_error is not None
    assert made.allowed_error.absolute == Fraction(2 * 2 * 2500, 4096) + 1


def test_a_wrong_stage_says_nothing_of_the_unit() -> None:
    """A chain that cannot be read gives no unit, so the range is not measured against one."""
    text = BOARD + "range = ['0 degC', '1 degC']\nchain = [{ kind = 'linear' }]\n"
    (mistake,) = mistakes_of(text)
    assert "missing key 'sensitivity'" in mistake.message


def test_the_only_converter_may_be_left_out_and_two_may_not() -> None:
    """Several candidates ask for a name and list them."""
    text = BOARD.replace("[channel", "[converter.b]\nbits = 8\n[channel")
    (mistake,) = mistakes_of(text)
    assert mistake.message.endswith("several are defined: adc, b")
