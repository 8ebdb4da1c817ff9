"""What all runs through the firmware share: program, target, patterns, placeholders."""

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property

from bitweight.arithmetic.building import Folder
from bitweight.arithmetic.expressions import Code, Expression, Leaf, Literal
from bitweight.arithmetic.literals import literal
from bitweight.arithmetic.types import CType, DataModel
from bitweight.firmware.objects import Arithmetic, Array, Location, ObjectType, Record, Root
from bitweight.firmware.outlines import line_comment
from bitweight.firmware.symbols import Program
from bitweight.firmware.syntax import Expr, TypeSyntax
from bitweight.firmware.units import Function, Unit, Variable
from bitweight.limits import Limits
from bitweight.places import Place
from bitweight.trace.escapes import Escapes
from bitweight.trace.families import Family
from bitweight.trace.initialisers import Parts
from bitweight.trace.memory import Input
from bitweight.trace.patterns import Pattern, head, parsed

_MOST_CALLEES = 200
"""Functions looked through for what one that is not followed may write."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """Where a channel's code enters. `type` is that of a raw word which the C does not declare."""

    pattern: Pattern
    channels: tuple[str, ...]
    type: CType


@dataclass(frozen=True, slots=True, kw_only=True)
class Given:
    """A C expression whose value the board file states."""

    pattern: Pattern
    value: float | int


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Wanted:
    """A pattern as one unit reads it: its tree with that unit's macros expanded."""

    tree: Expr
    source: Reading | Given


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Declared:
    """An object with static storage: its type and initialiser, and the unit that declares it.

    `function` is where a static local stands; `constant` whether it is const.
    """

    name: str
    type: ObjectType
    written: TypeSyntax
    value: Expr | None
    unit: Unit
    function: Function | None
    constant: bool
    declared_only: bool
    key: Place


@dataclass(kw_only=True)
class Context:
    """Shared by all runs of one tracing. Placeholders and parsed patterns are remembered here."""

    program: Program
    model: DataModel
    limits: Limits
    families: tuple[Family, ...]
    readings: tuple[Reading, ...]
    givens: tuple[Given, ...]
    results: frozenset[str] = frozenset()
    folder: Folder = field(init=False)
    inputs: dict[int, Input] = field(default_factory=dict)
    _kept: list[Expression] = field(default_factory=list)
    _objects: dict[tuple[Location, ObjectType], Code] = field(default_factory=dict)
    statics: dict[Root, Declared] = field(default_factory=dict)
    members: dict[Record, tuple[tuple[str, ObjectType], ...]] = field(default_factory=dict)
    """Members of records with their types, in order."""
    sharing: dict[Location, tuple[Location, ...]] = field(default_factory=dict)
    """For members of unions, the members that share their storage."""
    lost: dict[Root, str] = field(default_factory=dict)
    """What stands for objects that something not followed has changed, with the reason."""
    seen: dict[str, Place] = field(default_factory=dict)
    """Where each channel's code was read first."""
    initialisers: dict[int, tuple[Expr, Parts | None]] = field(default_factory=dict)
    in_progress: dict[Root, set[tuple[str | int, ...]]] = field(default_factory=dict)
    reading_objects: dict[str, list[tuple[Location, Wanted]]] = field(default_factory=dict)
    """The objects that readings name, by unit."""
    pattern_constants: dict[tuple[str, int], tuple[Expr, int | float | None]] = field(
        default_factory=dict
    )
    _declared: dict[Root, Declared | None] = field(default_factory=dict)
    _fixed: dict[Root, bool] = field(default_factory=dict)
    _members_fixed: dict[Location, bool] = field(default_factory=dict)
    _wanted: dict[str, Mapping[tuple[str, str], tuple[Wanted, ...]]] = field(default_factory=dict)
    _comments: dict[tuple[str, int], str] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.folder = Folder(self.model)

    def constant(self, expression: Expression) -> int | float | None:
        """The C value of an expression without readings or placeholders."""
        return self.folder.constant(expression)

    # --- patterns --------------------------------------------------------------------------

    def wanted(self, unit: Unit) -> Mapping[tuple[str, str], tuple[Wanted, ...]]:
        """The board file's expressions as this unit reads them, by their head."""
        if unit.path not in self._wanted:
            found: dict[tuple[str, str], list[Wanted]] = {}
            sources: tuple[Reading | Given, ...] = (*self.readings, *self.givens)
            for source in sources:
                tree = parsed(source.pattern.text, unit)
                if tree is not None:
                    found.setdefault(head(tree), []).append(Wanted(tree=tree, source=source))
            self._wanted[unit.path] = {key: tuple(some) for key, some in found.items()}
        return self._wanted[unit.path]

    @cached_property
    def reading_names(self) -> frozenset[str]:
        """Every identifier that a reading mentions."""
        return frozenset(name for one in self.readings for name in one.pattern.names)

    @cached_property
    def names_objects(self) -> bool:
        """Whether any reading may be the name of an object rather than a call."""
        return any("(" not in one.pattern.text for one in self.readings)

    @cached_property
    def registers(self) -> tuple[str, ...]:
        """The registers of the families whose contents matter where a reading is taken."""
        return tuple(sorted({one.register for family in self.families for one in family.fields}))

    # --- objects ---------------------------------------------------------------------------

    def declared(self, location: Location, unit: Unit | None) -> Declared | None:
        """The declaration of an object with static storage."""
        root = location.root
        if root in self.statics:
            return self.statics[root]
        if root.kind != "object":
            return None
        if root not in self._declared:
            variable = self.program.variable(root.name, unit)
            if variable is None or variable.location.root != root:
                variable = next(
                    (
                        one.variables[root.name]
                        for one in self.program.units.values()
                        if root.name in one.variables
                        and one.variables[root.name].location.root == root
                    ),
                    None,
                )
            self._declared[root] = _declared(variable) if variable is not None else None
        return self._declared[root]

    def is_fixed(self, location: Location, declared: Declared) -> bool:
        """Whether an object keeps its initialiser: const, or never written in the sources."""
        root = location.root
        if root not in self._fixed:
            self._fixed[root] = declared.value is not None and (
                declared.constant or not self.writers(root, declared)
            )
        return self._fixed[root] or (declared.value is not None and self._keeps(location, declared))

    def _keeps(self, location: Location, declared: Declared) -> bool:
        """Whether a member keeps its initialiser in an object whose address is handed on."""
        if not location.path or declared.function is not None:
            return False
        if location not in self._members_fixed:
            root = location.root
            names = (root.name, *self._aliases(root.name))
            users = {
                one.identity: one for name in names for one in self.program.all_functions(name)
            }
            found = self.escapes.keeps(location.path, names, tuple(users.values()))
            self._members_fixed[location] = found
        return self._members_fixed[location]

    @cached_property
    def escapes(self) -> Escapes:
        """What becomes of the addresses of objects."""
        return Escapes(program=self.program)

    def writers(self, root: Root, declared: Declared | None) -> tuple[Function, ...]:
        """The functions that write an object, or hand out its address."""
        whole = declared is None or isinstance(declared.type, Array)
        if declared is not None and declared.function is not None:
            own: tuple[Function, ...] = (declared.function,)
            return own if self._touches(declared.function, root, whole) else ()
        found = {
            one.identity: one
            for one in self.program.all_functions(root.name)
            if self._touches(one, root, whole)
        }
        for alias in self._aliases(root.name):
            for one in self.program.all_functions(alias):
                if alias in one.mentions.changes:
                    found.setdefault(one.identity, one)
        return tuple(found[key] for key in sorted(found))

    def _aliases(self, name: str) -> tuple[str, ...]:
        """Objects whose initialiser takes the address of an object: a way to write it."""
        self.program.load(name)
        found: dict[str, None] = {}
        for unit in self.program.units.values():
            for one in unit.variables.values():
                if name in unit.addressed_by(one.name) and not one.only_reads:
                    found[one.name] = None
        return tuple(found)

    def written_names(self, function: Function) -> frozenset[str]:
        """The objects that a function may write, itself or by what it calls, by name."""
        found: set[str] = set()
        seen: set[tuple[Place, str]] = set()
        pending = [function]
        while pending and len(seen) < _MOST_CALLEES:
            one = pending.pop()
            if one.identity in seen:
                continue
            seen.add(one.identity)
            found |= one.mentions.writes | one.mentions.through | one.mentions.addressed
            for name in one.mentions.calls:
                pending.extend(self.program.function(name, one.unit))
        return frozenset(found)

    def _touches(self, function: Function, root: Root, whole: bool) -> bool:
        seen = function.mentions
        name = root.name
        if name not in (seen.changes if whole else seen.writes | seen.addressed):
            return False
        if root in self.statics or root.kind != "object":
            return True
        variable = self.program.variable(name, function.unit)
        return variable is not None and variable.location.root == root

    # --- placeholders ----------------------------------------------------------------------

    def _placeholder(self, text: str, type_: CType, place: Place, made: Input) -> Code:
        node = Code(channels=(), text=text, type=type_, place=place)
        self.inputs[id(node)] = made
        self._kept.append(node)
        return node

    def unknown(
        self, reason: str, place: Place, type_: CType | None = None, text: str = "?"
    ) -> Code:
        """A value that is not followed; the reason is for the user."""
        made = Input(kind="unknown", reason=reason, place=place)
        return self._placeholder(text, type_ or self.model.int_, place, made)

    def object(self, location: Location, type_: ObjectType, place: Place) -> Code:
        """The value an object has when the run starts."""
        if (location, type_) not in self._objects:
            number = type_.type if isinstance(type_, Arithmetic) else self.model.int_
            made = Input(kind="object", reason="", location=location, type=type_, place=place)
            node = self._placeholder(shown(location), number, place, made)
            self._objects[location, type_] = node
        return self._objects[location, type_]

    def parameter(self, function: Function, index: int, name: str, type_: CType) -> Code:
        """The value of a parameter that no followed call gives."""
        made = Input(
            kind="parameter", reason="", function=function, index=index, place=function.key
        )
        return self._placeholder(name, type_, function.key, made)

    # --- constants as written ----------------------------------------------------------------

    def literal(self, unit: Unit, start: int, text: str) -> Expression:
        """A constant with the place it is spelled at; a placeholder where it is none of C."""
        key = (start, text)
        if key not in unit.literals:
            unit.literals[key] = self._literal(unit, start, text)
        return unit.literals[key]

    def _literal(self, unit: Unit, start: int, text: str) -> Expression:
        origin = unit.translation.origin(start)
        try:
            value, type_ = literal(text, self.model)
        except ValueError:
            return self.unknown(f"{text} is not read as a constant", origin.use)
        leaf = Leaf(
            name=self._own_name(unit, start, origin.macro, text),
            text=text,
            place=origin.place,
            end_column=origin.place.column + len(text),
            use=origin.use,
            names=self._speaking(unit, start, origin.names),
            comment=self._comment(origin.place),
        )
        return Literal(value=value, type=type_, leaf=leaf)

    @staticmethod
    def _own_name(unit: Unit, start: int, macro: str | None, text: str) -> str | None:
        """The macro whose whole replacement is this constant, parentheses and sign aside."""
        if macro is None:
            return None
        definition = unit.translation.macros.at(start).get(macro)
        if definition is None:
            return None
        body = [token.text for token in definition.body if token.text not in ("(", ")", "-", "+")]
        return macro if body == [text] else None

    @staticmethod
    def _speaking(unit: Unit, start: int, names: tuple[str, ...]) -> tuple[str, ...]:
        """The macros that stand for a value: one with parameters says nothing of its constants."""
        definitions = unit.translation.macros.at(start)
        return tuple(
            name
            for name in names
            if (macro := definitions.get(name)) is None or macro.parameters is None
        )

    def _comment(self, place: Place) -> str:
        key = (place.file, place.line)
        if key not in self._comments:
            file = self.program.tree.file(place.file)
            self._comments[key] = line_comment(file, place.line) if file is not None else ""
        return self._comments[key]


def _declared(variable: Variable) -> Declared:
    return Declared(
        name=variable.name,
        type=variable.type,
        written=variable.syntax.type,
        value=variable.value,
        unit=variable.unit,
        function=None,
        constant=variable.constant,
        declared_only=variable.declared_only,
        key=variable.key,
    )


def named(value: Expression, name: str, use: Place) -> Expression:
    """The constant of an initialiser under the name of its object, used at `use`."""
    if isinstance(value, Literal) and value.leaf is not None:
        own = value.leaf.name or name
        leaf = replace(value.leaf, name=own, names=(*value.leaf.names, name), use=use)
        return replace(value, leaf=leaf)
    return value


def shown(location: Location) -> str:
    """An object as C text."""
    if location.root.kind == "pointee" and location.path:
        first, *rest = location.path
        text = (
            f"{location.root.name}->{first}"
            if isinstance(first, str)
            else (f"{location.root.name}[{first}]")
        )
        return str(Location(type(location.root)("", text), tuple(rest)))
    return str(location)
