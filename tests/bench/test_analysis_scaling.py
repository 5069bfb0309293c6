"""Time and memory of assembly, factorisation and solution, 100 to 10,000 members.

Peer in the same run: dense numpy (assembly by Bᵀ diag(k) B, ``numpy.linalg.solve``) where it
fits. Fixed inputs; nothing is asserted about seconds. Run with ``-m bench -s``.
"""

from __future__ import annotations

import time
import tracemalloc

import numpy as np
import pytest
from random_trusses import double_layer_grid, lattice_girder

from sizing.mechanics.analysis import analyse
from sizing.mechanics.mechanisms import find_mechanisms
from sizing.mechanics.stiffness import Stiffness

DENSE_FITS = 2000  # free displacements; 32 MB a matrix
CASES = 25
REPEATS = 3

pytestmark = pytest.mark.bench


def best(work):
    """Best of a few runs in ms, and the greatest memory in use in MB of one more run."""
    spent = []
    for _ in range(REPEATS):
        begun = time.perf_counter()
        work()
        spent.append(time.perf_counter() - begun)
    tracemalloc.start()
    work()
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    return 1e3 * min(spent), peak / 2**20


@pytest.mark.parametrize(
    ("shape", "build", "sizes"),
    [
        ("crossed girder, panels", lattice_girder, (20, 100, 400, 1000, 2000)),
        ("space grid, bays", double_layer_grid, (4, 8, 16, 25, 35)),
    ],
)
def test_scaling_of_the_analysis(shape, build, sizes):
    """Solutions agree with dense numpy; the table shows what they cost."""
    print(f"\n{shape}; {CASES} load cases; ms (MB)")
    heads = ("assemble", "factorise", "solve", "mechanisms", "dense numpy")
    print(f"{'members':>8} {'free':>6} " + " ".join(f"{h:>18}" for h in heads) + "  residual")
    for size in sizes:
        g = build(size)
        k = 2.1e8 / g.length
        loads = np.zeros((g.nodes, g.dimensions, CASES))
        rng = np.random.default_rng(size)
        loads[:, -1] = -1e4 * rng.random((g.nodes, CASES))
        p = loads.reshape(-1, CASES)[g.free]
        K = Stiffness(g.compatibility, k)
        figures = [
            best(K.matrix),
            best(lambda: Stiffness(g.compatibility, k)),  # noqa: B023 - run within the turn
            best(lambda: K.solve(p)),  # noqa: B023 - run within the turn
            best(lambda: find_mechanisms(g)),  # noqa: B023 - run within the turn
        ]
        a = analyse(g, np.full(g.members, 2.1e8), loads, stiffness=K)
        if g.free.size <= DENSE_FITS:
            B = g.compatibility.toarray()
            u = np.linalg.solve(B.T @ (k[:, None] * B), p)
            figures.append(
                best(lambda: np.linalg.solve(B.T @ (k[:, None] * B), p))  # noqa: B023 - as above
            )
            found = a.displacement.reshape(-1, CASES)[g.free]
            np.testing.assert_allclose(found, u, rtol=0, atol=1e-6 * np.abs(u).max())
        cells = [f"{ms:9.1f} ({mb:6.1f})" for ms, mb in figures]
        print(
            f"{g.members:8d} {g.free.size:6d} "
            + " ".join(f"{c:>18}" for c in cells)
            + f"{'' if len(cells) == 5 else ' ' * 19}  {a.residual.max():.0e}"
        )
        assert a.residual.max() < 1e-8
