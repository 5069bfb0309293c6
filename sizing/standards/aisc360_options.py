"""The choices that AISC 360 leaves open, read from an option's grade and settings."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from sizing.standards.aisc360_grades import GradeUS, find_grade, grade_names
from sizing.standards.contract import SettingsError
from sizing.standards.settings import SettingsReader, matches, nearest
from sizing.standards.steel_rows import STEEL_STRENGTH

NAME = "AISC 360"
KEYS = (
    "method",
    "edition",
    "Fy",
    "Fu",
    "shear_lag_factor",
    "slender_elements",
    "single_angles",
    "angle_leg",
    "webs",
    "slenderness_advice",
)
FACTORS = {"LRFD": (0.90, 0.75, 0.90), "ASD": (1 / 1.67, 1 / 2.00, 1 / 1.67)}
"""φ or 1/Ω of yielding (D2(a)), rupture (D2(b)) and compression (E1)."""

FACTOR_TEXTS = {"LRFD": ("φ", "0.90", "0.75"), "ASD": ("Ω", "1.67", "2.00")}
ADVICE_COMPRESSION = 200.0
ADVICE_TENSION = 300.0


@dataclass(frozen=True, kw_only=True)
class Options360:
    """Everything chosen for AISC 360. ``Fy``, ``Fu`` in Pa override the grade table.

    ``shear_lag`` is U of Table D3.1. ``single_angles``: ``E3`` or the E5 rule ``planar`` or
    ``space``, which holds for the groups in ``webs`` (all, when empty). ``enforce`` turns the
    advice on slenderness into limits.
    """

    grade_name: str
    grade: GradeUS | None
    edition: str
    method: str
    Fy: float | None
    Fu: float | None
    shear_lag: float
    slender_elements: str
    single_angles: str
    shorter_leg: bool
    webs: tuple[str, ...]
    enforce: bool

    def is_web(self, role: str) -> bool:
        """Return whether the E5 rule holds for the group ``role``."""
        if self.single_angles == "E3":
            return False
        return not self.webs or matches(role, self.webs)


def read_options(grade: str | None, settings: Mapping[str, Any]) -> Options360:
    """Return the choices; raise :class:`SettingsError` for the first that cannot be used."""
    reader = SettingsReader(NAME, settings, KEYS)
    Fy, Fu = (
        reader.quantity("Fy", "stress", STEEL_STRENGTH),
        reader.quantity("Fu", "stress", STEEL_STRENGTH),
    )
    if Fy is not None and Fu is not None and Fu < Fy:
        raise SettingsError(
            key="Fu", found=f'"{settings["Fu"]}"', expected="a tensile strength not below Fy"
        )
    angles = reader.choice("single_angles", ("E3", "E5 planar", "E5 space"), "E3")
    if angles == "E3":
        for key in ("angle_leg", "webs"):
            reader.forbid(key, 'single_angles = "E3"')
    return Options360(
        grade_name=grade or "steel as set",
        grade=_grade(grade, own=Fy is not None and Fu is not None),
        edition=reader.choice("edition", ("2022", "2016"), "2022"),
        method=reader.choice("method", tuple(FACTORS), "LRFD"),
        Fy=Fy,
        Fu=Fu,
        shear_lag=reader.number("shear_lag_factor", 1.0, above=0.0, at_most=1.0),
        slender_elements=reader.choice("slender_elements", ("E7", "leave out"), "E7"),
        single_angles=angles,
        shorter_leg=reader.choice("angle_leg", ("longer", "shorter"), "longer") == "shorter",
        webs=reader.names("webs"),
        enforce=reader.choice("slenderness_advice", ("mention", "enforce"), "mention") == "enforce",
    )


def _grade(name: str | None, *, own: bool) -> GradeUS | None:
    """Return the grade; a name that the table does not know is fine when Fy and Fu are set."""
    found = find_grade(name) if name is not None else None
    if found is not None or own:
        return found
    close = nearest(name, grade_names()) if name is not None else None
    raise SettingsError(
        key="grade",
        found="nothing" if name is None else f'"{name}"',
        expected=f"one of {', '.join(grade_names())}, or any name with Fy and Fu set",
        fix=f"Did you mean {close}?" if close else "",
    )
