"""Cautions about supply and cutting: what is not available, spliced, or too long."""

from __future__ import annotations

from sizing.brief.model import Brief
from sizing.brief.sections import Catalogue
from sizing.cutting import TOO_LONG_TO_CARRY, TOO_LONG_TO_CUT
from sizing.results import CuttingResult

MOST_NAMED = 8
"""Sections named in one line; the rest is counted."""


def supply_cautions(
    brief: Brief,
    catalogue: Catalogue,
    sections: list[int],
    cutting: tuple[CuttingResult, ...],
) -> tuple[str, ...]:
    """Return what whoever orders the sections must know, in sentences."""
    return (
        *_availability(brief, catalogue, sections),
        *_preferences(brief, catalogue, sections),
        *_deductions(brief, cutting),
        *(line for result in cutting for line in _cutting(result)),
    )


def _named(names: list[str]) -> str:
    shown = ", ".join(names[:MOST_NAMED])
    return shown if len(names) <= MOST_NAMED else f"{shown} and {len(names) - MOST_NAMED} more"


def _availability(brief: Brief, catalogue: Catalogue, sections: list[int]) -> list[str]:
    gone = [s for s in range(len(catalogue.available)) if not catalogue.available[s]]
    if not gone:
        return []
    names = _named([catalogue.designation[s] for s in gone])
    one = "1 section was" if len(gone) == 1 else f"{len(gone)} sections were"
    lines = [f"{one} left out of the choice, marked as not available in the catalogue: {names}."]
    lines += [
        f"Group {brief.groups[g].name}: {catalogue.designation[s]} was given, though the "
        "catalogue marks it as not available."
        for g, s in enumerate(sections)
        if s in gone
    ]
    return lines


def _preferences(brief: Brief, catalogue: Catalogue, sections: list[int]) -> list[str]:
    lines = []
    for g, s in enumerate(sections):
        said = []
        if catalogue.preferred and catalogue.preferred[s] is False:
            said.append("no preferred size")
        if catalogue.lead_time and catalogue.lead_time[s]:
            said.append(f"lead time {catalogue.lead_time[s]}")
        if said:
            name = catalogue.designation[s]
            lines.append(
                f"Group {brief.groups[g].name}: {name} by the catalogue: {', '.join(said)}."
            )
    return lines


def _deductions(brief: Brief, cutting: tuple[CuttingResult, ...]) -> list[str]:
    without = [group.name for group in brief.groups if group.end_deduction is None]
    if not cutting or not without:
        return []
    return [
        "No end deduction is given for "
        + _named(without)
        + ": their pieces are cut to system length, from node to node."
    ]


def _cutting(result: CuttingResult) -> list[str]:
    name = result.designation
    lines = []
    for note, words in (
        (TOO_LONG_TO_CUT, "longer than every bar and is in no cutting pattern"),
        (TOO_LONG_TO_CARRY, "longer than the longest piece that can be carried"),
    ):
        lines += [
            f"{name}: the piece of {piece.length:.3f} m ({_named(list(piece.marks))}) is {words}."
            for piece in result.pieces
            if note in piece.note
        ]
    if result.status == "no stock lengths":
        lines.append(f"{name}: no stock lengths are given; it is not in the cutting list.")
    if result.status == "not enough stock" and not any(
        TOO_LONG_TO_CUT in piece.note for piece in result.pieces
    ):
        lines.append(f"{name}: the bars at hand are not enough for its pieces.")
    if result.splices:
        count = len(result.splices)
        where = "; ".join(f"{run} {place}" for run, place in result.splices[:MOST_NAMED])
        more = "" if count <= MOST_NAMED else f" and {count - MOST_NAMED} more"
        lines.append(f"{name}: spliced {where}{more}. Splices are joints, not designed here.")
    return lines
