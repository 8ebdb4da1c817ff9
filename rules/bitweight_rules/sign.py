"""Rule `sign`: a code is read in another coding than the converter's."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Code,
    Coding,
    Facts,
    Finding,
    Judgement,
    Level,
    Place,
    off,
    steps,
    walk,
)

_WORDS = {
    Coding.UNSIGNED: "unsigned",
    Coding.TWOS_COMPLEMENT: "two's complement",
    Coding.OFFSET_BINARY: "offset binary",
    Coding.COMPLEMENTARY: "complementary",
}


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """One finding where the conversion is right for every code of another coding."""
    judgement = case.judgement
    if judgement is None or judgement.coding is None:
        return
    converter = case.channel.converter
    worst = judgement.worst_index
    assumed = "" if converter.coding_stated else " (assumed: the board file states no coding)"
    yield Finding(
        rule=RULE.name,
        level=Level.ERROR,
        channels=(case.channel.name,),
        message=f"the code is read as {_WORDS[judgement.coding]}, but {converter.name} delivers "
        f"{_WORDS[converter.coding]}{assumed}: "
        f"{off(float(judgement.error[worst]), judgement.lsb, case.channel)} at code "
        f"{int(judgement.codes[worst])}",
        place=_reading(judgement, case.channel.name),
        found=_WORDS[judgement.coding],
        expected=_WORDS[converter.coding],
        related=steps(judgement.conversion),
    )


def _reading(judgement: Judgement, channel: str) -> Place:
    codes = (node for node in walk(judgement.conversion.expression) if isinstance(node, Code))
    places = (code.place for code in codes if channel in code.channels)
    return next(places, judgement.conversion.place)


RULE = ChannelRule(
    name="sign",
    summary="A code is read in another coding than the converter's: signed as unsigned, offset "
    "binary "
    "or complementary missed, or the reverse.",
    formula="the conversion is right for every code when fed with the words of another coding, and "
    "wrong with those of the converter's",
    source="IEEE 1241 (output codes); C11 6.2.6.2 (two's complement); common practice",
    check=check,
    levels="error: the reading leaves the allowed error",
)
