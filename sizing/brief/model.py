"""The validated brief: every record here is in SI units and refers by index.

Readers (``sizing.brief.toml_reader`` and others) build these records and guarantee what the
docstrings say; everything downstream relies on it and checks nothing again.

Index letters used throughout: ``n`` nodes, ``m`` members, ``g`` groups, ``q`` load cases,
``c`` combinations, ``d`` dimensions (2 or 3).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Literal

ActionKind = Literal[
    "permanent", "imposed", "imposed roof", "snow", "wind", "temperature", "settlement", "other"
]
LoadDuration = Literal["permanent", "long", "medium", "short", "instantaneous"]
State = Literal["strength", "serviceability"]
Objective = Literal["mass", "cost", "carbon"]
LengthRule = Literal["factor", "length"]
DeflectionComponent = Literal["instantaneous", "final", "net final"]


@dataclass(frozen=True, kw_only=True, slots=True)
class SourceFile:
    """A file that was read: the name as the user gave it, its full path and its SHA-256."""

    name: str
    path: Path
    sha256: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Units:
    """The brief's units for bare numbers and for print, e.g. force ``kN`` and length ``m``."""

    force: str = "kN"
    length: str = "m"


@dataclass(frozen=True, kw_only=True, slots=True)
class Node:
    """A joint: ``position`` in m, 2 or 3 coordinates; the last one points up."""

    name: str
    position: tuple[float, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class Support:
    """Directions in which a node is held, one flag per coordinate."""

    node: int
    held: tuple[bool, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class BucklingLength:
    """A buckling length: a factor on the member's own length, or a length in m."""

    rule: LengthRule = "factor"
    value: float = 1.0

    def of(self, member_length: float) -> float:
        """Return the buckling length in m of a member of ``member_length`` m."""
        return self.value * member_length if self.rule == "factor" else self.value


@dataclass(frozen=True, kw_only=True, slots=True)
class SlendernessLimits:
    """Greatest L/i of a member that is ever compressed, and of one that is only tensioned.

    ``None`` sets no limit.
    """

    compression: float | None = None
    tension: float | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Group:
    """Members that take the same section.

    ``depth_in_plane``: the section's depth lies in the plane of the truss, so that buckling in
    plane bends it about its major axis. ``net_section_factor``: net over gross area at joints,
    used in tension. ``utilisation_cap``: greatest utilisation allowed. ``families`` and
    ``designations`` (patterns with * and ?) restrict the catalogue when not empty.

    ``restrained_nodes``: nodes held out of plane, where the brief lists them; each member then
    carries its own length between restraints (see :meth:`Brief.buckling_lengths`), and
    ``out_of_plane`` is the greatest of them, as a length.

    For cutting: ``end_deduction`` is what the joints take off a member at its first and second
    node (m; None: not given), ``order_step`` the step that order lengths are rounded up to.
    ``continuous``: members in one line run through their nodes and are spliced at nodes only.
    ``splices``: a piece longer than the stock may be spliced between nodes.
    """

    name: str
    members: tuple[int, ...]
    in_plane: BucklingLength = BucklingLength()
    out_of_plane: BucklingLength = BucklingLength()
    depth_in_plane: bool = True
    net_section_factor: float = 1.0
    utilisation_cap: float = 1.0
    slenderness: SlendernessLimits | None = None
    families: tuple[str, ...] = ()
    designations: tuple[str, ...] = ()
    restrained_nodes: tuple[int, ...] = ()
    end_deduction: tuple[float, float] | None = None
    order_step: float | None = None
    continuous: bool = False
    splices: bool = False


@dataclass(frozen=True, kw_only=True, slots=True)
class Member:
    """A two-force member from node ``start`` to node ``end`` (indices), ``length`` in m.

    ``name`` is its two node names, ``A0-A1``; ``mark`` is the short mark on the schedule.
    ``out_of_plane``: buckling length in m between restrained nodes, where the group lists them;
    None where the group's rule holds.
    """

    name: str
    mark: str
    start: int
    end: int
    group: int
    length: float
    out_of_plane: float | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class StatedLoad:
    """A load as the brief states it, beside what reaches the nodes.

    ``text`` prints both, e.g. ``area load 1 on B0..B12: 1.00 kN/m² on plan × 28.800 m × 6.000 m
    = 172.80 kN down; at the nodes 172.80 kN down``. ``given`` is the resultant from the whole
    extent and ``applied`` the sum of the nodal forces, d components in N.
    """

    text: str
    given: tuple[float, ...]
    applied: tuple[float, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class LoadCase:
    """One action. ``nodal`` maps node index to force components in N (d of them).

    ``nodal`` holds everything that acts at the nodes, the shares of area, line and point loads
    included; ``stated`` has a row for each of those.

    ``self_weight`` adds the weight of the picked sections, downwards. ``duration`` overrides
    the usual load duration of the kind.

    What a combination rule needs to know: cases with the same ``action`` (its kind unless
    given) are parts of one action, at full value together. Of the cases with the same
    ``alternative_set`` only one acts at a time; empty text: none, the case acts with any
    other; ``None``: the usual of its kind. ``may_be_absent``: a permanent load that is not
    certain to be there (future services), left out where it would help.
    """

    name: str
    kind: ActionKind
    nodal: Mapping[int, tuple[float, ...]]
    self_weight: bool = False
    duration: LoadDuration | None = None
    action: str | None = None
    alternative_set: str | None = None
    may_be_absent: bool = False
    stated: tuple[StatedLoad, ...] = ()


@dataclass(frozen=True, kw_only=True, slots=True)
class Combination:
    """A factored sum of load cases; ``factors`` maps case index to factor (zeros left out).

    ``origin`` says where it comes from: written out in the brief, or the rule that made it.
    ``duration`` is the shortest load duration of its cases. ``long_term`` maps case index to
    the factor of its part that acts for so long that timber creeps under it (permanent actions
    in full, variable ones times ψ2); empty for strength.
    """

    name: str
    state: State
    factors: Mapping[int, float]
    duration: LoadDuration
    origin: str = "brief"
    long_term: Mapping[int, float] = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True, slots=True)
class DeflectionLimit:
    """|displacement of each node along ``direction``| must not exceed ``limit`` (m).

    ``direction`` is a unit vector of d components, ``direction_text`` its name in the brief.
    ``combinations`` are indices of the combinations in which the limit holds (serviceability
    ones unless the brief names others). ``relative_to``: when given, the movement is taken
    relative to that node. ``limit_text`` is the limit as written, e.g. ``span/250``.
    ``component``: the elastic movement, or the final one with creep (timber; the same for
    materials that do not creep), or the final one less the precamber. ``precamber`` maps case
    index to factor: the truss is built cambered by its elastic movement under these loads.
    """

    name: str
    nodes: tuple[int, ...]
    direction: tuple[float, ...]
    direction_text: str
    limit: float
    limit_text: str
    combinations: tuple[int, ...]
    relative_to: int | None = None
    component: DeflectionComponent = "instantaneous"
    precamber: Mapping[int, float] = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True, slots=True)
class CostRates:
    """The user's rates in ``currency``: per kg of section, per m of member, per piece.

    ``catalogue_price``: the catalogue's own price per m is added. ``source`` and ``date`` say
    where the rates come from.
    """

    currency: str
    per_kg: float = 0.0
    per_metre: float = 0.0
    per_piece: float = 0.0
    catalogue_price: bool = False
    source: str
    date: str


@dataclass(frozen=True, kw_only=True, slots=True)
class CarbonFactors:
    """The user's embodied carbon factors in kgCO2e per kg: modules A1 to A3 of EN 15804.

    ``biogenic``: carbon stored in the material (negative), never netted with ``a1_a3``.
    """

    a1_a3: float
    biogenic: float | None = None
    source: str
    date: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Option:
    """One complete answer: a standard, a grade, a catalogue, and the standard's own settings.

    ``catalogue`` is a shipped name or a path relative to the brief. ``settings`` holds the
    remaining keys of the option's table, not yet interpreted; the standard validates them.
    ``net_section_factor`` multiplies that of every group (what the joints of this material leave
    of a member in tension). ``cost`` and ``carbon`` are None where the brief gives no rates: the
    answer is then unpriced.
    """

    name: str
    standard: str
    grade: str | None
    catalogue: str
    slenderness: SlendernessLimits = SlendernessLimits()
    connection_allowance: float = 0.0
    net_section_factor: float = 1.0
    cost: CostRates | None = None
    carbon: CarbonFactors | None = None
    settings: Mapping[str, Any] = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True, slots=True)
class StockBars:
    """Bars on sale: ``lengths`` in m; ``prices`` per bar and ``numbers`` at hand, if any."""

    lengths: tuple[float, ...]
    prices: tuple[float, ...] = ()
    numbers: tuple[int, ...] = ()


@dataclass(frozen=True, kw_only=True, slots=True)
class Stock:
    """What bars are cut from, for a cutting list.

    ``bars`` for sections that neither ``per_section`` (pairs of designation pattern and bars,
    the first that matches counts) nor the catalogue give lengths for; None: none. ``kerf``: the
    width of a saw cut in m; ``trim``: lost at the start of every bar, m. ``trusses`` are cut
    together. ``longest_piece``: longest that can be carried to the site, m.
    """

    bars: StockBars | None
    per_section: tuple[tuple[str, StockBars], ...]
    kerf: float
    trim: float
    minimise: Literal["length", "bars", "cost"]
    trusses: int = 1
    longest_piece: float | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Brief:
    """Everything that was asked for, valid and in SI units.

    ``cautions``: what the reader allowed but a checking engineer wants to know, in sentences.
    """

    title: str
    source: SourceFile
    units: Units
    minimise: Objective
    nodes: tuple[Node, ...]
    supports: tuple[Support, ...]
    groups: tuple[Group, ...]
    members: tuple[Member, ...]
    cases: tuple[LoadCase, ...]
    combinations: tuple[Combination, ...]
    deflection_limits: tuple[DeflectionLimit, ...]
    options: tuple[Option, ...]
    notes: str = ""
    cautions: tuple[str, ...] = ()
    stock: Stock | None = None

    @property
    def dimensions(self) -> int:
        """2 for a plane truss, 3 for a space truss."""
        return len(self.nodes[0].position)

    def combinations_of(self, state: State) -> tuple[int, ...]:
        """Return the indices of the combinations of one state, in brief order."""
        return tuple(i for i, c in enumerate(self.combinations) if c.state == state)

    def buckling_lengths(self, member: int) -> tuple[float, float]:
        """Return the buckling lengths (in plane, out of plane) of a member in m."""
        this = self.members[member]
        group = self.groups[this.group]
        out = group.out_of_plane.of(this.length) if this.out_of_plane is None else this.out_of_plane
        return group.in_plane.of(this.length), out
