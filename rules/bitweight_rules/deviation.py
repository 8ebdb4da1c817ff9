"""Rule `deviation`: a deviation that is expired, has no reason or matches nothing.

What deviations do needs the findings of all other rules: `judge/deviations.py` reports under this
name.
"""

from collections.abc import Iterable

from bitweight.api import (
    Facts,
    Finding,
    TreeRule,
)


def check(facts: Facts) -> Iterable[Finding]:
    """Nothing: the findings to compare with do not exist yet when rules run."""
    return ()


RULE = TreeRule(
    name="deviation",
    summary="A deviation is expired, has no reason or matches nothing.",
    formula="until < today, or no reason, or no finding of its rule on its symbol, channel, file "
    "or line",
    source="common practice: a deviation is an accepted, recorded departure from a rule",
    check=check,
    levels="warning",
)
