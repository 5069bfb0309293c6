"""Options of a brief: standard, grade, catalogue, and the standard's own keys untouched."""

from __future__ import annotations

import re
from typing import Any

from sizing.brief.findings import Findings, KeyPath, Quantities, quoted
from sizing.brief.limits import read_fraction, read_slenderness
from sizing.brief.model import Objective, Option, SlendernessLimits
from sizing.brief.rates import read_carbon, read_cost
from sizing.brief.raw_tables import RawBrief, RawOption, read_entry

GREATEST_ALLOWANCE = 0.5
"""Gussets, bolts and welds add 2 to 15 % (common practice); above half it is a slip."""

OPTION_NAME = re.compile(r"[\w+-][\w .+-]{0,39}")
"""Option names become part of file names."""


def read_options(
    raw: dict[str, Any], findings: Findings, quantities: Quantities, *, present: bool
) -> tuple[Option, ...]:
    """Return the options in the order of the brief."""
    if present and not raw:
        findings.add(("options",), found="an empty table", expected="at least one option")
    options: list[Option] = []
    for name, value in raw.items():
        path: KeyPath = ("options", name)
        if not OPTION_NAME.fullmatch(name):
            findings.add(
                path,
                found=f"the option name {quoted(name)}",
                expected="up to 40 letters, digits, spaces and . _ + - (it names files)",
            )
        entry, faulty = read_entry(
            RawOption, value, path, findings, "a table [options.NAME] with standard and catalogue"
        )
        if entry is not None:
            options.append(_read(name, path, entry, faulty, findings, quantities))
    return tuple(options)


def _read(
    name: str,
    path: KeyPath,
    entry: RawOption,
    faulty: frozenset[str],
    findings: Findings,
    quantities: Quantities,
) -> Option:
    for key in ("standard", "catalogue"):
        if key not in faulty and not getattr(entry, key).strip():
            findings.add(
                (*path, key),
                found="an empty text",
                expected=str(RawOption.model_fields[key].description),
            )
    settings = dict(entry.model_extra or {})
    _check_settings(path, settings, findings)
    slenderness = (
        SlendernessLimits()
        if entry.slenderness_limits is None
        else read_slenderness(
            (*path, "slenderness_limits"), entry.slenderness_limits, findings, quantities
        )
    )
    place = (*path, "connection_allowance")
    allowance = quantities.read(place, entry.connection_allowance, "dimensionless")
    if allowance is not None and not 0.0 <= allowance <= GREATEST_ALLOWANCE:
        findings.add(
            place,
            found=f"{allowance:g}",
            expected='a part of the mass from 0 to 0.5, such as 0.05 or "5 %"',
        )
    return Option(
        name=name,
        standard=entry.standard.strip(),
        grade=entry.grade,
        catalogue=entry.catalogue.strip(),
        slenderness=slenderness,
        connection_allowance=allowance or 0.0,
        net_section_factor=read_fraction(
            (*path, "net_section_factor"), entry.net_section_factor, findings, quantities
        ),
        cost=read_cost((*path, "cost"), entry.cost, findings, quantities),
        carbon=read_carbon((*path, "carbon"), entry.carbon, findings, quantities),
        settings=settings,
    )


def require_rates(options: tuple[Option, ...], minimise: Objective, findings: Findings) -> None:
    """Record every option that lacks the rates for what the brief minimises."""
    wanted = {
        "cost": '[options.NAME.cost] with currency, source, date and per_kg, or minimise = "mass"',
        "carbon": '[options.NAME.carbon] with a1_a3, source and date, or minimise = "mass"',
    }
    if minimise == "mass":
        return
    for option in options:
        if getattr(option, minimise) is None:
            findings.add(
                ("options", option.name),
                found=f"no {minimise} rates while {minimise} is minimised",
                expected=wanted[minimise].replace("NAME", option.name),
            )


def _check_settings(path: KeyPath, settings: dict[str, Any], findings: Findings) -> None:
    """Record keys that belong to the whole brief or are slips of the option's own keys."""
    own = list(RawOption.model_fields)
    for key in settings:
        if key in RawBrief.model_fields:
            findings.add(
                (*path, key),
                found=f"the unknown key {quoted(key)}",
                expected="a key of the option",
                fix=f"A key of the whole brief stands before the first table: move {key} there.",
            )
        elif key in ("slenderness", "slenderness_limit", "allowance", "connection_allowences"):
            findings.add(
                (*path, key),
                found=f"the unknown key {quoted(key)}",
                expected="a key of the option",
                fix=findings.did_you_mean(key, own),
            )
