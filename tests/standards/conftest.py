"""Builders of small catalogues and member conditions for the tests of the standards."""

from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from hypothesis import settings

from sizing.brief.model import SourceFile
from sizing.brief.sections import Catalogue
from sizing.standards.contract import MemberConditions

# Time is measured in tests/bench; a busy machine must not fail a property.
settings.register_profile("no deadline", deadline=None)
settings.load_profile("no deadline")

NUMBERS = (
    "area",
    "i_major",
    "i_minor",
    "i_least",
    "mass",
    "depth",
    "width",
    "thickness",
    "flange",
    "root_radius",
    "surface",
    "price",
)


def build_catalogue(*rows: dict[str, object]) -> Catalogue:
    """Return a catalogue of rows given in m; what a row leaves out is NaN, i_minor = i_major."""
    full = []
    for k, row in enumerate(rows):
        filled: dict[str, object] = dict.fromkeys(NUMBERS, math.nan)
        filled |= {"designation": f"row {k}", "family": "other", "product": ""} | row
        if math.isnan(filled["i_minor"]):
            filled["i_minor"] = filled["i_major"]
        if math.isnan(filled["i_least"]):
            filled["i_least"] = min(filled["i_major"], filled["i_minor"])
        full.append(filled)
    return Catalogue(
        name="invented",
        source=SourceFile(name="invented.csv", path=Path("invented.csv"), sha256="0" * 64),
        header=("invented",),
        designation=tuple(str(row["designation"]) for row in full),
        row=tuple(range(2, len(full) + 2)),
        family=tuple(str(row["family"]) for row in full),
        product=tuple(str(row["product"]) for row in full),
        **{name: np.array([row[name] for row in full], dtype=float) for name in NUMBERS},
    )


def build_members(**values: object) -> MemberConditions:
    """Return conditions of one or more members; lengths in m, ``length`` alone sets all three."""
    length = np.atleast_1d(np.asarray(values.get("length", 1.0), dtype=float))
    usual: dict[str, object] = {
        "in_plane": length,
        "out_of_plane": length,
        "depth_in_plane": True,
        "net_factor": 1.0,
        "max_slenderness_compression": math.inf,
        "max_slenderness_tension": math.inf,
        "role": "group",
    }
    given = usual | values
    role = given.pop("role")
    given["length"] = length
    arrays = {
        name: np.broadcast_to(np.asarray(value), length.shape).copy()
        for name, value in given.items()
    }
    roles = (role,) * length.size if isinstance(role, str) else tuple(role)
    return MemberConditions(**arrays, role=roles)


@pytest.fixture(scope="session")
def catalogue_of() -> Callable[..., Catalogue]:
    """A function that builds a catalogue from row dictionaries."""
    return build_catalogue


@pytest.fixture(scope="session")
def members_of() -> Callable[..., MemberConditions]:
    """A function that builds member conditions from keywords."""
    return build_members


@pytest.fixture(scope="session")
def rectangles() -> Callable[..., Catalogue]:
    """A function that builds solid rectangles from (width, depth) pairs in m, width <= depth."""

    def build(*sides: tuple[float, float], product: str = "") -> Catalogue:
        return build_catalogue(
            *(
                {
                    "family": "rectangle",
                    "product": product,
                    "width": b,
                    "depth": h,
                    "area": b * h,
                    "i_major": b * h**3 / 12.0,
                    "i_minor": h * b**3 / 12.0,
                }
                for b, h in sides
            )
        )

    return build
