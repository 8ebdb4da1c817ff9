"""Stages made of their keys, with everything they name."""

import pytest

from bitweight.board.parts import Share, Supply
from bitweight.board.stages import Amplifier, Divider, Rtd, Table, Thermistor, Topology
from board.parts import channel, stage


def test_a_part_with_a_designator_is_the_same_everywhere() -> None:
    """R1 in two stages is one part; unnamed parts are each their own."""
    chain = channel(
        "{kind='divider', top='R1 1k', bottom='1k'}, {kind='divider', top='R1 1k', bottom='1k'}"
    ).chain
    first, second = chain
    assert isinstance(first, Divider)
    assert isinstance(second, Divider)
    assert first.top.key == second.top.key
    assert first.bottom.key != second.bottom.key


def test_a_divider_may_end_at_a_supply() -> None:
    """`to` links the supply or reference of that name."""
    made = stage("{kind='divider', top='1k', bottom='1k', to='v5'}")
    assert isinstance(made, Divider)
    assert isinstance(made.to, Supply)
    assert made.to.name == "v5"


@pytest.mark.parametrize(
    ("text", "topology"),
    [
        ("topology='inverting', feedback='1k', input='1k'", Topology.INVERTING),
        ("topology='non-inverting', feedback='0 ohm', ground='1k'", Topology.NON_INVERTING),
        ("feedback='1k', input='1k'", Topology.INVERTING),
        ("gain=2", None),
    ],
)
def test_an_amplifier_knows_its_wiring(text: str, topology: Topology | None) -> None:
    """By word, or by the resistor that is named."""
    made = stage(f"{{kind='amplifier', {text}}}")
    assert isinstance(made, Amplifier)
    assert made.topology is topology


def test_a_share_links_its_supply() -> None:
    """The offset of half a supply holds that supply."""
    made = stage("{kind='amplifier', gain=2, offset='v33 / 2'}")
    assert isinstance(made, Amplifier)
    assert isinstance(made.offset, Share)
    assert made.offset.source.name == "v33"


def test_the_only_voltage_feeds_a_sensor() -> None:
    """Where one voltage is defined, `supply` may be left out."""
    made = channel(
        "{kind='thermistor', r25='10k', beta=3950, with='10k'}",
        supplies='[reference.vref]\nvoltage = "2.5 V"\n',
    ).chain[0]
    assert isinstance(made, Thermistor)
    assert made.supply.name == "vref"


def test_curved_stages_keep_all_they_were_given() -> None:
    """An rtd by current and a table with its companion."""
    rtd = stage("{kind='rtd', r0='100 ohm', current='1 mA 1%'}")
    table = stage(
        "{kind='table', points=[['0 degC','27k'],['9 degC','20k']], with='R4 1k', side='top', "
        "supply='v5'}"
    )
    assert isinstance(rtd, Rtd)
    assert rtd.current is not None
    assert rtd.supply is None
    assert isinstance(table, Table)
    assert table.companion is not None
    assert (table.companion.label, table.side.value) == ("R4", "top")
