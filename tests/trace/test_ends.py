"""The places a result may be taken from."""

import pytest

from bitweight.firmware.parsing import Parser, snippet
from bitweight.trace.ends import (
    consumed,
    event_ends,
    flow_ends,
    object_ends,
    path_of,
    wanted_ends,
)
from bitweight.trace.execution import Execution
from bitweight.trace.runs import Runner
from tracing_cases import HEAD, context_of

TEXT = (
    HEAD
    + """enum { SECOND = 1 };
struct dev { int level; int raw[2]; } dev, *pdev;
int inner(int x) { return x + 1; }
int outer(void) { return inner(3); }
void f(int *out) { int local = 4; dev.level = 1; dev.raw[1] = 2; *out = 5; pdev->level = 6;
send(7, local); mv = inner(local); }
"""
)


def setting(results: tuple[str, ...] = ()):  # type: ignore[no-untyped-def]
    """The context of the text above and the runs of all its functions."""
    context = context_of(TEXT, readings={"tank": ("adc()",)}, values=results)
    context.program.load("f")
    context.program.load("inner")
    runner = Runner(context=context)
    for function in context.program.units["main.c"].functions.values():
        runner.run(function)
    return context, runner.runs


def test_objects_that_outlive() -> None:
    """Globals, members and what pointers lead to; no locals."""
    _, runs = setting()
    results = {end.result for end in object_ends(runs)}
    assert {"dev.level", "dev.raw[1]", "out", "pdev->level", "mv"} <= results
    assert "local" not in results


def test_arguments_and_results_that_leave() -> None:
    """A result that the tree uses is no end; an argument of a function outside is one."""
    context, runs = setting()
    results = [end.result for end in flow_ends(runs, context) if end.kind != "object"]
    assert results == ["outer", "argument 1 of send()", "argument 2 of send()"]


@pytest.mark.parametrize(
    ("value", "results"),
    [
        ("dev.level", {"dev.level", "pdev->level"}),
        ("level", {"dev.level", "pdev->level"}),
        ("dev", {"dev.level", "dev.raw[1]"}),
        ("dev.raw[1]", {"dev.raw[1]"}),
        ("dev.raw[SECOND]", {"dev.raw[1]"}),
        ("dev.raw[0]", set()),
        ("pdev->level", {"pdev->level"}),
        ("*out", {"out"}),
        ("local", {"local"}),
        ("inner", {"inner"}),
        ("inner(local)", {"inner"}),
        ("inner(1, 2)", set()),
        ("5", set()),
    ],
)
def test_ends_that_a_value_names(value: str, results: set[str]) -> None:
    """Objects by path or member, locals and functions by name, calls by shape.

    A pointer may lead to the object: its member of the same name counts.
    """
    tree = Parser(snippet(value), is_type=lambda name: False).expression()
    assert tree is not None
    context, runs = setting(("local",))
    path = path_of(tree, Execution(context, context.program.units["main.c"]).plain_constant)
    assert {end.result for end in wanted_ends(runs, tree, path)} == results


def test_an_object_that_goes_on_is_consumed() -> None:
    """What another end reads is not where the flow stops."""
    context = context_of(HEAD + "int raw;\nvoid f(void) { mv = raw * 2; }\n")
    context.program.load("f")
    runner = Runner(context=context)
    runner.run(context.program.units["main.c"].functions["f"])
    (going_on,) = consumed(object_ends(runner.runs), context)
    assert str(going_on) == "raw"


def test_events_by_kind() -> None:
    """Calls, returns and arguments are noted with their function."""
    _, runs = setting()
    calls = list(event_ends(runs, frozenset({"call"})))
    assert {(end.result, end.function) for end in calls} >= {("inner", "f"), ("inner", "outer")}
