"""Ready shapes: complete briefs of usual trusses from a few parameters."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from sizing.brief import shapes_parallel as parallel
from sizing.brief import shapes_pitched as pitched
from sizing.brief import shapes_sloped as sloped
from sizing.brief import shapes_space as space
from sizing.brief.findings import Findings, quoted
from sizing.brief.shapes_parameters import Parameter, Values, read_parameters
from sizing.brief.shapes_sketch import Sketch


@dataclass(frozen=True, kw_only=True)
class Shape:
    """One shape: what it is in words, its parameters, and the function that draws it."""

    name: str
    words: str
    parameters: tuple[Parameter, ...]
    draw: Callable[[Values], Sketch]


def _shape(
    name: str, words: str, parameters: tuple[Parameter, ...], draw: Callable[[Values], Sketch]
) -> Shape:
    return Shape(name=name, words=words, parameters=parameters, draw=draw)


SHAPES: dict[str, Shape] = {
    shape.name: shape
    for shape in (
        _shape("pratt-girder", "parallel chords, verticals, diagonals in tension",
               parallel.PARAMETERS, parallel.pratt_girder),
        _shape("howe-girder", "parallel chords, verticals, diagonals in compression",
               parallel.PARAMETERS, parallel.howe_girder),
        _shape("warren-girder", "parallel chords, triangles, bearing on the top chord",
               parallel.PARAMETERS, parallel.warren_girder),
        _shape("warren-girder-with-verticals", "parallel chords, triangles and verticals",
               parallel.PARAMETERS, parallel.warren_girder_with_verticals),
        _shape("k-girder", "parallel chords, half diagonals to the middle of the verticals",
               parallel.PARAMETERS, parallel.k_girder),
        _shape("king-post", "pitched, a post under the ridge and two struts",
               pitched.PLAIN, pitched.king_post),
        _shape("queen-post", "pitched, two posts, a straining beam, crossed braces",
               pitched.PLAIN, pitched.queen_post),
        _shape("fink", "pitched, W web", pitched.PLAIN, pitched.fink),
        _shape("fan", "pitched, three web members from each third of the bottom chord",
               pitched.PLAIN, pitched.fan),
        _shape("howe-roof", "pitched, verticals, diagonals in compression",
               pitched.PANELLED, pitched.howe_roof),
        _shape("pratt-roof", "pitched, verticals, diagonals in tension",
               pitched.PANELLED, pitched.pratt_roof),
        _shape("mono-pitch", "one slope, verticals at both ends, diagonals towards the middle",
               sloped.MONO_PITCH, sloped.mono_pitch),
        _shape("bowstring", "top chord on a parabola", pitched.BOWSTRING, pitched.bowstring),
        _shape("scissors", "pitched, crossing ties under a raised ceiling",
               pitched.SCISSORS, pitched.scissors),
        _shape("canopy", "cantilever from a wall, bottom chord rising to the tip",
               sloped.CANOPY, sloped.canopy),
        _shape("square-tower", "lattice tower or mast with four legs",
               space.TOWER, space.square_tower),
        _shape("triangular-tower", "lattice tower or mast with three legs",
               space.TOWER, space.triangular_tower),
        _shape("double-layer-grid", "flat roof, squares over squares set off by half a side",
               space.GRID, space.double_layer_grid),
    )
}  # fmt: skip
"""Every shape by name."""


def draw_shape(name: str, given: Mapping[str, object] | None = None) -> Sketch:
    """Return the sketch of the shape ``name`` with the parameters ``given``, others as usual.

    ``given`` maps parameter names to numbers (kN, m, degrees) or text with a unit. Raises
    :class:`~sizing.errors.InputError` for an unknown shape and for every bad parameter.
    """
    if name not in SHAPES:
        findings = Findings("command line", lambda _: "--shape")
        findings.add(
            (),
            found=f"no shape {quoted(name)}",
            expected=f"one of {', '.join(SHAPES)}",
            fix=findings.did_you_mean(name, SHAPES),
        )
        findings.raise_if_any()
    shape = SHAPES[name]
    return shape.draw(read_parameters(name, shape.parameters, given or {}))


def shape_tables(name: str, given: Mapping[str, object] | None = None) -> dict[str, Any]:
    """Return the plain tables of a complete brief; raises as :func:`draw_shape` does."""
    return draw_shape(name, given).tables()
