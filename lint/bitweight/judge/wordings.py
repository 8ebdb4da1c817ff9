"""Repairs in words: what was found, what is expected, what to write instead, how much it matters.

A question and the repairs that explain its line enter; `WrongConstant`s leave.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from bitweight.arithmetic.expressions import Binary, Code, Expression, Leaf, Literal, walk
from bitweight.arithmetic.literals import exact_value
from bitweight.board.facts import Role
from bitweight.judge.effects import Bench, Correction, Effect, effects, mends
from bitweight.judge.explanations import WrongConstant
from bitweight.judge.findings import Level
from bitweight.judge.knobs import Key, Knob, bare, leaf_key
from bitweight.judge.meanings import Meaning
from bitweight.judge.questions import Question
from bitweight.judge.repairs import Repair
from bitweight.judge.spellings import is_coarse, plain, replacement, shown, spelled
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


_VERBS = {"*": "multiplies by", "/": "divides by", "+": "adds", "-": "subtracts"}
_SHIFTS = ("<<", ">>")
"""What the code does with a constant that has no name, by its operator."""


def wrong_constants(
    question: Question, at: Bench, repairs: Sequence[Repair]
) -> tuple[WrongConstant, ...]:
    """The wrong constants of a solution, each with the level of its own effect."""
    corrections = tuple(_correction(question, at, repair) for repair in repairs)
    found = effects(at, corrections)
    offered = mends(at, corrections)
    return tuple(
        _worded(question, repair, effect, offered=offered, holds=correction.holds)
        for repair, effect, correction in zip(repairs, found, corrections, strict=True)
    )


def cancelling_constants(
    question: Question, repairs: Sequence[Repair]
) -> tuple[WrongConstant, ...]:
    """Constants that contradict the board together without any effect."""
    return tuple(
        _worded(question, repair, _NO_EFFECT, offered=False, holds=True) for repair in repairs
    )


def _correction(question: Question, at: Bench, repair: Repair) -> Correction:
    """What mends the cause: a constant with the value that it is then written as."""
    if repair.knob is not None:
        value = _written(repair.knob, repair.exact)
        coarse = is_coarse(value, repair.exact, at.finest)
        return Correction(key=repair.knob.key, value=value, holds=not coarse)
    if repair.rule == "justification":
        return Correction(shift=question.shift)
    return Correction(factor=repair.exact)


def _written(knob: Knob, exact: Fraction) -> Fraction:
    """The exact value as the constant's own form can say it."""
    text = spelled(knob.leaf.text, exact)
    value = None if text is None else exact_value(text)
    return exact if value is None else value


def _worded(
    question: Question, repair: Repair, effect: Effect, *, offered: bool, holds: bool
) -> WrongConstant:
    if repair.knob is None:
        return _without_constant(question, repair, effect)
    knob = repair.knob
    leaf, text = _edit(question, knob, repair.exact)
    exact = shown(repair.exact)
    expected = (spelled(knob.leaf.text, repair.exact) or exact) if holds else exact
    role = repair.meaning.term.name if repair.meaning else _BARE_ROLES[repair.rule]
    new = _Said(text=plain(expected), meaning=repair.meaning, rule=repair.rule)
    prefixed = repair.rule == "unit-prefix"
    old = replace(new, text=plain(knob.leaf.text), meaning=None if prefixed else repair.meaning)
    return WrongConstant(
        rule=repair.rule,
        role=role,
        text=_named(knob),
        place=leaf.place,
        leaf=leaf,
        found=old.shown,
        expected=new.shown,
        value=_written(knob, repair.exact),
        replacement=text if offered and holds else None,
        level=effect.level,
        effect=effect.points,
        remark=_remark(question, repair) if holds else "",
        held=_held(question.conversion.expression, knob, old),
        wanted=f"{_wanted(role, new)}{'' if holds else ', which no whole number can hold'}",
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Said:
    """A number as the code writes it, and what it means where that is another number."""

    text: str
    meaning: Meaning | None
    rule: str

    @property
    def stands_for(self) -> str:
        """The number without the scaling that no everyday unit says, in the board file's unit."""
        value = exact_value(self.text)
        if value is None or self.meaning is None or self.meaning.is_everyday:
            return ""
        return self.meaning.in_words(value)

    @property
    def shown(self) -> str:
        """As the code writes it, then its unit or what it stands for."""
        if self.stands_for:
            return f"{self.text} ({self.stands_for})"
        if self.meaning is not None:
            return f"{self.text} {self.meaning.unit}".strip()
        return f"{self.text} bits" if self.rule == "resolution" else self.text


def _names(knob: Knob) -> list[str]:
    return [name for name in (knob.leaf.name, *knob.leaf.names) if name]


def _named(knob: Knob) -> str:
    names = _names(knob)
    if knob.inside and names:
        return f"the count {shown(knob.value)} made from {names[0]}"
    return names[0] if names else f"the constant {plain(knob.leaf.text)}"


def _held(expression: Expression, knob: Knob, said: _Said) -> str:
    """What the code has: a name and its value, or what is done with a nameless constant."""
    names = _names(knob)
    if knob.inside and names:
        return f"{names[0]} makes {shown(knob.value)}"
    if names:
        return f"{names[0]} is {said.shown}"
    operator = _operator(expression, knob.key)
    if operator in _SHIFTS:
        return f"the code shifts by {said.shown}"
    return f"the code {_VERBS.get(operator, 'has')} {said.shown}"


def _operator(expression: Expression, key: Key) -> str:
    """The operator whose operand the constant is; the right one goes before the left one."""
    found = ""
    for node in walk(expression):
        if not isinstance(node, Binary):
            continue
        if _is(node.right, key):
            return node.operator
        if _is(node.left, key) and node.operator in "*+":
            found = found or node.operator
    return found


def _is(node: Expression, key: Key) -> bool:
    inner = bare(node)
    return isinstance(inner, Literal) and inner.leaf is not None and leaf_key(inner.leaf) == key


def _wanted(role: str, said: _Said) -> str:
    """What the board has in the constant's place."""
    inverted = role.removeprefix("inverse of ").removeprefix("inverse ")
    if inverted != role:
        return f"the board's {inverted} needs {said.shown}"
    if said.stands_for:
        return f"the board's {role} is {said.stands_for}: {said.text} here"
    return f"the board's {role} is {said.shown}"


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
    stands_for = f"{shown(scale * repair.exact)} {question.unit}".strip()
    return replace(
        shared,
        held=f"one count of the result stands for {stands_for}",
        found=f"one count stands for {stands_for}",
        expected=f"{shown(scale)} {question.unit}".strip(),
    )


def _reading_place(expression: Expression) -> Place | None:
    """Where the reading stands in the code."""
    return next((node.place for node in walk(expression) if isinstance(node, Code)), None)
