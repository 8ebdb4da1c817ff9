"""Macros that the board file defines: define = { NAME = "value" }."""

import re
from dataclasses import dataclass

from bitweight.board.decoding.tables import Schema, described, shortened, wrong
from bitweight.documents import Scalar, Table, Value

_MACRO_BITS = 64
"""Widest whole number that a macro may stand for: that of C's widest type."""


@dataclass(frozen=True, slots=True)
class Definitions:
    """Macros to define: names with their replacement texts."""

    def decode(self, value: Value) -> tuple[tuple[str, str], ...]:
        """Name and text, in the order of the file."""
        if not isinstance(value, Table):
            message = f'expected a table like {{ NAME = "value" }}, found {described(value)}'
            raise wrong(value.place, message)
        found = []
        for name, key in value.keys.items():
            if not re.fullmatch(r"[A-Za-z_]\w*", name, re.ASCII):
                raise wrong(key.place, f"expected the name of a macro, found '{shortened(name)}'")
            found.append((name, _replacement(key.value)))
        return tuple(found)

    def schema(self) -> Schema:
        """An object of strings or numbers."""
        return {
            "type": "object",
            "additionalProperties": {"type": ["string", "integer", "boolean"]},
        }


def _replacement(value: Value) -> str:
    """What a macro is replaced by; true is 1 as `-D NAME` has it."""
    match value:
        case Scalar(value=bool() as flag):
            return "1" if flag else "0"
        case Scalar(value=int() as number) if number.bit_length() <= _MACRO_BITS:
            return str(number)
        case Scalar(value=int()):
            raise wrong(value.place, f"expected a number of at most {_MACRO_BITS} bits")
        case Scalar(value=str() as text):
            return text
        case _:
            raise wrong(value.place, f"expected a text in quotes, found {described(value)}")
