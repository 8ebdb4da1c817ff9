"""What a name means where it stands: a local, an enumerator, an object, a function, a register."""

from collections.abc import Mapping
from types import MappingProxyType

from bitweight.arithmetic.expressions import Expression, Literal
from bitweight.firmware.objects import Location, ObjectType, Root, Strange
from bitweight.firmware.syntax import Name, Node
from bitweight.firmware.units import Enumeration
from bitweight.trace.contexts import named
from bitweight.trace.joins import Joins
from bitweight.trace.memory import Routine, Value

_TRUTHS: Mapping[str, int] = MappingProxyType(
    {"true": 1, "false": 0, "TRUE": 1, "FALSE": 0, "NULL": 0, "nullptr": 0}
)
"""Names that mean a number where no header in reach defines them."""


class Names(Joins):
    """Evaluates names."""

    def name(self, node: Name) -> Value:
        """The value of a name."""
        local = self.frame.local(node.text)
        if local is not None:
            return self.read(*local, node)
        enumerator = self._enumerator(node.text)
        if enumerator is not None:
            return self._enumerated(enumerator, node)
        variable = self.context.program.variable(node.text, self.unit)
        if variable is not None:
            clash = self.clash(node.text)
            if clash is not None:
                return self.unknown(clash, node)
            return self.read(variable.location, self.object_type(variable), node)
        functions = self.context.program.function(node.text, self.unit)
        if functions:
            return Routine(name=node.text, function=functions[0] if len(functions) == 1 else None)
        number = self._well_known(node.text)
        if number is not None:
            return Literal(value=number, type=self.model.int_)
        return self.read(*self._register(node.text), node)

    def designated(self, node: Name) -> tuple[Location, ObjectType]:
        """The object a name designates: a register of that name where nothing declares it."""
        local = self.frame.local(node.text)
        if local is not None:
            return local
        variable = self.context.program.variable(node.text, self.unit)
        if variable is not None:
            return variable.location, self.object_type(variable)
        return self._register(node.text)

    def _register(self, name: str) -> tuple[Location, ObjectType]:
        type_ = self.vendor_type(name)
        return Location(Root("register", name)), type_ or Strange(name="")

    def _well_known(self, name: str) -> int | None:
        if name in _TRUTHS:
            return _TRUTHS[name]
        for family in self.context.families:
            if name in family.names:
                return family.names[name]
        return None

    def _enumerator(self, name: str) -> Enumeration | None:
        own = self.unit.enumerator(name)
        if own is not None:
            return own
        for unit in self.context.program.units.values():
            if name in unit.enumerators:
                return unit.enumerators[name]
        return None

    def _enumerated(self, one: Enumeration, node: Node) -> Expression:
        if one.base is None:
            return Literal(value=one.step, type=self.model.int_)
        base = self.elsewhere(one.unit, one.base)
        if one.step == 0:
            return named(base, one.name, self.used(node))
        value = self.context.constant(base)
        if value is None:
            return self.unknown(f"the value of {one.name} is not constant", node)
        return Literal(value=int(value) + one.step, type=self.model.int_)
