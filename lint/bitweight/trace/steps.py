"""The stops on the way from a reading to a result, in the order of the computation."""

from collections.abc import Iterable

from bitweight.arithmetic.expressions import Choose, Code, Convert, Expression, Purpose
from bitweight.places import Place
from bitweight.trace.conversions import Step

_MOST_STEPS = 12
_CONVERSIONS = {Purpose.STORE: "stored", Purpose.ARGUMENT: "passed", Purpose.RETURN: "returned"}


def steps(nodes: Iterable[Expression], result: str, place: Place) -> tuple[Step, ...]:
    """A step for each place where something happens; `place` is where `result` gets its value."""
    found: dict[Place, str] = {}
    for node in nodes:
        match node:
            case Code():
                found.setdefault(node.place, f"the code is read: {node.text}")
            case Convert() if node.purpose in _CONVERSIONS:
                found.setdefault(node.place, f"{_CONVERSIONS[node.purpose]} as {node.type.name}")
            case Choose():
                found.setdefault(node.place, "decided by a condition")
            case _:
                pass
    found.setdefault(place, f"the result: {result}")
    made = [Step(place=place, message=message) for place, message in found.items()]
    return tuple(made[:_MOST_STEPS])
