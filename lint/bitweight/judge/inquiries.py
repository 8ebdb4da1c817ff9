"""What the search for wrong constants is asked, and the board's line that its answer accepts."""

from dataclasses import replace
from fractions import Fraction

from bitweight.board.chains import Ideal
from bitweight.board.facts import chain_facts
from bitweight.board.hardware import Board
from bitweight.judge.allowances import allowance
from bitweight.judge.evaluations import Evaluation, Frame
from bitweight.judge.questions import BoardLine, Question, StatedRole
from bitweight.judge.units import ResultUnit


def question(frame: Frame, unit: ResultUnit, computed: Evaluation) -> Question:
    """What the search for wrong constants is asked about a conversion."""
    channel = frame.side.channel
    converter = channel.converter
    allowed = allowance(frame.side, computed.codes, frame.board.coverage)
    return Question(
        conversion=frame.conversion,
        model=frame.model,
        lines=board_lines(frame.side),
        facts=chain_facts(channel),
        scale=unit.scale,
        zero=unit.zero,
        unit=channel.unit.text,
        codes=computed.codes,
        words=computed.words,
        in_range=computed.in_range,
        quantity=allowed.quantity,
        allowed=allowed.at_step,
        lsb=allowed.lsb,
        bits=converter.width,
        coding=converter.coding,
        shift=converter.shift,
        word_bits=converter.word_bits,
        count_stated=converter.full_scale_stated or converter.family is not None,
        word_stated=converter.justified_stated or converter.word_bits_stated,
        stated=stated_roles(frame.board),
        others=frame.others,
        summed=channel.firmware.reading_gain != 1,
    )


def board_lines(side: Ideal) -> tuple[BoardLine, ...]:
    """The ideal line once for each full-scale count that the board file accepts."""
    converter = side.channel.converter
    return tuple(_line(side, count) for count in converter.accepted_full_scales)


def _line(side: Ideal, count: Fraction) -> BoardLine:
    """A larger full-scale count makes every count worth less; the chain's own offset stays."""
    converter = side.channel.converter
    gain = side.gain * converter.full_scale / count
    chain = side.offset - side.gain * converter.code_shift
    return BoardLine(count=count, gain=gain, offset=chain + gain * converter.code_shift)


def accepted_line(side: Ideal, count: Fraction | None) -> Ideal:
    """The ideal line under the full-scale count by which the firmware is right."""
    if count is None or count not in side.channel.converter.accepted_full_scales:
        return side
    line = _line(side, count)
    return replace(side, gain=line.gain, offset=line.offset)


def stated_roles(board: Board) -> tuple[StatedRole, ...]:
    """What the board file's [constants] say that constants stand for."""
    return tuple(
        StatedRole(
            name=fact.expression,
            role=fact.role,
            subject=fact.name,
            unit=None if fact.unit is None else fact.unit.scale,
        )
        for fact in board.constants
        if fact.role is not None and fact.role != "code"
    )
