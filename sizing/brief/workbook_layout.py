"""The sheets of a brief as a workbook: their names, heads, notes and what each cell holds.

The keys, their types and their choices come from :mod:`sizing.brief.raw_tables`; here stand the
words of the trade for them. A key without a word of its own gets one made from its name, so
that every key of a brief has its column.
"""

from __future__ import annotations

import types
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Literal, Union, get_args, get_origin

from sizing.brief import raw_tables
from sizing.brief.order_lengths import RawDeduction
from sizing.brief.raw_tables import RawTable
from sizing.brief.stock import RawStock
from sizing.brief.workbook_cells import Kind

Path = tuple[str | int, ...]
Unit = Literal["", "force", "length"]
EntryShape = Literal["table", "components", "value"]

FURTHER = "Further"
FURTHER_NOTE = "Anything else, as in the text form: key = value, key = value"
ITEM, VALUE, NOTE = "Item", "Value", "Note"
EACH = "*"
"""In the place of an entry: here stands the text of the next key column."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Column:
    """One column of a sheet, or one row of a sheet of items. ``path`` leads to the value."""

    head: str
    path: Path = ()
    kind: Kind = "any"
    choices: tuple[str, ...] = ()
    note: str = ""
    unit: Unit = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class RowSheet:
    """A sheet with one entry in each row.

    ``place``: where the entry stands in the tables; each ``*`` is the text of the next of the
    ``keys`` columns. ``listed``: the place is a list, and rows add to it. ``factors``: the
    columns to the right of the known ones are keys of this table of the entry.
    """

    title: str
    note: str
    place: tuple[str, ...]
    keys: tuple[Column, ...] = ()
    columns: tuple[Column, ...] = ()
    shape: EntryShape = "table"
    listed: bool = False
    keys_last: bool = False
    factors: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class ItemSheet:
    """A sheet with one value in each row; ``each``: one column of values for each entry."""

    title: str
    note: str
    place: tuple[str, ...]
    rows: tuple[Column, ...] = ()
    each: bool = False


Sheet = RowSheet | ItemSheet

_HEADS: dict[Path, str] = {
    ("units", "force"): "Unit of force",
    ("units", "length"): "Unit of length",
    ("buckling_length",): "Buckling length, both planes",
    ("buckling_length", "in_plane"): "Buckling length in plane",
    ("buckling_length", "out_of_plane"): "Buckling length out of plane",
    ("unrestrained_ends",): "Free ends",
    ("held",): "Held directions",
    ("slenderness_limits", "compression"): "Greatest slenderness, compression",
    ("slenderness_limits", "tension"): "Greatest slenderness, tension",
    ("self_weight",): "Self-weight",
    ("long_term",): "Long-term part",
    ("kind",): "Kind of action",
    ("end_deduction",): "End deduction, both ends",
    ("end_deduction", "start"): "End deduction at the first node",
    ("end_deduction", "end"): "End deduction at the second node",
    ("carbon", "a1_a3"): "Carbon: A1 to A3",
}
_FACTOR_OR_LENGTH = "A factor on the member's length (0.9) or a length with its unit (5.0 m)"
_NOTES: dict[Path, str] = {
    ("notes",): "Free text",
    ("combination_rule",): "Name of a rule, such as EN 1990, instead of or beside the sheet "
    "Combinations",
    ("buckling_length",): _FACTOR_OR_LENGTH + "; fill in this or the next two",
    ("buckling_length", "in_plane"): _FACTOR_OR_LENGTH,
    ("buckling_length", "out_of_plane"): _FACTOR_OR_LENGTH,
    ("coefficients",): "Factors by part of the chord: B0..B6 = 0.8, B6..B12 = 0.4",
    ("force",): "Force components along the axes: [0, -9.6]",
    ("position",): "Coordinates: [3.5, 2.0]",
    ("cost", "per_kg"): "Price of one kg of section; fill in what the rates are given for",
    ("carbon", "a1_a3"): "kgCO2e per kg of section, modules A1 to A3 of EN 15804",
    ("carbon", "biogenic"): "Carbon stored in the material, kgCO2e per kg, negative",
    ("net_section_factor",): "Net over gross area at the joints, for tension; 1 if left empty",
    ("utilisation_cap",): "Greatest utilisation allowed; 1 if left empty",
    ("restrained_nodes",): "Nodes held out of plane: A0, A3, A6",
    ("unrestrained_ends",): "Free chain ends with their factor: A8 = 2.0",
    ("families",): "Section families to choose from: SHS, RHS",
    ("sections",): "Designations or patterns to choose from: SHS 100*",
    ("end_deduction",): "What the joints take off each member (35 mm); fill in this or the next "
    "two",
    ("order_length",): "Step that order lengths are rounded up to (5 mm)",
    ("cost", "per_lb"): "Price of one pound of section",
    ("cost", "per_metre"): "Price of one metre of member",
    ("cost", "per_foot"): "Price of one foot of member",
    ("cost", "per_piece"): "Price of one piece",
    ("stock", "lengths"): "Lengths of bars in stock: 6 m, 12 m",
    ("stock", "prices"): "Price of a bar of each length: 40; 75",
    ("stock", "numbers"): "Bars at hand of each length: 10; 4",
    ("stock", "per_section"): "Only by key, such as stock.per_section.NAME.lengths, in rows below",
    ("held",): "x, y or z, with commas between: x, y",
    ("nodes",): "Nodes with commas between (A3, A4), or all",
    ("RawLimit", "direction"): "x, y or z; vertical if left empty",
    ("limit",): "A part of the span (span/250) or a length",
    ("span",): "Only where the supports do not give it",
    ("combinations",): "Names with commas between; serviceability if left empty",
    ("precamber",): "Load cases with factors: permanent = 1.0",
    ("long_term",): "The part that acts for long: permanent = 1.0, snow = 0.2",
    ("connection_allowance",): "Part of the mass for gussets, bolts and welds, such as 0.05",
}
_KINDS: dict[Path, Kind] = {
    ("nodes",): "list or word",
    ("combinations",): "list or word",
    ("cost", "date"): "date",
    ("carbon", "date"): "date",
}
_UNITS: dict[Path, Unit] = {
    ("limit",): "length",
    ("span",): "length",
    ("distance",): "length",
    ("order_length",): "length",
    ("end_deduction",): "length",
    ("end_deduction", "start"): "length",
    ("end_deduction", "end"): "length",
}
_WITHIN: dict[tuple[type[RawTable], str], Any] = {
    (raw_tables.RawBrief, "units"): raw_tables.RawUnits,
    (raw_tables.RawGroup, "slenderness_limits"): raw_tables.RawSlenderness,
    (raw_tables.RawOption, "slenderness_limits"): raw_tables.RawSlenderness,
    (raw_tables.RawOption, "cost"): raw_tables.RawCost,
    (raw_tables.RawOption, "carbon"): raw_tables.RawCarbon,
    (raw_tables.RawBrief, "stock"): RawStock,
    (raw_tables.RawGroup, "buckling_length"): ("in_plane", "out_of_plane"),
    (raw_tables.RawGroup, "end_deduction"): RawDeduction,
}
"""Tables inside an entry whose keys get columns of their own."""
_WHOLE_TOO = frozenset({"buckling_length", "end_deduction"})
"""Of these, the keys that may also hold one value."""


def columns_of(model: type[RawTable], left_out: Sequence[str] = ()) -> tuple[Column, ...]:
    """Return a column for every key of the model, in the model's order."""
    return tuple(
        column
        for key, field in model.model_fields.items()
        if key not in left_out
        for column in _columns(model, key, field)
    )


def _columns(model: type[RawTable], key: str, field: Any) -> Iterator[Column]:
    within = _WITHIN.get((model, key))
    if within is None or key in _WHOLE_TOO:
        yield _column((key,), field.annotation, field.description, (model.__name__,))
    if isinstance(within, tuple):
        for inner in within:
            yield _column((key, inner), Any, None)
    elif within is not None:
        for inner, inner_field in within.model_fields.items():
            yield _column((key, inner), inner_field.annotation, inner_field.description)


def _column(
    path: tuple[str, ...], annotation: Any, description: str | None, of: tuple[str, ...] = ()
) -> Column:
    kind, choices = _kind(annotation)
    return Column(
        head=_HEADS.get(path) or _words(path),
        path=path,
        kind=_KINDS.get(path, kind),
        choices=choices,
        note=_NOTES.get((*of, *path))
        or _NOTES.get(path)
        or _plain_note(kind, choices, description),
        unit=_UNITS.get(path, ""),
    )


def _words(path: tuple[str, ...]) -> str:
    return ": ".join(path).replace("_", " ").capitalize()


def _plain_note(kind: Kind, choices: tuple[str, ...], description: str | None) -> str:
    """Return a note for a cell; descriptions speak of text in quotation marks and brackets."""
    if kind == "flag":
        return "yes or no"
    if choices:
        return ", ".join(choices)
    text = description or ""
    for mark in '"{}' if kind == "any" else '"[]{}':
        text = text.replace(mark, "")
    text = " ".join(text.split()).removesuffix(", by name")
    return text[:1].upper() + text[1:]


def _kind(annotation: Any) -> tuple[Kind, tuple[str, ...]]:
    """Return what a cell holds for the type of a key, and its choices."""
    options = get_args(annotation)
    origin = get_origin(annotation)
    if origin in (types.UnionType, Union):
        return _kind(next(option for option in options if option is not type(None)))
    if origin is Literal:
        return "choice", tuple(str(option) for option in options)
    if origin is list and options == (Any,):
        return "quantities", ()
    kinds: Mapping[Any, Kind] = {str: "text", bool: "flag", list: "list", dict: "table"}
    return kinds.get(origin or annotation, "any"), ()


UNITS: Mapping[str, tuple[str, ...]] = {
    str(column.path[0]): column.choices for column in columns_of(raw_tables.RawUnits)
}
"""The units that bare numbers may have, by what they measure."""


def _key(head: str, note: str = "") -> Column:
    return Column(head=head, kind="text", note=note)


def _components(unit: Unit, what: str) -> tuple[Column, ...]:
    notes = (f"{what}, along x", f"{what}, along y", f"{what}, along z; empty in a plane truss")
    return tuple(
        Column(head=axis, path=(i,), kind="any", unit=unit, note=note)
        for i, (axis, note) in enumerate(zip("xyz", notes, strict=True), start=1)
    )


_CASE = _key("Case", "Load case, by its name")
_SPREAD: tuple[tuple[str, str, type[RawTable], str], ...] = (
    (
        "area_loads", "Area loads", raw_tables.RawAreaLoad,
        "Loads per area on a chord; the tool shares them out to the nodes.",
    ),
    (
        "line_loads", "Line loads", raw_tables.RawLineLoad,
        "Loads per length on a chord; the tool shares them out to the nodes.",
    ),
    (
        "point_loads", "Point loads", raw_tables.RawPointLoad,
        "Forces between nodes: on a member at a distance, or at a position.",
    ),
)  # fmt: skip
_TABLES = (
    "nodes", "supports", "groups", "cases", "combinations", "deflection_limits", "options",
)  # fmt: skip
"""Keys of the whole brief that have sheets of their own."""

SHEETS: tuple[Sheet, ...] = (
    ItemSheet(
        title="General",
        note="The whole brief: title, units of bare numbers, what is minimised.",
        place=(),
        rows=columns_of(raw_tables.RawBrief, _TABLES),
    ),
    RowSheet(
        title="Nodes",
        note="Joints of the truss. The last axis points up: y in a plane truss, z in space.",
        place=("nodes", EACH),
        keys=(_key("Node", "Letters and digits: A0, A1, B12"),),
        columns=_components("length", "Position"),
        shape="components",
    ),
    RowSheet(
        title="Supports",
        note="Nodes that are held, and in which directions.",
        place=("supports", EACH),
        keys=(_key("Node"),),
        columns=columns_of(raw_tables.RawSupport),
    ),
    RowSheet(
        title="Groups",
        note="Members that take the same section. Which members: sheet Members.",
        place=("groups", EACH),
        keys=(_key("Group"),),
        columns=columns_of(raw_tables.RawGroup, ("members",)),
    ),
    RowSheet(
        title="Members",
        note="Every member once, by its two nodes, with its group.",
        place=("groups", EACH, "members"),
        keys=(_key("Group", "As on the sheet Groups"),),
        columns=(Column(head="Member", kind="text", note="Its two nodes with a hyphen: A0-A1"),),
        shape="value",
        listed=True,
        keys_last=True,
    ),
    RowSheet(
        title="Cases",
        note="Load cases. Their forces: sheet Loads and the sheets after it.",
        place=("cases", EACH),
        keys=(_key("Case", "Name of the load case"),),
        columns=columns_of(raw_tables.RawCase, ("nodal", *(key for key, *_ in _SPREAD))),
    ),
    RowSheet(
        title="Loads",
        note="Forces at nodes, positive along the axes: a load that acts downwards is negative.",
        place=("cases", EACH, "nodal", EACH),
        keys=(_CASE, _key("Node", "A node, or several at once: B0..B12")),
        columns=_components("force", "Force"),
        shape="components",
    ),
    *(
        RowSheet(
            title=title,
            note=note,
            place=("cases", EACH, key),
            keys=(_CASE,),
            columns=columns_of(model),
            listed=True,
        )
        for key, title, model, note in _SPREAD
    ),
    RowSheet(
        title="Combinations",
        note="Each combination with its factor for every load case in the columns at the right.",
        place=("combinations",),
        columns=columns_of(raw_tables.RawCombination, ("factors",)),
        listed=True,
        factors="factors",
    ),
    ItemSheet(
        title="Combination rule",
        note="Settings of the rule that makes combinations, where it has any.",
        place=("combination_rule",),
    ),
    RowSheet(
        title="Deflection limits",
        note="Greatest movements allowed under the combinations named.",
        place=("deflection_limits",),
        columns=columns_of(raw_tables.RawLimit),
        listed=True,
    ),
    ItemSheet(
        title="Options",
        note="Each column at the right is one complete answer; several are compared. Further "
        "settings of the standard: one row each, with its key as the item.",
        place=("options",),
        rows=columns_of(raw_tables.RawOption),
        each=True,
    ),
)
"""Every sheet, in the order of the workbook."""
