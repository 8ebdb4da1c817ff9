"""[constants]: what C expressions stand for, by the user's word."""

from collections.abc import Iterable, Mapping
from types import MappingProxyType

from bitweight.board.decoding.fields import ConstantFields
from bitweight.board.decoding.tables import (
    Decoded,
    Mistakes,
    described,
    nearest,
    read_all,
    read_table,
    shortened,
)
from bitweight.board.hardware import Channel, ConstantFact
from bitweight.board.parts import Part
from bitweight.board.stages import parts_of
from bitweight.documents import Key, Scalar, Table, Value
from bitweight.places import Place
from bitweight.units import OHM, VOLT, Dimension, coherent, named

ROLES = (
    "full-scale",
    "reference",
    "resolution",
    "divider",
    "inverse divider",
    "resistance",
    "gain",
    "offset",
    "shunt",
    "beta",
    "sensitivity",
    "code",
)
"""What a constant can stand for; a name may follow ("reference vref", "resistance R12")."""

_KINDS: Mapping[str, Dimension] = {
    "full-scale": (),
    "reference": VOLT,
    "resolution": (),
    "divider": (),
    "inverse divider": (),
    "resistance": OHM,
    "code": (),
}
"""What kind of quantity a role always is."""

_F = ConstantFields


def constants(
    root: Table,
    found: Mapping[str, Channel | None],
    converters: Iterable[str],
    references: Iterable[str],
    mistakes: Mistakes,
) -> tuple[ConstantFact, ...]:
    """The constants in the order of the file."""
    names = _names(found, converters, references)
    facts = []
    for expression, (place, value) in read_all(
        root.get("constants"), "constants", mistakes
    ).items():
        fact = _constant(expression, place, value, found, names, mistakes)
        if fact is not None:
            facts.append(fact)
    return tuple(facts)


def _names(
    found: Mapping[str, Channel | None], converters: Iterable[str], references: Iterable[str]
) -> Mapping[str, frozenset[str]]:
    """For each role, the names that may follow it."""
    parts = [part for channel in found.values() if channel for part in _parts(channel)]
    designators = frozenset(
        part.quantity.designator for part in parts if part.quantity.designator is not None
    )
    by_channel = frozenset(found)
    special = {
        "reference": frozenset(references),
        "resistance": designators,
        "full-scale": by_channel | frozenset(converters),
        "resolution": by_channel | frozenset(converters),
    }
    return {role: special.get(role, by_channel | designators) for role in ROLES}


def _parts(channel: Channel) -> Iterable[Part]:
    return (part for stage in channel.chain for part in parts_of(stage))


def _constant(
    expression: str,
    place: Place,
    value: Value,
    found: Mapping[str, Channel | None],
    names: Mapping[str, frozenset[str]],
    mistakes: Mistakes,
) -> ConstantFact | None:
    decoded = _decoded(expression, value, mistakes)
    text, at, where = expression.partition(" @ ")
    if not text.strip():
        mistakes.add(place, "expected a C expression as the key, in quotes where it is no name")
    if at and not where.strip():
        mistakes.add(place, "expected a function or a file after @")
    role, name = _role(decoded, names, mistakes)
    _check(decoded, role, mistakes)
    _check_unit(decoded, role, mistakes)
    _check_at(decoded, found.get(name or ""), mistakes)
    return ConstantFact(
        expression=text.strip(),
        where=where.strip() or None,
        role=role,
        name=name,
        unit=decoded.get(_F.UNIT),
        at=decoded.get(_F.AT),
        value=decoded.get(_F.VALUE),
        place=place,
    )


def _decoded(expression: str, value: Value, mistakes: Mistakes) -> Decoded:
    """The table of a constant; a text alone is its `is`."""
    if isinstance(value, Scalar) and isinstance(value.value, str):
        key = Key(name="is", place=value.place, value=value)
        value = Table(keys=MappingProxyType({"is": key}), place=value.place)
    elif not isinstance(value, Table):
        message = f'expected a role like "full-scale" or {{ value = 3 }}, found {described(value)}'
        mistakes.add(value.place, message)
        value = Table(keys=MappingProxyType({}), place=value.place)
        return Decoded(value, expression, {})
    return read_table(value, _F.ALL, f"constant {shortened(expression)}", mistakes)


def _role(
    decoded: Decoded, names: Mapping[str, frozenset[str]], mistakes: Mistakes
) -> tuple[str | None, str | None]:
    """Split "reference vref" in role and name; unknown ones are mistakes."""
    text = decoded.get(_F.IS)
    if text is None:
        return None, None
    words = " ".join(text.split())
    place = decoded.place(_F.IS)
    for role in sorted(ROLES, key=len, reverse=True):
        if words == role:
            return role, None
        if words.startswith(role + " "):
            name = words[len(role) + 1 :]
            if name not in names[role]:
                known = ", ".join(sorted(names[role])) or "none"
                hint = nearest(name, names[role]) or f"; known: {known}"
                mistakes.add(place, f"'{shortened(name)}' is not known as a {role}{hint}")
            return role, name
    hint = nearest(words, ROLES) or f"; known roles: {', '.join(ROLES)}"
    mistakes.add(place, f'unknown role "{shortened(words)}"{hint}')
    return None, None


def _check(decoded: Decoded, role: str | None, mistakes: Mistakes) -> None:
    """Keys that belong together."""
    place = decoded.table.place
    if decoded.given(_F.IS) and decoded.given(_F.VALUE):
        mistakes.add(decoded.place(_F.VALUE), "is and value are both given; keep one of them")
    if decoded.is_table and not decoded.given(_F.IS) and not decoded.given(_F.VALUE):
        message = f"missing key 'is' or 'value' in {decoded.where}; a key with . or -> needs quotes"
        mistakes.add(place, message)
    if role == "code" and not decoded.given(_F.AT):
        mistakes.add(place, f"missing key 'at' in {decoded.where}: the quantity of the code")


def _check_unit(decoded: Decoded, role: str | None, mistakes: Mistakes) -> None:
    """The unit of a count is of the kind of the role, where that is always the same."""
    unit, kind = decoded.get(_F.UNIT), _KINDS.get(role or "")
    if unit is None or kind is None or unit.dimension == kind:
        return
    message = f"a {role} is in {named(coherent(kind))}, found the unit {named(unit)}"
    mistakes.add(decoded.place(_F.UNIT), message)


def _check_at(decoded: Decoded, owner: Channel | None, mistakes: Mistakes) -> None:
    """The quantity of a code is of the kind of its channel."""
    at = decoded.get(_F.AT)
    if at is not None and owner is not None and not at.unit.fits(owner.unit):
        message = f"at is in {named(at.unit)} but the channel's unit is {named(owner.unit)}"
        mistakes.add(decoded.place(_F.AT), message)
