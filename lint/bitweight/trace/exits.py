"""What following a statement leaves: the state behind it, and the ways out of it."""

from dataclasses import dataclass
from typing import Literal as Word

from bitweight.arithmetic.expressions import Expression
from bitweight.firmware.syntax import Node
from bitweight.trace.memory import State, Value

ExitKind = Word["return", "break", "continue", "goto"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Exit:
    """A way out of a statement.

    Of several, the first whose condition holds is taken; None always holds. `label` is a goto's.
    """

    kind: ExitKind
    condition: Expression | None
    state: State
    value: Value | None
    node: Node
    label: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Flow:
    """What a statement does: the state after it (None if it never falls through) and its exits."""

    next: State | None
    exits: tuple[Exit, ...] = ()
