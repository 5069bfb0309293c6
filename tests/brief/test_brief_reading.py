"""A good brief is read into SI records, whatever units and spellings it is written in."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import pytest

from sizing.brief.model import Brief, BucklingLength, SlendernessLimits, SourceFile, Units
from sizing.brief.toml_reader import brief_from_tables, read_brief

# A plane truss with round numbers in feet, inches and kips; invented.
IN_KIP_AND_FEET = """
title = "Invented girder"
units = { force = "kip", length = "ft" }
[nodes]
A0 = [0, 0]
A1 = [10, 0]
A2 = [20, 0]
B1 = [10, 7.5]
[supports]
A0 = { held = ["x", "y"] }
A2 = { held = ["Y"] }
[groups.bottom-chord]
members = ["A0-A1", "A1 - A2"]
buckling_length = { in_plane = 0.9, out_of_plane = 20 }
[groups.webs]
members = ["A0-B1", "B1-A2", "A1–B1"]
buckling_length = 1.0
[cases.dead]
kind = "permanent"
self_weight = true
nodal = { B1 = [0, -3] }
[cases.snow]
kind = "snow"
nodal = { B1 = [1.5, -12] }
[[combinations]]
name = "U1"
state = "strength"
factors = { dead = 1.35, snow = 1.5 }
[[combinations]]
name = "S1"
state = "serviceability"
factors = { dead = 1, snow = 1 }
[[deflection_limits]]
name = "sag"
nodes = ["A1", "B1"]
limit = "1 in"
[options.steel]
standard = "EN 1993-1-1"
grade = "S355"
catalogue = "square-hollow-sections"
service_class = 2
""".replace("out_of_plane = 20", 'out_of_plane = "20 ft"')

NO_OWN_WEIGHT = (
    "No load case has self_weight = true: the members' own weight is left out unless the nodal "
    "loads include it."
)


def read(folder: Path, text: str, name: str = "brief.toml") -> Brief:
    path = folder / name
    path.write_bytes(text.encode())
    return read_brief(path)


def same(brief: Brief) -> Brief:
    """The brief without what rightly differs: file, units, wording of a limit."""
    return replace(
        brief,
        source=SourceFile(name="", path=Path(), sha256=""),
        units=Units(),
        deflection_limits=tuple(replace(d, limit_text="") for d in brief.deflection_limits),
    )


def in_units(force: str, length: str, numbers: dict[str, str]) -> str:
    text = IN_KIP_AND_FEET.replace(
        'force = "kip", length = "ft"', f'force = "{force}", length = "{length}"'
    )
    for old, new in numbers.items():
        text = text.replace(old, new)
    return text


OTHER_UNITS = {
    "kip and inches": in_units(
        "kip", "in", {"[10, 0]": "[120, 0]", "[20, 0]": "[240, 0]", "[10, 7.5]": "[120, 90]",
                      '"20 ft"': '"240 in"', '"1 in"': "1"},
    ),
    "lbf and feet": in_units(
        "lbf", "ft", {"[0, -3]": "[0, -3000]", "[1.5, -12]": "[1500, -12000]"}
    ),
    "kN and m": in_units(
        "kN", "m",
        {"[10, 0]": "[3.048, 0]", "[20, 0]": "[6.096, 0.0]", "[10, 7.5]": "[3.048, 2.286]",
         '"20 ft"': '"6.096 m"', '"1 in"': "0.0254",
         "[0, -3]": '[0, "-3 kip"]', "[1.5, -12]": '["1.5 kip", "\u221212 kip"]'},
    ),
    "N and mm": in_units(
        "N", "mm",
        {"[10, 0]": "[3048, 0]", "[20, 0]": "[6096, 0]", "[10, 7.5]": "[3048, 2286]",
         '"20 ft"': '"609.6 cm"', '"1 in"': "25.4",
         "[0, -3]": "[0, -13344.6648457815]", "[1.5, -12]": "[6672.33242289075, -53378.659383126]"},
    ),
    "N and mm, text with units": in_units(
        "N", "mm",
        {"[10, 0]": '["10 ft", 0]', "[20, 0]": '["240 in", 0]', "[10, 7.5]": '["3.048 m", "90 in"]',
         "[0, -3]": '[0, "-3000 lbf"]', "[1.5, -12]": '["1500 lbf", "-12 kip"]'},
    ),
}  # fmt: skip


@pytest.mark.parametrize("units", OTHER_UNITS)
def test_the_same_truss_in_other_units_is_the_same_brief(units: str, tmp_path: Path) -> None:
    """Feet and kips, inches, pounds, kN and m, N and mm, or text with units: equal to the bit."""
    assert same(read(tmp_path, OTHER_UNITS[units])) == same(read(tmp_path, IN_KIP_AND_FEET))


def test_the_records_hold_what_was_written(tmp_path: Path) -> None:
    """Every record of a small brief, in SI units."""
    brief = read(tmp_path, IN_KIP_AND_FEET)
    foot, kip = 0.3048, 4448.2216152605
    assert brief.title == "Invented girder"
    assert brief.dimensions == 2
    assert [n.name for n in brief.nodes] == ["A0", "A1", "A2", "B1"]
    assert brief.nodes[3].position == (3.048, 2.286)
    assert [(s.node, s.held) for s in brief.supports] == [(0, (True, True)), (2, (False, True))]
    assert [(m.name, m.mark, m.group) for m in brief.members] == [
        ("A0-A1", "BC1", 0), ("A1-A2", "BC2", 0),
        ("A0-B1", "W1", 1), ("B1-A2", "W2", 1), ("A1-B1", "W3", 1),
    ]  # fmt: skip
    assert brief.members[2].length == pytest.approx(12.5 * foot, rel=1e-15)
    assert brief.groups[0].in_plane == BucklingLength(rule="factor", value=0.9)
    assert brief.groups[0].out_of_plane == BucklingLength(rule="length", value=20 * foot)
    assert brief.buckling_lengths(0) == (0.9 * 10 * foot, 20 * foot)
    assert brief.cases[1].nodal[3] == pytest.approx((1.5 * kip, -12 * kip), rel=1e-15)
    assert [(c.name, c.factors, c.duration) for c in brief.combinations] == [
        ("U1", {0: 1.35, 1: 1.5}, "medium"), ("S1", {0: 1.0, 1: 1.0}, "medium"),
    ]  # fmt: skip
    limit = brief.deflection_limits[0]
    assert (limit.nodes, limit.direction, limit.limit) == ((1, 3), (0.0, 1.0), 0.0254)
    assert limit.combinations == (1,)
    assert brief.options[0].settings == {"service_class": 2}
    assert brief.cautions == ()


def test_line_ends_and_byte_order_mark_do_not_matter(tmp_path: Path) -> None:
    """Windows line ends and a byte-order mark are read as they should be."""
    other = "\ufeff" + IN_KIP_AND_FEET.replace("\n", "\r\n")
    assert same(read(tmp_path, other)) == same(read(tmp_path, IN_KIP_AND_FEET))


def test_tables_of_another_file_format_give_the_same_brief(tmp_path: Path) -> None:
    """Readers of other formats hand over tables and get the same brief."""
    import tomllib

    brief = read(tmp_path, IN_KIP_AND_FEET)
    tables = tomllib.loads(IN_KIP_AND_FEET)
    assert brief_from_tables(tables, brief.source) == brief


def with_group(line: str) -> str:
    return IN_KIP_AND_FEET.replace("buckling_length = 1.0\n", f"buckling_length = 1.0\n{line}\n")


def test_the_keys_of_a_group(tmp_path: Path) -> None:
    """Section depth, net section, cap, slenderness, families and patterns reach the group."""
    text = with_group(
        'section_depth = "out of plane"\nnet_section_factor = 0.85\nutilisation_cap = "90 %"\n'
        'slenderness_limits = { compression = 180 }\nfamilies = ["SHS"]\nsections = ["SHS 1*"]'
    )
    group = read(tmp_path, text).groups[1]
    assert not group.depth_in_plane
    assert (group.net_section_factor, group.utilisation_cap) == (0.85, 0.9)
    assert group.slenderness == SlendernessLimits(compression=180.0, tension=None)
    assert (group.families, group.designations) == (("SHS",), ("SHS 1*",))


@pytest.mark.parametrize(
    ("kinds", "duration"),
    [
        (("permanent", "permanent"), "permanent"),
        (("permanent", "snow"), "medium"),
        (("permanent", "imposed"), "medium"),
        (("snow", "imposed roof"), "short"),
        (("snow", "wind"), "short"),
        (("permanent", "temperature"), "medium"),
        (("permanent", "settlement"), "permanent"),
    ],
)
def test_a_combination_lasts_as_long_as_its_shortest_case(
    kinds: tuple[str, str], duration: str, tmp_path: Path
) -> None:
    """EN 1995-1-1 3.1.3(2) with the classes of Table 2.2, both from memory."""
    text = IN_KIP_AND_FEET.replace('kind = "permanent"', f'kind = "{kinds[0]}"')
    text = text.replace('kind = "snow"', f'kind = "{kinds[1]}"')
    assert read(tmp_path, text).combinations[0].duration == duration


def test_durations_can_be_stated(tmp_path: Path) -> None:
    """A case's or a combination's own duration overrides the usual one; zeros count for nothing."""
    text = IN_KIP_AND_FEET.replace('kind = "snow"', 'kind = "snow"\nduration = "short"')
    text = text.replace('"serviceability"', '"serviceability"\nduration = "long"')
    text = text.replace("snow = 1.5", "snow = 0")
    brief = read(tmp_path, text)
    assert [(c.factors, c.duration) for c in brief.combinations] == [
        ({0: 1.35}, "permanent"),
        ({0: 1.0, 1: 1.0}, "long"),
    ]


LIMIT = 'nodes = ["A1", "B1"]\nlimit = "1 in"'


@pytest.mark.parametrize(
    ("lines", "nodes", "direction", "limit"),
    [
        (LIMIT, (1, 3), (0.0, 1.0), 0.0254),
        ('nodes = "all"\nlimit = "span/240"', (1, 2, 3), (0.0, 1.0), 6.096 / 240),
        ('nodes = ["A1"]\nlimit = "height / 500"\ndirection = "x"', (1,), (1.0, 0.0), 2.286 / 500),
        ('nodes = ["A1"]\nlimit = "span/250"\nspan = "25 ft"', (1,), (0.0, 1.0), 7.62 / 250),
        ('nodes = ["A1"]\nlimit = 0.05\ndirection = [3, -4]', (1,), (0.6, -0.8), 0.01524),
    ],
)
def test_deflection_limits(
    lines: str,
    nodes: tuple[int, ...],
    direction: tuple[float, ...],
    limit: float,
    tmp_path: Path,
) -> None:
    """Lengths, parts of span and height, directions by name and by vector."""
    found = read(tmp_path, IN_KIP_AND_FEET.replace(LIMIT, lines)).deflection_limits[0]
    assert found.nodes == nodes
    assert found.direction == pytest.approx(direction)
    assert found.limit == pytest.approx(limit, rel=1e-15)


def test_a_movement_relative_to_a_node_with_creep_and_precamber(tmp_path: Path) -> None:
    """Relative movement, final component, precamber and long-term part reach the record."""
    text = IN_KIP_AND_FEET.replace(
        LIMIT,
        'nodes = ["B1"]\nrelative_to = "A1"\nlimit = "10 mm"\ncomponent = "net final"\n'
        'precamber = { dead = 1.0 }\ncombinations = ["S1"]',
    ).replace("factors = { dead = 1, snow = 1 }", "factors = { dead = 1, snow = 1 }\n"
              "long_term = { dead = 1.0, snow = 0.2 }")  # fmt: skip
    brief = read(tmp_path, text)
    limit = brief.deflection_limits[0]
    assert (limit.relative_to, limit.component, limit.precamber) == (1, "net final", {0: 1.0})
    assert brief.combinations[1].long_term == {0: 1.0, 1: 0.2}


def test_combinations_of_a_rule_follow_those_written_out(tmp_path: Path) -> None:
    """EN 1990 (6.10): 1.35 G + 1.5 Q for strength, G + Q for serviceability (from memory)."""
    text = 'combination_rule = "EN 1990"\n' + IN_KIP_AND_FEET.replace('"U1"', '"own"')
    brief = read(tmp_path, text.replace('"S1"', '"own S"'))
    assert [c.name for c in brief.combinations[:3]] == ["own", "own S", "U1"]
    made = {tuple(c.factors.items()): c.state for c in brief.combinations[2:]}
    assert made[(0, 1.35), (1, 1.5)] == "strength"
    assert made[(0, 1.0), (1, 1.0)] == "serviceability"
    limited = [brief.combinations[c].state for c in brief.deflection_limits[0].combinations]
    assert set(limited) == {"serviceability"}


def test_durations_follow_the_timber_standard(tmp_path: Path) -> None:
    """NDS Table 2.3.2 gives wind ten minutes, EN 1995-1-1 Table 2.2 short (both from memory)."""
    text = IN_KIP_AND_FEET.replace('kind = "snow"', 'kind = "wind"')
    assert read(tmp_path, text).combinations[0].duration == "short"
    american = text.replace("EN 1993-1-1", "NDS")
    assert read(tmp_path, american).combinations[0].duration == "instantaneous"


def test_an_assumed_long_term_part_is_said(tmp_path: Path) -> None:
    """A final deflection without long_term takes permanent loads in full and says so."""
    text = IN_KIP_AND_FEET.replace('limit = "1 in"', 'limit = "1 in"\ncomponent = "final"')
    brief = read(tmp_path, text)
    assert brief.combinations[1].long_term == {0: 1.0}
    assert brief.cautions == (
        "Deflection limit sag: the part of S1 that acts for long is taken with the usual psi2 of "
        "EN 1990 Table A1.1; write long_term in the combination to state it.",
    )


def girder(restraint: str, supports: str = "", limits: str = "") -> str:
    """A girder of eight panels of 2 m in two chord groups; invented."""
    bottom = [f"A{i}-A{i + 1}" for i in range(8)]
    webs = [f"A{i}-B{i}" for i in range(9)] + [f"A{i}-B{i + 1}" for i in range(8)]
    top = [f"B{i}-B{i + 1}" for i in range(8)]
    nodes = [f"A{i} = [{2 * i}, 0]\nB{i} = [{2 * i}, 1.5]" for i in range(9)]
    return "\n".join(
        [
            'units = { force = "kN", length = "m" }',
            "[nodes]",
            *nodes,
            "[supports]",
            supports or 'A0 = { held = ["x", "y"] }\nA8 = { held = ["y"] }',
            "[groups.chord-ends]",
            f"members = {[*bottom[:3], *bottom[5:]]}",
            "buckling_length = { in_plane = 1.0 }",
            restraint,
            "[groups.chord-middle]",
            f"members = {bottom[3:5]}",
            "buckling_length = { in_plane = 1.0 }",
            'restrained_nodes = ["A4"]\ncontinues_in = ["chord-ends"]',
            "[groups.others]",
            f"members = {webs + top}",
            "buckling_length = 1.0",
            '[cases.snow]\nkind = "snow"\nnodal = { B4 = [0, -9] }',
            '[[combinations]]\nname = "U1"\nstate = "strength"\nfactors = { snow = 1.5 }',
            '[[combinations]]\nname = "S1"\nstate = "serviceability"\nfactors = { snow = 1 }',
            limits,
            '[options.steel]\nstandard = "EN 1993-1-1"\ncatalogue = "square-hollow-sections"',
        ]
    )


def out_of_plane(brief: Brief) -> list[float]:
    return [brief.buckling_lengths(i)[1] for i in range(8)]


def test_buckling_lengths_between_restrained_nodes(tmp_path: Path) -> None:
    """Restraint at A0, A3, A4 and A8 of a 2 m grid: 6 m, then 2 m, then 8 m, across two groups."""
    brief = read(
        tmp_path,
        girder('restrained_nodes = ["A0", "A3", "A8"]\ncontinues_in = ["chord-middle"]'),
    )
    ends, middle = brief.groups[:2]
    # chord-ends holds A0-A1 ... A2-A3, A5-A6 ... A7-A8; chord-middle A3-A4, A4-A5.
    assert out_of_plane(brief) == pytest.approx([6.0, 6.0, 6.0, 8.0, 8.0, 8.0, 2.0, 8.0])
    assert ends.out_of_plane == BucklingLength(rule="length", value=8.0)
    assert [brief.nodes[n].name for n in ends.restrained_nodes] == ["A0", "A3", "A8"]
    assert [brief.nodes[n].name for n in middle.restrained_nodes] == ["A4"]
    assert ends.in_plane.of(2.0) == 2.0


def test_a_free_end_of_a_chord_counts_with_its_factor(tmp_path: Path) -> None:
    """A cantilever end of 4 m beyond the last restraint has twice its length (Euler)."""
    brief = read(
        tmp_path,
        girder(
            'restrained_nodes = ["A0", "A3", "A6"]\ncontinues_in = ["chord-middle"]\n'
            "unrestrained_ends = { A8 = 2.0 }"
        ),
    )
    assert out_of_plane(brief)[4:6] == pytest.approx([8.0, 8.0])


def test_spans_lie_between_neighbouring_supports(tmp_path: Path) -> None:
    """Between supports at 0, 4 and 14 m a node takes the span that it stands in."""
    limit = '[[deflection_limits]]\nname = "{0}"\nnodes = [{1}]\nlimit = "span/100"\n'
    text = girder(
        'restrained_nodes = ["A0", "A3", "A8"]\ncontinues_in = ["chord-middle"]',
        'A0 = { held = ["x", "y"] }\nA2 = { held = ["y"] }\nA7 = { held = ["y"] }',
        limit.format("left", '"A1"') + limit.format("right", '"A4"')
        + limit.format("both", '"A1", "A4"') + limit.format("end", '"A8"'),
    )  # fmt: skip
    brief = read(tmp_path, text)
    assert [d.limit for d in brief.deflection_limits] == pytest.approx([0.04, 0.1, 0.04, 0.1])
    assert brief.cautions == (
        NO_OWN_WEIGHT,
        "Deflection limit both: its nodes stand in spans of 4.000 m to 10.000 m; the smallest is "
        "taken.",
        "Deflection limit end: A8 beyond the outer supports take the span next to them; a "
        'cantilever may want a limit of its own with span = "...".',
    )


def test_the_span_of_a_space_truss_on_four_supports(tmp_path: Path) -> None:
    """A rectangle of 24 m by 3 m in plan: the span is 24 m, not the diagonal."""
    corners = {"A": (0, 0), "B": (24, 0), "C": (24, 3), "D": (0, 3)}
    text = "\n".join(
        [
            'units = { force = "kN", length = "m" }\n[nodes]\nT = [12, 1.5, 4]',
            *(f"{name} = [{x}, {y}, 0]" for name, (x, y) in corners.items()),
            "[supports]",
            *(f'{name} = {{ held = ["x", "y", "z"] }}' for name in corners),
            '[groups.legs]\nmembers = ["A-T", "B-T", "C-T", "D-T"]\nbuckling_length = 1.0',
            '[cases.wind]\nkind = "wind"\nnodal = { T = [1, 0, -2] }',
            '[[combinations]]\nname = "U1"\nstate = "strength"\nfactors = { wind = 1.5 }',
            '[[deflection_limits]]\nname = "top"\nnodes = "all"\nlimit = "span/200"',
            'combinations = ["U1"]',
            '[options.steel]\nstandard = "EN 1993-1-1"\ncatalogue = "x.csv"',
        ]
    )
    brief = read(tmp_path, text)
    limit = brief.deflection_limits[0]
    assert limit.limit == pytest.approx(0.12)
    assert [brief.nodes[n].name for n in limit.nodes] == ["T"]
    assert limit.direction == (0.0, 0.0, 1.0)
    assert brief.cautions == (
        NO_OWN_WEIGHT,
        "Deflection limit top: the span is taken as 24.000 m, the greatest distance between "
        'neighbouring supports; write span = "..." to state it.',
    )


@pytest.mark.parametrize(
    ("old", "new", "caution"),
    [
        (
            "buckling_length = 1.0\n",
            "",
            "Group webs: buckling_length is not given; each member's own length is taken in both "
            "planes, so every node of the group must be held out of plane.",
        ),
        (
            'in_plane = 0.9, out_of_plane = "20 ft"',
            "in_plane = 0.9",
            "Group bottom-chord: no buckling length out of plane is given; each member's own "
            "length is taken out of plane, so every node of the group must be held out of plane.",
        ),
        (
            "buckling_length = 1.0\n",
            "buckling_length = 12.5\n",
            "Group webs: the buckling length is 12.5 times each member's length; if a length was "
            'meant, write its unit, such as "5.0 m".',
        ),
        (
            "buckling_length = 1.0\n",
            'buckling_length = "1 ft"\n',
            "Group webs: the buckling length is 0.08 of the longest member; below 0.5 it needs "
            "restraint between the nodes that the brief does not show.",
        ),
        ("dead = 1.35, snow = 1.5", "dead = 1.35", None),
        ("[1.5, -12]", "[1.5, 12]", "Load case snow (snow) acts upwards in all; forces count "
         "positive along the axes, so a load that acts downwards is negative."),
        ("[0, -3]", "[0, 0]", "Load case dead: all its nodal forces are zero."),
        (
            'kind = "snow"',
            'kind = "snow"\nself_weight = true',
            'Load case snow: self-weight stands in a case of kind "snow".',
        ),
        (
            'kind = "snow"',
            'kind = "snow"\nself_weight = true',
            "Combination U1 counts self-weight 2 times, in the load cases dead, snow.",
        ),
    ],
)  # fmt: skip
def test_what_is_allowed_but_odd_is_said(
    old: str, new: str, caution: str | None, tmp_path: Path
) -> None:
    """Likely slips that may be meant come out as cautions of the brief."""
    assert old in IN_KIP_AND_FEET
    cautions = read(tmp_path, IN_KIP_AND_FEET.replace(old, new)).cautions
    assert (caution in cautions) if caution else (cautions == ())


def test_a_case_in_no_combination_is_said(tmp_path: Path) -> None:
    """A load case that nothing uses is a caution."""
    text = IN_KIP_AND_FEET.replace(", snow = 1.5", "").replace(", snow = 1 ", "")
    assert read(tmp_path, text).cautions == ("Load case snow is in no combination.",)


def test_a_missing_title_is_the_name_of_the_file(tmp_path: Path) -> None:
    """Without a title the schedule bears the file's name."""
    text = IN_KIP_AND_FEET.replace('title = "Invented girder"\n', "")
    assert read(tmp_path, text, "girder-7.toml").title == "girder-7"


def test_member_lengths_are_distances(tmp_path: Path) -> None:
    """Each member's length is the distance of its end nodes."""
    brief = read(tmp_path, IN_KIP_AND_FEET)
    for m in brief.members:
        ends = brief.nodes[m.start].position, brief.nodes[m.end].position
        assert m.length == math.dist(*ends)


@pytest.mark.parametrize(("factor", "cautioned"), [("1.0", True), ("1.35", False)])
def test_design_resistances_ask_for_factored_loads(
    tmp_path: Path, factor: str, cautioned: bool
) -> None:
    """Strength combinations that raise nothing are told where the standard is a Eurocode."""
    held = 'restrained_nodes = ["A0", "A3", "A8"]\ncontinues_in = ["chord-middle"]'
    text = girder(held).replace("{ snow = 1.5 }", f"{{ snow = {factor} }}")
    said = [c for c in read(tmp_path, text).cautions if c.startswith("No strength combination")]
    assert said == cautioned * [
        "No strength combination has a factor above 1, but the resistances of EN 1993-1-1 are "
        "design values: they go with factored loads, EN 1990 6.10."
    ]
