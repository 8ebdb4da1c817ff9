"""Writes `expected.json` of corpus cases anew: `python -m corpus.renew [CASE...]` in tests/.

CASE is `kind/name`; without one, all cases. What contradicts `expect.toml` is not written: first
the program or the calculation must be mended. Read the difference line by line before keeping it.
"""

import sys
from collections.abc import Sequence

from corpus.agreement import contradictions
from corpus.cases import CorpusCase, cases
from corpus.runs import run_case, stable_text


def main(names: Sequence[str]) -> int:
    """Renews the named cases; 1 where one was refused, 2 where a name is no case, else 0."""
    known = {str(case): case for case in cases()}
    unknown = [name for name in names if name not in known]
    for name in unknown:
        print(f"{name}: no such case", file=sys.stderr)
    if unknown:
        return 2
    chosen = [known[name] for name in names] or [*known.values()]
    refused = [case for case in chosen if not renew(case)]
    return int(bool(refused))


def renew(case: CorpusCase) -> bool:
    """Writes one case and tells what was done; False where it was refused."""
    run = run_case(case.folder)
    against = contradictions(case.expectation(), run)
    for line in against:
        print(f"{case}: refused: {line}")
    if not against:
        text = stable_text(run)
        before = case.expected_file.read_text("utf-8") if case.expected_file.exists() else None
        if text != before:
            case.expected_file.write_text(text, "utf-8")
            print(f"{case}: {'changed' if before else 'written'}")
    return not against


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
