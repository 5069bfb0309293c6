"""The single rules of EN 1993-1-1: curves, classes, effective widths, grades, angles, lengths."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from sizing.standards.contract import SettingsError
from sizing.standards.en1993_angles import LegBolts, one_leg_resistance, web_angle_slenderness
from sizing.standards.en1993_curves import ALPHA, buckling_curves, reduction_factor
from sizing.standards.en1993_grades import known_grades, parse_grade, strength_of
from sizing.standards.en1993_lengths import CHORD, WEB, Preset
from sizing.standards.en1993_rows import finish_of
from sizing.standards.en1993_walls import (
    Dimensions,
    class_4_reason,
    effective_area,
    epsilon,
    plate_reduction,
    walls_of,
)

NAN = math.nan


def size_of(family, **values):
    usual = {
        "area": 1e-3,
        "depth": NAN,
        "width": NAN,
        "thickness": NAN,
        "flange": NAN,
        "root_radius": NAN,
    }
    return Dimensions(family=family, **(usual | values))


@given(st.floats(0.201, 6.0))
def test_curves_stand_in_their_order(slenderness):
    """a0 > a > b > c > d at every slenderness beyond 0.2, all below Euler's hyperbola."""
    chi = [float(reduction_factor(np.array(slenderness), np.array(a))) for a in ALPHA.values()]
    assert all(first > second for first, second in pairwise(chi))
    assert chi[0] < min(1.0, 1.0 / slenderness**2)


@given(st.floats(0.0, 0.2), st.sampled_from(sorted(ALPHA.values())))
def test_stocky_members_do_not_buckle(slenderness, alpha):
    """6.3.1.2(4): χ = 1 up to λ̄ = 0.2."""
    assert reduction_factor(np.array(slenderness), np.array(alpha)) == 1.0


@pytest.mark.parametrize("alpha", ALPHA.values())
def test_slender_members_approach_euler(alpha):
    """χ λ̄² → 1 as λ̄ grows."""
    assert float(reduction_factor(np.array(1e4), np.array(alpha))) * 1e8 == pytest.approx(
        1.0, rel=1e-4
    )


@pytest.mark.parametrize(
    ("family", "finish", "sizes", "plain", "s460"),
    [
        # EN 1993-1-1:2005 Table 6.2; h/b and tf in mm
        ("SHS", "hot finished", (100, 100, NAN), ("a", "a"), ("a0", "a0")),
        ("CHS", "cold formed", (100, NAN, NAN), ("c", "c"), ("c", "c")),
        ("RHS", "hot finished", (200, 100, NAN), ("a", "a"), ("a0", "a0")),
        ("I", "rolled", (330, 160, 11.5), ("a", "b"), ("a0", "a0")),
        ("I", "rolled", (330, 160, 40.0), ("a", "b"), ("a0", "a0")),
        ("I", "rolled", (330, 160, 40.1), ("b", "c"), ("a", "a")),
        ("I", "rolled", (200, 200, 15.0), ("b", "c"), ("a", "a")),
        ("I", "rolled", (120, 100, 8.0), ("b", "c"), ("a", "a")),
        ("I", "rolled", (500, 420, 125.0), ("d", "d"), ("c", "c")),
        ("I", "welded", (500, 200, 20.0), ("b", "c"), ("b", "c")),
        ("I", "welded", (500, 200, 50.0), ("c", "d"), ("c", "d")),
        ("angle", "rolled", (100, 100, NAN), ("b", "b"), ("b", "b")),
        ("rectangle", "rolled", (50, 50, NAN), ("c", "c"), ("c", "c")),
    ],
)
def test_curve_choice(family, finish, sizes, plain, s460):
    """Table 6.2 by family, product, h/b, flange thickness and grade."""
    depth, width, flange = (size / 1000.0 for size in sizes)
    for expected, high in ((plain, False), (s460, True)):
        found = buckling_curves(family, finish, depth=depth, width=width, flange=flange, s460=high)
        assert found == expected


def test_sections_beyond_table_6_2_have_no_curve():
    """A family or flange that the table does not know gives the reason instead."""
    thick = buckling_curves("I", "rolled", depth=0.6, width=0.3, flange=0.11, s460=False)
    assert thick == "Table 6.2 ends at flanges of 100 mm for rolled sections with h/b > 1.2"
    other = buckling_curves("other", "rolled", depth=1.0, width=1.0, flange=NAN, s460=False)
    assert other == "Table 6.2 has no buckling curve for a section of family other"
    missing = buckling_curves("I", "rolled", depth=NAN, width=0.1, flange=0.01, s460=False)
    assert "gives no depth, width or flange" in missing


@pytest.mark.parametrize(
    ("product", "finish"),
    [
        ("EN 10210-2", "hot finished"),
        ("EN 10210-2:2006 hot finished", "hot finished"),
        ("EN 10219-2", "cold formed"),
        ("ASTM A500", "cold formed"),
        ("ASTM A53", "cold formed"),
        ("ASTM A501", "hot finished"),
        ("", None),
    ],
)
def test_finish_of_hollow_sections(product, finish):
    """The product standard tells hot finished from cold formed; the setting overrides it."""
    assert finish_of("SHS", product, "by product") == finish
    assert finish_of("SHS", product, "cold formed") == "cold formed"
    assert finish_of("angle", product, "cold formed") == "rolled"


def test_epsilon():
    """ε of S235, S275, S355, S460 (computed with Table 5.2's formula)."""
    found = [round(epsilon(fy * 1e6), 4) for fy in (235, 275, 355, 460)]
    assert found == [1.0, 0.9244, 0.8136, 0.7148]


@pytest.mark.parametrize(
    ("fy", "limit"), [(235e6, 90.0), (275e6, 76.9), (355e6, 59.6), (460e6, 46.0)]
)
def test_tubes_at_their_class_limit(fy, limit):
    """d/t up to 90 ε² is class 3 (Table 5.2), the limit included; beyond it class 4."""
    exact = 90.0 * 235e6 / fy
    assert exact == pytest.approx(limit, abs=0.06)
    at = size_of("CHS", depth=exact * 0.005, thickness=0.005)
    over = size_of("CHS", depth=exact * 1.0001 * 0.005, thickness=0.005)
    assert class_4_reason(walls_of(at, fy)) == ""
    assert class_4_reason(walls_of(over, fy)).startswith("class 4: d/t = ")


@pytest.mark.parametrize("fy", [235e6, 275e6, 355e6, 460e6])
def test_hollow_walls_at_their_class_limit(fy):
    """c/t = (b − 3t)/t up to 42 ε is class 3 (Table 5.2); the wider side decides."""
    t = 0.004
    side = (42.0 * epsilon(fy) + 3.0) * t
    at = size_of("RHS", depth=side, width=0.5 * side, thickness=t)
    over = size_of("RHS", depth=0.5 * side, width=side * 1.001, thickness=t)
    assert class_4_reason(walls_of(at, fy)) == ""
    assert "(b − 3t)/t" in class_4_reason(walls_of(over, fy))


@pytest.mark.parametrize(
    ("fy", "class_4"), [(235e6, False), (275e6, False), (355e6, True), (460e6, True)]
)
def test_equal_angles_ten_times_as_wide_as_thick(fy, class_4):
    """b = 10t: h/t passes in S355, (b + h)/(2t) = 10 > 9.36 does not (SSB Part 5, p. 5-37)."""
    walls = walls_of(size_of("angle", depth=0.15, width=0.15, thickness=0.015), fy)
    assert bool(class_4_reason(walls)) is class_4
    if fy == 355e6:
        assert class_4_reason(walls) == (
            "class 4: (b + h)/(2t) = 10.00 exceeds 11.5ε = 9.36 (Table 5.2)"
        )
        assert walls[0].limit == pytest.approx(12.204, abs=5e-4)


def test_long_leg_of_an_unequal_angle():
    """h/t counts the longer leg whichever way the catalogue lists it."""
    for depth, width in ((0.2, 0.05), (0.05, 0.2)):
        walls = walls_of(size_of("angle", depth=depth, width=width, thickness=0.012), 275e6)
        assert class_4_reason(walls).startswith("class 4: h/t = 16.67 exceeds 15ε")


def test_i_section_parts():
    """IPE 330: web c = 271 mm, flange c = 58.25 mm; web class 4 in S355 (SSB Part 5, p. 5-33)."""
    ipe = size_of(
        "I",
        area=6260e-6,
        depth=0.33,
        width=0.16,
        thickness=0.0075,
        flange=0.0115,
        root_radius=0.018,
    )
    web, flange = walls_of(ipe, 355e6)
    assert web.ratio == pytest.approx(271.0 / 7.5)
    assert flange.ratio == pytest.approx(58.25 / 11.5)
    assert web.slender
    assert not flange.slender
    assert effective_area(ipe, (web, flange), 355e6) == pytest.approx(6095e-6, rel=2e-4)


def test_missing_dimensions_give_a_reason():
    """No wall thickness, no class."""
    found = walls_of(size_of("SHS", depth=0.1, width=0.1), 355e6)
    assert found == "the catalogue gives no wall thickness or outer dimension, so no class"
    assert walls_of(size_of("rectangle"), 355e6) == ()


@pytest.mark.parametrize(("k_sigma", "start", "ends"), [(4.0, 0.673, 0.22), (0.43, 0.748, 0.188)])
def test_plate_reduction(k_sigma, start, ends):
    """ρ is 1 up to its start, then (λ̄p − c)/λ̄p² (EN 1993-1-5, 4.4(2)), without a jump."""
    ratio = 28.4 * math.sqrt(k_sigma)
    assert plate_reduction(start * ratio, 235e6, k_sigma) == 1.0
    assert plate_reduction((start + 1e-6) * ratio, 235e6, k_sigma) == pytest.approx(1.0, abs=2e-3)
    assert plate_reduction(1.5 * ratio, 235e6, k_sigma) == pytest.approx((1.5 - ends) / 2.25)


def test_effective_area_of_a_square_hollow_section():
    """Four walls each lose (1 − ρ)(b − 3t) t: worked by hand with 4.4(2)."""
    size = size_of("SHS", area=2.34e-3, depth=0.2, width=0.2, thickness=0.003)
    walls = walls_of(size, 355e6)
    slenderness = (191.0 / 3.0) / (28.4 * math.sqrt(235 / 355) * 2.0)
    rho = (slenderness - 0.22) / slenderness**2
    expected = 2.34e-3 - 4.0 * (1.0 - rho) * 0.191 * 0.003
    assert effective_area(size, walls, 355e6) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("name", "number", "delivery"),
    [
        ("S355", 355, ""),
        ("s355h", 355, ""),
        ("S355J2H", 355, ""),
        ("S355J2+N", 355, ""),
        ("S275JR", 275, ""),
        ("S460NH", 460, "N"),
        ("S460 NLH", 460, "N"),
        ("S420MH", 420, "M"),
    ],
)
def test_grade_names(name, number, delivery):
    """Product spellings of a grade mean its number and delivery condition."""
    grade = parse_grade(name)
    assert (grade.number, grade.delivery) == (number, delivery)


@pytest.mark.parametrize("name", ["355", "S35", "A36", "C24", "S355X", ""])
def test_other_names_are_no_grades(name):
    """What is no structural steel grade is not guessed at."""
    assert parse_grade(name) is None


@pytest.mark.parametrize(
    ("name", "product", "mm", "table", "fy", "fu"),
    [
        ("S355", "EN 10025", 40, "EN 1993-1-1", 355, 490),
        ("S355", "EN 10025", 40.5, "EN 1993-1-1", 335, 470),
        ("S355", "EN 10210-1", 12, "EN 1993-1-1", 355, 510),
        ("S355", "EN 10210-1", 16, "product standards", 355, 470),
        ("S355", "EN 10210-1", 20, "product standards", 345, 470),
        ("S460", "EN 10219-1", 8, "EN 1993-1-1", 460, 530),
        ("S460NH", "EN 10219-1", 8, "EN 1993-1-1", 460, 550),
    ],
)
def test_strength_by_product_and_thickness(name, product, mm, table, fy, fu):
    """Steps include their end; an open delivery condition takes the lower fu (from memory)."""
    found = strength_of(parse_grade(name), product, mm / 1000.0, table)
    assert (found.fy, found.fu) == (fy * 1e6, fu * 1e6)
    assert table in found.origin


def test_thickness_and_grades_beyond_the_table_give_reasons():
    """No strength is invented for a thickness or product that the table does not hold."""
    assert strength_of(parse_grade("S355"), "EN 10025", 0.1, "EN 1993-1-1") == (
        "thickness 100 mm is beyond 80 mm, where grade S355 ends (EN 1993-1-1, EN 10025)"
    )
    assert strength_of(parse_grade("S450"), "EN 10210-1", 0.01, "EN 1993-1-1") == (
        "grade S450 is not in the EN 10210-1 rows of the table EN 1993-1-1"
    )


def test_every_known_grade_can_be_named():
    """The names offered in messages are names that are understood."""
    for table in ("EN 1993-1-1", "product standards"):
        assert all(parse_grade(name) is not None for name in known_grades(table))


@pytest.mark.parametrize(
    ("count", "pitch_over_hole", "beta"),
    [(2, 2.5, 0.4), (2, 5.0, 0.7), (2, 3.75, 0.55), (3, 2.3, 0.5), (4, 9.0, 0.7), (3, 3.75, 0.6)],
)
def test_beta_factors(count, pitch_over_hole, beta):
    """EN 1993-1-8 Table 3.8 (from memory): linear between 2.5 d0 and 5 d0."""
    bolts = LegBolts(count=count, hole=0.02, pitch=0.02 * pitch_over_hole, edge=NAN)
    assert bolts.beta == pytest.approx(beta)


def test_one_bolt():
    """2.0 (e2 − 0.5 d0) t fu / γM2, EN 1993-1-8 (3.11)."""
    bolts = LegBolts(count=1, hole=0.018, pitch=NAN, edge=0.03)
    found = one_leg_resistance(np.array([1e-3]), np.array([0.008]), np.array([430e6]), 1.25, bolts)
    assert found[0] == pytest.approx(2.0 * (0.03 - 0.009) * 0.008 * 430e6 / 1.25)


def test_web_angles_fixed_points():
    """BB.1.2: λ̄_eff,v = λ̄_v at 0.35/0.3, λ̄_eff,y = λ̄_y at 0.5/0.3."""
    for least, point in ((True, 0.35 / 0.3), (False, 0.5 / 0.3)):
        found = web_angle_slenderness(np.array(point), least_axis=least)
        assert found == pytest.approx(point)


@pytest.mark.parametrize(
    ("place", "family", "ends", "factors"),
    [
        (CHORD, "I", "bolted", (0.9, 1.0)),  # BB.1.1(2)B
        (CHORD, "SHS", "bolted", (0.9, 0.9)),  # BB.1.3(1)B
        (CHORD, "angle", "bolted", (1.0, 1.0)),
        (WEB, "CHS", "bolted", (1.0, 1.0)),  # BB.1.3(2)B
        (WEB, "CHS", "welded", (0.75, 0.75)),  # BB.1.3(3)B
        (WEB, "I", "bolted", (0.9, 1.0)),  # BB.1.1(4)B
        (WEB, "angle", "welded", (1.0, 1.0)),  # BB.1.2 works on slenderness instead
        (0, "CHS", "welded", (1.0, 1.0)),
    ],
)
def test_preset_lengths(place, family, ends, factors):
    """Annex BB.1 (from memory)."""
    preset = Preset(chords=("chord",), webs=("web",), web_ends=ends)
    assert preset.factors(place, family) == factors


def test_preset_groups_must_exist():
    """A pattern that fits no group, or a group named as both, is refused."""
    preset = Preset(chords=("top*",), webs=("web",), web_ends="bolted")
    assert list(preset.places(["top chord", "web", "post"])) == [CHORD, WEB, 0]
    with pytest.raises(SettingsError) as caught:
        preset.require_groups(["top chord", "post"])
    assert str(caught.value) == (
        'webs: found "web", which fits no group; expected one of post, top chord.'
    )
    twice = Preset(chords=("web*",), webs=("web",), web_ends="bolted")
    with pytest.raises(SettingsError, match="named by chords too"):
        twice.require_groups(["web"])


def test_depth_of_exactly_1_2_widths_is_not_slender_in_any_unit():
    """h/b = 1.2 takes the curves of h/b <= 1.2 (Table 6.2), whatever conversion rounds."""
    for width in range(4, 500):
        for unit in (1e-3, 0.0254):
            depth = 1.2 * width * unit
            size = {"depth": depth, "width": width * unit, "flange": 0.02}
            assert buckling_curves("I", "rolled", **size, s460=False) == ("b", "c")
