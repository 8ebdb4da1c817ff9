"""Which functions matter."""

import pytest

from bitweight.errors import LimitReached
from bitweight.limits import Deadline
from bitweight.trace.flows import Flows
from bitweight.trace.runs import Runner
from tracing_cases import context_of

TREE = {
    "acq.c": "uint16_t adc_read(int n);\nuint16_t raw;\nvoid isr(void) { raw = adc_read(2); }\n",
    "tank.c": "extern uint16_t raw;\nint mv;\nvoid tank(void) { mv = raw * 2; }\n",
    "show.c": "extern int mv;\nvoid show(void) { draw(mv); }\n",
    "other.c": "int pump;\nvoid run_pump(void) { pump = 1; }\n",
    "macro.h": "#define READ_TANK() adc_read(2)\n",
    "user.c": '#include "macro.h"\nint t;\nvoid user(void) { t = READ_TANK(); }\n',
}


def flows(deadline: float = 60.0) -> Flows:
    """The flows of one reading through the tree above."""
    context = context_of(TREE, readings={"tank": ("adc_read(2)",)}, values=("mv",))
    return Flows(context=context, runner=Runner(context=context), deadline=Deadline(deadline))


def test_what_carries_a_reading_is_followed() -> None:
    """From the reading through objects to whoever uses them, and no further."""
    found = flows()
    runs = found.follow(found.start_names(), lambda *_: None)
    assert {run.function.name for run in runs} == {"isr", "tank", "show", "user"}
    assert {"raw", "mv", "t"} <= found.tainted


def test_names_to_start_from() -> None:
    """The reading's function and the wanted results; words of the pattern language are none."""
    assert flows().start_names() == {"adc_read", "mv"}


def test_progress_is_told() -> None:
    """Each name followed is announced with how many are known."""
    told: list[tuple[str, int, int]] = []
    found = flows()
    found.follow(found.start_names(), lambda *step: told.append(step))
    assert [step[1] for step in told] == list(range(1, len(told) + 1))
    assert all(done <= known for _, done, known in told)


def test_time_is_bounded() -> None:
    """When the processor time is used up, following stops with an error of its own."""
    found = flows(deadline=-1.0)
    with pytest.raises(LimitReached, match="processor time"):
        found.follow(found.start_names(), lambda *_: None)
