"""The door for rules and scripts: what they may import, gathered; no code of its own.

A rule needs facts (`Case`, `Facts` and what they hold), `Finding` to answer with, and `ChannelRule`
or `TreeRule` to be registered. A script needs `Request`, `verify` and a report.
"""

from bitweight.arithmetic.expressions import Binary, Code, Convert, Expression, Purpose, walk
from bitweight.arithmetic.literals import exact_value, half_digit
from bitweight.arithmetic.types import type_for
from bitweight.arithmetic.values import FaultKind
from bitweight.board.chains import Ideal, ideal, not_computed
from bitweight.board.converters import Coding
from bitweight.board.hardware import Board, Channel, Limit, LimitMeasure
from bitweight.board.parts import Reference, ReferenceSource
from bitweight.errors import BitweightError, BoardError, Mistake, RuleError, SourceError, UsageError
from bitweight.firmware.constants import Conflict, Definition
from bitweight.judge.alignments import alignment_findings
from bitweight.judge.allowances import allowance
from bitweight.judge.cases import Case, Facts, Judgement, Status, reads_another
from bitweight.judge.clamps import Clamp
from bitweight.judge.corrections import constant_findings
from bitweight.judge.explanations import WrongConstant
from bitweight.judge.findings import Finding, Level, Related, Replacement
from bitweight.judge.levels import stated_or_warning
from bitweight.judge.losses import Loss
from bitweight.judge.operations import WrongOperation
from bitweight.judge.outcomes import Outcome
from bitweight.judge.residues import residual_findings
from bitweight.judge.rules import BY_EFFECT, ChannelRule, Rule, TreeRule, load_rules
from bitweight.judge.selections import Selections, contradicting, selected, selections, written
from bitweight.judge.statements import (
    edit,
    first_leaf,
    listed,
    off,
    place_of,
    quantity,
    steps,
    uses,
    volts,
)
from bitweight.judge.units import result_unit
from bitweight.limits import Limits
from bitweight.pipeline import verify
from bitweight.places import Place
from bitweight.report.lines import plain_report
from bitweight.report.records import json_report
from bitweight.requests import Request
from bitweight.trace.conversions import Conversion, Trace
from bitweight.trace.settings import Setting
from bitweight.trace.thresholds import Threshold
from bitweight.version import VERSION

__all__ = [
    "BY_EFFECT",
    "VERSION",
    "Binary",
    "BitweightError",
    "Board",
    "BoardError",
    "Case",
    "Channel",
    "ChannelRule",
    "Clamp",
    "Code",
    "Coding",
    "Conflict",
    "Conversion",
    "Convert",
    "Definition",
    "Expression",
    "Facts",
    "FaultKind",
    "Finding",
    "Ideal",
    "Judgement",
    "Level",
    "Limit",
    "LimitMeasure",
    "Limits",
    "Loss",
    "Mistake",
    "Outcome",
    "Place",
    "Purpose",
    "Reference",
    "ReferenceSource",
    "Related",
    "Replacement",
    "Request",
    "Rule",
    "RuleError",
    "Selections",
    "Setting",
    "SourceError",
    "Status",
    "Threshold",
    "Trace",
    "TreeRule",
    "UsageError",
    "WrongConstant",
    "WrongOperation",
    "alignment_findings",
    "allowance",
    "constant_findings",
    "contradicting",
    "edit",
    "exact_value",
    "first_leaf",
    "half_digit",
    "ideal",
    "json_report",
    "listed",
    "load_rules",
    "not_computed",
    "off",
    "place_of",
    "plain_report",
    "quantity",
    "reads_another",
    "residual_findings",
    "result_unit",
    "selected",
    "selections",
    "stated_or_warning",
    "steps",
    "type_for",
    "uses",
    "verify",
    "volts",
    "walk",
    "written",
]
