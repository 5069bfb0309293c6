"""result.json: the whole answer for scripts, in SI units, with a version number.

Layout (units stand in the key names: ``_m`` metre, ``_N`` newton, ``_kg`` kilogram, ``_m2``
square metre; ratios have no unit; tension positive)::

    format           {"name": "sizing result", "version": 1}
    made_by          tool and version
    brief            title, file, sha256, minimise, dimensions
    nodes            node name -> {position_m, held}
    options          option name -> one answer, see below
    without_answer   option name -> reason

:func:`field_descriptions` describes each key of the file and of one answer. A number that does
not exist (no bound, no limit, a utilisation on no resistance) is ``null``; ``adequate`` then
tells.
"""

from __future__ import annotations

import json
import math
from typing import Any

from sizing.brief.model import SourceFile
from sizing.documents.wording import met
from sizing.results import (
    CuttingResult,
    DeflectionResult,
    Extreme,
    JobResult,
    LighterResult,
    MemberResult,
    OptionResult,
)

FORMAT_NAME = "sizing result"
FORMAT_VERSION = 1

_FIELDS = (
    ("format", "name and version of this layout; the version rises when a key changes meaning"),
    ("made_by", "name and version of the tool"),
    ("brief", "title, file name, SHA-256, what was minimised, dimensions, and its print units"),
    ("nodes", "by node name: position_m (coordinates), held (axes along which it is supported)"),
    ("options", "by option name: one answer each, with the keys below"),
    ("without_answer", "by option name: why no choice of sections passes"),
    ("options.*.status", "proven, within gap, stopped, or checked (given sections)"),
    ("options.*.adequate", "true when every check of members and deflections is met"),
    ("options.*.mass_kg", "mass of all members, bare sections over system lengths"),
    ("options.*.objective", "total of what was minimised (kg, currency, or kg CO2e)"),
    ("options.*.minimised", "what objective and bound measure: mass, cost or carbon"),
    ("options.*.bound", "valid lower bound on objective, null where none"),
    ("options.*.bound_kg", "the same where mass was minimised, else null"),
    ("options.*.gap", "(objective - bound) / objective, 0 when proven, null where unknown"),
    ("options.*.analyses", "exact structural analyses that the search took"),
    ("options.*.seconds", "time that the search took; the only entry that varies between runs"),
    ("options.*.cost", "cost of the members by the rates of the brief, null without rates"),
    ("options.*.currency", "currency of the cost, empty without rates"),
    ("options.*.carbon_a1_a3_kgCO2e", "embodied carbon, modules A1 to A3 of EN 15804, or null"),
    ("options.*.biogenic_kgCO2e", "carbon stored in the material (negative), apart, or null"),
    ("options.*.volume_m3", "volume of all members"),
    ("options.*.outer_surface_m2", "outer surface of all members, null where not known"),
    ("options.*.method", "what found and bounded the answer, in words"),
    ("options.*.standard", "name and edition of the standard"),
    ("options.*.grade", "grade or strength class"),
    ("options.*.catalogue", "name, file and SHA-256 of the section catalogue"),
    (
        "options.*.connection_allowance",
        "share added to member weight in the loads; not in the masses of this file",
    ),
    ("options.*.utilisation", "greatest utilisation over members and deflection limits"),
    ("options.*.sections", "by group name: designation of the chosen section"),
    (
        "options.*.groups",
        "by group name: section, catalogue row, marks, length, mass, what governs",
    ),
    (
        "options.*.members",
        "by member name (its two nodes): mark, group, section, lengths, slenderness, forces_N by "
        "combination name (tension positive), greatest tension and compression with combination, "
        "resistance and clause, utilisation and what governs",
    ),
    ("options.*.take_off", "per section: pieces, total system length, mass, outer surface"),
    (
        "options.*.cutting",
        "per section: bars, pieces, patterns, waste, bound; empty where the brief has no [stock]",
    ),
    ("options.*.lighter", "per group: the next lighter section and the check that it fails"),
    ("options.*.combinations", "by name: state, duration, factors, applied_N, residual, origin"),
    ("options.*.deflections", "list: limit, node, direction, combination, value_m, limit_m"),
    ("options.*.reactions", "list: node, combination, state, components_N on the truss"),
    ("options.*.displacements_m", "by combination and node: components along the axes"),
    ("options.*.worked", "line-by-line checks of the governing members, SI values"),
    ("options.*.left_out", "sections that the standard cannot check, with the reason"),
    ("options.*.basis", "basis of design, pairs of item and entry"),
    ("options.*.cautions", "what is assumed and not checked; read them"),
)


def field_descriptions() -> tuple[tuple[str, str], ...]:
    """Return (key path, description) of the entries of result.json, for the manual."""
    return _FIELDS


def json_bytes(job: JobResult) -> bytes:
    """Return result.json for ``job`` as UTF-8; strict JSON, keys in a fixed order."""
    document = result_document(job)
    text = json.dumps(document, ensure_ascii=False, allow_nan=False, indent=1) + "\n"
    return text.encode("utf-8", "backslashreplace")  # a lone surrogate becomes a JSON escape


def result_document(job: JobResult) -> dict[str, Any]:
    """Return the content of result.json as plain dictionaries and lists."""
    brief = job.brief
    held = {s.node: s.held for s in brief.supports}
    return {
        "format": {"name": FORMAT_NAME, "version": FORMAT_VERSION},
        "made_by": f"sizing {job.version}",
        "brief": {
            "title": brief.title,
            **_file(brief.source),
            "minimise": brief.minimise,
            "dimensions": brief.dimensions,
            "units_in_print": {"force": brief.units.force, "length": brief.units.length},
            "notes": brief.notes,
        },
        "nodes": {
            node.name: {
                "position_m": list(node.position),
                "held": [a for a, h in zip("xyz", held.get(i, ()), strict=False) if h],
            }
            for i, node in enumerate(brief.nodes)
        },
        "options": {option.option: _option(job, option) for option in job.options},
        "without_answer": dict(job.without_answer),
    }


def _file(source: SourceFile) -> dict[str, str]:
    return {"file": source.name, "sha256": source.sha256}


def _number(value: float | None) -> float | None:
    return None if value is None or not math.isfinite(value) else float(value)


def _option(job: JobResult, option: OptionResult) -> dict[str, Any]:
    names = [c.name for c in option.combinations]
    return {
        "status": option.status,
        "adequate": bool(option.adequate),
        "mass_kg": _number(option.mass),
        "objective": _number(option.objective),
        "minimised": option.objective_text,
        "bound": _number(option.bound),
        "bound_kg": _number(option.bound) if job.brief.minimise == "mass" else None,
        "gap": _number(option.gap),
        "analyses": int(option.analyses),
        "seconds": _number(option.seconds),
        "cost": _number(option.cost),
        "currency": option.currency,
        "carbon_a1_a3_kgCO2e": _number(option.carbon),
        "biogenic_kgCO2e": _number(option.biogenic),
        "volume_m3": _number(option.volume),
        "outer_surface_m2": _number(option.surface),
        "method": option.method,
        "utilisation": _number(option.utilisation),
        "standard": {"name": option.standard, "edition": option.edition},
        "grade": option.grade,
        "catalogue": {"name": option.catalogue, **_file(option.catalogue_source)},
        "connection_allowance": _number(option.connection_allowance),
        "sections": {g.name: g.designation for g in option.groups},
        "groups": _groups(option),
        "members": {m.name: _member(m, names) for m in option.members},
        "take_off": _take_off(option),
        "cutting": [_cutting(entry) for entry in option.cutting],
        "lighter": [_lighter(entry) for entry in option.lighter],
        "combinations": _combinations(option),
        "deflections": [_deflection(d) for d in option.deflections],
        "reactions": [
            {
                "node": r.node,
                "combination": r.combination,
                "state": r.state,
                "components_N": [_number(v) for v in r.components],
            }
            for r in option.reactions
        ],
        "displacements_m": {
            name: {
                node.name: [_number(v) for v in movement]
                for node, movement in zip(job.brief.nodes, moved, strict=True)
            }
            for name, moved in zip(names, option.displacements, strict=False)
        },
        "worked": _worked(option),
        "left_out": [{"section": name, "reason": why} for name, why in option.left_out],
        "basis": [[what, value] for what, value in option.basis],
        "cautions": list(option.cautions),
    }


def _groups(option: OptionResult) -> dict[str, Any]:
    return {
        g.name: {
            "section": g.designation,
            "catalogue_row": int(g.catalogue_row),
            "members": list(g.members),
            "total_length_m": _number(g.total_length),
            "mass_kg": _number(g.mass),
            "utilisation": _number(g.utilisation),
            "governed_by": g.governed_by,
            "governing_member": g.governing_member,
            "governing_combination": g.governing_combination,
        }
        for g in option.groups
    }


def _member(m: MemberResult, combinations: list[str]) -> dict[str, Any]:
    return {
        "mark": m.mark,
        "group": m.group,
        "start": m.start,
        "end": m.end,
        "section": m.designation,
        "catalogue_row": int(m.catalogue_row),
        "system_length_m": _number(m.length),
        "order_length_m": _number(m.order_length),
        "mass_per_length_kg_m": _number(m.mass_per_metre),
        "mass_kg": _number(m.mass),
        "area_m2": _number(m.area),
        "buckling_length_in_plane_m": _number(m.in_plane),
        "buckling_length_out_of_plane_m": _number(m.out_of_plane),
        "slenderness_in_plane": _number(m.slenderness_in),
        "slenderness_out_of_plane": _number(m.slenderness_out),
        "slenderness_limit": _number(m.slenderness_limit),
        "forces_N": {n: _number(f) for n, f in zip(combinations, m.forces, strict=True)},
        "tension": _extreme(m.tension),
        "compression": _extreme(m.compression),
        "reversal": m.reversal,
        "utilisation": _number(m.utilisation),
        "met": met(m.utilisation),
        "governing": m.governing,
        "clause": m.governing_clause,
        "combination": m.governing_combination,
        "note": m.note,
    }


def _extreme(extreme: Extreme | None) -> dict[str, Any] | None:
    if extreme is None:
        return None
    return {
        "force_N": _number(extreme.force),
        "combination": extreme.combination,
        "resistance_N": _number(extreme.resistance),
        "utilisation": _number(extreme.utilisation),
        "governing_combination": extreme.governing_combination,
        "governing_force_N": _number(extreme.governing_force),
        "clause": extreme.clause,
    }


def _take_off(option: OptionResult) -> list[dict[str, Any]]:
    return [
        {
            "section": s.designation,
            "catalogue_row": int(s.catalogue_row),
            "product": s.product,
            "pieces": int(s.pieces),
            "total_length_m": _number(s.total_length),
            "mass_per_length_kg_m": _number(s.mass_per_metre),
            "mass_kg": _number(s.mass),
            "outer_surface_m2": _number(s.surface),
        }
        for s in option.sections
    ]


def _cutting(entry: CuttingResult) -> dict[str, Any]:
    return {
        "section": entry.designation,
        "status": entry.status,
        "method": entry.method,
        "minimised": entry.minimised,
        "objective": _number(entry.objective),
        "bound": _number(entry.bound),
        "trusses": entry.trusses,
        "bars": entry.bars,
        "stock_length_m": _number(entry.stock_length),
        "piece_length_m": _number(entry.piece_length),
        "waste_m": _number(entry.waste),
        "saw_cut_m": _number(entry.kerf),
        "lost_end_m": _number(entry.trim),
        "lead_time": entry.lead_time,
        "pieces": [
            {
                "length_m": _number(p.length),
                "number": p.number,
                "marks": list(p.marks),
                "note": p.note,
            }
            for p in entry.pieces
        ],
        "patterns": [
            {
                "stock_length_m": _number(p.stock_length),
                "bars": p.bars,
                "pieces": [{"length_m": length, "number": count} for length, count in p.pieces],
                "offcut_m": _number(p.offcut),
            }
            for p in entry.patterns
        ],
        "splices": [{"run": run, "where": where} for run, where in entry.splices],
    }


def _lighter(entry: LighterResult) -> dict[str, Any]:
    return {
        "group": entry.group,
        "section": entry.designation,
        "mass_saved_kg": _number(entry.mass_saved),
        "fails": entry.fails,
        "where": entry.where,
        "combination": entry.combination,
        "utilisation": _number(entry.utilisation),
    }


def _combinations(option: OptionResult) -> dict[str, Any]:
    return {
        c.name: {
            "state": c.state,
            "duration": c.duration,
            "factors": {case: _number(factor) for case, factor in c.factors},
            "applied_N": [_number(v) for v in c.applied],
            "residual": _number(c.residual),
            "origin": c.origin,
        }
        for c in option.combinations
    }


def _deflection(d: DeflectionResult) -> dict[str, Any]:
    return {
        "limit": d.limit_name,
        "node": d.node,
        "direction": d.direction,
        "combination": d.combination,
        "value_m": _number(d.value),
        "limit_m": _number(d.limit),
        "limit_as_written": d.limit_text,
        "utilisation": _number(d.utilisation),
        "met": met(d.utilisation),
    }


def _worked(option: OptionResult) -> list[dict[str, Any]]:
    return [
        {
            "mark": w.mark,
            "section": w.designation,
            "sense": w.sense,
            "combination": w.combination,
            "force_N": _number(w.force),
            "utilisation": _number(w.utilisation),
            "steps": [
                {
                    "symbol": s.symbol,
                    "expression": s.expression,
                    "value": _number(s.value),
                    "unit": s.unit,
                    "clause": s.clause,
                    "meaning": s.meaning,
                }
                for s in w.steps
            ],
        }
        for w in option.worked
    ]
