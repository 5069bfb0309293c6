"""Loads given per area, per length or at a point reach the nodes with the resultant stated."""

from __future__ import annotations

import copy
import tomllib
from decimal import Decimal
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from sizing.brief.model import Brief, SourceFile
from sizing.brief.toml_reader import brief_from_tables, read_brief
from sizing.errors import InputError

EXAMPLE = Path(__file__).parents[2] / "examples" / "market-hall.toml"

# A duopitch roof truss, 8 m by 2 m, loaded on its rafters; invented.
ROOF: dict[str, Any] = tomllib.loads("""
units = { force = "kN", length = "m" }
[nodes]
A0 = [0, 0]
A1 = [4, 0]
A2 = [8, 0]
B1 = [2, 1]
B2 = [4, 2]
B3 = [6, 1]
[supports]
A0 = { held = ["x", "y"] }
A2 = { held = ["y"] }
[groups.all]
members = ["A0..A2", "A0-B1..B3-A2", "A1-B1", "A1-B2", "A1-B3"]
buckling_length = 1.0
[cases.load]
kind = "other"
[[combinations]]
name = "U1"
state = "strength"
factors = { load = 1.5 }
[options.steel]
standard = "EN 1993-1-1"
grade = "S355"
catalogue = "square-hollow-sections"
""")
CHORD = "A0-B1..B3-A2"
SLOPE = np.hypot(2, 1) / 2


def read(tables: dict[str, Any]) -> Brief:
    return brief_from_tables(tables, SourceFile(name="brief", path=Path("brief"), sha256=""))


def roof(case: dict[str, Any], **top: Any) -> dict[str, Any]:
    tables = copy.deepcopy(ROOF) | top
    tables["cases"]["load"] |= case
    return tables


def area(**keys: Any) -> dict[str, Any]:
    load = {"pressure": "1.5 kN/m2", "on": "plan", "chord": CHORD, "spacing": "4 m"} | keys
    return roof({"area_loads": [load]})


def nodal(brief: Brief) -> dict[str, list[float]]:
    """The nodal forces in kN."""
    return {
        brief.nodes[n].name: [f / 1e3 for f in force] for n, force in brief.cases[0].nodal.items()
    }


def told(tables: dict[str, Any]) -> list[str]:
    with pytest.raises(InputError) as refusal:
        read(tables)
    return [problem.text() for problem in refusal.value.problems]


def test_a_pressure_on_plan_loads_inner_nodes_whole_and_end_nodes_half() -> None:
    """1.5 kN/m2 x 2 m x 4 m = 12 kN at inner nodes, half of it at the eaves."""
    found = nodal(read(area()))
    assert found == {
        "A0": [0, -6], "B1": [0, -12], "B2": [0, -12], "B3": [0, -12], "A2": [0, -6]
    }  # fmt: skip


def test_a_pressure_on_slope_counts_the_true_length() -> None:
    """Roofing per m2 of its own surface weighs more than on plan, by 1/cos of the pitch."""
    found = nodal(read(area(on="slope")))
    assert found["B1"] == pytest.approx([0, -12 * SLOPE], rel=1e-14)
    assert read(area(on="slope")).cases[0].stated[0].applied[1] == pytest.approx(
        -1500 * 8 * SLOPE * 4, rel=1e-14
    )


def test_a_pressure_normal_to_slope_is_square_to_each_panel_and_signed() -> None:
    """Positive presses onto both slopes, negative lifts them; the upright part is that on plan."""
    onto = nodal(read(area(on="normal to slope")))
    assert onto["B1"] == pytest.approx([6, -12], rel=1e-14)
    assert onto["B3"] == pytest.approx([-6, -12], rel=1e-14)
    assert onto["B2"] == pytest.approx([0, -12], abs=1e-14)
    lift = nodal(read(area(on="normal to slope", coefficient=-0.5)))
    assert lift["B1"] == pytest.approx([-3, 6], rel=1e-14)
    backwards = nodal(read(area(on="normal to slope", chord="A2-B3..B1-A0")))
    for node, force in onto.items():
        assert backwards[node] == pytest.approx(force, abs=1e-12)


def test_coefficients_by_part_and_by_side_of_the_ridge_agree() -> None:
    """Left and right of the ridge mean the two parts of the chord; the ridge node gets both."""
    by_side = area(coefficients={"left": 0.8, "right": 0.4})
    by_part = area(coefficients={"A0-B1-B2": 0.8, "B2-B3-A2": 0.4})
    named = area(coefficients={"right": 0.4, "left": 0.8}, ridge="B2", chord="A2-B3..B1-A0")
    assert nodal(read(by_side)) == nodal(read(by_part))
    assert nodal(read(by_side))["B2"] == pytest.approx([0, -12 * 0.6])
    for node, force in nodal(read(named)).items():
        assert force == pytest.approx(nodal(read(by_side))[node])


def test_the_row_says_what_was_given_and_what_is_applied() -> None:
    """Pressure, extent, width, resultant and the sum at the nodes stand in one sentence."""
    texts = [read(tables).cases[0].stated[0].text for tables in (
        area(), area(coefficients={"left": 0.8, "right": 0.4}),
        area(on="normal to slope", coefficients={"left": -0.5, "right": 0.2}),
    )]  # fmt: skip
    assert texts == [
        f"area load 1 on {CHORD}: 1.50 kN/m² on plan × 8.000 m × 4.000 m = 48.0 kN down; at the "
        "nodes 48.0 kN down",
        f"area load 1 on {CHORD}: 1.50 kN/m² on plan × (0.8 × 4.000 m + 0.4 × 4.000 m) × 4.000 m "
        "= 28.8 kN down; at the nodes 28.8 kN down",
        f"area load 1 on {CHORD}: 1.50 kN/m² normal to slope × (-0.5 × 4.472 m + 0.2 × 4.472 m) × "
        "4.000 m = (x -8.4, y 7.2) kN; at the nodes (x -8.4, y 7.2) kN",
    ]


@settings(max_examples=60, deadline=None)
@given(
    pressure=st.decimals(-5, 5, places=3),
    spacing=st.sampled_from([0.6, 2.4, 6.0, 7.35]),
    heights=st.lists(st.integers(-300, 300), min_size=4, max_size=4),
    factors=st.lists(st.sampled_from([-1.2, -0.5, 0.0, 0.4, 0.8, 2.0]), min_size=4, max_size=4),
    on=st.sampled_from(["plan", "slope", "normal to slope"]),
)
def test_what_is_applied_is_what_is_given(
    pressure: Decimal, spacing: float, heights: list[int], factors: list[float], on: str
) -> None:
    """The nodal forces add up to the resultant of the pressure over the whole extent."""
    names = ["A0", "B1", "B2", "B3", "A2"]
    parts = {f"{a}-{b}": f for (a, b), f in zip(pairwise(names), factors, strict=True)}
    tables = area(pressure=f"{pressure} kN/m2", spacing=spacing, on=on, coefficients=parts)
    tables["cases"]["load"]["nodal"] = {"A1": [0, -1]}
    for name, height in zip(["B1", "B2", "B3", "A2"], heights, strict=True):
        tables["nodes"][name] = [tables["nodes"][name][0], height / 100]
    tables["nodes"]["A1"] = [4, -9]
    tables["groups"]["all"]["members"] = ["A0-A1-A2", CHORD, "A1-B1", "A1-B2", "A1-B3"]
    case = read(tables).cases[0]
    total = np.sum([*case.nodal.values(), (0, 1000)], axis=0)
    size = 1e3 * abs(float(pressure)) * spacing * 40 * max(map(abs, factors)) + 1e-9
    assert case.stated[0].applied == pytest.approx(case.stated[0].given, abs=1e-12 * size)
    assert total == pytest.approx(case.stated[0].given, abs=1e-9 + 1e-12 * size)


def test_the_market_hall_by_area_is_the_market_hall_by_nodes() -> None:
    """The example's nodal loads are those of the pressures that its head states."""
    tables = tomllib.loads(EXAMPLE.read_text(encoding="utf-8"))
    before = read_brief(EXAMPLE)
    top = {"chord": "B0..B12", "spacing": "6.0 m", "on": "plan"}
    per_case = {
        "roofing": {"pressure": "0.5 kN/m2"},
        "services": {"pressure": "0.15 kN/m2", "chord": "A0..A12"},
        "snow-full": {"pressure": "1.0 kN/m2"},
        "snow-left": {"pressure": "1.0 kN/m2", "coefficients": {"left": 1.0, "right": 0.5}},
        "snow-right": {"pressure": "1.0 kN/m2", "coefficients": {"left": 0.5, "right": 1.0}},
        "wind-uplift": {"pressure": "-1.1 kN/m2"},
        "wind-pressure": {"pressure": "0.3 kN/m2"},
    }
    for name, load in per_case.items():
        del tables["cases"][name]["nodal"]
        tables["cases"][name]["area_loads"] = [top | load]
    after = read(tables)
    for old, new in zip(before.cases, after.cases, strict=True):
        assert new.nodal.keys() == old.nodal.keys()
        for node, force in old.nodal.items():
            assert new.nodal[node] == pytest.approx(force, rel=1e-12, abs=1e-6)


@pytest.mark.parametrize(
    ("line", "applied", "at_b1"),
    [
        ({"load": "2 kN/m", "along": "plan", "chord": CHORD}, [0, -16], [0, -4]),
        ({"load": "2 kN/m", "along": "chord", "chord": CHORD}, [0, -16 * SLOPE], [0, -4 * SLOPE]),
        ({"load": "2 kN/m", "along": "height", "chord": "A0-B1-B2", "direction": "-x"},
         [-4, 0], [-2, 0]),
        ({"load": "2 kN/m", "along": "plan", "chord": CHORD, "direction": [3, 4]},
         [9.6, 12.8], [2.4, 3.2]),
        ({"load": "2 kN/m", "along": "plan", "chord": CHORD, "direction": "up"}, [0, 16], [0, 4]),
    ],
)  # fmt: skip
def test_line_loads_along_plan_chord_and_height(
    line: dict[str, Any], applied: list[float], at_b1: list[float]
) -> None:
    """A load per length counts the length it is measured along, in the direction given."""
    brief = read(roof({"line_loads": [line]}))
    assert brief.cases[0].stated[0].applied == pytest.approx([1e3 * f for f in applied], abs=1e-9)
    assert nodal(brief)["B1"] == pytest.approx(at_b1, abs=1e-12)


def test_loads_of_every_kind_add_up_in_one_case() -> None:
    """Nodal, area, line and point loads of a case act together."""
    tables = area()
    tables["cases"]["load"] |= {
        "nodal": {"B2": [1, -2]},
        "line_loads": [{"load": "2 kN/m", "along": "plan", "chord": CHORD}],
        "point_loads": [{"position": [4, 2], "force": [0, -3]}],
    }
    brief = read(tables)
    assert nodal(brief)["B2"] == pytest.approx([1, -12 - 4 - 2 - 3])
    assert [row.text.split(":")[0] for row in brief.cases[0].stated] == [
        f"area load 1 on {CHORD}", f"line load 1 on {CHORD}", "point load 1 at node B2"
    ]  # fmt: skip


POINT = {"member": "A0-A1", "distance": "1 m", "force": [0, -8]}
ON_MEMBER = (
    "brief: cases.load.point_loads[1]: found a load on member A0-A1, 1.000 m from A0; expected "
    'loads at nodes only. Put a node there, or write between_nodes = "lump" before the first '
    "table to share it between A0 and A1; the bending of the member is then not covered."
)


@pytest.mark.parametrize("place", [POINT, {"position": [1, 0], "force": [0, -8]}])
def test_a_load_between_nodes_is_refused_or_shared_on_request(place: dict[str, Any]) -> None:
    """Sharing follows the lever rule and leaves a caution that the member bends."""
    assert told(roof({"point_loads": [place]})) == [ON_MEMBER]
    brief = read(roof({"point_loads": [place]}, between_nodes="lump"))
    assert nodal(brief) == {"A0": [0, -6], "A1": [0, -2]}
    assert brief.cases[0].stated[0].text == (
        "point load 1 on member A0-A1, 1.000 m from A0: 8.0 kN down; at the nodes A0 6.0 kN down, "
        "A1 2.0 kN down"
    )
    assert (
        "Load case load: the load on member A0-A1, 1.000 m from A0 is shared between A0 and A1; "
        "the bending of the member between its nodes is not covered."
    ) in brief.cautions


@pytest.mark.parametrize(
    ("tables", "message"),
    [
        (area(pressure="1.5 kN/m"), 'pressure: found "1.5 kN/m"; expected a pressure'),
        (area(pressure="1500 kN/m2"), 'found "1500 kN/m2"; expected at most 100.00 kN/m².'),
        (area(spacing=0), "area_loads[1].spacing: found 0; expected a width above 0."),
        (area(on="slop"), 'expected "plan", "slope" or "normal to slope". Did you mean "slope"?'),
        (area(chord="A0..A9"), 'chord: found the unknown node "A9" in "A0..A9"'),
        (area(chord="B1"), 'chord: found "B1"; expected a chain of nodes, such as "B0..B8"'),
        (area(chord="B*"), 'chord: found "B*"; expected a chain of nodes'),
        (area(coefficient=11), "coefficient: found 11; expected at most 10."),
        (area(coefficients={"A0-B1": 1.0}),
         f"coefficients: found no coefficient for B1-B2, B2-B3, B3-A2; expected each panel of "
         f"{CHORD} once. Write 0.0 for a part without load."),
        (area(coefficients={CHORD: 1.0, "A0-B1": 1.0}), "found panel A0-B1 for the second time"),
        (area(coefficients={"A0-B2": 1.0}), "found panel A0-B2 off the chord"),
        (area(coefficients={"left": 1.0}), 'found "left"; expected both left and right'),
        (area(coefficients={"left": 1.0, "right": 1.0}, ridge="A0"), "ridge: found node A0"),
        (area(coefficients={"left": 1.0, "right": 1.0}, chord="A0..A2"),
         "found left and right, but A0..A2 has no single highest node inside; expected a ridge. "
         "Name it: ridge = ..."),
        (area(coefficient=1.0, coefficients={CHORD: 1.0}), "found a coefficient beside"),
        (area(chord="A1-B2", on="normal to slope"), "on the upright panel A1-B2, which has"),
        (roof({"line_loads": [{"load": "2 kN/m", "along": "plan", "chord": CHORD,
                               "direction": "z"}]}), 'direction: found "z"; expected "down", "up", '
         "one of x, -x, y, -y, or a vector of 2 numbers."),
        (roof({"line_loads": [{"load": "2 kN", "along": "plan", "chord": CHORD}]}), "per length"),
        (roof({"nodal": {"A0-A1": [0, -1]}}), "found a load on "
         '"A0-A1"; expected a node. Loads on a member stand in point_loads or line_loads.'),
        (roof({"point_loads": [POINT | {"member": "A0-B3"}]}), 'found "A0-B3", which is no member'),
        (roof({"point_loads": [POINT | {"distance": "5 m"}]}), "expected 0 to 4.000 m, the length"),
        (roof({"point_loads": [POINT | {"position": [1, 0]}]}), "expected member and distance, or"),
        (roof({"point_loads": [{"position": [1, 5], "force": [0, 1]}]}), "neither a node nor a"),
        (roof({}), "a load case without loads; expected nodal = { ... }, area_loads, line_loads"),
    ],
)  # fmt: skip
def test_a_mistake_in_a_load_is_told_alone(tables: dict[str, Any], message: str) -> None:
    """One mistake gives one message, with its place and what belongs there."""
    found = told(tables)
    assert len(found) == 1
    assert message in found[0]


@pytest.mark.parametrize("value", [None, True, [], {}, "x", [1, 2], float("nan"), -1])
@pytest.mark.parametrize("key", ["pressure", "on", "chord", "spacing", "coefficients", "ridge"])
def test_no_value_of_any_type_breaks_the_reader(key: str, value: Any) -> None:
    """Whatever stands in a key ends in a brief or in messages, never in another error."""
    places: list[str] = []
    try:
        read(area(**{key: value}))
    except InputError as refusal:
        places = [problem.place for problem in refusal.problems]
    assert all(place.startswith("cases.load") for place in places)
