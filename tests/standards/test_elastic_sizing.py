"""Allowable stress and Euler's load over a safety factor."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from sizing.standards.contract import SettingsError
from sizing.standards.elastic import euler_stress, make_elastic

SETTINGS = {
    "E": "210 GPa",
    "density": "7850 kg/m3",
    "allowable_tension": "160 N/mm2",
    "allowable_compression": "140 N/mm2",
    "buckling_safety_factor": 2.0,
}
DURATIONS = ("permanent", "short")
RELATIVE = 1e-12  # the same closed formula in another order of operations
# Invented sections: a round bar of 50 mm, a flat of 80 x 10, an angle.
BAR = {"area": math.pi * 0.025**2, "i_major": math.pi * 0.025**4 / 4.0, "family": "other"}
FLAT = {"area": 8e-4, "i_major": 4.26667e-7, "i_minor": 6.66667e-9, "family": "rectangle"}
ANGLE = {"area": 4.8e-4, "i_major": 1.1e-7, "i_least": 4.54e-8, "family": "angle"}


def test_resistances_follow_the_closed_formulas(catalogue_of, members_of):
    """N_t = A σ_t, N_c = min(A σ_c, π² E I/(n L²)) (Euler 1744), per axis."""
    standard = make_elastic(None, SETTINGS)
    catalogue = catalogue_of(BAR, FLAT, ANGLE)
    members = members_of(length=[2.0, 2.0], in_plane=[1.0, 2.0], out_of_plane=[3.0, 0.5])
    table = standard.resistances(catalogue, members, DURATIONS)
    assert table.tension.shape == table.compression.shape == (2, 3, 2)
    np.testing.assert_allclose(table.tension[:, :, 1], [catalogue.area * 160e6] * 2, rtol=RELATIVE)

    def euler(inertia, length):
        return math.pi**2 * 210e9 * inertia / (2.0 * length**2)

    expected = [
        min(BAR["area"] * 140e6, euler(BAR["i_major"], 3.0)),
        min(8e-4 * 140e6, euler(4.26667e-7, 1.0), euler(6.66667e-9, 3.0)),
        min(4.8e-4 * 140e6, euler(4.54e-8, 3.0)),
    ]
    np.testing.assert_allclose(table.compression[0, :, 0], expected, rtol=RELATIVE)
    named = [table.clauses[k] for k in table.compression_clause[0, :, 0]]
    assert named == [
        "Euler buckling out of plane",
        "Euler buckling out of plane",
        "Euler buckling about the least axis",
    ]


def test_laying_the_depth_across_the_truss_swaps_the_axes(catalogue_of, members_of):
    """Turning the section and swapping the buckling lengths leaves the resistance as it was."""
    standard = make_elastic(None, SETTINGS)
    upright = members_of(length=1.0, in_plane=1.4, out_of_plane=0.3)
    flat = members_of(length=1.0, in_plane=0.3, out_of_plane=1.4, depth_in_plane=False)
    first = standard.resistances(catalogue_of(FLAT), upright, DURATIONS)
    second = standard.resistances(catalogue_of(FLAT), flat, DURATIONS)
    np.testing.assert_array_equal(first.compression, second.compression)
    assert first.clauses[first.compression_clause[0, 0, 0]] == "Euler buckling out of plane"
    assert second.clauses[second.compression_clause[0, 0, 0]] == "Euler buckling in plane"


def test_slenderness_limits_leave_out_with_a_reason(catalogue_of, members_of):
    """Beyond one limit there is no compression; beyond the other the section is not usable."""
    standard = make_elastic(None, SETTINGS)
    members = members_of(
        length=[2.0, 3.0, 5.0],  # L/i = 160, 240, 400 for the bar with i = 12.5 mm
        max_slenderness_compression=180.0,
        max_slenderness_tension=350.0,
    )
    table = standard.resistances(catalogue_of(BAR), members, ("permanent",))
    np.testing.assert_allclose(table.slenderness_in[:, 0], [160.0, 240.0, 400.0])
    assert list(table.compression[:, 0, 0] > 0.0) == [True, False, False]
    assert list(table.usable[:, 0]) == [True, True, False]
    assert [table.reasons[k] for k in table.notes[:, 0]] == [
        "",
        "slenderness L/i exceeds 180, the limit for members in compression",
        "slenderness L/i exceeds 350, the limit for members in tension",
    ]
    assert table.clauses[table.compression_clause[1, 0, 0]] == "slenderness limit"


def test_a_limit_met_exactly_counts_as_met(catalogue_of, members_of):
    """L/i equal to the limit passes."""
    standard = make_elastic(None, SETTINGS)
    members = members_of(length=0.0125 * 180.0, max_slenderness_compression=180.0)
    assert standard.resistances(catalogue_of(BAR), members, ("short",)).compression[0, 0, 0] > 0.0


def test_buckling_can_be_left_out_and_says_so(catalogue_of, members_of):
    """Without buckling only the stress counts, second moments may be missing, a caution warns."""
    settings = {k: v for k, v in SETTINGS.items() if k != "buckling_safety_factor"}
    standard = make_elastic("aluminium", settings | {"buckling": "none"})
    table = standard.resistances(
        catalogue_of({"area": 1e-3}), members_of(length=99.0), ("permanent",)
    )
    assert table.compression[0, 0, 0] == pytest.approx(140e3, rel=RELATIVE)
    assert "Buckling of compression members is not checked at all." in standard.cautions()
    assert standard.material.name == "aluminium"


def test_missing_second_moments_leave_a_row_out_of_compression(catalogue_of, members_of):
    """Euler's load needs I: without it no compression, and the reason is given."""
    standard = make_elastic(None, SETTINGS)
    table = standard.resistances(catalogue_of({"area": 1e-3}), members_of(), ("permanent",))
    assert table.compression[0, 0, 0] == 0.0
    assert table.tension[0, 0, 0] > 0.0
    assert table.reasons[table.notes[0, 0]] == "the catalogue gives no second moment of area"


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (
            {"allowable_tensoin": "1 MPa"},
            "allowable_tensoin: found an unknown setting; expected one of elastic's settings: E, "
            "density, allowable_tension, allowable_compression, buckling, buckling_safety_factor."
            ' Did you mean "allowable_tension"?',
        ),
        (
            {"buckling": "none"},
            "buckling_safety_factor: found 2.0; expected no such setting together with"
            ' buckling = "none". Remove one of the two.',
        ),
        (
            {"buckling": "euler", "buckling_safety_factor": True},
            "buckling_safety_factor: found true; expected a number not below 1 and not above 20.",
        ),
        (
            {"E": "210 MPa"},
            'allowable_tension: found "160 N/mm2"; expected at most E/10. Is the unit right?',
        ),
        (
            {"E": "210 kPa"},
            'E: found "210 kPa"; expected a modulus of elasticity, 0.1 to 1000 GPa. '
            "Is the unit right?",
        ),
        (
            {"density": "-2 kg/m3"},
            'density: found "-2 kg/m3"; expected a density above zero.',
        ),
    ],
)
def test_a_bad_setting_is_refused_by_name(change, message):
    """The message names key, value found, what belongs there, and the nearest key."""
    with pytest.raises(SettingsError) as caught:
        make_elastic(None, SETTINGS | change)
    assert str(caught.value) == message


@pytest.mark.parametrize("key", sorted(SETTINGS))
def test_every_setting_must_be_given(key):
    """Nothing is assumed about a material that no code describes."""
    with pytest.raises(SettingsError) as caught:
        make_elastic(None, {k: v for k, v in SETTINGS.items() if k != key})
    assert caught.value.key == key
    assert caught.value.found == "nothing"


def test_euler_stress_at_no_length_is_infinite():
    """A member fully held cannot buckle."""
    assert list(euler_stress(1.0, np.array([0.0, math.pi]))) == [math.inf, 1.0]


lengths = st.floats(0.05, 30.0)


@given(l_in=lengths, l_out=lengths, net=st.floats(0.1, 1.0), upright=st.booleans())
def test_working_ends_at_the_table(catalogue_of, members_of, l_in, l_out, net, upright):
    """The last worked line is the resistance of the table, and longer never means stronger."""
    standard = make_elastic(None, SETTINGS)
    catalogue = catalogue_of(BAR, FLAT, ANGLE)
    members = members_of(
        length=[1.0, 1.0],
        in_plane=[l_in, 1.1 * l_in],
        out_of_plane=[l_out, 1.1 * l_out],
        net_factor=net,
        depth_in_plane=upright,
        max_slenderness_compression=200.0,
    )
    table = standard.resistances(catalogue, members, DURATIONS)
    assert (table.compression[1] <= table.compression[0]).all()
    for section in range(3):
        for sense, values in (("tension", table.tension), ("compression", table.compression)):
            lines = standard.working(catalogue, section, members, 0, "short", sense)
            assert lines[-1].value == values[0, section, 1]
            assert lines[-1].unit == "N"
            assert all(line.symbol and line.clause and line.expression for line in lines)
