"""Buckling lengths of lattice structures, EN 1993-1-1:2005 Annex BB.1 (from memory)."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np

from sizing.standards.contract import IntArray, SettingsError
from sizing.standards.en1993_curves import HOLLOW
from sizing.standards.settings import matches, require_groups

AS_GIVEN, CHORD, WEB = range(3)
Place = Literal[0, 1, 2]


@dataclass(frozen=True, kw_only=True)
class Preset:
    """Which groups are chords and webs (names or patterns with * and ?), and the webs' ends.

    ``web_ends``: ``bolted`` (at least two bolts at each end) or ``welded`` (hollow sections:
    all round to a hollow chord, without cropping or flattening).
    """

    chords: tuple[str, ...]
    webs: tuple[str, ...]
    web_ends: str

    def places(self, roles: Sequence[str]) -> IntArray:
        """Return AS_GIVEN, CHORD or WEB for each group name of ``roles``."""
        return np.array(
            [
                CHORD
                if matches(role, self.chords)
                else WEB
                if matches(role, self.webs)
                else AS_GIVEN
                for role in roles
            ],
            dtype=np.intp,
        )

    def require_groups(self, roles: Sequence[str]) -> None:
        """Raise :class:`SettingsError` for a name that fits no group, or a group named twice."""
        require_groups("chords", self.chords, roles)
        require_groups("webs", self.webs, roles)
        for role in sorted(set(roles)):
            if matches(role, self.chords) and matches(role, self.webs):
                raise SettingsError(
                    key="webs", found=f'"{role}", named by chords too', expected="one of the two"
                )

    def factors(self, place: int, family: str) -> tuple[float, float]:
        """Return the factors on the buckling lengths in and out of plane.

        Chords: I or H 0.9 in plane (BB.1.1(2)B), hollow 0.9 both ways (BB.1.3(1)B). Webs: 0.9
        in plane except angles (BB.1.1(4)B); hollow 1.0 bolted (BB.1.3(2)B), 0.75 both ways
        welded (BB.1.3(3)B). Everything else 1.0 (BB.1.1(1)B).
        """
        hollow = family in HOLLOW
        if place == CHORD:
            return (0.9, 0.9) if hollow else (0.9, 1.0) if family == "I" else (1.0, 1.0)
        if place == WEB and hollow:
            return (0.75, 0.75) if self.web_ends == "welded" else (1.0, 1.0)
        if place == WEB and family != "angle":
            return 0.9, 1.0
        return 1.0, 1.0
