"""gcc as the oracle of preprocessing: both must come to the same tokens."""

import random
import re
import shutil
import subprocess
from pathlib import Path

import pytest

from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.translation import translate
from bitweight.limits import Limits

GENERATED = 400
BATCH = 50
TOKEN = re.compile(
    r'(?:u8|[uUL])?"(?:\\.|[^"\\\n])*"|(?:[uUL])?\'(?:\\.|[^\'\\\n])*\'|[A-Za-z_$][\w$]*'
    r"|<:|:>|<%|%>|\.?\d(?:[eEpP][+-]|[\w.])*|\.\.\.|<<=|>>=|->|\+\+|--|<<|>>|[<>=!]=|&&|\|\||[-+*/%&|^]=|##|\S"
)
DIGRAPHS = {"<:": "[", ":>": "]", "<%": "{", "%>": "}"}

needs_gcc = pytest.mark.skipif(shutil.which("gcc") is None, reason="gcc is not installed")

STANDARD = {
    "C11 6.10.3.5 example 3": """
#define x 3
#define f(a) f(x * (a))
#undef x
#define x 2
#define g f
#define z z[0]
#define h g(~
#define m(a) a(w)
#define w 0,1
#define t(a) a
#define p() int
#define q(x) x
#define r(x,y) x ## y
#define str(x) # x
f(y+1) + f(f(z)) % t(t(g)(0) + t)(1);
g(x+(3,4)-w) | h 5) & m
(f)^m(m);
p() i[q()] = { q(1), r(2,3), r(4,), r(,5), r(,) };
char c[2][6] = { str(hello), str() };
""",
    "C11 6.10.3.5 example 4": """
#define str(s) # s
#define xstr(s) str(s)
#define debug(s, t) printf("x" # s "= %d, x" # t "= %s", \\
 x ## s, x ## t)
#define INCFILE(n) vers ## n
#define glue(a, b) a ## b
#define xglue(a, b) glue(a, b)
#define HIGHLOW "hello"
#define LOW LOW ", world"
debug(1, 2);
fputs(str(strncmp("abc\\0d", "abc", '\\4') // this goes away
 == 0) str(: @\\n), s);
xstr(INCFILE(2).h)
glue(HIGH, LOW);
xglue(HIGH, LOW)
""",
    "C11 6.10.3.5 example 5": """
#define t(x,y,z) x ## y ## z
int j[] = { t(1,2,3), t(,4,5), t(6,,7), t(8,9,),
 t(10,,), t(,11,), t(,,12), t(,,) };
""",
    "C11 6.10.3.5 example 7": """
#define debug(...) fprintf(stderr, __VA_ARGS__)
#define showlist(...) puts(#__VA_ARGS__)
#define report(test, ...) ((test)?puts(#test):\\
 printf(__VA_ARGS__))
debug("Flag");
debug("X = %d\\n", x);
showlist(The first, second, and third items.);
report(x>y, "x is %d but y is %d", x, y);
""",
    "C11 6.10.3.4 paragraph 4": """
#define f(a) a*g
#define g(a) f(a)
f(2)(9)
""",
}
TRICKY = {
    "splices inside tokens": "#def\\\nine AD\\\nC 10\\\n24\nint a = A\\\nDC\\\n; /\\\n"
    "* gone *\\\n/ x\n",
    "comments in directives": "/* a */ # /* b */ define /* c\n d */ N /* e */ 7 /* f\n"
    "*/ + 1 // g\nN\n",
    "signs that would join": "#define NEG -1\n#define E\n-NEG +E+ x.E.y NEG-NEG -E- &E& 1 E 2\n",
    "rest arguments": "#define L(f, ...) p(f, ## __VA_ARGS__)\n#define G(a...) q(a)\n"
    "#define O(f, ...) p(f __VA_OPT__(,) __VA_ARGS__)\n"
    "L(a) L(a,) L(a,b) L(a,b,c) G() G(1,2) O(a) O(a,b,c)\n",
    "name without arguments": "#define F(x) <x>\nF F (1) F\n(2) F\n#define LATE 1\n(LATE) (F)(3)\n",
    "directives among arguments": "#define F(x, y) [x|y]\nF(1\n#if 1\n+2\n#else\n+3 )\n"
    "#endif\n, 4)\n",
    "conditionals": "#if 0\nit's \"unbalanced /* not here\n*/ #else\nno\n"
    "#elif -1 > 0u && (2||1/0)\nyes\n"
    "#else\nno\n#endif\n#if !defined(A) && defined B || 'a' == 97 && 0b11 == 3\nb\n#endif\n",
    "digraphs": "%:define S(x) %:x\n%:define C(a,b) a%:%:b\nint a<:C(1,2):> = <% S(x y) %>;\n",
    "late closing parenthesis": "#define NIL(x) x\n#define G0(a) NIL(G1)(a)\n"
    "#define G1(a) NIL(a)\nG0(42)\n",
    "twice through one name": "#define foo foo a bar\n#define bar foo 2\nfoo bar\n"
    "#define A B\n#define B A\nA B\n",
    "deferred": "#define EMPTY\n#define DEFER(x) x EMPTY\n#define A() 123\nDEFER(A)()\n"
    "#define EXPAND(x) x\nEXPAND(DEFER(A)())\n",
    "string arguments": "#define S(x) #x\n#define X(x) S(x)\n"
    "S( a  +  b ) S(\"q\\n\" 'x') X(S(1)) S(a,) \n".replace("S(a,)", "S((a,b))"),
    "redefinition": "#define V 1\nV\n#undef V\nV\n#define V 2\nV\n#define V 3\nV\n",
    "defined from a macro": "#define HAS defined(ADC)\n#define ADC\n#if HAS\nyes\n#else\nno\n"
    "#endif\n",
    "shift by much": "#if (1 << 62) > 0 && (1u << 63) > 0 && -1 >> 70 == -1 && 5 % -3 == 2\n"
    "yes\n#endif\n",
    "conditional value": "#if (1 ? -1 : 0u) > 0\nyes\n#endif\n#if (2 , 3) == 3\n#endif\n",
    "counter": "#define C __COUNTER__\nC C __COUNTER__ __LINE__\n",
}


def compact(text: str) -> list[str]:
    """The tokens of preprocessed text."""
    return [DIGRAPHS.get(token, token) for token in TOKEN.findall(text)]


def ours(name: str, text: str) -> list[str]:
    """The tokens this program comes to."""
    file = SourceFile(name, text)
    return compact(translate(SourceTree.of(file), file, {}, Limits()).text)


def by_gcc(folder: Path, programs: dict[str, str]) -> dict[str, list[str]]:
    """The tokens gcc comes to, of each program that it accepts."""
    for name, text in programs.items():
        folder.joinpath(name).write_text(f"@ {name} @\n{text}")
    done = subprocess.run(
        ["gcc", "-E", "-P", "-w", *programs],
        cwd=folder,
        capture_output=True,
        text=True,
        check=False,
    )
    refused = set(re.findall(r"^(\S+?):.*error:", done.stderr, re.MULTILINE))
    parts = re.split(r"@ (\w+ ?\. ?c) @", done.stdout)[1:]
    found = {
        name.replace(" ", ""): text for name, text in zip(parts[::2], parts[1::2], strict=True)
    }
    return {name: compact(text) for name, text in found.items() if name not in refused}


@needs_gcc
@pytest.mark.parametrize("text", [*STANDARD.values(), *TRICKY.values()], ids=[*STANDARD, *TRICKY])
def test_hand_written_text_expands_as_gcc_expands_it(text: str, tmp_path: Path) -> None:
    """Text that tries one corner of C11 6.10 has the tokens that gcc gives."""
    theirs = by_gcc(tmp_path, {"one.c": "\n" + text})
    assert ours("one.c", "\n\n" + text) == theirs["one.c"]


NAMES = ("A", "B", "C", "D", "E")
FUNCTIONS = ("F", "G", "H", "K")
PARAMETERS = ("x", "y", "z")
PLAIN = ("1", "2u", "0x1F", "+", "-", "*", "v", "w", '"s"', "'c'", ".", "<<", "[", "]", ";")


class Programs:
    """Small macro programs by chance."""

    def __init__(self, seed: int) -> None:
        self.chance = random.Random(seed)
        self.arity: dict[str, tuple[int, bool]] = {}

    def program(self) -> str:
        """Definitions and uses in mixed order."""
        lines: list[str] = []
        for _ in range(self.chance.randint(6, 22)):
            make = self.chance.choice((self.definition, self.definition, self.use, self.condition))
            lines.append(make())
        return "\n".join([*lines, self.use(), self.use()]) + "\n"

    def definition(self) -> str:
        """A definition, or that one is taken back."""
        chance = self.chance
        if chance.random() < 0.1:
            return f"#undef {chance.choice(NAMES + FUNCTIONS)}"
        if chance.random() < 0.4:
            name = chance.choice(NAMES)
            return f"#undef {name}\n#define {name} {self.body((), False)}"
        name = chance.choice(FUNCTIONS)
        parameters = PARAMETERS[: chance.randint(0, 3)]
        variadic = chance.random() < 0.25
        self.arity[name] = (len(parameters), variadic)
        listed = ", ".join((*parameters, "...") if variadic else parameters)
        return f"#undef {name}\n#define {name}({listed}) {self.body(parameters, variadic)}"

    def body(self, parameters: tuple[str, ...], variadic: bool) -> str:
        """A replacement list."""
        chance = self.chance
        words: list[str] = []
        inside = (*parameters, "__VA_ARGS__") if variadic else parameters
        for _ in range(chance.randint(0, 6)):
            kind = chance.random()
            if inside and kind < 0.35:
                words.append(chance.choice(inside))
            elif inside and kind < 0.42:
                words.append(f"#{chance.choice(inside)}")
            elif kind < 0.55:
                words.append(self.call(2, inside))
            elif inside and kind < 0.65 and words:
                words += ["##", chance.choice((*inside, *NAMES, *FUNCTIONS, "7"))]
            elif variadic and kind < 0.70:
                words.append(f"__VA_OPT__({chance.choice((*inside, ',', 'v ## w'))})")
            else:
                words.append(chance.choice((*PLAIN, *NAMES, *FUNCTIONS)))
        return self.spaced(words)

    def use(self) -> str:
        """A line of ordinary text."""
        words = [
            self.call(3, ()) if self.chance.random() < 0.6 else self.chance.choice((*PLAIN, *NAMES))
            for _ in range(self.chance.randint(1, 4))
        ]
        return self.spaced(words)

    def call(self, depth: int, inside: tuple[str, ...]) -> str:
        """A use with about the right number of arguments."""
        chance = self.chance
        name = chance.choice(FUNCTIONS)
        count, variadic = self.arity.get(name, (1, False))
        count += chance.randint(0, 2) if variadic else 0
        arguments = [self.argument(depth - 1, inside) for _ in range(count)]
        return f"{name}{chance.choice(('', '', ' '))}({','.join(arguments)})"

    def argument(self, depth: int, inside: tuple[str, ...]) -> str:
        """One argument, possibly empty."""
        chance = self.chance
        words = []
        for _ in range(chance.randint(0, 3)):
            kind = chance.random()
            if depth > 0 and kind < 0.3:
                words.append(self.call(depth, inside))
            elif kind < 0.4:
                words.append(f"({chance.choice(PLAIN)},{chance.choice(NAMES)})")
            else:
                words.append(chance.choice((*PLAIN, *NAMES, *FUNCTIONS, *inside)))
        return self.spaced(words)

    def condition(self) -> str:
        """A conditional on names and small arithmetic."""
        chance = self.chance
        operands = ("1", "2", "0", "-3", "4u", "defined A", "defined(F)", "!defined C", "(7 & 5)")
        operators = ("+", "-", "*", "<", ">", "==", "&&", "||", "<<", "?1:")
        text = " ".join(
            part
            for _ in range(chance.randint(0, 3))
            for part in (chance.choice(operands), chance.choice(operators))
        )
        inner = self.use()
        return f"#if {text} {chance.choice(operands)}\n{inner}\n#else\n{self.use()}\n#endif"

    def spaced(self, words: list[str]) -> str:
        """Words with or without white space between them."""
        return "".join(word + self.chance.choice((" ", " ", "  ", "")) for word in words).strip()


@needs_gcc
@pytest.mark.parametrize("batch", range(GENERATED // BATCH))
def test_generated_macros_expand_as_gcc_expands_them(batch: int, tmp_path: Path) -> None:
    """Of many generated programs, each that gcc accepts has the tokens that gcc gives."""
    programs = {
        f"p{seed}.c": Programs(seed).program() for seed in range(batch * BATCH, (batch + 1) * BATCH)
    }
    theirs = by_gcc(tmp_path, programs)
    differing = {
        name: (programs[name], tokens, ours(name, "\n" + programs[name]))
        for name, tokens in theirs.items()
        if ours(name, "\n" + programs[name]) != tokens
    }
    assert not differing
    assert len(theirs) > BATCH // 5
