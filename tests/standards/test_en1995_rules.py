"""EN 1995-1-1: properties that must hold for every section, member and class."""

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from sizing.brief.combination_rules_durations import LONGEST_FIRST
from sizing.standards.contract import SettingsError
from sizing.standards.en1995 import make_en1995
from sizing.standards.en1995_grades import EN_338_2016, EN_14080_2013, grade_names, timber_grade
from sizing.standards.en1995_strength import BETA_C, k_buckling, k_c, k_h, k_mod

GRADES = st.sampled_from(grade_names())
SIDES = st.floats(0.03, 0.4)
LENGTHS = st.floats(0.05, 12.0)
DURATIONS = st.sampled_from(LONGEST_FIRST)
ROUNDING = 1e-12
SQUARE = (0.1, 0.1)


def sides(a, b):
    return min(a, b), max(a, b)


@given(
    made=st.tuples(GRADES, st.sampled_from([1, 2, 3])),
    section=st.tuples(SIDES, SIDES),
    lengths=st.tuples(LENGTHS, LENGTHS),
    duration=DURATIONS,
    net=st.floats(0.2, 1.0),
    upright=st.booleans(),
)
def test_last_worked_line_is_the_table(
    rectangles, members_of, *, made, section, lengths, duration, net, upright
):
    """The last worked line of either sense equals the resistance of the table."""
    standard = make_en1995(made[0], {"service_class": made[1]})
    catalogue = rectangles(SQUARE, sides(*section))
    member = members_of(
        length=[1.0, lengths[0]],
        in_plane=np.array([1.0, lengths[0]]),
        out_of_plane=np.array([1.0, lengths[1]]),
        net_factor=net,
        depth_in_plane=upright,
    )
    table = standard.resistances(catalogue, member, ("permanent", duration))
    for sense, values in (("tension", table.tension), ("compression", table.compression)):
        steps = standard.working(catalogue, 1, member, 1, duration, sense)
        assert steps[-1].unit == "N"
        assert steps[-1].value == pytest.approx(values[1, 1, 1], rel=ROUNDING)


@given(grade=GRADES, a=SIDES, b=SIDES, lengths=st.lists(LENGTHS, min_size=2, max_size=8))
def test_compression_never_grows_with_length_and_never_exceeds_the_squash_load(
    rectangles, members_of, grade, a, b, lengths
):
    """Compression resistance falls with buckling length, from fc,0,d · A downwards."""
    standard = make_en1995(grade, {})
    table = standard.resistances(
        rectangles(sides(a, b)), members_of(length=sorted(lengths)), ("medium",)
    )
    resistance = table.compression[:, 0, 0]
    squash = k_mod(2, "medium") * standard.grade.fc0k / standard.gamma_M * a * b
    assert (np.diff(resistance) <= ROUNDING * squash).all()
    assert (resistance <= squash * (1.0 + ROUNDING)).all()
    assert (resistance > 0.0).all()


@given(relative=st.floats(0.0, 8.0), beta=st.sampled_from(sorted(BETA_C.values())))
def test_kc_is_the_smaller_root_of_its_quadratic(relative, beta):
    """kc solves kc² λrel² − 2 k kc + 1 = 0 beyond λrel = 0.3, is 1 up to it, below Euler's.

    The quadratic is that from which eq. 6.25 follows.
    """
    factor = float(k_c(np.array([relative]), beta)[0])
    if relative <= 0.3:
        assert factor == 1.0
        return
    k = float(k_buckling(np.array([relative]), beta)[0])
    assert factor**2 * relative**2 - 2.0 * k * factor + 1.0 == pytest.approx(0.0, abs=1e-9)
    assert 0.0 < factor <= min(1.0, 1.0 / relative**2) * (1.0 + ROUNDING)


@given(larger=st.floats(0.01, 2.0), density=st.floats(290.0, 900.0))
def test_size_factor_never_lowers_strength(larger, density):
    """kh lies between 1 and its cap, and heavy solid timber has none."""
    solid = float(k_h("solid timber", density, np.array([larger]))[0])
    glulam = float(k_h("glulam", density, np.array([larger]))[0])
    assert 1.0 <= solid <= (1.3 if density <= 700.0 else 1.0)
    assert 1.0 <= glulam <= 1.1


def test_size_factor_takes_the_larger_side_in_tension(rectangles, members_of):
    """A 45 x 200 board has no size factor: its width in tension is 200 mm, not 45 mm (3.2(3))."""
    standard = make_en1995("C24", {})
    steps = standard.working(
        rectangles((0.045, 0.200)), 0, members_of(length=1.0), 0, "short", "tension"
    )
    found = {step.symbol: step.value for step in steps}
    assert (found["h"], found["k_h"]) == (0.200, 1.0)


@pytest.mark.parametrize("prefix", ["C", "D", "GLh", "GLc"])
def test_classes_are_in_order_of_strength(rectangles, members_of, prefix):
    """A higher class of one family never resists less, in tension or compression."""
    names = [
        name
        for name in (*EN_338_2016, *EN_14080_2013)
        if name.startswith(prefix[:2].rstrip("hc")) and name.endswith(prefix[2:])
    ]
    assert len(names) >= 7
    catalogue, member = rectangles((0.1, 0.2)), members_of(length=2.5)
    tables = [make_en1995(n, {}).resistances(catalogue, member, ("short",)) for n in names]
    for lower, higher in pairwise(tables):
        assert lower.tension[0, 0, 0] <= higher.tension[0, 0, 0]
        assert lower.compression[0, 0, 0] <= higher.compression[0, 0, 0]


@pytest.mark.parametrize("service", [1, 2, 3])
def test_shorter_load_durations_resist_more(rectangles, members_of, service):
    """Resistances rise from permanent to instantaneous in the ratio of kmod, class 3 lowest."""
    catalogue, member = rectangles((0.1, 0.2)), members_of(length=3.0)
    table = make_en1995("C24", {"service_class": service}).resistances(
        catalogue, member, LONGEST_FIRST
    )
    sheltered = make_en1995("C24", {"service_class": 1}).resistances(
        catalogue, member, LONGEST_FIRST
    )
    kmod = np.array([k_mod(service, d) for d in LONGEST_FIRST])
    for values, best in (
        (table.tension, sheltered.tension),
        (table.compression, sheltered.compression),
    ):
        np.testing.assert_allclose(values[0, 0] / values[0, 0, 0], kmod / kmod[0])
        assert (np.diff(values[0, 0]) > 0.0).all()
        assert (values <= best).all()


def test_the_two_editions_of_en338_are_kept_apart(rectangles, members_of):
    """C24 has ft,0,k 14.5 N/mm² in the 2016 edition and 14 in that of 2009."""
    member, catalogue = members_of(length=1.0), rectangles((0.1, 0.2))
    new, old = (
        make_en1995("C24", {"edition_338": e}).resistances(catalogue, member, ("short",))
        for e in ("2016", "2009")
    )
    ratio = new.tension[0, 0, 0] / old.tension[0, 0, 0]
    assert ratio == pytest.approx(14.5 / 14.0)


def test_buckling_about_the_axis_that_the_section_depth_says(rectangles, members_of):
    """Turned by 90°, a section exchanges its slenderness in and out of plane."""
    catalogue = rectangles((0.05, 0.2))
    standard = make_en1995("C24", {})
    lengths = {"length": 3.0, "in_plane": np.array([3.0]), "out_of_plane": np.array([1.0])}
    upright = standard.resistances(catalogue, members_of(**lengths), ("short",))
    flat = standard.resistances(catalogue, members_of(**lengths, depth_in_plane=False), ("short",))
    assert upright.slenderness_in[0, 0] == pytest.approx(3.0 * math.sqrt(12.0) / 0.2)
    assert upright.slenderness_out[0, 0] == pytest.approx(1.0 * math.sqrt(12.0) / 0.05)
    assert flat.slenderness_in[0, 0] == pytest.approx(3.0 * math.sqrt(12.0) / 0.05)
    assert upright.clauses[upright.compression_clause[0, 0, 0]] == "6.3.2 buckling out of plane"
    assert flat.clauses[flat.compression_clause[0, 0, 0]] == "6.3.2 buckling in plane"


def test_slenderness_limits_of_the_brief_hold(rectangles, members_of):
    """Beyond the limits there is no compression resistance, or the section is not usable."""
    catalogue = rectangles((0.05, 0.05), (0.1, 0.1), (0.2, 0.2))
    table = make_en1995("C24", {}).resistances(
        catalogue,
        members_of(length=4.0, max_slenderness_compression=100.0, max_slenderness_tension=250.0),
        ("short",),
    )
    assert table.usable[0].tolist() == [False, True, True]
    assert (table.compression[0, :, 0] > 0.0).tolist() == [False, False, True]
    assert [table.reasons[k] for k in table.notes[0]] == [
        "slenderness L/i exceeds 250, the limit for members in tension",
        "slenderness L/i exceeds 100, the limit for members in compression",
        "",
    ]
    steps = make_en1995("C24", {}).working(
        catalogue, 1, members_of(length=4.0, max_slenderness_compression=100.0), 0, "short",
        "compression",
    )  # fmt: skip
    assert steps[-1].value == 0.0
    assert steps[-1].meaning.startswith("slenderness L/i exceeds 100")


def test_sections_that_are_no_solid_timber_are_left_out(catalogue_of, members_of):
    """A hollow section is not usable, and the reason says why."""
    catalogue = catalogue_of({"area": 1.9e-3, "i_major": 2.86e-6, "family": "SHS", "depth": 0.1})
    table = make_en1995("C24", {}).resistances(catalogue, members_of(length=1.0), ("short",))
    assert not table.usable.any()
    assert table.reasons[table.notes[0, 0]] == (
        "not a solid rectangle: timber rules here cover solid rectangular sections only"
    )


@pytest.mark.parametrize(
    ("grade", "product", "reason"),
    [
        (
            "C24",
            "EN 14080",
            "the catalogue row is glued laminated timber, the grade is solid timber",
        ),
        ("GL24h", "EN 336", "the catalogue row is not glued laminated timber, the grade is"),
        ("GL24h", "NDS", "the catalogue row is not glued laminated timber, the grade is"),
        ("GL24h", "NDS built-up", "the catalogue row is not glued laminated timber, the grade is"),
        ("GL24h", "EN 14080", ""),
        ("C24", "NDS", ""),
        ("C24", "EN 336", ""),
        ("C24", "", ""),
    ],
)
def test_grade_and_product_must_agree(rectangles, members_of, grade, product, reason):
    """A glulam catalogue takes glulam classes only, and the other way round."""
    table = make_en1995(grade, {}).resistances(
        rectangles(SQUARE, product=product), members_of(length=1.0), ("short",)
    )
    assert table.reasons[table.notes[0, 0]] == reason
    assert table.usable[0, 0] == (not reason)


def test_boards_of_a_built_up_section_count_one_by_one(catalogue_of, rectangles, members_of):
    """Two boards side by side resist twice what one board resists, in both senses."""
    b, h = 0.045, 0.145
    pair = catalogue_of(
        {
            "family": "rectangle", "product": "EN 336 built-up", "width": 2 * b, "depth": h,
            "area": 2 * b * h, "i_major": 2 * b * h**3 / 12, "i_minor": 2 * h * b**3 / 12,
        }
    )  # fmt: skip
    standard, member = make_en1995("C24", {}), members_of(length=2.0)
    two = standard.resistances(pair, member, ("short",))
    one = standard.resistances(rectangles((b, h)), member, ("short",))
    assert two.tension[0, 0, 0] == pytest.approx(2.0 * one.tension[0, 0, 0])
    assert two.compression[0, 0, 0] == pytest.approx(2.0 * one.compression[0, 0, 0])


def test_material_is_what_the_analysis_needs():
    """Stiffness and density are the mean values; creep is kdef of the service class."""
    for service, creep in ((1, 0.6), (2, 0.8), (3, 2.0)):
        material = make_en1995("GL24h", {"service_class": service}).material
        assert (material.E, material.density, material.creep) == (11.5e9, 420.0, creep)


def test_partial_factor_can_be_set(rectangles, members_of):
    """Resistances go down with γM as it goes up."""
    catalogue, member = rectangles(SQUARE), members_of(length=1.0)
    usual = make_en1995("C24", {}).resistances(catalogue, member, ("short",))
    raised = make_en1995("C24", {"gamma_M": 1.45}).resistances(catalogue, member, ("short",))
    assert raised.tension[0, 0, 0] == pytest.approx(usual.tension[0, 0, 0] * 1.3 / 1.45)


@pytest.mark.parametrize(
    ("grade", "settings", "message"),
    [
        (
            "GL24",
            {},
            'grade: found "GL24"; expected a strength class of EN 338:2016 or EN 14080:2013: '
            + ", ".join(grade_names())
            + '. Did you mean "GL24h"?',
        ),
        (
            "C24",
            {"service_class": 4},
            "service_class: found 4; expected 1 (heated indoors), 2 (covered outdoors) or 3 "
            "(exposed).",
        ),
        (
            "C24",
            {"serviceclass": 2},
            "serviceclass: found an unknown setting; expected one of EN 1995-1-1's settings: "
            'service_class, gamma_M, edition_338. Did you mean "service_class"?',
        ),
        (
            "D24",
            {"edition_338": "2003"},
            'edition_338: found "2003"; expected one of "2016", "2009". Did you mean "2009"?',
        ),
        ("C24", {"gamma_M": 0.9}, "gamma_M: found 0.9; expected a number not below 1."),
        ("C24", {"gamma_M": True}, "gamma_M: found true; expected a number not below 1."),
    ],
)
def test_mistakes_are_told(grade, settings, message):
    """Every mistake names the key, what was found, what belongs there and the likely fix."""
    with pytest.raises(SettingsError) as caught:
        make_en1995(grade, settings)
    assert str(caught.value) == message


def test_a_class_of_the_other_edition_only_is_unknown():
    """D24 is a class of EN 338:2016; the 2009 edition does not have it."""
    assert timber_grade("D24").edition == "EN 338:2016"
    with pytest.raises(SettingsError, match="EN 338:2009"):
        make_en1995("D24", {"edition_338": "2009"})


def test_an_assumed_service_class_is_said():
    """The service class that nobody gave stands in the basis and among the cautions."""
    assumed, given_ = make_en1995("C24", {}), make_en1995("C24", {"service_class": 2})
    assert ("Service class", "2 (usual value, not given in the brief)") in assumed.basis()
    assert ("Service class", "2") in given_.basis()
    assert len(assumed.cautions()) == len(given_.cautions()) + 1
