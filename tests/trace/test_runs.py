"""One function followed on its own."""

from bitweight.firmware.objects import Location, Root
from bitweight.limits import Limits
from bitweight.trace.memory import is_number
from bitweight.trace.runs import Run, Runner
from tracing_cases import HEAD, context_of


def run(text: str, limits: Limits | None = None) -> Run:
    """The run of the function `f` of a text."""
    context = context_of(HEAD + text, readings={"tank": ("adc()",)}, limits=limits)
    context.program.load("f")
    return Runner(context=context).run(context.program.units["main.c"].functions["f"])


def names(found: Run) -> set[str]:
    """What a run writes, by name."""
    return {str(location) for location in found.writes}


def test_a_run_leaves_what_outlives_it() -> None:
    """Objects and what pointers lead to are written; locals are not."""
    found = run("struct s { int m; } g;\nvoid f(int *p) { int t = 1; *p = t; g.m = 2; mv = 3; }")
    assert names(found) == {"p", "g.m", "mv"}
    assert found.reason is None
    assert not found.near


def test_parameters_are_open() -> None:
    """A number is a placeholder of its parameter, a pointer leads to a place of its name."""
    found = run("void f(int v, int *p) { *p = v; }")
    ((value,),) = found.writes.values()
    assert is_number(value)
    ((location),) = found.writes
    assert location.root.kind == "pointee"


def test_a_reading_may_hang_on_a_parameter() -> None:
    """A call that would be a reading for some argument marks the run."""
    context = context_of(
        "uint16_t get(int n);\nint f(int n) { return get(n); }\n", readings={"tank": ("get(2)",)}
    )
    context.program.load("f")
    function = context.program.units["main.c"].functions["f"]
    assert Runner(context=context).run(function).near


def test_every_turn_of_a_main_loop_counts() -> None:
    """What an endless loop leaves at the end of a turn is written."""
    found = run("int a;\nvoid f(void) { a = 1; for (;;) { mv = adc(); } }")
    assert {"mv", "a"} <= names(found)


def test_each_function_is_followed_once() -> None:
    """The second asking gives the same run, in the order of places with others."""
    context = context_of(HEAD + "void g(void) { mv = 1; }\nvoid f(void) { mv = 2; }\n")
    context.program.load("f")
    functions = context.program.units["main.c"].functions
    runner = Runner(context=context)
    assert runner.run(functions["f"]) is runner.run(functions["f"])
    runner.run(functions["g"])
    assert [one.function.name for one in runner.runs] == ["g", "f"]


def test_a_run_that_ends_early_says_why() -> None:
    """Out of steps, or with code that is not followed, the run has a reason."""
    long = run("void f(void) { for (int i = 0; i < 4000; i++) mv++; }", Limits(steps=200))
    assert long.reason == "f(): the code is too long to follow (200 steps)"
    assert run("void f(void) { back: mv++; goto back; }").reason is not None


def test_what_is_handed_out_is_kept() -> None:
    """What an object held when its address left the sources is known apart."""
    found = run("struct s { int m; } g;\nvoid f(void) { g.m = 5; send(&g); }")
    place = Location(Root("object", "g"), ("m",))
    assert place in found.handed
