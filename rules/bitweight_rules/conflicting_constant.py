"""Rule `conflicting-constant`: one name holds different values that are all live."""

from collections.abc import Iterator

from bitweight.api import (
    Conflict,
    Definition,
    Facts,
    Finding,
    Level,
    Related,
    TreeRule,
    listed,
)


def check(facts: Facts) -> Iterator[Finding]:
    """One finding for each name, on its last definition; the others are related."""
    order = {channel.name: index for index, channel in enumerate(facts.board.channels)}
    for conflict in facts.conflicts:
        channels = sorted(set(conflict.channels) & order.keys(), key=order.__getitem__)
        if channels and len(conflict.definitions) > 1:
            yield _finding(conflict, tuple(channels))


def _finding(conflict: Conflict, channels: tuple[str, ...]) -> Finding:
    *others, last = sorted(conflict.definitions, key=lambda one: one.place)
    values = tuple(dict.fromkeys(_value(one) for one in (*others, last)))
    return Finding(
        rule=RULE.name,
        level=Level.WARNING,
        channels=channels,
        message=f"{conflict.name} is defined as {listed(values)}; which one holds depends on the "
        "file",
        place=last.place,
        found=" / ".join(values),
        expected="one value",
        related=tuple(
            Related(place=one.place, message=f"defined as {_value(one)} here") for one in others
        ),
    )


def _value(definition: Definition) -> str:
    return " ".join(definition.text.split())[:40] or "nothing"


RULE = TreeRule(
    name="conflicting-constant",
    summary="A constant of a channel is defined with different values that are both live.",
    formula="definitions of one name, under the board's macros, with more than one value; names "
    "local "
    "to one file are no conflict",
    source="C11 6.10.3p2 (redefinition of macros); common practice",
    check=check,
    levels="warning",
)
