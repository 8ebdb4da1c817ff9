"""gcc as the oracle of C arithmetic: the same expressions compiled and run on this machine."""

import random
import shutil
import subprocess
from collections.abc import Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
import pytest

from bitweight.arithmetic.evaluation import Curve, evaluate
from bitweight.arithmetic.expressions import Code, Unknown
from bitweight.arithmetic.types import MODELS
from bitweight.arithmetic.values import FaultKind
from properties.conversions import CONVERSIONS, Conversion
from properties.strategies import (
    BOUNDARY_WORDS,
    CODE_TYPES,
    FLOATINGS,
    INTEGERS,
    TYPES,
    Sample,
    binary,
    cast,
    code,
    constant,
    reading_sample,
    sample,
)

HOST = MODELS["host"]
BATCH = 400
GENERATED = 2_400
SANITIZED = 2_000
WORDS = np.array(BOUNDARY_WORDS, dtype=np.int64)
UNDEFINED = (
    FaultKind.OVERFLOW,
    FaultKind.DIVISION,
    FaultKind.SHIFT,
    FaultKind.SIGNED_SHIFT,
    FaultKind.NEGATIVE_SHIFT,
    FaultKind.CONVERSION,
)
"""What C leaves undefined and gcc's sanitizer reports."""
UNPREDICTABLE = (FaultKind.DIVISION, FaultKind.SHIFT, FaultKind.CONVERSION)
"""What has no value even with -fwrapv."""
pytestmark = pytest.mark.skipif(shutil.which("gcc") is None, reason="needs gcc")

PRELUDE = """
#include <setjmp.h>
#include <signal.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>
#define V(type, ...) ({ volatile type held = (__VA_ARGS__); held; })
static sigjmp_buf back;
static void trapped(int number) { siglongjmp(back, number); }
struct item { uint64_t (*run)(int64_t); uint64_t wanted; };
"""
FUNCTION = """
static __attribute__((noinline)) uint64_t f{0}(int64_t word) {{
  volatile {1} code = ({1})word; {1} x = code; {2} result = {3}; uint64_t bits = 0;
  _Static_assert(_Generic(({3}), {2}: 1, default: 0), "type");
  memcpy(&bits, &result, sizeof result); return bits; }}
"""
MAIN = """
int main(void) {{
  static const struct item items[] = {{ {0} }};
  static const int64_t words[] = {{ {1} }};
  signal(SIGILL, trapped); signal(SIGFPE, trapped);
  for (unsigned i = 0; i < sizeof items / sizeof *items; i++)
    for (unsigned k = 0; k < sizeof words / sizeof *words; k++) {{
      uint64_t out[2] = {{0, 0}};
      if (items[i].wanted >> k & 1) {{
        if (sigsetjmp(back, 1)) out[1] = 1; else out[0] = items[i].run(words[k]);
      }}
      fwrite(out, sizeof out, 1, stdout);
    }}
  return 0; }}
"""


@dataclass(frozen=True, slots=True)
class Trial:
    """One expression, our curve of it, and the words for which gcc is asked."""

    text: str
    reading: str
    curve: Curve
    wanted: np.ndarray


def generated(count: int, seed: int) -> list[tuple[Sample, Code]]:
    """A fixed series of expressions, each type of reading in turn."""
    rng = random.Random(seed)
    readings = [code(HOST.types[name]) for name in CODE_TYPES]
    chosen = [readings[index % len(readings)] for index in range(count)]
    return [
        (sample(rng.choice, HOST, reading, rng.choice((1, 2, 3, 4))), reading) for reading in chosen
    ]


def every_pair() -> list[tuple[Sample, Code]]:
    """Every operator between every two types, every cast, every spelling of a constant."""
    found: list[tuple[Sample, Code]] = []
    wide = code(HOST.long_long)
    bare = reading_sample(wide)
    casts = [cast(HOST, name, bare) for name in TYPES]
    for operator in [
        "+",
        "-",
        "*",
        "/",
        "%",
        "&",
        "|",
        "^",
        "<<",
        ">>",
        "<",
        ">=",
        "==",
        "&&",
        "||",
    ]:
        for left in casts:
            made = (binary(HOST, operator, left, right) for right in casts)
            found += [(one, wide) for one in made if not isinstance(one.expression, Unknown)]
    products = (binary(HOST, "*", bare, constant(text, HOST)) for text in (*INTEGERS, *FLOATINGS))
    return [*found, *((made, wide) for made in products)]


def trial(made: Sample, reading: Code, *excluded: FaultKind) -> Trial:
    """Our side of one comparison; codes with a fault of an excluded kind are not asked."""
    curve = evaluate(made.expression, lambda _: WORDS)
    wanted = np.broadcast_to(~curve.faulty(*excluded), WORDS.shape) if excluded else WORDS == WORDS
    return Trial(made.text, reading.type.name, curve, wanted)


def compiled(folder: Path, trials: Sequence[Trial], options: Sequence[str]) -> np.ndarray:
    """For each trial and word what gcc's program gives: the bits of the result, and a trap."""
    functions = [
        FUNCTION.format(index, item.reading, item.curve.type.name, item.text)
        for index, item in enumerate(trials)
    ]
    masks = [sum(1 << k for k, asked in enumerate(item.wanted) if asked) for item in trials]
    items = ",".join(f"{{f{index}, {mask}ull}}" for index, mask in enumerate(masks))
    words = ",".join(f"(int64_t){word & (1 << 64) - 1}ull" for word in BOUNDARY_WORDS)
    source = folder / "trial.c"
    source.write_text(PRELUDE + "".join(functions) + MAIN.format(items, words))
    program = folder / "trial"
    subprocess.run(
        ["gcc", "-std=gnu11", "-w", *options, str(source), "-o", str(program)],
        check=True,
        capture_output=True,
    )
    out = subprocess.run([program], check=True, capture_output=True).stdout
    return np.frombuffer(out, dtype=np.uint64).reshape(len(trials), len(WORDS), 2)


def bits_of(curve: Curve) -> np.ndarray:
    """The object representation of each value, as gcc's program writes it.

    NaN and zeros of either sign count as 0: gcc folds `0 - x` into `-x` where 0 was an integer.
    """
    values = np.broadcast_to(curve.values, WORDS.shape)
    if not curve.type.is_integer:
        width = np.uint32 if curve.type.bits == 32 else np.uint64
        plain = np.where(np.isnan(values) | (values == 0), 0, values).astype(values.dtype)
        return plain.view(width).astype(np.uint64)
    keep = np.uint64((1 << curve.type.bits) - 1)
    return values.astype(np.uint64) & keep


def differing(item: Trial, theirs: np.ndarray) -> list[str]:
    """The words at which gcc and we disagree, in a form that can be run again."""
    ours, bits = bits_of(item.curve), theirs[:, 0].copy()
    if not item.curve.type.is_integer:
        width = np.float32 if item.curve.type.bits == 32 else np.float64
        raw = bits.astype(np.uint32) if width is np.float32 else bits
        bits[np.isnan(raw.view(width)) | (raw.view(width) == 0)] = 0
    bad = item.wanted & ((ours != bits) | (theirs[:, 1] != 0))
    return [
        f"{item.text} with {item.reading} x = {WORDS[k]}: gcc {bits[k]:#x}, ours {ours[k]:#x}"
        for k in np.flatnonzero(bad)
    ]


def in_batches(folder: Path, trials: Sequence[Trial], options: Sequence[str]) -> list[np.ndarray]:
    """Compile and run in batches, two at a time."""
    batches = [trials[start : start + BATCH] for start in range(0, len(trials), BATCH)]
    folders = [folder / str(index) for index in range(len(batches))]
    for path in folders:
        path.mkdir(parents=True)
    with ThreadPoolExecutor(2) as pool:
        results = pool.map(
            lambda pair: compiled(*pair, options), zip(folders, batches, strict=True)
        )
        return [row for result in results for row in result]


@pytest.mark.parametrize("level", ["-O0", "-O2"])
@pytest.mark.parametrize("series", ["generated", "pairs"])
def test_values_are_those_of_gcc(tmp_path: Path, level: str, series: str) -> None:
    """Every value without a fault that has no result is gcc's, bit for bit."""
    pairs = generated(GENERATED, 20) if series == "generated" else every_pair()
    if series == "pairs" and level == "-O2":
        pairs = pairs[::4]
    trials = [trial(made, reading, *UNPREDICTABLE) for made, reading in pairs]
    trials = [_without_trapping_division(item) for item in trials]
    options = (level, "-fwrapv", "-ffp-contract=off")
    results = in_batches(tmp_path, trials, options)
    wrong = [
        line for item, row in zip(trials, results, strict=True) for line in differing(item, row)
    ]
    assert sum(int(item.wanted.sum()) for item in trials) > 20 * len(trials)
    assert not wrong, "\n".join(wrong[:20])


def _without_trapping_division(item: Trial) -> Trial:
    """Leave out the most negative value by -1: the processor traps where ours wraps."""
    wanted = item.wanted.copy()
    for fault in item.curve.faults:
        if fault.kind is FaultKind.OVERFLOW and getattr(fault.node, "operator", "") in ("/", "%"):
            wanted &= ~fault.mask
    return Trial(item.text, item.reading, item.curve, wanted)


ALL_CODES = """
#include <stdint.h>
#include <stdio.h>
#define store(type, ...) ((type)(__VA_ARGS__))
static const unsigned char asked[] = {{ {2} }};
int main(void) {{
  for (uint32_t code = 0; code < 65536; code++) {{
    volatile uint16_t word = code; uint16_t x = word; {0} result = 0;
    if (asked[code >> 3] >> (code & 7) & 1) result = {1};
    fwrite(&result, sizeof result, 1, stdout);
  }}
  return 0; }}
"""
DTYPES = {8: "i1", 16: "i2", 32: "i4", 64: "i8"}


@pytest.mark.parametrize("conversion", CONVERSIONS, ids=lambda conversion: conversion.text)
def test_conversions_over_all_codes(tmp_path: Path, conversion: Conversion) -> None:
    """A conversion as firmware writes it gives what gcc's program gives for all 65,536 codes."""
    node, codes = conversion.build(HOST), np.arange(1 << 16)
    curve = evaluate(node, lambda _: codes)
    asked = ~curve.faulty(*UNPREDICTABLE)
    table = ",".join(map(str, np.packbits(asked, bitorder="little").tolist()))
    source, program = tmp_path / "all.c", tmp_path / "all"
    source.write_text(ALL_CODES.format(curve.type.name, conversion.text, table))
    options = ["-std=gnu11", "-w", "-O2", "-fwrapv", "-ffp-contract=off"]
    subprocess.run(["gcc", *options, str(source), "-o", str(program)], check=True)
    out = subprocess.run([program], check=True, capture_output=True).stdout
    width = curve.type.bits
    kind = DTYPES[width] if curve.type.is_integer else f"f{width // 8}"
    theirs = np.frombuffer(out, dtype=kind.replace("i", "i" if curve.type.signed else "u"))
    np.testing.assert_array_equal(theirs[asked], curve.values[asked])
    assert asked.sum() > 600


def test_faults_are_those_of_the_sanitizer(tmp_path: Path) -> None:
    """A code has a fault exactly where the sanitizer of gcc stops the program."""
    trials = [
        replace(trial(made, reading), text=made.guarded)
        for made, reading in generated(SANITIZED, 21)
    ]
    checks = "-fsanitize=undefined,float-divide-by-zero,float-cast-overflow"
    options = ("-O0", "-ffp-contract=off", checks, "-fsanitize-undefined-trap-on-error")
    results = in_batches(tmp_path, trials, options)
    wrong, faulty = [], 0
    for item, row in zip(trials, results, strict=True):
        ours = np.broadcast_to(item.curve.faulty(*UNDEFINED), WORDS.shape)
        faulty += int(ours.sum())
        wrong += [
            f"{item.text} with {item.reading} x = {WORDS[k]}: gcc {row[k, 1]}, ours {ours[k]}"
            for k in np.flatnonzero(ours != (row[:, 1] != 0))[:1]
        ]
    assert faulty > SANITIZED
    assert not wrong, "\n".join(wrong[:20])
