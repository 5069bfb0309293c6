"""The checked answer of one option, as records that documents print and scripts read.

SI units throughout (N, m, kg). Signs: tension positive; deflections and reactions along the
brief's axes. Everything a document needs stands here; no writer computes.
"""

from __future__ import annotations

from dataclasses import dataclass

from sizing.brief.model import Brief, SourceFile, State
from sizing.standards.contract import Sense, Step


@dataclass(frozen=True, kw_only=True, slots=True)
class Extreme:
    """The greatest force of one sense in a member: ``force`` in N (signed), its combination.

    ``resistance`` in N and ``utilisation`` belong to the combination with the greatest
    utilisation of this sense, named by ``governing_combination`` (it may differ from the one
    with the greatest force where the resistance depends on load duration). ``steps`` are the
    worked lines of the resistance before the group's cap on utilisation; empty where there is
    none.
    """

    force: float
    combination: str
    resistance: float
    utilisation: float
    governing_combination: str
    governing_force: float
    clause: str
    steps: tuple[Step, ...] = ()


@dataclass(frozen=True, kw_only=True, slots=True)
class MemberResult:
    """One member of the schedule. ``tension``/``compression`` are None where never reached.

    ``governing`` is the sense whose utilisation is greater (None for a member without force).
    ``forces`` are the member forces in N of every combination, in the order of
    ``OptionResult.combinations``. ``order_length``: system length less end deductions, rounded
    up, in m; None where the group gives no deductions or the member is part of a longer run.
    """

    name: str
    mark: str
    group: str
    start: str
    end: str
    designation: str
    catalogue_row: int
    length: float
    mass_per_metre: float
    mass: float
    area: float
    in_plane: float
    out_of_plane: float
    slenderness_in: float
    slenderness_out: float
    slenderness_limit: float | None
    tension: Extreme | None
    compression: Extreme | None
    utilisation: float
    governing: Sense | None
    governing_clause: str
    governing_combination: str
    forces: tuple[float, ...]
    note: str = ""
    order_length: float | None = None

    @property
    def reversal(self) -> bool:
        """Whether the member is tensioned in one combination and compressed in another."""
        return self.tension is not None and self.compression is not None


@dataclass(frozen=True, kw_only=True, slots=True)
class GroupResult:
    """One group: its section and what governs it.

    ``governed_by`` is a phrase (``compression, 6.3.1 buckling out of plane``) and
    ``governing_member`` the mark of the member with the greatest utilisation.
    """

    name: str
    designation: str
    catalogue_row: int
    members: tuple[str, ...]
    total_length: float
    mass: float
    utilisation: float
    governed_by: str
    governing_member: str
    governing_combination: str


@dataclass(frozen=True, kw_only=True, slots=True)
class LighterResult:
    """The next lighter section of a group and the check that it fails when put in alone.

    ``designation`` None: the group already has the lightest section it may take.
    ``utilisation`` of the failing check; ``where`` names member or deflection limit.
    """

    group: str
    designation: str | None
    mass_saved: float
    fails: str
    where: str
    combination: str
    utilisation: float


@dataclass(frozen=True, kw_only=True, slots=True)
class NearTieResult:
    """Another adequate design, nearly as good: ``designations`` per group in brief order.

    ``objective`` is of what was minimised; mass in kg; ``utilisation`` the greatest of all checks.
    """

    designations: tuple[str, ...]
    objective: float
    mass: float
    utilisation: float


@dataclass(frozen=True, kw_only=True, slots=True)
class DeflectionResult:
    """One limit at one node in one combination: ``value`` and ``limit`` in m."""

    limit_name: str
    node: str
    direction: str
    combination: str
    value: float
    limit: float
    limit_text: str
    utilisation: float


@dataclass(frozen=True, kw_only=True, slots=True)
class ReactionResult:
    """Reaction of the support on the truss in N along each axis (0 where not held)."""

    node: str
    combination: str
    state: State
    components: tuple[float, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class CombinationResult:
    """A combination as analysed, with load case names and its equilibrium residual.

    ``applied`` is the sum of all loads in N along each axis, self-weight included;
    ``residual`` is the greatest nodal out-of-balance over the greatest nodal load.
    """

    name: str
    state: State
    factors: tuple[tuple[str, float], ...]
    duration: str
    origin: str
    applied: tuple[float, ...]
    residual: float


@dataclass(frozen=True, kw_only=True, slots=True)
class SectionSummary:
    """Take-off line: one catalogue section, all pieces together."""

    designation: str
    catalogue_row: int
    product: str
    pieces: int
    total_length: float
    mass_per_metre: float
    mass: float
    surface: float


@dataclass(frozen=True, kw_only=True, slots=True)
class WorkedCheck:
    """The lines of one worked resistance, for the governing members."""

    mark: str
    designation: str
    sense: Sense
    combination: str
    force: float
    steps: tuple[Step, ...]
    utilisation: float


@dataclass(frozen=True, kw_only=True, slots=True)
class CutPiece:
    """Pieces of one ``length`` (m) and section: ``number`` over all trusses, ``marks`` of one.

    A piece of a continuous chord is marked by its first and last member, ``B1 to B4``. ``note``
    says where it is too long to carry or for every bar.
    """

    length: float
    number: int
    marks: tuple[str, ...]
    note: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class CutPattern:
    """``bars`` bars of ``stock_length`` (m), each cut into (length in m, number) ``pieces``.

    ``offcut`` in m is left over on each.
    """

    stock_length: float
    bars: int
    pieces: tuple[tuple[float, int], ...]
    offcut: float


@dataclass(frozen=True, kw_only=True, slots=True)
class CuttingResult:
    """How the pieces of one section are cut from stock bars.

    ``status``: ``proven`` (no better plan exists), ``stopped`` (the bound leaves a gap), ``not
    enough stock`` (of the bars at hand) or ``no stock lengths`` (none stated). ``objective`` and
    ``bound`` measure what is ``minimised``: length in m, bars, or cost in the user's currency.
    ``waste`` in m is offcuts, saw cuts and trim. ``splices``: (run, where) in words.
    """

    designation: str
    status: str
    method: str
    minimised: str
    objective: float | None
    bound: float | None
    pieces: tuple[CutPiece, ...]
    patterns: tuple[CutPattern, ...]
    bars: int
    stock_length: float
    piece_length: float
    waste: float
    kerf: float
    trim: float
    trusses: int
    splices: tuple[tuple[str, str], ...] = ()
    lead_time: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class OptionResult:
    """The complete, checked answer of one option.

    ``status`` is the pick's (``proven``, ``within gap``, ``stopped``) or ``checked`` for given
    sections. ``objective_text`` names what was minimised. ``cost`` (in ``currency``), ``carbon``
    (kgCO2e, modules A1 to A3) and ``biogenic`` (kgCO2e, negative) are None where the brief gives
    no rates; ``volume`` of all members is in m³. ``certificate`` is the proof as a file's bytes
    (see :mod:`sizing.certificate_file`), empty when none was asked for. ``displacements`` are
    (combination, node, component) in m as nested tuples in brief order.
    """

    option: str
    standard: str
    edition: str
    grade: str
    catalogue: str
    catalogue_source: SourceFile
    status: str
    method: str
    objective_text: str
    objective: float
    bound: float | None
    gap: float | None
    analyses: int
    seconds: float
    adequate: bool
    mass: float
    connection_allowance: float
    groups: tuple[GroupResult, ...]
    members: tuple[MemberResult, ...]
    sections: tuple[SectionSummary, ...]
    lighter: tuple[LighterResult, ...]
    combinations: tuple[CombinationResult, ...]
    deflections: tuple[DeflectionResult, ...]
    reactions: tuple[ReactionResult, ...]
    displacements: tuple[tuple[tuple[float, ...], ...], ...]
    worked: tuple[WorkedCheck, ...]
    left_out: tuple[tuple[str, str], ...]
    basis: tuple[tuple[str, str], ...]
    cautions: tuple[str, ...]
    cost: float | None = None
    currency: str = ""
    carbon: float | None = None
    biogenic: float | None = None
    volume: float = 0.0
    near_ties: tuple[NearTieResult, ...] = ()
    certificate: bytes = b""
    cutting: tuple[CuttingResult, ...] = ()

    @property
    def surface(self) -> float:
        """Outer surface of all members in m²; NaN when the catalogue does not tell it."""
        return sum(line.surface for line in self.sections)

    @property
    def utilisation(self) -> float:
        """Greatest utilisation over members and deflection limits."""
        checks = [m.utilisation for m in self.members] + [d.utilisation for d in self.deflections]
        return max(checks, default=0.0)


@dataclass(frozen=True, kw_only=True, slots=True)
class JobResult:
    """The brief, the version of the tool and one result per option.

    ``without_answer``: (option, reason) for options of a comparison that no section fits.
    """

    brief: Brief
    version: str
    options: tuple[OptionResult, ...]
    without_answer: tuple[tuple[str, str], ...] = ()
