"""[variant.NAME]: the tables of an assembly, and which of their mistakes are its own."""

from collections.abc import Iterator, Mapping
from types import MappingProxyType

from bitweight.board.decoding.tables import (
    Mistakes,
    described,
    nearest,
    read_all,
    shortened,
)
from bitweight.documents import Array, Key, Scalar, Table, Value, merged, replaced
from bitweight.errors import Mistake
from bitweight.places import Place

_ROLES = frozenset({"constants", "is"})
_SOURCES = _ROLES | {"supply", "to", "ratiometric", "offset"}
_USES: Mapping[str, frozenset[str]] = {
    "supply": _SOURCES,
    "reference": _SOURCES | {"reference"},
    "converter": _ROLES | {"converter"},
    "channel": _ROLES | {"like"},
}
"""For each kind of named table, the keys whose texts name one."""


def read_variants(root: Table, tables: tuple[str, ...], mistakes: Mistakes) -> dict[str, Table]:
    """For each variant the tables it overrides; `define` goes to [board]."""
    found: dict[str, Table] = {}
    for name, (place, value) in read_all(root.get("variant"), "variant", mistakes).items():
        where = f"[variant.{shortened(name)}]"
        if not name.strip():
            mistakes.add(place, "expected a name in [variant.NAME], found an empty one")
        elif isinstance(value, Table):
            found[name] = _lifted(_known(value, where, tables, mistakes))
        else:
            mistakes.add(value.place, f"expected a table {where}, found {described(value)}")
    return found


def without(table: Table, name: str) -> Table:
    """The table without one key."""
    keys = {one: key for one, key in table.keys.items() if one != name}
    return Table(keys=MappingProxyType(keys), place=table.place)


def _known(variant: Table, where: str, tables: tuple[str, ...], mistakes: Mistakes) -> Table:
    """The keys that a variant may have; others are noted."""
    names = [*(name for name in tables if name != "variant"), "define"]
    for key in variant.keys.values():
        if key.name == "variant":
            mistakes.add(key.place, "a variant cannot have variants")
        elif key.name not in names:
            hint = nearest(key.name, names) or f"; known: {', '.join(names)}"
            mistakes.add(key.place, f"unknown table '{shortened(key.name)}' in {where}{hint}")
    keys = {name: key for name, key in variant.keys.items() if name in names}
    return Table(keys=MappingProxyType(keys), place=variant.place)


def _lifted(variant: Table) -> Table:
    """A variant's table shaped like a board file."""
    keys = dict(without(variant, "define").keys)
    define = variant.keys.get("define")
    if define is not None:
        inner = Table(keys=MappingProxyType({"define": define}), place=define.place)
        board = keys.get("board")
        if board is not None and isinstance(board.value, Table):
            inner = merged(board.value, inner)
        keys["board"] = Key(name="board", place=define.place, value=inner)
    return Table(keys=MappingProxyType(keys), place=variant.place)


def with_defaults(base: Table) -> Table:
    """The base with its only reference and converter named where they are used.

    So a variant that adds another one leaves the rest of the board as it is.
    """
    for kind, user in (("reference", "converter"), ("converter", "channel")):
        known, users = base.get(kind), base.get(user)
        if isinstance(known, Table) and isinstance(users, Table) and len(known.keys) == 1:
            (name,) = known.keys
            named = {one: _naming(key, kind, name) for one, key in users.keys.items()}
            value = Table(keys=MappingProxyType(named), place=users.place)
            base = replaced(base, {user: Key(name=user, place=users.place, value=value)})
    return base


def _naming(user: Key, kind: str, name: str) -> Key:
    """A table's key with the name of what it uses, where it has none and copies no other."""
    table = user.value
    if not isinstance(table, Table) or kind in table.keys or "like" in table.keys:
        return user
    key = Key(name=kind, place=user.place, value=Scalar(value=name, place=user.place))
    return Key(name=user.name, place=user.place, value=replaced(table, {kind: key}))


def used_tables(name: str, base: Table, variant: Table, mistakes: Mistakes) -> Table:
    """The variant without the tables that neither the base has nor anything uses; they are noted.

    Such a table changes nothing: its name is a slip, or what it is for is missing.
    """
    whole = merged(base, variant)
    keys = dict(variant.keys)
    for kind in _USES:
        given, known = variant.get(kind), base.get(kind)
        if not isinstance(given, Table):
            continue
        names = known.keys if isinstance(known, Table) else {}
        used = _names_used(whole, kind)
        unused = [
            key
            for key in given.keys.values()
            if key.name not in names and key.name not in used and not _is_whole(kind, key)
        ]
        for key in unused:
            mistakes.add(key.place, f"variant {shortened(name)} has a {kind} {_unused(key, names)}")
        kept = {one: key for one, key in given.keys.items() if key not in unused}
        value = Table(keys=MappingProxyType(kept), place=given.place)
        keys[kind] = Key(name=kind, place=keys[kind].place, value=value)
    return Table(keys=MappingProxyType(keys), place=variant.place)


def _is_whole(kind: str, key: Key) -> bool:
    """Whether an entry stands for itself: a scalar (noted elsewhere), a channel with a reading."""
    if not isinstance(key.value, Table):
        return True
    return kind == "channel" and ("firmware" in key.value.keys or "like" in key.value.keys)


def _unused(key: Key, known: Mapping[str, Key]) -> str:
    hint = nearest(key.name, known) or (f"; the base has {', '.join(known)}" if known else "")
    return f"'{shortened(key.name)}' that the base does not define and nothing uses{hint}"


def _names_used(root: Table, kind: str) -> frozenset[str]:
    """Every text that may name a table of a kind, and the words of it."""
    found: set[str] = set()
    for text in _texts(root, "", _USES[kind]):
        first, _, rest = text.strip().partition(" ")
        found |= {text, first, rest, text.rpartition(" ")[2]}
        found |= set(text.replace("/", " ").replace("*", " ").split())
    return frozenset(found)


def _texts(value: Value, name: str, wanted: frozenset[str]) -> Iterator[str]:
    """The texts below a value that stand under one of the keys."""
    pending: list[tuple[Value, str]] = [(value, name)]
    while pending:
        value, name = pending.pop()
        match value:
            case Table():
                inside = name if name == "constants" else ""
                pending += [(key.value, inside or key.name) for key in value.keys.values()]
            case Array():
                pending += [(item, name) for item in value.items]
            case Scalar(value=str() as text) if name in wanted:
                yield text
            case Scalar():
                pass


def of_variant(name: str, variant: Table, own: Mistakes, base: Mistakes) -> tuple[Mistake, ...]:
    """The mistakes that only a variant has, said to be its own.

    Where some stand in the variant's own tables, they are taken for the cause of those that stand
    in the base.
    """
    new = [one for key, one in own.found.items() if key not in base.found]
    places = set(_places(variant))
    inside = [one for one in new if one.place in places]
    prefix = f"in variant {shortened(name)}: "
    return tuple(
        Mistake(place=one.place, message=_with_prefix(prefix, one.message)) for one in inside or new
    )


def _with_prefix(prefix: str, message: str) -> str:
    """A message that does not name its variant yet, with its name."""
    return message if message.startswith("variant ") else prefix + message


def _places(value: Value) -> Iterator[Place]:
    """Every place in a tree."""
    pending: list[Value] = [value]
    while pending:
        value = pending.pop()
        yield value.place
        match value:
            case Table():
                yield from (key.place for key in value.keys.values())
                pending += [key.value for key in value.keys.values()]
            case Array():
                pending += value.items
            case Scalar():
                pass
