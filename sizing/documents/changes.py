"""What changed since an earlier issue: its result.json beside the new result, by name.

Options, groups and members are matched by name, reactions by node and combination, so that a
change in the order of a brief is no change.
"""

from __future__ import annotations

import hashlib
import json
import math
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any

from sizing.brief.plain_files import PlainFileError, read_plain_file
from sizing.documents.plain_text import visible
from sizing.documents.quantities import Quantity, ShownUnits, shown_units
from sizing.documents.result_json import FORMAT_NAME, FORMAT_VERSION, result_document
from sizing.documents.tables import Cell, Column, Table
from sizing.errors import InputError, Problem
from sizing.results import JobResult

AXES = ("x", "y", "z")

SAME = 1e-6
"""Relative difference below which two numbers are the same: rounding, not a change."""

LARGEST_FILE = 200_000_000
"""Bytes; a result.json of the largest job is far below."""

MOST_LINES = 12
"""Changes that are listed on the screen."""

Row = tuple[Cell, ...]


def read_previous(path: Path) -> dict[str, Any]:
    """Return the content of an earlier result.json with its file name under ``file``.

    Raises :class:`InputError` where the file cannot be read or is something else.
    """
    try:
        content = read_plain_file(path, LARGEST_FILE)
        document = json.loads(content)
    except PlainFileError as failure:
        raise _unfit(path, failure.found) from failure
    except (ValueError, RecursionError) as failure:
        raise _unfit(path, "a file that is no JSON") from failure
    found = document.get("format") if isinstance(document, dict) else None
    if found != {"name": FORMAT_NAME, "version": FORMAT_VERSION}:
        raise _unfit(path, "another kind of file, or another version of the format")
    if not _whole(document):
        raise _unfit(path, "a result.json in which entries are missing or of another kind")
    return {"file": path.name, "sha256": hashlib.sha256(content).hexdigest(), **document}


def _whole(document: Mapping[str, Any]) -> bool:
    """Return whether everything that is compared stands in the file."""
    try:
        for option in document["options"].values():
            float(option["mass_kg"])
            for key in ("sections", "members"):
                option[key].items()
            for member in option["members"].values():
                float(member["system_length_m"])
                _checked_by(member)
            for reaction in option["reactions"]:
                _ = reaction["node"], reaction["combination"]
                [float(value) for value in reaction["components_N"]]
    except (KeyError, TypeError, ValueError, AttributeError):
        return False
    return True


def _unfit(path: Path, found: str) -> InputError:
    return InputError(
        [
            Problem(
                file=str(path),
                place="--since",
                found=found,
                expected=f"a result.json of an earlier issue, format version {FORMAT_VERSION}",
                fix="Name the result.json that was written with the earlier documents.",
            )
        ]
    )


def changes_table(previous: Mapping[str, Any], job: JobResult) -> Table:
    """Return what differs: sections, mass, governing checks and reactions, before and now."""
    units = shown_units(job.brief.units)
    now = result_document(job)
    rows = [
        row
        for name, option in now["options"].items()
        for row in _option(name, previous["options"].get(name), option, units)
    ]
    rows += [
        (visible(name), "option", "", "answered", "not there", "")
        for name in previous["options"]
        if name not in now["options"]
    ]
    return Table(
        name="Changes",
        title="What changed since the earlier issue",
        columns=(
            Column(head="Option"),
            Column(head="What"),
            Column(head="Where", style="prose"),
            Column(head="Before", style="prose"),
            Column(head="Now", style="prose"),
            Column(head="Difference"),
        ),
        rows=tuple(rows),
        notes=(
            f"Earlier issue: {visible(previous['file'])}, SHA-256 {previous['sha256'][:12]}. "
            "Matched by the names of options, groups, members, nodes and combinations.",
            f"Compared: {visible(', '.join(_COMPARED))}."
            + ("" if rows else " Nothing of it changed."),
        ),
    )


def changes_lines(previous: Mapping[str, Any], job: JobResult) -> list[str]:
    """Return a short account for the terminal: how much changed, and the sections and masses."""
    rows = changes_table(previous, job).rows
    count = len(rows)
    lines = [f"{count or 'no'} change{'' if count == 1 else 's'} since {visible(previous['file'])}"]
    told = [row for row in rows if row[1] in ("option", "section", "mass of members")]
    for option, what, where, before, now, _ in told[:MOST_LINES]:
        lines.append(f"  {option}: {what} {where}: {before} -> {now}".replace(" : ", ": "))
    if count > min(len(told), MOST_LINES):
        lines.append("  all of them stand under Changes in the documents")
    return lines


_COMPARED = (
    "standard, grade and catalogue", "mass", "sections of groups", "members",
    "governing checks", "reactions",
)  # fmt: skip


def _option(
    name: str, before: Mapping[str, Any] | None, now: Mapping[str, Any], units: ShownUnits
) -> Iterator[Row]:
    shown = visible(name)
    if before is None:
        yield shown, "option", "", "not there", "answered", ""
        return
    for row in (
        *_basis(before, now),
        *_mass(before, now, units),
        *_texts("section", "group", before["sections"], now["sections"]),
        *_members(before["members"], now["members"], units),
        *_reactions(before["reactions"], now["reactions"], units),
    ):
        yield shown, *row


def _basis(before: Mapping[str, Any], now: Mapping[str, Any]) -> Iterator[Row]:
    for key in ("standard", "grade", "catalogue", "every check met"):
        old, new = _basis_entry(before, key), _basis_entry(now, key)
        if old != new:
            yield key, "", visible(old), visible(new), ""


def _basis_entry(option: Mapping[str, Any], key: str) -> str:
    if key == "every check met":
        return "yes" if option.get("adequate") else "NO"
    entry = option.get(key)
    if key == "catalogue" and isinstance(entry, dict):
        return f"{entry.get('name', '')}, SHA-256 {str(entry.get('sha256', ''))[:12]}"
    return " ".join(str(v) for v in entry.values()) if isinstance(entry, dict) else str(entry)


def _mass(before: Mapping[str, Any], now: Mapping[str, Any], units: ShownUnits) -> Iterator[Row]:
    old, new = float(before["mass_kg"]), float(now["mass_kg"])
    if not _same(old, new, max(abs(old), abs(new))):
        yield ("mass of members", "", *_numbers(old, new, units.mass))


def _texts(
    what: str, where: str, before: Mapping[str, Any], now: Mapping[str, Any]
) -> Iterator[Row]:
    """Return entries that differ between two tables of texts."""
    for name in dict.fromkeys((*now, *before)):
        old, new = before.get(name, "not there"), now.get(name, "not there")
        if old != new:
            yield what, f"{where} {visible(name)}", visible(str(old)), visible(str(new)), ""


def _members(before: Mapping[str, Any], now: Mapping[str, Any], units: ShownUnits) -> Iterator[Row]:
    for name in dict.fromkeys((*now, *before)):
        old, new = before.get(name), now.get(name)
        if old is None or new is None:
            words = ("not there", "there") if old is None else ("there", "not there")
            yield "member", visible(name), *words, ""
            continue
        where = visible(f"{new.get('mark', '')} ({name})")
        for key in ("mark", "group", "section"):
            if old.get(key) != new.get(key):
                yield key, where, visible(str(old.get(key))), visible(str(new.get(key))), ""
        lengths = float(old["system_length_m"]), float(new["system_length_m"])
        if not _same(*lengths, max(lengths)):
            yield "length", where, *_numbers(*lengths, units.length)
        if _checked_by(old) != _checked_by(new):
            yield "governing check", where, *_checks(old, new)


def _checked_by(member: Mapping[str, Any]) -> tuple[str, ...]:
    return tuple(str(member[key]) for key in ("governing", "clause", "combination"))


def _checks(old: Mapping[str, Any], new: Mapping[str, Any]) -> tuple[str, str, str]:
    def words(member: Mapping[str, Any]) -> str:
        if member["governing"] is None:
            return "no force"
        use = member.get("utilisation")
        share = "no resistance" if use is None else f"{float(use):.2f}"
        return visible(
            f"{member['governing']}, {member['clause']}, {member['combination']}: {share}"
        )

    return words(old), words(new), ""


def _reactions(before: list[Any], now: list[Any], units: ShownUnits) -> Iterator[Row]:
    def by_place(reactions: list[Any]) -> dict[tuple[str, str], list[float]]:
        return {
            (str(r["node"]), str(r["combination"])): [float(v) for v in r["components_N"]]
            for r in reactions
        }

    old, new = by_place(before), by_place(now)
    everything = [abs(v) for values in (*old.values(), *new.values()) for v in values]
    greatest = max(everything, default=0.0)
    force = units.force.fitted(everything)
    for place in dict.fromkeys((*new, *old)):
        where = visible(f"{place[0]}, combination {place[1]}")
        if place not in old or place not in new:
            words = ("not there", "there") if place in new else ("there", "not there")
            yield "reaction", where, *words, ""
            continue
        for axis, a, b in zip(AXES, old[place], new[place], strict=False):
            if not _same(a, b, greatest):
                yield f"reaction {axis}", where, *_numbers(a, b, force)


def _same(old: float, new: float, greatest: float) -> bool:
    return math.isfinite(old) and abs(new - old) <= SAME * greatest


def _numbers(old: float, new: float, quantity: Quantity) -> tuple[str, str, str]:
    difference = quantity.text(new - old)
    share = f" ({100.0 * (new - old) / abs(old):+.1f} %)" if old else ""
    sign = "+" if new > old and not difference.startswith("-") else ""
    return quantity.text(old), quantity.text(new), f"{sign}{difference}{share}"
