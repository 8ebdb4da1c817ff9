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
        end = _through(stages, unit.dimension if to_pin else VOLT)
    except BoardError as error:
        mistakes.extend(error.mistakes)
        return
    if end == (VOLT if to_pin else unit.dimension):
        return
    if not stages:
        mistakes.add(place, f"unit is {named(unit)}, but without a chain it is V, as at the pin")
        return
    what = "the pin takes V" if to_pin else f"the channel's unit is {named(unit)}"
    mistakes.add(stages[-1].place, f"the chain ends in {_word(end)}, but {what}")


def default_unit(stages: tuple[Stage, ...], *, to_pin: bool) -> Unit:
    """The unit of a channel that states none: what its chain takes (an output: gives)."""
    if not to_pin:
        try:
            return coherent(_through(stages, VOLT))
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


def _through(stages: tuple[Stage, ...], kind: Dimension) -> Dimension:
    for stage in stages:
        kind = _leaving(stage, kind)
    return kind


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


def _leaving(stage: Stage, entering: Dimension) -> Dimension:
    """What leaves a stage; raises `BoardError` where it does not take what enters."""
    if isinstance(stage, Linear):
        return _leaving_linear(stage, entering)
    if entering != _takes(stage):
        message = f"a {stage.KIND} stage takes {_word(_takes(stage))}, but {_word(entering)}"
        raise wrong(stage.place, f"{_article(message)} reaches it")
    if isinstance(stage, Amplifier):
        _check_offset(stage.offset, VOLT)
    match stage:
        case Polynomial():
            return stage.unit_out.dimension
        case Table() if stage.points[0][1].unit.dimension != OHM:
            return stage.points[0][1].unit.dimension
        case _:
            return VOLT


def _leaving_linear(stage: Linear, entering: Dimension) -> Dimension:
    sensitivity = stage.sensitivity
    unit = sensitivity.quantity.unit
    leaving = product(unit.dimension, entering)
    if unit.below != entering and leaving not in (VOLT, AMPERE, OHM):
        message = f"the sensitivity is in {named(unit)}, but {_word(entering)} reaches this stage"
        raise wrong(sensitivity.place, message)
    if stage.at is not None and stage.at.quantity.unit.dimension != entering:
        message = f"at is in {named(stage.at.quantity.unit)}, but {_word(entering)}"
        raise wrong(stage.at.place, f"{message} reaches this stage")
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
