"""AISC 360 as a whole: strengths, worked lines, settings, and what must hold for any member."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from sizing.standards.aisc360 import MODULUS, make_aisc360
from sizing.standards.aisc360_grades import GRADES, KSI, find_grade
from sizing.standards.aisc360_rules import (
    critical_stress,
    effective_width,
    round_share,
    single_angle_slenderness,
)
from sizing.standards.contract import SettingsError

SHORT = ("short",)
INCH = 0.0254
EXACT = 1e-12  # the same closed formula in another order of operations
E7_STEP = 1.001
"""be of E7.1 jumps by 0.09 % where it begins for HSS walls: 1.38 (1 − 0.20 · 1.38) = 0.9991."""


def hss(side, t, product="ASTM A500"):
    """A square HSS with sharp corners (invented), dimensions in inches."""
    inner = side - 2.0 * t
    return {
        "family": "SHS",
        "product": product,
        "area": (side**2 - inner**2) * INCH**2,
        "i_major": (side**4 - inner**4) / 12.0 * INCH**4,
        "depth": side * INCH,
        "width": side * INCH,
        "thickness": t * INCH,
    }


def pipe(d, t, product="ASTM A53"):
    """A round section, dimensions in inches."""
    inner = d - 2.0 * t
    return {
        "family": "CHS",
        "product": product,
        "area": math.pi / 4.0 * (d**2 - inner**2) * INCH**2,
        "i_major": math.pi / 64.0 * (d**4 - inner**4) * INCH**4,
        "depth": d * INCH,
        "thickness": t * INCH,
    }


def angle(leg, t, area, r, rz, other=None):
    """A single angle, dimensions in inches (AISC Manual Table 1-7, from memory)."""
    return {
        "family": "angle",
        "area": area * INCH**2,
        "i_major": area * r**2 * INCH**4,
        "i_minor": area * (r if other is None else 0.45 * r) ** 2 * INCH**4,
        "i_least": area * rz**2 * INCH**4,
        "depth": leg * INCH,
        "width": (other or leg) * INCH,
        "thickness": t * INCH,
    }


L4 = angle(4.0, 0.375, 2.86, 1.23, 0.779)
L3_THIN = angle(4.0, 0.25, 1.93, 1.25, 0.783)
L6X4 = angle(6.0, 0.5, 4.75, 1.91, 0.87, other=4.0)
L7X4 = angle(7.0, 0.5, 5.25, 2.25, 0.87, other=4.0)
W = {
    "family": "I",
    "area": 21.8 * INCH**2,
    "i_major": 795 * INCH**4,
    "i_minor": 134 * INCH**4,
    "depth": 14.2 * INCH,
    "width": 10.1 * INCH,
    "thickness": 0.45 * INCH,
    "flange": 0.785 * INCH,
}
BAR = {
    "family": "rectangle",
    "product": "ASTM A36",
    "area": INCH**2,
    "i_major": INCH**4 / 12,
    "depth": INCH,
}
TEE = {"family": "other", "area": 1e-3, "i_major": 1e-6, "thickness": 0.008}
ROWS = (hss(6, 0.349), hss(8, 0.116), pipe(4.5, 0.221), L4, L3_THIN, L6X4, L7X4, W, BAR, TEE)
OWN = {"Fy": "46 ksi", "Fu": "58 ksi"}
SETTINGS = (
    OWN,
    OWN | {"method": "ASD", "slender_elements": "leave out", "slenderness_advice": "enforce"},
    OWN | {"single_angles": "E5 planar", "webs": ["web"], "shear_lag_factor": 0.8},
    OWN | {"single_angles": "E5 space", "angle_leg": "shorter"},
)


def compression(standard, catalogue, members):
    return standard.resistances(catalogue, members, SHORT).compression[..., 0]


@pytest.mark.parametrize(
    ("name", "known"),
    [
        ("A36", "A36"),
        ("ASTM A36", "A36"),
        ("A500 Gr B", "A500 Gr B"),
        ("A500-C", "A500 Gr C"),
        ("ASTM A500 Grade B", "A500 Gr B"),
        ("A53", "A53 Gr B"),
        ("A572-50", "A572 Gr 50"),
        ("a992", "A992"),
    ],
)
def test_grade_names(name, known):
    """Usual spellings of a grade find it."""
    assert find_grade(name).name == known


@pytest.mark.parametrize("name", ["A500", "A572", "S355", "36", ""])
def test_unclear_grade_names_are_not_guessed(name):
    """A specification with several grades needs its grade."""
    assert find_grade(name) is None


@pytest.mark.parametrize(
    ("grade", "row", "Fy", "Fu"),
    [
        # AISC Manual, 15th ed., Tables 2-4 and 2-5 (from memory)
        ("A36", L4, 36, 58),
        ("A36", {**L4, "product": "ASTM A6"}, 36, 58),
        ("A500 Gr B", hss(6, 0.349), 46, 58),
        ("A500 Gr B", pipe(4.5, 0.221, "ASTM A500"), 42, 58),
        ("A500 Gr C", hss(6, 0.349), 50, 62),
        ("A53 Gr B", pipe(4.5, 0.221), 35, 60),
        ("A992", W, 50, 65),
        ("A572 Gr 50", L4, 50, 65),
        ("A1085", hss(6, 0.375, "ASTM A1085"), 50, 65),
    ],
)
def test_tension_by_grade_and_form(catalogue_of, members_of, grade, row, Fy, Fu):
    """D2: the lesser of 0.90 Fy Ag and 0.75 Fu Ae."""
    members = members_of(length=[1.0, 1.0], net_factor=[1.0, 0.7])
    table = make_aisc360(grade, {}).resistances(catalogue_of(row), members, SHORT)
    area = row["area"]
    expected = [min(0.9 * Fy, 0.75 * Fu) * KSI * area, 0.75 * Fu * 0.7 * area * KSI]
    np.testing.assert_allclose(table.tension[:, 0, 0], expected, rtol=EXACT)


def test_asd_is_strength_over_omega(catalogue_of, members_of):
    """ASD/LRFD = 1/(1.67 · 0.90) for yielding and compression, 1/(2.00 · 0.75) for rupture."""
    members = members_of(length=[3.0, 3.0], net_factor=[1.0, 0.6])
    catalogue = catalogue_of(W)
    lrfd = make_aisc360("A992", {}).resistances(catalogue, members, SHORT)
    asd = make_aisc360("A992", {"method": "ASD"}).resistances(catalogue, members, SHORT)
    ratio = (asd.tension / lrfd.tension)[:, 0, 0]
    np.testing.assert_allclose(ratio, [1 / (1.67 * 0.9), 1 / 1.5], rtol=EXACT)
    np.testing.assert_allclose(asd.compression / lrfd.compression, 1 / (1.67 * 0.9), rtol=EXACT)


@pytest.mark.parametrize(
    ("space", "ratio", "expected"),
    [
        # AISC 360 E5 as given in Structural Steel Designer's Handbook, p. 5.15
        (False, 80.0, 132.0),
        (False, 60.0, 117.0),
        (False, 134.4, 200.0),
        (True, 75.0, 120.0),
        (True, 50.0, 100.0),
        (True, 155.0, 200.0),
    ],
)
def test_single_angle_rule(space, ratio, expected):
    """E5(a) and (b): both lines meet at 80 and 75, and reach 200 at 134.4 and 155."""
    one = np.array(1.0)
    found = single_angle_slenderness(np.array(ratio), one, one, space=space, shorter=False)
    assert float(found) == pytest.approx(expected)


@pytest.mark.parametrize(("space", "factor", "floor"), [(False, 4.0, 0.95), (True, 6.0, 0.82)])
def test_unequal_angles_by_the_shorter_leg(space, factor, floor):
    """E5: + 4 or 6 [(bl/bs)² − 1], not below 0.95 or 0.82 L/rz."""
    ratio, legs = np.array(60.0), np.array(1.5)
    base = 60.0 + 0.8 * 60.0 if space else 117.0

    def found(least):
        return float(
            single_angle_slenderness(ratio, legs, np.array(least), space=space, shorter=True)
        )

    assert found(100.0) == pytest.approx(base + factor * 1.25)
    assert found(190.0) == pytest.approx(floor * 190.0)


def test_angles_by_e5_take_the_right_radius(catalogue_of, members_of):
    """Connected by the longer leg: the axis parallel to it is the minor geometric one."""
    row = L6X4
    members = members_of(length=1.5)
    for leg, radius in (("longer", "i_minor"), ("shorter", "i_major")):
        standard = make_aisc360("A36", {"single_angles": "E5 planar", "angle_leg": leg})
        lines = standard.working(catalogue_of(row), 0, members, 0, "short", "compression")
        ratio = next(line.value for line in lines if line.symbol == "L/ra")
        assert ratio == pytest.approx(1.5 / math.sqrt(row[radius] / row["area"]))


def test_e5_gives_out_with_a_reason(catalogue_of, members_of):
    """Lc/r above 200 and leg ratios from 1.7 are left out of E5; other groups keep E3."""
    standard = make_aisc360("A36", {"single_angles": "E5 planar", "webs": ["web*"]})
    members = members_of(length=[4.5, 1.0, 1.0], role=("webs", "webs", "chord"))
    table = standard.resistances(catalogue_of(L4, L7X4), members, SHORT)
    assert table.compression[0, 0, 0] == 0.0
    assert table.reasons[table.notes[0, 0]].startswith("E5 ends at Lc/r = 200")
    assert table.compression[1, 1, 0] == 0.0
    assert table.reasons[table.notes[1, 1]].startswith("E5 covers angles with a leg ratio below")
    assert table.compression[1, 0, 0] > 0.0
    assert table.clauses[table.compression_clause[1, 0, 0]].startswith("E5")
    assert table.clauses[table.compression_clause[2, 0, 0]] == "E3 buckling about the least axis"
    assert (table.compression[2] > 0.0).all()


@pytest.mark.parametrize(
    ("Fy", "hss_limit", "round_limit", "leg_limit"),
    [(46.0, 35.15, 69.3, 11.30), (50.0, 33.72, 63.8, 10.84), (36.0, 39.7, 88.6, 12.77)],
)
def test_wall_limits(catalogue_of, members_of, Fy, hss_limit, round_limit, leg_limit):
    """Table B4.1a (from memory): rows at the limit keep Ag, rows beyond fall under E7."""
    standard = make_aisc360(
        None, {"Fy": f"{Fy} ksi", "Fu": "70 ksi", "slender_elements": "leave out"}
    )
    for make in (
        lambda k: hss((hss_limit * k + 3.0) * 0.25, 0.25),
        lambda k: pipe(round_limit * k * 0.25, 0.25),
        lambda k: angle(leg_limit * k * 0.25, 0.25, 1.5, 0.9, 0.6),
    ):
        catalogue = catalogue_of(make(0.999), make(1.001))
        table = standard.resistances(catalogue, members_of(length=1.0), SHORT)
        assert table.compression[0, 0, 0] > 0.0
        assert table.compression[0, 1, 0] == 0.0
        assert table.reasons[table.notes[0, 1]].startswith("slender ")


@pytest.mark.parametrize(
    ("web", "flange", "slender"),
    [(35.8, 13.4, ""), (35.95, 13.4, "h/tw"), (35.8, 13.6, "bf/(2 tf)")],
)
def test_i_shape_limits(catalogue_of, members_of, web, flange, slender):
    """50 ksi: h/tw 1.49 √(E/Fy) = 35.88, bf/(2 tf) 0.56 √(E/Fy) = 13.49 (B4.1a, from memory)."""
    t = 0.25 * INCH
    row = W | {
        "thickness": t,
        "flange": t,
        "width": 2.0 * flange * t,
        "depth": web * t + 2.0 * t,
        "area": (web + 4.0 * flange) * t**2,
    }
    strict = make_aisc360("A992", {"slender_elements": "leave out"})
    table = strict.resistances(catalogue_of(row), members_of(length=0.5), SHORT)
    assert (table.compression[0, 0, 0] > 0.0) is not bool(slender)
    assert slender in table.reasons[table.notes[0, 0]]


def test_i_shapes_by_e7(catalogue_of, members_of):
    """E7-3 by hand: web c1 0.18, c2 1.31; half flanges c1 0.22, c2 1.49 (Table E7.1)."""
    t = 0.25
    row = W | {
        "thickness": t * INCH,
        "flange": t * INCH,
        "width": 40 * t * INCH,
        "depth": 82 * t * INCH,
        "area": 160 * t**2 * INCH**2,
    }
    table = make_aisc360("A992", {}).resistances(catalogue_of(row), members_of(length=0.0), SHORT)

    def lost(ratio, limit, c1, c2):
        root = c2 * limit * math.sqrt(29000.0 / 50.0) / ratio
        return ratio * t**2 * (1.0 - (1.0 - c1 * root) * root)

    area = 160 * t**2 - lost(80.0, 1.49, 0.18, 1.31) - 4.0 * lost(20.0, 0.56, 0.22, 1.49)
    expected = 0.9 * 50.0 * area * KSI * INCH**2
    assert table.compression[0, 0, 0] == pytest.approx(expected, rel=1e-9)


def test_effective_width_by_hand():
    """E7-3 for an HSS wall, λ = 60, 46 ksi, Fcr = 40 ksi: worked with c1 0.20, c2 1.38."""
    limit = 1.40 * math.sqrt(29000.0 / 46.0)
    Fel = (1.38 * limit / 60.0) ** 2 * 46.0
    root = math.sqrt(Fel / 40.0)
    found = effective_width(
        np.array(7.5),
        np.array(60.0),
        np.array(limit),
        (np.array(0.20), np.array(1.38)),
        np.array(46.0),
        np.array(40.0),
    )
    assert float(found) == pytest.approx(7.5 * (1.0 - 0.2 * root) * root, rel=EXACT)
    assert float(found) < 7.5


def test_low_stress_needs_no_reduction():
    """λ ≤ λr √(Fy/Fcr): a wall that buckles as a whole first keeps its full width."""
    arguments = (np.array(7.5), np.array(60.0), np.array(35.15))
    factors = (np.array(0.20), np.array(1.38))
    assert effective_width(*arguments, factors, np.array(46.0), np.array(10.0)) == 7.5


def test_round_walls():
    """E7.2: 1 up to 0.11 E/Fy and just beyond (1.012 capped), then 0.038 E/(Fy D/t) + 2/3."""
    unit = 29000.0 / 46.0
    assert round_share(29000.0, 46.0, 0.11 * unit) == 1.0
    assert round_share(29000.0, 46.0, 0.112 * unit) == 1.0
    assert round_share(29000.0, 46.0, 0.2 * unit) == pytest.approx(0.19 + 2.0 / 3.0)


def test_slender_sections_by_e7(catalogue_of, members_of):
    """E7 lowers the strength of a slender HSS, says so in the clause, and can be refused."""
    catalogue, members = catalogue_of(hss(8, 0.116)), members_of(length=2.0)
    table = make_aisc360("A500 Gr B", {}).resistances(catalogue, members, SHORT)
    full = (
        0.9
        * KSI
        * catalogue.area[0]
        * float(critical_stress(29000.0, np.array(46.0), table.slenderness_in[0])[0])
    )
    assert 0.5 * full < table.compression[0, 0, 0] < 0.9 * full
    named = table.clauses[table.compression_clause[0, 0, 0]]
    assert named == "E7 slender elements, E3 buckling in plane"


@pytest.mark.parametrize(
    ("row", "reason", "usable"),
    [
        (pipe(40.0, 0.125), "D/t = 320.0 exceeds 0.45 E/Fy = 283.7", True),
        (angle(6.0, 0.25, 2.9, 1.9, 1.2), "b/t = 24.0 exceeds 0.71 √(E/Fy) = 17.8", True),
        (TEE, "Table B4.1a limits for a section of family other are not covered", True),
        ({**hss(6, 0.349), "thickness": math.nan}, "the catalogue gives no wall thickness", True),
        ({**hss(6, 0.349), "i_major": math.nan}, "the catalogue gives no second moment", True),
    ],
)
def test_rows_left_out_of_compression(catalogue_of, members_of, row, reason, usable):
    """What the standard cannot check has no compression strength, and a reason."""
    table = make_aisc360(None, OWN).resistances(catalogue_of(row), members_of(), SHORT)
    assert table.compression[0, 0, 0] == 0.0
    assert table.tension[0, 0, 0] > 0.0
    assert table.usable[0, 0] == usable
    assert table.reasons[table.notes[0, 0]].startswith(reason)


@pytest.mark.parametrize(
    ("grade", "row", "reason"),
    [
        ("A992", hss(6, 0.349, ""), "grade A992 is not made as rectangular HSS; set Fy and Fu"),
        ("A992", hss(6, 0.349), "the catalogue row is ASTM A500, the grade A992; set Fy and Fu"),
        ("A53", hss(6, 0.349, ""), "grade A53 Gr B is not made as rectangular HSS"),
        ("A500 Gr B", hss(6, 0.3, "EN 10210-2"), "EN 10210-2 is not a product of the ASTM"),
        ("A500 Gr B", pipe(4.5, 0.221), "the catalogue row is ASTM A53, the grade A500 Gr B"),
        ("A36", {**BAR, "product": "NDS"}, "a solid rectangle, product NDS, counts as timber"),
    ],
)
def test_rows_that_the_grade_does_not_cover(catalogue_of, members_of, grade, row, reason):
    """A grade that is not made in the row's form bars the row altogether."""
    table = make_aisc360(grade, {}).resistances(catalogue_of(row), members_of(), SHORT)
    assert not table.usable[0, 0]
    assert table.tension[0, 0, 0] == table.compression[0, 0, 0] == 0.0
    assert table.reasons[table.notes[0, 0]].startswith(reason)


def test_slenderness_advice(catalogue_of, members_of):
    """200 and 300 are mentioned unless enforced (user notes of E2 and D1)."""
    catalogue = catalogue_of(hss(2, 0.2))
    members = members_of(length=[3.5, 4.5, 6.0])
    plain = make_aisc360("A500 Gr B", {}).resistances(catalogue, members, SHORT)
    strict = make_aisc360("A500 Gr B", {"slenderness_advice": "enforce"}).resistances(
        catalogue, members, SHORT
    )
    radius = math.sqrt((2.0**2 + 1.6**2) / 12.0) * INCH
    np.testing.assert_allclose(plain.slenderness_in[:, 0], np.array([3.5, 4.5, 6.0]) / radius)
    assert (plain.compression > 0.0).all()
    assert list(strict.compression[:, 0, 0] > 0.0) == [True, False, False]
    assert list(strict.usable[:, 0]) == [True, True, False]


def test_ends_of_the_column_curve(catalogue_of, members_of):
    """No length: 0.9 Fy A; great length: 0.9 · 0.877 Euler."""
    row = hss(6, 0.349)
    found = compression(
        make_aisc360("A500 Gr B", {}), catalogue_of(row), members_of(length=[0.0, 50.0])
    )
    assert found[0, 0] == pytest.approx(0.9 * 46 * KSI * row["area"], rel=EXACT)
    euler = math.pi**2 * MODULUS * row["i_major"] / 50.0**2
    assert found[1, 0] == pytest.approx(0.9 * 0.877 * euler, rel=1e-9)


def test_the_section_turned_on_its_side(catalogue_of, members_of):
    """depth_in_plane puts in-plane buckling on the major axis; turning swaps the axes."""
    standard, catalogue = make_aisc360("A992", {}), catalogue_of(W)
    upright = compression(standard, catalogue, members_of(in_plane=9.0, out_of_plane=3.0))
    flat = compression(
        standard, catalogue, members_of(in_plane=3.0, out_of_plane=9.0, depth_in_plane=False)
    )
    assert upright == flat


@pytest.mark.parametrize(
    ("grade", "chosen", "message"),
    [
        (
            "A500",
            {},
            'grade: found "A500"; expected one of A36, A53 Gr B, A500 Gr B, A500 Gr C, A501 Gr B, '
            "A529 Gr 50, A572 Gr 50, A572 Gr 60, A572 Gr 65, A588, A847, A913 Gr 65, A992, A1085,"
            " or any name with Fy and Fu set. Did you mean A500 Gr C?",
        ),
        (
            "A992",
            {"metod": "ASD"},
            "metod: found an unknown setting; expected one of AISC 360's settings: method, "
            "edition, Fy, Fu, shear_lag_factor, slender_elements, single_angles, angle_leg, webs,"
            ' slenderness_advice. Did you mean "method"?',
        ),
        (
            "A992",
            {"method": "LFRD"},
            'method: found "LFRD"; expected one of "LRFD", "ASD". Did you mean "LRFD"?',
        ),
        (
            "A992",
            {"shear_lag_factor": 1.2},
            "shear_lag_factor: found 1.2; expected a number above 0 and not above 1.",
        ),
        (
            "A36",
            {"angle_leg": "shorter"},
            'angle_leg: found "shorter"; expected no such setting together with '
            'single_angles = "E3". Remove one of the two.',
        ),
        (
            "A36",
            {"Fy": "50 ksi", "Fu": "40 ksi"},
            'Fu: found "40 ksi"; expected a tensile strength not below Fy.',
        ),
    ],
)
def test_bad_settings_are_refused(grade, chosen, message):
    """The whole message names the key, the value, what belongs there, the fix."""
    with pytest.raises(SettingsError) as caught:
        make_aisc360(grade, chosen)
    assert str(caught.value) == message


def test_the_edition_may_be_a_number():
    """TOML writes an edition as a number or as text."""
    assert make_aisc360("A36", {"edition": 2016}).edition == "2016, LRFD"
    assert make_aisc360("A36", {"edition": "2016"}).edition == "2016, LRFD"
    with pytest.raises(SettingsError) as caught:
        make_aisc360("A36", {"edition": 2010})
    assert str(caught.value) == (
        'edition: found 2010; expected one of "2022", "2016". Did you mean "2016"?'
    )


def test_words_for_the_documents():
    """Basis and cautions say what was chosen and what is left out."""
    for chosen in SETTINGS:
        standard = make_aisc360("A36", chosen)
        basis = dict(standard.basis())
        assert basis["Method"] == f"{standard.options.method}, edition 2022"
        assert standard.edition == f"2022, {standard.options.method}"
        assert all(key and value for key, value in basis.items())
        assert any("Torsional" in line for line in standard.cautions())
    assert "E5(b)" in dict(make_aisc360("A36", SETTINGS[3]).basis())["Single angles"]
    assert all(make_aisc360(grade.name, {}).material.name == grade.name for grade in GRADES)


lengths = st.floats(0.05, 25.0)


@settings(max_examples=60)
@given(
    reach=st.tuples(lengths, lengths, st.floats(1.0, 3.0)),
    net=st.floats(0.3, 1.0),
    upright=st.booleans(),
    role=st.sampled_from(["chord", "web"]),
    chosen=st.sampled_from(SETTINGS),
)
def test_any_member(catalogue_of, members_of, reach, net, upright, role, chosen):
    """Longer is never stronger, nothing exceeds Fy A, working ends at the table, reasons stand."""
    l_in, l_out, factor = reach
    standard = make_aisc360(None, chosen)
    catalogue = catalogue_of(*ROWS)
    members = members_of(
        length=[l_in, factor * l_in, 1.0],
        in_plane=[l_in, factor * l_in, 1.0],
        out_of_plane=[l_out, factor * l_out, 1.0],
        net_factor=net,
        depth_in_plane=upright,
        max_slenderness_compression=180.0,
        max_slenderness_tension=300.0,
        role=(role, role, "web"),
    )
    table = standard.resistances(catalogue, members, ("permanent", "short"))
    for values in (table.tension, table.compression):
        assert np.isfinite(values).all()
        assert (values >= 0.0).all()
        assert (values <= 0.9 * catalogue.area[:, None] * 46 * KSI * (1 + EXACT)).all()
    assert (table.compression[1] <= table.compression[0] * E7_STEP).all()
    silent = (table.notes == 0) & ((table.compression[..., 0] == 0.0) | ~table.usable)
    assert not silent.any()
    for section in range(len(catalogue)):
        for sense in ("tension", "compression"):
            values = table.tension if sense == "tension" else table.compression
            lines = standard.working(catalogue, section, members, 0, "short", sense)
            assert lines[-1].value == values[0, section, 1]
            assert lines[-1].unit == "N"
            assert all(line.symbol and line.clause and line.expression for line in lines)


def test_web_groups_must_exist(catalogue_of, members_of):
    """A pattern in webs that fits no group is refused when the groups are known."""
    standard = make_aisc360("A36", {"single_angles": "E5 planar", "webs": ["diagnals"]})
    with pytest.raises(SettingsError) as caught:
        standard.resistances(catalogue_of(L4), members_of(role="diagonals"), SHORT)
    assert str(caught.value) == (
        'webs: found "diagnals", which fits no group; expected one of diagonals.'
        ' Did you mean "diagonals"?'
    )
