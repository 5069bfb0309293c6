"""Catalogue rows with holes and absurd sizes: finite numbers, a reason for every nought."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from sizing.standards.registry import make_standard

OWN = {"Fy": "50 ksi", "Fu": "65 ksi"}
ONE_BOLT = {"angle_bolts": 1, "bolt_hole": "18 mm", "edge_distance": "40 mm"}
STANDARDS = {
    "elastic": (
        "elastic",
        None,
        {
            "E": "210 GPa",
            "density": "7850 kg/m3",
            "allowable_tension": "150 MPa",
            "allowable_compression": "150 MPa",
            "buckling_safety_factor": 2,
        },
    ),
    "EN 1993 plain": ("EN 1993-1-1", "S355", {}),
    "EN 1993 annex": (
        "EN 1993-1-1",
        "S460NH",
        {"class_4": "effective width", "buckling_lengths": "BB.1", "webs": "web"},
    ),
    "EN 1993 own": ("EN 1993-1-1", None, {"fy": "355 MPa", "fu": "500 MPa"} | ONE_BOLT),
    "AISC plain": ("AISC 360", None, OWN),
    "AISC angles": (
        "AISC 360",
        None,
        OWN | {"single_angles": "E5 planar", "webs": "web", "slenderness_advice": "enforce"},
    ),
}
SIZES = {
    "i_major": 1e-6,
    "i_minor": 8e-7,
    "i_least": 5e-7,
    "depth": 0.1,
    "width": 0.08,
    "thickness": 0.004,
    "flange": 0.006,
    "root_radius": 0.005,
}
FAMILIES = ("SHS", "RHS", "CHS", "angle", "I", "rectangle", "other")
PRODUCTS = ("", "EN 10210-2", "EN 10219-2", "ASTM A500", "EN 10058", "welded", "EN 338")

rows = st.builds(
    lambda kept, values: {k: v if k in kept else math.nan for k, v in SIZES.items()} | values,
    st.sets(st.sampled_from(sorted(SIZES)), min_size=5),
    st.fixed_dictionaries(
        {
            "family": st.sampled_from(FAMILIES),
            "product": st.sampled_from(PRODUCTS),
            "area": st.sampled_from([1e-5, 1e-3, 0.1]),
        },
        optional={"thickness": st.sampled_from([1e-5, 0.04, 0.06, 0.09])},
    ),
)


@pytest.mark.parametrize("case", STANDARDS)
@settings(max_examples=40)
@given(row=rows)
def test_hostile_rows(catalogue_of, members_of, case, row):
    """Whatever a row lacks: finite numbers, noughts with reasons, working ends at the table."""
    standard = make_standard(*STANDARDS[case])
    catalogue = catalogue_of(row)
    members = members_of(
        length=[1e-9, 0.0, 1.0, 5.0, 1e4],
        in_plane=[0.0, 0.0, 1.0, 5.0, 1e4],
        out_of_plane=[0.0, 0.0, 3.0, 1e-6, 1e5],
        net_factor=[1.0, 0.5, 1e-6, 1.0, 1.0],
        max_slenderness_compression=180.0,
        max_slenderness_tension=[300.0, math.inf, 300.0, 50.0, math.inf],
        role=("chord", "post", "web", "post", "web"),
    )
    table = standard.resistances(catalogue, members, ("short",))
    for values in (table.tension, table.compression):
        assert np.isfinite(values).all()
        assert (values >= 0.0).all()
    silent = (table.notes == 0) & ((table.compression[..., 0] == 0.0) | ~table.usable)
    assert not silent.any()
    for member in range(5):
        for sense, values in (("tension", table.tension), ("compression", table.compression)):
            lines = standard.working(catalogue, 0, members, member, "short", sense)
            assert lines[-1].value == values[member, 0, 0]
            assert all(math.isfinite(line.value) for line in lines)
            assert all(line.symbol and line.clause and line.expression for line in lines)
