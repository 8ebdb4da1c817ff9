"""The C expressions of the board file: what is none is refused where it stands."""

from pathlib import Path

import pytest

from bitweight.errors import BoardError
from bitweight.pipeline import verify
from bitweight.requests import Request

BOARD = """\
[reference.vref]
voltage = "3 V"
[converter.adc]
bits = 12
[channel.rail]
firmware = { reading = 'READING', value = "rail_mv", unit = "1 mV" }
"""

SOURCE = """\
#define RAIL(type) (type)adc_read(1)
extern unsigned adc_read(int input);
unsigned rail_mv;
void poll(void)
{
    rail_mv = adc_read(1) * 3000UL / 4096;
}
"""


@pytest.fixture(autouse=True)
def _tree(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "src").mkdir()
    (tmp_path / "src" / "poll.c").write_text(SOURCE)
    monkeypatch.chdir(tmp_path)


def _verify(board: str) -> None:
    Path("board.toml").write_text(board)
    verify(Request(board="board.toml", sources=("src",)), lambda stage, done, total: None)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("adc_read(", 'expected a C expression, found "adc_read(", "(" is not closed'),
        (")(", '")" closes nothing'),
        ("a[1)", '")" closes nothing'),
        ("int x", 'expected a C expression, found "int x"'),
        ("a; b", "expected a C expression"),
        ("#define X", "expected a C expression"),
        ("/*", "a comment has no place in an expression"),
        ("$foo(3)", "unknown placeholder $foo, known: $any, $code"),
        ("adc_read(1) @ ", "expected a function or a file after @"),
        ("adc_read(1) @ pol.c", "no file or function 'pol.c' is in the sources, did you mean"),
        ("adc_read(1) @ nowhere", "no file or function 'nowhere' is in the sources"),
    ],
)
def test_what_is_no_expression_is_refused_at_its_place(text: str, message: str) -> None:
    """The mistake names the key and what is wrong with the text."""
    with pytest.raises(BoardError) as caught:
        _verify(BOARD.replace("READING", text))
    (mistake,) = caught.value.mistakes
    assert (mistake.place.line, mistake.place.column) == (6, 24)
    assert mistake.message.startswith("reading: ")
    assert message in mistake.message


@pytest.mark.parametrize(
    "text",
    [
        "adc_read(1)",
        "adc_get(RAIL, &$code)",
        "dac_write($any, $code);",
        "DAC->DR = $code",
        "RAIL(unsigned)",
        "names['(']",
        'find("/* no comment")',
        "adc_read(1) @ poll",
        "adc_read(1) @ poll.c",
        "adc_read(1) @ src/poll.c",
    ],
)
def test_what_is_an_expression_is_let_through(text: str) -> None:
    """Placeholders, statements, literals and macros that take types are all expressions."""
    _verify(BOARD.replace("'READING'", f"'''{text}'''"))


def test_all_are_reported_in_one_run() -> None:
    """Values, limits and constants are checked like readings."""
    board = BOARD.replace("READING", "adc_read(1)").replace('"rail_mv"', '"rail_mv +"')
    more = '[[channel.rail.limit]]\nat = "1 V"\nconstant = "(X"\n[constants]\n"Y)" = "full-scale"\n'
    with pytest.raises(BoardError) as caught:
        _verify(board + more)
    found = [(one.place.line, one.message.partition(":")[0]) for one in caught.value.mistakes]
    assert found == [(6, "value"), (9, "constant"), (11, "constants")]
