"""Repairs in words: what was found, what is expected, what to write instead, how much it matters.

A question and the repairs that explain its line enter; `WrongConstant`s leave.
"""

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction

from bitweight.arithmetic.expressions import Code, Expression, Leaf, walk
from bitweight.arithmetic.literals import exact_value
from bitweight.board.facts import Role
from bitweight.judge.effects import Bench, Correction, Effect, effects, mends
from bitweight.judge.explanations import WrongConstant
from bitweight.judge.findings import Level
from bitweight.judge.knobs import Knob
from bitweight.judge.questions import Question
from bitweight.judge.repairs import Repair
from bitweight.judge.spellings import plain, replacement, shown, spelled
from bitweight.places import Place

_NO_EFFECT = Effect(level=Level.NOTE, points=())
_BARE_ROLES = {
    "resolution": "bits",
    "justification": "bits below the code in its word",
    "unit-prefix": "power of ten",
    "transfer-gain": "gain",
    "transfer-offset": "offset",
}
"""What a constant that stands for no board fact is, by the rule that reports it."""


def wrong_constants(
    question: Question, at: Bench, repairs: Sequence[Repair]
) -> tuple[WrongConstant, ...]:
    """The wrong constants of a solution, each with the level of its own effect."""
    corrections = tuple(_correction(question, repair) for repair in repairs)
    found = effects(at, corrections)
    offered = mends(at, corrections)
    return tuple(
        _worded(question, repair, effect, offered=offered)
        for repair, effect in zip(repairs, found, strict=True)
    )


def cancelling_constants(
    question: Question, repairs: Sequence[Repair]
) -> tuple[WrongConstant, ...]:
    """Constants that contradict the board together without any effect."""
    return tuple(_worded(question, repair, _NO_EFFECT, offered=False) for repair in repairs)


def _correction(question: Question, repair: Repair) -> Correction:
    """What mends the cause: a constant with the value that it is then written as."""
    if repair.knob is not None:
        return Correction(key=repair.knob.key, value=_written(repair.knob, repair.exact))
    if repair.rule == "justification":
        return Correction(shift=question.shift)
    return Correction(factor=repair.exact)


def _written(knob: Knob, exact: Fraction) -> Fraction:
    """The exact value as the constant's own form can say it."""
    text = spelled(knob.leaf.text, exact)
    value = None if text is None else exact_value(text)
    return exact if value is None else value


def _worded(question: Question, repair: Repair, effect: Effect, *, offered: bool) -> WrongConstant:
    if repair.knob is None:
        return _without_constant(question, repair, effect)
    knob = repair.knob
    leaf, text = _edit(question, knob, repair.exact)
    unit = _unit(repair)
    expected = spelled(knob.leaf.text, repair.exact) or shown(repair.exact)
    return WrongConstant(
        rule=repair.rule,
        role=repair.meaning.term.name if repair.meaning else _BARE_ROLES[repair.rule],
        text=_named(knob),
        place=leaf.place,
        leaf=leaf,
        found=_with_unit(plain(knob.leaf.text), "" if repair.rule == "unit-prefix" else unit),
        expected=_with_unit(plain(expected), unit),
        value=_written(knob, repair.exact),
        replacement=text if offered else None,
        level=effect.level,
        effect=effect.points,
        remark=_remark(question, repair),
    )


def _named(knob: Knob) -> str:
    names = [name for name in (knob.leaf.name, *knob.leaf.names) if name]
    if knob.inside and names:
        return f"the count {shown(knob.value)} made from {names[0]}"
    return names[0] if names else plain(knob.leaf.text)


def _with_unit(text: str, unit: str) -> str:
    return f"{text} {unit}".strip()


def _unit(repair: Repair) -> str:
    if repair.meaning is not None:
        return repair.meaning.unit
    return "bits" if repair.rule == "resolution" else ""


def _remark(question: Question, repair: Repair) -> str:
    counts = repair.meaning is not None and repair.meaning.term.role is Role.FULL_SCALE
    if counts and repair.rule == "full-scale" and not question.count_stated:
        exponent = question.bits - question.coding.signed
        return f"the board file states no full_scale_count, so 2**{exponent} is assumed"
    return ""


def _edit(question: Question, knob: Knob, exact: Fraction) -> tuple[Leaf, str | None]:
    """The constant to edit and its new text: of a count less one, the one becomes nothing."""
    if not knob.inside:
        return knob.leaf, replacement(knob.leaf.text, exact, question.model)
    last = knob.inside[-1]
    less_one = last.name is None and exact_value(last.text) == 1 and knob.value + 1 == exact
    if len(knob.inside) > 1 and less_one:
        return last, replacement(last.text, Fraction(0), question.model)
    return next(leaf for leaf in knob.inside if leaf.place == knob.leaf.place), None


def _without_constant(question: Question, repair: Repair, effect: Effect) -> WrongConstant:
    conversion = question.conversion
    shared = WrongConstant(
        rule=repair.rule,
        role=_BARE_ROLES[repair.rule],
        text="the result",
        place=conversion.place,
        leaf=None,
        found="",
        expected="",
        level=effect.level,
        effect=effect.points,
    )
    if repair.rule == "justification":
        return replace(
            shared,
            text="the reading",
            place=_reading_place(conversion.expression) or conversion.place,
            found="a right-justified code",
            expected=f"a code {question.shift} bits up in its word",
        )
    scale = question.scale if question.scale is not None else Fraction(1)
    return replace(
        shared,
        found=f"one count stands for {_with_unit(shown(scale * repair.exact), question.unit)}",
        expected=_with_unit(shown(scale), question.unit),
    )


def _reading_place(expression: Expression) -> Place | None:
    """Where the reading stands in the code."""
    return next((node.place for node in walk(expression) if isinstance(node, Code)), None)
