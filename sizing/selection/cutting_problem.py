"""A cutting problem and its answer: pieces, stock bars and patterns, all lengths whole numbers.

Lengths are whole multiples of a unit that the caller chooses (a tenth of a millimetre, say), so
that sums are exact. A saw cut takes ``kerf``: n pieces with an offcut behind them take n cuts, n
pieces that fill the bar to its end take n - 1. Hence a bar of length L holds pieces with
Σ (l + kerf) <= L - trim + kerf.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

CuttingGoal = Literal["bars", "length", "cost"]
CuttingStatus = Literal["proven", "stopped", "not enough stock"]


@dataclass(frozen=True, kw_only=True, slots=True)
class StockLength:
    """Bars of one ``length``; ``price`` per bar in the smallest unit of money (a whole number).

    ``available`` is the number of bars at hand, None for as many as wanted.
    """

    length: int
    price: int = 0
    available: int | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class CuttingProblem:
    """Cut ``numbers[i]`` pieces of ``lengths[i]`` from ``stock`` at least expense.

    ``minimise`` counts bars, or adds up their lengths, or their prices. ``trim`` is taken off
    every bar before its first piece, its own cut included.
    """

    lengths: tuple[int, ...]
    numbers: tuple[int, ...]
    stock: tuple[StockLength, ...]
    kerf: int = 0
    trim: int = 0
    minimise: CuttingGoal = "length"

    def __post_init__(self) -> None:
        """Refuse what makes no sense, in words for the programmer who calls."""
        if len(self.lengths) != len(self.numbers):
            raise ValueError("lengths and numbers must have the same size")
        if any(length <= 0 for length in self.lengths) or any(n < 0 for n in self.numbers):
            raise ValueError("pieces need lengths above zero and numbers not below zero")
        if not self.stock or any(bar.length <= 0 for bar in self.stock):
            raise ValueError("at least one stock length above zero is needed")
        if any(bar.available is not None and bar.available < 0 for bar in self.stock):
            raise ValueError("the number of bars available must not be below zero")
        if self.kerf < 0 or self.trim < 0:
            raise ValueError("kerf and trim must not be below zero")
        if self.minimise == "cost" and any(bar.price <= 0 for bar in self.stock):
            raise ValueError("minimising cost needs a price above zero for every stock length")

    def expense(self, stock: int) -> int:
        """Return what one bar of stock length ``stock`` adds to the objective."""
        bar = self.stock[stock]
        return {"bars": 1, "length": bar.length, "cost": bar.price}[self.minimise]

    @property
    def step(self) -> int:
        """The greatest whole number that divides every possible objective."""
        return math.gcd(*(self.expense(j) for j in range(len(self.stock))))

    def room(self, stock: int) -> int:
        """Return what Σ (length + kerf) on a bar may reach: L - trim + kerf."""
        return self.stock[stock].length - self.trim + self.kerf

    def too_long(self) -> tuple[int, ...]:
        """Return the pieces (indices) that are needed but fit no bar."""
        longest = max(self.room(j) for j in range(len(self.stock)))
        return tuple(
            i
            for i, (length, number) in enumerate(zip(self.lengths, self.numbers, strict=True))
            if number and length + self.kerf > longest
        )


@dataclass(frozen=True, kw_only=True, slots=True)
class CuttingPattern:
    """``bars`` bars of stock length ``stock``, each cut into ``pieces[i]`` pieces of length i."""

    stock: int
    pieces: tuple[int, ...]
    bars: int

    def offcut(self, problem: CuttingProblem) -> int:
        """Return the length left over on each bar, behind the last cut."""
        taken = sum(
            count * (length + problem.kerf)
            for count, length in zip(self.pieces, problem.lengths, strict=True)
        )
        return max(0, problem.stock[self.stock].length - problem.trim - taken)


@dataclass(frozen=True, kw_only=True, slots=True)
class CuttingPlan:
    """How to cut, how good it is, and a bound that no plan can undercut.

    ``objective`` and ``bound`` are in bars, units of length, or units of money. ``patterns`` is
    empty and ``objective`` None where no plan is known. ``proven``: objective equals bound.
    """

    problem: CuttingProblem
    status: CuttingStatus
    patterns: tuple[CuttingPattern, ...]
    objective: int | None
    bound: int
    method: str

    @property
    def gap(self) -> float | None:
        """(objective - bound) / objective, None without a plan."""
        if self.objective is None:
            return None
        return (self.objective - self.bound) / self.objective if self.objective else 0.0

    @property
    def bars(self) -> int:
        """Number of bars used."""
        return sum(pattern.bars for pattern in self.patterns)

    @property
    def stock_length(self) -> int:
        """Total length of the bars used."""
        return sum(p.bars * self.problem.stock[p.stock].length for p in self.patterns)

    @property
    def piece_length(self) -> int:
        """Total length of the pieces."""
        pairs = zip(self.problem.lengths, self.problem.numbers, strict=True)
        return sum(length * number for length, number in pairs)

    @property
    def waste(self) -> int:
        """Stock less pieces: offcuts, saw cuts and trim."""
        return self.stock_length - self.piece_length if self.patterns else 0

    @property
    def offcuts(self) -> tuple[tuple[int, int], ...]:
        """(length, number) of the offcuts that are left, longest first."""
        counts: dict[int, int] = {}
        for pattern in self.patterns:
            left = pattern.offcut(self.problem)
            if left > 0:
                counts[left] = counts.get(left, 0) + pattern.bars
        return tuple(sorted(counts.items(), reverse=True))
