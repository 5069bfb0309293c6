"""Write the shipped catalogues from dimension lists and formulas.

``python -m sizing.brief.catalogue_tables`` writes every file anew into the folder of the
shipped catalogues; a test proves that the files there are what this module writes.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction
from pathlib import Path

from sizing.brief import catalogue_sizes as sizes
from sizing.brief import section_geometry as geometry
from sizing.brief.catalogue_reader import SUFFIX, shipped_folder
from sizing.brief.section_geometry import STEEL_DENSITY, SectionProperties

FIGURES = 5
"""Significant figures written: two more than printed tables, so that rounding never matters."""

MM = 1e-3
INCH = 0.0254
POUND_PER_FOOT = 0.45359237 / 0.3048

METRIC = {"area": ("cm2", 1e4), "inertia": ("cm4", 1e8), "mass": ("kg/m", 1.0),
          "length": ("mm", 1e3), "surface": ("m2/m", 1.0)}  # fmt: skip
US = {"area": ("in2", INCH**-2), "inertia": ("in4", INCH**-4),
      "mass": ("lb/ft", 1 / POUND_PER_FOOT), "length": ("in", 1 / INCH),
      "surface": ("ft2/ft", 1 / 0.3048)}  # fmt: skip

COMPUTED = "obtained = computed from the dimensions, 5 figures"
STOCK = "note = sizes usually stocked (common practice); a supplier's own list goes first"
FROM_GRADE = "density = from grade"


@dataclass(frozen=True, kw_only=True, slots=True)
class Line:
    """One row before it is written: dimensions and properties in SI."""

    designation: str
    properties: SectionProperties
    mass: float | None = None
    depth: float
    width: float
    thickness: float | None = None
    flange: float | None = None
    root_radius: float | None = None
    plies: int | None = None
    product: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Table:
    """A shipped catalogue: file stem, header lines, family, product standard and its rows."""

    name: str
    header: tuple[str, ...]
    family: str
    product: str
    lines: Callable[[], Iterable[Line]]
    us: bool = False


def text_of(table: Table) -> str:
    """Return the whole text of a catalogue file."""
    units = US if table.us else METRIC
    lines = list(table.lines())
    columns = [column for column in _columns(units) if any(column[1](line) for line in lines)]
    heads = ",".join(["designation", "family", "product", *(head for head, _ in columns)])
    rows = (
        ",".join(
            [
                line.designation,
                table.family,
                line.product or table.product,
                *(cell(line) for _, cell in columns),
            ]
        )
        for line in lines
    )
    header = "".join(f"# {line}\n" for line in table.header)
    return f"{header}{heads}\n" + "".join(f"{row}\n" for row in rows)


Cell = Callable[[Line], str]


def _columns(units: dict[str, tuple[str, float]]) -> list[tuple[str, Cell]]:
    """Return (head, how to write the cell) of every column."""

    def cell(get: Callable[[Line], float | None], quantity: str) -> Cell:
        factor = units[quantity][1]
        return lambda line: "" if (value := get(line)) is None else written(value * factor)

    def unit(quantity: str) -> str:
        return units[quantity][0]

    def surface(line: Line) -> float:
        return line.properties.surface

    def least(line: Line) -> float | None:
        properties = line.properties
        return properties.i_least if properties.i_least < 0.999 * properties.i_minor else None

    return [
        (f"area [{unit('area')}]", cell(lambda line: line.properties.area, "area")),
        (f"mass [{unit('mass')}]", cell(lambda line: line.mass, "mass")),
        (f"I major [{unit('inertia')}]", cell(lambda line: line.properties.i_major, "inertia")),
        (f"I minor [{unit('inertia')}]", cell(lambda line: line.properties.i_minor, "inertia")),
        (f"I least [{unit('inertia')}]", cell(least, "inertia")),
        (f"depth [{unit('length')}]", cell(lambda line: line.depth, "length")),
        (f"width [{unit('length')}]", cell(lambda line: line.width, "length")),
        (f"thickness [{unit('length')}]", cell(lambda line: line.thickness, "length")),
        (f"flange [{unit('length')}]", cell(lambda line: line.flange, "length")),
        (f"root radius [{unit('length')}]", cell(lambda line: line.root_radius, "length")),
        (f"surface [{unit('surface')}]", cell(surface, "surface")),
        ("plies", lambda line: "" if line.plies is None else str(line.plies)),
    ]


def written(value: float) -> str:
    """Return a number with five significant figures and no exponent."""
    text = f"{value:.{FIGURES}g}"
    if "e" in text:
        text = f"{float(text):.10f}" if abs(value) < 1.0 else f"{float(text):.0f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def _mm(value: float) -> str:
    return f"{value:g}"


def _hollow(
    sections: Iterable[tuple[float, float, float]],
    word: str,
    formula: Callable[..., SectionProperties],
) -> Iterator[Line]:
    for h, b, t in sections:
        properties = formula(depth=h * MM, width=b * MM, wall=t * MM)
        yield Line(
            designation=f"{word} {_mm(h)}x{_mm(b)}x{_mm(t)}",
            properties=properties,
            mass=properties.area * STEEL_DENSITY,
            depth=h * MM,
            width=b * MM,
            thickness=t * MM,
        )


def _squares(walls: dict[int, tuple[float, ...]]) -> list[tuple[float, float, float]]:
    return [(side, side, t) for side in sorted(walls) for t in walls[side]]


def _rectangles(
    walls: dict[tuple[int, int], tuple[float, ...]],
) -> list[tuple[float, float, float]]:
    return [(h, b, t) for h, b in sorted(walls) for t in walls[h, b]]


def _tubes(walls: dict[float, tuple[float, ...]]) -> Iterator[Line]:
    for d in sorted(walls):
        for t in walls[d]:
            properties = geometry.circular_hollow(diameter=d * MM, wall=t * MM)
            yield Line(
                designation=f"CHS {_mm(d)}x{_mm(t)}",
                properties=properties,
                mass=properties.area * STEEL_DENSITY,
                depth=d * MM,
                width=d * MM,
                thickness=t * MM,
            )


def _equal_angles() -> Iterator[Line]:
    for leg, (root, thicknesses) in sorted(sizes.EQUAL_ANGLES.items()):
        for t in thicknesses:
            properties = geometry.equal_angle(leg=leg * MM, thickness=t * MM, root_radius=root * MM)
            yield Line(
                designation=f"L {leg}x{leg}x{_mm(t)}",
                properties=properties,
                mass=properties.area * STEEL_DENSITY,
                depth=leg * MM,
                width=leg * MM,
                thickness=t * MM,
                root_radius=root * MM,
            )


def _i_sections(table: dict[str, tuple[float, float, float, float, float]]) -> Iterator[Line]:
    for designation, dimensions in table.items():
        h, b, web, flange, root = (value * MM for value in dimensions)
        properties = geometry.i_section(depth=h, width=b, web=web, flange=flange, root_radius=root)
        yield Line(
            designation=designation,
            properties=properties,
            mass=properties.area * STEEL_DENSITY,
            depth=h,
            width=b,
            thickness=web,
            flange=flange,
            root_radius=root,
        )


def inches(text: str) -> float:
    """Return ``2-1/2`` as 2.5."""
    return float(sum(Fraction(part) for part in text.split("-")))


def _us_squares() -> Iterator[Line]:
    for side, walls in sizes.US_SQUARE.items():
        for wall in walls:
            b, nominal = inches(side) * INCH, inches(wall) * INCH
            full = geometry.rectangular_hollow(
                depth=b, width=b, wall=nominal,
                outside_radius=2.0 * nominal, inside_radius=nominal,
            )  # fmt: skip
            yield Line(
                designation=f"HSS {side}x{side}x{wall}",
                properties=geometry.us_square_hollow(depth=b, width=b, nominal_wall=nominal),
                mass=full.area * STEEL_DENSITY,
                depth=b,
                width=b,
                thickness=geometry.US_WALL_FACTOR * nominal,
            )


def _us_pipes() -> Iterator[Line]:
    for size, (diameter, *walls) in sizes.US_PIPE.items():
        for word, wall in zip(("Std", "x-Strong", "xx-Strong"), walls, strict=True):
            if wall is None:
                continue
            d, nominal = diameter * INCH, wall * INCH
            yield Line(
                designation=f"Pipe {size} {word}",
                properties=geometry.us_pipe(diameter=d, nominal_wall=nominal),
                mass=geometry.circular_hollow(diameter=d, wall=nominal).area * STEEL_DENSITY,
                depth=d,
                width=d,
                thickness=geometry.US_WALL_FACTOR * nominal,
            )


def _us_angles() -> Iterator[Line]:
    for leg, thicknesses in sizes.US_ANGLES.items():
        for thickness in thicknesses:
            a, t = inches(leg) * INCH, inches(thickness) * INCH
            properties = geometry.us_angle(leg=a, other_leg=a, thickness=t)
            yield Line(
                designation=f"L {leg}x{leg}x{thickness}",
                properties=properties,
                mass=properties.area / geometry.US_ANGLE_AREA * STEEL_DENSITY,
                depth=a,
                width=a,
                thickness=t,
            )


def _boards(sections: Iterable[tuple[int, int]], word: str) -> Iterator[Line]:
    for b, h in sections:
        yield Line(
            designation=f"{word}{b}x{h}",
            properties=geometry.rectangle(depth=h * MM, width=b * MM),
            depth=h * MM,
            width=b * MM,
        )


def _glulam_sizes() -> Iterator[tuple[int, int]]:
    step = sizes.GLULAM_LAMELLA
    for b in sizes.GLULAM_WIDTHS:
        least = max(sizes.GLULAM_LEAST_LAMELLAS * step, -(-b // step) * step)
        most = min(sizes.GLULAM_GREATEST_DEPTH, sizes.GLULAM_GREATEST_SLENDERNESS * b)
        yield from ((b, h) for h in range(least, most + 1, step))


def _lumber() -> Iterator[Line]:
    singles = [(t, d) for t in sizes.LUMBER_THICKNESSES for d in sizes.LUMBER_DEPTHS]
    for nominal, nominal_depth in singles:
        b, h = sizes.DRESSED[nominal] * INCH, sizes.DRESSED[nominal_depth] * INCH
        yield Line(
            designation=f"{nominal}x{nominal_depth}",
            properties=geometry.rectangle(depth=h, width=b),
            depth=h,
            width=b,
            plies=1,
        )
    for plies in sizes.LUMBER_PLIES:
        for nominal_depth in sizes.LUMBER_DEPTHS:
            b, h = sizes.DRESSED["2"] * INCH, sizes.DRESSED[nominal_depth] * INCH
            yield Line(
                designation=f"{plies}-ply 2x{nominal_depth}",
                properties=geometry.built_up_plies(depth=h, ply=b, plies=plies),
                depth=h,
                width=plies * b,
                plies=plies,
                product="NDS built-up",
            )


HOT = "standard = EN 10210-2:2019, hot finished; corners 1.5 t outside, 1.0 t inside (Annex A)"
COLD = (
    "standard = EN 10219-2:2019, cold formed; outside corner 2.0 t up to 6 mm, 2.5 t up to 10 mm, "
    "3.0 t above (Annex A)"
)
STEEL = "density = 7850 kg/m3"
I_NOTE = "standard = EN 10365:2017; dimensions from memory, checked against published rows"

TABLES: tuple[Table, ...] = (
    Table(
        name="square-hollow-sections",
        header=("title = Square hollow sections, hot finished", HOT, STEEL, COMPUTED, STOCK),
        family="SHS", product="EN 10210-2",
        lines=lambda: _hollow(_squares(sizes.HOT_SQUARE), "SHS", geometry.hot_finished_hollow),
    ),
    Table(
        name="circular-hollow-sections",
        header=("title = Circular hollow sections, hot finished",
                "standard = EN 10210-2:2019, hot finished", STEEL, COMPUTED, STOCK),
        family="CHS", product="EN 10210-2",
        lines=lambda: _tubes(sizes.HOT_CIRCULAR),
    ),
    Table(
        name="rectangular-hollow-sections",
        header=("title = Rectangular hollow sections, hot finished", HOT, STEEL, COMPUTED, STOCK),
        family="RHS", product="EN 10210-2",
        lines=lambda: _hollow(
            _rectangles(sizes.HOT_RECTANGULAR), "RHS", geometry.hot_finished_hollow
        ),
    ),
    Table(
        name="cold-formed-square-hollow-sections",
        header=("title = Square hollow sections, cold formed", COLD, STEEL, COMPUTED, STOCK),
        family="SHS", product="EN 10219-2",
        lines=lambda: _hollow(_squares(sizes.COLD_SQUARE), "SHS", geometry.cold_formed_hollow),
    ),
    Table(
        name="cold-formed-rectangular-hollow-sections",
        header=("title = Rectangular hollow sections, cold formed", COLD, STEEL, COMPUTED, STOCK),
        family="RHS", product="EN 10219-2",
        lines=lambda: _hollow(
            _rectangles(sizes.COLD_RECTANGULAR), "RHS", geometry.cold_formed_hollow
        ),
    ),
    Table(
        name="cold-formed-circular-hollow-sections",
        header=("title = Circular hollow sections, cold formed",
                "standard = EN 10219-2:2019, cold formed", STEEL, COMPUTED, STOCK),
        family="CHS", product="EN 10219-2",
        lines=lambda: _tubes(sizes.COLD_CIRCULAR),
    ),
    Table(
        name="equal-angles",
        header=("title = Equal angles, single",
                "standard = EN 10056-1:2017; root radius r1, toe radius r1/2 (from memory)",
                STEEL, COMPUTED, STOCK),
        family="angle", product="EN 10056-1",
        lines=_equal_angles,
    ),
    Table(
        name="ipe", header=("title = IPE sections", I_NOTE, STEEL, COMPUTED),
        family="I", product="EN 10365", lines=lambda: _i_sections(sizes.IPE),
    ),
    Table(
        name="hea", header=("title = HEA sections", I_NOTE, STEEL, COMPUTED),
        family="I", product="EN 10365", lines=lambda: _i_sections(sizes.HEA),
    ),
    Table(
        name="heb", header=("title = HEB sections", I_NOTE, STEEL, COMPUTED),
        family="I", product="EN 10365", lines=lambda: _i_sections(sizes.HEB),
    ),
    Table(
        name="hss-square",
        header=("title = Square hollow structural sections, US",
                "standard = ASTM A500; design wall 0.93 of the nominal one, corners 2.0 t outside "
                "and 1.0 t inside; thickness is the design wall",
                "mass = of the nominal wall, 7850 kg/m3", COMPUTED, STOCK),
        family="SHS", product="ASTM A500", lines=_us_squares, us=True,
    ),
    Table(
        name="pipe",
        header=("title = Steel pipe, US",
                "standard = ASTM A53; design wall 0.93 of the nominal one; thickness is the "
                "design wall",
                "mass = of the nominal wall, 7850 kg/m3", COMPUTED,
                "note = areas may lie up to 3 % below printed tables (from memory), second "
                "moments agree"),
        family="CHS", product="ASTM A53", lines=_us_pipes, us=True,
    ),
    Table(
        name="us-equal-angles",
        header=("title = Equal angles, single, US",
                "standard = ASTM A6 sizes; fillets differ from mill to mill: sharp corners, "
                "reduced (area 0.5 %, second moments 1 %, least ones 2.9 %) to what printed tables "
                "(from memory) give for thin legs",
                STEEL, COMPUTED),
        family="angle", product="ASTM A6", lines=_us_angles, us=True,
    ),
    Table(
        name="solid-timber",
        header=("title = Solid timber", "standard = EN 336 target sizes at 20 % moisture "
                "(from memory) and usual timber yard sizes", FROM_GRADE, COMPUTED, STOCK),
        family="rectangle", product="EN 336",
        lines=lambda: _boards(
            ((b, h) for b, depths in sorted(sizes.SOLID_TIMBER.items()) for h in depths), ""
        ),
    ),
    Table(
        name="glulam",
        header=("title = Glued laminated timber, depths in steps of 40 mm lamellas",
                "standard = EN 14080; widths 80 to 240 mm", FROM_GRADE, COMPUTED,
                "note = usual sizes (common practice); some mills laminate in 45 mm"),
        family="rectangle", product="EN 14080",
        lines=lambda: _boards(_glulam_sizes(), "GL "),
    ),
    Table(
        name="dimension-lumber",
        header=("title = Dimension lumber, US, single boards and built-up plies",
                "standard = NDS Supplement Table 1B, dressed sizes", FROM_GRADE, COMPUTED,
                "note = plies stand side by side across the width; their second moment across "
                "the joints is that of boards that slip freely"),
        family="rectangle", product="NDS", lines=_lumber, us=True,
    ),
)  # fmt: skip
"""Every shipped catalogue."""


def write_all(folder: Path, tables: Sequence[Table] = TABLES) -> tuple[Path, ...]:
    """Write every catalogue into ``folder``; return the paths."""
    paths = []
    for table in tables:
        path = folder / f"{table.name}{SUFFIX}"
        path.write_bytes(text_of(table).encode("utf-8"))
        paths.append(path)
    return tuple(paths)


if __name__ == "__main__":
    write_all(shipped_folder())
