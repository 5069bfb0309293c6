"""Stock lengths, availability, preference and lead time of a catalogue are read row by row."""

from __future__ import annotations

from pathlib import Path

import pytest

from sizing.brief.catalogue_reader import catalogue_from_bytes, read_catalogue, shipped_catalogues
from sizing.brief.model import SourceFile
from sizing.errors import InputError

HEADS = "designation,family,area [cm2],mass [kg/m],I major [cm4],I minor [cm4]"
ROWS = ("S1,other,10,7.85,100,100", "S2,other,20,15.7,400,400", "S3,other,30,23.55,900,900")


def catalogue(extra_heads: str, *extra: str):
    text = "\n".join(
        [f"{HEADS},{extra_heads}", *(f"{a},{b}" for a, b in zip(ROWS, extra, strict=True))]
    )
    source = SourceFile(name="own.csv", path=Path("own.csv"), sha256="0" * 64)
    return catalogue_from_bytes(text.encode(), name="own", source=source)


def test_all_four_columns() -> None:
    """Lengths in SI and rising, yes and no in common spellings, empty cells say nothing."""
    read = catalogue(
        "stock lengths [m],available,preferred,lead time",
        "12;6,yes,x,",
        "6 / 7.5,No,no,6 weeks",
        ",,-,-",
    )
    assert read.stock_lengths == ((6.0, 12.0), (6.0, 7.5), ())
    assert read.available == (True, False, True)
    assert read.preferred == (True, False, None)
    assert read.lead_time == ("", "6 weeks", "")


def test_other_units_of_length() -> None:
    """The unit in the head holds."""
    assert catalogue("stock length (mm)", "6000", "12000", "").stock_lengths == (
        (6.0,),
        (12.0,),
        (),
    )
    feet = catalogue("stock lengths [ft]", "20 40", "20", "").stock_lengths
    assert feet[0] == pytest.approx((6.096, 12.192))


@pytest.mark.parametrize(
    ("heads", "cell", "told"),
    [
        (
            "stock lengths [m]",
            "six",
            "own.csv: line 2 (S1), column 'stock lengths [m]': found 'six'; expected stock "
            "lengths such as 6;12.",
        ),
        (
            "stock lengths [m]",
            "6000",
            "own.csv: line 2 (S1), column 'stock lengths [m]': found '6000'; expected stock "
            "lengths from 0.5 to 100 m, such as 6;12.",
        ),
        (
            "stock lengths [m]",
            "nan",
            "own.csv: line 2 (S1), column 'stock lengths [m]': found 'nan'; expected stock "
            "lengths from 0.5 to 100 m, such as 6;12.",
        ),
        (
            "available",
            "perhaps",
            "own.csv: line 2 (S1), column 'available': found 'perhaps'; expected yes or no.",
        ),
        (
            "stock lengths",
            "6",
            "own.csv: line 1, column 'stock lengths': found no unit; expected a unit of length in "
            "square brackets: m, mm or ft. Write for instance: stock lengths [m]",
        ),
        (
            "stock lengths [kg]",
            "6",
            "own.csv: line 1, column 'stock lengths [kg]': found 'kg'; expected a unit of length "
            "in square brackets: m, mm or ft. Write for instance: stock lengths [m]",
        ),
    ],
)
def test_cells_that_cannot_be_read(heads: str, cell: str, told: str) -> None:
    """A cell or head that makes no sense is refused with its place."""
    with pytest.raises(InputError) as refusal:
        catalogue(heads, cell, "", "")
    assert str(refusal.value).rstrip(".") == told.rstrip(".")


def test_shipped_catalogues_say_nothing_of_supply(tmp_path: Path) -> None:
    """What is shipped is on sale somewhere; stock is the user's supplier's."""
    for name in shipped_catalogues():
        read = read_catalogue(name, tmp_path)
        assert all(read.available)
        assert not any(read.stock_lengths)
