"""Every key of a board file, table by table (stages apart): its shape and what it means."""

from bitweight.arithmetic.types import MODELS
from bitweight.board.converters import Coding, ConverterKind, Justification
from bitweight.board.decoding.definitions import Definitions
from bitweight.board.decoding.measures import Measure, UnitWord
from bitweight.board.decoding.shapes import (
    Counts,
    Day,
    Flag,
    Inner,
    Number,
    Sign,
    Text,
    Texts,
    Whole,
    Width,
    one_of,
    words,
)
from bitweight.board.decoding.tables import Field
from bitweight.board.hardware import LimitMeasure
from bitweight.board.parts import ReferenceSource
from bitweight.units import CYCLES, FARAD, HERTZ, LSB, OHM, SECOND, VOLT

WIDEST = 32
"""Most bits of a code or a word; no converter of the trade delivers more."""


class BoardFields:
    """[board]"""

    NAME = Field("name", Text(), "the board's name")
    REVISION = Field("revision", Text(), "the board's revision")
    FIRMWARE = Field("firmware", Texts(), "files and folders of the firmware, from the board file")
    INCLUDE = Field("include", Texts(), "folders searched for headers, from the board file")
    EXCLUDE = Field("exclude", Texts(), "patterns of paths that are left out")
    DEFINE = Field("define", Definitions(), "macros that the build defines for this board")
    BUILD = Field("build", Text(), "a compile_commands.json that lists the files and their macros")
    COVERAGE = Field("coverage", Number(Sign.POSITIVE), "coverage factor k of expanded uncertainty")
    ALL = (NAME, REVISION, FIRMWARE, INCLUDE, EXCLUDE, DEFINE, BUILD, COVERAGE)


class TargetFields:
    """[target]"""

    ARCHITECTURE = Field("architecture", words(*MODELS), "the processor's architecture")
    CLOCK = Field("clock", Measure("16 MHz", (HERTZ,), Sign.POSITIVE), "the processor's clock")
    FAMILY = Field("family", Text(), "the microcontroller family whose registers are known")
    FAMILIES = Field("families", Texts(), "further family files, from the board file")
    INT_BITS = Field("int_bits", Width((16, 32)), "width of int")
    LONG_BITS = Field("long_bits", Width((32, 64)), "width of long")
    DOUBLE_BITS = Field("double_bits", Width((32, 64)), "width of double")
    CHAR_SIGNED = Field("char_signed", Flag(), "whether plain char is signed")
    ALL = (
        ARCHITECTURE,
        CLOCK,
        FAMILY,
        FAMILIES,
        INT_BITS,
        LONG_BITS,
        DOUBLE_BITS,
        CHAR_SIGNED,
    )


class SupplyFields:
    """[supply.NAME]"""

    VOLTAGE = Field(
        "voltage",
        Measure("3.3 V 2%", (VOLT,), Sign.NOT_ZERO),
        "the rail's voltage",
        required=True,
    )
    ALL = (VOLTAGE,)


class ReferenceFields:
    """[reference.NAME]"""

    SOURCE = Field("source", one_of(ReferenceSource), "where the reference comes from")
    VOLTAGE = Field("voltage", Measure("2.56 V 0.2%", (VOLT,), Sign.POSITIVE), "its voltage")
    SUPPLY = Field("supply", Text(), "the supply that it is, instead of a voltage")
    PIN = Field("pin", Text(), "the pin that it comes in at")
    ALL = (SOURCE, VOLTAGE, SUPPLY, PIN)


class OversamplingFields:
    """oversampling = { ... }"""

    SAMPLES = Field("samples", Whole(1, 65536), "conversions summed up", required=True)
    SHIFT = Field("shift", Whole(0, 24), "bits that the sum is shifted right, in total")
    ALL = (SAMPLES, SHIFT)


class ClockFields:
    """clock = { ... }"""

    FREQUENCY = Field("frequency", Measure("125 kHz", (HERTZ,), Sign.POSITIVE), "the clock")
    MIN = Field("min", Measure("50 kHz", (HERTZ,), Sign.POSITIVE), "lowest clock allowed")
    MAX = Field("max", Measure("200 kHz", (HERTZ,), Sign.POSITIVE), "highest clock allowed")
    CYCLES = Field("cycles", Number(Sign.POSITIVE), "cycles of one conversion")
    ALL = (FREQUENCY, MIN, MAX, CYCLES)


class SamplingFields:
    """sampling = { ... }"""

    TIME = Field(
        "time", Measure("1.5 us", (SECOND, CYCLES), Sign.POSITIVE), "how long the input is sampled"
    )
    RESISTANCE = Field(
        "resistance", Measure("2k", (OHM,), Sign.NOT_NEGATIVE), "resistance inside the converter"
    )
    CAPACITANCE = Field(
        "capacitance", Measure("14p", (FARAD,), Sign.POSITIVE), "the sampling capacitor"
    )
    ALL = (TIME, RESISTANCE, CAPACITANCE)


class ConverterFields:
    """[converter.NAME]"""

    KIND = Field("kind", one_of(ConverterKind), "which way it converts")
    FAMILY = Field("family", Text(), "the family whose conventions it follows")
    BITS = Field("bits", Whole(1, WIDEST), "bits of one conversion", required=True)
    REFERENCE = Field("reference", Text(), "the name of its reference")
    REFERENCE_GAIN = Field(
        "reference_gain", Number(Sign.POSITIVE), "full scale over the voltage at the reference pin"
    )
    FULL_SCALE_COUNT = Field(
        "full_scale_count",
        Counts(1 << WIDEST),
        "the count that would stand for exactly the reference; of a list the first is taken",
    )
    CODING = Field("coding", one_of(Coding), "how a code stands in its word")
    INPUT_GAIN = Field("input_gain", Number(Sign.POSITIVE), "gain between pin and converter")
    JUSTIFIED = Field("justified", one_of(Justification), "which end of its word the code is at")
    WORD_BITS = Field("word_bits", Whole(1, WIDEST), "bits of the word that the firmware reads")
    SHIFT = Field("shift", Whole(0, WIDEST - 1), "bits below the code in its word")
    FIRST_TRANSITION = Field(
        "first_transition", words("0.5 LSB", "1 LSB"), "where code 1 begins; 1 LSB: it truncates"
    )
    CODE_OFFSET = Field("code_offset", Whole(-1, 1), "1: a PWM is high for code + 1 counts")
    OVERSAMPLING = Field(
        "oversampling", Inner("oversampling", OversamplingFields.ALL), "done by the hardware"
    )
    CLOCK = Field("clock", Inner("clock", ClockFields.ALL), "the conversion clock")
    SAMPLING = Field("sampling", Inner("sampling", SamplingFields.ALL), "the sampling input")
    TOTAL_ERROR = Field(
        "total_error",
        Measure("2 LSB", (LSB, VOLT), Sign.NOT_NEGATIVE),
        "total unadjusted error of the converter",
    )
    ALL = (
        KIND,
        FAMILY,
        BITS,
        REFERENCE,
        REFERENCE_GAIN,
        FULL_SCALE_COUNT,
        CODING,
        INPUT_GAIN,
        JUSTIFIED,
        WORD_BITS,
        SHIFT,
        FIRST_TRANSITION,
        CODE_OFFSET,
        OVERSAMPLING,
        CLOCK,
        SAMPLING,
        TOTAL_ERROR,
    )


class FirmwareFields:
    """[channel.NAME.firmware]"""

    READING = Field("reading", Texts(), "C expressions that yield the raw code")
    VALUE = Field("value", Texts(), "where the result ends: variables, members, functions, calls")
    UNIT = Field("unit", UnitWord(scaled=True), "what one count of value stands for")
    READING_GAIN = Field(
        "reading_gain", Number(Sign.POSITIVE), "counts of the reading for one converter count"
    )
    ALL = (READING, VALUE, UNIT, READING_GAIN)


class LimitFields:
    """[[channel.NAME.limit]]"""

    NAME = Field("name", Text(), "what the limit is for")
    AT = Field("at", Measure("180 kPa"), "the quantity that the limit stands for", required=True)
    CONSTANT = Field("constant", Text(), "the C expression of the limit", required=True)
    MEASURE = Field("in", one_of(LimitMeasure), "whether it is compared with counts or the value")
    BITS = Field("bits", Whole(1, WIDEST), "bits of its counts where they are of another width")
    ALL = (NAME, AT, CONSTANT, MEASURE, BITS)


class ConstantFields:
    """[constants]"""

    IS = Field("is", Text(), "what the constant stands for")
    UNIT = Field("unit", UnitWord(scaled=True), "what one count of it stands for")
    AT = Field("at", Measure("0 A"), "the quantity of an ideal code")
    VALUE = Field("value", Number(), "what stands in for data known only at run time")
    ALL = (IS, UNIT, AT, VALUE)


class DeviationFields:
    """[[deviation]]"""

    RULE = Field("rule", Text(), "the rule departed from", required=True)
    WHERE = Field("where", Text(), "the symbol, channel or file", required=True)
    REASON = Field("reason", Text(), "why it is accepted")
    UNTIL = Field("until", Day(), "the last day it holds")
    ALL = (RULE, WHERE, REASON, UNTIL)
