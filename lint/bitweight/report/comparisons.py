"""What the board has and what the code has in its place, row by row, and where they disagree.

A case with its findings goes in, rows leave; sheets arrange them. Whoever reads only the signs
misses no channel that is wrong: every kind of fault has its row.
"""

from collections.abc import Container, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import starmap

from bitweight.arithmetic.expressions import Leaf
from bitweight.arithmetic.literals import exact_value, half_digit
from bitweight.arithmetic.types import CType
from bitweight.arithmetic.values import FaultKind
from bitweight.board.converters import Coding
from bitweight.judge.cases import Case, Judgement
from bitweight.judge.findings import Finding
from bitweight.judge.operations import WrongOperation
from bitweight.places import Place
from bitweight.report.sides import (
    chain_text,
    full_scale_text,
    gain_text,
    offset_text,
    reference_text,
)
from bitweight.report.texts import number

CODINGS = {
    Coding.UNSIGNED: "unsigned",
    Coding.TWOS_COMPLEMENT: "two's complement",
    Coding.OFFSET_BINARY: "offset binary",
    Coding.COMPLEMENTARY: "complementary",
}

_LABELS = {"reference": "reference", "full-scale": "full scale", "resolution": "full scale"}
"""The row of a constant by the first word of its role; all others belong to the chain."""

_OWN_ROWS = {
    "threshold": "limit",
    "unit-prefix": "scale",
    "justification": "justified",
    "reference-wiring": "wiring",
    "channel-map": "input",
    "input-range": "pin",
    "converter-clock": "clock",
    "settling": "settling",
    "lookup-table": "table",
    "output-clamp": "top code",
    "conflicting-constant": "constant",
    "sample-sum": "samples",
    "aliasing": "sampling",
}
"""The label of a row that only a finding of the rule makes."""

_LARGEST_SHIFT = 64
_COARSE = Fraction(1, 20)


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One line of the comparison; `agrees` is None where there is nothing to compare."""

    label: str
    board: str
    firmware: str
    agrees: bool | None = None


def rows(case: Case, judgement: Judgement, findings: Iterable[Finding] = ()) -> tuple[Row, ...]:
    """Constants, line, result and arithmetic, then what other findings of the channel compare."""
    return (
        *_constant_rows(case, judgement),
        *_line_rows(case, judgement),
        *_coding_row(case, judgement),
        _result_row(judgement),
        _arithmetic_row(judgement),
        *(
            Row(label=_OWN_ROWS[one.rule], board=one.expected, firmware=one.found, agrees=False)
            for one in findings
            if one.rule in _OWN_ROWS
        ),
    )


def _constant_rows(case: Case, judgement: Judgement) -> Iterator[Row]:
    explained = judgement.explanation
    wrong = {one.place for one in (*explained.wrong, *explained.cancelling)}
    groups = _grouped(explained.roles, wrong)
    converter = case.channel.converter
    for label, board in (
        ("reference", reference_text(converter)),
        ("full scale", full_scale_text(converter)),
        ("chain", chain_text(case.channel)),
    ):
        yield Row(
            label=label,
            board=board,
            firmware=", ".join(starmap(_leaf_text, groups[label])),
            agrees=_agrees(groups[label], wrong),
        )


def _line_rows(case: Case, judgement: Judgement) -> Iterator[Row]:
    unit = case.channel.unit.text
    board, code = judgement.hardware, judgement.firmware
    yield Row(
        label="gain",
        board=gain_text(board, unit),
        firmware=gain_text(code, unit) + _gain_difference(judgement),
        agrees=_same_gain(judgement),
    )
    offset = judgement.settled(code.offset) if code.offset is not None else None
    yield Row(
        label="offset",
        board=offset_text(board.offset, unit),
        firmware=offset_text(offset, unit),
        agrees=_same_offset(judgement),
    )


def _coding_row(case: Case, judgement: Judgement) -> Iterator[Row]:
    """Where a coding is more than a plain number, or is taken for another."""
    own = case.channel.converter.coding
    if own is Coding.UNSIGNED and judgement.coding is None:
        return
    read = judgement.coding or own
    yield Row(label="coding", board=CODINGS[own], firmware=CODINGS[read], agrees=read is own)


def _result_row(judgement: Judgement) -> Row:
    """What the result must hold, in its own counts, against what it can."""
    ends = sorted(
        (float(end) - judgement.zero) / judgement.scale
        for end in (judgement.ideal.low, judgement.ideal.high)
    )
    low, high = (str(round(end)) if judgement.step else number(end) for end in ends)
    lost = any(one.at_end and one.in_range for one in judgement.operations)
    held = " with a clamp" if judgement.clamps else ""
    return Row(
        label="result",
        board=f"{low} to {high}",
        firmware=_type_text(judgement.conversion.expression.type) + held,
        agrees=not (lost or judgement.clamps),
    )


def _type_text(type_: CType) -> str:
    return f"{type_.name} ({type_.low} to {type_.high})" if type_.is_integer else type_.name


def _arithmetic_row(judgement: Judgement) -> Row:
    faults = tuple(_arithmetic_faults(judgement))
    text = "; ".join(faults) or "exact"
    return Row(label="arithmetic", board="exact", firmware=text, agrees=not faults)


def _arithmetic_faults(judgement: Judgement) -> Iterator[str]:
    loss = judgement.loss
    if loss is not None:
        yield "counts too coarse" if loss.at_end else "divides early"
    for one in judgement.operations:
        if not (one.at_end and one.in_range):
            yield _operation_text(judgement, one)


_VERBS = {FaultKind.DIVISION: "divides by 0", FaultKind.SHIFT: "shifts too far"}


def _operation_text(judgement: Judgement, operation: WrongOperation) -> str:
    outside = "" if operation.in_range else ", outside the range"
    verb = _VERBS.get(operation.kind, "overflows")
    return f"{verb} from code {judgement.codes[operation.index]}{outside}"


def _same_gain(judgement: Judgement) -> bool | None:
    """Whether the lines part by no more than rounding over the range; None without a line."""
    if judgement.explanation.residual in ("gain", "curve"):
        return False
    board, code = judgement.hardware.gain, judgement.firmware.gain
    if board is None or code is None or not judgement.points:
        return None
    counts = judgement.points[-1].at_count - judgement.points[0].at_count
    return abs((code - board) * counts) <= judgement.lsb + judgement.step


def _same_offset(judgement: Judgement) -> bool | None:
    if judgement.explanation.residual == "offset":
        return False
    board, code = judgement.hardware.offset, judgement.firmware.offset
    if board is None or code is None:
        return None
    return True if abs(code - board) <= judgement.lsb + judgement.step else None


def _gain_difference(judgement: Judgement) -> str:
    board, code = judgement.hardware.gain, judgement.firmware.gain
    if not board or code is None:
        return ""
    percent = 100 * (code / board - 1)
    return f" ({percent:+.2f} %)" if abs(percent) >= 0.005 else ""


def _grouped(
    roles: Iterable[tuple[Leaf, str]], wrong: Container[Place]
) -> Mapping[str, Sequence[tuple[Leaf, str]]]:
    """Constants with their role by row, the wrong ones first, each spelling once."""
    groups: dict[str, dict[Place, tuple[Leaf, str]]] = {
        "reference": {},
        "full scale": {},
        "chain": {},
    }
    for leaf, role in sorted(roles, key=lambda one: one[0].place not in wrong):
        label = _LABELS.get(role.split(" ", 1)[0], "chain")
        groups[label].setdefault(leaf.place, (leaf, role))
    return {label: tuple(group.values()) for label, group in groups.items()}


def _agrees(group: Sequence[tuple[Leaf, str]], wrong: Container[Place]) -> bool | None:
    return not any(leaf.place in wrong for leaf, _ in group) if group else None


def _leaf_text(leaf: Leaf, role: str) -> str:
    """A constant with its name, or with its role where it has none."""
    value = _count_text(leaf.text) if role.startswith("resolution") else leaf.text
    plain = role.startswith(tuple(_LABELS)) or _fits_by_chance(leaf.text)
    said = leaf.name or ("" if plain else role)
    return f"{value} ({said})" if said else value


def _fits_by_chance(text: str) -> bool:
    """Whether a fraction has so few digits (0.002) that it could be many facts."""
    value, half = exact_value(text), half_digit(text)
    if value is None or half is None or not value or value.denominator == 1:
        return False
    return half > abs(value) * _COARSE


def _count_text(text: str) -> str:
    """A number of bits as the count that it makes: `4096: 2**12`."""
    bits = exact_value(text)
    if bits is None or bits.denominator != 1 or not 0 <= bits < _LARGEST_SHIFT:
        return f"{text} bits"
    return f"{1 << bits.numerator}: 2**{bits}"
