"""The exception tree.

::

    SizingError
    ├── InputError              a brief, catalogue or section list that cannot be used
    ├── UnstableTrussError      the truss is a mechanism or is not held
    ├── NoAdequateSectionError  the catalogue holds nothing strong or stiff enough
    ├── SolverError             an optimiser or a linear solver failed
    ├── DisagreementError       the independent check does not agree with the pick
    └── OutputError             a document could not be written

The command line turns each class into its exit code in one place (``sizing.cli``).
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

_ENDLESS_WORD = re.compile(r"([\w.+'-]{60})[\w.+'-]{196,}")
"""A word of 256 characters or more, longer than any file name may be: a slip, or a trap."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Problem:
    """One mistake in a file: where it stands, what was found, what belongs there, how to mend it.

    ``file`` is the name as the user gave it; ``place`` is a key path such as
    ``groups.bottom-chord.members[3]``, or a line and column, or a sheet and cell.
    """

    file: str
    place: str
    found: str
    expected: str
    fix: str = ""

    def text(self) -> str:
        """Return the mistake as one line that a person can act on.

        What a file holds may not command a terminal or turn the line round: characters that do
        not print appear as their codes, and an endless word is cut.
        """
        line = f"{self.file}: {self.place}: found {self.found}; expected {self.expected}"
        line = f"{line}. {self.fix}" if self.fix else f"{line}."
        line = _ENDLESS_WORD.sub(r"\1...", line)
        if line.isprintable():
            return line
        return "".join(c if c.isprintable() else f"<{ord(c):04X}>" for c in line)


class SizingError(Exception):
    """Base of every error that this package raises on purpose."""


class InputError(SizingError):
    """A file that cannot be used; carries every problem found in one round."""

    def __init__(self, problems: Sequence[Problem]) -> None:
        self.problems = tuple(problems)
        super().__init__("\n".join(problem.text() for problem in self.problems))


class UnstableTrussError(SizingError):
    """The truss is a mechanism: it moves without straining any member."""


class NoAdequateSectionError(SizingError):
    """No allowed choice of catalogue sections passes every check."""


class SolverError(SizingError):
    """A solver stopped without a usable answer."""


class DisagreementError(SizingError):
    """The independent check finds something else than the pick did; nothing is issued."""


class OutputError(SizingError):
    """A document could not be written; what stood there before is untouched."""
