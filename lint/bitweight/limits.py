"""Bounds on bytes, depth, time and memory, handed down to whoever reads or follows a tree.

The trees are hostile by assumption: every loop over their content is bounded by a number here.
"""

import time
from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    """How much work a run may do. Each number is far above what real firmware needs."""

    file_bytes: int = 16 * 1024 * 1024
    """Largest source file read; vendor register headers reach 2.6 MB."""
    files: int = 100_000
    """Most files listed below the given paths."""
    include_depth: int = 100
    """Nested includes; C11 5.2.4.1 asks compilers for 15."""
    unit_bytes: int = 64 * 1024 * 1024
    """What the preprocessor reads and writes for one translation unit, in characters."""
    parsed_bytes: int = 4 * 1024 * 1024
    """Largest expanded translation unit that is parsed; with a vendor's headers 1 MB is usual."""
    macro_depth: int = 200
    """Nested macro expansions; deeper ones are left as they stand."""
    macro_tokens: int = 100_000
    """Tokens one outermost macro use may expand to."""
    syntax_depth: int = 300
    """Nesting of C expressions and statements that is followed."""
    call_depth: int = 24
    """Calls inside calls that are followed from a reading."""
    steps: int = 60_000
    """Statements and expressions executed symbolically from one function."""
    loop_turns: int = 4_096
    """Turns of a loop with constant bounds that are unrolled."""
    expression_nodes: int = 200_000
    """Nodes of one traced expression."""
    forks: int = 1_000
    """Conditions on the way to one result; tables as chains of `if` reach 300."""
    block_codes: int = 1 << 16
    """Codes evaluated at a time, so that 24 bits fit in memory."""
    seconds: float = 600.0
    """Processor time of one run."""


@dataclass(frozen=True, slots=True)
class Deadline:
    """Processor time left for a run."""

    seconds: float
    started: float = field(default_factory=time.process_time)

    def passed(self) -> bool:
        """Whether the run has used more processor time than it may."""
        return time.process_time() - self.started > self.seconds
