"""Where the object that holds a result is declared."""

import pytest

from tracing_cases import conversion

HEAD = "uint16_t adc(void);\n"


@pytest.mark.parametrize(
    ("sources", "value", "place"),
    [
        (f"{HEAD}int mv;\nvoid t(void) {{ mv = adc(); }}\n", "mv", "main.c:2:5"),
        (
            f"{HEAD}struct s {{\n  int a;\n  short mv;\n}} g;\nvoid t(void) {{ g.mv = adc(); }}\n",
            "g.mv",
            "main.c:4:9",
        ),
        (
            f"{HEAD}struct s {{ struct {{\n  long mv;\n }} in; }} g;\n"
            "void t(void) { g.in.mv = adc(); }\n",
            "g.in.mv",
            "main.c:3:8",
        ),
        (f"{HEAD}int mv[3];\nvoid t(void) {{ mv[1] = adc(); }}\n", "mv[1]", "main.c:2:5"),
    ],
)
def test_the_declaration_of_the_result(sources: str, value: str, place: str) -> None:
    """An object is declared where its name stands, a member inside its struct."""
    assert str(conversion(sources, value=value).declared) == place


def test_a_function_is_no_object() -> None:
    """A result that a function returns has no declaration as an object."""
    sources = f"{HEAD}int mv(void) {{ return adc() * 2; }}\n"
    assert conversion(sources, value="mv").declared is None
