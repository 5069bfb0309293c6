"""An independent look at a cutting plan: counts every piece and lays out every bar again."""

from __future__ import annotations

from sizing.selection.cutting_problem import CuttingPlan


def faults_of(plan: CuttingPlan) -> tuple[str, ...]:
    """Return what is wrong with ``plan`` in sentences; empty when it can be cut as it stands.

    Each bar is laid out cut by cut: trim, then piece and saw cut in turn, where the last saw cut
    may run off the end of the bar. Shares no code with the search.
    """
    problem = plan.problem
    faults = []
    cut = [0] * len(problem.lengths)
    taken = [0] * len(problem.stock)
    for k, pattern in enumerate(plan.patterns, 1):
        bar = problem.stock[pattern.stock]
        position = problem.trim
        for i, count in enumerate(pattern.pieces):
            if count < 0:
                faults.append(f"pattern {k} cuts {count} pieces of {problem.lengths[i]}")
            for _ in range(count):
                position += problem.lengths[i]
                if position > bar.length:
                    faults.append(f"pattern {k} overruns its bar of {bar.length} at {position}")
                position += problem.kerf
            cut[i] += count * pattern.bars
        if pattern.bars < 1 or not any(pattern.pieces):
            faults.append(f"pattern {k} uses {pattern.bars} bars for {sum(pattern.pieces)} pieces")
        taken[pattern.stock] += pattern.bars
    if plan.objective is not None or plan.patterns:
        faults += [
            f"{made} pieces of {length} are cut, {number} are needed"
            for made, length, number in zip(cut, problem.lengths, problem.numbers, strict=True)
            if made != number
        ]
        total = sum(n * problem.expense(j) for j, n in enumerate(taken))
        if total != plan.objective:
            faults.append(f"the bars add up to {total}, the plan says {plan.objective}")
        if total < plan.bound:
            faults.append(f"the bars add up to {total}, which is below the bound {plan.bound}")
    faults += [
        f"{n} bars of {bar.length} are used, {bar.available} are available"
        for n, bar in zip(taken, problem.stock, strict=True)
        if bar.available is not None and n > bar.available
    ]
    return tuple(faults)
