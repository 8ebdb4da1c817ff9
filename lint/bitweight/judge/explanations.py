"""Why a conversion's line differs from the board's: wrong constants, and what is left over."""

from dataclasses import dataclass, field
from fractions import Fraction

from bitweight.arithmetic.expressions import Expression, Leaf
from bitweight.judge.findings import Level
from bitweight.places import Place


@dataclass(frozen=True, slots=True, kw_only=True)
class EffectPoint:
    """What one wrong constant does alone to the reading at one code, in the channel's unit."""

    at_count: int
    error: float


@dataclass(frozen=True, slots=True, kw_only=True)
class WrongConstant:
    """A constant whose correction is part of the smallest set that mends the channel.

    `rule` is the rule that reports it; `role` is what it stands for in words ("reference vref");
    `found` and `expected` are the values shown, as the code writes them and with an everyday unit
    if they have one; `text` is how a message names the constant, `held` the clause that says what
    the code has ("ADC_MAX is 1023") and `wanted` the one that says what the board has. `value` is
    the corrected value; `replacement` is the text to write at the leaf (None where one edit cannot
    say it). `leaf` is None where no constant is at fault (a shift that is missing); `place`
    is then where the finding stands. `level` comes from the constant's own effect, whose bottom,
    middle and top of the range are `effect`. `remark` is a sentence for the message.
    """

    rule: str
    role: str
    text: str
    place: Place
    leaf: Leaf | None
    found: str
    expected: str
    value: Fraction | None = None
    replacement: str | None = None
    level: Level = Level.WARNING
    effect: tuple[EffectPoint, ...] = ()
    remark: str = ""
    held: str = ""
    wanted: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Explanation:
    """Why the real-valued line of a conversion differs from the board's, if it does.

    `wrong` mends the line; `cancelling` are constants that contradict the board but whose errors
    cancel exactly; `residual` is "gain", "offset" or "curve" where no constants explain a
    difference that leaves the allowed error, and `culprit` the one constant whose correction would,
    if there is exactly one. `roles` names each leaf that was recognised. One count of the result is
    10**`decade` channel units where the unit is inferred. `count` is the full-scale count under
    which it holds, one of the accepted ones. `gain` and `offset` are the real-valued line of the
    code, in channel units per count and channel units, None where it is no line; `wanted_gain` and
    `wanted_offset` the board's. `mended` is the conversion with the wrong constants corrected, its
    words first moved down by `moved` bits; None where nothing is wrong or no type holds a value.
    """

    wrong: tuple[WrongConstant, ...] = ()
    cancelling: tuple[WrongConstant, ...] = ()
    residual: str | None = None
    culprit: WrongConstant | None = None
    roles: tuple[tuple[Leaf, str], ...] = ()
    decade: int = 0
    count: Fraction | None = None
    gain: Fraction | None = None
    offset: Fraction | None = None
    wanted_gain: Fraction | None = None
    wanted_offset: Fraction | None = None
    mended: Expression | None = field(default=None, compare=False, repr=False)
    moved: int = 0
