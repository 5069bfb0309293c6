"""The generated set misses nothing that an exhaustive search over admissible subsets finds."""

from itertools import combinations as subsets_of

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from sizing.brief.combination_rules import expand
from sizing.brief.combination_rules_durations import EN_DURATIONS, LONGEST_FIRST, US_DURATIONS
from sizing.brief.model import LoadCase

PSI0 = {"imposed": 0.7, "imposed roof": 0.0, "snow": 0.5, "wind": 0.6, "temperature": 0.6}
STRENGTH = dict(zip(LONGEST_FIRST, (0.6, 0.7, 0.8, 0.9, 1.1), strict=True))
"""kmod, so that the envelope is one of force over strength, as timber needs it."""
ONE_AT_A_TIME = {"snow", "wind", "temperature"}
APART = ({"imposed roof", "snow"}, {"imposed roof", "wind"})

KINDS = [
    ["permanent", "snow", "snow", "wind", "wind"],
    ["permanent", "permanent", "snow", "snow", "snow", "wind", "wind"],
    ["permanent", "imposed", "imposed", "snow", "wind"],
    ["permanent", "imposed", "imposed roof", "imposed roof", "snow", "wind"],
    ["permanent", "imposed", "snow", "temperature", "temperature"],
    ["imposed", "wind"],
    ["permanent"],
]


def cases_of(kinds):
    return [LoadCase(name=f"{k}{i}", kind=k, nodal={}) for i, k in enumerate(kinds)]


def admissible(kinds):
    """Yield every subset of variable cases that may act together, the empty one included."""
    variable = [q for q, kind in enumerate(kinds) if kind != "permanent"]
    for size in range(len(variable) + 1):
        for subset in subsets_of(variable, size):
            of = [kinds[q] for q in subset]
            alone = all(of.count(kind) == 1 for kind in set(of) & ONE_AT_A_TIME)
            if alone and not any(pair <= set(of) for pair in APART):
                yield subset


def exhaustive(kinds, expression):
    """Yield (factors, duration) of every combination that EN 1990 admits, straight from it."""
    permanent = [q for q, kind in enumerate(kinds) if kind == "permanent"]
    for subset in admissible(kinds):
        acting = {kinds[q] for q in subset}
        of = [*permanent, *subset]
        if not of:
            continue
        duration = max((EN_DURATIONS[kinds[q]] for q in of), key=LONGEST_FIRST.index)
        for leading in acting or {None}:
            for g in (1.35, 1.0):
                for lead, xi in ((1.0, 1.0),) if expression == "6.10" else ((None, 1), (1.0, 0.85)):
                    factors = dict.fromkeys(permanent, g * xi if g > 1.0 else g)
                    for q in subset:
                        led = kinds[q] == leading and lead is not None
                        factors[q] = 1.5 * (1.0 if led else PSI0[kinds[q]])
                    yield factors, duration


def envelope(found, effect):
    """Return the greatest force over strength in tension and in compression."""
    ratios = [
        sum(f * effect[q] for q, f in factors.items()) / STRENGTH[duration]
        for factors, duration in found
    ]
    return max(0.0, *ratios, 0.0), min(0.0, *ratios, 0.0)


@pytest.mark.parametrize("expression", ["6.10", "6.10a and 6.10b"])
@pytest.mark.parametrize("kinds", KINDS, ids="-".join)
@settings(max_examples=40, deadline=None)
@given(seed=st.integers(0, 2**32 - 1))
def test_en1990_envelope_equals_that_of_all_admissible_subsets(expression, kinds, seed):
    """Greatest tension and compression over strength are those of the exhaustive search."""
    effect = np.random.default_rng(seed).normal(size=len(kinds))
    generated = [
        (c.factors, c.duration)
        for c in expand("EN 1990", cases_of(kinds), {"expression": expression})
        if c.state == "strength"
    ]
    every = list(exhaustive(kinds, expression))
    assert envelope(generated, effect) == pytest.approx(envelope(every, effect), abs=1e-12)


@pytest.mark.parametrize("kinds", KINDS, ids="-".join)
def test_en1990_holds_no_inadmissible_combination(kinds):
    """No combination has two alternatives of one action, or roof imposed load beside snow."""
    allowed = set(admissible(kinds))
    for combination in expand("EN 1990", cases_of(kinds), {}):
        variable = tuple(q for q in combination.factors if kinds[q] != "permanent")
        assert variable in allowed


LRFD = [
    ({"permanent": 1.4}, []),
    ({"permanent": 1.2, "imposed": 1.6}, [{"imposed roof": 0.5, "snow": 0.5}]),
    ({"permanent": 1.2, "imposed roof": 1.6}, [{"imposed": 1.0, "wind": 0.5}]),
    ({"permanent": 1.2, "snow": 1.6}, [{"imposed": 1.0, "wind": 0.5}]),
    ({"permanent": 1.2, "wind": 1.0}, [{"imposed": 1.0}, {"imposed roof": 0.5, "snow": 0.5}]),
    ({"permanent": 0.9, "wind": 1.0}, []),
]


@settings(max_examples=100, deadline=None)
@given(seed=st.integers(0, 2**32 - 1))
def test_asce7_lrfd_envelope_equals_that_of_every_selection(seed):
    """The LRFD envelope is that of every selection of one snow and one wind case or none.

    ASCE 7-16 2.3.1 with loads not acting; durations left aside.
    """
    kinds = ["permanent", "imposed", "imposed roof", "snow", "snow", "wind", "wind"]
    effect = np.random.default_rng(seed).normal(size=len(kinds))
    every = [0.0]
    for fixed, slots in LRFD:
        pick = [dict(fixed)]
        for slot in slots:
            pick = [
                {**p, **extra} for p in pick for extra in [{}, *({k: f} for k, f in slot.items())]
            ]
        for factors in pick:
            totals = [0.0]
            for kind, factor in factors.items():
                of = [q for q, k in enumerate(kinds) if k == kind]
                totals = [t + factor * effect[q] for t in totals for q in of]
            every += totals
    got = [
        sum(f * effect[q] for q, f in c.factors.items())
        for c in expand("ASCE 7-16 LRFD", cases_of(kinds), {})
        if c.state == "strength"
    ]
    assert max(0.0, *got) == pytest.approx(max(every), abs=1e-12)
    assert min(0.0, *got) == pytest.approx(min(every), abs=1e-12)


ASD = [
    ({"permanent": 1.0}, []),
    ({"permanent": 1.0, "imposed": 1.0}, []),
    ({"permanent": 1.0, "imposed roof": 1.0}, []),
    ({"permanent": 1.0, "snow": 1.0}, []),
    ({"permanent": 1.0}, [{"imposed": 0.75}, {"imposed roof": 0.75, "snow": 0.75}]),
    ({"permanent": 1.0, "wind": 0.6}, []),
    (
        {"permanent": 1.0, "wind": 0.45},
        [{"imposed": 0.75}, {"imposed roof": 0.75, "snow": 0.75}],
    ),
    ({"permanent": 0.6, "wind": 0.6}, []),
]


@settings(max_examples=100, deadline=None)
@given(seed=st.integers(0, 2**32 - 1))
def test_asce7_asd_envelope_over_strength_equals_that_of_every_selection(seed):
    """The ASD envelope of force over CD is that of every selection, with every load there or not.

    ASCE 7-16 2.4.1; CD of the shortest load of each combination, NDS Table 2.3.2.
    """
    kinds = ["permanent", "imposed", "imposed roof", "snow", "snow", "wind", "wind"]
    factor = dict(zip(LONGEST_FIRST, (0.9, 1.0, 1.15, 1.25, 1.6), strict=True))
    effect = np.random.default_rng(seed).normal(size=len(kinds))
    every = [0.0]
    for fixed, slots in ASD:
        pick = [dict(fixed)]
        for slot in slots:
            pick = [
                {**p, **extra} for p in pick for extra in [{}, *({k: f} for k, f in slot.items())]
            ]
        for factors in pick:
            lasting = factor[max((US_DURATIONS[k] for k in factors), key=LONGEST_FIRST.index)]
            totals = [0.0]
            for kind, f in factors.items():
                totals = [
                    t + f * effect[q] for t in totals for q, k in enumerate(kinds) if k == kind
                ]
            every += [total / lasting for total in totals]
    got = [
        sum(f * effect[q] for q, f in c.factors.items()) / factor[c.duration]
        for c in expand("ASCE 7-16 ASD", cases_of(kinds), {}, ["NDS"])
        if c.state == "strength"
    ]
    assert max(0.0, *got) == pytest.approx(max(every), abs=1e-12)
    assert min(0.0, *got) == pytest.approx(min(every), abs=1e-12)
