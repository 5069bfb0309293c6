"""Resistances and load combinations of one safety format."""

from __future__ import annotations

import pytest

from sizing.brief.toml_reader import read_brief
from sizing.errors import InputError
from sizing.formulation import formulate

BRIEF = """
title = "Bracket, invented"
units = {{ force = "kN", length = "m" }}
minimise = "mass"
combination_rule = "{rule}"
[nodes]
A = [0.0, 0.0]
B = [3.0, 0.0]
C = [0.0, 3.0]
[supports]
A = {{ held = ["x", "y"] }}
C = {{ held = ["x", "y"] }}
[groups.all]
members = ["A-B", "B-C"]
[cases.own]
kind = "permanent"
nodal = {{ B = ["0 kN", "-10 kN"] }}
[cases.snow]
kind = "snow"
nodal = {{ B = ["0 kN", "-20 kN"] }}
[options.one]
standard = "{standard}"
grade = "{grade}"
catalogue = "{catalogue}"
{setting}
"""
STEEL = ("EN 1993-1-1", "S355", "square-hollow-sections", "")
TIMBER = ("EN 1995-1-1", "C24", "solid-timber", "")
US_LRFD = ("AISC 360", "A500 Gr C", "hss-square", 'method = "LRFD"')
US_ASD = ("AISC 360", "A500 Gr C", "hss-square", 'method = "ASD"')
WOOD_ASD = ("NDS", "DF-L No.2", "dimension-lumber", 'method = "ASD"')


def formulated(folder, rule, option):
    standard, grade, catalogue, setting = option
    path = folder / "bracket.toml"
    path.write_text(
        BRIEF.format(
            rule=rule, standard=standard, grade=grade, catalogue=catalogue, setting=setting
        ),
        encoding="utf-8",
    )
    brief = read_brief(path)
    return formulate(brief, brief.options[0])


@pytest.mark.parametrize("option", [STEEL, TIMBER, US_LRFD])
def test_design_resistances_refuse_service_level_combinations(tmp_path, option):
    """Allowable-stress combinations leave the load factors out: no design resistance goes there."""
    with pytest.raises(InputError, match="resistances with ASD combinations"):
        formulated(tmp_path, "ASCE 7-16 ASD", option)


@pytest.mark.parametrize("option", [US_ASD, WOOD_ASD])
def test_allowable_resistances_refuse_factored_combinations(tmp_path, option):
    """Allowable strengths go with ASD combinations only."""
    with pytest.raises(InputError, match="ASD resistances with LRFD combinations"):
        formulated(tmp_path, "ASCE 7-16 LRFD", option)


@pytest.mark.parametrize(
    ("rule", "option"),
    [
        ("EN 1990", STEEL),
        ("EN 1990", TIMBER),
        ("ASCE 7-22 LRFD", US_LRFD),
        ("ASCE 7-22 ASD", US_ASD),
        ("ASCE 7-16 ASD", WOOD_ASD),
    ],
)
def test_one_format_goes(tmp_path, rule, option):
    """Each standard takes the combinations of its own format."""
    assert formulated(tmp_path, rule, option).problem.allowed.any()
