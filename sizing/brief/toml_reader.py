"""Reading a brief: a file in, a valid :class:`~sizing.brief.model.Brief` in SI units out.

The file is TOML, or a workbook with one sheet per table (:mod:`sizing.brief.workbook_reader`).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

from sizing.brief.combinations import named_place, read_combinations
from sizing.brief.deflections import read_deflection_limits
from sizing.brief.findings import Findings, KeyPath, Quantities, key_path_text, quoted
from sizing.brief.groups_and_members import read_groups
from sizing.brief.load_cases import read_cases
from sizing.brief.model import Brief, SourceFile, Units
from sizing.brief.nodes_and_supports import read_nodes, read_supports
from sizing.brief.options import read_options, require_rates
from sizing.brief.raw_tables import RawBrief, RawUnits, read_entry
from sizing.brief.stock import read_stock
from sizing.brief.toml_file import load_toml
from sizing.brief.truss_checks import caution_without_load, check_truss
from sizing.errors import InputError, Problem


def read_brief(path: Path) -> Brief:
    """Return the brief in the file at ``path``.

    Raises :class:`~sizing.errors.InputError` with all mistakes of the file at once: each with
    its place, what was found, what belongs there and the likely fix.
    """
    if refuse_foreign(path) == ".toml":
        source, tables = load_toml(path)
        return brief_from_tables(tables, source)
    from sizing.brief.workbook_reader import load_workbook_brief  # slow: it needs openpyxl

    book = load_workbook_brief(path)
    brief = brief_from_tables(book.tables, book.source, book.places)
    return replace(brief, cautions=(*book.cautions, *brief.cautions))


def refuse_foreign(path: Path) -> str:
    """Return the kind of brief, ``.toml`` or ``.xlsx``, by the file's name.

    Raises :class:`~sizing.errors.InputError` for a file of another name; what is no file counts
    as TOML here and is told when it is opened.
    """
    suffix = path.suffix.casefold()
    try:
        if suffix in (".toml", ".xlsx") or not path.is_file():
            return suffix if suffix == ".xlsx" else ".toml"
    except (OSError, ValueError):
        return ".toml"
    spreadsheets = (".xls", ".xlsm", ".xlsb", ".ods", ".csv")
    raise InputError(
        [
            Problem(
                file=str(path),
                place="the file",
                found=f"a name that ends in {quoted(path.suffix)}" if suffix else "no ending",
                expected="a brief, a file .toml or .xlsx",
                fix="Save it as .xlsx." if suffix in spreadsheets else "",
            )
        ]
    )


def brief_from_tables(
    tables: dict[str, Any],
    source: SourceFile,
    place: Callable[[KeyPath], str] = key_path_text,
) -> Brief:
    """Return the brief in tables shaped like the TOML file's, whatever file they come from.

    ``place`` turns a key path into the words of that file for messages. Raises
    :class:`~sizing.errors.InputError` as :func:`read_brief` does.
    """
    findings = Findings(source.name, place, document_order(tables))
    entry, faulty = read_entry(RawBrief, tables, (), findings, "tables")
    raw = entry or RawBrief.model_validate({})
    units = _read_units(raw, faulty, findings)
    quantities = Quantities(findings, units)

    def present(key: str) -> bool:
        return key not in faulty

    nodes = read_nodes(raw.nodes, findings, quantities, present=present("nodes"))
    before = len(findings)
    supports = read_supports(raw.supports, nodes, findings, present=present("supports"))
    supports_known = nodes.whole and bool(supports) and len(findings) == before
    groups = read_groups(
        raw.groups,
        nodes,
        findings,
        quantities,
        present=present("groups"),
        reserved=_combination_names(raw.combinations),
    )
    check_truss(nodes, groups, findings)
    cases = read_cases(
        raw.cases,
        nodes,
        groups.members,
        findings,
        quantities,
        present=present("cases"),
        lump=raw.between_nodes == "lump",
    )
    if cases.whole and supports_known:
        caution_without_load(cases.cases, supports, findings)
    options = read_options(raw.options, findings, quantities, present=present("options"))
    require_rates(options, raw.minimise, findings)
    standards = [option.standard for option in options]
    combinations = read_combinations(
        raw, cases, standards, findings, quantities, present=present("combinations")
    )
    limits = read_deflection_limits(
        raw.deflection_limits,
        nodes,
        supports,
        cases,
        combinations,
        findings,
        quantities,
        supports_known=supports_known,
    )
    stock = read_stock(raw.stock, findings, quantities)
    findings.raise_if_any()
    return Brief(
        title=raw.title.strip() or source.path.stem,
        source=source,
        units=units,
        minimise=raw.minimise,
        nodes=nodes.nodes,
        supports=supports,
        groups=groups.groups,
        members=groups.members,
        cases=cases.cases,
        combinations=combinations.combinations,
        deflection_limits=limits,
        options=options,
        notes=raw.notes,
        cautions=tuple(findings.cautions),
        stock=stock,
    )


def _combination_names(raw: list[Any]) -> list[str]:
    """Return the names of the combinations written out, before these are read."""
    entries = [entry for entry in raw if isinstance(entry, dict)]
    return [entry["name"] for entry in entries if isinstance(entry.get("name"), str)]


def document_order(tables: dict[str, Any]) -> Callable[[KeyPath], tuple[int, ...]]:
    """Return a sort key for key paths: the order in which tables and entries are written."""
    heads = {head: i for i, head in enumerate(tables)}
    entries = {
        head: {_entry_key(k, v): i for i, (k, v) in enumerate(_items(table))}
        for head, table in tables.items()
    }

    def order(path: KeyPath) -> tuple[int, ...]:
        head = str(path[0]) if path else ""
        entry = path[1] if len(path) > 1 else ""
        return heads.get(head, len(heads)), entries.get(head, {}).get(entry, -1)

    return order


def _items(table: object) -> list[tuple[str | int, object]]:
    if isinstance(table, dict):
        return list(table.items())
    return list(enumerate(table, start=1)) if isinstance(table, list) else []


def _entry_key(key: str | int, value: object) -> str | int:
    return named_place("", key, value)[1] if isinstance(key, int) else key


def _read_units(raw: RawBrief, faulty: frozenset[str], findings: Findings) -> Units:
    if "units" in faulty:
        return Units()
    entry, _ = read_entry(RawUnits, raw.units, ("units",), findings, "a table of units")
    return Units() if entry is None else Units(force=entry.force, length=entry.length)
