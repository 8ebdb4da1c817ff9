"""Patterns of the board file as text and as trees."""

import pytest

from bitweight.firmware.parsing import Parser, snippet
from bitweight.firmware.syntax import Expr, Name, Number
from bitweight.places import Place
from bitweight.trace.patterns import delivered, head, matches, parsed, pattern
from tracing_cases import BOARD, context_of

IDS = {"IDX": 2, "OTHER": 3}


def tree(text: str) -> Expr:
    """The tree of a pattern as it stands."""
    plain = text.replace("$any", "bitweight_any_").replace("$code", "bitweight_code_")
    found = Parser(snippet(plain), is_type=lambda name: name == "word").expression()
    assert found is not None
    return found


def constant(node: Expr) -> int | float | None:
    """Constants of the tables below: numbers and two names."""
    match node:
        case Number():
            return int(node.text, 0)
        case Name():
            return IDS.get(node.text)
        case _:
            return None


@pytest.mark.parametrize(
    ("wanted", "given", "same"),
    [
        ("raw", "raw", True),
        ("raw", "raw2", False),
        ("adc_read(2)", "adc_read(IDX)", True),
        ("adc_read(2)", "adc_read(OTHER)", False),
        ("adc_read(2)", "adc_read(2, 0)", False),
        ("adc_read(IDX)", "adc_get(2)", False),
        ("adc_read($any)", "adc_read(f(x) + 1)", True),
        ("adc_read(x)", "adc_read(x)", True),
        ("adc_read(x)", "adc_read(y)", False),
        ("buf[0x2]", "buf[IDX]", True),
        ("dev->raw", "(*dev).raw", True),
        ("dev->raw", "dev.raw", False),
        ("*&raw", "raw", True),
        ("-x", "+x", False),
        ("a + b", "a + b", True),
        ("a + b", "b + a", False),
        ("(word)raw", "(word)raw", True),
        ("(word)raw", "raw", False),
        ("a ? b : c", "a ? b : c", True),
        ("get(1, &$code)", "get(1, &v)", True),
        ("get(1, $code)", "get(1, p)", True),
        ('log("a")', 'log("a")', True),
        ('log("a")', 'log("b")', False),
    ],
)
def test_expressions_match_by_structure(wanted: str, given: str, same: bool) -> None:
    """Names, calls and operators are the same, constants have the same value."""
    assert matches(tree(wanted), tree(given), constant, constant) is same
    if same:
        assert head(tree(wanted)) == head(tree(given))


@pytest.mark.parametrize(
    ("wanted", "given", "target"),
    [
        ("get(1, &$code)", "get(1, &v)", "&v"),
        ("get($code, 2)", "get(p + 1, 2)", "p + 1"),
        ("DR = $code", "x", None),
        ("*$code", "*p", "p"),
        ("get(1)", "get(1)", None),
    ],
)
def test_where_the_code_is_delivered(wanted: str, given: str, target: str | None) -> None:
    """The part of the code that stands where the pattern has `$code`."""
    text = snippet(given)
    tree_of_given = Parser(text, is_type=lambda name: False).expression()
    assert tree_of_given is not None
    found = delivered(tree(wanted), tree_of_given)
    assert (text[found.start : found.end] if found else None) == target


@pytest.mark.parametrize(
    ("text", "body", "where"),
    [
        ("adc_read(2)", "adc_read(2)", None),
        (" offset @ motor.c ", "offset", "motor.c"),
        ("adc_read(2)@sample", "adc_read(2)", "sample"),
    ],
)
def test_a_pattern_may_be_limited_to_a_place(text: str, body: str, where: str | None) -> None:
    """What stands behind the last `@` is a function or file."""
    found = pattern(text, BOARD)
    assert (found.text, found.where, found.place) == (body, where, BOARD)


def test_a_pattern_mentions_names() -> None:
    """The words of a pattern are its names, the two placeholders left out."""
    assert pattern("get(dev->adc, $any, &$code)", Place("b")).names == {"get", "dev", "adc"}


def test_where_a_pattern_applies() -> None:
    """A limit is a function's name, a file, or the end of a file's path."""
    context = context_of({"src/motor.c": "int f(void) { return 1; }\n"})
    context.program.load("f")
    unit = context.program.units["src/motor.c"]
    function = unit.functions["f"]
    for where in ("f", "motor.c", "src/motor.c"):
        assert pattern(f"x @ {where}", BOARD).applies(function, unit)
    for where in ("g", "otor.c", "pump.c"):
        assert not pattern(f"x @ {where}", BOARD).applies(function, unit)
    assert not pattern("x @ f", BOARD).applies(None, unit)


def test_a_pattern_is_read_with_the_macros_of_each_unit() -> None:
    """A macro that one unit defines differently gives another tree there."""
    context = context_of(
        {
            "a.c": "#define IDX 2\nint f(void) { return IDX; }\n",
            "b.c": "#define IDX 3\nint g(void) { return IDX; }\n",
        }
    )
    context.program.load("IDX")
    trees = [parsed("buf[IDX]", context.program.units[name]) for name in ("a.c", "b.c")]
    assert None not in trees
    assert trees[0] != trees[1]
    assert parsed("1 +", context.program.units["a.c"]) is None
