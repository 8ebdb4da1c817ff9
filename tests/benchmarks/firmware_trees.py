"""Firmware trees of any size for benchmarks: modules of many files, register headers, no vendor's.

Every tree holds the same conversions, `CHANNELS` of them, spread over its modules; the rest is code
that has nothing to do with a converter, as in real trees.
"""

from pathlib import Path

CHANNELS = 100
REGISTERS = 3_000
"""Register `#define`s in the header of a module."""
SOURCES = 16
"""Pairs of .c and .h in a module."""
FUNCTIONS = 14
"""Functions in a .c file."""

BOARD_HEADER = """\
#ifndef BOARD_H
#define BOARD_H
#include <vendor/part.h>
#define BOARD_REV 3
#if BOARD_REV >= 3
#define VREF_MV 2500u
#else
#define VREF_MV 3300u
#endif
#define ADC_BITS 12
#define ADC_COUNTS (1u << ADC_BITS)
#define SENSE_R_TOP 100u
#define SENSE_R_BOTTOM 10u
#define SENSE_RATIO ((SENSE_R_TOP + SENSE_R_BOTTOM) / SENSE_R_BOTTOM)
#define PIN_MV(code) ((uint32_t)(code) * VREF_MV / ADC_COUNTS)
#define MIN(a, b) ((a) < (b) ? (a) : (b))
uint16_t adc_read(uint8_t input);
#endif
"""

ADC_SOURCE = """\
#include <stdint.h>
#include "board.h"
#include <vendor/adc.h>
static volatile uint16_t adc_words[128];
void ADC_Handler(void) { adc_words[ADC->CH & 127] = (uint16_t)ADC->DATA; }
uint16_t adc_read(uint8_t input) { ADC->CTRL |= ADC_START; return adc_words[input & 127]; }
"""

SENSE = """\
#include <stdint.h>
#include "board.h"
#define SENSE_INPUT_{channel} {channel}
uint32_t sense_{channel}_mv;
static uint32_t sense_{channel}_scaled(uint16_t code)
{{
    uint32_t pin = (uint32_t)code * VREF_MV;
    pin *= SENSE_RATIO;
    return (pin + ADC_COUNTS / 2u) / ADC_COUNTS;
}}
void sense_{channel}_update(void)
{{
    uint16_t code = adc_read(SENSE_INPUT_{channel});
    sense_{channel}_mv = sense_{channel}_scaled(code);
}}
"""

FUNCTION = """\
/* Step {number} of part {part}: keeps its state between calls and answers on its bus. */
int {name}_step_{number}(struct {name}_state *state, uint8_t event)
{{
    static uint8_t retries_{number};
    uint32_t word = {upper}_R{number}_CTRL;
    if (state == 0 || event > {upper}_EVENTS) {{
        return -1;
    }}
    switch (event & 3u) {{
    case 0:
        word |= {upper}_R{number}_MASK << 2;
        state->count += {number};
        break;
    case 1:
        word &= ~(uint32_t){upper}_R{number}_MASK;
        state->count = state->count > 4 ? state->count - 4 : 0;
        break;
    default:
        for (uint8_t i = 0; i < 8; i++) {{
            state->window[i] = (uint8_t)(state->window[i] ^ (word >> i));
        }}
        retries_{number}++;
        break;
    }}
    {upper}_PORT->CTRL = word;
    return (int)MIN(state->count, retries_{number});
}}
"""

HEADER = """\
#ifndef {upper}_H
#define {upper}_H
#include <stdint.h>
#include "board.h"
#include "{module}_registers.h"
#include <vendor/bus.h>
#define {upper}_EVENTS 16u
struct {name}_state {{
    uint16_t count;
    uint8_t window[8];
    enum {{ {upper}_IDLE, {upper}_BUSY, {upper}_FAILED }} phase;
}};
{prototypes}#endif
"""


def write_tree(folder: Path, modules: int) -> int:
    """Writes a tree of so many modules; the lines of its .c and .h files."""
    source = folder / "src"
    _write(source / "board.h", BOARD_HEADER)
    _write(source / "hal" / "adc.c", ADC_SOURCE)
    for module in range(modules):
        _write_module(source / f"m{module:03}", f"m{module:03}")
    for channel in range(CHANNELS):
        module = f"m{channel % modules:03}"
        _write(source / module / f"sense_{channel}.c", SENSE.format(channel=channel))
    return sum(text.read_text().count("\n") for text in folder.rglob("*.[ch]"))


def _write_module(folder: Path, module: str) -> None:
    registers = [f"#ifndef {module.upper()}_REGISTERS_H\n#define {module.upper()}_REGISTERS_H\n"]
    for part in range(SOURCES):
        upper = f"{module}_part{part}".upper()
        registers.append(f"#define {upper}_PORT ((struct bus_port *)0x{0x40000000 + part:08X}u)\n")
        for number in range(REGISTERS // SOURCES // 2):
            registers.append(f"#define {upper}_R{number}_CTRL (0x{number * 4:04X}u)\n")
            registers.append(
                f"#define {upper}_R{number}_MASK (0x{number % 16:X}u << {number % 8})\n"
            )
    _write(folder / f"{module}_registers.h", "".join([*registers, "#endif\n"]))
    for part in range(SOURCES):
        _write_part(folder, module, part)


def _write_part(folder: Path, module: str, part: int) -> None:
    name = f"{module}_part{part}"
    words = {"module": module, "name": name, "upper": name.upper(), "part": part}
    numbers = range(FUNCTIONS)
    prototypes = "".join(
        f"int {name}_step_{number}(struct {name}_state *state, uint8_t event);\n"
        for number in numbers
    )
    bodies = "\n".join(FUNCTION.format(number=number, **words) for number in numbers)
    _write(folder / f"{name}.h", HEADER.format(prototypes=prototypes, **words))
    _write(folder / f"{name}.c", f'#include "{name}.h"\n#include <vendor/irq.h>\n\n{bodies}')


def board_text(channels: int) -> str:
    """A board file for the first channels of such a tree."""
    tables = [
        f"[channel.sense_{channel}]\n"
        f"{CHAIN}\n"
        f"[channel.sense_{channel}.firmware]\n"
        f'reading = "adc_read({channel})"\nvalue = "sense_{channel}_mv"\nunit = "1 mV"\n'
        for channel in range(channels)
    ]
    return f"{HARDWARE}{''.join(tables)}"


HARDWARE = """\
[board]
firmware = ["src"]
[reference.vref]
voltage = "2.5 V"
[converter.adc]
bits = 12
"""
CHAIN = 'unit = "V"\nchain = [{ kind = "divider", top = "100k 1%", bottom = "10k 1%" }]'


def _write(file: Path, text: str) -> None:
    file.parent.mkdir(parents=True, exist_ok=True)
    file.write_text(text)
