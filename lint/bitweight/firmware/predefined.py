"""The macros that every compiler of a target defines by itself (C11 6.10.8 and common practice)."""

from collections.abc import Mapping

from bitweight.arithmetic.types import CType, DataModel

_ARCHITECTURES: Mapping[str, tuple[str, ...]] = {
    "avr": ("__AVR__", "__AVR"),
    "msp430": ("__MSP430__",),
    "arm": ("__arm__", "__ARM_EABI__", "__thumb__"),
    "riscv32": ("__riscv",),
    "xtensa": ("__XTENSA__", "__xtensa__"),
    "stm8": ("__SDCC", "__SDCC_stm8"),
    "host": ("__linux__", "__unix__"),
}


def predefined(architecture: str | None, model: DataModel) -> Mapping[str, str]:
    """Name and replacement text of the macros of a target."""
    found = {"__STDC__": "1", "__STDC_VERSION__": "201112L", "__CHAR_BIT__": "8"}
    if architecture != "stm8":
        found |= {"__GNUC__": "12", "__GNUC_MINOR__": "2"}
    for name in _ARCHITECTURES.get(architecture or "", ()):
        found[name] = "1"
    for name, type_ in (
        ("SHRT", model.short),
        ("INT", model.int_),
        ("LONG", model.long),
        ("LONG_LONG", model.long_long),
    ):
        found[f"__{name}_MAX__"] = _top(type_)
    for name, type_ in (
        ("SHORT", model.short),
        ("INT", model.int_),
        ("LONG", model.long),
        ("LONG_LONG", model.long_long),
        ("FLOAT", model.float_),
        ("DOUBLE", model.double),
        ("SIZE_T", model.size_t),
    ):
        found[f"__SIZEOF_{name}__"] = str(type_.bits // 8)
    found["__SIZEOF_POINTER__"] = str(model.pointer_bits // 8)
    return found


def _top(type_: CType) -> str:
    suffix = {"long": "L", "long long": "LL"}.get(type_.name, "")
    return f"{type_.high}{suffix}"
