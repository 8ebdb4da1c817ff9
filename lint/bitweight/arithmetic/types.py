"""C integer and floating types of a target: promotions and usual conversions (C11 6.3.1).

A `DataModel` holds the widths of one target; a `CType` is one arithmetic type with its rank.
Nothing here knows C text beyond the names of types.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from enum import Enum
from types import MappingProxyType


class Kind(Enum):
    """The three kinds of arithmetic types that behave differently when converted to."""

    BOOL = "bool"
    INTEGER = "integer"
    FLOATING = "floating"


@dataclass(frozen=True, slots=True, kw_only=True)
class CType:
    """An arithmetic type: `bits` wide, `rank` by C11 6.3.1.1 (higher converts lower)."""

    name: str
    kind: Kind
    bits: int
    signed: bool
    rank: int

    @property
    def is_integer(self) -> bool:
        """Whether values of the type are whole numbers (`_Bool` included)."""
        return self.kind is not Kind.FLOATING

    @property
    def low(self) -> int:
        """Smallest value of an integer type."""
        return -(1 << (self.bits - 1)) if self.signed else 0

    @property
    def high(self) -> int:
        """Largest value of an integer type."""
        if self.kind is Kind.BOOL:
            return 1
        return (1 << (self.bits - self.signed)) - 1


_INT_RANK = 3
_QUALIFIERS = frozenset(
    (
        *("const", "volatile", "restrict", "_Atomic", "__const", "__volatile", "__volatile__"),
        *("static", "extern", "register", "inline", "auto"),
        *("__I", "__O", "__IO", "__IM", "__OM", "__IOM"),
    )
)
_SIGNED_NAMES = ("signed char", "short", "int", "long", "long long")
_UNSIGNED_NAMES = ("unsigned char", *(f"unsigned {name}" for name in _SIGNED_NAMES[1:]))


def _specifiers() -> dict[tuple[str, ...], str]:
    """Every list of type specifiers of C11 6.7.2p2, sorted, with the type it names."""
    table: dict[tuple[str, ...], str] = {("char",): "char"}
    table |= {("_Bool",): "_Bool", ("bool",): "_Bool"}
    table |= {("float",): "float", ("double",): "double", ("double", "long"): "long double"}
    table |= {("char", sign): f"{sign} char" for sign in ("signed", "unsigned")}
    for name in _SIGNED_NAMES[1:]:
        for optional in ((), ("int",)) if name != "int" else ((),):
            words = (*name.split(), *optional)
            table[tuple(sorted(words))] = name
            table[tuple(sorted((*words, "signed")))] = name
            table[tuple(sorted((*words, "unsigned")))] = f"unsigned {name}"
    return table | {("signed",): "int", ("unsigned",): "unsigned int"}


def _widths() -> dict[str, tuple[int, bool]]:
    """Names whose width and sign are part of the name: stdint.h and the trade's own short forms."""
    forms = {
        True: "int{0}_t int_least{0}_t s{0} S{0} i{0} int{0} sint{0} vs{0} INT{0} INT{0}S SINT{0}",
        False: "uint{0}_t uint_least{0}_t u{0} U{0} uint{0} vu{0} UINT{0} INT{0}U u_int{0}_t",
    }
    table = {
        form.format(bits): (bits, signed)
        for signed, text in forms.items()
        for form in text.split()
        for bits in (8, 16, 32, 64)
    }
    table |= {"q7_t": (8, True), "q15_t": (16, True), "q31_t": (32, True), "q63_t": (64, True)}
    table |= {"BYTE": (8, False), "WORD": (16, False), "DWORD": (32, False)}
    return table | {"intmax_t": (64, True), "uintmax_t": (64, False)}


_SPECIFIERS: Mapping[tuple[str, ...], str] = MappingProxyType(_specifiers())
_WIDTHS: Mapping[str, tuple[int, bool]] = MappingProxyType(_widths())
_FAST: Mapping[str, tuple[int, bool]] = MappingProxyType(
    {f"{sign}int_fast{bits}_t": (bits, not sign) for sign in ("", "u") for bits in (8, 16, 32, 64)}
)
_POINTER_WIDE: Mapping[str, bool] = MappingProxyType(
    {"size_t": False, "uintptr_t": False, "ssize_t": True, "ptrdiff_t": True, "intptr_t": True}
)
_OTHER_NAMES: Mapping[str, str] = MappingProxyType(
    {
        "float32_t": "float",
        "f32": "float",
        "float64_t": "double",
        "f64": "double",
        "BOOL": "unsigned char",
        "BOOLEAN": "unsigned char",
        "boolean": "unsigned char",
        "byte": "unsigned char",
        "uchar": "unsigned char",
        "u_char": "unsigned char",
        "UCHAR": "unsigned char",
        "word": "unsigned int",
        "uint": "unsigned int",
        "u_int": "unsigned int",
        "UINT": "unsigned int",
        "INT": "int",
        "ushort": "unsigned short",
        "u_short": "unsigned short",
        "USHORT": "unsigned short",
        "ulong": "unsigned long",
        "u_long": "unsigned long",
        "ULONG": "unsigned long",
        "LONG": "long",
    }
)


def _integers(model: "DataModel") -> dict[str, CType]:
    """The integer types of a model by name; short is 16 and char 8 bits on every target here."""
    widths = (8, 16, model.int_bits, model.long_bits, model.long_long_bits)
    table = {
        "_Bool": CType(name="_Bool", kind=Kind.BOOL, bits=8, signed=False, rank=0),
        "char": CType(name="char", kind=Kind.INTEGER, bits=8, signed=model.char_signed, rank=1),
    }
    for signed, names in ((True, _SIGNED_NAMES), (False, _UNSIGNED_NAMES)):
        for rank, (name, bits) in enumerate(zip(names, widths, strict=True), start=1):
            table[name] = CType(name=name, kind=Kind.INTEGER, bits=bits, signed=signed, rank=rank)
    return table


def _floatings(model: "DataModel") -> dict[str, CType]:
    """The floating types of a model by name."""
    widths = {
        "float": model.float_bits,
        "double": model.double_bits,
        "long double": model.double_bits,
    }
    return {
        name: CType(name=name, kind=Kind.FLOATING, bits=bits, signed=True, rank=rank)
        for rank, (name, bits) in enumerate(widths.items(), start=10)
    }


@dataclass(frozen=True, slots=True, kw_only=True)
class DataModel:
    """The widths in bits of one target's arithmetic types; the defaults stand without a target.

    `long double` is computed as wide as `double`: true for the usual 32-bit and 8-bit targets, an
    approximation on those whose compilers widen it.
    """

    int_bits: int = 32
    long_bits: int = 32
    pointer_bits: int = 32
    double_bits: int = 64
    char_signed: bool = False
    long_long_bits: int = 64
    float_bits: int = 32
    types: Mapping[str, CType] = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        table = MappingProxyType(_integers(self) | _floatings(self))
        object.__setattr__(self, "types", table)

    @property
    def bool_(self) -> CType:
        """`_Bool`."""
        return self.types["_Bool"]

    @property
    def char(self) -> CType:
        """Plain `char`, signed or not as the target's compiler has it."""
        return self.types["char"]

    @property
    def signed_char(self) -> CType:
        """`signed char`."""
        return self.types["signed char"]

    @property
    def unsigned_char(self) -> CType:
        """`unsigned char`."""
        return self.types["unsigned char"]

    @property
    def short(self) -> CType:
        """`short`."""
        return self.types["short"]

    @property
    def unsigned_short(self) -> CType:
        """`unsigned short`."""
        return self.types["unsigned short"]

    @property
    def int_(self) -> CType:
        """`int`."""
        return self.types["int"]

    @property
    def unsigned(self) -> CType:
        """`unsigned int`."""
        return self.types["unsigned int"]

    @property
    def long(self) -> CType:
        """`long`."""
        return self.types["long"]

    @property
    def unsigned_long(self) -> CType:
        """`unsigned long`."""
        return self.types["unsigned long"]

    @property
    def long_long(self) -> CType:
        """`long long`."""
        return self.types["long long"]

    @property
    def unsigned_long_long(self) -> CType:
        """`unsigned long long`."""
        return self.types["unsigned long long"]

    @property
    def float_(self) -> CType:
        """`float`."""
        return self.types["float"]

    @property
    def double(self) -> CType:
        """`double`."""
        return self.types["double"]

    @property
    def long_double(self) -> CType:
        """`long double`."""
        return self.types["long double"]

    @property
    def size_t(self) -> CType:
        """The type of `sizeof`."""
        return self.integer(self.pointer_bits, False)

    @property
    def ptrdiff(self) -> CType:
        """The type of a difference of pointers."""
        return self.integer(self.pointer_bits, True)

    def integer(self, bits: int, signed: bool) -> CType:
        """The lowest-ranking type of at least `bits` bits; ValueError above `long long`."""
        for name in _SIGNED_NAMES if signed else _UNSIGNED_NAMES:
            if self.types[name].bits >= bits:
                return self.types[name]
        raise ValueError(f"no integer type of {bits} bits")

    def named(self, words: tuple[str, ...]) -> CType | None:
        """The type that specifiers in any order, or one well-known name, stand for.

        Qualifiers and storage classes are passed over. None where the words name no arithmetic
        type.
        """
        plain = tuple(sorted(word for word in words if word not in _QUALIFIERS))
        known = _SPECIFIERS.get(plain)
        if known is not None:
            return self.types[known]
        return self._alias(plain[0]) if len(plain) == 1 else None

    def _alias(self, name: str) -> CType | None:
        if name in _WIDTHS:
            return self.integer(*_WIDTHS[name])
        if name in _FAST:
            bits, signed = _FAST[name]
            return self.integer(self._fast_bits(bits), signed)
        if name in _POINTER_WIDE:
            return self.integer(self.pointer_bits, _POINTER_WIDE[name])
        return self.types.get(_OTHER_NAMES.get(name, ""))

    def _fast_bits(self, bits: int) -> int:
        """Width of int_fastN_t as avr-libc, glibc and newlib have it (from memory)."""
        if self.int_bits < 32 or (bits == 8 and self.long_bits == 64):
            return bits
        return max(bits, self.long_bits if self.long_bits == 64 else self.int_bits)

    def promote(self, operand: CType) -> CType:
        """The integer promotions (C11 6.3.1.1p2); other types stay."""
        if not operand.is_integer or operand.rank >= _INT_RANK:
            return operand
        return self.int_ if operand.high <= self.int_.high else self.unsigned

    def usual(self, left: CType, right: CType) -> CType:
        """The common type of two operands (C11 6.3.1.8)."""
        if not (left.is_integer and right.is_integer):
            return max((t for t in (left, right) if not t.is_integer), key=lambda t: t.rank)
        left, right = self.promote(left), self.promote(right)
        if left.signed == right.signed:
            return max(left, right, key=lambda t: t.rank)
        signed, unsigned = (left, right) if left.signed else (right, left)
        if unsigned.rank >= signed.rank:
            return unsigned
        return signed if signed.high >= unsigned.high else self.types[f"unsigned {signed.name}"]


MODELS: Mapping[str, DataModel] = MappingProxyType(
    {
        # avr-gcc: plain char is signed unless -funsigned-char is given; double is 32 bits unless
        # -mdouble=64 is (from memory; int and double measured with avr-gcc 5.4).
        "avr": DataModel(int_bits=16, pointer_bits=16, double_bits=32, char_signed=True),
        # msp430-gcc and the maker's own compiler: plain char is unsigned (from memory).
        "msp430": DataModel(int_bits=16, pointer_bits=16),
        "arm": DataModel(),
        "riscv32": DataModel(),
        # xtensa-gcc: plain char is unsigned (from memory).
        "xtensa": DataModel(),
        # SDCC: plain char is unsigned, double is computed as float (from memory).
        "stm8": DataModel(int_bits=16, pointer_bits=16, double_bits=32),
        "host": DataModel(long_bits=64, pointer_bits=64, char_signed=True),
    }
)


def type_for(low: int, high: int) -> str:
    """The narrowest type of stdint.h that holds both (C11 7.20.1.1)."""
    signed = low < 0
    needed = max((-low - 1).bit_length() + 1 if signed else 0, high.bit_length() + signed)
    bits = next((width for width in (8, 16, 32) if width >= needed), 64)
    return f"int{bits}_t" if signed else f"uint{bits}_t"
