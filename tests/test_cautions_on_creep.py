"""The caution that a deflection limit leaves out creep (EN 1995-1-1, 2.2.3, eq. 2.3)."""

import tomllib
from pathlib import Path

import pytest

from sizing.brief.toml_reader import read_brief
from sizing.job import pick_job

BRIEF = """
title = "Shed, invented"
units = { force = "kN", length = "m" }
minimise = "mass"

[nodes]
A0 = [0, 0]
A1 = [6, 0]
B = [3, 2]

[supports]
A0 = { held = ["x", "y"] }
A1 = { held = ["y"] }

[groups.all]
members = ["A0-A1", "A0-B", "B-A1"]
buckling_length = 1.0

[cases.g]
kind = "permanent"
nodal = { B = [0, -10] }

[[combinations]]
name = "U1"
state = "strength"
factors = { g = 1.35 }

[[combinations]]
name = "S1"
state = "serviceability"
factors = { g = 1.0 }

[[deflection_limits]]
name = "sag"
nodes = ["B"]
limit = "span/250"
component = "COMPONENT"

[options.one]
"""
TIMBER = 'standard = "EN 1995-1-1"\ngrade = "GL24h"\ncatalogue = "glulam"\nservice_class = 2\n'
STEEL = 'standard = "EN 1993-1-1"\ngrade = "S355"\ncatalogue = "square-hollow-sections"\n'


@pytest.mark.parametrize(
    ("option", "component", "warned"),
    [(TIMBER, "instantaneous", True), (TIMBER, "final", False), (STEEL, "instantaneous", False)],
)
def test_elastic_limits_of_timber_are_cautioned_against(
    tmp_path: Path, option: str, component: str, warned: bool
) -> None:
    """Only timber with an elastic limit is told that creep is left out, with kdef of Table 3.2."""
    text = BRIEF.replace("COMPONENT", component) + option
    assert tomllib.loads(text)
    (tmp_path / "brief.toml").write_text(text, encoding="utf-8")
    answer = pick_job(read_brief(tmp_path / "brief.toml")).options[0]
    told = [line for line in answer.cautions if "without creep in sag" in line]
    assert bool(told) is warned
    assert not warned or "1.80 times" in told[0]


@pytest.mark.parametrize(("node", "warned"), [("B", False), ("A1", True)])
def test_a_final_limit_of_the_same_movement_silences_the_caution(
    tmp_path: Path, node: str, warned: bool
) -> None:
    """The elastic limit is complete beside a final one of its nodes, not beside one of others."""
    final = f"""
[[deflection_limits]]
name = "with creep"
nodes = ["{node}"]
direction = "y"
limit = "span/200"
component = "final"

[options.one]
"""
    text = BRIEF.replace("COMPONENT", "instantaneous").replace("\n[options.one]\n", final) + TIMBER
    (tmp_path / "brief.toml").write_text(text, encoding="utf-8")
    answer = pick_job(read_brief(tmp_path / "brief.toml")).options[0]
    assert any("without creep in sag" in line for line in answer.cautions) is warned
