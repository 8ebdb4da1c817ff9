"""The keys of the board file, as the documentation lists them."""

import pytest

from bitweight.board.decoding import fields
from bitweight.board.decoding.channels import ChannelFields

TABLES = {
    "BoardFields": "name revision firmware include exclude define build coverage",
    "TargetFields": "architecture clock family families int_bits long_bits double_bits char_signed",
    "SupplyFields": "voltage",
    "ReferenceFields": "source voltage supply pin",
    "ConverterFields": "kind family bits reference reference_gain full_scale_count coding "
    "input_gain justified word_bits shift first_transition code_offset oversampling clock "
    "sampling total_error",
    "OversamplingFields": "samples shift",
    "ClockFields": "frequency min max cycles",
    "SamplingFields": "time resistance capacitance",
    "FirmwareFields": "reading value unit reading_gain",
    "LimitFields": "name at constant in bits",
    "ConstantFields": "is unit at value",
    "DeviationFields": "rule where reason until",
}
CHANNEL = (
    "converter input input_minus pin unit range allowed_error hazard pin_limit sample_rate "
    "nominal like chain firmware limit"
)


@pytest.mark.parametrize(("table", "names"), TABLES.items())
def test_a_table_has_the_documented_keys(table: str, names: str) -> None:
    """No key is missing, none is new, and each says what it means."""
    every = getattr(fields, table).ALL
    assert [field.name for field in every] == names.split()
    assert all(field.help for field in every)


def test_a_channel_has_the_documented_keys() -> None:
    """The channel's keys likewise."""
    assert [field.name for field in ChannelFields.ALL] == CHANNEL.split()
