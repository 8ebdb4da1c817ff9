"""Findings of one cause become one, and all get their order."""

import facts
from bitweight.judge.findings import Level, Related, Replacement
from bitweight.judge.merging import merge, ordered
from facts import at, finding

ORDER = ["battery", "tank", "pump"]


def test_one_cause_is_one_finding() -> None:
    """A constant that spoils three channels is one finding that lists them as the board does."""
    merged = merge([finding(channels=(name,)) for name in ("pump", "tank", "battery")], ORDER)
    assert [one.channels for one in merged] == [("battery", "tank", "pump")]
    assert merged[0].channel is None


def test_worst_level_lends_its_words() -> None:
    """The merged finding has the highest level and its message."""
    small = finding(channels=("battery",), message="small")
    large = finding(channels=("tank",), level=Level.ERROR, message="large")
    (merged,) = merge([small, large], ORDER)
    assert (merged.level, merged.message) == (Level.ERROR, "large")


def test_related_are_joined_once() -> None:
    """Related places of all channels are kept, equal ones once, in board order."""
    shared = Related(place=at(1), message="used here")
    own = Related(place=at(2), message="used here")
    one = finding(channels=("tank",), related=(shared, own))
    two = finding(channels=("battery",), related=(shared,))
    (merged,) = merge([one, two], ORDER)
    assert merged.related == (shared, own)


def test_different_values_stay_apart() -> None:
    """What is expected differently for two channels is two causes."""
    assert len(merge([finding(), finding(channels=("pump",), expected="1022")], ORDER)) == 2


def test_accepted_stays_apart() -> None:
    """What is accepted for one channel stays open for another."""
    merged = merge([finding(deviation="known"), finding(channels=("pump",))], ORDER)
    assert {one.channels: one.deviation for one in merged} == {
        ("tank",): "known",
        ("pump",): None,
    }


def test_edits_that_differ_are_dropped() -> None:
    """An edit that not all channels agree on is no edit."""
    edits = [Replacement(place=at(3), end_column=22, text=text) for text in ("1", "2")]
    same = [finding(channels=(name,), replacement=edits[0]) for name in ("tank", "pump")]
    other = [finding(channels=("tank",), replacement=edit) for edit in edits]
    assert merge(same, ORDER)[0].replacement == edits[0]
    assert merge(other, ORDER)[0].replacement is None


def test_order() -> None:
    """Findings stand by file, line, column and rule."""
    expected = [
        finding("a", place=at(1, 1, "a.c")),
        finding("a", place=at(2, 1, "a.c")),
        finding("a", place=at(2, 3, "a.c")),
        finding("b", place=at(2, 3, "a.c")),
        finding("a", place=at(1, 1, "b.c")),
    ]
    assert list(ordered(reversed(expected))) == expected


def test_channelless_findings_stay_apart() -> None:
    """Two findings of no channel at one place with other words are two."""
    place = facts.at(9)
    first, second = (
        finding(channels=(), message=text, place=place, found="", expected="") for text in "ab"
    )
    assert len(merge([first, second], ORDER)) == 2
