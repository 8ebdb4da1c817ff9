"""Board files that several tests read."""

HATCHERY = """\
# Invented board of a trout hatchery's water monitor.
[board]
name = "hatchery"
revision = "B"
firmware = ["src"]
include = ["inc"]
exclude = ["sim/*"]
define = { BOARD_REV = "2", HAVE_PH = true }
coverage = 2

[target]
architecture = "avr"
clock = "16 MHz"
family = "avr"

[supply.v33]
voltage = "3.3 V 2%"

[reference.vref]
voltage = "2.56 V ± 0.2 %"
pin = "AREF"

[reference.ratio]
source = "supply"
supply = "v33"

[converter.slow]
bits = 8
reference = "vref"
reference_gain = 2
clock = { frequency = "125 kHz", min = "50 kHz", max = "200 kHz", cycles = 13 }
sampling = { time = "1.5 cycles", resistance = "10k", capacitance = "14p" }
total_error = "2 LSB"

[converter.fast]
bits = 12
reference = "ratio"
full_scale_count = [4096, 4095]
coding = "unsigned"
justified = "left"
word_bits = 16
oversampling = { samples = 16, shift = 4 }

[converter.signed]
bits = 12
reference = "vref"
coding = "twos-complement"

[converter.out]
kind = "dac"
bits = 10
reference = "vref"

[channel.tank]
converter = "fast"
input = 3
pin = "PC3"
unit = "kPa"
range = ["0 kPa", "180 kPa"]
allowed_error = "0.5 % of reading + 1 kPa"
hazard = "the tank runs over"
pin_limit = ["-0.3 V", "3.6 V"]
sample_rate = "100 Hz"
nominal = "90 kPa"
chain = [
    { kind = "linear", sensitivity = "10 mV/kPa", offset = "v33 / 10", ratiometric = "v33" },
    { kind = "low-pass", resistance = "R7 10k 1%", capacitance = "C3 100nK" },
]
firmware.reading = "adc_read(TANK_CH)"
firmware.value = ["tank_kpa_x10"]
firmware.unit = "0.1 kPa"

[[channel.tank.limit]]
name = "relief"
at = "150 kPa"
constant = "RELIEF_COUNTS"
in = "counts"

[channel.battery]
converter = "slow"
unit = "V"
chain = [{ kind = "divider", top = "R1 10k 1%", bottom = "R2 10k 1%", load = "1M" }]
[channel.battery.firmware]
reading = "adc_battery"

[channel.motor]
converter = "signed"
unit = "A"
range = ["-4 A", "4 A"]
chain = [
    { kind = "shunt", resistance = "R5 R100 1%" },
    { kind = "amplifier", topology = "non-inverting", feedback = "R8 40k", ground = "R9 10k" },
]

[channel.motor_b]
like = "motor"
input = 5
firmware.reading = "adc_motor_b"

[channel.water]
converter = "fast"
chain = [{ kind = "thermistor", r25 = "10k 1%", beta = 3950, with = "10k 1%", supply = "v33" }]

[channel.valve]
converter = "out"

[constants]
FULL = "full-scale"
VREF_MV = { is = "reference vref", unit = "mV" }
"cfg->scale" = { is = "divider battery" }
"R_TOP @ power.c" = "resistance R1"
GAIN_RAW = { value = 13.164 }
I_ZERO = { is = "code motor", at = "0 A" }

[variant.small]
define = { BOARD_REV = "3" }
[variant.small.reference.vref]
voltage = "2.5 V"

[[deviation]]
rule = "full-scale"
where = "battery"
reason = "the display has two digits"
until = 2027-06-30
"""
"""Every kind of table, in one file without mistakes."""

SMALLEST = """\
[reference.vref]
voltage = "2.5 V"
[converter.adc]
bits = 12
[channel.battery]
chain = [{ kind = "divider", top = "100k", bottom = "10k" }]
firmware.reading = "adc_read()"
"""
