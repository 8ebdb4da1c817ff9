"""Functions, objects, types and enumerators of the whole tree, read unit by unit as they are needed.

Nothing is parsed that no wanted name leads to: `Program.load(name)` brings in the units whose text
mentions a name, directly or through macros and headers.
"""

import re
from collections.abc import Iterable, Iterator, Mapping
from copy import copy
from dataclasses import dataclass, field
from functools import cached_property

from bitweight.arithmetic.expressions import Expression
from bitweight.arithmetic.types import CType, DataModel, Kind
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.mentions import Mentions, mentions
from bitweight.firmware.objects import (
    Arithmetic,
    Array,
    Callable_,
    Location,
    ObjectType,
    Pointer,
    Record,
    Root,
    Strange,
)
from bitweight.firmware.parsing import Parser, UnitSyntax, snippet
from bitweight.firmware.syntax import (
    ArrayOf,
    Block,
    Declarator,
    Enumerator,
    Expr,
    Field,
    FunctionOf,
    FunctionSyntax,
    PointerTo,
    Specifiers,
    TypeSyntax,
)
from bitweight.firmware.translation import TranslationUnit, translate
from bitweight.limits import Limits
from bitweight.places import Place

_TYPE_DEPTH = 64
_DEFINE = re.compile(r"^[ \t]*#[ \t]*define[ \t]+(\w+)((?:\\\r?\n|[^\n])*)", re.MULTILINE)
_INCLUDE = re.compile(r"^[ \t]*#[ \t]*include[ \t]*[<\"]([^>\"\n]+)[>\"]", re.MULTILINE)
_MACRO_ROUNDS = 12


@dataclass(frozen=True, kw_only=True, eq=False)
class Function:
    """A function with a body. `key` is where it is defined: one function however often included."""

    name: str
    unit: "Unit"
    syntax: FunctionSyntax
    static: bool
    weak: bool
    key: Place

    @cached_property
    def body(self) -> Block:
        """Its statements."""
        return self.unit.parser.body(self.syntax)

    @cached_property
    def mentions(self) -> Mentions:
        """The names in its body."""
        return mentions(self.body, frozenset(one.name for one in self.syntax.parameters))


@dataclass(frozen=True, kw_only=True, eq=False)
class Variable:
    """An object outside of functions. `value` is its initialiser."""

    name: str
    unit: "Unit"
    syntax: Declarator
    location: Location
    type: ObjectType
    constant: bool
    declared_only: bool
    key: Place

    @property
    def value(self) -> Expr | None:
        """The initialiser, if it has one."""
        return self.syntax.value


@dataclass(frozen=True, kw_only=True, eq=False)
class Enumeration:
    """One enumerator: its own expression, or `step` more than the one before it."""

    name: str
    unit: "Unit"
    base: Expr | None
    step: int
    syntax: Enumerator
    key: Place


class Unit:
    """One translation unit, parsed; its names, and its types resolved."""

    def __init__(
        self,
        translation: TranslationUnit,
        model: DataModel,
        marks: Iterable[str] = (),
    ) -> None:
        self.translation = translation
        self.path = translation.path
        self.model = model
        wanted = frozenset(marks)
        spans = {
            (use.start, use.end): use.name for use in translation.invocations if use.name in wanted
        }
        self.parser = Parser(
            translation.text,
            is_type=lambda name: model.named((name,)) is not None,
            marks=_trimmed(spans, translation.text),
        )
        self.syntax: UnitSyntax = self.parser.unit()
        self.literals: dict[tuple[int, str], Expression] = {}
        self._places: dict[int, tuple[Place, Place]] = {}
        self.typedefs: Mapping[str, TypeSyntax] = {
            one.name: one.type for one in self.syntax.typedefs
        }

    def place(self, offset: int) -> Place:
        """Where a character of the unit's text is used: the macro use, if it came from one."""
        return self._origin(offset)[1]

    def spelled(self, offset: int) -> Place:
        """Where a character of the unit's text is spelled."""
        return self._origin(offset)[0]

    def _origin(self, offset: int) -> tuple[Place, Place]:
        if offset not in self._places:
            origin = self.translation.origin(offset)
            self._places[offset] = (origin.place, origin.use)
        return self._places[offset]

    def excerpt(self, source: str) -> "Unit":
        """A unit that holds just one expression of text from outside, at the end of this one."""
        outside = (self.records, self.enumerators, self.functions, self.variables, self.prototypes)
        made = copy(self)
        assert outside  # Computed before the text is another.
        made.translation = self.translation.excerpt(snippet(source))
        made.parser = Parser(made.translation.text, is_type=self.parser.is_type)
        made._places = {}
        made.literals = {}
        return made

    @cached_property
    def records(self) -> Mapping[str, tuple[Field, ...]]:
        """Members by tag, of every struct and union that is declared with a body."""
        found: dict[str, tuple[Field, ...]] = {}
        pending = [*self.syntax.specifiers]
        pending += [one.type.specifiers for one in self.syntax.variables]
        while pending:
            one = pending.pop()
            if one.fields is not None and one.tag is not None and one.tag not in found:
                found[one.tag] = one.fields
                pending.extend(member.type.specifiers for member in one.fields)
        return found

    @cached_property
    def enumerators(self) -> Mapping[str, Enumeration]:
        """Every enumerator of the unit."""
        found: dict[str, Enumeration] = {}
        for one in self._all_specifiers():
            base: Expr | None = None
            step = 0
            for enumerator in one.enumerators or ():
                base, step = (enumerator.value, 0) if enumerator.value is not None else (base, step)
                found.setdefault(
                    enumerator.name,
                    Enumeration(
                        name=enumerator.name,
                        unit=self,
                        base=base,
                        step=step,
                        syntax=enumerator,
                        key=self.spelled(enumerator.start),
                    ),
                )
                step += 1
        return found

    def _all_specifiers(self) -> Iterator[Specifiers]:
        yield from self.syntax.specifiers
        for fields in self.records.values():
            for member in fields:
                yield member.type.specifiers

    @cached_property
    def functions(self) -> Mapping[str, Function]:
        """Functions with a body."""
        found: dict[str, Function] = {}
        for one in self.syntax.functions:
            head = self.translation.text[max(0, one.start - 200) : one.body_start]
            head = head[max(head.rfind(";", 0, 200), head.rfind("}", 0, 200)) + 1 :]
            found[one.name] = Function(
                name=one.name,
                unit=self,
                syntax=one,
                static="static" in one.type.specifiers.storage,
                weak="weak" in head,
                key=self.place(one.start),
            )
        return found

    @cached_property
    def prototypes(self) -> Mapping[str, Declarator]:
        """Functions declared without a body."""
        return {one.name: one for one in self.syntax.prototypes}

    @cached_property
    def variables(self) -> Mapping[str, Variable]:
        """Objects outside of functions; a definition hides a mere declaration."""
        found: dict[str, Variable] = {}
        for one in self.syntax.variables:
            made = self._variable(one)
            known = found.get(one.name)
            if known is None or known.declared_only or made.value is not None:
                found[one.name] = made
        return found

    def _variable(self, one: Declarator) -> Variable:
        storage = one.type.specifiers.storage
        key = self.place(one.start)
        scope = key.file if "static" in storage else ""
        return Variable(
            name=one.name,
            unit=self,
            syntax=one,
            location=Location(Root("object", one.name, scope)),
            type=self.type_of(one.type),
            constant="const" in one.type.specifiers.qualifiers
            and not any(isinstance(d, PointerTo) for d in one.type.derivations)
            or any(
                isinstance(d, PointerTo) and "const" in d.qualifiers
                for d in one.type.derivations[:1]
            ),
            declared_only="extern" in storage and one.value is None,
            key=key,
        )

    # --- types -----------------------------------------------------------------------------

    def type_of(self, syntax: TypeSyntax, depth: int = 0) -> ObjectType:
        """The type that declarations mean; array sizes are left to whoever can compute them."""
        if depth > _TYPE_DEPTH:
            return Strange(name="a type nested too deeply")
        made = self._base(syntax.specifiers, depth)
        for one in reversed(syntax.derivations):
            match one:
                case PointerTo():
                    made = Pointer(to=made)
                case ArrayOf():
                    made = Array(of=made, length=None)
                case FunctionOf():
                    made = Callable_(returns=made)
        return made

    def _base(self, specifiers: Specifiers, depth: int) -> ObjectType:
        if specifiers.record == "enum":
            return Arithmetic(type=self.model.unsigned)
        if specifiers.record is not None:
            return Record(kind=specifiers.record, tag=specifiers.tag or "", scope=self.path)
        words = specifiers.words
        if len(words) == 1 and words[0] in self.typedefs:
            return self.type_of(self.typedefs[words[0]], depth + 1)
        if words == ("void",):
            return Strange(name="")
        named = self.model.named(words)
        if named is not None:
            return Arithmetic(type=named)
        if not words and specifiers.storage | specifiers.qualifiers:
            return Arithmetic(type=self.model.int_)
        return Strange(name=" ".join(words))

    def member(self, record: Record, name: str) -> ObjectType | None:
        """The type of a member, looked for in unnamed inner records too."""
        for one in self.records.get(record.tag, ()):
            type_ = self.type_of(one.type)
            if one.name == name:
                return self._bit_field(one, type_)
            if not one.name and isinstance(type_, Record):
                inner = self.member(type_, name)
                if inner is not None:
                    return inner
        return None

    def _bit_field(self, member: Field, type_: ObjectType) -> ObjectType:
        if member.bits is None or not isinstance(type_, Arithmetic):
            return type_
        text = getattr(member.bits, "text", "")
        if not text.isdigit() or not 0 < int(text) <= type_.type.bits:
            return type_
        return Arithmetic(
            type=CType(
                name=f"{type_.type.name}:{text}",
                kind=Kind.INTEGER,
                bits=int(text),
                signed=type_.type.signed,
                rank=0,
            )
        )


def _trimmed(spans: Mapping[tuple[int, int], str], text: str) -> dict[tuple[int, int], str]:
    """Spans without the white space at their ends, as syntax nodes have them."""
    found: dict[tuple[int, int], str] = {}
    for (start, end), name in spans.items():
        inner = text[start:end]
        begin = start + len(inner) - len(inner.lstrip())
        found[begin, begin + len(inner.strip())] = name
    return found


@dataclass(kw_only=True)
class Program:
    """The tree as a set of names. Units are parsed when a name first asks for them."""

    tree: SourceTree
    model: DataModel
    defines: Mapping[str, str | None]
    limits: Limits
    marks: frozenset[str] = frozenset()
    units: dict[str, Unit] = field(default_factory=dict)
    _loaded: set[str] = field(default_factory=set)

    def load(self, name: str) -> None:
        """Bring in every unit that mentions the name, through macros and headers as well."""
        if name in self._loaded:
            return
        self._loaded.add(name)
        for file in self._units_for(name):
            self._unit(file)

    def defining(self, name: str) -> tuple[Function, ...]:
        """Every function of that name with external linkage, each once, strong ones first."""
        self.load(name)
        found = {
            unit.functions[name].key: unit.functions[name]
            for unit in self.units.values()
            if name in unit.functions and not unit.functions[name].static
        }
        strong = tuple(one for one in found.values() if not one.weak)
        return strong or tuple(found.values())

    def function(self, name: str, unit: Unit) -> tuple[Function, ...]:
        """The function a call in `unit` reaches; several when the tree defines it more than once."""
        own = unit.functions.get(name)
        if own is not None and not own.weak:
            return (own,)
        return self.defining(name)

    def variable(self, name: str, unit: Unit | None) -> Variable | None:
        """The object a name in `unit` means: the unit's own, else the one of external linkage."""
        own = unit.variables.get(name) if unit is not None else None
        if own is not None and (own.location.root.scope or not own.declared_only):
            return own
        self.load(name)
        found = [
            other.variables[name]
            for other in self.units.values()
            if name in other.variables
            and (unit is None or not other.variables[name].location.root.scope)
        ]
        defined = [one for one in found if not one.declared_only]
        valued = [one for one in defined if one.value is not None]
        return next(iter([*valued, *defined, *found]), own)

    def all_functions(self, name: str) -> tuple[Function, ...]:
        """Every function in a loaded unit whose body mentions the name, each once."""
        self.load(name)
        found: dict[Place, Function] = {}
        word = re.compile(rf"(?<![\w$]){re.escape(name)}(?![\w$])")
        for unit in self.units.values():
            if name not in unit.translation.text:
                continue
            text = unit.translation.text
            for one in unit.functions.values():
                if word.search(text, one.syntax.body_start, one.syntax.end):
                    found.setdefault(one.key, one)
        return tuple(found[key] for key in sorted(found))

    def _unit(self, file: SourceFile) -> Unit:
        if file.path not in self.units:
            translation = translate(self.tree, file, self.defines, self.limits)
            self.units[file.path] = Unit(translation, self.model, self.marks)
        return self.units[file.path]

    def _units_for(self, name: str) -> list[SourceFile]:
        found: dict[str, SourceFile] = {}
        seen = {name}
        pending = [name]
        while pending and len(seen) < 10_000:
            wanted = pending.pop()
            for file in self.tree.mentioning(wanted):
                for macro in self._macros_with(file, wanted):
                    if macro not in seen:
                        seen.add(macro)
                        pending.append(macro)
                if not file.path.endswith(".h"):
                    found[file.path] = file
                elif self._outside_defines(file, wanted):
                    for user in self._users(file):
                        found.setdefault(user.path, user)
        return [found[path] for path in sorted(found)]

    @staticmethod
    def _macros_with(file: SourceFile, word: str) -> list[str]:
        pattern = re.compile(rf"(?<![\w$]){re.escape(word)}(?![\w$])")
        return [m[1] for m in file.remembered(_defines) if pattern.search(m[2])]

    @staticmethod
    def _outside_defines(file: SourceFile, word: str) -> bool:
        pattern = re.compile(rf"(?<![\w$]){re.escape(word)}(?![\w$])")
        spans = [match.span() for match in file.remembered(_defines)]
        return any(
            not any(start <= match.start() < end for start, end in spans)
            for match in pattern.finditer(file.text)
        )

    def _users(self, header: SourceFile) -> list[SourceFile]:
        """One unit that includes a header, directly or not; the header itself where none does."""
        already = [u for u in self.units.values() if header.path in u.translation.included]
        if already:
            return []
        names = {header.path.rpartition("/")[2]}
        done: set[str] = set()
        while True:
            fresh: set[str] = set()
            for file in self.tree.files:
                if file.path in done:
                    continue
                if any(one.rpartition("/")[2] in names for one in file.remembered(_includes)):
                    if not file.path.endswith(".h"):
                        return [file]
                    done.add(file.path)
                    fresh.add(file.path.rpartition("/")[2])
            if fresh <= names:
                return [header]
            names |= fresh


def _defines(file: SourceFile) -> tuple[re.Match[str], ...]:
    return tuple(_DEFINE.finditer(file.text))


def _includes(file: SourceFile) -> tuple[str, ...]:
    return tuple(_INCLUDE.findall(file.text))
