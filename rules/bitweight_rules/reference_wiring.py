"""Rule `reference-wiring`: configuration selects another reference than the one wired."""

from collections.abc import Iterator, Sequence

from bitweight.api import (
    Case,
    ChannelRule,
    Facts,
    Finding,
    Level,
    Reference,
    ReferenceSource,
    Related,
    Selections,
    Setting,
    contradicting,
    selected,
    selections,
    written,
)

_SOURCES = {source.value for source in ReferenceSource}
_PHRASES = {
    "external": "the external reference",
    "supply": "the supply",
    "internal": "the internal reference",
}


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """A finding for each selection that contradicts the wiring."""
    reference = case.channel.converter.reference
    for setting in _wrong(selections(case, facts, "reference"), reference.source):
        yield _finding(case, reference, setting)


def _wrong(found: Selections, wired: ReferenceSource) -> Sequence[Setting]:
    """With a source on the reference pin every other selection is wrong, even a passing one."""
    if wired is not ReferenceSource.EXTERNAL:
        return [one for one in contradicting(found, wired.value) if selected(one) in _SOURCES]
    wrong = [
        one for one in (*found.own, *found.shared) if selected(one) in _SOURCES - {wired.value}
    ]
    return written(wrong, found.shared)


def _finding(case: Case, reference: Reference, setting: Setting) -> Finding:
    pin = f" on pin {reference.pin}" if reference.pin else ""
    assumed = "" if reference.source_stated else " (assumed: the board file states no source)"
    caution = f": {setting.caution}" if setting.caution else ""
    return Finding(
        rule=RULE.name,
        level=Level.ERROR,
        channels=(case.channel.name,),
        message=f"{setting.target} selects {_phrase(selected(setting))}, but {reference.name} is "
        f"{reference.source.value}{pin}{assumed}{caution}",
        place=setting.place,
        found=setting.value,
        expected=f"{reference.source.value} ({reference.name}, {reference.voltage})",
        related=(Related(place=reference.place, message=f"{reference.name} stands here"),),
    )


def _phrase(value: str) -> str:
    return _PHRASES.get(value, value)


RULE = ChannelRule(
    name="reference-wiring",
    summary="The reference selected in configuration code is not the one wired to the pin.",
    formula="the selection in the converter's registers equals the source of the channel's "
    "reference",
    source="the family's data sheet; for classic AVR: ADMUX, reference selection",
    check=check,
    levels="error: the reading is wrong, and the part can be harmed",
)
