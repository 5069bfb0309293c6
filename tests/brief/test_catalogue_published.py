"""Shipped rows against published tables; the greatest deviation of each table is printed."""

from __future__ import annotations

import csv
import math
from collections import defaultdict
from functools import cache
from pathlib import Path

import pytest

from sizing.brief import section_geometry as geometry
from sizing.brief.catalogue_reader import read_catalogue
from sizing.brief.sections import Catalogue

PUBLISHED = Path(__file__).resolve().parents[1] / "published" / "sections"
INCH = 0.0254
POUND_PER_FOOT = 0.45359237 / 0.3048
FIVE_FIGURES = 5e-5
"""Greatest relative rounding of a number written with five figures."""


@cache
def shipped(name: str) -> Catalogue:
    return read_catalogue(name, PUBLISHED)


def published(file: str) -> list[dict[str, str]]:
    with (PUBLISHED / file).open(encoding="utf-8", newline="") as stream:
        return list(csv.DictReader(stream))


def rounding(text: str) -> float:
    """Half a unit in the last printed place: trailing zeros of whole numbers are not figures."""
    whole, _, decimals = text.partition(".")
    if decimals:
        return 0.5 * 10.0 ** -len(decimals)
    return 0.5 * 10.0 ** (len(whole) - len(whole.rstrip("0"))) if len(whole) > 3 else 0.5


def compare(found: dict[str, float], row: dict[str, str], tolerances: dict[str, float]) -> float:
    """Return the greatest relative deviation after requiring each within its tolerance."""
    greatest = 0.0
    for column, value in found.items():
        if not row[column]:
            continue
        printed = float(row[column])
        deviation = abs(value - printed) / printed
        allowed = max(tolerances[column], rounding(row[column]) / printed)
        assert deviation <= allowed, f"{row['designation']} {column}: {value} against {printed}"
        greatest = max(greatest, deviation)
    return greatest


def test_metric_steel_rows_agree_with_published_tables(capsys: pytest.CaptureFixture[str]) -> None:
    """Every published EN row agrees with the shipped row of the same name within 0.5 %."""
    greatest: dict[str, list[float]] = defaultdict(list)
    for row in published("metric_steel.csv"):
        catalogue = shipped(row["catalogue"])
        i = catalogue.designation.index(row["designation"])
        found = {
            "mass_kg_m": float(catalogue.mass[i]),
            "area_cm2": float(catalogue.area[i]) * 1e4,
            "i_major_cm4": float(catalogue.i_major[i]) * 1e8,
            "i_minor_cm4": float(catalogue.i_minor[i]) * 1e8,
            "i_least_cm4": float(catalogue.i_least[i]) * 1e8,
        }
        tolerance = float(row["tolerance"])
        greatest[row["catalogue"]].append(compare(found, row, dict.fromkeys(found, tolerance)))
    with capsys.disabled():
        for name, deviations in greatest.items():
            print(f"\n  {name}: {len(deviations)} rows, {100 * max(deviations):.2f} %", end="")
    assert sum(len(deviations) for deviations in greatest.values()) == 159


def test_us_steel_rows_agree_with_published_tables(capsys: pytest.CaptureFixture[str]) -> None:
    """Every published US row agrees: tubes 0.5 % (pipe areas 3.5 %), angles 1.6 %."""
    greatest: dict[str, list[float]] = defaultdict(list)
    for row in published("us_steel.csv"):
        catalogue = shipped(row["catalogue"])
        i = catalogue.designation.index(row["designation"])
        found = {
            "weight_lb_ft": float(catalogue.mass[i]) / POUND_PER_FOOT,
            "area_in2": float(catalogue.area[i]) / INCH**2,
            "i_major_in4": float(catalogue.i_major[i]) / INCH**4,
            "r_major_in": float(catalogue.r_major[i]) / INCH,
            "r_least_in": float(catalogue.r_least[i]) / INCH,
        }
        tolerances = dict.fromkeys(found, float(row["tolerance_other"]))
        tolerances["weight_lb_ft"] = float(row["tolerance_weight"])
        tolerances["area_in2"] = float(row["tolerance_area"])
        greatest[row["catalogue"]].append(compare(found, row, tolerances))
    with capsys.disabled():
        for name, deviations in greatest.items():
            print(f"\n  {name}: {len(deviations)} rows, {100 * max(deviations):.2f} %", end="")
    assert sum(len(deviations) for deviations in greatest.values()) == 21


def test_solid_timber_rows_agree_with_their_target_sizes() -> None:
    """Every listed EN 336 size is shipped with b h, b h³/12 and h b³/12 (EN 336; exact)."""
    catalogue = shipped("solid-timber")
    for row in published("en336_sizes.csv"):
        i = catalogue.designation.index(row["designation"])
        tolerance = max(FIVE_FIGURES, float(row["tolerance"]))
        assert catalogue.area[i] == pytest.approx(float(row["area_mm2"]) / 1e6, rel=tolerance)
        assert catalogue.i_major[i] == pytest.approx(
            float(row["i_major_mm4"]) / 1e12, rel=tolerance
        )
        assert catalogue.i_minor[i] == pytest.approx(
            float(row["i_minor_mm4"]) / 1e12, rel=tolerance
        )


def test_lumber_sizes_agree_with_the_nds_supplement() -> None:
    """Dressed sizes of NDS Supplement Table 1B: shipped rows, and the formula for posts."""
    catalogue = shipped("dimension-lumber")
    for row in published("nds_lumber_sizes.csv"):
        tolerance = float(row["tolerance"])
        b, h = float(row["width_in"]) * INCH, float(row["depth_in"]) * INCH
        properties = geometry.rectangle(depth=h, width=b)
        area, i_major = properties.area, properties.i_major
        if row["designation"] in catalogue.designation:
            i = catalogue.designation.index(row["designation"])
            area, i_major = float(catalogue.area[i]), float(catalogue.i_major[i])
            assert (catalogue.width[i], catalogue.depth[i]) == pytest.approx((b, h))
        assert area / INCH**2 == pytest.approx(float(row["area_in2"]), rel=tolerance)
        assert i_major / INCH**4 == pytest.approx(float(row["i_major_in4"]), rel=tolerance)


def test_printed_tables_are_accepted_as_a_users_own_list(tmp_path: Path) -> None:
    """Published rows with their three figures, typed into a list with dimensions, raise nothing.

    The greatest deviation of a printed row from the formulas stays below what is worth a remark.
    """
    lines = [
        "designation,family,product,area [cm2],mass [kg/m],I major [cm4],I minor [cm4],"
        "I least [cm4],depth [mm],width [mm],thickness [mm],flange [mm],root radius [mm]"
    ]
    for row in published("metric_steel.csv"):
        catalogue = shipped(row["catalogue"])
        i = catalogue.designation.index(row["designation"])
        name = f"{row['designation']} {row['catalogue'][:4]} {len(lines)}"
        sizes = [
            "" if math.isnan(value) else f"{value * 1e3:g}"
            for value in (
                float(catalogue.depth[i]), float(catalogue.width[i]),
                float(catalogue.thickness[i]), float(catalogue.flange[i]),
                float(catalogue.root_radius[i]),
            )
        ]  # fmt: skip
        least = row["i_least_cm4"]
        if catalogue.family[i] == "angle" and not least:
            continue
        cells = [
            name, catalogue.family[i], catalogue.product[i], row["area_cm2"], row["mass_kg_m"],
            row["i_major_cm4"], row["i_minor_cm4"], least, *sizes,
        ]  # fmt: skip
        lines.append(",".join(cells))
    (tmp_path / "own.csv").write_text("\n".join(lines), encoding="utf-8")
    own = read_catalogue("own.csv", tmp_path)
    assert len(own) == 158
    assert own.remarks == ()


def test_printed_us_tables_are_accepted_as_a_users_own_list(tmp_path: Path) -> None:
    """AISC rows as printed, pipe areas that do not follow from the wall included, are read."""
    lines = ["designation,product,area [in2],weight [lb/ft],I [in4],r [in],r least [in]"]
    for row in published("us_steel.csv"):
        product = {"hss-square": "ASTM A500", "pipe": "ASTM A53"}.get(row["catalogue"], "ASTM A6")
        least = row["r_least_in"]
        cells = [row["designation"], product, row["area_in2"], row["weight_lb_ft"]]
        lines.append(",".join([*cells, row["i_major_in4"], row["r_major_in"], least]))
    text = "\n".join(lines).replace("r [in]", "radius of gyration [in]")
    (tmp_path / "own.csv").write_text(text.replace("r least", "i least"), encoding="utf-8")
    own = read_catalogue("own.csv", tmp_path)
    assert len(own) == 21
    assert [remark for remark in own.remarks if "Family" not in remark] == [
        "Radius of gyration differs from sqrt(I/A) by more than 1 % beyond rounding in 1 row; "
        "greatest +1.0 % in line 14 (Pipe 10 Std)."
    ]
