"""The shipped catalogues: what is committed, what is in them, and that all of it reads."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from sizing.brief.catalogue_reader import read_catalogue, shipped_catalogues, shipped_folder
from sizing.brief.catalogue_tables import TABLES, Table, inches, text_of, write_all, written
from sizing.brief.catalogue_view import inspect_catalogue


def test_committed_files_are_what_the_generator_writes(tmp_path: Path) -> None:
    """Every shipped file equals the regenerated one byte for byte, and none is left over."""
    written_paths = write_all(tmp_path)
    assert sorted(path.stem for path in written_paths) == list(shipped_catalogues())
    for path in written_paths:
        assert (shipped_folder() / path.name).read_bytes() == path.read_bytes(), path.name


@pytest.mark.parametrize("name", shipped_catalogues())
def test_every_shipped_catalogue_reads_without_a_remark(name: str, tmp_path: Path) -> None:
    """A shipped catalogue has nothing odd in it and at least fifteen sections, sorted by depth."""
    catalogue = read_catalogue(name, tmp_path)
    assert catalogue.remarks == ()
    assert catalogue.name == name
    assert len(catalogue) >= 15
    assert np.all(catalogue.i_least <= catalogue.i_minor)
    assert np.all(catalogue.i_minor <= catalogue.i_major)
    assert all(catalogue.product)
    assert np.all(np.isfinite(catalogue.surface))


@pytest.mark.parametrize("table", TABLES, ids=lambda table: table.name)
def test_headers_name_standard_and_origin(table: Table) -> None:
    """Each file says which standard it follows and how its rows were obtained."""
    text = text_of(table)
    assert "# standard = " in text
    assert "# obtained = " in text


def test_hot_square_and_circular_catalogues_span_the_usual_range(tmp_path: Path) -> None:
    """At least sixty sizes each: 40x40x3 to 400x400x16, and 21.3x2.6 to 508x16."""
    square = read_catalogue("square-hollow-sections", tmp_path)
    circular = read_catalogue("circular-hollow-sections", tmp_path)
    assert len(square) >= 60
    assert len(circular) >= 60
    assert (square.designation[0], square.designation[-1]) == ("SHS 40x40x3", "SHS 400x400x16")
    assert (circular.designation[0], circular.designation[-1]) == ("CHS 21.3x2.6", "CHS 508x16")
    assert set(square.product) == set(circular.product) == {"EN 10210-2"}


def test_timber_leaves_its_mass_to_the_grade(tmp_path: Path) -> None:
    """Timber rows have no mass; their density belongs to the strength class."""
    for name in ("solid-timber", "glulam", "dimension-lumber"):
        assert np.all(np.isnan(read_catalogue(name, tmp_path).mass))


def test_built_up_lumber_says_so_and_counts_its_plies(tmp_path: Path) -> None:
    """A 3-ply 2x8 is 4.5 in wide, states three plies, and its product holds built-up."""
    lumber = read_catalogue("dimension-lumber", tmp_path)
    i = lumber.designation.index("3-ply 2x8")
    assert lumber.plies[i] == 3
    assert "built-up" in lumber.product[i]
    assert lumber.width[i] == pytest.approx(4.5 * 0.0254)
    assert lumber.plies[lumber.designation.index("2x8")] == 1


def test_us_tubes_carry_the_mass_of_the_nominal_wall(tmp_path: Path) -> None:
    """HSS and pipe tables print the mass of the full wall: about 1/0.93 of area × density."""
    for name in ("hss-square", "pipe"):
        catalogue = read_catalogue(name, tmp_path)
        ratio = catalogue.mass / (catalogue.area * 7850.0)
        assert np.all((ratio > 1.04) & (ratio < 1 / 0.93))


def test_numbers_are_written_plainly() -> None:
    """Five figures, no exponent, no trailing zeros."""
    assert [written(v) for v in (123456.0, 0.00012345678, 40.0, 0.5, 1e7)] == [
        "123460", "0.00012346", "40", "0.5", "10000000",
    ]  # fmt: skip
    assert [inches(text) for text in ("2", "3/8", "2-1/2")] == [2.0, 0.375, 2.5]


def test_inspection_says_what_was_understood(tmp_path: Path) -> None:
    """Columns with their units, ranges with the sections at their ends, and gaps."""
    rows = inspect_catalogue(read_catalogue("equal-angles", tmp_path))
    assert ("sections", "40") in rows
    assert ("families", "angle (40)") in rows
    assert ("column", "I least [cm4]: second moment, least axis in cm4") in rows
    assert ("area", "1.737 (L 30x30x3) to 90.59 cm2 (L 200x200x24)") in rows
    assert ("gap", "40 of 40 rows without price: cannot minimise cost") in rows
    us = dict(inspect_catalogue(read_catalogue("pipe", tmp_path)))
    assert us["depth"] == "0.84 (Pipe 1/2 Std) to 12.75 in (Pipe 12 Std)"
