"""The best cutting pattern for given values of the pieces: a bounded knapsack, solved exactly.

Dynamic programming over pieces and room in whole numbers (Gilmore and Gomory 1961, "A linear
programming approach to the cutting-stock problem"; pieces limited to the numbers needed, by
binary splitting of the counts).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

IntArray = NDArray[np.int64]

LOOK_EVERY = 2_000
"""Steps of an enumeration between two looks at the clock."""


class Knapsack:
    """Tables of the greatest value in any room up to ``room``, after each piece.

    ``best[i, c]`` is the greatest Σ value·count over pieces 0..i-1 with Σ size·count <= c and
    count <= number, all whole numbers.
    """

    def __init__(self, sizes: Sequence[int], numbers: Sequence[int], room: int) -> None:
        # A common divisor of the sizes divides every sum of sizes: room in between is of no use.
        self._unit = math.gcd(*sizes)
        self._sizes = [size // self._unit for size in sizes]
        self._room = room // self._unit
        self._counts = [
            min(number, self._room // size)
            for size, number in zip(self._sizes, numbers, strict=True)
        ]
        self.best: IntArray = np.zeros((len(sizes) + 1, self._room + 1), dtype=np.int64)
        self._values: list[int] = [0] * len(sizes)

    def fill(self, values: Sequence[int]) -> None:
        """Fill the tables for whole ``values`` (not below zero)."""
        self._values = list(values)
        for i, (size, value) in enumerate(zip(self._sizes, values, strict=True)):
            row = self.best[i].copy()
            if value > 0:
                for share in _binary_shares(self._counts[i]):
                    step = share * size
                    np.maximum(row[step:], row[: row.size - step] + share * value, out=row[step:])
            self.best[i + 1] = row

    def greatest(self, room: int, first: int | None = None) -> int:
        """Return the greatest value in ``room``, of the ``first`` so many pieces (None: all)."""
        return int(self.best[-1 if first is None else first, room // self._unit])

    def pattern(self, room: int, first: int | None = None) -> tuple[int, ...]:
        """Return counts of the pieces with that value."""
        left = room // self._unit
        counts = [0] * len(self._sizes)
        for i in range((len(self._sizes) if first is None else first) - 1, -1, -1):
            target, size, value = self.best[i + 1, left], self._sizes[i], self._values[i]
            while self.best[i, left] + counts[i] * value != target:
                counts[i] += 1
                left -= size
        return tuple(counts)

    def full_patterns(
        self, room: int, least: int, wanted: Callable[[], bool]
    ) -> Iterator[tuple[int, ...]]:
        """Yield every pattern in ``room`` of value >= ``least`` to which no piece can be added.

        ``wanted`` is asked now and then; the enumeration raises :class:`TimeoutError` when it
        answers no.
        """
        counts = [0] * len(self._sizes)
        steps = 0

        def fill_from(i: int, left: int, value: int) -> Iterator[tuple[int, ...]]:
            nonlocal steps
            steps += 1
            if steps % LOOK_EVERY == 0 and not wanted():
                raise TimeoutError
            if value + int(self.best[i, left]) < least:
                return
            if i == 0:
                if self._is_full(counts, left):
                    yield tuple(counts)
                return
            size, worth = self._sizes[i - 1], self._values[i - 1]
            for count in range(min(self._counts[i - 1], left // size), -1, -1):
                counts[i - 1] = count
                yield from fill_from(i - 1, left - count * size, value + count * worth)
            counts[i - 1] = 0

        yield from fill_from(len(self._sizes), room // self._unit, 0)

    def _is_full(self, counts: Sequence[int], left: int) -> bool:
        return all(
            size > left or count == most
            for size, count, most in zip(self._sizes, counts, self._counts, strict=True)
        )


def _binary_shares(count: int) -> Iterator[int]:
    """Yield 1, 2, 4, ..., rest: whose subset sums are exactly 0..count."""
    share = 1
    while count > 0:
        taken = min(share, count)
        yield taken
        count -= taken
        share *= 2
