"""Which catalogue rows are timber sections, their sides, and the table over load durations."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.conditions import Reasons, Resistances
from sizing.standards.contract import BoolArray, FloatArray, IntArray, ResistanceTable

NOT_SOLID = "not a solid rectangle: timber rules here cover solid rectangular sections only"
NO_SIDES = "the catalogue gives neither sides nor second moments of area"

SQRT12 = math.sqrt(12.0)


def smaller_and_larger(catalogue: Catalogue) -> tuple[FloatArray, FloatArray]:
    """Return the sides (s,) in m of each rectangle, or of one board of a built-up section.

    As given, else √12 i about each axis. A built-up row states second moments of boards that
    slip freely, so that √12 i is the side of one board about either axis.
    """
    apart = is_built_up(catalogue)
    no_depth, no_width = np.isnan(catalogue.depth) | apart, np.isnan(catalogue.width) | apart
    depth = np.where(no_depth, SQRT12 * catalogue.r_major, catalogue.depth)
    width = np.where(no_width, SQRT12 * catalogue.r_minor, catalogue.width)
    return np.minimum(depth, width), np.maximum(depth, width)


def joined(catalogue: Catalogue) -> Catalogue:
    """Return the catalogue with built-up sections in one piece: I = A width²/12 across plies."""
    whole = catalogue.area * np.square(catalogue.width) / 12.0
    built_up = is_built_up(catalogue) & ~np.isnan(whole)
    return replace(catalogue, i_minor=np.where(built_up, whole, catalogue.i_minor))


def is_rectangle(catalogue: Catalogue) -> BoolArray:
    """Return which rows (s,) are solid rectangles."""
    return np.array([family == "rectangle" for family in catalogue.family], dtype=bool)


def is_built_up(catalogue: Catalogue) -> BoolArray:
    """Return which rows (s,) the catalogue's product column calls built-up (several plies)."""
    folded = [product.casefold().replace(" ", "-") for product in catalogue.product]
    return np.array(["built-up" in product for product in folded], dtype=bool)


def product_names(catalogue: Catalogue, standard: str) -> BoolArray:
    """Return which rows (s,) name the product ``standard`` (e.g. ``14080``)."""
    return np.array([standard in product for product in catalogue.product], dtype=bool)


def is_sawn(catalogue: Catalogue) -> BoolArray:
    """Return which rows (s,) name a product of sawn timber: EN 336, EN 14081 or NDS sizes."""
    marks = ("EN 336", "14081", "NDS")
    return np.asarray(np.logical_or.reduce([product_names(catalogue, mark) for mark in marks]))


class Exclusions:
    """Collects why sections are not usable; the first reason of a section stands."""

    def __init__(self, catalogue: Catalogue, reasons: Reasons) -> None:
        self._reasons = reasons
        self.note: IntArray = np.zeros(len(catalogue), dtype=np.intp)
        smaller, larger = smaller_and_larger(catalogue)
        self.exclude(~is_rectangle(catalogue), NOT_SOLID)
        self.exclude(np.isnan(smaller) | np.isnan(larger), NO_SIDES)

    def exclude(self, which: BoolArray, reason: str) -> None:
        """Leave out the sections ``which`` (s,) because of ``reason``."""
        new = which & (self.note == 0)
        if new.any():
            self.note[new] = self._reasons.index(reason)

    @property
    def usable(self) -> BoolArray:
        """Which sections (s,) have no reason against them."""
        return np.asarray(self.note == 0)


def over_durations(
    found: Sequence[Resistances],
    inverse: IntArray,
    durations: Sequence[LoadDuration],
    clauses: tuple[str, ...],
    reasons: tuple[str, ...],
) -> ResistanceTable:
    """Return the table from one :class:`Resistances` of distinct members per load duration.

    Slenderness, use and notes do not depend on the duration and are those of the first.
    """
    first = found[0]
    return ResistanceTable(
        durations=tuple(durations),
        clauses=clauses,
        reasons=reasons,
        tension=np.stack([each.tension for each in found], axis=2)[inverse],
        compression=np.stack([each.compression for each in found], axis=2)[inverse],
        tension_clause=np.stack([each.tension_clause for each in found], axis=2)[inverse],
        compression_clause=np.stack([each.compression_clause for each in found], axis=2)[inverse],
        slenderness_in=first.slenderness_in[inverse],
        slenderness_out=first.slenderness_out[inverse],
        usable=first.usable[inverse],
        notes=first.notes[inverse],
    )
