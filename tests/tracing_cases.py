"""C text to traces for the tests of this folder; nothing is read from disk."""

import math
from collections.abc import Mapping, Sequence

import numpy as np

from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Code, Expression
from bitweight.arithmetic.types import DataModel
from bitweight.arithmetic.values import FaultKind
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.symbols import Program
from bitweight.limits import Deadline, Limits
from bitweight.places import Place
from bitweight.trace.contexts import Context, Given, Reading
from bitweight.trace.conversions import Conversion, Trace
from bitweight.trace.families import Family
from bitweight.trace.patterns import pattern
from bitweight.trace.tracing import Aim, Tracer

Sources = str | Mapping[str, str]
"""The text of `main.c`, or texts by file name."""
INT32 = DataModel()
"""A target with an int of 32 bits and a double of 64."""
BOARD = Place("board.toml", 1)
UNKNOWN = math.nan
"""Stands for a value at a code that depends on something unknown."""
CODES = (100, 4000)
"""The codes at which tables of expected values give what the C computes."""
HEAD = "uint16_t adc(void);\nint flag(void);\nint mv;\n"
"""What the short sources of the tables begin with: a reading, something unknown, a result."""


def context_of(
    sources: Sources,
    *,
    readings: Mapping[str, Sequence[str]] | None = None,
    values: Sequence[str] = (),
    given: Mapping[str, int | float] | None = None,
    model: DataModel = INT32,
    families: tuple[Family, ...] = (),
    limits: Limits | None = None,
) -> Context:
    """What the runs over these sources share; `readings` gives expressions by channel."""
    texts = {"main.c": sources} if isinstance(sources, str) else sources
    tree = SourceTree.of(*(SourceFile(path, text) for path, text in texts.items()))
    names = frozenset(name for text in values for name in pattern(text, BOARD).names)
    limits = limits or Limits()
    return Context(
        program=Program(tree=tree, model=model, defines={}, limits=limits, marks=names),
        model=model,
        limits=limits,
        families=families,
        readings=tuple(
            Reading(
                pattern=pattern(text, BOARD), channels=(channel,), type=model.integer(16, False)
            )
            for channel, texts in (readings or {}).items()
            for text in texts
        ),
        givens=tuple(
            Given(pattern=pattern(text, BOARD), value=value)
            for text, value in (given or {}).items()
        ),
        results=names,
    )


def traced(
    sources: Sources,
    reading: str = "adc()",
    value: str | Sequence[str] = (),
    *,
    given: Mapping[str, int | float] | None = None,
    others: Mapping[str, str] | None = None,
    model: DataModel = INT32,
    families: tuple[Family, ...] = (),
    limits: Limits | None = None,
) -> Trace:
    """The trace of the channel `tank`; `others` are the readings of further channels."""
    values = (value,) if isinstance(value, str) else tuple(value)
    further = {name: (text,) for name, text in (others or {}).items()}
    context = context_of(
        sources,
        readings={"tank": (reading,), **further},
        values=values,
        given=given,
        model=model,
        families=families,
        limits=limits,
    )
    aim = Aim(
        channel="tank",
        readings=context.readings[:1],
        values=tuple(pattern(text, BOARD) for text in values),
        place=BOARD,
    )
    tracer = Tracer(context=context, deadline=Deadline(60.0))
    return tracer.trace((aim,), lambda *_: None)[0]


def conversion(sources: Sources, reading: str = "adc()", value: str = "mv") -> Conversion:
    """The only conversion of the channel; fails with the reason where there is none."""
    trace = traced(sources, reading, value)
    assert trace.reason is None, trace.reason
    assert len(trace.conversions) == 1, [one.formula for one in trace.conversions]
    return trace.conversions[0]


def at_codes(
    expression: Expression, codes: Sequence[int], others: Mapping[str, int] | None = None
) -> list[int | float]:
    """What an expression computes at some codes of `tank`; other channels stand at one code.

    NaN where it depends on something unknown.
    """
    fixed = others or {}

    def read(node: Code) -> np.ndarray[tuple[int, ...], np.dtype[np.int64]]:
        other = next((fixed[name] for name in node.channels if name in fixed), None)
        words = codes if other is None else [other] * len(codes)
        return np.array(words, dtype=np.int64)

    curve = evaluate(expression, read)
    unknown = np.broadcast_to(curve.faulty(FaultKind.UNKNOWN), (len(codes),))
    values = np.broadcast_to(curve.values, (len(codes),))
    return [
        UNKNOWN if hidden else value.item() for value, hidden in zip(values, unknown, strict=True)
    ]


def entry(body: str, before: str = "") -> str:
    """A source whose function `entry` has this body, behind other definitions."""
    return f"{HEAD}{before}\nvoid entry(void)\n{{\n{body}\n}}\n"


def outcome(
    sources: Sources, reading: str = "adc()", value: str | Sequence[str] = "mv"
) -> str | list[tuple[int | float, ...]]:
    """The values at `CODES`, a tuple for each conversion; the reason where there is none."""
    trace = traced(sources, reading, value)
    if trace.reason is not None:
        return trace.reason
    return [tuple(at_codes(one.expression, CODES)) for one in trace.conversions]


Expected = tuple[int | float, int | float] | str
"""The values at `CODES`, or a part of the reason why there are none."""


def check(
    sources: Sources,
    expected: Expected,
    reading: str = "adc()",
    value: str | Sequence[str] = "mv",
) -> None:
    """Assert that one conversion computes these values, or that it is not traced for the reason."""
    found = outcome(sources, reading, value)
    if isinstance(expected, str):
        assert isinstance(found, str), found
        assert expected in found
    else:
        assert repr(found) == repr([expected])
