"""What the pick gives back, and what it says while it runs."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from sizing.selection.certificate import Certificate

IntArray = NDArray[np.intp]

Status = Literal["proven", "within gap", "stopped", "no adequate section"]
"""``proven``: nothing lighter exists. ``within gap``: finished, the bound leaves a gap.
``stopped``: interrupted or out of time, best design so far. ``no adequate section``: none."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Progress:
    """A line for the screen: objective values in the problem's unit, seconds since the start."""

    phase: str
    incumbent: float | None
    bound: float | None
    analyses: int
    seconds: float

    @property
    def gap(self) -> float | None:
        """(incumbent - bound) / incumbent, or None while either is missing."""
        if self.incumbent is None or self.bound is None or self.incumbent <= 0.0:
            return None
        return max(0.0, (self.incumbent - self.bound) / self.incumbent)


@dataclass(frozen=True, kw_only=True, slots=True)
class Shortfall:
    """Why nothing fits: the worst check of the least bad design.

    ``kind`` is ``tension``, ``compression``, ``deflection`` or ``none allowed``; ``member`` and
    ``combination`` (or ``row`` for deflection) index the problem's arrays; ``utilisation`` is
    the least over the catalogue that could be reached for that check.
    """

    kind: Literal["tension", "compression", "deflection", "none allowed"]
    member: int | None
    combination: int | None
    row: int | None
    group: int | None
    section: int | None
    utilisation: float


@dataclass(frozen=True, kw_only=True, slots=True)
class NearTie:
    """Another feasible design, distinct from the pick, with its objective value."""

    sections: IntArray
    objective: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Pick:
    """The design found (section index per group) with its bound.

    ``bound`` is a valid lower bound on the objective of every feasible design of the problem as
    stated. ``analyses`` counts exact structural analyses. ``method`` names what proved or
    bounded the answer, in words for the report. ``certificate``, where one was made, proves its own
    bound (within rounding of ``bound``) to a checker that does not need the search.
    """

    status: Status
    sections: IntArray | None
    objective: float | None
    bound: float | None
    analyses: int
    seconds: float
    method: str
    shortfall: Shortfall | None = None
    near_ties: tuple[NearTie, ...] = ()
    certificate: Certificate | None = None

    @property
    def gap(self) -> float | None:
        """(objective - bound) / objective; 0 when proven, None when unknown."""
        if self.status == "proven":
            return 0.0
        if self.objective is None or self.bound is None or self.objective <= 0.0:
            return None
        return max(0.0, (self.objective - self.bound) / self.objective)


@dataclass(frozen=True, kw_only=True, slots=True)
class Limits:
    """When to stop and whom to tell. ``stop`` is polled; True asks for the best design so far.

    ``gap``: relative gap at which the search may end. ``near_ties``: how many to list, within
    ``near_tie_margin`` (relative) of the best. ``certificate``: prove in the form that can be
    written down and checked, and report no bound that is not.
    """

    seconds: float = 600.0
    gap: float = 0.0
    near_ties: int = 0
    near_tie_margin: float = 0.01
    certificate: bool = False
    report: Callable[[Progress], None] | None = None
    stop: Callable[[], bool] | None = None
