"""The whole board file: read, checked and linked; its variants too. The door of this package."""

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction
from pathlib import Path, PurePosixPath

from bitweight.arithmetic.types import MODELS, DataModel
from bitweight.board.decoding.channels import channels
from bitweight.board.decoding.constants import constants
from bitweight.board.decoding.converters import converters, references, supplies
from bitweight.board.decoding.fields import BoardFields, DeviationFields, TargetFields
from bitweight.board.decoding.tables import (
    Decoded,
    Field,
    Mistakes,
    described,
    near,
    nearest,
    read_table,
    shortened,
)
from bitweight.board.decoding.variants import (
    of_variant,
    read_variants,
    used_tables,
    with_defaults,
    without,
)
from bitweight.board.hardware import (
    Board,
    Channel,
    Deviation,
    Reference,
    Source,
    Supply,
    Target,
    Variant,
)
from bitweight.board.stages import parts_of
from bitweight.documents import Array, Key, Table, merged, parse_document, read_document
from bitweight.errors import UsageError
from bitweight.places import Place

TABLES = (
    "board",
    "target",
    "supply",
    "reference",
    "converter",
    "channel",
    "constants",
    "variant",
    "deviation",
)
"""The tables that a board file may have."""

_EMPTY: Mapping[str, Key] = {}


def load_board(path: Path, *, shown: str, variant: str | None = None) -> Board:
    """The board of a file, named `shown` in places, in one of its variants.

    Raises `SourceError` when the file cannot be read, `BoardError` with every mistake in it, and
    `UsageError` when it has no such variant.
    """
    return decode_board(read_document(path, shown=shown), file=shown, variant=variant)


def board_from_text(text: str, *, file: str, variant: str | None = None) -> Board:
    """The board of a TOML text; otherwise like `load_board`."""
    return decode_board(parse_document(text, file=file), file=file, variant=variant)


def decode_board(root: Table, *, file: str, variant: str | None = None) -> Board:
    """The facts of a board file's tree. Base and variants are all checked, whichever is asked."""
    mistakes = Mistakes()
    base = _with_known_tables(root, mistakes)
    variants = read_variants(base, TABLES, mistakes)
    base = without(base, "variant")
    shared = with_defaults(base)
    boards: dict[str | None, Board] = {None: _board(base, file, mistakes)}
    for name, table in variants.items():
        own = Mistakes()
        board = _board(merged(shared, used_tables(name, base, table, own)), file, own)
        mistakes.extend(of_variant(name, table, own, mistakes))
        boards[name] = replace(board, variant=name)
    mistakes.raise_any()
    if variant not in boards:
        hint = nearest(str(variant), variants)
        raise UsageError(f"{file} has no variant '{variant}'{hint}")
    found = tuple(Variant(name=name, place=table.place) for name, table in variants.items())
    return replace(boards[variant], variants=found)


def _with_known_tables(root: Table, mistakes: Mistakes) -> Table:
    """The tree with unknown tables noted, and read as the known ones they are slips of."""
    known = Table(
        keys={name: key for name, key in root.keys.items() if name in TABLES}, place=root.place
    )
    for key in root.keys.values():
        if key.name in TABLES:
            continue
        hint = nearest(key.name, TABLES) or f"; known tables: {', '.join(TABLES)}"
        mistakes.add(key.place, f"unknown table '{shortened(key.name)}'{hint}")
        meant = near(key.name, TABLES)
        if meant is not None:
            slip = Key(name=meant, place=key.place, value=key.value)
            known = merged(Table(keys={meant: slip}, place=root.place), known)
    return known


def _board(root: Table, file: str, mistakes: Mistakes) -> Board:
    rails = supplies(root, mistakes)
    known = references(root, rails, mistakes)
    sources: dict[str, Source | None] = {**known, **rails}
    _check_names(rails, known, mistakes)
    devices = converters(root, known, mistakes)
    found = channels(root, devices, sources, mistakes)
    _check_designators(found, mistakes)
    facts = _section(root, "board", BoardFields.ALL, mistakes)
    fields = BoardFields
    return Board(
        name=facts.get(fields.NAME) or PurePosixPath(file.replace("\\", "/")).stem,
        revision=facts.get(fields.REVISION),
        file=file,
        firmware=facts.get(fields.FIRMWARE) or (),
        include=facts.get(fields.INCLUDE) or (),
        exclude=facts.get(fields.EXCLUDE) or (),
        define=facts.get(fields.DEFINE) or (),
        build=facts.get(fields.BUILD),
        coverage=facts.get(fields.COVERAGE) or Fraction(2),
        target=_target(root, mistakes),
        supplies=tuple(rail for rail in rails.values() if rail),
        references=tuple(reference for reference in known.values() if reference),
        converters=tuple(device for device in devices.values() if device),
        channels=tuple(channel for channel in found.values() if channel),
        constants=constants(root, found, devices, known, mistakes),
        variants=(),
        variant=None,
        deviations=_deviations(root, mistakes),
        place=facts.table.place,
        paths=_paths(facts, _section(root, "target", TargetFields.ALL, mistakes)),
    )


def _paths(board: Decoded, target: Decoded) -> Mapping[str, Place]:
    """Where the keys that name files and folders stand."""
    fields = (BoardFields.FIRMWARE, BoardFields.INCLUDE, BoardFields.EXCLUDE, BoardFields.BUILD)
    found = {field.name: board.place(field) for field in fields if board.given(field)}
    if target.given(TargetFields.FAMILIES):
        found[TargetFields.FAMILIES.name] = target.place(TargetFields.FAMILIES)
    return found


def _check_names(
    rails: Mapping[str, Supply | None], known: Mapping[str, Reference | None], mistakes: Mistakes
) -> None:
    """A reference may share its supply's name, but not that of another one."""
    for name, reference in known.items():
        rail = rails.get(name)
        if reference is not None and rail is not None and reference.supply != rail:
            message = f"'{shortened(name)}' is another supply already; give it another name"
            mistakes.add(reference.place, message)


def _section(
    root: Table, name: str, fields: tuple[Field[object], ...], mistakes: Mistakes
) -> Decoded:
    """A table that need not be there."""
    value = root.get(name)
    if value is None:
        value = Table(keys=_EMPTY, place=root.place)
    return read_table(value, fields, f"[{name}]", mistakes)


def _target(root: Table, mistakes: Mistakes) -> Target:
    fields = TargetFields
    decoded = _section(root, "target", fields.ALL, mistakes)
    architecture = decoded.get(fields.ARCHITECTURE)
    return Target(
        architecture=architecture,
        model=_model(decoded, MODELS[architecture] if architecture else DataModel()),
        clock=decoded.get(fields.CLOCK),
        family=decoded.get(fields.FAMILY),
        families=decoded.get(fields.FAMILIES) or (),
        place=decoded.table.place,
        family_place=decoded.place(fields.FAMILY),
    )


def _model(decoded: Decoded, base: DataModel) -> DataModel:
    """The architecture's widths with those that the board file gives in their place."""
    fields = TargetFields
    signed = decoded.get(fields.CHAR_SIGNED)
    return replace(
        base,
        int_bits=decoded.get(fields.INT_BITS) or base.int_bits,
        long_bits=decoded.get(fields.LONG_BITS) or base.long_bits,
        double_bits=decoded.get(fields.DOUBLE_BITS) or base.double_bits,
        char_signed=base.char_signed if signed is None else signed,
    )


def _deviations(root: Table, mistakes: Mistakes) -> tuple[Deviation, ...]:
    value = root.get("deviation")
    if value is None:
        return ()
    if not isinstance(value, Array):
        mistakes.add(value.place, f"expected tables [[deviation]], found {described(value)}")
        return ()
    fields = DeviationFields
    found = []
    for item in value.items:
        decoded = read_table(item, fields.ALL, "[[deviation]]", mistakes)
        rule, where = decoded.get(fields.RULE), decoded.get(fields.WHERE)
        if rule is None or where is None:
            continue
        found.append(
            Deviation(
                rule=rule,
                where=where,
                reason=decoded.get(fields.REASON) or "",
                until=decoded.get(fields.UNTIL),
                place=decoded.table.place,
                rule_place=decoded.place(fields.RULE),
            )
        )
    return tuple(found)


def _check_designators(found: Mapping[str, Channel | None], mistakes: Mistakes) -> None:
    """A designator is one part: every mention of it has the same value."""
    first: dict[str, tuple[str, Place, Fraction]] = {}
    for channel in found.values():
        for part in (
            part for stage in (channel.chain if channel else ()) for part in parts_of(stage)
        ):
            if part.quantity.designator is None:
                continue
            text, place, value = first.setdefault(
                part.key, (part.quantity.text, part.place, part.quantity.value)
            )
            if value != part.quantity.value:
                message = f'"{part.quantity.text}" contradicts "{text}" on line {place.line}'
                mistakes.add(part.place, message)
