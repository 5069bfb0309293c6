"""Time of a resistance table of 200 members, 150 sections and 25 durations, per standard.

pytest -m bench -s tests/bench/test_resistance_tables.py
"""

from __future__ import annotations

import time
from dataclasses import fields, replace
from pathlib import Path

import numpy as np
import pytest

from sizing.brief.catalogue_reader import read_catalogue
from sizing.standards.contract import MemberConditions
from sizing.standards.registry import make_standard

MEMBERS, SECTIONS = 200, 150
DURATIONS = ("permanent", "long", "medium", "short", "instantaneous") * 5
CASES = (
    ("EN 1993-1-1", "S355", "square-hollow-sections"),
    ("AISC 360", "A500 Gr C", "hss-square"),
    ("EN 1995-1-1", "C24", "solid-timber"),
    ("NDS", "DF-L No.1", "dimension-lumber"),
)


def conditions():
    rng = np.random.default_rng(1)
    length = rng.uniform(1.0, 6.0, MEMBERS)
    return MemberConditions(
        length=length,
        in_plane=0.9 * length,
        out_of_plane=rng.uniform(1.0, 3.0, MEMBERS) * length,
        depth_in_plane=np.ones(MEMBERS, dtype=bool),
        net_factor=np.full(MEMBERS, 0.8),
        max_slenderness_compression=np.full(MEMBERS, 180.0),
        max_slenderness_tension=np.full(MEMBERS, 300.0),
        role=("web",) * MEMBERS,
    )


def resized(catalogue):
    """Repeat the rows of a catalogue until there are 150."""
    take = np.arange(SECTIONS) % len(catalogue)
    changes = {}
    for field in fields(catalogue):
        value = getattr(catalogue, field.name)
        if isinstance(value, np.ndarray):
            changes[field.name] = value[take]
        elif field.name in ("designation", "row", "family", "product", "plies") and value:
            changes[field.name] = tuple(value[i] for i in take)
    return replace(catalogue, **changes)


@pytest.mark.bench
@pytest.mark.parametrize(("standard", "grade", "name"), CASES)
def test_resistance_table(standard, grade, name, capsys):
    """The table has every member, section and duration; its time is printed."""
    made = make_standard(standard, grade, {})
    catalogue = resized(read_catalogue(name, Path()))
    times = []
    for _ in range(5):
        start = time.perf_counter()
        table = made.resistances(catalogue, conditions(), DURATIONS)
        times.append(time.perf_counter() - start)
    assert table.tension.shape == table.compression.shape == (MEMBERS, SECTIONS, len(DURATIONS))
    with capsys.disabled():
        print(f"\n{standard}: {1e3 * min(times):.0f} to {1e3 * max(times):.0f} ms")
