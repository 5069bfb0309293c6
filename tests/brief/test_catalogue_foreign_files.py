"""Catalogues as they come from the office next door: German, American, with titles and unit rows.

Every row here is made from the section formulas or copied from published tables (from memory).
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from sizing.brief import section_geometry as geometry
from sizing.brief.catalogue_reader import read_catalogue
from sizing.brief.catalogue_view import inspect_catalogue
from sizing.brief.sections import Catalogue

INCH = 0.0254


def read(folder: Path, text: str, encoding: str = "utf-8") -> Catalogue:
    (folder / "liste.csv").write_bytes(text.encode(encoding))
    return read_catalogue("liste.csv", folder)


def german(value: float, decimals: int) -> str:
    """A number as a German spreadsheet shows it: 12.345,6."""
    return f"{value:,.{decimals}f}".replace(",", " ").replace(".", ",").replace(" ", ".")


def german_list() -> str:
    """150 cold formed squares and rectangles in a semicolon file with decimal commas."""
    lines = [
        "Bezeichnung;Norm;Fläche [cm²];Gewicht [kg/m];Iy [cm^4];Iz [cm^4];Höhe [mm];Breite [mm];"
        "Wanddicke [mm];Preis [€/m]"
    ]
    sizes = [(h, h * k // 10, t) for h in range(50, 300, 10) for k in (6, 10) for t in (2.5, 3, 4)]
    for h, b, t in sizes:
        section = geometry.cold_formed_hollow(depth=h / 1e3, width=b / 1e3, wall=t / 1e3)
        word = "QRO" if h == b else "RRO"
        lines.append(
            f"{word} {h}x{b}x{german(t, 1)};EN 10219-2;{german(section.area * 1e4, 2)};"
            f"{german(section.area * 7850, 2)};{german(section.i_major * 1e8, 1)};"
            f"{german(section.i_minor * 1e8, 1)};{h};{b};{german(t, 1)};{german(h * t / 50, 2)}"
        )
    return "\r\n".join(lines) + "\r\n"


@pytest.mark.parametrize("encoding", ["iso-8859-15", "utf-8-sig", "utf-8", "utf-16", "cp1252"])
def test_german_list_of_150_rows_reads_as_it_is(tmp_path: Path, encoding: str) -> None:
    """Semicolons, decimal commas, thousands points, umlauts, CRLF: read right and announced."""
    text = german_list()
    if encoding == "iso-8859-15":
        text = text.replace("€", "EUR")
    catalogue = read(tmp_path, text, encoding)
    assert len(catalogue) == 150
    i = catalogue.designation.index("QRO 100x100x4,0")
    section = geometry.cold_formed_hollow(depth=0.1, width=0.1, wall=0.004)
    assert catalogue.area[i] == pytest.approx(section.area, rel=5e-4)
    assert catalogue.i_major[i] == pytest.approx(section.i_major, rel=5e-4)
    assert catalogue.family[i] == "SHS"
    assert catalogue.thickness[i] == 0.004
    assert catalogue.price[i] == pytest.approx(8.0)
    assert catalogue.row[0] == 2
    assert "Columns are separated by semicolons (detected)." in catalogue.remarks
    assert "Numbers are read with a decimal comma (detected)." in catalogue.remarks
    assert "Axis letters are read as y-y major, z-z minor." in catalogue.remarks
    assert any(text.startswith("Thousands are grouped by a mark") for text in catalogue.remarks)
    unread = "The file is not UTF-8; it was read as Western European (Windows-1252)."
    assert (unread in catalogue.remarks) == (encoding in {"iso-8859-15", "cp1252"})


def test_table_with_title_and_unit_row_reads(tmp_path: Path) -> None:
    """A DIN-style I table: title, heads, units below, s and t for web and flange, r the root."""
    text = (
        "Lagerliste 2024;;;;;;;;;;;;;;\n\n"
        "Bezeichnung;G;h;b;s;t;r;A;U;Iy;Wy;iy;Iz;Wz;iz\n"
        ";kg/m;mm;mm;mm;mm;mm;cm²;m²/m;cm⁴;cm³;cm;cm⁴;cm³;cm\n"
        "IPE 200;22,4;200;100;5,6;8,5;12;28,5;0,768;1\u00a0943;194;8,26;142;28,5;2,24\n"
        "IPE 600;122;600;220;12;19;24;156;2,01;92\u202f080;3069;24,3;3387;308;4,66\n"
    )
    catalogue = read(tmp_path, text)
    assert catalogue.row == (5, 6)
    assert catalogue.family == ("I", "I")
    assert catalogue.i_major * 1e8 == pytest.approx([1943, 92080])
    assert catalogue.flange * 1e3 == pytest.approx([8.5, 19])
    assert catalogue.root_radius * 1e3 == pytest.approx([12, 24])
    assert catalogue.surface == pytest.approx([0.768, 2.01])
    assert catalogue.remarks == (
        "Taken as a title, above the column heads: Lagerliste 2024.",
        "Columns are separated by semicolons (detected).",
        "Units are taken from line 4, below the column heads.",
        "Axis letters are read as y-y major, z-z minor.",
        "Columns not used: 'Wy [cm³]', 'Wz [cm³]'.",
        "Numbers are read with a decimal comma (detected).",
        "Family not stated, taken as I from the designation: lines 5-6.",
    )


def test_thousands_points_beside_decimal_commas_read(tmp_path: Path) -> None:
    """Beside 28,5 a point cannot be the decimal mark, so 1.943 is 1943; the reader hears it."""
    text = "Profil;A [cm²];G [kg/m];Iy [cm⁴];Iz [cm⁴]\nIPE 200;28,5;22,4;1.943;142\n"
    catalogue = read(tmp_path, text)
    assert catalogue.i_major[0] == pytest.approx(1943e-8)
    assert "Thousands are grouped by a mark, as in 1.943." in catalogue.remarks


def test_us_angle_table_reads_x_y_z(tmp_path: Path) -> None:
    """x-x major, y-y minor, z-z least; inch units (AISC Manual Table 1-7, from memory)."""
    text = (
        "section,A (in.2),Ix (in.4),Iy (in.4),rx (in.),ry (in.),rz (in.),weight (lb/ft)\n"
        "L4x4x3/8,2.86,4.32,4.32,1.23,1.23,0.779,9.8\n"
        "L4x3x3/8,2.49,3.94,1.89,1.26,0.873,0.636,8.5\n"
    )
    catalogue = read(tmp_path, text)
    assert catalogue.family == ("angle", "angle")
    assert catalogue.area / INCH**2 == pytest.approx([2.86, 2.49])
    assert catalogue.r_least / INCH == pytest.approx([0.779, 0.636])
    assert catalogue.i_minor / INCH**4 == pytest.approx([4.32, 1.89])
    assert catalogue.mass == pytest.approx(np.array([9.8, 8.5]) * 0.45359237 / 0.3048)
    assert dict(inspect_catalogue(catalogue))["area"] == "2.49 (L4x3x3/8) to 2.86 in2 (L4x4x3/8)"


def test_pipe_table_with_a_delimiter_hint_reads(tmp_path: Path) -> None:
    """A spreadsheet's ``sep=`` line is obeyed; pipes weigh their nominal wall (Table 1-14)."""
    text = (
        "sep=,\nsection,product,t des (in),OD (in),A (in.2),I (in.^4),r (in.),weight (lb/ft)\n"
        "Pipe 4 Std,ASTM A53,0.221,4.5,2.96,6.82,1.51,10.8\n"
    )
    catalogue = read(tmp_path, text)
    assert catalogue.i_minor[0] == catalogue.i_major[0]
    assert np.isnan(catalogue.root_radius[0])
    assert catalogue.remarks == (
        "Columns not used: 'r (in.)'.",
        "Family not stated, taken as CHS from the designation: line 3.",
    )


def test_weights_in_newtons_become_masses(tmp_path: Path) -> None:
    """A weight in kN/m is divided by standard gravity, and the column says so."""
    text = "designation,family,A [cm2],weight [N/m],I [cm4]\nSHS 100x100x5,SHS,18.7,144.2,279\n"
    catalogue = read(tmp_path, text)
    assert catalogue.mass[0] == pytest.approx(144.2 / 9.80665)
    assert ("weight [N/m]", "mass from weight in N/m") in catalogue.columns


def test_price_per_tonne_becomes_a_price_per_metre(tmp_path: Path) -> None:
    """1450 EUR/t at 14.7 kg/m is 21.3 EUR/m."""
    text = (
        "designation,family,A [cm2],mass [kg/m],I [cm4],price [EUR/t]\n"
        "SHS 100x100x5,SHS,18.7,14.7,279,1450\n"
    )
    assert read(tmp_path, text).price[0] == pytest.approx(1.450 * 14.7)


def test_radii_alone_are_enough(tmp_path: Path) -> None:
    """Without second moments I = A i² is formed about each axis."""
    text = (
        "# density = 7850 kg/m3\ndesignation,family,area [mm2],i major [mm],i minor [mm]\n"
        "IPE 200,I,2850,82.6,22.4\n"
    )
    catalogue = read(tmp_path, text)
    assert catalogue.r_major[0] == pytest.approx(0.0826)
    assert catalogue.r_least[0] == pytest.approx(0.0224)
    assert catalogue.mass[0] == pytest.approx(2850e-6 * 7850)


def test_small_deviations_are_remarks_and_name_the_row(tmp_path: Path) -> None:
    """A mass 2 % off and a radius 2 % off are told, not refused."""
    text = (
        "designation,family,area [cm2],mass [kg/m],I [cm4],i [cm]\n"
        "SHS 100x100x5,SHS,18.73,15.00,279.4,3.950\nSHS 80x80x5,SHS,14.73,11.56,136.6,3.045\n"
    )
    assert read(tmp_path, text).remarks == (
        "Mass differs from area × density by more than 1 % beyond rounding in 1 row; greatest "
        "+2.0 % in line 2 (SHS 100x100x5).",
        "Radius of gyration differs from sqrt(I/A) by more than 1 % beyond rounding in 1 row; "
        "greatest +2.2 % in line 2 (SHS 100x100x5).",
    )


def test_misspelled_heads_are_pointed_out(tmp_path: Path) -> None:
    """A column that is not used, but nearly has a known name, is asked about."""
    text = (
        "designation,family,area [cm2],mass [kg/m],I [cm4],thicknes [mm]\n"
        "SHS 100x100x5,SHS,18.7,14.7,279,5\n"
    )
    assert read(tmp_path, text).remarks == (
        "Columns not used: 'thicknes [mm]' (is thickness meant?).",
    )


def test_an_unknown_shape_keeps_its_doubt(tmp_path: Path) -> None:
    """Family other: the least axis is taken as the minor one, and the file's reader hears it."""
    text = (
        "designation,area [cm2],mass [kg/m],I major [cm4],I minor [cm4]\nZ 100,14.5,11.4,222,72.5\n"
    )
    assert read(tmp_path, text).remarks == (
        "Family not stated, taken as other from the designation: line 2.",
        "Least axis taken as the minor one for family other: line 2. A shape without an axis of "
        "symmetry needs its least principal axis (I least).",
    )


def test_letters_with_a_unit_of_another_kind_are_not_used(tmp_path: Path) -> None:
    """W [cm3] is a section modulus and no weight, g [mm] a gauge, u [m2/t] no perimeter."""
    text = (
        "designation,family,A [cm2],G [kg/m],Imax [cm4],Imin [cm4],W [cm3],g [mm],U [m2/t]\n"
        "IPE 200,I,28.5,22.4,1943,142,194,56,34.4\n"
    )
    catalogue = read(tmp_path, text.replace("G [kg/m]", "mass [kg/m]"))
    assert catalogue.remarks == ("Columns not used: 'W [cm3]', 'g [mm]', 'U [m2/t]'.",)
    assert catalogue.i_minor[0] == catalogue.i_least[0] == pytest.approx(142e-8)


def test_a_file_beside_the_brief_may_lie_in_a_folder(tmp_path: Path) -> None:
    """Paths are relative to the brief's folder; a shipped name goes before a file of that name."""
    (tmp_path / "stock").mkdir()
    text = "designation,family,area [cm2],mass [kg/m],I [cm4]\nS1,SHS,18.7,14.7,279\n"
    (tmp_path / "stock" / "mine.csv").write_text(text, encoding="utf-8")
    catalogue = read_catalogue("stock/mine.csv", tmp_path)
    assert catalogue.source.name == "stock/mine.csv"
    assert catalogue.source.path == (tmp_path / "stock" / "mine.csv").resolve()
    assert len(catalogue.source.sha256) == 64


def test_squares_given_by_b_alone_have_their_depth(tmp_path: Path) -> None:
    """Squares listed under b as under h have both sides, which the section class needs."""
    section = geometry.hot_finished_hollow(depth=0.12, width=0.12, wall=0.005)
    for head in ("b", "h"):
        catalogue = read(
            tmp_path,
            f"Bezeichnung;A [cm2];G [kg/m];I [cm4];{head} [mm];t [mm]\n"
            f"QRO 120x5;{german(section.area * 1e4, 2)};{german(section.area * 7850, 2)};"
            f"{german(section.i_major * 1e8, 1)};120;5\n",
        )
        assert catalogue.depth[0] == pytest.approx(0.12)
        assert catalogue.width[0] == pytest.approx(0.12)
