"""EN 1993-1-1 as a whole: tables, worked lines, settings, and what must hold for any member."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from sizing.standards.contract import SettingsError
from sizing.standards.en1993 import make_en1993

SHORT = ("short",)
EXACT = 1e-12  # the same closed formula in another order of operations


def square(side, t, product="EN 10210-2"):
    """A square hollow section with sharp corners (invented), dimensions in m."""
    inner = side - 2.0 * t
    return {
        "family": "SHS",
        "product": product,
        "area": side**2 - inner**2,
        "i_major": (side**4 - inner**4) / 12.0,
        "depth": side,
        "width": side,
        "thickness": t,
    }


def tube(d, t, product="EN 10210-2"):
    """A circular hollow section, dimensions in m."""
    inner = d - 2.0 * t
    return {
        "family": "CHS",
        "product": product,
        "area": math.pi / 4.0 * (d**2 - inner**2),
        "i_major": math.pi / 64.0 * (d**4 - inner**4),
        "depth": d,
        "thickness": t,
    }


# L100x100x10 (EN 10056-1), IPE 330 (rolled I), a flat, and an invented T
ANGLE = {
    "family": "angle",
    "area": 19.155e-4,
    "i_major": 176.676e-8,
    "i_least": 73.005e-8,
    "depth": 0.1,
    "width": 0.1,
    "thickness": 0.01,
}
IPE_330 = {
    "family": "I",
    "area": 62.6e-4,
    "i_major": 11770e-8,
    "i_minor": 788e-8,
    "depth": 0.33,
    "width": 0.16,
    "thickness": 0.0075,
    "flange": 0.0115,
    "root_radius": 0.018,
}
FLAT = {
    "family": "rectangle",
    "product": "EN 10058",
    "area": 1e-3,
    "i_major": 8.3333e-7,
    "i_minor": 8.3333e-9,
    "depth": 0.1,
    "width": 0.01,
}
TEE = {"family": "other", "area": 1e-3, "i_major": 1e-6, "thickness": 0.008}
ROWS = (square(0.1, 0.005), square(0.2, 0.003), tube(0.1143, 0.005), ANGLE, IPE_330, FLAT, TEE)
SETTINGS = (
    {},
    {"class_4": "effective width", "gamma_M1": 1.1, "gamma_M0": 1.05},
    {"grade_table": "product standards", "angle_bolts": 2, "bolt_hole": "22 mm"}
    | {"bolt_pitch": "70 mm"},
    {"buckling_lengths": "BB.1", "chords": ["chord"], "webs": ["web"], "web_ends": "welded"},
    {"angle_bolts": 1, "bolt_hole": "18 mm", "edge_distance": "30 mm", "fy": "300 MPa"},
)


def compression(standard, catalogue, members):
    return standard.resistances(catalogue, members, SHORT).compression[..., 0]


@pytest.mark.parametrize("product", ["EN 10210-2", "EN 10219-2"])
def test_square_sections_do_not_know_their_axes(catalogue_of, members_of, product):
    """Swapping the buckling lengths of a square section changes nothing."""
    standard = make_en1993("S355", {})
    catalogue = catalogue_of(square(0.1, 0.005, product))
    first = compression(standard, catalogue, members_of(in_plane=2.0, out_of_plane=3.5))
    second = compression(standard, catalogue, members_of(in_plane=3.5, out_of_plane=2.0))
    np.testing.assert_array_equal(first, second)


def test_hot_finished_beats_cold_formed(catalogue_of, members_of):
    """Curve a lies above curve c."""
    catalogue = catalogue_of(square(0.1, 0.005), square(0.1, 0.005, "EN 10219-2"))
    found = compression(make_en1993("S355", {}), catalogue, members_of(length=3.0))[0]
    assert found[0] > 1.1 * found[1]


def test_s460_takes_curve_a0(catalogue_of, members_of):
    """S460 hot finished buckles by a0 (Table 6.2)."""
    catalogue, members = catalogue_of(square(0.1, 0.005)), members_of(length=3.0)
    lines = make_en1993("S460NH", {}).working(catalogue, 0, members, 0, "short", "compression")
    assert next(line.value for line in lines if line.symbol == "α_in") == 0.13


def test_the_section_turned_on_its_side(catalogue_of, members_of):
    """depth_in_plane puts in-plane buckling on the major axis; turning swaps the axes."""
    standard = make_en1993("S235", {})
    catalogue = catalogue_of(IPE_330)
    upright = members_of(in_plane=8.5, out_of_plane=1.9)
    flat = members_of(in_plane=1.9, out_of_plane=8.5, depth_in_plane=False)
    table = standard.resistances(catalogue, upright, SHORT)
    assert table.compression == standard.resistances(catalogue, flat, SHORT).compression
    assert table.slenderness_in[0, 0] == pytest.approx(8.5 / math.sqrt(11770e-8 / 62.6e-4))


def test_squash_load_and_euler_are_the_ends(catalogue_of, members_of):
    """No length: A fy; great length: π² E I / L²."""
    standard = make_en1993("S235", {})
    section = tube(0.1143, 0.005)
    members = members_of(length=[0.0, 400.0])
    found = compression(standard, catalogue_of(section), members)[:, 0]
    assert found[0] == pytest.approx(section["area"] * 235e6, rel=EXACT)
    euler = math.pi**2 * 210e9 * section["i_major"] / 400.0**2
    assert found[1] == pytest.approx(euler, rel=0.01)


def test_angles_buckle_about_v_v_over_the_greater_length(catalogue_of, members_of):
    """Without a preset v-v with the greater length governs, curve b."""
    standard = make_en1993("S235", {})
    catalogue = catalogue_of(ANGLE)
    table = standard.resistances(catalogue, members_of(in_plane=1.5, out_of_plane=2.5), SHORT)
    swapped = standard.resistances(catalogue, members_of(in_plane=2.5, out_of_plane=1.5), SHORT)
    assert table.compression == swapped.compression
    assert table.clauses[table.compression_clause[0, 0, 0]] == "6.3.1 buckling about v-v"
    assert table.slenderness_out[0, 0] == pytest.approx(2.5 / catalogue.r_least[0])


def test_net_section_counts_at_holes_only(catalogue_of, members_of):
    """(6.6) without holes, the lesser of (6.6) and 0.9 A_net fu / γM2 (6.7) with them."""
    standard = make_en1993("S460", {})
    area = 19.155e-4
    members = members_of(length=[1.0, 1.0, 1.0], net_factor=[1.0, 0.99, 0.8])
    table = standard.resistances(catalogue_of(ANGLE), members, SHORT)
    expected = [
        area * 460e6,
        0.9 * 0.99 * area * 540e6 / 1.25,
        0.9 * 0.8 * area * 540e6 / 1.25,
    ]
    np.testing.assert_allclose(table.tension[:, 0, 0], expected, rtol=EXACT)
    named = [table.clauses[k] for k in table.tension_clause[:, 0, 0]]
    assert named[0] == "6.2.3(2)a yield of the gross section"
    assert named[1] == "6.2.3(2)b rupture of the net section"


def test_class_4_is_left_out_or_takes_effective_widths(catalogue_of, members_of):
    """Left out with its reason by default; A_eff by setting; circular sections always left out."""
    catalogue = catalogue_of(square(0.2, 0.003), tube(0.4064, 0.004))
    members = members_of(length=2.0)
    plain = make_en1993("S355", {}).resistances(catalogue, members, SHORT)
    assert (plain.compression == 0.0).all()
    assert plain.usable.all()
    assert (plain.tension > 0.0).all()
    assert plain.reasons[plain.notes[0, 0]] == (
        "class 4: (h − 3t)/t = 63.67 exceeds 42ε = 34.17 (Table 5.2);"
        ' set class_4 = "effective width" to use it'
    )
    reduced = make_en1993("S355", {"class_4": "effective width"})
    table = reduced.resistances(catalogue, members, SHORT)
    assert 0.0 < table.compression[0, 0, 0] < 0.75 * 355e6 * catalogue.area[0]
    assert table.compression[0, 1, 0] == 0.0
    assert "EN 1993-1-6" in table.reasons[table.notes[0, 1]]


@pytest.mark.parametrize(
    ("row", "reason"),
    [
        (square(0.1, 0.005, ""), "the catalogue does not say whether the hollow section"),
        (square(0.1, 0.005, "ASTM A500"), "ASTM A500 is not a product of the EN grade tables"),
        (square(0.5, 0.09), "thickness 90 mm is beyond 80 mm"),
        ({**ANGLE, "thickness": math.nan}, "the catalogue gives no thickness"),
        ({**FLAT, "product": "EN 14080"}, "a solid rectangle, product EN 14080, counts as timber"),
        ({**FLAT, "product": ""}, "a solid rectangle, no product named, counts as timber"),
    ],
)
def test_rows_without_a_strength_are_not_usable(catalogue_of, members_of, row, reason):
    """A row that the grade table cannot serve is barred from tension and compression."""
    table = make_en1993("S355", {}).resistances(catalogue_of(row), members_of(), SHORT)
    assert not table.usable[0, 0]
    assert table.tension[0, 0, 0] == table.compression[0, 0, 0] == 0.0
    assert table.reasons[table.notes[0, 0]].startswith(reason)
    assert table.clauses[table.tension_clause[0, 0, 0]] == "not checkable"


def test_own_strengths_serve_any_product(catalogue_of, members_of):
    """fy and fu as set need no grade and no product table."""
    own = {"fy": "46 ksi", "fu": "58 ksi"}
    table = make_en1993(None, own).resistances(
        catalogue_of(square(0.1, 0.005, "ASTM A500")), members_of(), SHORT
    )
    assert table.usable[0, 0]
    assert table.tension[0, 0, 0] == pytest.approx(1.9e-3 * 46 * 6.894757e6, rel=1e-6)


def test_hollow_sections_setting_decides_where_the_catalogue_is_silent(catalogue_of, members_of):
    """hollow_sections names the make of rows without a product."""
    catalogue, members = catalogue_of(square(0.1, 0.005, "")), members_of(length=3.0)
    hot = make_en1993("S355", {"hollow_sections": "hot finished"})
    cold = make_en1993("S355", {"hollow_sections": "cold formed"})
    assert (compression(hot, catalogue, members) > compression(cold, catalogue, members)).all()


def test_preset_lengths_reach_the_resistance(catalogue_of, members_of):
    """BB.1 with welded webs gives what 0.75 L gives; other groups keep their lengths."""
    preset = make_en1993(
        "S355", {"buckling_lengths": "BB.1", "webs": ["diag*"], "web_ends": "welded"}
    )
    plain = make_en1993("S355", {})
    catalogue = catalogue_of(tube(0.1143, 0.005))
    roles = ("diagonals", "posts")
    with_preset = preset.resistances(catalogue, members_of(length=[4.0, 4.0], role=roles), SHORT)
    reduced = plain.resistances(catalogue, members_of(length=[3.0, 4.0], role=roles), SHORT)
    np.testing.assert_allclose(with_preset.compression, reduced.compression, rtol=EXACT)
    np.testing.assert_allclose(with_preset.slenderness_in, reduced.slenderness_in, rtol=EXACT)


def test_a_preset_never_reduces_a_length_twice(catalogue_of, members_of):
    """Factors of the brief below 1 do not multiply those of BB.1; longer lengths stay longer."""
    standard = make_en1993("S355", {"buckling_lengths": "BB.1", "chords": ["chord"]})
    members = members_of(length=2.0, in_plane=1.8, out_of_plane=6.0, role="chord")
    lines = standard.working(
        catalogue_of(square(0.1, 0.005)), 0, members, 0, "short", "compression"
    )
    found = {line.symbol: line.value for line in lines}
    assert found["L_in"] == pytest.approx(0.9 * 2.0)
    assert found["L_out"] == pytest.approx(0.9 * 6.0)


def test_web_angles_never_take_less_than_their_system_length(catalogue_of, members_of):
    """BB.1.2 starts from the system length, however short the given buckling lengths are."""
    standard = make_en1993("S235", {"buckling_lengths": "BB.1", "webs": "web"})
    full = members_of(length=2.0, role="web")
    cut = members_of(length=2.0, in_plane=1.0, out_of_plane=1.5, role="web")
    catalogue = catalogue_of(ANGLE)
    assert compression(standard, catalogue, full) == compression(standard, catalogue, cut)


def test_an_angle_by_one_leg_in_tension(catalogue_of, members_of):
    """β2 A_net fu / γM2 with one hole off the leg (EN 1993-1-8, 3.10.3)."""
    standard = make_en1993(
        "S275", {"angle_bolts": 2, "bolt_hole": "22 mm", "bolt_pitch": "82.5 mm"}
    )
    table = standard.resistances(catalogue_of(ANGLE), members_of(), SHORT)
    expected = 0.55 * (19.155e-4 - 0.022 * 0.01) * 430e6 / 1.25
    assert table.tension[0, 0, 0] == pytest.approx(expected, rel=1e-9)
    assert "3.10.3" in table.clauses[table.tension_clause[0, 0, 0]]


@pytest.mark.parametrize(
    ("grade", "chosen", "message"),
    [
        (
            "S365",
            {},
            'grade: found "S365"; expected one of S235, S275, S355, S450, S275N, S355N, S420N, '
            "S460N, S275M, S355M, S420M, S460M (table EN 1993-1-1), or any name with fy and fu "
            "set. Did you mean S355?",
        ),
        (
            None,
            {"fy": "355 MPa"},
            "grade: found nothing; expected a grade such as S355, or both fy and fu. Add the "
            "grade to the option.",
        ),
        (
            "S355",
            {"gama_M1": 1.1},
            "gama_M1: found an unknown setting; expected one of EN 1993-1-1's settings: "
            "grade_table, fy, fu, gamma_M0, gamma_M1, gamma_M2, hollow_sections, class_4, "
            "buckling_lengths, chords, webs, web_ends, angle_bolts, bolt_hole, bolt_pitch, "
            'edge_distance. Did you mean "gamma_M1"?',
        ),
        (
            "S355",
            {"gamma_M1": 0.9},
            "gamma_M1: found 0.9; expected a number not below 1 and not above 3.",
        ),
        (
            "S355",
            {"gamma_M0": 10**400},
            "gamma_M0: found a number of more than 300 digits; expected a number not below 1 and"
            " not above 3.",
        ),
        (
            "S355",
            {"fy": "355 GPa"},
            'fy: found "355 GPa"; expected a strength of structural steel, 100 to 2000 N/mm2 '
            "(15 to 290 ksi). Is the unit right?",
        ),
        (
            "S355",
            {"gamma_M1": "1.1"},
            'gamma_M1: found "1.1"; expected a number not below 1 and not above 3.',
        ),
        (
            "S355",
            {"class_4": "efective width"},
            'class_4: found "efective width"; expected one of "leave out", "effective width".'
            ' Did you mean "effective width"?',
        ),
        (
            "S355",
            {"webs": ["web"]},
            "webs: found ['web']; expected no such setting together with buckling_lengths = "
            '"as given". Remove one of the two.',
        ),
        (
            "S355",
            {"fy": "355 MPa", "fu": "300 MPa"},
            'fu: found "300 MPa"; expected an ultimate strength not below fy.',
        ),
        (
            "S355",
            {"angle_bolts": 2, "bolt_hole": "22 mm", "bolt_pitch": "30 mm"},
            "bolt_pitch: found 30 mm; expected at least 2.2 d0 = 48.4 mm (EN 1993-1-8 Table 3.3).",
        ),
    ],
)
def test_bad_settings_are_refused(grade, chosen, message):
    """The whole message names the key, the value, what belongs there, the fix."""
    with pytest.raises(SettingsError) as caught:
        make_en1993(grade, chosen)
    assert str(caught.value) == message


def test_words_for_the_documents():
    """Basis and cautions say what was chosen and what is left out."""
    for chosen in SETTINGS:
        standard = make_en1993("S355", chosen)
        basis = dict(standard.basis())
        assert basis["Steel"] == "S355"
        assert standard.edition == "2005, with AC:2009"
        assert all(key and value for key, value in basis.items())
        assert any("Torsional" in line for line in standard.cautions())
    assert "setting" in dict(make_en1993("S355", SETTINGS[1]).basis())["Partial factor gamma_M1"]
    assert "0.75" not in dict(make_en1993("S355", {}).basis())["Buckling lengths"]


lengths = st.floats(0.05, 25.0)


@settings(max_examples=60)
@given(
    reach=st.tuples(lengths, lengths, st.floats(1.0, 3.0)),
    net=st.floats(0.3, 1.0),
    upright=st.booleans(),
    role=st.sampled_from(["chord", "web"]),
    chosen=st.sampled_from(SETTINGS),
    grade=st.sampled_from(["S235", "S355", "S460NH"]),
)
def test_any_member(catalogue_of, members_of, reach, net, upright, role, chosen, grade):
    """Longer is never stronger, nothing exceeds A fy, working ends at the table, reasons stand."""
    l_in, l_out, factor = reach
    if grade == "S460NH" and chosen.get("grade_table") == "product standards":
        grade = "S355"
    standard = make_en1993(grade, chosen)
    catalogue = catalogue_of(*ROWS)
    members = members_of(
        length=[l_in, factor * l_in, 1.0, 1.0],
        in_plane=[l_in, factor * l_in, 1.0, 1.0],
        out_of_plane=[l_out, factor * l_out, 1.0, 1.0],
        net_factor=net,
        depth_in_plane=upright,
        max_slenderness_compression=180.0,
        max_slenderness_tension=300.0,
        role=(role, role, "chord", "web"),
    )
    table = standard.resistances(catalogue, members, ("permanent", "short"))
    for values in (table.tension, table.compression):
        assert np.isfinite(values).all()
        assert (values >= 0.0).all()
        assert (values <= catalogue.area[:, None] * 460e6 * (1 + EXACT)).all()
    assert (table.compression[1] <= table.compression[0]).all()
    silent = (table.notes == 0) & ((table.compression[..., 0] == 0.0) | ~table.usable)
    assert not silent.any()
    assert all(table.clauses)
    for section in range(len(catalogue)):
        for sense in ("tension", "compression"):
            values = table.tension if sense == "tension" else table.compression
            lines = standard.working(catalogue, section, members, 0, "short", sense)
            assert lines[-1].value == values[0, section, 1]
            assert lines[-1].unit == "N"
            assert all(line.symbol and line.clause and line.expression for line in lines)


@given(scale=st.floats(0.2, 5.0), length=st.floats(0.5, 20.0))
def test_geometric_scaling(catalogue_of, members_of, scale, length):
    """A member scaled in all dimensions resists scale² times as much (steps of fy set aside)."""
    standard = make_en1993("S275", {"fy": "275 MPa", "fu": "410 MPa"})
    catalogue = catalogue_of(square(0.1, 0.005), square(0.1 * scale, 0.005 * scale))
    small = compression(standard, catalogue, members_of(length=length))[0, 0]
    large = compression(standard, catalogue, members_of(length=length * scale))[0, 1]
    assert large == pytest.approx(small * scale**2, rel=1e-9)
