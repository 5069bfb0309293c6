"""Closed forms for forces from load, temperature, lack of fit and support movement."""

from __future__ import annotations

import math

import numpy as np
import pytest
from random_trusses import random_truss

from sizing.mechanics.analysis import analyse
from sizing.mechanics.geometry import truss_geometry


def test_three_bars_at_a_point():
    """N_mid = P/(1+2cos³a), N_outer = P cos²a/(1+2cos³a).

    Timoshenko, Strength of Materials, Part I, statically indeterminate systems (from memory).
    """
    for degrees in (5.0, 35.0, 60.0, 80.0):
        c = math.cos(math.radians(degrees))
        x = math.tan(math.radians(degrees))
        held = [[1, 1]] * 3 + [[0, 0]]
        g = truss_geometry([[-x, 1], [0, 1], [x, 1], [0, 0]], [0, 1, 2], [3, 3, 3], held)
        loads = np.zeros((4, 2, 1))
        loads[3, 1] = -1000.0
        force = analyse(g, np.full(3, 2.1e8), loads).force[:, 0]
        outer = 1000 * c**2 / (1 + 2 * c**3)
        assert force == pytest.approx([outer, 1000 / (1 + 2 * c**3), outer], rel=1e-12)


def panel(a, b):
    position = [[0, 0], [a, 0], [a, b], [0, b]]
    held = [[1, 1], [0, 1], [0, 0], [0, 0]]
    return truss_geometry(position, [0, 1, 2, 3, 0, 1], [1, 2, 3, 0, 2, 3], held)


@pytest.mark.parametrize(("a", "b"), [(3.0, 3.0), (3.0, 4.0), (6.0, 1.5)])
def test_misfit_in_a_crossed_panel(a, b):
    """A member made too long by Δ puts X = −EA s Δ/Σ(s²L) into the self-stress state s.

    Force method; s is 1 in the diagonals and −side/diagonal in the sides.
    """
    g = panel(a, b)
    diagonal = math.hypot(a, b)
    s = np.array([-a, -b, -a, -b, diagonal, diagonal]) / diagonal
    EA = 3.0e8
    for member in range(6):
        free = np.zeros((6, 1))
        free[member] = 0.002
        X = -EA * s[member] * 0.002 / float(s**2 @ g.length)
        result = analyse(g, np.full(6, EA), np.zeros((4, 2, 1)), free)
        assert result.force[:, 0] == pytest.approx(X * s, rel=1e-11)
        assert np.abs(result.reaction).max() < 1e-9 * abs(X)


def test_three_heated_bars_raise_their_apex():
    """Three bars of 5, 4 and 5 ft: apex rise = α ΔT 2.6/(0.25 + 0.256) ft, middle bar +10.894 kip.

    Data of a published exercise (A = 2 in², ΔT = 100 °F, α = 6.60e-6); the answer is the closed
    form of the force method.
    """
    g = truss_geometry(
        [[-36, 0], [0, 0], [36, 0], [0, 48]], [0, 1, 2], [3, 3, 3], [[1, 1]] * 3 + [[0, 0]]
    )
    free = (6.6e-6 * 100 * g.length)[:, None]
    result = analyse(g, np.full(3, 2 * 29000.0), np.zeros((4, 2, 1)), free)
    assert result.displacement[3, 1, 0] == pytest.approx(6.6e-4 * 2.6 / 0.506 * 12, rel=1e-12)
    assert np.abs(result.force[:, 0]) == pytest.approx([6.809, 10.894, 6.809], abs=6e-4)
    assert result.force[1, 0] * result.force[0, 0] < 0


@pytest.mark.parametrize("dimensions", [2, 3])
def test_determinate_truss_takes_temperature_and_settlement_without_force(dimensions):
    """In a statically determinate truss temperature, misfit and settlement cause no force."""
    for seed in range(5):
        rng = np.random.default_rng(seed)
        g = random_truss(rng, nodes=9, dimensions=dimensions, redundants=0)
        EA = np.full(g.members, 4.0e8)
        free = rng.normal(size=(g.members, 2)) * 1e-3
        moved = np.where(g.held[..., None], rng.normal(size=(*g.held.shape, 2)) * 1e-2, 0.0)
        result = analyse(g, EA, np.zeros((*g.held.shape, 2)), free, moved)
        assert np.abs(result.force).max() < 1e-9 * EA[0]
        assert np.abs(result.reaction).max() < 1e-9 * EA[0]
        assert g.full_compatibility @ result.displacement.reshape(-1, 2) == pytest.approx(
            free, abs=1e-12
        )
