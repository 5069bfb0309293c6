"""NDS 2018: properties that must hold for every section, member and grade."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from sizing.brief.combination_rules_durations import LONGEST_FIRST
from sizing.standards.contract import SettingsError
from sizing.standards.nds import make_nds
from sizing.standards.nds_grades import PSI, find_grade, nds_grades
from sizing.standards.nds_strength import C_P, INCH, K_F, PHI, F_cE

LENGTHS = st.floats(0.05, 6.0)
DURATIONS = st.sampled_from(LONGEST_FIRST)
METHODS = st.sampled_from(["ASD", "LRFD"])
DEPTHS = st.floats(0.05, 0.35)
ROUNDING = 1e-12
TWO_BY_FOUR = (1.5 * INCH, 3.5 * INCH)
TWO_BY_SIX = (1.5 * INCH, 5.5 * INCH)
POUND = 4.4482216152605
OWN = {
    "Ft": "1100 psi",
    "Fc": "1600 psi",
    "E": "1800000 psi",
    "Emin": "950000 psi",
    "specific_gravity": 0.5,
    "product": "glulam",
}


def two_ply(catalogue_of, b=1.5 * INCH, h=5.5 * INCH):
    return catalogue_of(
        {
            "family": "rectangle", "product": "NDS built-up", "width": 2 * b, "depth": h,
            "area": 2 * b * h, "i_major": 2 * b * h**3 / 12, "i_minor": 2 * h * b**3 / 12,
        }
    )  # fmt: skip


@given(
    depth=DEPTHS,
    lengths=st.tuples(LENGTHS, LENGTHS),
    duration=DURATIONS,
    method=METHODS,
    wet=st.booleans(),
    net=st.floats(0.2, 1.0),
)
def test_last_worked_line_is_the_table(
    rectangles, members_of, *, depth, lengths, duration, method, wet, net
):
    """The last worked line of either sense equals the resistance of the table, zeros included."""
    standard = make_nds("SPF No.3", {"method": method, "wet_service": wet})
    catalogue = rectangles(TWO_BY_FOUR, (0.038, depth))
    member = members_of(
        length=[1.0, 1.0],
        in_plane=np.array([1.0, lengths[0]]),
        out_of_plane=np.array([1.0, lengths[1]]),
        net_factor=net,
    )
    table = standard.resistances(catalogue, member, ("permanent", duration))
    for sense, values in (("tension", table.tension), ("compression", table.compression)):
        steps = standard.working(catalogue, 1, member, 1, duration, sense)
        assert steps[-1].value == pytest.approx(values[1, 1, 1], rel=ROUNDING)


@pytest.mark.parametrize("fasteners", ["none", "nails", "bolts"])
def test_last_worked_line_is_the_table_for_plies(catalogue_of, members_of, fasteners):
    """So it is for built-up sections, however their plies are fastened."""
    standard = make_nds("DF-L No.2", {"built_up_fasteners": fasteners})
    catalogue = two_ply(catalogue_of)
    for length in (0.4, 1.2, 1.8):
        member = members_of(length=length)
        table = standard.resistances(catalogue, member, ("medium",))
        steps = standard.working(catalogue, 0, member, 0, "medium", "compression")
        assert steps[-1].value == pytest.approx(table.compression[0, 0, 0], rel=ROUNDING)


def test_plies_fastened_by_bolts_resist_more_than_by_nails_than_one_by_one(
    catalogue_of, rectangles, members_of
):
    """15.3: Kf 0.6 for nails and 0.75 for bolts on the whole section, never below the boards."""
    pair, member = two_ply(catalogue_of), members_of(length=1.6)
    got = {
        fasteners: make_nds("DF-L No.2", {"built_up_fasteners": fasteners}).resistances(
            pair, member, ("medium",)
        )
        for fasteners in ("none", "nails", "bolts")
    }
    none, nails, bolts = (got[k].compression[0, 0, 0] for k in ("none", "nails", "bolts"))
    whole = make_nds("DF-L No.2", {}).resistances(
        rectangles((3.0 * INCH, 5.5 * INCH)), member, ("medium",)
    )
    board = make_nds("DF-L No.2", {}).resistances(rectangles(TWO_BY_SIX), member, ("medium",))
    assert none == pytest.approx(2.0 * board.compression[0, 0, 0])
    assert none < nails < bolts
    assert nails == pytest.approx(0.60 * whole.compression[0, 0, 0])
    assert bolts == pytest.approx(0.75 * whole.compression[0, 0, 0])


@given(depth=DEPTHS, lengths=st.lists(LENGTHS, min_size=2, max_size=8), duration=DURATIONS)
def test_compression_never_grows_with_length_and_never_exceeds_the_short_column(
    rectangles, members_of, depth, lengths, duration
):
    """Compression resistance falls with buckling length and stays below Fc* A."""
    standard = make_nds("DF-L No.2", {})
    catalogue = rectangles((0.038, depth))
    table = standard.resistances(catalogue, members_of(length=sorted(lengths)), (duration,))
    resistance = table.compression[:, 0, 0]
    short = float(standard.values.adjusted(catalogue, duration).Fc_star[0] * catalogue.area[0])
    assert (np.diff(resistance) <= ROUNDING * short).all()
    assert (resistance <= short * (1.0 + ROUNDING)).all()


@given(ratio=st.floats(1e-4, 1e6), c=st.sampled_from([0.8, 0.85, 0.9]))
def test_column_stability_factor_solves_its_quadratic(ratio, c):
    """CP solves c CP² − (1 + r) CP + r = 0 and never exceeds 1 or Euler's r (eq. 3.7-1)."""
    factor = float(C_P(np.array([ratio]), np.array([1.0]), c)[0])
    assert c * factor**2 - (1.0 + ratio) * factor + ratio == pytest.approx(
        0.0, abs=1e-9 * (1.0 + ratio)
    )
    assert 0.0 < factor <= min(1.0, ratio) * (1.0 + 1e-9)


def test_a_column_without_length_does_not_buckle():
    """FcE is infinite and CP is 1 at zero length."""
    critical = F_cE(4e9, np.zeros(1))
    assert critical[0] == math.inf
    assert C_P(critical, np.ones(1), 0.8)[0] == 1.0


def test_shorter_load_durations_resist_more(rectangles, members_of):
    """Tension goes with CD; compression of a slender column hardly, of a stocky one nearly so."""
    catalogue = rectangles(TWO_BY_SIX)
    table = make_nds("DF-L No.2", {}).resistances(
        catalogue, members_of(length=[0.2, 1.6]), LONGEST_FIRST
    )
    ratio = table.tension[0, 0] / table.tension[0, 0, 1]
    np.testing.assert_allclose(ratio, [0.9, 1.0, 1.15, 1.25, 1.6])
    gain = table.compression[:, 0, -1] / table.compression[:, 0, 0]
    assert (np.diff(table.compression, axis=2) > 0.0).all()
    assert 1.5 < gain[0] < 1.6 / 0.9
    assert 1.0 < gain[1] < 1.1


def test_format_conversion_is_that_of_table_n1():
    """KF φ is 2.16 for strengths and 1.5 for Emin (Table N1: KF = 2.16/φ, 1.5/φ, rounded)."""
    assert K_F["Ft"] * PHI["Ft"] == pytest.approx(2.16)
    assert K_F["Fc"] * PHI["Fc"] == pytest.approx(2.16)
    assert K_F["Emin"] * PHI["Emin"] == pytest.approx(1.5, rel=0.004)


def test_lrfd_tension_is_asd_times_conversion(rectangles, members_of):
    """T in LRFD is Ft CF · 2.70 · 0.80 · λ; λ is 0.6, 0.8, 0.8, 0.8, 1.0 (Table N3)."""
    catalogue, member = rectangles(TWO_BY_SIX), members_of(length=1.0)
    table = make_nds("SPF No.1/No.2", {"method": "LRFD"}).resistances(
        catalogue, member, LONGEST_FIRST
    )
    expected = 450.0 * 1.3 * 8.25 * 2.16 * np.array([0.6, 0.8, 0.8, 0.8, 1.0])
    np.testing.assert_allclose(table.tension[0, 0] / POUND, expected)


def test_slenderness_limit_of_3_7_1_4(rectangles, members_of):
    """Up to le/d = 50 a column counts, beyond it does not; 75 may be asked for construction."""
    catalogue = rectangles(TWO_BY_SIX)
    lengths = [50.0 * 1.5 * INCH, 50.1 * 1.5 * INCH, 75.1 * 1.5 * INCH]
    member = members_of(length=lengths)
    table = make_nds("DF-L No.2", {}).resistances(catalogue, member, ("medium",))
    assert (table.compression[:, 0, 0] > 0.0).tolist() == [True, False, False]
    assert table.usable.all()
    assert table.clauses[table.compression_clause[1, 0, 0]] == "3.7.1.4 slenderness le/d"
    assert table.reasons[table.notes[1, 0]] == (
        "le/d exceeds 50, the limit of 3.7.1.4 for members in compression"
    )
    building = make_nds("DF-L No.2", {"slenderness_limit": 75})
    table = building.resistances(catalogue, member, ("medium",))
    assert (table.compression[:, 0, 0] > 0.0).tolist() == [True, True, False]
    assert "Wood: le/d above 50 is for the time of construction only (3.7.1.4)." in (
        building.cautions()
    )


@pytest.mark.parametrize(
    ("grade", "size", "reason"),
    [
        ("DF-L No.2", (0.75, 3.5), "thinner than 2 in nominal: no dimension lumber"),
        (
            "DF-L No.2",
            (5.5, 5.5),
            "thicker than 4 in: no dimension lumber, take posts and timbers",
        ),
        (
            "DF-L No.2, posts and timbers",
            (3.5, 5.5),
            "smaller than 5 x 5 in: no posts and timbers",
        ),
        (
            "DF-L No.2, posts and timbers",
            (5.5, 9.5),
            "more than 2 in wider than thick: a beam grade, not a post",
        ),
        ("DF-L No.2, posts and timbers", (5.5, 7.5), ""),
        ("SPF Stud", (1.5, 7.25), "Stud grade wider than 6 in takes No.3 values: choose No.3"),
        ("SPF Stud", (1.5, 5.5), ""),
        ("DF-L Construction", (1.5, 5.5), "Construction grade is made to 4 in wide only"),
        ("DF-L Construction", (1.5, 3.5), ""),
    ],
)
def test_sizes_that_a_grade_is_not_made_for(rectangles, members_of, grade, size, reason):
    """A size outside the grade's table is left out, and the reason says why."""
    catalogue = rectangles((size[0] * INCH, size[1] * INCH))
    table = make_nds(grade, {}).resistances(catalogue, members_of(length=1.0), ("medium",))
    assert table.reasons[table.notes[0, 0]] == reason
    assert table.usable[0, 0] == (not reason)


@pytest.mark.parametrize(
    ("grade", "settings", "product", "reason"),
    [
        ("glulam", OWN, "NDS", "the catalogue row is sawn lumber, the grade is glulam"),
        ("glulam", OWN, "EN 14080", ""),
        ("DF-L No.2", {}, "EN 14080", "the catalogue row is glulam, the grade is lumber"),
        ("DF-L No.2", {}, "NDS", ""),
    ],
)
def test_grade_and_product_must_agree(rectangles, members_of, grade, settings, product, reason):
    """Strengths of glulam are not for sawn boards, nor those of lumber for glulam."""
    size = (1.5 * INCH, 5.5 * INCH)
    table = make_nds(grade, settings).resistances(
        rectangles(size, product=product), members_of(length=1.0), ("short",)
    )
    assert table.reasons[table.notes[0, 0]] == reason
    assert table.usable[0, 0] == (not reason)


@pytest.mark.parametrize(
    ("settings", "tension", "compression", "stiffness"),
    [
        ({"wet_service": True}, 1.0, 0.8, 0.9),
        ({"incised": True}, 0.8, 0.8, 0.95),
        ({"temperature": "100 to 125 F"}, 0.9, 0.8, 0.9),
        ({"temperature": "125 to 150 F", "wet_service": True}, 0.9, 0.8 * 0.5, 0.9 * 0.9),
        ({"factor_Ft": 0.5, "factor_Fc": 0.6, "factor_E": 0.7}, 0.5, 0.6, 0.7),
    ],
)
def test_service_factors(rectangles, members_of, settings, tension, compression, stiffness):
    """CM, Ct and Ci of Tables 4A, 2.3.3 and 4.3.8, and the user's own, act on Ft, Fc, E, Emin."""
    catalogue = rectangles(TWO_BY_SIX)
    plain, changed = make_nds("DF-L No.2", {}), make_nds("DF-L No.2", settings)
    before, after = (s.values.adjusted(catalogue, "medium") for s in (plain, changed))
    assert after.Ft[0] / before.Ft[0] == pytest.approx(tension)
    assert after.Fc_star[0] / before.Fc_star[0] == pytest.approx(compression)
    assert after.Emin / before.Emin == pytest.approx(stiffness)
    assert pytest.approx(stiffness) == changed.material.E / plain.material.E


def test_wet_service_spares_weak_wood(rectangles):
    """CM for Fc is 1.0 where Fc CF ≤ 750 psi (Table 4A): SPF No.3 2x6, 650 · 1.1 = 715."""
    catalogue = rectangles(TWO_BY_SIX, TWO_BY_FOUR)
    factors = make_nds("SPF No.3", {"wet_service": True}).values.factors(catalogue)
    np.testing.assert_allclose(factors["Fc"], [1.1, 1.15])
    factors = make_nds("DF-L No.3", {"wet_service": True}).values.factors(catalogue)
    np.testing.assert_allclose(factors["Fc"], [0.8 * 1.1, 0.8 * 1.15])


def test_creep_is_that_of_3_5_2():
    """Kcr − 1 is 0.5 for seasoned lumber in dry service and 1.0 unseasoned or wet."""
    assert make_nds("DF-L No.2", {}).material.creep == 0.5
    assert make_nds("DF-L No.2", {"unseasoned": True}).material.creep == 1.0
    assert make_nds("DF-L No.2", {"wet_service": True}).material.creep == 1.0


def test_own_duration_factors(rectangles, members_of):
    """A jurisdiction's own CD takes the place of the table's, for its duration alone."""
    catalogue, member = rectangles(TWO_BY_SIX), members_of(length=1.0)
    standard = make_nds("DF-L No.2", {"duration_factors": {"short": 1.15}})
    table = standard.resistances(catalogue, member, ("medium", "short", "instantaneous"))
    ratio = table.tension[0, 0] / table.tension[0, 0, 0]
    np.testing.assert_allclose(ratio, [1.0, 1.0, 1.6 / 1.15])


def test_own_reference_values(rectangles, members_of):
    """Glulam by the user's values: no size factor, c = 0.9, any size."""
    standard = make_nds("24F-1.8E", OWN)
    catalogue = rectangles((5.125 * INCH, 12.0 * INCH))
    table = standard.resistances(catalogue, members_of(length=3.0), ("long",))
    assert table.usable.all()
    assert table.tension[0, 0, 0] == pytest.approx(1100.0 * PSI * catalogue.area[0])
    steps = standard.working(catalogue, 0, members_of(length=3.0), 0, "long", "compression")
    found = {step.symbol: step.value for step in steps}
    assert (found["c"], found["C_F"]) == (0.9, 1.0)
    assert "Wood: the reference values are the user's own." in standard.cautions()


def test_no_other_species_is_suggested():
    """An untabulated species, or none at all, gets no near grade of another species."""
    for name in ("Southern Pine No.2", "No.2", ""):
        with pytest.raises(SettingsError) as caught:
            make_nds(name, {})
        assert caught.value.fix == ""


@pytest.mark.parametrize(
    ("said", "meant"),
    [
        ("Douglas Fir-Larch No.2", "Douglas Fir-Larch No.2"),
        ("df-l no. 2", "Douglas Fir-Larch No.2"),
        ("No. 2 Douglas Fir-Larch", "Douglas Fir-Larch No.2"),
        ("SPF No.1/No.2", "Spruce-Pine-Fir No.1/No.2"),
        ("Hem-Fir, Select Structural", "Hem-Fir Select Structural"),
        ("DF-L No.1 & Btr", "Douglas Fir-Larch No.1 & Btr"),
        ("DF-L No.1 posts and timbers", "Douglas Fir-Larch No.1, posts and timbers"),
    ],
)
def test_spellings_of_a_grade(said, meant):
    """Case, punctuation, short species and the order of the words do not matter."""
    grade = find_grade(said)
    assert grade is not None
    assert grade.name == meant


def test_every_grade_is_found_by_its_own_name_alone():
    """No two grades share a spelling."""
    assert all(find_grade(name) == grade for name, grade in nds_grades().items())


KEYS = (
    "method, wet_service, unseasoned, incised, temperature, factor_Ft, factor_Fc, factor_E, "
    "duration_factors, slenderness_limit, built_up_fasteners, Ft, Fc, E, Emin, specific_gravity, "
    "product"
)


@pytest.mark.parametrize(
    ("grade", "settings", "message"),
    [
        (
            "Doug Fir-Larch No.2",
            {},
            'grade: found "Doug Fir-Larch No.2"; expected one of '
            + "; ".join(nds_grades())
            + "; or your own values: Ft, Fc, E, Emin, specific_gravity and product. "
            'Did you mean "Douglas Fir-Larch No.2"?',
        ),
        (
            "DF-L No.2",
            {"wetservice": True},
            f"wetservice: found an unknown setting; expected one of NDS's settings: {KEYS}. "
            'Did you mean "wet_service"?',
        ),
        (
            "DF-L No.2",
            {"wet_service": "yes"},
            'wet_service: found "yes"; expected true or false.',
        ),
        (
            "DF-L No.2",
            {"duration_factors": {"shrt": 1.25}},
            "duration_factors.shrt: found an unknown load duration; expected one of permanent, "
            'long, medium, short, instantaneous. Did you mean "short"?',
        ),
        (
            "DF-L No.2",
            {"duration_factors": {"short": 12.5}},
            "duration_factors.short: found 12.5; expected a number from 0.5 to 2.",
        ),
        (
            "DF-L No.2",
            {"slenderness_limit": 100},
            "slenderness_limit: found 100; expected a number above 0 and not above 75.",
        ),
        (
            "24F-1.8E",
            {k: v for k, v in OWN.items() if k != "product"},
            'product: found nothing; expected one of "dimension lumber", "sized lumber", '
            '"posts and timbers", "glulam", "composite lumber". "dimension lumber" takes the '
            'size factors of Table 4A, "sized lumber" none.',
        ),
        (
            "24F-1.8E",
            OWN | {"incised": True},
            "incised: found true; expected false for glulam: 4.3.8 is for dimension lumber. "
            "Give the factors of the treatment as factor_Ft, factor_Fc and factor_E.",
        ),
        (
            "SCL",
            OWN | {"product": "composite lumber", "wet_service": True},
            "wet_service: found true; expected false for composite lumber: its maker gives the "
            "wet service factors. Give them as factor_Ft, factor_Fc and factor_E.",
        ),
        (
            "x",
            OWN | {"Emin": "1900000 psi"},
            "Emin: found 1900000 psi; expected a modulus below E, for buckling.",
        ),
    ],
)
def test_mistakes_are_told(grade, settings, message):
    """Every mistake names the key, what was found, what belongs there and the likely fix."""
    with pytest.raises(SettingsError) as caught:
        make_nds(grade, settings)
    assert str(caught.value) == message
