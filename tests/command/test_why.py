"""`bitweight why`."""

import pytest

from bitweight.command import why
from bitweight.command.options import WhyOptions
from bitweight.errors import UsageError
from bitweight.judge.rules import BY_EFFECT, ChannelRule, Rule, TreeRule

FULL_SCALE = ChannelRule(
    name="full-scale",
    summary="the full-scale count used is not the converter's",
    formula="V = code * reference / full_scale_count",
    source="IEEE 1241",
    check=lambda case, facts: (),
)
CONFLICT = TreeRule(
    name="conflicting-constant",
    summary="a constant is defined with different values that are both live, " * 2,
    formula="value(a) != value(b)",
    source="common practice",
    check=lambda facts: (),
    levels="warning",
)


@pytest.fixture(autouse=True)
def _two_rules(monkeypatch: pytest.MonkeyPatch) -> None:
    rules: tuple[Rule, ...] = (CONFLICT, FULL_SCALE)
    monkeypatch.setattr(why, "load_rules", lambda: rules)


def test_one_rule(capsys: pytest.CaptureFixture[str]) -> None:
    """A rule tells what it checks, how, which level follows and where that is from."""
    assert why.run_why(WhyOptions(rule="full-scale")) == 0
    text = capsys.readouterr().out
    labels = [line.split()[0] for line in text.splitlines() if line[0] != " "]
    assert labels == ["rule", "checks", "formula", "level", "source"]
    assert "V = code * reference / full_scale_count" in text
    assert f"level {BY_EFFECT}; a channel with a hazard" in " ".join(text.split())


def test_all_rules(capsys: pytest.CaptureFixture[str]) -> None:
    """Without a name all rules are listed with what they check, within 80 columns."""
    assert why.run_why(WhyOptions(rule=None)) == 0
    lines = capsys.readouterr().out.splitlines()
    assert [line.split()[0] for line in lines if line[0] != " "] == [CONFLICT.name, FULL_SCALE.name]
    assert max(map(len, lines)) <= 80


def test_a_near_name() -> None:
    """An unknown rule names the nearest ones."""
    with pytest.raises(UsageError, match="no rule 'fullscale'; did you mean full-scale"):
        why.run_why(WhyOptions(rule="fullscale"))


def test_a_far_name() -> None:
    """A name like no rule's says where the list is."""
    with pytest.raises(UsageError, match="bitweight why lists all"):
        why.run_why(WhyOptions(rule="zzz"))


def test_no_rules(monkeypatch: pytest.MonkeyPatch) -> None:
    """An installation without rules is not taken for one in which nothing is checked."""
    monkeypatch.setattr(why, "load_rules", tuple)
    with pytest.raises(UsageError, match="no rules are installed"):
        why.run_why(WhyOptions(rule=None))
