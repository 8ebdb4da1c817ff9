"""Values over arrays: representation, bounds, conversions."""

import numpy as np
import pytest

from bitweight.arithmetic import scalars, values
from bitweight.arithmetic.types import MODELS, DataModel
from bitweight.arithmetic.values import FaultKind, Value
from properties.strategies import BOUNDARY_WORDS, TYPES

AVR, HOST = MODELS["avr"], MODELS["host"]
WORDS = np.array(BOUNDARY_WORDS, dtype=np.int64)


def boundary(model: DataModel, name: str) -> Value:
    """The boundary words as values of a type."""
    words = values.reading(WORDS, model.long_long)[0]
    return values.convert(words, model.long_long, model.types[name])[0]


@pytest.mark.parametrize(
    ("name", "dtype"),
    [
        ("unsigned char", np.int64),
        ("unsigned int", np.int64),
        ("long long", np.int64),
        ("unsigned long long", np.uint64),
        ("float", np.float32),
        ("double", np.float64),
    ],
)
def test_each_type_has_its_element_type(name: str, dtype: type) -> None:
    """Constants and readings of a type are held in its one representation."""
    type_ = HOST.types[name]
    assert values.constant(1, type_).data.dtype == dtype
    assert values.reading(np.array([1, 2]), type_)[0].data.dtype == dtype


@pytest.mark.parametrize("target", TYPES)
@pytest.mark.parametrize("source", TYPES)
@pytest.mark.parametrize("model", [HOST, AVR], ids=["host", "avr"])
def test_conversions_are_those_of_single_numbers(
    model: DataModel, source: str, target: str
) -> None:
    """Every conversion gives each element what it gives a single number, within its bounds."""
    from_, to = model.types[source], model.types[target]
    given = boundary(model, source)
    result, faults = values.convert(given, from_, to)
    lost = np.zeros(WORDS.shape, dtype=bool)
    for kind, mask in faults:
        lost |= mask if kind is FaultKind.CONVERSION else False
    for before, after, missing in zip(given.data, result.data, lost, strict=True):
        wanted = scalars.convert(before.item(), from_, to)
        assert (wanted is None) == missing
        if wanted is not None:
            assert after.item() == wanted
        if to.is_integer:
            assert result.low <= after.item() <= result.high


@pytest.mark.parametrize(
    ("source", "target", "kind"),
    [
        ("int", "unsigned char", FaultKind.TRUNCATED),
        ("unsigned int", "int", FaultKind.SIGN),
        ("int", "unsigned int", FaultKind.SIGN),
        ("int", "unsigned long", FaultKind.SIGN),
        ("long", "int", FaultKind.TRUNCATED),
        ("unsigned long long", "long long", FaultKind.SIGN),
    ],
)
def test_a_changed_value_is_reported(source: str, target: str, kind: FaultKind) -> None:
    """A conversion that changes values says which, and whether bits or only the sign are lost."""
    given = boundary(AVR, source)
    result, faults = values.convert(given, AVR.types[source], AVR.types[target])
    changed = [int(a) != int(b) for a, b in zip(given.data, result.data, strict=True)]
    assert [one for one, _ in faults] == [kind]
    assert faults[0][1].tolist() == changed


def test_values_out_of_range_go_to_the_nearest_end() -> None:
    """A floating value beyond its integer type becomes its end, not a number becomes 0."""
    given = Value(np.array([1e9, -1e9, np.nan, 5.7]))
    result, faults = values.convert(given, HOST.double, AVR.int_)
    assert result.data.tolist() == [32767, -32768, 0, 5]
    assert [mask.tolist() for _, mask in faults] == [[True, True, True, False]]


def test_choosing_by_a_constant_takes_the_arm_as_it_is() -> None:
    """A constant condition copies nothing."""
    arms = values.constant(1, HOST.int_), values.constant(2, HOST.int_)
    assert values.choose(values.constant(1, HOST.int_), *arms) is arms[0]
    assert values.choose(values.constant(0, HOST.int_), *arms) is arms[1]


def test_no_words_are_no_trouble() -> None:
    """A reading without words is an empty value."""
    assert values.reading(np.array([], dtype=np.int64), HOST.int_)[0].data.size == 0
