"""Distinct member conditions and the table that serves all members from them."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from sizing.standards.conditions import Reasons, beyond, distinct_members, take_members
from sizing.standards.elastic import make_elastic

SETTINGS = {
    "E": "210 GPa",
    "density": "7850 kg/m3",
    "allowable_tension": "160 MPa",
    "allowable_compression": "140 MPa",
    "buckling_safety_factor": 2.0,
}
ROUND_BAR = {"area": 2e-3, "i_major": 3e-7, "family": "other"}
SLENDER_BAR = {"area": 1e-3, "i_major": 8e-8, "i_minor": 2e-8, "family": "other"}


@given(
    rows=st.lists(
        st.tuples(
            st.sampled_from([1.0, 2.0]),
            st.sampled_from([1.0, 4.0]),
            st.booleans(),
            st.sampled_from(["chord", "web"]),
        ),
        min_size=1,
        max_size=30,
    )
)
def test_members_come_back_from_their_distinct_conditions(members_of, rows):
    """Spreading the distinct conditions gives the members; no two distinct ones are alike."""
    length, out, upright, role = (list(column) for column in zip(*rows, strict=True))
    members = members_of(length=length, out_of_plane=out, depth_in_plane=upright, role=role)
    distinct, inverse = distinct_members(members)
    assert len(set(rows)) == distinct.length.size
    back = take_members(distinct, inverse)
    for name in ("length", "in_plane", "out_of_plane", "depth_in_plane", "net_factor"):
        np.testing.assert_array_equal(getattr(back, name), getattr(members, name))
    assert back.role == members.role


def test_order_of_members_does_not_matter(catalogue_of, members_of):
    """The table of shuffled members is the shuffled table."""
    standard = make_elastic(None, SETTINGS)
    catalogue = catalogue_of(ROUND_BAR, SLENDER_BAR)
    length = np.array([1.0, 3.0, 2.0, 1.0, 7.0])
    order = np.array([4, 2, 0, 1, 3])
    straight = standard.resistances(catalogue, members_of(length=length), ("short",))
    shuffled = standard.resistances(catalogue, members_of(length=length[order]), ("short",))
    np.testing.assert_array_equal(straight.compression[order], shuffled.compression)


def test_durations_share_one_read_only_table(catalogue_of, members_of):
    """Twenty-five durations cost no memory, and nobody can alter the shared numbers."""
    table = make_elastic(None, SETTINGS).resistances(
        catalogue_of(ROUND_BAR), members_of(length=[1.0, 2.0]), ("short",) * 25
    )
    assert table.tension.shape == (2, 1, 25)
    assert table.tension.strides[2] == 0
    with pytest.raises(ValueError, match="read-only"):
        table.tension[0, 0, 0] = 1.0


def test_a_limit_allows_rounding_only():
    """35 times 1e-3 over 0.1e-3 may not fail a limit of 350 by its last digit."""
    found = beyond(np.array([350.0 * (1 + 1e-12), 350.001]), 350.0)
    assert list(found) == [False, True]


def test_reasons_are_kept_once():
    """Reason 0 is empty; the same text keeps its index."""
    reasons = Reasons()
    assert [reasons.index(text) for text in ("", "thin", "slender", "thin")] == [0, 1, 2, 1]
    assert reasons.texts() == ("", "thin", "slender")
