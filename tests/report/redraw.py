"""Writes `screen.txt` anew; read it line by line before it is committed."""

from pathlib import Path

from bitweight.report.sheets import Screen
from report import samples

if __name__ == "__main__":
    lines = Screen(outcome=samples.outcome()).lines(80)
    text = "".join(f"{line.plain}\n" for line in lines)
    Path(__file__).with_name("screen.txt").write_text(text, "utf-8")
