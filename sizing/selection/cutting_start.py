"""First cutting plans without any linear program: longest pieces first into the first bar.

First fit decreasing (Johnson 1973): each piece goes to the first open bar with room, else to a
new one. With several stock lengths every length takes its turn as the usual one, and each bar is
afterwards exchanged for the least expensive that holds its pieces.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence

from sizing.selection.cutting_problem import CuttingPattern, CuttingProblem

Bars = list[tuple[int, tuple[int, ...]]]
"""One entry per bar: its stock length (index) and the number of each piece."""


def first_plan(problem: CuttingProblem, numbers: Sequence[int]) -> Bars | None:
    """Return bars for ``numbers`` of the pieces, None when the stock at hand ran out."""
    plans = [_first_fit(problem, numbers, usual) for usual in range(len(problem.stock))]
    known = [plan for plan in plans if plan is not None]
    return min(known, key=lambda bars: expense_of(problem, bars), default=None)


def expense_of(problem: CuttingProblem, bars: Bars) -> int:
    """Return the objective of a list of bars."""
    return sum(problem.expense(stock) for stock, _ in bars)


def gathered(bars: Bars) -> tuple[CuttingPattern, ...]:
    """Return the distinct patterns of a list of bars with their numbers, most frequent first."""
    counts = Counter(bars)
    order = sorted(counts, key=lambda bar: (-counts[bar], bar[0], [-n for n in bar[1]]))
    return tuple(
        CuttingPattern(stock=stock, pieces=pieces, bars=counts[stock, pieces])
        for stock, pieces in order
    )


def without_surplus(bars: Bars, numbers: Sequence[int]) -> Bars:
    """Return the bars less the pieces beyond ``numbers``, and less bars that are then empty."""
    left = list(numbers)
    kept: Bars = []
    for stock, pieces in bars:
        taken = tuple(min(count, rest) for count, rest in zip(pieces, left, strict=True))
        left = [rest - count for rest, count in zip(left, taken, strict=True)]
        if any(taken):
            kept.append((stock, taken))
    return kept


def _first_fit(problem: CuttingProblem, numbers: Sequence[int], usual: int) -> Bars | None:
    sizes = [length + problem.kerf for length in problem.lengths]
    left = [bar.available for bar in problem.stock]
    contents: list[list[int]] = []
    stocks: list[int] = []
    rooms: list[int] = []
    least = min((sizes[i] for i, number in enumerate(numbers) if number), default=0)
    with_room: list[int] = []
    for i in sorted(range(len(sizes)), key=lambda k: -sizes[k]):
        missing = numbers[i]
        for bar in with_room:
            missing -= _put(contents[bar], rooms, bar, i, sizes[i], missing)
            if not missing:
                break
        while missing > 0:
            stock = _new_bar(problem, sizes[i], usual, left)
            if stock is None:
                return None
            with_room.append(len(rooms))
            stocks.append(stock)
            rooms.append(problem.room(stock))
            contents.append([0] * len(sizes))
            bar = with_room[-1]
            missing -= _put(contents[bar], rooms, bar, i, sizes[i], missing)
        with_room = [bar for bar in with_room if rooms[bar] >= least]
    _exchange(problem, stocks, rooms, left)
    return [(stock, tuple(pieces)) for stock, pieces in zip(stocks, contents, strict=True)]


def _put(pieces: list[int], rooms: list[int], bar: int, i: int, size: int, missing: int) -> int:
    """Put as many of ``missing`` pieces as the bar has room for; return how many."""
    count = min(missing, rooms[bar] // size)
    pieces[i] += count
    rooms[bar] -= count * size
    return count


def _new_bar(problem: CuttingProblem, size: int, usual: int, left: list[int | None]) -> int | None:
    """Take a bar from ``left``: of the usual length, else the least expensive that is enough."""
    order = sorted(range(len(left)), key=lambda j: (j != usual, problem.expense(j)))
    for j in order:
        number = left[j]
        if problem.room(j) >= size and number != 0:
            left[j] = None if number is None else number - 1
            return j
    return None


def _exchange(
    problem: CuttingProblem, stocks: list[int], rooms: list[int], left: list[int | None]
) -> None:
    for b, (stock, room) in enumerate(zip(stocks, rooms, strict=True)):
        taken = problem.room(stock) - room
        for j in sorted(range(len(left)), key=problem.expense):
            number = left[j]
            if problem.expense(j) >= problem.expense(stock):
                break
            if problem.room(j) >= taken and number != 0:
                left[j] = None if number is None else number - 1
                back = left[stock]
                left[stock] = None if back is None else back + 1
                stocks[b], rooms[b] = j, problem.room(j) - taken
                break
