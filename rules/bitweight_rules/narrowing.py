"""Rule `narrowing`: the result's own type, or a clamp, cannot hold the channel's range."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Clamp,
    Convert,
    Expression,
    Facts,
    Finding,
    Judgement,
    Level,
    Place,
    Purpose,
    WrongOperation,
    first_leaf,
    place_of,
    quantity,
    steps,
    type_for,
    uses,
)

_VERBS = {
    Purpose.CAST: "is cast to",
    Purpose.STORE: "is stored as",
    Purpose.ARGUMENT: "is passed as",
    Purpose.RETURN: "is returned as",
    Purpose.PROMOTION: "is taken as",
    Purpose.BALANCE: "is taken as",
}


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """Stores of the result that lose codes in range, and clamps inside the range."""
    if case.judgement is None:
        return
    for operation in case.judgement.operations:
        if operation.at_end and operation.in_range:
            yield _narrow(case, case.judgement, operation)
    for clamp in case.judgement.clamps:
        yield _clamped(case, case.judgement, clamp)


def _narrow(case: Case, judgement: Judgement, operation: WrongOperation) -> Finding:
    type_ = operation.node.type
    low, high = operation.low or 0, operation.high or 0
    furthest = high if high > type_.high else low
    shown = quantity(judgement.quantity_of(furthest), case.channel)
    code = int(judgement.codes[operation.index])
    return Finding(
        rule=RULE.name,
        level=Level.ERROR,
        channels=(case.channel.name,),
        message=f"{judgement.conversion.result} {_verb(operation.node)} {type_.name}, which cannot "
        f"hold {furthest} ({shown}): first wrong at code {code}",
        place=_type_place(operation, judgement),
        found=f"{type_.name}, {type_.low} to {type_.high}",
        expected=f"{type_for(low, high)}, for {low} to {high}",
        related=steps(judgement.conversion),
    )


def _type_place(operation: WrongOperation, judgement: Judgement) -> Place:
    """Where the type stands that is too narrow: the declaration of what is stored to."""
    declared = judgement.conversion.declared
    node = operation.node
    if declared is not None and isinstance(node, Convert) and node.purpose is Purpose.STORE:
        return declared
    return place_of(node, judgement.conversion.place)


def _verb(node: Expression) -> str:
    return _VERBS[node.purpose] if isinstance(node, Convert) else "is taken as"


def _clamped(case: Case, judgement: Judgement, clamp: Clamp) -> Finding:
    index = int(clamp.mask.argmax())
    leaf = first_leaf(clamp.limit)
    held = quantity(float(judgement.value[index]), case.channel)
    code = int(judgement.codes[index])
    upper = bool(clamp.without[index] > judgement.curve.values[index])
    end = judgement.ideal.high if upper else judgement.ideal.low
    return Finding(
        rule=RULE.name,
        level=Level.ERROR,
        channels=(case.channel.name,),
        message=f"{judgement.conversion.result} is held at {held} from code {code} on, but the "
        "range "
        f"goes {'up' if upper else 'down'} to {quantity(end, case.channel)}",
        place=clamp.node.place if leaf is None else leaf.place,
        found=held if leaf is None else f"{leaf.text} ({held})",
        expected=f"{'at least' if upper else 'at most'} {quantity(end, case.channel)}",
        related=(*(() if leaf is None else uses(leaf)), *steps(judgement.conversion)),
    )


RULE = ChannelRule(
    name="narrowing",
    summary="The result is stored in a type, or clamped to bounds, that cannot hold the channel's "
    "range.",
    formula="for every code in range the stored value equals the value before the store, and no "
    "clamp "
    "takes it out of the allowed error",
    source="C11 6.3.1.3 (integer conversions), 6.3.1.4 (from floating); clamps: common practice",
    check=check,
    levels="error: the reading is wrong for codes in range; what a store or a clamp does outside "
    "the range is not reported",
)
