"""The constants of a conversion that a correction may turn, and what their names say of them.

An expression enters; its spelled constants leave, each once however often the expression uses it.
"""

import math
import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from types import MappingProxyType

from bitweight.arithmetic import wholes
from bitweight.arithmetic.expressions import (
    Binary,
    Code,
    Convert,
    Default,
    Expression,
    Leaf,
    Literal,
    walk,
)
from bitweight.arithmetic.literals import exact_value, half_digit
from bitweight.board.facts import Role
from bitweight.judge.questions import StatedRole
from bitweight.places import Place

Key = tuple[Place, str]
"""Where a constant is spelled and how, as `reals` takes it."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Knob:
    """One constant. `half` is half of its last written digit, `whole` whether it is an integer.

    `counts_bits` is true for the right operand of a shift, `on_reading` for one that shifts or
    divides the bare reading, `masks` for one of the form 2**n - 1 that keeps its lowest bits.
    `hints` are the roles that its name (or comment) speaks of, `exponent` the power of ten that its
    unit word says (3 for mV), None without one; `physical` is true where that word is a unit and no
    plain multiple. `lone` says that it is no resistance: neither its name nor another resistance
    beside it speaks for one. `inside` are the constants it is made of, where it is a computed one
    like `(1 << 12) - 1`.
    """

    key: Key
    leaf: Leaf
    value: Fraction
    half: Fraction
    whole: bool
    counts_bits: bool = False
    on_reading: bool = False
    masks: bool = False
    hints: frozenset[Role] = frozenset()
    named: bool = False
    exponent: int | None = None
    physical: bool = False
    lone: bool = False
    stated: StatedRole | None = None
    inside: tuple[Leaf, ...] = ()

    @property
    def is_round(self) -> bool:
        """Whether it is a nameless power of ten or two: a scale factor, unless shown otherwise."""
        return not self.named and (is_power(self.value, 10) or is_power(self.value, 2))

    @property
    def is_count(self) -> bool:
        """Whether it is 2**n or 2**n - 1."""
        return is_power(self.value, 2) or is_power(self.value + 1, 2)

    @property
    def is_coarse(self) -> bool:
        """Whether its rounding is so coarse that it fits some fact by chance."""
        return self.half > abs(self.value) * _COARSE

    def holds(self, exact: Fraction) -> bool:
        """Whether the constant is `exact` as well as its digits can say it."""
        distance = abs(self.value - exact)
        if self.whole and abs(self.value) >= _WIDE:
            return distance < 1
        return distance <= self.half

    def rounds(self, exact: Fraction) -> bool:
        """Whether `exact`, rounded down, up or to nearest, gives the constant."""
        return abs(self.value - exact) < (1 if self.whole else self.half * (1 + _SLACK))


_NOTHING: Mapping[Key, tuple[Leaf, ...]] = MappingProxyType({})
_COARSE = Fraction(1, 20)
_WIDE = 1000
"""From here on a whole number may be rounded down or up; below, only to nearest."""
_SLACK = Fraction(1, 10**9)


def is_power(value: Fraction, base: int) -> bool:
    """Whether the value is a power of the base, one included."""
    above, below = value.numerator, value.denominator
    if above <= 0 or (above != 1 and below != 1):
        return False
    number = max(above, below)
    while number % base == 0:
        number //= base
    return number == 1


def decades(value: Fraction) -> float:
    """The logarithm of a positive number to the base of ten, however large or small it is."""
    return math.log10(value.numerator) - math.log10(value.denominator)


def leaf_key(leaf: Leaf) -> Key:
    """What tells one spelled constant from another."""
    return (leaf.place, leaf.text)


def knobs(
    expression: Expression,
    stated: Iterable[StatedRole] = (),
    inside: Mapping[Key, tuple[Leaf, ...]] = _NOTHING,
) -> tuple[Knob, ...]:
    """Every spelled constant of the expression that may be replaced, in order of its first use.

    `inside` is what `grouped` says of the constants that it made. What only decides which way a
    choice goes, as the label of a case does, moves no line.
    """
    roles = {role.name: role for role in stated}
    shifts = _shift_counts(expression)
    touching = _on_reading(expression)
    masking = _masks(expression)
    deciding = wholes.deciding(tuple(walk(expression)))
    found: dict[Key, Knob] = {}
    for node in walk(expression):
        if not isinstance(node, Literal) or node.leaf is None:
            continue
        if id(node) in deciding:
            continue
        knob = _knob(node.leaf, node, roles)
        if knob is None:
            continue
        earlier = found.get(knob.key, knob)
        found[knob.key] = replace(
            earlier,
            counts_bits=earlier.counts_bits or id(node) in shifts,
            on_reading=earlier.on_reading or id(node) in touching,
            masks=earlier.masks or id(node) in masking,
        )
    return tuple(_group(knob, inside) for knob in found.values())


def _group(knob: Knob, inside: Mapping[Key, tuple[Leaf, ...]]) -> Knob:
    """A computed constant speaks of full scale whatever the names inside it say."""
    leaves = inside.get(knob.key)
    return knob if leaves is None else replace(knob, inside=leaves, hints=frozenset())


def _knob(leaf: Leaf, node: Literal, roles: dict[str, StatedRole]) -> Knob | None:
    value, half = exact_value(leaf.text), half_digit(leaf.text)
    if value is None or half is None:
        return None
    names = (*((leaf.name,) if leaf.name else ()), *leaf.names)
    words = [word for name in names for word in _words(name)]
    stated = next((roles[name] for name in names if name in roles), None)
    hints = _hints(words) or _hints(_words(leaf.comment))
    if any(word in _OHMS for word in words) or _names_resistor(words):
        hints = (hints & _RESISTIVE) or _RESISTIVE
    return Knob(
        key=leaf_key(leaf),
        leaf=leaf,
        value=value,
        half=half,
        whole=node.type.is_integer,
        hints=hints,
        named=leaf.name is not None,
        exponent=_exponent(words, hints) if stated is None else _stated_exponent(stated),
        physical=stated is None and any(word in _OHMS for word in words),
        stated=stated,
    )


def bare(node: Expression) -> Expression:
    """The node below conversions and declared defaults."""
    while isinstance(node, Convert | Default):
        node = node.operand
    return node


def _shift_counts(expression: Expression) -> frozenset[int]:
    """Identities of the constants that say by how many bits something is shifted."""
    return frozenset(
        id(bare(node.right))
        for node in walk(expression)
        if isinstance(node, Binary) and node.operator in ("<<", ">>")
    )


def _on_reading(expression: Expression) -> frozenset[int]:
    """Identities of the constants that shift or divide the bare reading, first of all."""
    return frozenset(
        id(bare(node.right))
        for node in walk(expression)
        if isinstance(node, Binary)
        and node.operator in ("<<", ">>", "/")
        and isinstance(bare(node.left), Code)
    )


def _masks(expression: Expression) -> frozenset[int]:
    """Identities of the constants 2**n - 1 that keep the lowest bits of the bare reading."""
    return frozenset(
        id(mask)
        for node in walk(expression)
        if isinstance(node, Binary) and node.operator == "&"
        for mask, word in ((bare(node.right), node.left), (bare(node.left), node.right))
        if isinstance(mask, Literal) and isinstance(bare(word), Code)
        if mask.value > 0 and is_power(Fraction(mask.value) + 1, 2)
    )


_WORD = re.compile(r"[A-Z]+(?![a-z])\d*|[A-Z]?[a-z]+\d*|\d+")
_HINTS = (
    ("vref aref ref vcc vdd vdda avcc avdd supply reference", (Role.REFERENCE,)),
    ("max full fs fsr counts count steps res scale top range", (Role.FULL_SCALE,)),
    ("bits bit shift", (Role.RESOLUTION,)),
    ("div divider ratio dividing", (Role.DIVIDER, Role.INVERSE_DIVIDER)),
    ("rtop rbot upper lower r1 r2 rhigh rlow rt rb ra resistor", (Role.RESISTANCE,)),
    ("shunt rsense rsh rshunt sense", (Role.SHUNT,)),
    ("gain amp amplifier", (Role.GAIN,)),
    ("offset offs ofs zero mid bias", (Role.OFFSET, Role.ZERO_CODE, Role.AT)),
    ("slope sens sensitivity per", (Role.SENSITIVITY,)),
)
_WORD_ROLES = {word: roles for words, roles in _HINTS for word in words.split()}
_EXPONENTS = {
    "v": 0, "volt": 0, "volts": 0, "mv": 3, "millivolt": 3, "millivolts": 3, "uv": 6,
    "a": 0, "ma": 3, "ua": 6, "ohm": 0, "ohms": 0, "kohm": -3, "kohms": -3, "mohm": 3,
    "milliohm": 3, "uohm": 6, "pct": 2, "percent": 2, "x10": 1, "x100": 2, "x1000": 3,
}  # fmt: skip
"""Powers of ten that unit words in names stand for (common practice)."""
_OHMS = frozenset({"ohm", "ohms", "kohm", "kohms", "mohm", "milliohm", "uohm"})
_SIDES = frozenset(["top", "bot", "bottom", "hi", "lo", "high", "low", "up", "upper", "lower"])
_RESISTIVE = frozenset({Role.RESISTANCE, Role.SHUNT})
"""What a constant in ohms may be, whatever else its name says (R_TOP_OHM is no full scale)."""


def _words(name: str) -> list[str]:
    parts = re.split(r"[^A-Za-z0-9]+", name)
    return [word.lower() for part in parts for word in (_split(part) if part else ())]


def _split(part: str) -> list[str]:
    return [part] if part.lower() in _EXPONENTS else _WORD.findall(part)


def _names_resistor(words: Sequence[str]) -> bool:
    """Whether a name says where in a divider a resistor is: R_TOP, R_LO."""
    return "r" in words and any(word in _SIDES for word in words)


def _hints(words: Iterable[str]) -> frozenset[Role]:
    return frozenset(role for word in words for role in _WORD_ROLES.get(word, ()))


def _stated_exponent(stated: StatedRole) -> int | None:
    """The power of ten that a stated unit says: 3 for mV."""
    if stated.unit is None or not is_power(stated.unit, 10):
        return None
    return -round(decades(stated.unit))


def _exponent(words: Sequence[str], hints: frozenset[Role]) -> int | None:
    """The power of ten of the last unit word, of the first where it is one unit per another."""
    found = [_EXPONENTS[word] for word in words if word in _EXPONENTS]
    if found:
        return found[0] if "per" in words else found[-1]
    return -3 if "k" in words and Role.RESISTANCE in hints else None
