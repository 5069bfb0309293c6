"""Ranges, chains and patterns name the same nodes and members as the plain names they stand for."""

from __future__ import annotations

import copy
import tomllib
from pathlib import Path
from typing import Any

import pytest

from sizing.brief.model import Brief, SourceFile
from sizing.brief.toml_reader import brief_from_tables
from sizing.errors import InputError

# A girder of four panels with crossed diagonals in the last one; invented.
GIRDER: dict[str, Any] = tomllib.loads("""
units = { force = "kN", length = "m" }
[nodes]
A0 = [0, 0]
A1 = [2, 0]
A2 = [4, 0]
A3 = [6, 0]
A4 = [8, 0]
B0 = [0, 1]
B1 = [2, 1]
B2 = [4, 1]
B3 = [6, 1]
B4 = [8, 1]
[supports]
A0 = { held = ["x", "y"] }
A4 = { held = ["y"] }
[groups.bottom]
members = ["A0..A4"]
buckling_length = { in_plane = 1.0 }
restrained_nodes = ["A0..A4 by 2"]
[groups.top]
members = ["B4..B2", "B2-B1-B0"]
buckling_length = 1.0
[groups.verticals]
members = ["A0..A4 to B0..B4"]
buckling_length = 1.0
[groups.diagonals]
members = ["B0-A1", "B1..B2 to A2..A3", "B3-A4"]
buckling_length = 1.0
[cases.snow]
kind = "snow"
nodal = { "B1..B3" = [0, -4], "B?" = [0, 0] }
[[combinations]]
name = "U1"
state = "strength"
factors = { snow = 1.5 }
[[combinations]]
name = "S1"
state = "serviceability"
factors = { snow = 1.0 }
[[deflection_limits]]
name = "sag"
nodes = ["A1..A3", "B*"]
limit = "span/250"
[options.steel]
standard = "EN 1993-1-1"
grade = "S355"
catalogue = "square-hollow-sections"
""")
GIRDER["cases"]["snow"]["nodal"].pop("B?")


def read(tables: dict[str, Any]) -> Brief:
    return brief_from_tables(tables, SourceFile(name="brief", path=Path("brief"), sha256=""))


def changed(**keys: Any) -> dict[str, Any]:
    """The girder with other values, keys joined by two underscores."""
    tables = copy.deepcopy(GIRDER)
    for path, value in keys.items():
        *above, last = path.split("__")
        table = tables
        for key in above:
            table = table[key]
        table[last] = value
    return tables


def told(**keys: Any) -> list[str]:
    with pytest.raises(InputError) as refusal:
        read(changed(**keys))
    return [problem.text() for problem in refusal.value.problems]


def names_of(brief: Brief, group: str) -> list[str]:
    found = next(g for g in brief.groups if g.name == group)
    return [brief.members[i].name for i in found.members]


def test_words_for_many_mean_the_plain_names() -> None:
    """Every list of members and nodes comes out as if each name had been written."""
    brief = read(GIRDER)
    assert names_of(brief, "bottom") == ["A0-A1", "A1-A2", "A2-A3", "A3-A4"]
    assert names_of(brief, "top") == ["B4-B3", "B3-B2", "B2-B1", "B1-B0"]
    assert names_of(brief, "verticals") == [f"A{i}-B{i}" for i in range(5)]
    assert names_of(brief, "diagonals") == ["B0-A1", "B1-A2", "B2-A3", "B3-A4"]
    names = [node.name for node in brief.nodes]
    assert [names[n] for n in brief.groups[0].restrained_nodes] == ["A0", "A2", "A4"]
    assert {names[n]: f for n, f in brief.cases[0].nodal.items()} == dict.fromkeys(
        ("B1", "B2", "B3"), (0.0, -4000.0)
    )
    limit = [names[n] for n in brief.deflection_limits[0].nodes]
    assert limit == ["A1", "A2", "A3", "B0", "B1", "B2", "B3", "B4"]
    plain = changed(
        groups__bottom__members=["A0-A1", "A1-A2", "A2-A3", "A3-A4"],
        groups__bottom__restrained_nodes=["A0", "A2", "A4"],
        groups__top__members=["B4-B3", "B3-B2", "B2-B1", "B1-B0"],
        groups__verticals__members=[f"A{i}-B{i}" for i in range(5)],
        groups__diagonals__members=["B0-A1", "B1-A2", "B2-A3", "B3-A4"],
        cases__snow__nodal={name: [0, -4] for name in ("B1", "B2", "B3")},
    )
    plain["deflection_limits"][0]["nodes"] = limit
    assert read(plain) == brief


def test_supports_may_be_named_by_a_pattern() -> None:
    """One entry of the table of supports can hold several nodes, each node once."""
    brief = read(changed(supports={"A?": {"held": ["x", "y"]}}))
    assert len(brief.supports) == 5
    assert told(supports={"A*": {"held": ["y"]}, "A0": {"held": ["x"]}}) == [
        "brief: supports: found 1 node held by two entries: A0; expected each node once, named "
        "itself or through a range."
    ]


def test_leading_zeros_suffixes_and_grid_names_make_ranges() -> None:
    """The one number that differs may stand anywhere in the name."""
    for old, new in (("B", "top0"), ("B", "T3_")):
        tables = copy.deepcopy(GIRDER)
        tables["nodes"] = {k.replace(old, new): v for k, v in tables["nodes"].items()}
        tables["groups"]["top"]["members"] = [f"{new}0..{new}4"]
        tables["groups"]["verticals"]["members"] = [f"A0..A4 to {new}0..{new}4"]
        tables["groups"]["diagonals"]["members"] = [f"{new}0..{new}3 to A1..A4"]
        tables["cases"]["snow"]["nodal"] = {f"{new}1..{new}3": [0, -4]}
        tables["deflection_limits"][0]["nodes"] = [f"{new}*"]
        assert names_of(read(tables), "top")[0] == f"{new}0-{new}1"


MEMBER = 'two node names joined by a hyphen, such as "A0-A1", or a chain such as "A0..A8"'
RANGE = 'two nodes whose names differ in one number, such as "A0..A8"'
ALL = "A0, A1, A2, A3, A4, B0, B1, B2, B3, B4"


@pytest.mark.parametrize(
    ("word", "message"),
    [
        ("A0..A5", f'found the unknown node "A5" in "A0..A5"; expected one of {ALL}. '
                   'Did you mean "A4"?'),
        ("A0..B4", f'found the range "A0..B4"; expected {RANGE}.'),
        ("A2..A2", 'found the range "A2..A2" of 1 node; expected a range of 2 to 5000 nodes.'),
        ("A0..", f'found "A0.."; expected {RANGE}.'),
        ("A*", f'found "A*"; expected {MEMBER}.'),
        ("A0..A4 by 3", 'found the range "A0..A4 by 3", which ends at A3; expected steps that '
                        "reach A4. End it at A3, and name A4 beside it if it is meant."),
        ("A0..A4 by x", 'found "A0..A4 by x"; expected a step of whole numbers, such as '
                        '"A0..A12 by 3".'),
        ("A0..A4-B0..B4", f'found "A0..A4-B0..B4", two ranges joined by a hyphen; expected '
                          f"{MEMBER}. For a member from each node of one to the other write "
                          '"A0..A4 to B0..B4".'),
        ("A0 to B0", 'found "A0 to B0"; expected two ranges of as many nodes, such as "A1..A7 to '
                     'B1..B7". A chain along nodes is "A0..A8", one member "A0-A1".'),
        ("A0..A3 to B0..B4", 'found "A0..A3 to B0..B4", ranges of 4 and 5 nodes; expected two '
                             'ranges of as many nodes, such as "A1..A7 to B1..B7".'),
        ("A0..A4 to A0..A4", 'found "A0..A4 to A0..A4", which joins a node to itself; expected '
                             'two ranges of as many nodes, such as "A1..A7 to B1..B7".'),
        ("A0-A1-A1-A2", 'found member "A0-A1-A1-A2" with a node joined to itself; expected '
                        "another node at each step."),
    ],
)  # fmt: skip
def test_a_wrong_word_for_members_is_told_alone(word: str, message: str) -> None:
    """Unknown, empty and ambiguous ranges are refused with what belongs there."""
    assert told(groups__bottom__members=[word], groups__bottom__restrained_nodes=[]) == [
        f"brief: groups.bottom.members[1]: {message}"
    ]


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["A0", "C*"], '[2]: found the pattern "C*", which fits no node; expected a pattern of '
                       "names such as A0, A1, A2, A3, A4, B0 ... (10 in all). * stands for any "
                       "characters, ? for one."),
        (["A0..A2", "A2..A4"], '[2]: found node A2 of "A2..A4" for the second time; expected each '
                               'node once. "A0..A2" holds it already.'),
        (["A0..A4", "A4"], '[2]: found node "A4" for the second time; expected each node once. '
                           '"A0..A4" holds it already.'),
        (["A0", "A4", "A0"], '[3]: found node "A0" for the second time; expected each node once. '
                             "Delete it."),
    ],
)  # fmt: skip
def test_a_wrong_word_for_nodes_is_told_alone(words: list[str], message: str) -> None:
    """Patterns that fit nothing and nodes named twice are refused."""
    assert told(groups__bottom__restrained_nodes=words) == [
        f"brief: groups.bottom.restrained_nodes{message}"
    ]


def test_a_gap_in_a_range_names_the_missing_nodes() -> None:
    """A range over a node that the brief does not have is refused, never shortened."""
    tables = changed(groups__bottom__restrained_nodes=[])
    tables["nodes"]["A9"] = [16, 0]
    tables["groups"]["bottom"]["members"] = ["A0..A9"]
    with pytest.raises(InputError) as refusal:
        read(tables)
    assert 'the range "A0..A9", of which the brief has no A5, A6, A7, A8' in str(refusal.value)


def test_an_absurd_range_is_refused_at_once() -> None:
    """A range over a billion numbers costs neither time nor memory."""
    tables = changed(groups__bottom__restrained_nodes=[])
    tables["nodes"]["A999999999"] = [16, 0]
    tables["groups"]["bottom"]["members"] = ["A0..A999999999"]
    with pytest.raises(InputError, match="expected a range of 2 to 5000 nodes"):
        read(tables)


def test_overlapping_chains_name_the_member_and_its_first_place() -> None:
    """A member that two chains share is refused; the message says where it stands already."""
    assert told(groups__top__members=["B0..B4", "A0-A1-B1"]) == [
        'brief: groups.top.members[2]: found member A0-A1 of "A0-A1-B1", which stands already in '
        "groups.bottom.members[1]; expected each member once, in one group. Shorten one of the "
        "two.",
        'brief: groups.verticals.members[1]: found member A1-B1 of "A0..A4 to B0..B4", which '
        "stands already in groups.top.members[2]; expected each member once, in one group. "
        "Shorten one of the two.",
    ]


def test_a_node_loaded_twice_in_one_case_is_refused() -> None:
    """Overlapping ranges of loads are not added up in silence."""
    assert told(cases__snow__nodal={"B0..B2": [0, -4], "B2..B4": [0, -2]}) == [
        'brief: cases.snow.nodal."B2..B4": found a second load on B2; expected each node once, '
        "named itself or through a range. Shorten the range, or add the loads."
    ]


def test_crossing_members_are_a_caution_with_their_names() -> None:
    """Two members that cross away from a node are allowed, and told."""
    crossed = changed(groups__diagonals__members=["B0..B3 to A1..A4", "A3-B4"])
    assert [text for text in read(crossed).cautions if "cross" in text] == [
        "1 pair of members cross without a node (B3-A4 and A3-B4): they are taken to pass each "
        "other freely, each over its whole length; put a node where they are joined."
    ]
    assert not any("cross" in text for text in read(GIRDER).cautions)
