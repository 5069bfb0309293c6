"""Broken catalogues and the whole messages that they must give."""

from __future__ import annotations

from pathlib import Path

import pytest

from sizing.brief.catalogue_names import PLAIN_HEADS
from sizing.brief.catalogue_reader import read_catalogue, shipped_catalogues
from sizing.errors import InputError

HEADS = (
    "designation,family,product,area [cm2],mass [kg/m],I major [cm4],I minor [cm4],"
    "depth [mm],width [mm],thickness [mm]\n"
)
SHS100 = "SHS 100x100x5,SHS,EN 10210-2,18.7,14.7,279,279,100,100,5\n"
SHS80 = "SHS 80x80x5,SHS,EN 10210-2,14.7,11.6,137,137,80,80,5\n"
GOOD = HEADS + SHS100 + SHS80
"""Two rows of EN 10210-2 (from memory; see the published data)."""

PLACE = "list.csv: line 2 (SHS 100x100x5), column "
KNOWN = f"Heads that are understood: {PLAIN_HEADS}."
ONE_WAY = (
    "Declare the decimal mark in the header, # decimal = comma or # decimal = point, or leave "
    "thousands marks out."
)
CELL = "expected a column for it, with its unit in square brackets."

BROKEN: dict[str, tuple[str, str]] = {
    "an empty file": (
        "",
        "list.csv: file: found nothing; expected a line of column heads and at least one row. "
        "Write column heads such as designation, area [cm2], mass [kg/m], I major [cm4], I "
        "minor [cm4].",
    ),
    "only header lines": (
        "# family = SHS\n\n",
        "list.csv: file: found only header lines; expected a line of column heads and at least "
        "one row. Write column heads such as designation, area [cm2], mass [kg/m], I major "
        "[cm4], I minor [cm4].",
    ),
    "heads without rows": (
        HEADS,
        "list.csv: file: found column heads but no rows; expected at least one section.",
    ),
    "no area": (
        "designation,family,mass [kg/m],I [cm4]\nSHS 100x100x5,SHS,14.7,279\n",
        f"list.csv: line 1: found no column area [cm2]; {CELL} {KNOWN}",
    ),
    "no mass and no density": (
        "designation,family,area [cm2],I [cm4],Wpl [cm3]\nSHS 100x100x5,SHS,18.7,279,66.4\n",
        "list.csv: line 1: found no column mass [kg/m] (or # density = 7850 kg/m3 in the "
        f"header); {CELL} Not understood here: 'Wpl [cm3]'. {KNOWN}",
    ),
    "no designation": (
        "area [cm2],mass [kg/m],I [cm4]\n18.7,14.7,279\n",
        "list.csv: line 1: found no column designation; expected a column for it. Lines above "
        f"the column heads must begin with #. {KNOWN}",
    ),
    "a title and no designation": (
        "Stock list\narea [cm2],mass [kg/m],I [cm4]\n18.7,14.7,279\n",
        "list.csv: line 1: found 'Stock list', which is no line of column heads; expected column "
        "heads such as designation, area [cm2], mass [kg/m], I major [cm4], I minor [cm4]. Lines "
        "above the column heads must begin with #.",
    ),
    "a unit of volume for the area": (
        GOOD.replace("area [cm2]", "area [cm3]"),
        "list.csv: line 1, column 'area [cm3]': found unknown unit 'cm3'; expected a unit in "
        "square brackets: cm2, mm2 or in2. Write for instance: area [cm2]",
    ),
    "a unit that does not exist": (
        GOOD.replace("mass [kg/m]", "mass [kilo]"),
        "list.csv: line 1, column 'mass [kilo]': found unknown unit 'kilo'; expected a unit in "
        "square brackets: kg/m or lb/ft or N/m or kN/m. Write for instance: mass [kg/m]",
    ),
    "a length as unit of the area": (
        GOOD.replace("area [cm2]", "area [mm]"),
        "list.csv: line 1, column 'area [mm]': found 'mm', a unit of length; expected a unit in "
        "square brackets: cm2, mm2 or in2. Write for instance: area [cm2]",
    ),
    "no unit": (
        GOOD.replace("area [cm2]", "area"),
        "list.csv: line 1, column 'area': found no unit; expected a unit in square brackets: "
        "cm2, mm2 or in2. Write for instance: area [cm2]",
    ),
    "two columns for one property": (
        GOOD.replace("thickness [mm]", "A [mm2]"),
        "list.csv: line 1, column 'A [mm2]': found a second column for what 'area [cm2]' holds "
        "already; expected each property once. Remove one of the two columns.",
    ),
    "an axis letter alone": (
        "designation,area [cm2],mass [kg/m],Iy [cm4]\nSHS 100x100x5,18.7,14.7,279\n",
        "list.csv: line 1, column 'Iy [cm4]': found an axis letter whose partner is missing; "
        "expected the pair x and y, or the pair y and z. Write I major and I minor instead: the "
        "same letter is the strong axis in one country and the weak one in the next.",
    ),
    "every area in mm2 under cm2": (
        GOOD.replace(",18.7,", ",1870,").replace(",14.7,11.6", ",1470,11.6"),
        "list.csv: every row (line 2 (SHS 100x100x5) first), columns 'area [cm2]' and 'mass "
        "[kg/m]': found mass over area of 78.91 kg/m3; expected a density of 7850 kg/m3. The "
        "area looks like mm2 given as cm2. Correct the unit in the column head.",
    ),
    "one area in mm2 under cm2": (
        GOOD.replace(",18.7,", ",1870,"),
        PLACE + "'area [cm2]': found 1870 cm2; expected about 18.73 cm2 for these dimensions and "
        "this mass. This looks like mm2 given as cm2.",
    ),
    "one area in mm2 under cm2 without dimensions": (
        "designation,family,area [cm2],mass [kg/m],I [cm4]\n"
        "SHS 100x100x5,SHS,1870,14.7,279\nSHS 80x80x5,SHS,14.7,11.6,137\n",
        PLACE + "'mass [kg/m]': found 14.7 kg/m with an area of 1870 cm2 (78.61 kg/m3); expected "
        "about 1468 kg/m (area × 7850 kg/m3). The area looks like mm2 given as cm2.",
    ),
    "one mass of another section": (
        GOOD.replace("18.7,14.7", "18.7,17.4"),
        PLACE + "'mass [kg/m]': found 17.4 kg/m with an area of 18.7 cm2 (9305 kg/m3); expected "
        "about 14.68 kg/m (area × 7850 kg/m3). The area agrees with the dimensions; compare the "
        "mass with the printed table.",
    ),
    "second moments in mm4 under cm4": (
        GOOD.replace("279,279", "2790000,279"),
        PLACE + "'I major [cm4]': found 2.79e+06 cm4 about the major axis; expected about 279.4 "
        "cm4 for these dimensions. This looks like mm4 given as cm4.",
    ),
    "a decimal mark that slipped": (
        GOOD.replace("279,279", "27.9,27.9"),
        PLACE + "'I major [cm4]': found 27.9 cm4 about the major axis; expected about 279.4 cm4 "
        "for these dimensions. This looks like a figure with the decimal mark one place too far "
        "left.\n"
        + PLACE
        + "'I minor [cm4]': found 27.9 cm4 about the minor axis; expected about 279.4 cm4 for "
        "these dimensions. This looks like a figure with the decimal mark one place too far left.",
    ),
    "mass in lb/ft under kg/m": (
        GOOD.replace("18.7,14.7", "18.7,9.88").replace("14.7,11.6", "14.7,7.79"),
        "list.csv: every row (line 2 (SHS 100x100x5) first), columns 'area [cm2]' and 'mass "
        "[kg/m]': found mass over area of 5299 kg/m3; expected a density of 7850 kg/m3. The mass "
        "looks like lb/ft given as kg/m. Correct the unit in the column head.",
    ),
    "aluminium without its density": (
        GOOD.replace("18.7,14.7", "18.7,5.05").replace("14.7,11.6", "14.7,3.97"),
        "list.csv: every row (line 2 (SHS 100x100x5) first), columns 'area [cm2]' and 'mass "
        "[kg/m]': found mass over area of 2701 kg/m3; expected a density of 7850 kg/m3. If the "
        "material is not steel, write: # density = 2701 kg/m3",
    ),
    "radius in mm under cm": (
        "designation,family,area [cm2],mass [kg/m],I [cm4],i [cm]\n"
        "SHS 100x100x5,SHS,18.7,14.7,279,38.6\n",
        PLACE + "'i [cm]': found 38.6 cm; expected about 3.863 cm, the square root of I/A. The "
        "radius looks like mm given as cm.",
    ),
    "an area that no second moment can have": (
        "# density = 7850 kg/m3\ndesignation,family,area [cm2],I [cm4]\nX1,SHS,18.7,2.79\n",
        "list.csv: line 3 (X1), column 'I [cm4]': found a second moment of 2.79 cm4 with an area "
        "of 18.7 cm2; expected a second moment that this area can have (a solid disc has the "
        "least, 27.83 cm4). The second moment looks like cm4 given as mm4, or the area like mm2 "
        "given as cm2.",
    ),
    "a designation twice": (
        GOOD + SHS100,
        "list.csv: line 4, column 'designation': found 'SHS 100x100x5' again; expected each "
        "designation once. It stands in line 2 already; remove one or tell them apart by their "
        "designation.",
    ),
    "a designation twice in other letters": (
        GOOD + SHS100.replace("SHS 100x100x5", "shs 100 × 100 × 5"),
        "list.csv: line 4, column 'designation': found 'shs 100 × 100 × 5' again; expected each "
        "designation once. It stands in line 2 already; remove one or tell them apart by their "
        "designation.",
    ),
    "a negative area with a typographic minus": (
        GOOD.replace(",18.7,", ",−18.7,"),
        PLACE + "'area [cm2]': found '−18.7'; expected a number above zero.",
    ),
    "not a number": (
        GOOD.replace(",18.7,", ",NaN,"),
        PLACE + "'area [cm2]': found 'NaN'; expected a number. Only finite numbers can be used.",
    ),
    "infinitely large": (
        GOOD.replace(",18.7,", ",1e999,"),
        PLACE + "'area [cm2]': found '1e999'; expected a number. No property of a section is of "
        "this size.",
    ),
    "lengths in mm under m": (
        GOOD.replace("depth [mm]", "depth [m]").replace(SHS80, ""),
        PLACE + "'depth [m]': found '100'; expected a dimension between 0.1 mm and 10 m. Compare "
        "the unit in the column head with the table.",
    ),
    "a density of another planet": (
        "# density = 7.85 kg/m3\n" + GOOD,
        "list.csv: header, density: found 7.85 kg/m3; expected the density of a building "
        "material, 100 to 20000 kg/m3.",
    ),
    "a unit in the cell": (
        GOOD.replace(",18.7,", ",18.7 cm2,"),
        PLACE + "'area [cm2]': found '18.7 cm2'; expected a number. Put the unit into the column "
        "head, in square brackets.",
    ),
    "a fraction": (
        GOOD.replace("100,100,5", "100,100,3/16"),
        PLACE + "'thickness [mm]': found '3/16'; expected a number. Write fractions as decimals, "
        "3/8 as 0.375.",
    ),
    "a formula": (
        GOOD.replace(",18.7,", ",=D1*2,"),
        PLACE + "'area [cm2]': found '=D1*2'; expected a number. Save the sheet with values, not "
        "with formulas or errors.",
    ),
    "an empty cell that is needed": (
        GOOD.replace(",18.7,", ",,"),
        PLACE + "'area [cm2]': found an empty cell; expected the area.",
    ),
    "a comma that may be decimal or thousands": (
        GOOD.replace(",18.7,", ',"1,870",'),
        PLACE + "'area [cm2]': found '1,870'; expected a number that can be read in one way only "
        f"(this is 1.870 or 1870). {ONE_WAY}",
    ),
    "a file of undecided commas": (
        "designation;family;area [cm2];mass [kg/m];I [cm4]\nS1;SHS;18,732;14,704;279\n",
        "list.csv: line 2 (S1), column 'area [cm2]': found '18,732'; expected a number that can "
        f"be read in one way only (this is 18.732 or 18732). {ONE_WAY}\n"
        "list.csv: line 2 (S1), column 'mass [kg/m]': found '14,704'; expected a number that can "
        f"be read in one way only (this is 14.704 or 14704). {ONE_WAY}",
    ),
    "both decimal marks": (
        GOOD.replace(",", ";").replace(";18.7;", ";18,7;"),
        PLACE + "'area [cm2]': found '18,7'; expected a number with a decimal point, as elsewhere "
        "in the file. Write every number of the file with the same decimal mark.",
    ),
    "decimal commas between commas": (
        GOOD.replace(",18.7,", ",18,7,"),
        "list.csv: line 2 (SHS 100x100x5): found 11 cells; expected 10 cells, as many as there "
        "are column heads. A decimal comma also splits a cell: separate the columns with ; or "
        "write decimal points.",
    ),
    "a short row": (
        HEADS + "SHS 100x100x5,SHS\n",
        "list.csv: line 2 (SHS 100x100x5): found 2 cells; expected 10 cells, as many as there "
        "are column heads. Leave a cell empty where there is no value, but keep its delimiter.",
    ),
    "a quotation mark that does not close": (
        HEADS + SHS100 + '"SHS 80x80x5,SHS\n',
        "list.csv: line 3: found quotation marks that do not close (unexpected end of data); "
        'expected cells, quoted where they hold the delimiter: "2 1/2, long". Close the quotation '
        "mark; a quotation mark inside a cell is doubled. An inch mark is better written in.",
    ),
    "major and minor swapped": (
        "designation,family,area [cm2],mass [kg/m],I major [cm4],I minor [cm4]\n"
        "IPE 200,I,28.5,22.4,142,1943\n",
        "list.csv: line 2 (IPE 200), column 'I minor [cm4]': found a minor second moment of 1943 "
        "cm4, greater than the major one of 142 cm4; expected minor not above major. Swap the "
        "columns, or name them major and minor if the axis letters mean otherwise.",
    ),
    "the greatest axis of an angle for the least": (
        "designation,area [cm2],mass [kg/m],I [cm4],I least [cm4]\nL 50x50x5,4.80,3.77,11.0,17.4\n",
        "list.csv: line 2 (L 50x50x5), column 'I least [cm4]': found a least second moment of "
        "17.4 cm4, greater than the minor one of 11 cm4; expected least not above minor. The "
        "least axis of an angle is its v-v axis, not u-u.",
    ),
    "angles without their least axis": (
        "designation,area [cm2],mass [kg/m],I [cm4]\nL 50x50x5,4.80,3.77,11.0\n"
        "L 60x60x6,6.91,5.42,22.8\n",
        "list.csv: line 2 (L 50x50x5) and 1 more: found no column for what a section of family "
        "angle needs; expected a second moment or radius of gyration, least axis (v-v). Add a "
        "column: I least [cm4]",
    ),
    "an unknown family": (
        GOOD.replace("x5,SHS", "x5,box", 1),
        PLACE + "'family': found 'box'; expected one of SHS, RHS, CHS, angle, I, rectangle, other. "
        "Use other for a section that fits none of these.",
    ),
    "a cold formed section among hot finished ones": (
        HEADS + "SHS 100x100x8,SHS,EN 10210-2,27.2,21.4,366,366,100,100,8\n",
        "list.csv: line 2 (SHS 100x100x8), column 'area [cm2]': found 27.2 cm2, the area of the "
        "cold formed section; expected 28.75 cm2 for EN 10210-2. Hot finished and cold formed "
        "sections of one size differ in area and in buckling curve: correct the product "
        "standard, or take the row from the right table.",
    ),
    "depth and width swapped": (
        HEADS + "RHS 100x50x5,RHS,EN 10210-2,13.7,10.8,167,54.3,50,100,5\n",
        "list.csv: line 2 (RHS 100x50x5), column 'depth [mm]': found 50 mm, with a radius of "
        "gyration about the major axis of 34.91 mm; expected a radius of at most half the depth. "
        "Depth and width look swapped: depth is the dimension across the major axis.",
    ),
    "walls that leave no room": (
        GOOD.replace("100,100,5", "100,100,50"),
        PLACE + "'thickness [mm]': found 50 mm in a section of 100 × 100 mm; expected walls that "
        "leave room inside. Compare the units of depth, width and thickness.",
    ),
    "half a ply": (
        "# density = from grade\ndesignation,area [in2],I major [in4],I minor [in4],plies\n"
        "2x6,8.25,20.8,1.547,1.5\n",
        "list.csv: line 3 (2x6), column 'plies': found 1.5; expected a whole number of plies.",
    ),
    "a density without unit": (
        "# density = 7850\n" + GOOD,
        "list.csv: header, density: found '7850'; expected a density with its unit, or: from "
        "grade. Write for instance: # density = 7850 kg/m3",
    ),
    "an unknown decimal mark": (
        "# decimal = dot\n" + GOOD,
        "list.csv: header, decimal: found 'dot'; expected point or comma. Write for instance: # "
        "decimal = comma",
    ),
    "an unknown delimiter": (
        "# delimiter = |\n" + GOOD,
        "list.csv: header, delimiter: found '|'; expected one of ; , tab. Write for instance: # "
        "delimiter = ;",
    ),
    "a price without currency and length": (
        GOOD.replace("thickness [mm]", "price"),
        "list.csv: line 1, column 'price': found no unit; expected a currency per length or per "
        "mass, such as EUR/m, USD/ft or EUR/t. Write for instance: price [EUR/m]",
    ),
}


def messages(folder: Path, data: bytes, name: str = "list.csv") -> str:
    (folder / name).write_bytes(data)
    with pytest.raises(InputError) as caught:
        read_catalogue(name, folder)
    return str(caught.value)


@pytest.mark.parametrize("case", BROKEN)
def test_broken_catalogue_is_refused_with_advice(case: str, tmp_path: Path) -> None:
    """The message names file, line, column, what was found, what belongs there, and the fix."""
    text, expected = BROKEN[case]
    assert messages(tmp_path, text.encode()) == expected


def test_the_good_catalogue_behind_the_broken_ones_reads(tmp_path: Path) -> None:
    """Without its mistake the file reads, and without any remark."""
    (tmp_path / "list.csv").write_text(GOOD, encoding="utf-8")
    assert read_catalogue("list.csv", tmp_path).remarks == ()


def test_every_problem_is_told_in_one_round(tmp_path: Path) -> None:
    """Three different mistakes on three lines give three messages."""
    text = GOOD.replace("279,279", "279,abc") + "S,box,x,1,1,1,1,1,1,1\n" + SHS80
    told = messages(tmp_path, text.encode()).splitlines()
    assert [line.split(":")[1].strip() for line in told] == [
        "line 2 (SHS 100x100x5), column 'I minor [cm4]'",
        "line 4 (S), column 'family'",
        "line 5, column 'designation'",
    ]


def test_many_mistakes_of_one_kind_share_a_line_after_ten(tmp_path: Path) -> None:
    """Fifteen bad cells: ten told one by one, five in one line with their line numbers."""
    rows = "".join(SHS100.replace("x5,", f"x5 no {k},", 1).replace("18.7", "x") for k in range(15))
    told = messages(tmp_path, (HEADS + rows).encode()).splitlines()
    assert len(told) == 11
    assert told[-1] == (
        "list.csv: 5 more, lines 12-16: found the same kind of mistake; expected a number."
    )


def test_files_that_are_no_text_tables_are_refused(tmp_path: Path) -> None:
    """Binary files and oversized ones are told apart."""
    assert messages(tmp_path, b"\x00\x01\x02") == (
        "list.csv: file: found bytes that are not text; expected a text table (CSV). Save the "
        "table as CSV (UTF-8)."
    )
    assert messages(tmp_path, b"\xd0\xcf\x11\xe0 old") == (
        "list.csv: file: found a workbook of the old kind (.xls), or one with a password; "
        "expected a text table (CSV) or a workbook (.xlsx). Save the sheet as CSV (UTF-8) and "
        "name that file."
    )
    assert messages(tmp_path, b"x" * (6 * 1024 * 1024)) == (
        "list.csv: file: found more than 5 MiB; expected at most 5 MiB."
    )


def test_unknown_names_get_the_nearest_shipped_one(tmp_path: Path) -> None:
    """A misspelled or shortened name is answered with the catalogue that was probably meant."""
    shipped = f"Shipped are: {', '.join(shipped_catalogues())}."
    for name, meant in (
        ("square-hollow-section", "square-hollow-sections"),
        ("CHS", "circular-hollow-sections"),
        ("equal_angles.csv", "equal-angles"),
    ):
        with pytest.raises(InputError) as caught:
            read_catalogue(name, tmp_path)
        assert str(caught.value) == (
            f"{name}: file: found no shipped catalogue of this name and no such file in "
            f"{tmp_path}; expected a shipped name or the path of a file. Did you mean {meant}? "
            f"{shipped}"
        )


@pytest.mark.parametrize("name", ["", "  ", "a\x00b", ".", "..", "/dev/null"])
def test_names_that_are_no_files_are_refused(name: str, tmp_path: Path) -> None:
    """Empty names, folders and devices never reach the reader."""
    with pytest.raises(InputError):
        read_catalogue(name, tmp_path)
