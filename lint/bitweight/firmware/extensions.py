"""Words outside standard C that compilers for small targets know, as the C they stand for.

They take effect in ordinary text and in expansions, where no macro of the same name is defined; a
conditional never sees them. The table is C: one `#define` a word.
"""

from collections.abc import Mapping
from types import MappingProxyType

from bitweight.firmware.directives import Script
from bitweight.firmware.files import SourceFile
from bitweight.firmware.macros import Macro

_NOTHING = """
    PROGMEM EEMEM RAM_FUNC IRAM_ATTR DRAM_ATTR ICACHE_RAM_ATTR ICACHE_FLASH_ATTR FAR NEAR
    __far __near __huge __flash __memx __code __data __xdata __idata __pdata __eeprom __no_init
    __ramfunc __root __interrupt __irq __fiq __nested __task __monitor __packed __naked
    __saveregs __persistent __extension__ __restrict __restrict__ __nothrow __near_func __far_func
    __noreturn __noinline __tiny __sfr __bank __rom __ram INTERRUPT_ATTR __PACKED
    __USED __UNUSED __NO_RETURN __ALIGN_BEGIN __ALIGN_END _Noreturn
"""
"""Storage, placement and calling words: they change no value that is computed."""

_SAME_AS = {
    "__weak": "__attribute__((weak))",
    "__WEAK": "__attribute__((weak))",
    "__IO": "volatile",
    "__I": "volatile const",
    "__O": "volatile",
    "__IM": "volatile const",
    "__OM": "volatile",
    "__IOM": "volatile",
    "__STATIC_INLINE": "static inline",
    "__STATIC_FORCEINLINE": "static inline",
    "__INLINE": "inline",
    "__inline": "inline",
    "__inline__": "inline",
    "__forceinline": "inline",
    "__volatile": "volatile",
    "__volatile__": "volatile",
    "__const": "const",
    "__const__": "const",
    "__signed": "signed",
    "__signed__": "signed",
    "__alignof__": "_Alignof",
    "__typeof": "__typeof__",
    "__attribute__(x)": "",
    "__attribute(x)": "",
    "__declspec(x)": "",
    "__pragma(x)": "",
    "_Pragma(x)": "",
    "_Alignas(x)": "",
    "ISR(vector, ...)": "void vector(void)",
    "SIGNAL(vector)": "void vector(void)",
    "ISR_NAKED(vector)": "void vector(void)",
    "INTERRUPT_HANDLER(function, vector)": "void function(void)",
    "INTERRUPT_HANDLER_TRAP(function)": "void function(void)",
    "EMPTY_INTERRUPT(vector)": "void vector(void) {}",
    "PSTR(text)": "(text)",
    "ATOMIC_BLOCK(type)": "",
    "NONATOMIC_BLOCK(type)": "",
}
"""An interrupt routine becomes a function that is named like its vector."""


def _extensions() -> Mapping[str, Macro]:
    words = dict.fromkeys(_NOTHING.split(), "") | _SAME_AS
    text = "".join([f"#define {word} {meaning}\n" for word, meaning in words.items()])
    script = Script(SourceFile("<extensions>", text))
    return {name: macro for run in script.directives for name, macro in run.macros.items()}


EXTENSIONS: Mapping[str, Macro] = MappingProxyType(_extensions())
"""The table as macros. Their text has no place of its own: it stands where the word is used."""

KEPT = frozenset(("weak", "__weak__"))
"""Attributes that say which of two functions is called: a use with one of them stays as it is."""
