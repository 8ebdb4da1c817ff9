"""Cutting text into preprocessing tokens."""

import pytest

from bitweight.firmware.files import SourceFile
from bitweight.firmware.outlines import Outline
from bitweight.firmware.tokens import Kind, glues, kind_of, spelled, tokens_of

NAME, NUMBER, STRING = Kind.NAME, Kind.NUMBER, Kind.STRING
CHARACTER, PUNCTUATOR = Kind.CHARACTER, Kind.PUNCTUATOR


@pytest.mark.parametrize(
    ("text", "kinds"),
    [
        ("raw", [("raw", NAME)]),
        ("$code", [("$code", NAME)]),
        ("größe", [("größe", NAME)]),
        ("0x1Fu .5e-3f 1.f", [("0x1Fu", NUMBER), (".5e-3f", NUMBER), ("1.f", NUMBER)]),
        ("0xe+1", [("0xe+1", NUMBER)]),
        ('L"a\\"b" x', [('L"a\\"b"', STRING), ("x", NAME)]),
        ("u8'a'", [("u8'a'", CHARACTER)]),
        ("it's so", [("it", NAME), ("'s so", CHARACTER)]),
        ("a>>=b", [("a", NAME), (">>=", PUNCTUATOR), ("b", NAME)]),
        ("a+++b", [("a", NAME), ("++", PUNCTUATOR), ("+", PUNCTUATOR), ("b", NAME)]),
        ("@", [("@", PUNCTUATOR)]),
    ],
)
def test_text_is_cut_by_the_longest_token(text: str, kinds: list[tuple[str, Kind]]) -> None:
    """Each token is the longest that can be made (C11 6.4 paragraph 4)."""
    tokens = tokens_of(Outline(SourceFile("a.c", text)), 0, len(text))
    assert [(token.text, token.kind) for token in tokens] == kinds


def test_tokens_know_where_they_are_spelled() -> None:
    """Splices before a token do not shift its place, and white space before it is noted."""
    text = "a \\\n bc\\\nd;"
    tokens = list(tokens_of(Outline(SourceFile("a.c", text)), 0, len(text)))
    assert [(t.text, t.place.line, t.place.column, t.spaced) for t in tokens] == [
        ("a", 1, 1, False),
        ("bcd", 2, 2, True),
        (";", 3, 2, False),
    ]
    assert spelled(tokens) == "a bcd;"


@pytest.mark.parametrize(
    ("text", "kind"), [("ab1", NAME), ("1a", NUMBER), ("//", None), ("a b", None), ("", None)]
)
def test_one_token_has_a_kind(text: str, kind: Kind | None) -> None:
    """Text that is not exactly one token has none."""
    assert kind_of(text) is kind


@pytest.mark.parametrize(
    ("pair", "joins"),
    [
        ("ab", True),
        ("1.", True),
        ("--", True),
        ("<=", True),
        ("e+", True),
        ("a(", False),
        ("((", False),
        (" a", False),
        (";a", False),
        ('L"', True),
        ("x+", False),
    ],
)
def test_characters_that_would_join_tokens_need_a_space(pair: str, joins: bool) -> None:
    """Two tokens side by side must not read as one."""
    assert glues(*pair) is joins
