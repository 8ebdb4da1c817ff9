"""Rule `overflow`: a value on the way to the result does not fit its C type for some code."""

from collections.abc import Iterator

from bitweight.api import (
    Binary,
    Case,
    ChannelRule,
    Facts,
    FaultKind,
    Finding,
    Judgement,
    Level,
    Related,
    WrongOperation,
    edit,
    place_of,
    steps,
    type_for,
)

_NOUNS = {"*": "product", "+": "sum", "-": "difference", "<<": "shifted value", "/": "quotient"}


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """A finding for each operator that goes wrong first; stores of the result are narrowing's."""
    if case.judgement is None:
        return
    for operation in case.judgement.operations:
        if not operation.at_end or _undefined_outside(operation):
            yield _finding(case, case.judgement, operation)


def _undefined_outside(operation: WrongOperation) -> bool:
    return operation.kind is FaultKind.CONVERSION and not operation.in_range


def _finding(case: Case, judgement: Judgement, operation: WrongOperation) -> Finding:
    suffix = operation.suffix
    related = steps(judgement.conversion)
    if suffix is not None:
        spelled = Related(place=suffix.leaf.place, message=f"mended by writing {suffix.text}")
        related = (spelled, *related)
    return Finding(
        rule=RULE.name,
        level=Level.ERROR if operation.in_range else Level.WARNING,
        channels=(case.channel.name,),
        message=f"{_what(operation)}: {_where(judgement, operation)}",
        place=place_of(operation.node, judgement.conversion.place),
        found=_found(operation),
        expected=_expected(operation),
        related=related,
        replacement=None if suffix is None else edit(suffix.leaf, suffix.text),
    )


def _what(operation: WrongOperation) -> str:
    """The operator in words, with the values at which it is furthest off."""
    if operation.kind is FaultKind.DIVISION:
        return "the divisor becomes 0"
    if operation.kind is FaultKind.SHIFT:
        return f"the shift is as wide as {operation.node.type.name} or wider"
    if isinstance(operation.node, Binary) and operation.operands is not None:
        return _operator(operation, operation.node)
    return f"{operation.node.type.name} cannot hold {_furthest(operation)}"


def _operator(operation: WrongOperation, node: Binary) -> str:
    left, right = operation.operands or (0, 0)
    noun = _NOUNS.get(node.operator, "value")
    shown = f"the {noun} {left:.10g} {node.operator} {right:.10g}"
    if not node.type.signed and (operation.low or 0) < 0:
        return f"{shown} is negative, {node.type.name} wraps"
    return f"{shown} needs {_bits(operation)} bits, {node.type.name} {_room(operation)}"


def _room(operation: WrongOperation) -> str:
    type_ = operation.node.type
    return f"holds {type_.bits - 1} and a sign" if type_.signed else f"has {type_.bits}"


def _where(judgement: Judgement, operation: WrongOperation) -> str:
    code = int(judgement.codes[operation.index])
    upward = bool(operation.mask[operation.index :].all())
    where = f"wrong from code {code}" if upward else f"first wrong at code {code}"
    outside = "" if operation.in_range else ", outside the range"
    if operation.exact is None or operation.operands is None:
        return f"{where}{outside}"
    return f"{where} ({operation.exact}){outside}"


def _furthest(operation: WrongOperation) -> int:
    low, high = operation.low or 0, operation.high or 0
    return high if high > operation.node.type.high else low


def _bits(operation: WrongOperation) -> int:
    """Bits of the largest magnitude, without a sign."""
    return max(abs(operation.low or 0), abs(operation.high or 0)).bit_length()


def _found(operation: WrongOperation) -> str:
    return f"{operation.node.type.name}, {operation.node.type.bits} bits"


def _expected(operation: WrongOperation) -> str:
    """A type that holds every value; what to write for it where a suffix is enough."""
    if operation.kind is FaultKind.DIVISION:
        return "a divisor other than 0"
    if operation.kind is FaultKind.SHIFT:
        return f"a shift below {operation.node.type.bits}"
    wider = type_for(operation.low or 0, operation.high or 0)
    if operation.kind is FaultKind.SIGN and (operation.low or 0) < 0:
        wider = "a signed type"
    return f"{wider}, as {operation.suffix.text} gives" if operation.suffix else wider


RULE = ChannelRule(
    name="overflow",
    summary="A value on the way from the code to the result does not fit its C type for some code, "
    "a divisor becomes 0, or a shift is as wide as its type or wider.",
    formula="every operator is computed for every code in the target's types and in exact integers",
    source="C11 6.5p5 (signed overflow), 6.5.5p5 (division by 0), 6.5.7p3 (shift), 6.3.1.4 (from "
    "floating), 6.2.5p9 (unsigned wrap)",
    check=check,
    levels="error for a code in range, warning outside it; an unsigned wrap counts only where the "
    "result is not the exact one",
)
