"""Numbers in tables: what is read, what is refused because it could mean two things."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from sizing.brief.catalogue_numbers import Marks, NumberError, marks_of, read_number
from sizing.brief.catalogue_units import unit_factor

POINT = Marks(decimal="point", settled=True, thousands=False)
COMMA = Marks(decimal="comma", settled=True, thousands=False)


@pytest.mark.parametrize(
    ("cell", "value", "half"),
    [
        ("18.7", 18.7, 0.05), ("279", 279, 0.5), (".5", 0.5, 0.05), ("1e3", 1000, 500),
        ("1.20e-2", 0.012, 0.00005), ("\u22122", -2, 0.5), ("1 234.5", 1234.5, 0.05),
        ("12\u202f345", 12345, 0.5), ("1'234", 1234, 0.5), ("1,234.5", 1234.5, 0.05),
        ("1,234,567", 1234567, 0.5), ("+3", 3, 0.5),
    ],
)  # fmt: skip
def test_point_numbers(cell: str, value: float, half: float) -> None:
    """Plain, grouped and typographic numbers, each with half a unit of its last place."""
    number = read_number(cell, POINT)
    assert (number.value, number.half) == pytest.approx((value, half))


@pytest.mark.parametrize(
    ("cell", "value"),
    [("18,7", 18.7), ("0,123", 0.123), ("1,234", 1.234), ("1.234,5", 1234.5),
     ("1.234.567", 1234567),
     ("1 234,5", 1234.5), ("-3,1e2", -310.0)],
)  # fmt: skip
def test_comma_numbers(cell: str, value: float) -> None:
    """The same with decimal commas."""
    assert read_number(cell, COMMA).value == pytest.approx(value)


@pytest.mark.parametrize(
    "cell",
    ["1,234", "1,23", "1.2.3", "1,2,3", "12,34.5", "", "abc", "1 2", "1  234", "0x10", "１２",
     "1e400", "--1", "1-", "١٢", "1_000", "5%", "1,234,56"],
)  # fmt: skip
def test_what_is_not_one_certain_point_number(cell: str) -> None:
    """Misplaced marks, other scripts and words are refused, as is 1,234."""
    with pytest.raises(NumberError):
        read_number(cell, POINT)


def test_evidence_settles_the_decimal_mark() -> None:
    """One number that can be read in one way only decides for the file."""
    assert marks_of(["1,234", "12"], delimiter=";", declared=None).settled is False
    shown = Marks(decimal="comma", settled=True, thousands=True)
    assert marks_of(["1,234", "0,5"], delimiter=";", declared=None) == shown
    assert read_number("1.943", shown).value == 1943
    assert marks_of(["1,234", "1,234.5"], delimiter=";", declared=None) == Marks(
        decimal="point", settled=True, thousands=True
    )
    assert marks_of(["1.234", "0.5"], delimiter=",", declared=None) == POINT
    assert marks_of([], delimiter=";", declared="comma") == Marks(
        decimal="comma", settled=True, thousands=True
    )


@given(st.floats(0.01, 1e7), st.integers(0, 4), st.sampled_from(["", ".", " ", "\u00a0", "'"]))
def test_german_numbers_survive_the_journey(value: float, decimals: int, group: str) -> None:
    """A number printed with a decimal comma and any thousands mark reads back as printed."""
    printed = f"{value:,.{decimals}f}".replace(",", "_").replace(".", ",").replace("_", group)
    cells = [printed, "0,5", "1.234.567,8" if group == "." else "2,5"]
    marks = marks_of(cells, delimiter=";", declared=None)
    assert read_number(printed, marks).value == pytest.approx(float(f"{value:.{decimals}f}"))


@pytest.mark.parametrize(
    ("unit", "kind", "factor"),
    [
        ("cm2", "area", 1e-4), ("cm²", "area", 1e-4), ("cm^2", "area", 1e-4),
        ("in.2", "area", 0.0254**2), ("sq in", "area", 0.0254**2), ("mm⁴", "second moment", 1e-12),
        ("in^4", "second moment", 0.0254**4), ("lb/ft", "mass per length", 0.45359237 / 0.3048),
        ("lbs/ft", "mass per length", 0.45359237 / 0.3048), ("kg/m", "mass per length", 1.0),
        ("plf", "mass per length", 0.45359237 / 0.3048), ("N/m", "weight per length", 1.0),
        ("m2/m", "length", 1.0), ("inch", "length", 0.0254), ("kg/m³", "density", 1.0),
        ("t", "mass", 1000.0), ("kg per m", "mass per length", 1.0),
    ],
)  # fmt: skip
def test_units_as_the_trade_writes_them(unit: str, kind: str, factor: float) -> None:
    """Exact factors (international yard and pound agreement, 1959)."""
    found = unit_factor(unit)
    assert found is not None
    assert found[0] == kind
    assert found[1] == pytest.approx(factor, rel=1e-14)


@pytest.mark.parametrize("unit", ["", "cm3", "x", "-", "10**9", "m**99999999", "__import__('os')"])
def test_what_is_no_unit(unit: str) -> None:
    """Other kinds, words and expressions give nothing."""
    assert unit_factor(unit) is None
