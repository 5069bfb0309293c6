"""Every standard by name. Modules are imported when a standard is asked for."""

from __future__ import annotations

from collections.abc import Mapping
from importlib import import_module
from typing import Any, cast

from sizing.standards.contract import SettingsError, Standard, StandardFactory
from sizing.standards.settings import nearest

STANDARDS: dict[str, str] = {
    "elastic": "sizing.standards.elastic:make_elastic",
    "EN 1993-1-1": "sizing.standards.en1993:make_en1993",
    "AISC 360": "sizing.standards.aisc360:make_aisc360",
    "EN 1995-1-1": "sizing.standards.en1995:make_en1995",
    "NDS": "sizing.standards.nds:make_nds",
}
"""Name of each standard and where its factory stands (module:function)."""

SPELLINGS: dict[str, tuple[str, Mapping[str, Any]]] = {
    "EN 1993-1-1:2005": ("EN 1993-1-1", {}),
    "EN 1993": ("EN 1993-1-1", {}),
    "EN1993-1-1": ("EN 1993-1-1", {}),
    "Eurocode 3": ("EN 1993-1-1", {}),
    "EC3": ("EN 1993-1-1", {}),
    "AISC 360-22": ("AISC 360", {"edition": "2022"}),
    "AISC 360-16": ("AISC 360", {"edition": "2016"}),
    "AISC 360 LRFD": ("AISC 360", {"method": "LRFD"}),
    "AISC 360 ASD": ("AISC 360", {"method": "ASD"}),
    "ANSI/AISC 360": ("AISC 360", {}),
    "ANSI/AISC 360-22": ("AISC 360", {"edition": "2022"}),
    "ANSI/AISC 360-16": ("AISC 360", {"edition": "2016"}),
    "EN 1995-1-1:2004": ("EN 1995-1-1", {}),
    "EN 1995": ("EN 1995-1-1", {}),
    "Eurocode 5": ("EN 1995-1-1", {}),
    "EC5": ("EN 1995-1-1", {}),
    "NDS 2018": ("NDS", {}),
    "ANSI/AWC NDS-2018": ("NDS", {}),
    "NDS 2018 ASD": ("NDS", {"method": "ASD"}),
    "NDS 2018 LRFD": ("NDS", {"method": "LRFD"}),
    "NDS ASD": ("NDS", {"method": "ASD"}),
    "NDS LRFD": ("NDS", {"method": "LRFD"}),
    "allowable stress": ("elastic", {}),
}
"""Other spellings: the name they stand for and the settings that they imply."""


def standard_names() -> tuple[str, ...]:
    """Return the names of all standards, in the order of the registry."""
    return tuple(STANDARDS)


def make_standard(name: str, grade: str | None, settings: Mapping[str, Any]) -> Standard:
    """Return the standard ``name`` with its grade and settings.

    ``name`` may be any spelling in :data:`SPELLINGS`; case and spacing do not matter. Raises
    :class:`SettingsError` for an unknown name (key ``standard``), grade or setting.
    """
    known, implied = resolve(name)
    for key, value in implied.items():
        if key in settings and settings[key] != value:
            raise SettingsError(
                key=key,
                found=f'"{settings[key]}"',
                expected=f'"{value}", which the name "{name}" says already',
                fix=f'Remove {key}, or write standard = "{known}".',
            )
    return factory_of(known)(grade, {**implied, **settings})


def resolve(name: str) -> tuple[str, Mapping[str, Any]]:
    """Return the registered name and implied settings of one spelling."""
    table: dict[str, tuple[str, Mapping[str, Any]]] = {n: (n, {}) for n in STANDARDS}
    table |= SPELLINGS
    folded = {_folded(spelling): found for spelling, found in table.items()}
    if _folded(name) in folded:
        return folded[_folded(name)]
    close = nearest(name, list(table))
    raise SettingsError(
        key="standard",
        found=f'"{name}"',
        expected="one of " + ", ".join(f'"{known}"' for known in STANDARDS),
        fix=f'Did you mean "{close}"?' if close else "",
    )


def factory_of(name: str) -> StandardFactory:
    """Return the factory of the registered standard ``name``."""
    module, function = STANDARDS[name].split(":")
    return cast(StandardFactory, getattr(import_module(module), function))


def _folded(name: str) -> str:
    return "".join(name.casefold().split())
