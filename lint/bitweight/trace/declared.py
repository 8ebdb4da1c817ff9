"""Where the object that holds a result is declared with its type."""

from bitweight.firmware.objects import Array, Location, ObjectType, Record
from bitweight.places import Place
from bitweight.trace.contexts import Context


def declared_place(context: Context, location: Location) -> Place | None:
    """The declaration of an object, or of the member of it that `location` names."""
    declared = context.declared(location, None)
    if declared is None:
        return None
    place, type_ = declared.key, declared.type
    for step in location.path:
        if isinstance(type_, Array):
            type_ = type_.of
            continue
        found = _member(context, type_, str(step))
        if found is None:
            return None
        place, type_ = found
    return place


def _member(context: Context, record: ObjectType, name: str) -> tuple[Place, ObjectType] | None:
    if not isinstance(record, Record):
        return None
    for unit in context.program.units.values():
        place, type_ = unit.member_place(record, name), unit.member(record, name)
        if place is not None and type_ is not None and unit.path == record.scope:
            return place, type_
    return None
