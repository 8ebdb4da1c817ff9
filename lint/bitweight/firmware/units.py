"""One translation unit, parsed: its functions, objects, enumerators and types."""

from collections.abc import Iterable, Iterator, Mapping
from copy import copy
from dataclasses import dataclass
from functools import cached_property

from bitweight.arithmetic.expressions import Expression
from bitweight.arithmetic.types import DataModel
from bitweight.firmware.declarations import Declarations
from bitweight.firmware.mentions import Mentions, addressed, mentions
from bitweight.firmware.objects import Arithmetic, Location, ObjectType, Record, Root
from bitweight.firmware.parsing import Parser, UnitSyntax, snippet
from bitweight.firmware.syntax import (
    Block,
    Declarator,
    Enumerator,
    Expr,
    Field,
    FunctionSyntax,
    PointerTo,
    Specifiers,
    TypeSyntax,
)
from bitweight.firmware.translation import TranslationUnit
from bitweight.places import Place

_OUTSIDE = ("enumerators", "functions", "variables", "prototypes")
_HEAD = 200
"""Characters before a function's name in which an attribute of its declaration is looked for."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Function:
    """A function with a body. `key` is where it is defined: one function however often included."""

    name: str
    unit: "Unit"
    syntax: FunctionSyntax
    static: bool
    weak: bool
    key: Place

    @property
    def identity(self) -> tuple[Place, str]:
        """Where it is defined and its name: one macro use may define several."""
        return self.key, self.name

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

    @property
    def only_reads(self) -> bool:
        """Whether nothing can be written through it: a number, or a pointer to const."""
        derived = self.syntax.type.derivations
        pointer = any(isinstance(one, PointerTo) for one in derived)
        if pointer:
            return "const" in self.syntax.type.specifiers.qualifiers
        return isinstance(self.type, Arithmetic)


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
        plain_trees: dict[str, Expr | None] | None = None,
    ) -> None:
        """`plain_trees` remembers expressions from outside that mean the same in every unit."""
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
        self.plain_trees = {} if plain_trees is None else plain_trees
        self.literals: dict[tuple[int, str], Expression] = {}
        self._local_enumerators: dict[str, Enumeration] = {}
        self._addressed: dict[str, frozenset[str]] = {}
        self._places: dict[int, tuple[Place, Place]] = {}
        self.declarations = Declarations(self.syntax, model, self.path)

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
        made = copy(self)
        # What is computed once, on demand, is taken over: the copy's text is another.
        made.__dict__.update({name: getattr(self, name) for name in _OUTSIDE})
        made.translation = self.translation.excerpt(snippet(source))
        made.parser = Parser(made.translation.text, is_type=self.parser.is_type)
        made._places = {}
        made.literals = {}
        return made

    @cached_property
    def enumerators(self) -> Mapping[str, Enumeration]:
        """Every enumerator of the unit."""
        found: dict[str, Enumeration] = {}
        for one in self.declarations.specifiers():
            for made in self._enumeration(one.enumerators or ()):
                found.setdefault(made.name, made)
        return found

    def learn(self, specifiers: Specifiers) -> None:
        """Take in the types and enumerators that a function declares."""
        self.declarations.learn(specifiers)
        for made in self._enumeration(specifiers.enumerators or ()):
            self._local_enumerators[made.name] = made

    def enumerator(self, name: str) -> Enumeration | None:
        """The enumerator of a name; one that a function declared hides those outside."""
        return self._local_enumerators.get(name) or self.enumerators.get(name)

    def _enumeration(self, enumerators: tuple[Enumerator, ...]) -> Iterator[Enumeration]:
        base: Expr | None = None
        step = 0
        for one in enumerators:
            if one.value is not None:
                base, step = one.value, 0
            key = self.spelled(one.start)
            yield Enumeration(name=one.name, unit=self, base=base, step=step, syntax=one, key=key)
            step += 1

    @cached_property
    def functions(self) -> Mapping[str, Function]:
        """Functions with a body."""
        return {one.name: self._function(one) for one in self.syntax.functions}

    def _function(self, one: FunctionSyntax) -> Function:
        head = self.translation.text[max(0, one.start - _HEAD) : one.body_start]
        head = head[max(head.rfind(";", 0, _HEAD), head.rfind("}", 0, _HEAD)) + 1 :]
        return Function(
            name=one.name,
            unit=self,
            syntax=one,
            static="static" in one.type.specifiers.storage,
            weak="weak" in head,
            key=self.place(one.start),
        )

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
            constant=_is_constant(one.type),
            declared_only="extern" in storage and one.value is None,
            key=key,
        )

    def addressed_by(self, name: str) -> frozenset[str]:
        """The names in the initialiser of an object."""
        if name not in self._addressed:
            value = self.variables[name].value
            self._addressed[name] = addressed(value) if value is not None else frozenset()
        return self._addressed[name]

    # --- types -----------------------------------------------------------------------------

    @property
    def records(self) -> Mapping[str, tuple[Field, ...]]:
        """Members by tag, of every struct and union that is declared with a body."""
        return self.declarations.records

    def type_of(self, syntax: TypeSyntax) -> ObjectType:
        """The type that declarations mean; array sizes are left to whoever can compute them."""
        return self.declarations.type_of(syntax)

    def member(self, record: Record, name: str) -> ObjectType | None:
        """The type of a member, looked for in unnamed inner records too."""
        return self.declarations.member(record, name)

    def member_place(self, record: Record, name: str) -> Place | None:
        """Where a member is declared."""
        start = self.declarations.member_start(record, name)
        return self.spelled(start) if start is not None else None


def _is_constant(type_: TypeSyntax) -> bool:
    """Whether an object of the type is const itself, not only what it points to."""
    outermost = next(iter(type_.derivations), None)
    if isinstance(outermost, PointerTo):
        return "const" in outermost.qualifiers
    pointed = any(isinstance(one, PointerTo) for one in type_.derivations)
    return "const" in type_.specifiers.qualifiers and not pointed


def _trimmed(spans: Mapping[tuple[int, int], str], text: str) -> dict[tuple[int, int], str]:
    """Spans without the white space at their ends, as syntax nodes have them."""
    found: dict[tuple[int, int], str] = {}
    for (start, end), name in spans.items():
        inner = text[start:end]
        begin = start + len(inner) - len(inner.lstrip())
        found[begin, begin + len(inner.strip())] = name
    return found
