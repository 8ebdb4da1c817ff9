"""Rule `channel-map`: the converter input in the code is not the channel's."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Code,
    Conversion,
    Facts,
    Finding,
    Level,
    Setting,
    contradicting,
    listed,
    reads_another,
    selections,
    steps,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """A finding for a result of another channel's reading, and for another input selected."""
    for conversion in case.trace.conversions:
        readings = reads_another(conversion)
        if readings:
            yield _another(case, conversion, readings)
    if case.channel.input is None:
        return
    found = selections(case, facts, "input")
    if found.own:
        for setting in contradicting(found, str(case.channel.input)):
            yield _input(case, setting)


def _another(case: Case, conversion: Conversion, readings: tuple[Code, ...]) -> Finding:
    names = tuple(dict.fromkeys(name for code in readings for name in code.channels))
    return Finding(
        rule=RULE.name,
        level=Level.ERROR,
        channels=(case.channel.name,),
        message=f"{conversion.result} is computed from the reading of {listed(names)}, not of "
        f"{case.channel.name}",
        place=readings[0].place,
        found=readings[0].text,
        expected=case.channel.reading[0] if case.channel.reading else case.channel.name,
        related=steps(conversion),
    )


def _input(case: Case, setting: Setting) -> Finding:
    pin = f" (pin {case.channel.pin})" if case.channel.pin else ""
    return Finding(
        rule=RULE.name,
        level=Level.ERROR,
        channels=(case.channel.name,),
        message=f"{setting.target} selects input {setting.value} for {case.channel.name}, which is "
        "on "
        f"input {case.channel.input}{pin}",
        place=setting.place,
        found=f"input {setting.value}",
        expected=f"input {case.channel.input}",
    )


RULE = ChannelRule(
    name="channel-map",
    summary="The converter input in the code is not the channel's.",
    formula="the input selected for the reading equals `input`; the result depends on the "
    "channel's own "
    "reading",
    source="the family's data sheet (input selection); common practice",
    check=check,
    levels="error",
)
