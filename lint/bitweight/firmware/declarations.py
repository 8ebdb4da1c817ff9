"""What the declarations of one unit mean: its typedef names, records and types."""

from collections.abc import Iterator, Mapping
from functools import cached_property

from bitweight.arithmetic.types import CType, DataModel, Kind
from bitweight.firmware.mentions import nodes
from bitweight.firmware.objects import (
    Arithmetic,
    Array,
    FunctionType,
    ObjectType,
    Pointer,
    Record,
    Strange,
)
from bitweight.firmware.parsing import UnitSyntax
from bitweight.firmware.syntax import (
    ArrayOf,
    Derivation,
    Expr,
    Field,
    FunctionOf,
    Number,
    Operation,
    PointerTo,
    Specifiers,
    TypeSyntax,
)

_TYPE_DEPTH = 64


class Declarations:
    """Types of one unit. `path` is the scope of its tags."""

    def __init__(self, syntax: UnitSyntax, model: DataModel, path: str) -> None:
        self._syntax = syntax
        self._model = model
        self._path = path
        self._typedefs: Mapping[str, TypeSyntax] = {one.name: one.type for one in syntax.typedefs}

    @property
    def records(self) -> Mapping[str, tuple[Field, ...]]:
        """Members by tag, of every struct and union that is declared with a body."""
        return self._records

    @cached_property
    def _records(self) -> dict[str, tuple[Field, ...]]:
        found: dict[str, tuple[Field, ...]] = {}
        variables = [one.type.specifiers for one in self._syntax.variables]
        for tag, fields in _bodies([*self._syntax.specifiers, *variables]):
            found.setdefault(tag, fields)
        return found

    def learn(self, specifiers: Specifiers) -> None:
        """Take in the records that a function declares; a tag with two bodies has none."""
        for tag, fields in _bodies([specifiers]):
            known = self._records.setdefault(tag, fields)
            if known != fields:
                self._records[tag] = ()

    def specifiers(self) -> Iterator[Specifiers]:
        """Every specifier list of the unit, those of members included."""
        yield from self._syntax.specifiers
        for fields in self.records.values():
            for member in fields:
                yield member.type.specifiers

    def type_of(self, syntax: TypeSyntax, depth: int = 0) -> ObjectType:
        """The type that declarations mean; array sizes are left to whoever can compute them."""
        if depth > _TYPE_DEPTH:
            return Strange(name="a type nested too deeply")
        return self.derived(self._base(syntax.specifiers, depth), syntax.derivations)

    @staticmethod
    def derived(made: ObjectType, derivations: tuple[Derivation, ...]) -> ObjectType:
        """What pointers, arrays and functions make of a type."""
        for one in reversed(derivations):
            match one:
                case PointerTo():
                    made = Pointer(to=made)
                case ArrayOf():
                    made = Array(of=made, length=None)
                case FunctionOf():
                    made = FunctionType(returns=made)
        return made

    def _base(self, specifiers: Specifiers, depth: int) -> ObjectType:
        if specifiers.record == "enum":
            return Arithmetic(type=self._enum_type(specifiers))
        if specifiers.record is not None:
            return Record(kind=specifiers.record, tag=specifiers.tag or "", scope=self._path)
        words = specifiers.words
        if len(words) == 1 and words[0] in self._typedefs:
            return self.type_of(self._typedefs[words[0]], depth + 1)
        if words == ("void",):
            return Strange(name="")
        known = self._model.named(words)
        if known is not None:
            return Arithmetic(type=known)
        if not words and specifiers.storage | specifiers.qualifiers:
            return Arithmetic(type=self._model.int_)
        return Strange(name=" ".join(words))

    @cached_property
    def _negative_enums(self) -> frozenset[str]:
        """Tags of the enums with a negative enumerator, as far as a minus sign shows it."""
        return frozenset(
            one.tag or ""
            for one in self.specifiers()
            if any(_has_minus(each.value) for each in one.enumerators or () if each.value)
        )

    def _enum_type(self, specifiers: Specifiers) -> CType:
        """int for an enum with a negative enumerator, else unsigned, as gcc has it (6.7.2.2p4)."""
        negative = specifiers.tag in self._negative_enums
        return self._model.int_ if negative else self._model.unsigned

    def fields(self, record: Record) -> tuple[Field, ...]:
        """The members of a record in order; none where its body is not in the unit."""
        return self.records.get(record.tag, ())

    def field_type(self, member: Field) -> ObjectType:
        """The type of a member, with its width if it is a bit field."""
        return _bit_field(member, self.type_of(member.type))

    def member(self, record: Record, name: str) -> ObjectType | None:
        """The type of a member, looked for in unnamed inner records too."""
        for one in self.fields(record):
            type_ = self.field_type(one)
            if one.name == name:
                return type_
            if not one.name and isinstance(type_, Record):
                within = self.member(type_, name)
                if within is not None:
                    return within
        return None

    def member_start(self, record: Record, name: str) -> int | None:
        """Where the name of a member stands in the unit's text."""
        for one in self.fields(record):
            if one.name == name:
                return one.start
            inner = self.field_type(one) if not one.name else None
            if isinstance(inner, Record):
                within = self.member_start(inner, name)
                if within is not None:
                    return within
        return None


def _bodies(pending: list[Specifiers]) -> Iterator[tuple[str, tuple[Field, ...]]]:
    """Tags with the members of each record that is declared with a body, inner ones too."""
    while pending:
        one = pending.pop()
        if one.fields is not None and one.tag is not None:
            yield one.tag, one.fields
            pending.extend(member.type.specifiers for member in one.fields)


def _has_minus(value: Expr) -> bool:
    return any(isinstance(one, Operation) and one.operator == "-" for one in nodes(value))


def _bit_field(member: Field, type_: ObjectType) -> ObjectType:
    """The type of a member with the width that the declaration gives it (C11 6.7.2.1p10)."""
    width = member.bits.text if isinstance(member.bits, Number) else ""
    if not isinstance(type_, Arithmetic) or not width.isdigit():
        return type_
    if not 0 < int(width) <= type_.type.bits:
        return type_
    return Arithmetic(
        type=CType(
            name=f"{type_.type.name}:{width}",
            kind=Kind.INTEGER,
            bits=int(width),
            signed=type_.type.signed,
            rank=0,
        )
    )
