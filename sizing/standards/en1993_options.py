"""The choices that EN 1993-1-1 leaves open, read from an option's grade and settings."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from sizing.standards.contract import SettingsError
from sizing.standards.en1993_angles import LegBolts
from sizing.standards.en1993_grades import TABLES, Grade, known_grades, parse_grade
from sizing.standards.en1993_lengths import Preset
from sizing.standards.settings import SettingsReader, nearest
from sizing.standards.steel_rows import STEEL_STRENGTH

NAME = "EN 1993-1-1"
KEYS = (
    "grade_table",
    "fy",
    "fu",
    "gamma_M0",
    "gamma_M1",
    "gamma_M2",
    "hollow_sections",
    "class_4",
    "buckling_lengths",
    "chords",
    "webs",
    "web_ends",
    "angle_bolts",
    "bolt_hole",
    "bolt_pitch",
    "edge_distance",
)
RECOMMENDED = {"gamma_M0": 1.00, "gamma_M1": 1.00, "gamma_M2": 1.25}
"""EN 1993-1-1:2005, 6.1(1) NOTE 2B; National Annexes may give others (from memory)."""

GREATEST_FACTOR = 3.0
"""National Annexes ask for 1.0 to 1.5; beyond 3 it is a slip of the keyboard."""

BY_PRODUCT = "by product"
LEAVE_OUT = "leave out"
EFFECTIVE_WIDTH = "effective width"


@dataclass(frozen=True, kw_only=True)
class Options1993:
    """Everything chosen for EN 1993-1-1. ``fy``, ``fu`` in Pa override the grade table.

    ``hollow_sections``: how hollow sections were made, ``by product`` takes the catalogue's
    word. ``class_4``: ``leave out`` or ``effective width``. ``preset``: buckling lengths of
    Annex BB.1, None for the lengths as given. ``leg_bolts``: angles connected by one leg.
    """

    grade_name: str
    grade: Grade | None
    grade_table: str
    fy: float | None
    fu: float | None
    gamma_m0: float
    gamma_m1: float
    gamma_m2: float
    hollow_sections: str
    class_4: str
    preset: Preset | None
    leg_bolts: LegBolts | None
    own_factors: tuple[str, ...]


def read_options(grade: str | None, settings: Mapping[str, Any]) -> Options1993:
    """Return the choices; raise :class:`SettingsError` for the first that cannot be used."""
    reader = SettingsReader(NAME, settings, KEYS)
    table = reader.choice("grade_table", tuple(TABLES), "EN 1993-1-1")
    fy, fu = (
        reader.quantity("fy", "stress", STEEL_STRENGTH),
        reader.quantity("fu", "stress", STEEL_STRENGTH),
    )
    if fy is not None and fu is not None and fu < fy:
        raise SettingsError(
            key="fu", found=f'"{settings["fu"]}"', expected="an ultimate strength not below fy"
        )
    factors = {
        key: reader.number(key, value, at_least=1.0, at_most=GREATEST_FACTOR)
        for key, value in RECOMMENDED.items()
    }
    return Options1993(
        grade_name=grade or "steel as set",
        grade=_grade(grade, table, fy, fu),
        grade_table=table,
        fy=fy,
        fu=fu,
        gamma_m0=factors["gamma_M0"],
        gamma_m1=factors["gamma_M1"],
        gamma_m2=factors["gamma_M2"],
        hollow_sections=reader.choice(
            "hollow_sections", (BY_PRODUCT, "hot finished", "cold formed"), BY_PRODUCT
        ),
        class_4=reader.choice("class_4", (LEAVE_OUT, EFFECTIVE_WIDTH), LEAVE_OUT),
        preset=_preset(reader),
        leg_bolts=_leg_bolts(reader),
        own_factors=tuple(key for key in RECOMMENDED if reader.has(key)),
    )


def _grade(name: str | None, table: str, fy: float | None, fu: float | None) -> Grade | None:
    """Return the grade; one that the table does not know is fine when fy and fu are set."""
    names = known_grades(table)
    if name is None:
        if fy is not None and fu is not None:
            return None
        raise SettingsError(
            key="grade",
            found="nothing",
            expected="a grade such as S355, or both fy and fu",
            fix="Add the grade to the option.",
        )
    found = parse_grade(name)
    if found is not None and any(key in names for key in found.keys):
        return found
    if fy is not None and fu is not None:
        return found
    close = nearest(name, names)
    raise SettingsError(
        key="grade",
        found=f'"{name}"',
        expected=f"one of {', '.join(names)} (table {table}), or any name with fy and fu set",
        fix=f"Did you mean {close}?" if close else "",
    )


def _preset(reader: SettingsReader) -> Preset | None:
    choice = reader.choice("buckling_lengths", ("as given", "BB.1"), "as given")
    if choice == "as given":
        for key in ("chords", "webs", "web_ends"):
            reader.forbid(key, 'buckling_lengths = "as given"')
        return None
    preset = Preset(
        chords=reader.names("chords"),
        webs=reader.names("webs"),
        web_ends=reader.choice("web_ends", ("bolted", "welded"), "bolted"),
    )
    if not preset.chords and not preset.webs:
        raise SettingsError(
            key="buckling_lengths",
            found='"BB.1" without chords or webs',
            expected="the groups that it holds for",
            fix='Add chords = ["..."] and webs = ["..."], group names or patterns with *.',
        )
    return preset


def _leg_bolts(reader: SettingsReader) -> LegBolts | None:
    if not reader.has("angle_bolts"):
        for key in ("bolt_hole", "bolt_pitch", "edge_distance"):
            reader.forbid(key, "no angle_bolts")
        return None
    count = reader.number("angle_bolts", 1.0, at_least=1.0)
    if count != int(count):
        raise SettingsError(
            key="angle_bolts", found=f"{count:g}", expected="a whole number of bolts in line"
        )
    hole = reader.required_quantity("bolt_hole", "length")
    if count == 1:
        edge = reader.required_quantity("edge_distance", "length")
        reader.forbid("bolt_pitch", "angle_bolts = 1")
        if edge <= 0.5 * hole:
            raise SettingsError(
                key="edge_distance",
                found=f"{edge * 1000:g} mm",
                expected="more than half of bolt_hole",
            )
        return LegBolts(count=1, hole=hole, pitch=math.nan, edge=edge)
    pitch = reader.required_quantity("bolt_pitch", "length")
    reader.forbid("edge_distance", f"angle_bolts = {count:g}")
    if pitch < 2.2 * hole:
        raise SettingsError(
            key="bolt_pitch",
            found=f"{pitch * 1000:g} mm",
            expected=f"at least 2.2 d0 = {2200 * hole:g} mm (EN 1993-1-8 Table 3.3)",
        )
    return LegBolts(count=int(count), hole=hole, pitch=pitch, edge=math.nan)
