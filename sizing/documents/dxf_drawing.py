"""truss.dxf: centre lines in millimetres for a drawing program, one layer for each group.

Each member's mark stands beside its line on the layer of its group; nodes have a layer of their
own. A layer is named after its group as far as layer names allow; its description, and a line
of text on it, hold the group's name literally.
"""

from __future__ import annotations

import io
import math
import re
from typing import TYPE_CHECKING, Any

from sizing.brief.model import Brief
from sizing.documents.plain_text import shortened, visible
from sizing.documents.wording import CLOSING_CAUTION
from sizing.results import JobResult

if TYPE_CHECKING:
    from ezdxf.document import Drawing

MILLIMETRES = 1000.0
INSUNITS_MILLIMETRES, MEASUREMENT_METRIC = 4, 1
"""Header codes of the DXF reference: unit of the drawing, metric measurement."""

LONGEST_LAYER_NAME = 80
"""Characters; the format allows 255, lists in drawing programs show far fewer."""

TEXT_SHARE, SMALLEST_TEXT, LARGEST_TEXT = 0.07, 30.0, 250.0
"""Height of text over the length of a short member, and its bounds in mm (common practice)."""

INKS = (1, 2, 3, 4, 5, 6, 30, 90, 140, 200)
"""Colour indices of the DXF reference, told apart on light and dark screens."""

_NOT_IN_LAYER_NAME = re.compile(r"[<>/\\\":;?*|=`,']")
_PERCENT = re.compile(r"%(?=%)|(?<=%)%")


def dxf_bytes(job: JobResult) -> bytes:
    """Return truss.dxf for ``job`` as UTF-8 (DXF R2010); equal jobs give equal bytes."""
    import ezdxf

    brief = job.brief
    fixed = ezdxf.options.write_fixed_meta_data_for_testing
    # Times and random identifiers would make two files of one job differ.
    ezdxf.options.write_fixed_meta_data_for_testing = True
    try:
        document = ezdxf.new("R2010", setup=False)
        document.header["$INSUNITS"] = INSUNITS_MILLIMETRES
        document.header["$MEASUREMENT"] = MEASUREMENT_METRIC
        _draw(document, job, _text_height(brief))
        stream = io.StringIO(newline="\n")
        document.write(stream)
    finally:
        ezdxf.options.write_fixed_meta_data_for_testing = fixed
    return stream.getvalue().encode("utf-8")


def _draw(document: Drawing, job: JobResult, height: float) -> None:
    brief = job.brief
    space: Any = document.modelspace()
    layers = _layers(document, [group.name for group in brief.groups])
    sections = _sections(job)
    for member in brief.members:
        start, end = _point(brief, member.start), _point(brief, member.end)
        layer = {"layer": layers[member.group]}
        space.add_line(start, end, dxfattribs=layer)
        words = f"{visible(member.mark)}{sections.get(member.name, '')}"
        middle = tuple(0.5 * (a + b) for a, b in zip(start, end, strict=True))
        _write(space, words, middle, height, layer["layer"], turn=_turn(start, end))
    document.layers.add("nodes", color=8)
    for i, node in enumerate(brief.nodes):
        at = _point(brief, i)
        space.add_point(at, dxfattribs={"layer": "nodes"})
        beside = (at[0] + 0.6 * height, at[1] + 0.6 * height, at[2])
        _write(space, visible(node.name), beside, 0.8 * height, "nodes")
    _notes(document, space, job, layers, height)


def _notes(document: Drawing, space: Any, job: JobResult, layers: list[str], height: float) -> None:
    """Write title, caution and group names below the truss."""
    document.layers.add("notes", color=8)
    points = [_point(job.brief, i) for i in range(len(job.brief.nodes))]
    left = min(p[0] for p in points)
    down = min(p[1] for p in points) - 4.0 * height
    lines = [
        ("notes", visible(job.brief.title)),
        ("notes", "Centre lines in mm; nodes are system points."),
        ("notes", CLOSING_CAUTION),
        ("notes", f"sizing {job.version}; {visible(job.brief.source.name)}, "
         f"SHA-256 {job.brief.source.sha256[:12]}"),
        *(
            (layer, f"Group {visible(group.name)}")
            for layer, group in zip(layers, job.brief.groups, strict=True)
        ),
    ]  # fmt: skip
    for i, (layer, words) in enumerate(lines):
        _write(space, words, (left, down - 1.8 * height * i, 0.0), height, layer)


def _sections(job: JobResult) -> dict[str, str]:
    """Return the sections to write behind the marks, where there is one answer only."""
    if len(job.options) != 1:
        return {}
    return {m.name: f"  {visible(m.designation)}" for m in job.options[0].members}


def _layers(document: Drawing, groups: list[str]) -> list[str]:
    """Make a layer for each group and return the names, unique without regard to case."""
    taken = {"0", "nodes", "notes", "defpoints"}
    names = []
    for i, group in enumerate(groups):
        plain = _NOT_IN_LAYER_NAME.sub("_", visible(group)).strip()
        stem = shortened(plain, LONGEST_LAYER_NAME) or "group"
        name, number = stem, 2
        while name.casefold() in taken:
            name, number = f"{stem} {number}", number + 1
        taken.add(name.casefold())
        layer = document.layers.add(name, color=INKS[i % len(INKS)])
        layer.description = visible(group)
        names.append(name)
    return names


def _write(
    space: Any,
    words: str,
    at: tuple[float, ...],
    height: float,
    layer: str,
    turn: float = 0.0,
) -> None:
    """Write text with its lower left corner at ``at``; on a line, just above its middle."""
    text = space.add_text(
        _literal(words), height=height, rotation=turn, dxfattribs={"layer": layer}
    )
    text.dxf.insert = at


def _literal(words: str) -> str:
    """Return words so that no sequence in them is taken for a code (%%d, ^J, \\U+00B0)."""
    plain = words.replace("\\U+", "\\U+005CU+").replace("\\M+", "\\U+005CM+")
    return _PERCENT.sub("%%%", plain).replace("^", "^ ")


def _point(brief: Brief, node: int) -> tuple[float, float, float]:
    x, y, *z = (MILLIMETRES * value for value in brief.nodes[node].position)
    return x, y, z[0] if z else 0.0


def _turn(start: tuple[float, ...], end: tuple[float, ...]) -> float:
    """Return the direction of a line in plan, degrees, such that its text is not upside down."""
    angle = math.degrees(math.atan2(end[1] - start[1], end[0] - start[0]))
    return angle - 180.0 if angle > 90.0 else angle + 180.0 if angle <= -90.0 else angle


def _text_height(brief: Brief) -> float:
    lengths = sorted(member.length for member in brief.members)
    short = MILLIMETRES * lengths[len(lengths) // 4]
    return min(max(TEXT_SHARE * short, SMALLEST_TEXT), LARGEST_TEXT)
