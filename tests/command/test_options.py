"""The command line as facts."""

from datetime import date

import pytest

from bitweight.command.options import (
    VerifyOptions,
    VersionOptions,
    WhyOptions,
    parse_options,
)
from bitweight.errors import UsageError


def verify(*arguments: str) -> VerifyOptions:
    """The options of a `verify` line."""
    options = parse_options(["verify", *arguments])
    assert isinstance(options, VerifyOptions)
    return options


def test_the_shortest_line() -> None:
    """A board file is enough; everything else has its default."""
    assert verify("--board", "b.toml") == VerifyOptions(
        board="b.toml",
        sources=(),
        defines=(),
        includes=(),
        variant=None,
        channel=None,
        gate="warning",
        plain=False,
        json=None,
        today=None,
    )


def test_the_longest_line() -> None:
    """All options are taken, repeated ones in their order."""
    assert verify(
        *("src", "--board", "b.toml", "-D", "REV=3", "-DFAST", "-I", "inc", "-Ihal"),
        *("--variant", "heavy", "--channel", "tank", "--gate", "error", "--plain"),
        *("--json", "-", "--today", "2027-06-30", "--no-cache"),
    ) == VerifyOptions(
        board="b.toml",
        sources=("src",),
        defines=("REV=3", "FAST"),
        includes=("inc", "hal"),
        variant="heavy",
        channel="tank",
        gate="error",
        plain=True,
        json="-",
        today=date(2027, 6, 30),
    )


ORDERS = {
    "before": ["a.c", "b.c", "--board", "x.toml"],
    "after": ["--board", "x.toml", "a.c", "b.c"],
    "around": ["a.c", "--board", "x.toml", "b.c"],
    "behind a separator": ["--board", "x.toml", "--", "a.c", "b.c"],
}


@pytest.mark.parametrize("arguments", ORDERS.values(), ids=ORDERS.keys())
def test_sources_stand_anywhere(arguments: list[str]) -> None:
    """Sources may stand before, after and around the options."""
    assert verify(*arguments).sources == ("a.c", "b.c")


WRONG = {
    "nothing": ([], "a command is needed"),
    "unknown command": (["check"], "invalid choice: 'check'"),
    "unknown option": (["verify", "--board", "b", "--fast"], "unrecognized arguments: --fast"),
    "abbreviated option": (["verify", "--boa", "b"], "--board"),
    "no board": (["verify", "src"], "the following arguments are required: --board"),
    "board without a name": (["verify", "--board"], "expected one argument"),
    "empty board": (["verify", "--board", ""], "a name is needed"),
    "empty source": (["verify", "", "--board", "b"], "a name is needed"),
    "NUL": (["verify", "--board", "b\0"], "NUL"),
    "define without a name": (["verify", "--board", "b", "-D", "=3"], "expected NAME"),
    "define with an operator": (["verify", "--board", "b", "-DA-B"], "expected NAME"),
    "gate": (["verify", "--board", "b", "--gate", "fatal"], "invalid choice: 'fatal'"),
    "day": (["verify", "--board", "b", "--today", "30.6."], "expected a date like 2027-06-30"),
    "impossible day": (["verify", "--board", "b", "--today", "2027-02-30"], "expected a date"),
    "not built yet": (["verify", "--board", "b", "--sarif", "x"], "unrecognized arguments"),
    "two rules": (["why", "a", "b"], "unrecognized arguments: b"),
}


@pytest.mark.parametrize(("arguments", "words"), WRONG.values(), ids=WRONG.keys())
def test_a_bad_line_says_what_is_wrong(arguments: list[str], words: str) -> None:
    """A bad command line is a usage error that names what is wrong and where help is."""
    with pytest.raises(UsageError, match=words.replace("(", r"\(")) as caught:
        parse_options(arguments)
    assert "--help" in str(caught.value)


def test_why_and_version() -> None:
    """The other commands have their own facts."""
    assert parse_options(["why"]) == WhyOptions(rule=None)
    assert parse_options(["why", "full-scale"]) == WhyOptions(rule="full-scale")
    assert parse_options(["--version"]) == VersionOptions()


@pytest.mark.parametrize("arguments", [["--help"], ["verify", "-h"], ["why", "--help"]])
def test_help(arguments: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    """Help is printed and the program leaves well."""
    with pytest.raises(SystemExit) as leave:
        parse_options(arguments)
    assert leave.value.code == 0
    assert capsys.readouterr().out.startswith("usage: bitweight")
