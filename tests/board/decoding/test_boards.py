"""The whole board file: read, linked, its variants, and its mistakes with their places."""

from datetime import date
from fractions import Fraction
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.arithmetic.types import MODELS
from bitweight.board.decoding.boards import board_from_text, load_board
from bitweight.errors import BoardError, SourceError, UsageError
from board.mistaken import (
    BOARD,
    CHANNEL,
    CONVERTER,
    REFERENCE,
    Case,
    case,
    check,
    mistakes_of,
    stage,
)
from board.samples import HATCHERY, SMALLEST

CASES = [
    # Tables and keys
    case("unknown table", "[¦bord]\nname = 'x'\n" + BOARD, "did you mean 'board'?"),
    case(
        "name",
        BOARD + "[board]\nname = ¦3\n",
        "name: expected a text in quotes, found the number 3",
    ),
    case(
        "not a table", "target = ¦3\n" + BOARD, "expected a table for [target], found the number 3"
    ),
    case("no channel", "¦" + REFERENCE + CONVERTER, "no channel is defined: add a table"),
    case(
        "unknown key",
        CONVERTER + "[reference.vref]\nvoltage = '2 V'\n¦refrence = 3\n" + CHANNEL,
        "unknown key 'refrence' in [reference.vref]",
    ),
    case(
        "nearest key",
        REFERENCE + "[converter.adc]\nbits = 12\n¦refrence = 'vref'\n" + CHANNEL,
        "unknown key 'refrence' in [converter.adc], did you mean 'reference'?",
    ),
    case(
        "dotted key",
        "converter.adc.bits = ¦'12'\n" + REFERENCE + CHANNEL,
        'bits: expected a whole number, found the text "12"',
    ),
    # Target
    case("architecture", BOARD + "[target]\narchitecture = ¦'avrr'\n", "did you mean 'avr'?"),
    case("width", BOARD + "[target]\nint_bits = ¦24\n", "int_bits: expected 16 or 32, found the"),
    case(
        "flag", BOARD + "[target]\nchar_signed = ¦1\n", "expected true or false, found the number"
    ),
    case("clock", BOARD + "[target]\nclock = ¦'16 MV'\n", "expected a quantity in Hz"),
    # Supplies and references
    case("no voltage", BOARD + "¦[supply.v33]\n", "missing key 'voltage' in [supply.v33]"),
    case(
        "plain voltage",
        BOARD + "[supply.v33]\nvoltage = ¦3.3\n",
        'like "3.3 V 2%", found the number 3.3',
    ),
    case("negative", CONVERTER + CHANNEL + "[reference.vref]\nvoltage = ¦'-2.5 V'\n", "above 0"),
    case(
        "no supply", "[reference.vref]\nsupply = ¦'v33'\n" + CONVERTER + CHANNEL, "no supply 'v33'"
    ),
    case(
        "nearest supply",
        "[supply.v33]\nvoltage='3.3 V'\n[reference.vref]\nsupply = ¦'v3'\n" + CONVERTER + CHANNEL,
        "no supply 'v3' is defined, did you mean 'v33'?",
    ),
    case(
        "two voltages",
        "[supply.v]\nvoltage='3 V'\n[reference.r]\nsupply='v'\nvoltage=¦'3 V'\n"
        + CONVERTER
        + CHANNEL,
        "voltage and supply are both given",
    ),
    case("neither", "¦[reference.vref]\npin='A'\n" + CONVERTER + CHANNEL, "missing key 'voltage'"),
    case("source", REFERENCE + "source = ¦'bandgap'\n" + CONVERTER + CHANNEL, "expected one of"),
    case("100 %", CONVERTER + CHANNEL + "[reference.a]\nvoltage=¦'2 V 100%'\n", "below 100 %"),
    case(
        "100 % absolute", CONVERTER + CHANNEL + "[reference.a]\nvoltage=¦'2 V ± 2 V'\n", "reaches 0"
    ),
    case(
        "same name",
        REFERENCE.replace("vref", "¦vref")
        + "[supply.vref]\nvoltage = '5 V'\n"
        + CONVERTER
        + CHANNEL,
        "'vref' is another supply already",
    ),
    # Converters
    case("0 bits", REFERENCE + "[converter.adc]\nbits = ¦0\n" + CHANNEL, "from 1 to 32, found 0"),
    case(
        "33 bits", REFERENCE + "[converter.adc]\nbits = ¦33\n" + CHANNEL, "from 1 to 32, found 33"
    ),
    case("bits missing", REFERENCE + "¦[converter.adc]\n" + CHANNEL, "missing key 'bits'"),
    case(
        "coding",
        REFERENCE + "[converter.adc]\nbits = 8\ncoding = ¦'two-complement'\n" + CHANNEL,
        "did you mean 'twos-complement'?",
    ),
    case(
        "reference name",
        REFERENCE + "[converter.adc]\nbits = 8\nreference = ¦'vreff'\n" + CHANNEL,
        "no reference 'vreff' is defined, did you mean 'vref'?",
    ),
    case(
        "which reference",
        REFERENCE + "[reference.b]\nvoltage='1 V'\n¦[converter.adc]\nbits = 8\n" + CHANNEL,
        "missing key 'reference' in [converter.adc]: several are defined: b, vref",
    ),
    case("no reference", "¦[converter.adc]\nbits = 8\n" + CHANNEL, "add a table [reference.NAME]"),
    case("full scale", REFERENCE + CONVERTER + "full_scale_count = ¦0\n" + CHANNEL, "whole number"),
    case("no counts", REFERENCE + CONVERTER + "full_scale_count = ¦[]\n" + CHANNEL, "empty list"),
    case("gain", REFERENCE + CONVERTER + "reference_gain = ¦0\n" + CHANNEL, "a number above 0"),
    case(
        "infinite", REFERENCE + CONVERTER + "input_gain = ¦inf\n" + CHANNEL, "found the number inf"
    ),
    case(
        "huge", REFERENCE + CONVERTER + "input_gain = ¦1e999999999\n" + CHANNEL, "expected a number"
    ),
    case(
        "word",
        REFERENCE + CONVERTER + "word_bits = ¦8\n" + CHANNEL,
        "word_bits: 8 bits cannot hold a 12-bit code",
    ),
    case(
        "shift",
        REFERENCE + CONVERTER + "justified='left'\nshift = ¦3\n" + CHANNEL,
        "a left-justified code of 12 bits in 16 has shift 4, found 3",
    ),
    case(
        "oversampling",
        REFERENCE + CONVERTER + "oversampling = { ¦sample = 16 }\n" + CHANNEL,
        "unknown key 'sample' in oversampling, did you mean 'samples'?",
    ),
    case(
        "oversampling shift",
        REFERENCE + CONVERTER + "oversampling = ¦{ shift = 2 }\n" + CHANNEL,
        "missing key 'samples' in oversampling: conversions summed up",
    ),
    case(
        "wide sum",
        REFERENCE + "[converter.adc]\nbits=24\noversampling = ¦{ samples = 1024 }\n" + CHANNEL,
        "the results take 34 bits",
    ),
    case(
        "clock", REFERENCE + CONVERTER + "clock.frequency = ¦'3 V'\n" + CHANNEL, "clock: frequency:"
    ),
    case(
        "clock ends",
        REFERENCE + CONVERTER + "clock = { min = ¦'2 MHz', max = '1 MHz' }\n" + CHANNEL,
        "expected min below max",
    ),
    case("error unit", REFERENCE + CONVERTER + "total_error = ¦'2 A'\n" + CHANNEL, "in LSB or V"),
    # Channels
    case("converter", BOARD + "converter = ¦'adc9'\n", "no converter 'adc9' is defined, did you"),
    case("no converter", REFERENCE + "¦[channel.tank]\n", "no converter is defined"),
    case("reversed", BOARD + "range = ¦['16 V', '0 V']\n", "expected the low end first"),
    case("one end", BOARD + "range = ¦['16 V']\n", "expected a low and a high end"),
    case(
        "two kinds", BOARD + "range = ¦['0 V', '5 A']\n", "the low end is in V, the high end in A"
    ),
    case(
        "range unit",
        BOARD + "unit = ¦'kPa'\nrange = ¦['0 V', '5 V']\n",
        "without a chain it is V",
        "range is in V but",
    ),
    case("bad unit", BOARD + "unit = ¦'k/'\n", "unit: expected a unit like V"),
    case(
        "error of unit",
        BOARD + "allowed_error = ¦'50 mA'\n",
        "is in mA but the channel's unit is V",
    ),
    case("error text", BOARD + "allowed_error = ¦'a bit'\n", "expected an error like"),
    case("pin", BOARD + "pin_limit = [¦'0 A', ¦'1 A']\n", "quantity in V", "quantity in V"),
    case("copy", BOARD + "like = ¦'tonk'\n", "no channel 'tonk' is defined, did you mean 'tank'?"),
    case("circle", BOARD + "like = ¦'tank'\n", "copies itself"),
    case("input", BOARD + "input = ¦-1\n", "from 0 to 1023, found -1"),
    case("reading", BOARD + "firmware.reading = ¦3\n", "firmware: reading: expected a text"),
    case("result unit", BOARD + "firmware.unit = ¦'mA'\n", 'a voltage like "1 mV", found "mA"'),
    case(
        "limit",
        BOARD + "limit = [{ at = '3 V', ¦constnt = 'X' }]\n",
        "unknown key 'constnt' in a limit, did you mean 'constant'?",
    ),
    case("limit unit", BOARD + "[[channel.tank.limit]]\nat = ¦'3 A'\nconstant='X'\n", "at is in A"),
    # Stages
    case("kind", stage("{ kind = ¦'dividr' }"), "did you mean 'divider'?"),
    case("no kind", stage("¦{ top = '10k' }"), "missing key 'kind'"),
    case("no stage", stage("¦3"), "expected a stage"),
    case("no chain", BOARD + "chain = ¦'divider'\n", "expected a list of stages"),
    case(
        "key",
        stage("{ kind='divider', top='1k', bottom='1k', ¦laod='1k' }"),
        "did you mean 'load'?",
    ),
    case(
        "missing", stage("¦{ kind='divider', top='1k' }"), "missing key 'bottom' in a divider stage"
    ),
    case(
        "resistance", stage("{ kind='divider', top=¦'-1k', bottom='1k' }"), '0 or more, found "-1k"'
    ),
    case("unit", stage("{ kind='divider', top=¦'1 V', bottom='1k' }"), 'in ohm, like "4k7"'),
    case("0 ohm", stage("{ kind='divider', top='0 ohm', bottom=¦'0 ohm' }"), "a divider of 0 ohm"),
    case("tolerance", stage("{ kind='divider', top=¦'1k 120%', bottom='1k' }"), "below 100 %"),
    case(
        "end",
        stage("{ kind='divider', top='1k', bottom='1k', to=¦'v5' }"),
        "no supply or reference",
    ),
    case("bare amplifier", stage("¦{ kind='amplifier' }"), "missing gain, or topology"),
    case(
        "gain 0",
        stage("{ kind='amplifier', gain=¦0 }"),
        "a number other than 0, found the number 0",
    ),
    case("both", stage("{ kind='amplifier', gain=2, feedback=¦'1k' }"), "are both given"),
    case(
        "wiring",
        stage("¦{ kind='amplifier', topology='inverting', feedback='1k' }"),
        "'input' in an",
    ),
    case(
        "wrong kind",
        stage("¦{ kind='shunt', resistance='R100' }") + "unit = 'V'\n",
        "takes A, but the channel's unit is V",
    ),
    case("shunt 0", stage("{ kind='shunt', resistance=¦'0 ohm' }"), 'above 0, found "0 ohm"'),
    case(
        "slope",
        stage("{ kind='linear', sensitivity=¦'10 mV/A' }") + "unit='kPa'\n",
        "the sensitivity is per A, but the channel's unit is kPa",
    ),
    case(
        "offset",
        stage("{ kind='linear', sensitivity='10 mV/degC', offset=¦'3 A' }"),
        "the offset is in A, but the stage gives V",
    ),
    case(
        "share",
        stage("{ kind='amplifier', gain=2, offset=¦'v33 / 2' }"),
        "no supply or reference 'v33'",
    ),
    case("share of 0", stage("{ kind='amplifier', gain=2, offset=¦'vref / 0' }"), "divisor other"),
    case("thermistor", stage("¦{ kind='thermistor', r25='10k', with='10k' }"), "either beta or"),
    case("rtd", stage("¦{ kind='rtd', r0='100 ohm' }"), "either current, or with"),
    case("points", stage("{ kind='table', points=¦[['0 V','1 V']] }"), "at least two"),
    case("falling", stage("{ kind='table', points=¦[['0 V','1 V'],['0 V','2 V']] }"), "to rise"),
    case(
        "pin",
        stage("¦{ kind='linear', sensitivity='2 A/V' }") + "unit='V'\n",
        "the chain ends in A",
    ),
    # Constants, deviations, variants
    case("role", BOARD + "[constants]\nX = ¦'full scale'\n", "did you mean 'full-scale'?"),
    case("name", BOARD + "[constants]\nX = ¦'reference vreff'\n", "did you mean 'vref'?"),
    case("no role", BOARD + "[constants]\nX = ¦{ unit = 'V' }\n", "missing key 'is' or 'value'"),
    case("number", BOARD + "[constants]\nX = ¦3\n", "expected a role like"),
    case("code", BOARD + "[constants]\nX = ¦'code tank'\n", "missing key 'at' in constant X"),
    case("rule missing", BOARD + "¦[[deviation]]\nwhere='x'\n", "missing key 'rule'"),
    case("until", BOARD + "[[deviation]]\nrule='a'\nwhere='x'\nuntil=¦'soon'\n", "expected a date"),
    case("no list", BOARD + "¦[deviation]\n", "expected tables [[deviation]]"),
    case("variant", BOARD + "[variant.b.converter.adc]\nbits = ¦99\n", "from 1 to 32, found 99"),
    case("nested variant", BOARD + "[variant.b.¦variant.c]\n", "a variant cannot have variants"),
    case("macro", BOARD + "[board]\ndefine = { ¦'1A' = '2' }\n", "expected the name of a macro"),
    case(
        "one part twice",
        BOARD + "chain = [{kind='divider', top='R1 1k', bottom=¦'R1 2k'}]\n",
        '"R1 2k" contradicts "R1 1k" on line 6',
    ),
    # Names
    case("slip of a table", REFERENCE + CONVERTER + "[¦channels.tank]\n", "mean 'channel'?"),
    case(
        "slip of a key",
        CONVERTER + CHANNEL + "[reference.vref]\n¦volt = '3 V'\n",
        "did you mean 'voltage'?",
    ),
    case("no slip", BOARD + "¦bitz = 3\n", "in [channel.tank]; known keys: allowed_error"),
    case(
        "no name",
        "[reference]\n¦voltage = '3 V'\n" + CONVERTER + CHANNEL,
        "a reference needs a name: write [reference.NAME]",
    ),
    case("no tables", "reference = ¦'3 V'\n" + CONVERTER + CHANNEL, "expected a table for"),
    case("scalar name", BOARD + "[supply]\nv7 = ¦3\n", "expected a table [supply.v7], found"),
    case("empty name", BOARD + '[channel.¦""]\n', "expected a name in [channel.NAME]"),
    case("empty variant", BOARD + '[variant.¦""]\n', "expected a name in [variant.NAME]"),
    # What contradicts itself
    case("cold", BOARD + "nominal = ¦'-300 degC'\n", 'no less than -273.15 degC, found "-300'),
    case(
        "bits of a value",
        BOARD + "[[channel.tank.limit]]\nat='1 V'\nconstant='X'\nin='value'\nbits=¦8\n",
        "bits is the width of counts",
    ),
    case(
        "against",
        stage("{ kind='divider', top='1k', bottom='1k' }, ¦{ kind='against', voltage='1.1 V' }"),
        "an against stage comes first in its chain",
    ),
    case(
        "internal supply",
        "[supply.v]\nvoltage='3 V'\n[reference.r]\nsource=¦'internal'\nsupply='v'\n"
        + CONVERTER
        + CHANNEL,
        "an internal reference is no supply",
    ),
    case("share", BOARD + "allowed_error = ¦'100 %'\n", "expected a share below 100 %"),
    case(
        "curved steps",
        stage("{ kind='thermistor', r25='10k', beta=3950, with='10k' }")
        + "allowed_error = ¦'2 LSB'\n",
        "needs a channel whose LSB is the same everywhere",
    ),
    case("endless", BOARD + "input = ¦" + "9" * 5000 + "\npin = ¦3\n", "to 1023", "pin: "),
    # Many at once
    case(
        "every limit",
        BOARD + "limit = [¦{ at = '3 V' }, { at = ¦'1 A', constant = 'X', in = ¦'count' }]\n",
        "missing key 'constant' in a limit",
        "at is in A",
        "limit: in: expected one of",
    ),
    case(
        "every key of a stage",
        "[supply.v]\nvoltage = '3 V'\n" + stage("¦¦¦¦{ kind='thermistor' }"),
        "expected either beta or",
        "missing key 'r25'",
        "missing key 'supply'",
        "missing key 'with'",
    ),
    case(
        "all at once",
        "[reference.vref]\nvoltage = ¦'2.5 A'\n[converter.adc]\nbits = ¦0\n[channel.tank]\n"
        "converter = ¦'ad'\nrange = ¦['2 V', '1 V']\nchain = [{kind=¦'x'}]\n",
        "voltage",
        "bits",
        "no converter",
        "low end",
        "unknown kind",
    ),
]


@pytest.mark.parametrize("one", CASES, ids=lambda one: one.name)
def test_every_mistake_stands_at_its_place_with_its_text(one: Case) -> None:
    """A wrong board file gives exactly its mistakes, each with its place and what was expected."""
    check(one)


def test_one_run_reports_at_least_forty_kinds_of_mistakes() -> None:
    """The table of cases does not shrink unnoticed, and no two rows are the same."""
    assert len({one.text for one in CASES}) == len(CASES) > 80


def test_a_board_file_with_everything_becomes_linked_facts() -> None:
    """Every table of the sample arrives as a fact, with its links."""
    board = board_from_text(HATCHERY, file="board.toml")
    assert (board.name, board.revision, board.coverage) == ("hatchery", "B", 2)
    assert board.define == (("BOARD_REV", "2"), ("HAVE_PH", "1"))
    assert board.target.model == MODELS["avr"]
    assert [channel.name for channel in board.channels] == [
        "tank",
        "battery",
        "motor",
        "motor_b",
        "water",
        "valve",
    ]
    tank = board.channels[0]
    assert tank.converter.reference.supply == board.supplies[0]
    assert tank.converter.reference.voltage.value == Fraction(33, 10)
    assert tank.limits[0].at.number == 150
    assert board.deviations[0].until == date(2027, 6, 30)


def test_every_fact_knows_its_place() -> None:
    """Channel, converter and constant stand at their names in the file."""
    board = board_from_text(HATCHERY, file="board.toml")
    lines = HATCHERY.split("\n")
    facts = [*board.channels, *board.converters, *board.references, *board.supplies]
    for fact in facts:
        assert lines[fact.place.line - 1][fact.place.column - 1 :].startswith(fact.name)


def test_line_ends_do_not_move_places() -> None:
    """A file with CRLF line ends gives the same facts as one with LF."""
    crlf = HATCHERY.replace("\n", "\r\n")
    assert board_from_text(crlf, file="b") == board_from_text(HATCHERY, file="b")


def test_the_smallest_file_links_its_only_candidates() -> None:
    """A converter's bits, a reference voltage and one channel are enough."""
    board = board_from_text(SMALLEST, file="boards/tiny.toml")
    channel = board.channels[0]
    assert board.name == "tiny"
    assert (channel.converter.name, channel.converter.reference.name) == ("adc", "vref")
    assert (channel.unit.text, channel.reading) == ("V", ("adc_read()",))
    assert board.target.model.int_bits == 32
    assert not channel.converter.full_scale_stated


def test_a_variant_overrides_key_by_key() -> None:
    """A variant changes only what it names; the base stays as it is."""
    base = board_from_text(HATCHERY, file="b")
    small = board_from_text(HATCHERY, file="b", variant="small")
    assert [variant.name for variant in small.variants] == ["small"]
    assert (base.variant, small.variant) == (None, "small")
    assert small.references[0].voltage.text == "2.5 V"
    assert small.references[0].pin == "AREF"
    assert dict(small.define) == {"BOARD_REV": "3", "HAVE_PH": "1"}
    assert small.channels[0].chain == base.channels[0].chain


def test_lists_and_chains_of_a_variant_replace() -> None:
    """A chain in a variant stands in place of the base's, stage for stage."""
    text = SMALLEST + "[variant.bare.channel.battery]\nchain = []\n"
    assert board_from_text(text, file="b", variant="bare").channels[0].chain == ()


def test_a_reference_may_be_named_like_its_supply() -> None:
    """A supply that serves as reference needs no second name."""
    text = "[supply.avcc]\nvoltage = '5 V'\n[reference.avcc]\nsupply = 'avcc'\n"
    board = board_from_text(text + CONVERTER + CHANNEL, file="b")
    assert board.converters[0].reference.supply == board.supplies[0]


def test_an_unknown_variant_is_a_usage_error() -> None:
    """Asking for a variant that is not there names the nearest one."""
    with pytest.raises(UsageError, match="no variant 'smal', did you mean 'small'"):
        board_from_text(HATCHERY, file="b", variant="smal")


def test_a_missing_file_is_a_source_error(tmp_path: Path) -> None:
    """A board file that is not there is said to be missing, by its shown name."""
    with pytest.raises(SourceError, match=r"board\.toml: error: cannot be read"):
        load_board(tmp_path / "none.toml", shown="board.toml")


def test_a_file_is_read_from_disk(tmp_path: Path) -> None:
    """A board read from a file equals the board of its text."""
    path = tmp_path / "b.toml"
    path.write_text(HATCHERY, encoding="utf-8")
    assert load_board(path, shown="b") == board_from_text(HATCHERY, file="b")


@given(st.data())
def test_no_mutilated_board_file_raises_anything_unexpected(data: st.DataObject) -> None:
    """Whatever is cut out of or put into a board file, it decodes or gives mistakes with places."""
    start = data.draw(st.integers(0, len(HATCHERY)))
    end = data.draw(st.integers(start, min(len(HATCHERY), start + 40)))
    junk = data.draw(st.text(alphabet="[]{}='\"\n#.,3kV-é%", max_size=6))
    lines = HATCHERY.count("\n") + junk.count("\n") + 2
    for mistake in mistakes_of(HATCHERY[:start] + junk + HATCHERY[end:]):
        assert 1 <= mistake.place.line <= lines
        assert mistake.message


def test_mistakes_come_in_the_order_of_the_file() -> None:
    """Whatever order the tables are read in, mistakes are listed from top to bottom."""
    text = "[channel.a]\nconverter='x'\n[converter.b]\nbits=0\n[reference.c]\n"
    places = [mistake.place for mistake in mistakes_of(text)]
    assert places == sorted(places)
    assert len(places) == 3


def test_a_board_error_prints_one_line_a_mistake() -> None:
    """The text of the error is in the form file:line:column: error: message."""
    text = "[channel.a]\nx=1\n[converter.b]\nbits=0\n[reference.r]\nvoltage='1 V'"
    with pytest.raises(BoardError) as caught:
        board_from_text(text, file="b")
    assert str(caught.value).split("\n") == [
        "b:2:1: error: unknown key 'x' in [channel.a]; known keys: allowed_error, chain, "
        "converter, firmware, hazard, input, input_minus, like, limit, nominal, pin, pin_limit, "
        "range, sample_rate, unit",
        "b:4:6: error: bits: expected a whole number from 1 to 32, found 0",
    ]
