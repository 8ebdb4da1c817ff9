"""Whether the stages of a chain fit each other: the kind of quantity that enters and leaves."""

from bitweight.board.decoding.tables import Mistakes, wrong
from bitweight.board.parts import Share
from bitweight.board.stages import (
    Against,
    Amplifier,
    Divider,
    Linear,
    LowPass,
    Offset,
    Polynomial,
    Rtd,
    Shunt,
    Stage,
    Table,
    Thermistor,
)
from bitweight.errors import BoardError
from bitweight.places import Place
from bitweight.units import (
    AMPERE,
    KELVIN,
    OHM,
    VOLT,
    Dimension,
    Unit,
    coherent,
    named,
    parse_unit,
    product,
    under_bar,
)


def check_flow(
    stages: tuple[Stage, ...], unit: Unit, place: Place, mistakes: Mistakes, *, to_pin: bool
) -> None:
    """Follow a channel's unit to its pin (an output: from the pin); note what does not fit."""
    try:
        end = _through(stages, unit if to_pin else None)
    except BoardError as error:
        mistakes.extend(error.mistakes)
        return
    if end == (VOLT if to_pin else unit.dimension):
        return
    if not stages:
        mistakes.add(place, f"unit is {named(unit)}, but without a chain it is V, as at the pin")
        return
    what = "the pin takes V" if to_pin else _channel_unit(unit)
    mistakes.add(stages[-1].place, f"the chain ends in {_word(end)}, but {what}")


def default_unit(stages: tuple[Stage, ...], *, to_pin: bool) -> Unit:
    """The unit of a channel that states none: what its chain takes (an output: gives)."""
    if not to_pin:
        try:
            return coherent(_through(stages, None))
        except BoardError:
            return coherent(VOLT)
    match stages[:1]:
        case (Linear() as linear,):
            return (
                linear.at.quantity.unit
                if linear.at is not None
                else under_bar(linear.sensitivity.quantity.unit)
            )
        case (Thermistor() | Rtd(),):
            return parse_unit("degC")
        case (Table() as table,):
            return table.points[0][0].unit
        case (Polynomial() as polynomial,):
            return polynomial.unit_in
        case (first,):
            return coherent(_takes(first))
        case _:
            return coherent(VOLT)


def _through(stages: tuple[Stage, ...], unit: Unit | None) -> Dimension:
    """What leaves a chain that a unit enters; None: the pin of an output, with its voltage."""
    kind, origin = VOLT, "the pin gives V"
    if unit is not None:
        kind, origin = unit.dimension, _channel_unit(unit)
    for position, stage in enumerate(stages):
        if position and isinstance(stage, Against):
            message = "an against stage comes first in its chain: its voltage is what the pin sees"
            raise wrong(stage.place, message)
        kind = _leaving(stage, kind, origin)
        origin = f"the {stage.KIND} stage before it gives {_word(kind)}"
    return kind


def _channel_unit(unit: Unit) -> str:
    return f"the channel's unit is {named(unit)}"


def _takes(stage: Stage) -> Dimension:
    """What a stage other than linear takes."""
    match stage:
        case Shunt():
            return AMPERE
        case Thermistor() | Rtd():
            return KELVIN
        case Table():
            return stage.points[0][0].unit.dimension
        case Polynomial():
            return stage.unit_in.dimension
        case Divider() | Amplifier() | LowPass() | Against() | Linear():
            return VOLT


def _leaving(stage: Stage, entering: Dimension, origin: str) -> Dimension:
    """What leaves a stage; raises `BoardError` where it does not take what enters.

    `origin` says in a sentence what enters and where that was stated.
    """
    if isinstance(stage, Linear):
        return _leaving_linear(stage, entering, origin)
    if entering != _takes(stage):
        message = f"a {stage.KIND} stage takes {_word(_takes(stage))}, but {origin}"
        raise wrong(stage.place, _article(message))
    if isinstance(stage, Amplifier):
        _check_offset(stage.offset, VOLT)
    match stage:
        case Polynomial():
            return stage.unit_out.dimension
        case Table() if stage.points[0][1].unit.dimension != OHM:
            return stage.points[0][1].unit.dimension
        case _:
            return VOLT


def _leaving_linear(stage: Linear, entering: Dimension, origin: str) -> Dimension:
    sensitivity = stage.sensitivity
    unit = sensitivity.quantity.unit
    leaving = product(unit.dimension, entering)
    if unit.below != entering and leaving not in (VOLT, AMPERE, OHM):
        per = f"per {named(under_bar(unit))}" if unit.below else f"in {named(unit)}"
        raise wrong(sensitivity.place, f"the sensitivity is {per}, but {origin}")
    if stage.at is not None and stage.at.quantity.unit.dimension != entering:
        message = f"at is in {named(stage.at.quantity.unit)}, but {origin}"
        raise wrong(stage.at.place, message)
    _check_offset(stage.offset, leaving)
    return leaving


def _check_offset(offset: Offset | None, leaving: Dimension) -> None:
    """An offset is added at the output, so it is of the output's kind."""
    if offset is None:
        return
    kind = VOLT if isinstance(offset, Share) else offset.quantity.unit.dimension
    if kind != leaving:
        message = f"the offset is in {_word(kind)}, but the stage gives {_word(leaving)}"
        raise wrong(offset.place, message)


def _word(kind: Dimension) -> str:
    return named(coherent(kind))


def _article(sentence: str) -> str:
    for vowel in ("amplifier", "rtd", "against"):
        sentence = sentence.replace(f"a {vowel}", f"an {vowel}", 1)
    return sentence
