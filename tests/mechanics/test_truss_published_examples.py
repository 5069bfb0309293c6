"""Published truss examples: values printed in textbooks, and an independent dense solution.

Source, origin and tolerance of every example stand in tests/published/trusses.
"""

from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest

from sizing.mechanics.analysis import analyse, stiffness_of
from sizing.mechanics.geometry import truss_geometry

FILE = Path(__file__).parents[1] / "published" / "trusses" / "truss_examples.json"
EXAMPLES = {e["id"]: e for e in json.loads(FILE.read_text(encoding="utf-8"))}

COMPUTED = 5e-7
"""The independent solution is recorded with seven significant figures."""


def solve(example):
    x = np.array(example["nodes"], dtype=float)
    members = example["members"]
    held = np.zeros(x.shape, dtype=bool)
    settlement = np.zeros((*x.shape, 1))
    loads = np.zeros((*x.shape, 1))
    for s in example["supports"]:
        held[s["node"], s["dir"]] = True
        settlement[s["node"], s["dir"], 0] = s["prescribed"]
    for load in example["loads"]:
        loads[load["node"], load["dir"], 0] += load["value"]
    free = np.zeros((len(members), 1))
    for e in example["initial_elongation"]:
        free[e["member"], 0] = e["value"]
    geometry = truss_geometry(x, [m["i"] for m in members], [m["j"] for m in members], held)
    EA = np.array([m["EA"] for m in members])
    return geometry, EA, analyse(geometry, EA, loads, free, settlement)


def digits(found, expected):
    """Agreeing significant digits, against the greatest expected value."""
    scale = np.abs(expected).max()
    worst = np.abs(np.asarray(found) - expected).max() / scale if scale else np.abs(found).max()
    return 16.0 if worst == 0 else min(16.0, -math.log10(worst))


@pytest.mark.parametrize("name", EXAMPLES)
def test_example_agrees_with_independent_solution(name):
    """Displacements, forces and reactions agree with a separate dense solution to 6 digits."""
    example = EXAMPLES[name]
    _, _, result = solve(example)
    computed = example["computed"]
    reactions = np.array([r["value"] for r in computed["reactions"]])
    found = np.array([result.reaction[r["node"], r["dir"], 0] for r in computed["reactions"]])
    force_scale = np.abs(computed["member_forces"]).max()
    shown = {
        "displacement": digits(result.displacement[..., 0], np.array(computed["displacements"])),
        "force": digits(result.force[:, 0], np.array(computed["member_forces"])),
    }
    print(name, {k: round(v, 1) for k, v in shown.items()})
    assert min(shown.values()) > -math.log10(COMPUTED)
    assert np.abs(found - reactions).max() <= COMPUTED * force_scale
    assert result.residual[0] < 1e-13


PUBLISHED_FORCES = {
    # relative to the greatest force; the printed figures' rounding
    "BJ-6.1": 1e-9,
    "BJ-6.3": 1e-9,
    "HIB-9.1": 0.003,
    "HIB-14.3": 1e-9,
    "MEG-4.4": 0.06 / 87.6,
    "MEG-12.1": 5e-6,
    "MEG-P12.1": 0.0005 / 0.5,
}


@pytest.mark.parametrize(("name", "tolerance"), PUBLISHED_FORCES.items())
def test_forces_as_printed(name, tolerance):
    """Member forces are those printed in the book, to its printed figures."""
    _, _, result = solve(EXAMPLES[name])
    printed = np.array(EXAMPLES[name]["published"]["N"])
    assert np.abs(result.force[:, 0] - printed).max() <= tolerance * np.abs(printed).max()


@pytest.mark.parametrize(
    ("name", "places"),
    [
        ("BJ-6.1", {"C_x": (0, 0), "B_x": (1, 0), "B_y": (1, 1)}),
        ("BJ-6.3", {"C_x": (2, 0), "A_x": (0, 0), "A_y": (0, 1)}),
    ],
)
def test_reactions_as_printed(name, places):
    """Support reactions are those printed on the solution sheet."""
    _, _, result = solve(EXAMPLES[name])
    for key, (node, axis) in places.items():
        assert result.reaction[node, axis, 0] == pytest.approx(
            EXAMPLES[name]["published"]["R"][key], abs=1e-9
        )


def test_displacements_as_printed():
    """Displacements are those printed in the books, within each one's rounding."""
    u = {name: solve(EXAMPLES[name])[2].displacement[..., 0] for name in EXAMPLES}
    assert u["HIB-9.1"][2, 1] == pytest.approx(-0.204, rel=0.003)
    assert u["HIB-14.3"][0] == pytest.approx([4.505, -19.003], rel=0.002)
    assert u["MEG-12.1"][1] == pytest.approx([-1.0, -(1 + 2 * math.sqrt(2))], rel=1e-12)
    vertical = u["MEG-P12.1"][np.abs(u["MEG-P12.1"][:, 1]) > 0][:, 1]
    assert np.sort(vertical) == pytest.approx([-0.70711, -0.293], abs=5e-4)
    a = np.abs(u["HIB-14.4"])
    found = [a[2, 1], a[2, 0], a[3, 1], a[3, 0], a[0, 0]]
    assert found == pytest.approx([17.94, 69.2, 2.06, 87.14, 22.06], rel=0.01)
    b = np.abs(u["HIB-14.8"]) / 12.0  # inches to feet
    found = [b[1, 0], b[3, 1], b[2, 1], b[1, 1], b[3, 0]]
    printed = EXAMPLES["HIB-14.8"]["published"]["abs_displacements_ft"]
    assert found == pytest.approx(printed, rel=0.02)


def test_heated_diagonal_as_printed():
    """A heated diagonal carries −(1 − 1/√2) EA α ΔT; the book's rounded value is 2 % less."""
    _, EA, result = solve(EXAMPLES["HIB-14.8"])
    exact = -(1 - 1 / math.sqrt(2)) * EA[1] * 6.5e-6 * 150
    assert result.force[1, 0] == pytest.approx(exact, rel=1e-12)
    assert result.force[1, 0] == pytest.approx(-6093, rel=0.02)


def test_stiffness_entries_as_printed():
    """The joint block of the stiffness matrix has the entries printed for UGU-13.17."""
    example = EXAMPLES["UGU-13.17"]
    free = {**example, "supports": [s for s in example["supports"] if s["node"] != 0]}
    geometry, EA, _ = solve(free)
    K = stiffness_of(geometry, EA).matrix().toarray()
    printed = example["published"]["K_1e7"]
    assert K[0, 0] == pytest.approx(printed["0.36AE/5"] * 1e7, rel=5e-4)
    assert K[0, 1] == pytest.approx(printed["0.48AE/5"] * 1e7, rel=5e-4)
    assert K[1, 1] == pytest.approx(printed["sum_yy"] * 1e7, rel=5e-4)
