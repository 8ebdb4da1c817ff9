"""What tracing is asked for, from the board: readings, results, stated values, limits."""

from fractions import Fraction

from bitweight.arithmetic.types import CType, DataModel
from bitweight.board.chains import ideal, in_unit, not_computed
from bitweight.board.hardware import Board, Channel, ConstantFact
from bitweight.trace.contexts import Given, Reading
from bitweight.trace.patterns import Pattern, pattern
from bitweight.trace.thresholds import LimitAim
from bitweight.trace.tracing import Aim

_WORDS = (8, 16, 32, 64)


def aim(channel: Channel, model: DataModel) -> Aim:
    """What is to be traced for one channel."""
    firmware = channel.firmware
    return Aim(
        channel=channel.name,
        readings=tuple(
            Reading(
                pattern=pattern(text, firmware.reading_place),
                channels=(channel.name,),
                type=_word_type(channel, model),
            )
            for text in channel.reading
        ),
        values=tuple(pattern(text, firmware.value_place) for text in channel.value),
        place=channel.place,
    )


def _word_type(channel: Channel, model: DataModel) -> CType:
    """The type of a raw word that no declaration in the sources gives."""
    converter = channel.converter
    needed = max(converter.word_bits, converter.width + converter.shift)
    bits = next((one for one in _WORDS if one >= needed), _WORDS[-1])
    return model.integer(bits, converter.coding.signed and converter.word_bits_stated is False)


def givens(board: Board) -> tuple[Given, ...]:
    """The C expressions whose value the board file states."""
    found = []
    for fact in board.constants:
        value = _value(fact, board)
        if value is not None:
            found.append(Given(pattern=_pattern(fact), value=value))
    return tuple(found)


def _pattern(fact: ConstantFact) -> Pattern:
    return Pattern(text=fact.expression, where=fact.where, place=fact.place)


def _value(fact: ConstantFact, board: Board) -> int | float | None:
    if fact.value is not None:
        return _number(fact.value)
    if fact.role != "code":
        return None
    channel = next((one for one in board.channels if one.name == fact.name), None)
    if channel is None or fact.at is None or not_computed(channel) is not None:
        return None
    return round(ideal(channel).code_of(in_unit(fact.at, channel)))


def _number(value: Fraction) -> int | float:
    return int(value) if value.denominator == 1 else float(value)


def limit_aims(channel: Channel) -> tuple[LimitAim, ...]:
    """The limit constants of one channel."""
    return tuple(
        LimitAim(
            channel=channel.name,
            name=one.name,
            pattern=pattern(one.constant, one.constant_place),
        )
        for one in channel.limits
    )
