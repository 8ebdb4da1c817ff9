"""Parts with an identity, and the voltages that a board makes: supplies and references.

Two mentions of one part (same designator, supply or reference) are one quantity: they cancel in a
chain and count once in an uncertainty budget.
"""

from collections.abc import Callable
from dataclasses import dataclass
from enum import Enum
from fractions import Fraction

from bitweight.places import Place
from bitweight.quantities import Quantity


@dataclass(frozen=True, slots=True, kw_only=True)
class Part:
    """A quantity of the board. Parts with the same `key` are one and the same thing.

    `label` names it in a sentence: "R12", "top", "supply v33".
    """

    key: str
    label: str
    quantity: Quantity
    place: Place


Values = Callable[[Part], Fraction]
"""What each part is worth, in the coherent unit: its nominal value, or a changed one."""


def nominal(part: Part) -> Fraction:
    """The value that the board file states, in the coherent unit."""
    return part.quantity.value


@dataclass(frozen=True, slots=True, kw_only=True)
class Supply:
    """A supply rail. `voltage` is in volts."""

    name: str
    voltage: Quantity
    place: Place

    @property
    def part(self) -> Part:
        """The rail as one quantity."""
        label = f"supply {self.name}"
        return Part(key=label, label=label, quantity=self.voltage, place=self.place)


class ReferenceSource(Enum):
    """Where a converter's reference comes from."""

    EXTERNAL = "external"
    SUPPLY = "supply"
    INTERNAL = "internal"


@dataclass(frozen=True, slots=True, kw_only=True)
class Reference:
    """What a converter measures against; `voltage` in volts, of the supply where it has one.

    `source_stated` says whether the board file gave the source or the default stands.
    """

    name: str
    source: ReferenceSource
    source_stated: bool
    voltage: Quantity
    pin: str | None
    supply: Supply | None
    place: Place

    @property
    def part(self) -> Part:
        """The voltage as one quantity: the supply's own where it is the supply."""
        label = f"reference {self.name}"
        if self.supply is not None:
            return Part(
                key=self.supply.part.key, label=label, quantity=self.voltage, place=self.place
            )
        return Part(key=label, label=label, quantity=self.voltage, place=self.place)


Source = Supply | Reference


@dataclass(frozen=True, slots=True, kw_only=True)
class Share:
    """A part of a supply or reference: "v33 / 2". `factor` is a plain number."""

    source: Source
    factor: Fraction
    text: str
    place: Place

    def volts(self, values: Values) -> Fraction:
        """The voltage, in volts."""
        return self.factor * values(self.source.part)
