"""Write the screens that the README shows anew: `python -m readme_screens`, in tests/."""

import os
import re
from pathlib import Path

from bitweight.pipeline import verify
from bitweight.report.lines import plain_report
from bitweight.report.sheets import Screen
from bitweight.requests import Request

ROOT = Path(__file__).resolve().parent.parent
BOARD = "corpus/demo/faulty/board.toml"


def renewed(readme: str) -> str:
    """The README's text with the screens as the program prints them now."""
    outcome = verify(Request(board=BOARD), lambda *_: None)
    lines = [line.plain for line in Screen(outcome=outcome).lines(80)]
    start = next(i for i, line in enumerate(lines) if re.match(r"━━ battery ━", line))
    end = next(i for i in range(start + 1, len(lines)) if re.match(r"(━━|──) \w", lines[i]))
    sheet = "\n".join(line.rstrip() for line in lines[start:end]).rstrip()
    for name, text in (("screen: battery", sheet), ("plain", plain_report(outcome).rstrip())):
        pattern = rf"(<!-- {re.escape(name)} -->\n```text\n).*?(```)"
        readme = re.sub(pattern, lambda m, t=text: f"{m[1]}{t}\n{m[2]}", readme, flags=re.S)  # type: ignore[misc]
    return readme


if __name__ == "__main__":
    os.chdir(ROOT)
    path = ROOT / "README.md"
    path.write_text(renewed(path.read_text(encoding="utf-8")), encoding="utf-8")
