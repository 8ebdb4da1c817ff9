"""Converters and sensors as their documents describe them; each row names its document."""

from outside.published import Part

AVR = Part(
    source="ATmega48..328 and 164..1284 data sheets, ADC Conversion Result: 1024 Vin / Vref",
    converter="bits = 10",
    reference="5 V",
    target="avr",
)
AVR_BANDGAP = Part(source=AVR.source, converter="bits = 10", reference="1.1 V")
AVR_DIFFERENTIAL = Part(
    source="ATmega164A..1284 (DS40002070A), Differential Channels: 512 gain (Vp - Vn) / Vref",
    converter='bits = 10\ncoding = "twos-complement"\ninput_gain = 10\nword_bits = 10',
    reference="2.56 V",
    target="avr",
)
AVR_DIFFERENTIAL_LEFT = Part(
    source=AVR_DIFFERENTIAL.source,
    converter='bits = 10\ncoding = "twos-complement"\ninput_gain = 10\njustified = "left"',
    reference="2.56 V",
    target="avr",
)
AVR_GAIN_1 = Part(
    source="ATmega169P and 329 data sheets, differential channels with gain 1",
    converter='bits = 10\ncoding = "twos-complement"',
    reference="1.1 V",
)
ATTINY26 = Part(
    source="ATtiny26 data sheet, unipolar differential: 1024 gain (Vp - Vn) / Vref",
    converter='bits = 10\ninput_gain = 20\njustified = "left"',
    reference="2.56 V",
)
TINYAVR = Part(
    source="tinyAVR 0/1 and megaAVR 0 data sheets, conversion result: 1023 Vin / Vref",
    converter="bits = 10\nfull_scale_count = 1023",
    reference="2.5 V",
)
TINYAVR_64 = Part(
    source="tinyAVR 0/1 data sheet, accumulation of 64 results",
    converter="bits = 10\nfull_scale_count = 1023\noversampling = { samples = 64 }",
    reference="2.5 V",
)
AVR_DA = Part(
    source="AVR DA/DB data sheet 31.3.3.5: 4096 V / Vref in [0, 4095]",
    converter="bits = 12",
    reference="2.048 V",
)
AVR_DA_2V5 = Part(source=AVR_DA.source, converter="bits = 12", reference="2.5 V")
AVR_DA_16 = Part(
    source="AVR DA/DB data sheet, accumulation: the sum of 2..16 results is not scaled",
    converter="bits = 12\noversampling = { samples = 16 }",
    reference="2.048 V",
)
AVR_EA = Part(
    source="AVR EA and tinyAVR 2 data sheets: Vin gain / Vref 4096",
    converter="bits = 12\ninput_gain = 4",
    reference="1.024 V",
)
MSP430_ADC10 = Part(
    source="MSP430x1xx/x2xx user's guides, ADC10: 1023 (Vin - Vr-) / (Vr+ - Vr-)",
    converter="bits = 10\nfull_scale_count = 1023",
    reference="2.5 V",
)
MSP430_ADC12 = Part(
    source="MSP430x1xx user's guide, ADC12 core: 4095 (Vin - Vr-) / (Vr+ - Vr-)",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="2.5 V",
    target="msp430",
)
STM32 = Part(
    source="RM0365 and the LL headers (__LL_ADC_DIGITAL_SCALE): VDDA data / (2**12 - 1)",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="3.3 V",
)
NRF52_10 = Part(
    source="nRF52 product specification, SAADC, digital output; example of the vendor's forum",
    converter='bits = 10\ninput_gain = "1/3"',
    reference="0.6 V",
)
NRF52_UNITY = Part(source=NRF52_10.source, converter="bits = 10", reference="0.6 V")
NRF52_DIFFERENTIAL = Part(
    source=f"{NRF52_10.source}: 2**(bits - 1) for a differential input",
    converter='bits = 10\ncoding = "twos-complement"',
    reference="0.6 V",
)
NRF52_12 = Part(
    source=NRF52_10.source, converter='bits = 12\ninput_gain = "1/6"', reference="0.6 V"
)
RP2040 = Part(
    source="RP2040 data sheet 4.9.5 and its published example: T = 27 - (V - 0.706) / 0.001721",
    converter="bits = 12",
    reference="3.3 V",
    unit="degC",
    stages='{ kind = "linear", sensitivity = "-1.721 mV/degC", offset = "706 mV", at = "27 degC" }',
)
SAMA5 = Part(
    source="SAMA5 data sheet 67.10.4: single-ended 4095 Vin / Vref",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="3 V",
)
SAMA5_DIFFERENTIAL = Part(
    source="SAMA5 data sheet 67.10.4: differential 2047 Vin / Vref",
    converter='bits = 12\ncoding = "twos-complement"\nfull_scale_count = 2047',
    reference="3 V",
)
SAM_SUM = Part(
    source="SAM D21 data sheet, table Accumulation: 16 results of 12 bits make 16 bits",
    converter="bits = 12\noversampling = { samples = 16 }",
    reference="3.3 V",
)
SAM_1024 = Part(
    source="SAM D21 data sheet, table Accumulation: 1024 results, 6 bits dropped, 16 bits",
    converter="bits = 12\noversampling = { samples = 1024, shift = 6 }",
    reference="3.3 V",
)
SAM_14_BITS = Part(
    source="SAM C/D data sheets, table Oversampling and Decimation: 14 bits of 16 results, >> 2",
    converter="bits = 12\noversampling = { samples = 16, shift = 2 }",
    reference="3.3 V",
)
ADS1115 = Part(
    source="ADS1115 (SBAS444), tables FSR and ideal output code",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="4.096 V",
)
ADS1115_2V = Part(source=ADS1115.source, converter=ADS1115.converter, reference="2.048 V")
ADS1015 = Part(
    source="ADS1015 (SBASAV7): 12 bits, left-justified in 16, code FSR / 2048",
    converter='bits = 12\ncoding = "twos-complement"\njustified = "left"',
    reference="4.096 V",
)
ADS7950 = Part(
    source="ADS7950..61 data sheet, table of ideal codes, range 1",
    converter="bits = 12",
    reference="2.5 V",
)
ADS7950_RANGE_2 = Part(
    source="ADS7950..61 data sheet, table of ideal codes, range 2: 2 Vref",
    converter="bits = 12\nreference_gain = 2",
    reference="2.5 V",
)
MCP3301 = Part(
    source="MCP3301 (DS21700E) and MCP3302/04 (DS21697F, table 6-1): 13 bits signed",
    converter='bits = 13\ncoding = "twos-complement"',
    reference="4.096 V",
)
MCP3421_18 = Part(
    source="MCP3421 (DS22003E 4.9): Vin = code LSB / PGA, 18 bits",
    converter='bits = 18\ncoding = "twos-complement"\nword_bits = 24',
    reference="2.048 V",
)
MCP3421_16 = Part(
    source="MCP3421 (DS22003E 4.9): code = 32768 PGA Vin / 2.048 V, 16 bits",
    converter='bits = 16\ncoding = "twos-complement"\ninput_gain = 8',
    reference="2.048 V",
)
MCP3423 = Part(
    source="MCP3423 evaluation board: F907h is 0.996 V at 15.625 uV a count",
    converter='bits = 18\ncoding = "twos-complement"\nword_bits = 24',
    reference="2.048 V",
)
ADC0801 = Part(
    source="ADC0801..05 data sheets: pin 9 takes half the reference",
    converter="bits = 8\nreference_gain = 2\nword_bits = 8",
    reference="2.56 V",
)
ADC0800 = Part(
    source="ADC0800 data sheet (National), testing: LSB = Vref / 256, complementary outputs",
    converter='bits = 8\ncoding = "complementary"\nword_bits = 8',
    reference="10.24 V",
)
ADC0844 = Part(
    source="ADC0844 data sheet 4.2: first transition at half an LSB",
    converter="bits = 8",
    reference="5 V",
)
PIC18 = Part(
    source="PIC18F97J94 data sheet 22: first transition at 1 LSB of (Vr+ - Vr-) / 4096",
    converter='bits = 12\nfirst_transition = "1 LSB"',
    reference="4.096 V",
)
PIC18_FVR = Part(
    source="PIC18F1xK22 data sheet, fixed voltage reference: 4.096 V is 4 mV a step at 10 bits",
    converter="bits = 10",
    reference="4.096 V",
)
DSPIC = Part(
    source="dsPIC33F (DS70183A 16.18): first transition at half an LSB",
    converter="bits = 12",
    reference="4.096 V",
)
DSPIC_FRACTION = Part(
    source="dsPIC33F (DS70183A 16.18), data formats: fractional, left-justified",
    converter='bits = 10\njustified = "left"',
    reference="3.3 V",
)
INA219 = Part(
    source="INA219 (SBOS448F, table 3): bus voltage is (register >> 3) 4 mV",
    converter="bits = 13\nshift = 3",
    reference="32.768 V",
)
INA219_SHUNT = Part(
    source="INA219 (SBOS448F, table 3): 10 uV a count, 2 mohm",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="327.68 mV",
    unit="A",
    stages='{ kind = "shunt", resistance = "2 mohm" }',
)
INA226 = Part(
    source="INA226 (SBOS547, table 1): bus voltage 1.25 mV a count",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="40.96 V",
)
INA236 = Part(
    source="INA236 (SBOSA81D): bus voltage 1.6 mV a count",
    converter='bits = 16\ncoding = "twos-complement"',
    reference="52.4288 V",
)
ESP32 = Part(
    source="ESP32 guide 4.4 (adc.h): 4095 at 12 bits; 1.5 V at 2.5 dB",
    converter="bits = 12\nfull_scale_count = 4095",
    reference="1.5 V",
)


def _sensor(source: str, stages: str, unit: str, supply: str = "") -> Part:
    """A sensor in front of any converter."""
    return Part(
        source=source,
        converter="bits = 10",
        reference="5 V",
        stages=stages,
        unit=unit,
        supply=supply,
    )


def _linear(sensitivity: str, offset: str = "0 V", more: str = "") -> str:
    """A linear stage as a board file states it."""
    return f'{{ kind = "linear", sensitivity = "{sensitivity}", offset = "{offset}"{more} }}'


FROM_ZERO_CELSIUS = ', at = "0 degC"'
TMP36 = _sensor(
    "TMP36 data sheet: 10 mV/degC, 500 mV at 0 degC",
    _linear("10 mV/degC", "500 mV", FROM_ZERO_CELSIUS),
    "degC",
)
MCP9700 = _sensor("MCP9700 (published example)", TMP36.stages, "degC")
TMP236 = _sensor(
    "TMP236 data sheet: 19.5 mV/degC + 400 mV",
    _linear("19.5 mV/degC", "400 mV", FROM_ZERO_CELSIUS),
    "degC",
)
TMP235 = _sensor("TMP235 (SBOS857E), below 100 degC", TMP36.stages, "degC")
TMP35 = _sensor(
    "TMP35 data sheet, and LM35 from memory: 10 mV/degC",
    _linear("10 mV/degC", more=FROM_ZERO_CELSIUS),
    "degC",
)
TMP37 = _sensor(
    "TMP37 data sheet: 20 mV/degC", _linear("20 mV/degC", more=FROM_ZERO_CELSIUS), "degC"
)
ACS712 = _sensor(
    "ACS712-05B data sheet: half the supply and 185 mV/A, ratiometric",
    _linear("185 mV/A", "v5 / 2", ', ratiometric = "v5"'),
    "A",
    "5 V",
)
MPX5010 = _sensor(
    "MPX5010 data sheet (Rev 13): 5 V (0.09 P + 0.04)", _linear("450 mV/kPa", "0.2 V"), "kPa"
)
MPX4115A = _sensor(
    "MPX4115A data sheet: 5.1 V (0.009 P - 0.095)", _linear("45.9 mV/kPa", "-484.5 mV"), "kPa"
)
MPX4250A = _sensor(
    "MPX4250A data sheet: 5.1 V (0.004 P - 0.04)", _linear("20.4 mV/kPa", "-204 mV"), "kPa"
)
MPXV6115V = _sensor(
    "MPXV6115V data sheet: 5 V (0.007652 P + 0.92)", _linear("38.26 mV/kPa", "4.6 V"), "kPa"
)
LOOP_250 = _sensor(
    "4-20 mA over 250 ohm (loop receivers' manuals)",
    '{ kind = "shunt", resistance = "250 ohm" }',
    "mA",
)
LOOP_165 = _sensor(
    "4-20 mA over 165 ohm (loop receivers' manuals)",
    '{ kind = "shunt", resistance = "165 ohm" }',
    "mA",
)
DIVIDER = _sensor(
    "common practice: 100 k over 10 k", '{ kind = "divider", top = "100k", bottom = "10k" }', "V"
)
LOADED = _sensor(
    "common practice: 100 k over 10 k with 1 M at the pin",
    '{ kind = "divider", top = "100k", bottom = "10k", load = "1M" }',
    "V",
)
NON_INVERTING = _sensor(
    "common practice: 1 + 10 k / 1 k",
    '{ kind = "amplifier", topology = "non-inverting", feedback = "10k", ground = "1k" }',
    "V",
)
INVERTING = _sensor(
    "common practice: -10 k / 1 k",
    '{ kind = "amplifier", topology = "inverting", feedback = "10k", input = "1k" }',
    "V",
)
