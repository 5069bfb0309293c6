"""Single angles twist: EN 1993-1-1, 6.3.1.4, against a numerical eigenvalue problem."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.linalg import eigh

from sizing.standards.en1993 import make_en1993

E, G = 210e9, 81e9
STRIPS = 4000


def outline(h, b, t):
    """Area, centroid and second moments of two sharp legs, summed over strips across the depth."""
    y = (np.arange(STRIPS) + 0.5) * h / STRIPS
    wide = np.where(y < t, b, t)
    strip = wide * h / STRIPS
    area = strip.sum()
    at = np.array([(strip * y).sum(), (strip * wide / 2.0).sum()]) / area
    deep = y - at[0]
    across = wide / 2.0 - at[1]
    inertia = np.array(
        [
            [(strip * deep**2).sum(), (strip * deep * across).sum()],
            [(strip * deep * across).sum(), (strip * (across**2 + wide**2 / 12.0)).sum()],
        ]
    )
    if h == b:  # strips round the two axes of an equal angle differently
        at, inertia = np.full(2, at.mean()), 0.5 * (inertia + inertia[::-1, ::-1])
    return area, at, inertia


def angle(h, b, t):
    """A catalogue row of an angle with sharp corners (invented), m."""
    area, _, inertia = outline(h, b, t)
    return {
        "family": "angle",
        "product": "EN 10056-1",
        "area": area,
        "i_major": inertia[0, 0],
        "i_minor": inertia[1, 1],
        "i_least": np.linalg.eigvalsh(inertia)[0],
        "depth": h,
        "width": b,
        "thickness": t,
    }


def critical_load(h, b, t, length):
    """The least load at which K − N G is singular: two bowings and twist about the shear centre.

    Vlasov's equations of a pinned thin-walled column without warping stiffness.
    """
    area, at, inertia = outline(h, b, t)
    spread, axes = np.linalg.eigh(inertia)
    centre = axes.T @ (np.array([t / 2.0, t / 2.0]) - at)
    polar = np.trace(inertia) / area + centre @ centre
    twist = G * (h + b - t) * t**3 / 3.0
    # Bowing across the direction of the greater spread is about the stiff axis.
    bow = math.pi**2 * E * spread[::-1] / length**2
    stiffness = np.diag([*bow, twist])
    load = np.array([[1, 0, centre[0]], [0, 1, centre[1]], [centre[0], centre[1], polar]])
    return 1.0 / eigh(load, stiffness, eigvals_only=True)[-1]


@pytest.mark.parametrize("size", [(0.1, 0.1, 0.009), (0.15, 0.075, 0.012), (0.1, 0.065, 0.009)])
@pytest.mark.parametrize("length", [0.3, 0.6, 1.0, 2.0])
def test_critical_load_is_that_of_the_eigenvalue_problem(catalogue_of, members_of, size, length):
    """N_cr,TF of equal and unequal legs is the least eigenvalue; v-v alone where that is less."""
    lines = make_en1993("S235", {}).working(
        catalogue_of(angle(*size)), 0, members_of(length=length), 0, "short", "compression"
    )
    found = {line.symbol: line.value for line in lines}
    expected = critical_load(*size, length)
    about_v = math.pi**2 * E * angle(*size)["i_least"] / length**2
    if "N_cr,TF" in found:
        assert found["N_cr,TF"] == pytest.approx(expected, rel=1e-4)  # strips
    else:
        assert about_v == pytest.approx(expected, rel=1e-4)


def test_a_short_thin_angle_twists_and_a_long_one_bows(catalogue_of, members_of):
    """At h/t = 11 twist takes a sixth off a short S235 angle; over 2 m v-v governs."""
    standard = make_en1993("S235", {})
    catalogue = catalogue_of(angle(0.11, 0.11, 0.01))
    table = standard.resistances(catalogue, members_of(length=[0.4, 2.0]), ("short",))
    clauses = [table.clauses[k] for k in table.compression_clause[:, 0, 0]]
    assert clauses == ["6.3.1.4 torsional-flexural buckling", "6.3.1 buckling about v-v"]
    squash = catalogue.area[0] * 235e6
    assert 0.80 < table.compression[0, 0, 0] / squash < 0.90


def test_webs_by_annex_bb1_keep_their_own_slenderness(catalogue_of, members_of):
    """λ̄_eff of BB.1.2(2) stands in for twisting of restrained web angles."""
    settings = {"buckling_lengths": "BB.1", "webs": ["web"]}
    lines = make_en1993("S235", settings).working(
        catalogue_of(angle(0.11, 0.11, 0.01)),
        0,
        members_of(length=0.4, role="web"),
        0,
        "short",
        "compression",
    )
    assert "N_cr,TF" not in {line.symbol for line in lines}


def test_an_angle_without_length_still_twists(catalogue_of, members_of):
    """Held throughout against bowing, an angle has the load of twisting about its shear centre."""
    catalogue, standard = catalogue_of(angle(0.11, 0.11, 0.01)), make_en1993("S235", {})
    table = standard.resistances(catalogue, members_of(length=[0.0, 0.02]), ("short",))
    assert table.compression[0, 0, 0] == pytest.approx(table.compression[1, 0, 0], rel=1e-3)
    assert 0.0 < table.compression[0, 0, 0] < catalogue.area[0] * 235e6
