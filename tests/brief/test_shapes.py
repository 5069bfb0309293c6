"""Every ready shape is a sound truss: stable, as redundant as theory says, symmetric."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from sizing.brief.model import Brief, SourceFile
from sizing.brief.shapes import SHAPES, shape_tables
from sizing.brief.toml_reader import brief_from_tables
from sizing.errors import InputError
from sizing.job import pick_job
from sizing.mechanics.analysis import analyse
from sizing.mechanics.brief_loads import case_loads, geometry_of
from sizing.mechanics.stability import determinacy, require_stable
from sizing.selection.outcome import Limits

GIRDERS = [
    "pratt-girder", "howe-girder", "warren-girder", "warren-girder-with-verticals", "k-girder"
]  # fmt: skip
PITCHED = ["king-post", "queen-post", "fink", "fan", "howe-roof", "pratt-roof", "scissors"]

# The count of Maxwell: redundants = members + directions held - 2 or 3 x nodes for a stable truss
# (any text on trusses). Triangulated girders and roof trusses have none; each further support of
# a continuous girder adds one, in K girders a second one with the node that both spans share; a
# second diagonal adds one for each bay of a face; crossed braces of the queen post add one; the
# plan bracing of a square head adds one. Squares over squares, held all round:
# 8 xy - 3 (2 xy + x + y + 1) + 2 (x + y) + 3 = 2 xy - x - y.
CASES: list[tuple[str, dict[str, Any], int]] = [
    *((name, {}, 0) for name in GIRDERS),
    *((name, {"span": "18 m", "panels": 4, "depth": "1.5 m"}, 0) for name in GIRDERS),
    *((name, {"span": "24 m, 30 m", "panels": 8}, 1 if name != "k-girder" else 2)
      for name in GIRDERS),
    *((name, {"span": "12 m, 15 m, 12 m", "panels": 6, "restraint": "5 m"},
       2 if name != "k-girder" else 4) for name in GIRDERS),
    ("pratt-girder", {"span": "20 m, 20 m", "panels": 12}, 1),
    *((name, {}, int(name == "queen-post")) for name in PITCHED),
    *((name, {"span": "7.3 m", "rise": "2.7 m"}, int(name == "queen-post")) for name in PITCHED),
    *((name, {"span": "18 m", "pitch": 12, "panels": panels}, 0)
      for name in ("howe-roof", "pratt-roof") for panels in (4, 8, 14)),
    ("scissors", {"span": "8 m", "rise": "3 m", "ceiling": "1.6 m"}, 0),
    ("mono-pitch", {}, 0),
    ("mono-pitch", {"span": "10 m", "pitch": 15, "panels": 4, "depth": "0.8 m"}, 0),
    ("bowstring", {}, 0),
    ("bowstring", {"span": "30 m", "rise": "4 m", "panels": 12, "restraint": "6 m"}, 0),
    ("canopy", {}, 0),
    ("canopy", {"reach": "9 m", "panels": 7, "depth": "1.8 m", "restraint": "4 m"}, 0),
    ("canopy", {"panels": 2, "restraint": "10 m"}, 0),
    ("square-tower", {}, 1),
    ("square-tower", {"bays": 3, "height": "9 m", "bracing": "crossed"}, 1 + 4 * 3),
    ("square-tower", {"bays": 1, "height": "3 m", "head": "2.4 m"}, 1),
    ("triangular-tower", {}, 0),
    ("triangular-tower", {"bays": 5, "height": "15 m", "bracing": "crossed"}, 3 * 5),
    ("double-layer-grid", {}, 2 * 24 - 10),
    ("double-layer-grid", {"bays-x": 2, "bays-y": 2}, 2 * 4 - 4),
    ("double-layer-grid", {"bays-x": 3, "bays-y": 5, "square": "2.4 m", "depth": "2 m"}, 22),
]  # fmt: skip


def read(tables: dict[str, Any]) -> Brief:
    here = Path("brief.toml").resolve()
    return brief_from_tables(tables, SourceFile(name="brief", path=here, sha256=""))


def shaped(name: str, given: dict[str, Any] | None = None) -> Brief:
    return read(shape_tables(name, given))


def forces(brief: Brief, case: str) -> dict[str, float]:
    """Member forces in N by name in one load case, all members of one stiffness."""
    geometry = geometry_of(brief)
    found = analyse(geometry, np.ones(geometry.members), case_loads(brief)).force
    q = [c.name for c in brief.cases].index(case)
    return {member.name: float(found[i, q]) for i, member in enumerate(brief.members)}


@pytest.mark.parametrize(("name", "given", "redundants"), CASES)
def test_a_shape_is_stable_and_as_redundant_as_theory_says(
    name: str, given: dict[str, Any], redundants: int
) -> None:
    """Each shape is read without a mistake, is no mechanism, and has the count of Maxwell."""
    brief = shaped(name, given)
    geometry = geometry_of(brief)
    mechanisms = require_stable(geometry, [node.name for node in brief.nodes])
    assert determinacy(geometry, mechanisms).redundants == redundants
    assert mechanisms.nearly_flat == ()
    crossing = [text for text in brief.cautions if "cross without a node" in text]
    assert bool(crossing) == (name == "queen-post")


def test_every_shape_is_in_the_list_of_cases() -> None:
    """No shape goes untried."""
    assert {name for name, _, _ in CASES} == set(SHAPES)


@pytest.mark.parametrize(("name", "given", "redundants"), CASES)
def test_loads_add_up_to_area_times_pressure(
    name: str, given: dict[str, Any], redundants: int
) -> None:
    """Snow and roofing of a roof, wind of a tower: the nodes carry extent times intensity."""
    brief = shaped(name, given)
    for case in brief.cases:
        for row in case.stated:
            assert row.applied == pytest.approx(row.given, rel=1e-12, abs=1e-6)
    total = {
        case.name: np.sum([*case.nodal.values(), np.zeros(brief.dimensions)], axis=0)
        for case in brief.cases
    }
    if "tower" in name:
        legs, height = (4 if name == "square-tower" else 3), brief.nodes[-1].position[2]
        assert total["wind-along-x"] == pytest.approx([300 * legs * height + 4000, 0, 0], abs=0.1)
        assert total["wind-against-y"] == pytest.approx([0, -300 * legs * height - 4000, 0], abs=1)
        assert total["equipment"] == pytest.approx([0, 0, -6000], abs=0.1)
        return
    spans = np.ptp([node.position[:-1] for node in brief.nodes], axis=0)
    area = float(np.prod(spans)) * (6.0 if brief.dimensions == 2 else 1.0)
    assert total["snow-full"][-1] == pytest.approx(-0.8 * 1000 * area, rel=1e-9)
    if "snow-left" in total:
        halves = total["snow-left"][-1] + total["snow-right"][-1]
        assert halves == pytest.approx(-1.2 * 1000 * area, rel=1e-9)
    if "services" in total:
        below = 150 * area if name != "warren-girder" else 150 * 6.0 * inner_length(brief)
        assert total["services"][-1] == pytest.approx(-below, rel=1e-9)
    if name in ("king-post", "fink") and given:
        assert total["roofing"][-1] == pytest.approx(-500 * 6 * 2 * math.hypot(3.65, 2.7), rel=1e-4)
        assert total["wind-uplift"] == pytest.approx([0, 1.1 * 600 * 6 * 7.3], rel=1e-9, abs=1e-6)


def inner_length(brief: Brief) -> float:
    """The length of the bottom chord of a Warren girder, which has no end nodes."""
    x = [node.position[0] for node in brief.nodes if node.name.startswith("A")]
    return max(x) - min(x)


LOPSIDED = (
    "mono-pitch", "canopy", "square-tower", "triangular-tower", "double-layer-grid"
)  # fmt: skip
SYMMETRIC = [
    case for case in CASES if case[0] not in LOPSIDED and "," not in case[1].get("span", "")
]


@pytest.mark.parametrize(("name", "given", "redundants"), SYMMETRIC)
def test_symmetric_loads_give_symmetric_forces_in_one_group(
    name: str, given: dict[str, Any], redundants: int
) -> None:
    """A member and its mirror image carry the same force and belong to the same group."""
    brief = shaped(name, given)
    length = max(node.position[0] for node in brief.nodes)
    where = {tuple(round(x, 3) for x in n.position): n.name for n in brief.nodes}
    mirror = {
        n.name: where[(round(length - n.position[0], 3), round(n.position[1], 3))]
        for n in brief.nodes
    }
    group = {}
    for member in brief.members:
        ends = frozenset(member.name.split("-"))
        group[ends] = brief.groups[member.group].name
    for case in ("roofing", "snow-full", "wind-uplift"):
        found = {frozenset(name.split("-")): f for name, f in forces(brief, case).items()}
        size = max(map(abs, found.values()))
        for ends, force in found.items():
            image = frozenset(mirror[end] for end in ends)
            assert group[image] == group[ends]
            assert found[image] == pytest.approx(force, abs=1e-6 * size)


@pytest.mark.parametrize("name", GIRDERS[:1] + GIRDERS[3:4])
def test_the_chords_of_a_girder_carry_moment_over_depth(name: str) -> None:
    """Uniform load on plan: the chord at mid-span carries q L^2 / 8 d (method of sections)."""
    found = forces(shaped(name, {"span": "24 m", "depth": "2 m", "panels": 8}), "snow-full")
    moment = 0.8 * 1000 * 6.0 * 24.0**2 / 8
    chord = found["B3-B4"] if name == "pratt-girder" else found["A3-A4"]
    assert abs(chord) == pytest.approx(moment / 2.0, rel=1e-12)


def test_diagonals_of_pratt_are_in_tension_and_of_howe_in_compression() -> None:
    """That is what tells the two apart (any text on trusses)."""
    for name, sign in (("pratt-girder", 1), ("howe-girder", -1), ("pratt-roof", 1),
                       ("howe-roof", -1), ("canopy", 1)):  # fmt: skip
        brief = shaped(name)
        found = forces(brief, "snow-full")
        groups = [g for g in brief.groups if g.name.startswith("diagonals")]
        values = [found[brief.members[i].name] for g in groups for i in g.members]
        assert all(sign * value > 0 for value in values), name


def test_a_parabola_needs_no_diagonals_under_uniform_load() -> None:
    """Equal loads at equal steps: the top chord of the bowstring is their funicular polygon."""
    brief = shaped("bowstring", {"span": "24 m", "rise": "4 m", "panels": 8})
    found = forces(brief, "snow-full")
    diagonals = next(g for g in brief.groups if g.name == "diagonals")
    thrust = 0.8 * 1000 * 6.0 * 24.0**2 / 8 / 4.0
    for i in diagonals.members:
        assert found[brief.members[i].name] == pytest.approx(0.0, abs=1e-4 * thrust)
    assert found["A3-A4"] == pytest.approx(thrust, rel=1e-4)


def test_restraint_is_never_wider_than_asked_for() -> None:
    """The buckling length out of plane of the bottom chord stays within the distance given."""
    for name in ("pratt-girder", "howe-roof", "bowstring", "mono-pitch", "k-girder"):
        for restraint in (3.0, 4.5, 6.0, 7.0, 24.0):
            brief = shaped(name, {"span": 24, "panels": 10, "restraint": restraint})
            chord = [g for g in brief.groups if g.name.startswith("bottom")]
            lengths = {brief.buckling_lengths(i)[1] for g in chord for i in g.members}
            assert max(lengths) <= restraint + 1e-3
            assert max(lengths) > restraint - 2.4 - 1e-3


@pytest.mark.parametrize("span", [8.1, 25.0, 29.99, 31.0, 47.7])
def test_odd_spans_need_no_narrower_restraint_than_round_ones(span: float) -> None:
    """Coordinates are rounded to a tenth of a millimetre; the usual restraint allows for it."""
    for name in ("pratt-girder", "mono-pitch", "bowstring", "howe-roof"):
        for panels in (6, 14):
            brief = shaped(name, {"span": span, "panels": panels})
            chord = [g for g in brief.groups if g.name.startswith("bottom")]
            longest = max(brief.buckling_lengths(i)[1] for g in chord for i in g.members)
            panel = span / panels
            widest = 3 * panel if name == "pratt-girder" else max(min(span / 2, 4.5), panel)
            assert widest - panel < longest <= widest + 1e-3


SMALL: dict[str, dict[str, Any]] = {name: {} for name in SHAPES} | {
    name: {"span": "12 m", "panels": 4} for name in GIRDERS
} | {
    "howe-roof": {"panels": 4}, "pratt-roof": {"panels": 4}, "bowstring": {"span": 12, "panels": 6},
    "mono-pitch": {"span": 10, "panels": 4}, "square-tower": {"bays": 2, "height": 6},
    "triangular-tower": {"bays": 2, "height": 6}, "double-layer-grid": {"bays-x": 2, "bays-y": 2},
}  # fmt: skip


@pytest.mark.parametrize("option", ["steel", "timber"])
@pytest.mark.parametrize("name", SHAPES)
def test_a_shape_is_picked_and_checked_as_it_is(name: str, option: str) -> None:
    """The usual loads are within reach of the catalogues: an adequate design is found."""
    brief = shaped(name, SMALL[name])
    (found,) = pick_job(brief, options=[option], limits=lambda _: Limits(seconds=0.3)).options
    assert found.adequate
    assert {group.name for group in found.groups} == {group.name for group in brief.groups}


@pytest.mark.parametrize("name", SHAPES)
def test_timber_has_a_final_limit_beside_each_elastic_one(name: str) -> None:
    """Each movement is limited with and without creep (EN 1995-1-1 7.2), and joints take area."""
    brief = shaped(name)
    held = {
        component: [(x.nodes, x.direction) for x in brief.deflection_limits
                    if x.component == component]
        for component in ("instantaneous", "final")
    }  # fmt: skip
    assert held["final"] == held["instantaneous"] != []
    factors = {option.name: option.net_section_factor for option in brief.options}
    assert factors == {"steel": 1.0, "timber": 0.6}
    # Table 7.2: final span/150 to span/300; half of that divisor for a cantilever
    for limit in brief.deflection_limits:
        if limit.component == "final" and limit.limit_text.startswith("span/"):
            assert 150 <= float(limit.limit_text.removeprefix("span/")) <= 300


@pytest.mark.parametrize(
    ("name", "given", "messages"),
    [
        ("prat-girder", {}, ['command line: --shape: found no shape "prat-girder"; expected one of '
                             f'{", ".join(SHAPES)}. Did you mean "pratt-girder"?']),
        ("fink", {"panels": 4}, ["shape fink: panels: found the unknown parameter \"panels\"; "
                                 "expected one of span, pitch, rise, restraint, spacing, roofing, "
                                 "snow, wind. Did you mean \"span\"?"]),
        ("pratt-girder", {"panels": 7, "span": "24 m, 0 m", "depth": "2"},
         ['shape pratt-girder: span: found "0 m"; expected 2 m to 150 m.',
          "shape pratt-girder: panels: found 7; expected an even number from 4 to 40."]),
        ("pratt-girder", {"restraint": "1 m"},
         ["shape pratt-girder: restraint: found 1.000 m, less than a panel of 2.000 m; expected "
          "restraint at nodes, so at least a panel apart. Take more panels or a greater "
          "distance."]),
        ("fink", {"pitch": 80}, ["shape fink: pitch: found 80; expected 5 degrees to 60 degrees."]),
        ("fink", {"span": "9 kN"}, ['shape fink: span: found "9 kN"; expected a length, such as '
                                    '"120 mm". The unit "kN" measures force.']),
        ("square-tower", {"bracing": "cros"},
         ['shape square-tower: bracing: found "cros"; expected one of single, crossed. Did you '
          'mean "crossed"?']),
        ("scissors", {"rise": "2 m", "ceiling": "1.9 m"},
         ["shape scissors: ceiling: found 1.9 m; expected at most 0.6 of the rise, 1.200 m. Raise "
          "the ridge or lower the ceiling."]),
    ],
)  # fmt: skip
def test_a_bad_parameter_is_told(name: str, given: dict[str, Any], messages: list[str]) -> None:
    """Every mistake comes with the parameter, what was found and what belongs there."""
    with pytest.raises(InputError) as refusal:
        shape_tables(name, given)
    assert [problem.text() for problem in refusal.value.problems] == messages


@pytest.mark.parametrize("value", [None, True, [], {}, "", "x", "1e999", float("nan"), -1, 10**400])
@pytest.mark.parametrize("name", ["pratt-girder", "scissors", "square-tower", "double-layer-grid"])
def test_no_value_breaks_a_shape(name: str, value: Any) -> None:
    """Whatever a parameter is given ends in a brief or in messages, never in another error."""
    for parameter in SHAPES[name].parameters:
        try:
            brief = shaped(name, {parameter.name: value})
        except InputError:
            continue
        assert brief.members
