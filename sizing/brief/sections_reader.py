"""Reading given sections: one designation per option and group, to be checked as they stand.

Either a small TOML file with tables ``[sections.OPTION]`` and lines ``group = "designation"``,
or an earlier ``result.json``.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

from sizing.brief.findings import Findings, KeyPath, Names, shown
from sizing.brief.model import Brief
from sizing.brief.toml_file import load_json, load_toml

LARGEST_RESULT = 200 * 1024 * 1024
"""Bytes. A result holds every member force in every combination; 200 MiB is beyond any job."""


def read_sections(path: Path, brief: Brief) -> dict[str, dict[str, str]]:
    """Return option name → group name → designation.

    The file may leave options of the brief out, but not groups. Raises
    :class:`~sizing.errors.InputError` with all mistakes of the file at once.
    """
    if path.suffix.casefold() == ".json":
        source, content = load_json(path, LARGEST_RESULT)
        findings = Findings(source.name)
        head, tables = "options", _from_result(content, findings)
    else:
        source, content = load_toml(path)
        findings = Findings(source.name)
        head, tables = "sections", _from_toml(content, findings)
    options = Names(findings, "option", [option.name for option in brief.options])
    options.index = {name: i for i, name in enumerate(options.declared)}
    sections: dict[str, dict[str, str]] = {}
    for name, table in tables.items():
        place: KeyPath = (head, name)
        if options.resolve(place, name) is not None:
            sections[name] = _one_option(place, table, brief, findings)
    if not sections and len(findings) == 0:
        findings.add(
            (head,), found="no option", expected='tables [sections.OPTION] with group = "..."'
        )
    findings.raise_if_any()
    return sections


def _from_toml(content: dict[str, Any], findings: Findings) -> dict[str, Any]:
    for key in content:
        if key != "sections":
            findings.add(
                (key,),
                found=f'the unknown key "{key}"',
                expected="tables [sections.OPTION]",
                fix=findings.did_you_mean(key, ["sections"]),
            )
    tables = content.get("sections", {})
    if not isinstance(tables, dict):
        findings.add(("sections",), found=shown(tables), expected="tables [sections.OPTION]")
        return {}
    return tables


def _from_result(content: Any, findings: Findings) -> dict[str, Any]:
    """Return the sections by group of each option of a result."""
    options = content.get("options") if isinstance(content, dict) else None
    if not isinstance(options, dict):
        findings.add(
            ("options",), found=shown(options), expected="the options of an earlier result.json"
        )
        return {}
    tables: dict[str, Any] = {}
    for name, option in options.items():
        table = option.get("sections") if isinstance(option, dict) else None
        if table is None:
            findings.add(
                ("options", name, "sections"), found="nothing", expected="sections by group"
            )
            continue
        tables[name] = table
    return tables


def _one_option(path: KeyPath, table: Any, brief: Brief, findings: Findings) -> dict[str, str]:
    if not isinstance(table, dict):
        findings.add(path, found=shown(table), expected='lines group = "designation"')
        return {}
    groups = Names(findings, "group", [group.name for group in brief.groups])
    groups.index = {name: g for g, name in enumerate(groups.declared)}
    chosen: dict[str, str] = {}
    for name, designation in table.items():
        place = (*path, name)
        known = groups.resolve(place, name)
        if not isinstance(designation, str) or not designation.strip():
            findings.add(place, found=shown(designation), expected="a designation as text")
        elif known is not None:
            chosen[name] = designation.strip()
    strangers = [name for name in table if name not in groups.index]
    for name in groups.declared:
        if name not in table and not findings.did_you_mean(name, strangers):
            findings.add(
                (*path, name),
                found="nothing",
                expected="a designation",
                fix="Every group needs a section.",
            )
    return chosen
