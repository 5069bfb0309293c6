"""The tables of a brief as written: which keys exist, of what type, and what each one holds.

Every field's description says what belongs there; messages quote it. Quantities stay as
written here (``Any``); :mod:`sizing.units` reads them later. All fields have a default, so
that an entry with one faulty key still gives the others; ``REQUIRED`` names what may not be
missing. A faulty item of a list becomes None, so that the others keep their positions.
"""

from __future__ import annotations

from typing import Any, ClassVar, Literal, TypeVar, get_args

from pydantic import BaseModel, ConfigDict, Field, ValidationError

from sizing.brief.findings import Findings, KeyPath, listed, quoted, shown
from sizing.brief.model import ActionKind, DeflectionComponent, LoadDuration, Objective, State

Held = Literal["x", "y", "z", "X", "Y", "Z"]
MeasuredOn = Literal["plan", "slope", "normal to slope"]
MeasuredAlong = Literal["plan", "chord", "height"]
BetweenNodes = Literal["refuse", "lump"]


class RawTable(BaseModel):
    """A table of the brief; unknown keys and wrong types are mistakes."""

    model_config = ConfigDict(extra="forbid", strict=True)
    REQUIRED: ClassVar[tuple[str, ...]] = ()


class RawBrief(RawTable):
    """The top level."""

    REQUIRED = ("units", "nodes", "supports", "groups", "cases", "options")
    title: str = Field("", description='a title, such as "Roof truss R1"')
    notes: str = Field("", description="notes as text")
    units: dict[str, Any] = Field({}, description='{ force = "kN", length = "m" }')
    minimise: Objective = Field("mass", description='"mass", "cost" or "carbon"')
    nodes: dict[str, Any] = Field({}, description="a table of nodes, such as A0 = [0.0, 0.0]")
    supports: dict[str, Any] = Field(
        {}, description='a table of supports, such as A0 = { held = ["x", "y"] }'
    )
    groups: dict[str, Any] = Field({}, description="tables [groups.NAME], one for each group")
    cases: dict[str, Any] = Field({}, description="tables [cases.NAME], one for each load case")
    between_nodes: BetweenNodes = Field(
        "refuse", description='"refuse", or "lump" to share loads between the nodes next to them'
    )
    combination_rule: Any = None
    combinations: list[Any] = Field([], description="tables [[combinations]]")
    deflection_limits: list[Any] = Field([], description="tables [[deflection_limits]]")
    options: dict[str, Any] = Field({}, description="tables [options.NAME], one for each option")
    stock: dict[str, Any] | None = Field(
        None, description='{ lengths = ["6 m", "12 m"], kerf = "3 mm" }'
    )


class RawUnits(RawTable):
    """``units``."""

    REQUIRED = ("force", "length")
    force: Literal["N", "kN", "MN", "lbf", "kip"] = Field(
        "kN", description='"N", "kN", "MN", "lbf" or "kip"'
    )
    length: Literal["mm", "cm", "m", "in", "ft"] = Field(
        "m", description='"mm", "cm", "m", "in" or "ft"'
    )


class RawSupport(RawTable):
    """One support."""

    REQUIRED = ("held",)
    held: list[Held | None] = Field([], description='directions held, such as ["x", "y"]')


class RawSlenderness(RawTable):
    """``slenderness_limits`` of a group or an option."""

    compression: Any = Field(None, description="a slenderness L/i, such as 180")
    tension: Any = Field(None, description="a slenderness L/i, such as 300")


class RawGroup(RawTable):
    """One group."""

    REQUIRED = ("members",)
    members: list[str | None] = Field(
        [], description='members named by their two nodes, such as ["A0-A1", "A1-A2"]'
    )
    buckling_length: Any = None
    restrained_nodes: list[str | None] = Field(
        [], description='nodes held out of plane, such as ["A0", "A3"]'
    )
    unrestrained_ends: dict[str, Any] = Field(
        {}, description="free chain ends with their factor, such as { A8 = 2.0 }"
    )
    continues_in: list[str | None] = Field(
        [], description="groups that carry the same chord on, by name"
    )
    section_depth: Literal["in plane", "out of plane"] = Field(
        "in plane", description='"in plane" or "out of plane"'
    )
    net_section_factor: Any = 1.0
    utilisation_cap: Any = 1.0
    slenderness_limits: dict[str, Any] | None = Field(
        None, description="{ compression = 180, tension = 300 }"
    )
    families: list[str | None] = Field([], description='section families, such as ["SHS"]')
    sections: list[str | None] = Field(
        [], description='designations or patterns with * and ?, such as ["SHS 100*"]'
    )
    end_deduction: Any = None
    order_length: Any = None
    continuous: bool = Field(False, description="true or false")
    splices: bool = Field(False, description="true or false")


class RawCase(RawTable):
    """One load case."""

    REQUIRED = ("kind",)
    kind: ActionKind = Field("other", description=f"one of {', '.join(get_args(ActionKind))}")
    nodal: dict[str, Any] = Field({}, description="forces at nodes, such as { B1 = [0, -9.6] }")
    area_loads: list[Any] = Field([], description="tables [[cases.NAME.area_loads]]")
    line_loads: list[Any] = Field([], description="tables [[cases.NAME.line_loads]]")
    point_loads: list[Any] = Field([], description="tables [[cases.NAME.point_loads]]")
    self_weight: bool = Field(False, description="true or false")
    duration: LoadDuration | None = Field(
        None, description=f"one of {', '.join(get_args(LoadDuration))}"
    )
    action: str | None = Field(None, description="the name of the action that the case is part of")
    alternative_set: str | None = Field(
        None, description="a name shared by cases of which only one acts at a time"
    )
    may_be_absent: bool = Field(False, description="true or false")


class RawAreaLoad(RawTable):
    """One entry of ``area_loads``."""

    REQUIRED = ("pressure", "on", "chord", "spacing")
    pressure: Any = Field(None, description='a pressure, such as "0.8 kN/m2"')
    on: MeasuredOn = Field("plan", description='"plan", "slope" or "normal to slope"')
    chord: str = Field("", description='a chain of nodes, such as "B0..B12"')
    spacing: Any = Field(None, description='the width that the truss carries, such as "6.0 m"')
    coefficient: Any = Field(None, description="a factor on the pressure, such as 0.8")
    coefficients: dict[str, Any] = Field(
        {}, description='factors by part of the chord, such as { "B0..B6" = 0.8, "B6..B12" = 0.4 }'
    )
    ridge: str | None = Field(None, description="the node between left and right")


class RawLineLoad(RawTable):
    """One entry of ``line_loads``."""

    REQUIRED = ("load", "along", "chord")
    load: Any = Field(None, description='a load per length, such as "1.5 kN/m"')
    along: MeasuredAlong = Field("plan", description='"plan", "chord" or "height"')
    chord: str = Field("", description='a chain of nodes, such as "B0..B12"')
    direction: Any = Field("down", description='"down", "up", an axis such as "-x", or a vector')


class RawPointLoad(RawTable):
    """One entry of ``point_loads``: on a member at a distance, or at a position."""

    REQUIRED = ("force",)
    force: Any = Field(None, description="force components, such as [0.0, -9.6]")
    member: str | None = Field(None, description='a member, such as "B3-B4"')
    distance: Any = Field(None, description="the distance from the member's first node")
    position: Any = Field(None, description="coordinates, such as [3.5, 2.0]")


class RawCombination(RawTable):
    """One combination."""

    REQUIRED = ("name", "state", "factors")
    name: str = Field("", description="a name as text")
    state: State = Field("strength", description='"strength" or "serviceability"')
    factors: dict[str, Any] = Field(
        {}, description="factors by load case, such as { permanent = 1.35, snow = 1.5 }"
    )
    duration: LoadDuration | None = Field(
        None, description=f"one of {', '.join(get_args(LoadDuration))}"
    )
    long_term: dict[str, Any] = Field(
        {}, description="the part that acts for long, such as { permanent = 1.0, snow = 0.2 }"
    )


class RawLimit(RawTable):
    """One deflection limit."""

    REQUIRED = ("name", "nodes", "limit")
    name: str = Field("", description="a name as text")
    nodes: Any = None
    direction: Any = None
    limit: Any = None
    span: Any = None
    combinations: Any = None
    relative_to: str | None = Field(None, description="the name of a node")
    component: DeflectionComponent = Field(
        "instantaneous", description='"instantaneous", "final" or "net final"'
    )
    precamber: dict[str, Any] = Field(
        {}, description="load cases with factors, such as { permanent = 1.0 }"
    )


class RawOption(RawTable):
    """One option; every further key belongs to the standard and passes untouched."""

    model_config = ConfigDict(extra="allow", strict=True)
    REQUIRED = ("standard", "catalogue")
    standard: str = Field("", description='the name of a standard, such as "EN 1993-1-1"')
    grade: str | None = Field(None, description='a grade as text, such as "S355"')
    catalogue: str = Field("", description="a shipped catalogue's name or a file path")
    slenderness_limits: dict[str, Any] | None = Field(
        None, description="{ compression = 180, tension = 300 }"
    )
    connection_allowance: Any = 0.0
    net_section_factor: Any = 1.0
    cost: dict[str, Any] | None = Field(
        None, description='{ currency = "EUR", per_kg = 2.1, source = "...", date = "2026-10" }'
    )
    carbon: dict[str, Any] | None = Field(
        None, description='{ a1_a3 = 1.13, source = "...", date = "2026-10" }'
    )


class RawCost(RawTable):
    """``cost`` of an option."""

    REQUIRED = ("currency", "source", "date")
    currency: str = Field("", description='a currency, such as "EUR"')
    per_kg: Any = None
    per_lb: Any = None
    per_metre: Any = None
    per_foot: Any = None
    per_piece: Any = None
    catalogue_price: bool = Field(False, description="true or false")
    source: str = Field("", description="where the rates come from, as text")
    date: str = Field("", description='the date of the rates as text, such as "2026-10"')


class RawCarbon(RawTable):
    """``carbon`` of an option."""

    REQUIRED = ("a1_a3", "source", "date")
    a1_a3: Any = None
    biogenic: Any = None
    source: str = Field("", description="where the factors come from, as text")
    date: str = Field("", description='the date of the factors as text, such as "2026-10"')


MOST_KEYS = 20
"""Keys of one table named in a message: all of them."""

Table = TypeVar("Table", bound=RawTable)

DESCRIBED_HERE: dict[str, str] = {
    "nodes": 'a list of nodes, such as ["A4"], or "all"',
    "a1_a3": "embodied carbon of modules A1 to A3 in kgCO2e per kg, such as 1.13",
    "limit": 'a length, such as "25 mm", or a part of the span, such as "span/250"',
}
"""What belongs in keys that may hold more than one type, for the message when they are missing."""

OTHER_WORDS = {
    "dead": "permanent",
    "live": "imposed",
    "variable": "imposed",
    "imposed_roof": "imposed roof",
    "roof": "imposed roof",
    "medium-term": "medium",
    "short-term": "short",
    "long-term": "long",
    "uls": "strength",
    "sls": "serviceability",
    "ultimate": "strength",
    "weight": "mass",
    "co2": "carbon",
    "kips": "kip",
    "lb": "lbf",
    "inch": "in",
    "feet": "ft",
    "foot": "ft",
    "metre": "m",
}
"""Other words of the trade for the words of the brief, for the question "did you mean"."""


def read_entry(
    model: type[Table], value: object, path: KeyPath, findings: Findings, what: str
) -> tuple[Table | None, frozenset[str]]:
    """Return the entry's good keys as a record, and the names of its faulty or missing keys.

    A key whose name is a slip counts as faulty under its right name too. Every mistake goes to
    ``findings``. None when ``value`` is not a table at all.
    """
    if not isinstance(value, dict):
        findings.add(path, found=shown(value), expected=what)
        return None, frozenset()
    faulty = set()
    for key in model.REQUIRED:
        if key not in value:
            faulty.add(key)
            _add_missing(model, value, (*path, key), key, findings)
    try:
        return model.model_validate(value), frozenset(faulty)
    except ValidationError as error:
        good = {k: list(v) if isinstance(v, list) else v for k, v in value.items()}
        for mistake in error.errors(include_url=False):
            faulty.add(str(mistake["loc"][0]))
            _remove(good, mistake["loc"])
        for mistake in error.errors(include_url=False):
            faulty.add(_add_mistake(model, value, mistake, path, findings))
    return model.model_validate(good), frozenset(faulty)


def _remove(good: dict[str, Any], location: tuple[str | int, ...]) -> None:
    """Take the faulty value out: an item of a list alone, otherwise the whole key."""
    key = str(location[0])
    if len(location) > 1 and isinstance(good.get(key), list):
        good[key][location[1]] = None
    else:
        good.pop(key, None)


def _add_missing(
    model: type[RawTable],
    value: dict[str, Any],
    path: KeyPath,
    key: str,
    findings: Findings,
) -> None:
    description = model.model_fields[key].description or DESCRIBED_HERE[key]
    strangers = [k for k in value if k not in model.model_fields]
    near = findings.nearest(key, strangers)
    if near and model.model_config.get("extra") == "forbid":
        return  # told where the stranger stands
    fix = f"Rename the key {quoted(near)} to {quoted(key)}." if near else ""
    findings.add(path, found="nothing", expected=description, fix=fix)


def _add_mistake(
    model: type[RawTable],
    value: dict[str, Any],
    mistake: Any,
    path: KeyPath,
    findings: Findings,
) -> str:
    """Record one mistake; return the name of the key that it leaves without a value."""
    location: tuple[str | int, ...] = mistake["loc"]
    place = (*path, *(p + 1 if isinstance(p, int) else p for p in location))
    key, given = str(location[0]), mistake["input"]
    if mistake["type"] == "extra_forbidden":
        return _add_unknown_key(model, value, place, key, findings)
    field = model.model_fields[key]
    fix = ""
    if mistake["type"] == "literal_error" and isinstance(given, str):
        words = str(mistake["ctx"]["expected"])
        known = [w.strip("'") for w in words.replace(" or ", ", ").split(", ")]
        other = OTHER_WORDS.get(given.casefold())
        fix = (
            f"Did you mean {quoted(other)}?"
            if other in known
            else findings.did_you_mean(given, known)
        )
    findings.add(place, found=shown(given), expected=str(field.description), fix=fix)
    return key


def _add_unknown_key(
    model: type[RawTable],
    value: dict[str, Any],
    place: KeyPath,
    key: str,
    findings: Findings,
) -> str:
    known = list(model.model_fields)
    missing = [name for name in known if name not in value]
    near = findings.nearest(key, missing) or findings.nearest(key, known)
    fix = f"Did you mean {quoted(near)}?" if near else ""
    if key in RawBrief.model_fields and model is not RawBrief:
        fix = f"A key of the whole brief stands before the first table: move {key} there."
    findings.add(
        place,
        found=f"the unknown key {quoted(key)}",
        expected=f"one of {listed(known, most=MOST_KEYS)}",
        fix=fix,
    )
    return near or key
