"""Quantities agree with pint, every refusal says why, and what is printed reads back."""

from __future__ import annotations

import math
from fractions import Fraction

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from sizing.brief.model import Units
from sizing.unit_words import _ATOMS
from sizing.units import Display, Kind, QuantityError, bare_unit, factor, is_us, parse

METRIC, US = Units(force="kN", length="m"), Units(force="kip", length="in")

# Words that pint does not hold, written out in words that it does.
PINT_WORDS = {
    "%": "percent",
    "degC": "delta_degC",
    "degF": "delta_degF",
    "psf": "lbf/ft^2",
    "ksf": "kip/ft^2",
    "plf": "lbf/ft",
    "klf": "kip/ft",
    "pcf": "lb/ft^3",
    "t": "tonne",
}


@pytest.fixture(scope="module")
def registry() -> pint.UnitRegistry:
    return pint.UnitRegistry(cache_folder=None)


@pytest.mark.parametrize("word", sorted(_ATOMS))
def test_every_common_unit_agrees_with_pint(word: str, registry: pint.UnitRegistry) -> None:
    """Size and dimension of each word of the table are those of pint."""
    size, dimension = _ATOMS[word]
    quantity = registry.Quantity(1.0, PINT_WORDS.get(word, word)).to_base_units()
    powers = dict(quantity.dimensionality)
    assert quantity.magnitude == pytest.approx(float(size), rel=1e-12)
    assert (
        tuple(powers.get(f"[{name}]", 0) for name in ("mass", "length", "time", "temperature"))
        == (dimension[:4])
    )


# From the definitions: 1 in = 25.4 mm, 1 lb = 0.45359237 kg, g = 9.80665 m/s2.
READ: list[tuple[object, Kind, float]] = [
    ("120 mm", "length", 0.12),
    ("35 kip", "force", 155687.7565341175),
    ("3.5 kN/m2", "pressure", 3500.0),
    ("3.5 kN/m²", "pressure", 3500.0),
    ("3.5 kN/m^2", "pressure", 3500.0),
    ("3.5 kN / m**2", "pressure", 3500.0),
    ("12 kN/m", "line load", 12000.0),
    ("150 N/mm2", "stress", 150e6),
    ("36 ksi", "stress", 248211262.55406108),
    ("1 kip/in2", "stress", 6894757.293168361),
    ("1 kip/ft", "line load", 14593.902937206364),
    ("1 kip/in", "line load", 175126.83524647637),
    ("12 lb/ft", "line load", 175.12683524647637),
    ("12 lb/ft", "mass per length", 17.857967322834646),
    ("20 degC", "temperature difference", 20.0),
    ("20 °C", "temperature difference", 20.0),
    ("36 degF", "temperature difference", 20.0),
    ("171 cm4", "second moment", 1.71e-6),
    ("0.39 m2/m", "surface per length", 0.39),
    ("420 kg/m3", "density", 420.0),
    ("5 %", "dimensionless", 0.05),
    ("2 kgf", "force", 19.6133),
    ("5 yd", "length", 4.572),
    ("5 inches", "length", 0.127),
    ("\u22123\u00a0kN", "force", -3000.0),
    ("+.5 m", "length", 0.5),
    ("1.2e3 mm", "length", 1.2),
    (-9.6, "force", -9600.0),
    (3, "length", 3.0),
    (14.5, "price", 14.5),
    (1, "stress", 1000.0),
    (7850, "density", 7850.0),
]


@pytest.mark.parametrize(("value", "kind", "si"), READ)
def test_quantities_are_read(value: object, kind: Kind, si: float) -> None:
    """Text with a unit and bare numbers give the SI value, rounded once."""
    assert parse(value, kind, METRIC) == pytest.approx(si, rel=1e-15, abs=0.0)


REFUSED: list[tuple[object, Kind, str]] = [
    (
        "1,5 kN",
        "force",
        'found "1,5 kN" with a comma; expected a force, such as "12 kN". Write a decimal point, '
        "for instance 1.5, and thousands without any mark.",
    ),
    (
        "1 500 kN",
        "force",
        'found "1 500 kN"; expected a force, such as "12 kN". Write the digits of a number '
        "without spaces.",
    ),
    (
        "12 kg",
        "force",
        'found "12 kg"; expected a force, such as "12 kN". The unit "kg" measures mass. A mass '
        "is not a force: give its weight, for instance in kN.",
    ),
    (
        "3 kN/m",
        "pressure",
        'found "3 kN/m"; expected a pressure, such as "3.5 kN/m2". The unit "kN/m" measures load '
        "per length.",
    ),
    (
        "12 KN",
        "force",
        'found "12 KN"; expected a force, such as "12 kN". The unit "KN" is not known. Did you '
        'mean "kN"?',
    ),
    (
        "12 kn",
        "force",
        'found "12 kn"; expected a force, such as "12 kN". The unit "kn" measures speed. Did you '
        'mean "kN"?',
    ),
    (
        "12 mN",
        "force",
        'found "12 mN"; expected a force, such as "12 kN". The unit "mN" is not known. Did you '
        'mean "MN"?',
    ),
    (
        "355 mPa",
        "stress",
        'found "355 mPa"; expected a stress, such as "150 N/mm2". The unit "mPa" is not known. '
        'Did you mean "MPa"?',
    ),
    (
        "5 furlongish",
        "length",
        'found "5 furlongish"; expected a length, such as "120 mm". The unit "furlongish" is not '
        "known.",
    ),
    (
        "120",
        "length",
        'found "120" without a unit; expected a length, such as "120 mm". Write a bare number '
        "without quotation marks, or add the unit to the text.",
    ),
    (
        "0.9",
        "dimensionless",
        'found "0.9" as text; expected a number without a unit, such as 0.9. Delete the quotation '
        "marks.",
    ),
    (
        "5 EUR",
        "price",
        'found "5 EUR"; expected a price as a bare number, such as 14.5. Leave the currency out; '
        "one currency holds for the whole job.",
    ),
    (
        "180 deg",
        "dimensionless",
        'found "180 deg"; expected a number without a unit, such as 0.9. Leave the unit out.',
    ),
    (True, "force", 'found true; expected a force, such as "12 kN".'),
    (None, "length", 'found nothing; expected a length, such as "120 mm".'),
    ([1.0], "length", 'found a list; expected a length, such as "120 mm".'),
    (math.nan, "force", 'found nan; expected a force, such as "12 kN", and finite.'),
    (-math.inf, "force", 'found -inf; expected a force, such as "12 kN", and finite.'),
    ("1e999 kN", "force", 'found "1e999 kN"; expected a force, such as "12 kN", and finite.'),
    ("nan kN", "force", 'found "nan kN"; expected a force, such as "12 kN".'),
    ("kN", "force", 'found "kN"; expected a force, such as "12 kN".'),
    ("", "force", 'found ""; expected a force, such as "12 kN".'),
]


@pytest.mark.parametrize(("value", "kind", "message"), REFUSED)
def test_refusals_say_why(value: object, kind: Kind, message: str) -> None:
    """What is no quantity of the kind is refused with the whole message given here."""
    with pytest.raises(QuantityError) as refusal:
        parse(value, kind, METRIC)
    assert str(refusal.value) == message


def test_a_bare_number_is_refused_where_a_unit_is_asked_for() -> None:
    """``bare=False`` wants the unit written."""
    with pytest.raises(QuantityError) as refusal:
        parse(355, "stress", METRIC, bare=False)
    assert str(refusal.value) == (
        'found 355 without a unit; expected a stress, such as "150 N/mm2". Write the unit with '
        'it, for instance "355 N/mm2".'
    )


@pytest.mark.parametrize(
    ("units", "kind", "name"),
    [
        (METRIC, "line load", "kN/m"),
        (Units(force="N", length="mm"), "stress", "N/mm2"),
        (Units(force="kip", length="ft"), "line load", "kip/ft"),
        (US, "line load", "kip/in"),
        (US, "stress", "kip/in2"),
        (Units(force="kip", length="m"), "pressure", "kip/m2"),
        (US, "mass per length", "lb/ft"),
        (METRIC, "mass per length", "kg/m"),
    ],
)
def test_bare_numbers_take_the_units_of_the_brief(units: Units, kind: Kind, name: str) -> None:
    """Derived units follow force and length of the brief."""
    assert bare_unit(kind, units) == name
    assert parse(2, kind, units) == float(2 * factor(name, kind))


FINITE = st.floats(min_value=-1e12, max_value=1e12).filter(lambda x: x == 0.0 or abs(x) > 1e-12)
KINDS: list[Kind] = ["length", "force", "line load", "stress", "area", "density", "mass"]
SYSTEMS = st.builds(
    Units,
    force=st.sampled_from(["N", "kN", "MN", "lbf", "kip"]),
    length=st.sampled_from(["mm", "cm", "m", "in", "ft"]),
)


@given(x=FINITE, kind=st.sampled_from(KINDS), units=SYSTEMS)
def test_text_and_bare_number_agree(x: float, kind: Kind, units: Units) -> None:
    """A number with the brief's own unit written out is the bare number, to the last bit."""
    assert parse(f"{x!r} {bare_unit(kind, units)}", kind, units) == parse(x, kind, units)


@given(x=FINITE, kind=st.sampled_from(KINDS), here=SYSTEMS, there=SYSTEMS)
def test_units_convert_there_and_back(x: float, kind: Kind, here: Units, there: Units) -> None:
    """A quantity re-written in another brief's units is the same quantity."""
    si = parse(x, kind, here)
    other = float(Fraction(repr(si)) / factor(bare_unit(kind, there), kind))
    assert parse(other, kind, there) == pytest.approx(si, rel=1e-15, abs=1e-300)


@given(st.text(max_size=30), st.sampled_from(KINDS))
def test_no_text_breaks_the_reader(text: str, kind: Kind) -> None:
    """Any text is a finite quantity or a refusal."""
    try:
        assert math.isfinite(parse(text, kind, METRIC))
    except QuantityError as refusal:
        assert refusal.expected  # noqa: PT017 - either outcome is right


@given(
    st.from_regex(r"[+-]?[0-9]{1,4}([.,][0-9]{1,3})?([eE][+-]?[0-9]{1,5})? ?[A-Za-z/*^2-4]{0,8}")
)
def test_no_near_quantity_breaks_the_reader(text: str) -> None:
    """Text that looks almost like a quantity is one or is refused, in no time."""
    try:
        assert math.isfinite(parse(text, "stress", US))
    except QuantityError as refusal:
        assert refusal.expected  # noqa: PT017 - either outcome is right


def test_us_units_follow_the_force_unit() -> None:
    """Documents print US units when the force unit is kip or lbf, metric ones otherwise."""
    assert [is_us(Units(force=f, length="m")) for f in ("N", "kN", "MN", "lbf", "kip")] == [
        *[False] * 3,
        *[True] * 2,
    ]


@pytest.mark.parametrize(
    ("units", "texts"),
    [
        (
            METRIC,
            ["12.3 kN", "2.400 m", "58.0 mm", "12.50 cm²", "355.0 N/mm²", "250.0 kg", "9.20 kg/m"],
        ),
        (
            Units(force="kip", length="ft"),
            ["2.77 kip", "7.874 ft", "2.283 in", "1.94 in²", "51.49 ksi", "551.2 lb", "6.18 lb/ft"],
        ),
    ],
)
def test_numbers_are_printed_in_the_units_of_the_office(units: Units, texts: list[str]) -> None:
    """One value of each kind, printed; US values by the definitions of inch and pound."""
    d = Display.of(units)
    assert [
        d.force.text(12300.0),
        d.length.text(2.4),
        d.small_length.text(0.058),
        d.area.text(12.5e-4),
        d.stress.text(355e6),
        d.mass.text(250.0),
        d.mass_per_length.text(9.2),
    ] == texts


def test_no_negative_zero_is_printed() -> None:
    """A tiny negative force prints as zero without a sign."""
    assert Display.of(METRIC).force.text(-1e-6) == "0.0 kN"


@given(units=SYSTEMS, si=st.floats(min_value=1e-3, max_value=1e9))
def test_printed_units_read_back(units: Units, si: float) -> None:
    """A printed value with its label is read back as what was printed."""
    d = Display.of(units)
    pairs: list[tuple[Kind, str]] = [
        ("force", "force"),
        ("length", "length"),
        ("length", "small_length"),
        ("line load", "line_load"),
        ("pressure", "pressure"),
        ("stress", "stress"),
        ("area", "area"),
        ("second moment", "second_moment"),
        ("section modulus", "section_modulus"),
        ("mass", "mass"),
        ("mass per length", "mass_per_length"),
        ("density", "density"),
        ("area", "surface"),
        ("surface per length", "surface_per_length"),
        ("temperature difference", "temperature_difference"),
    ]
    for kind, attribute in pairs:
        unit = getattr(d, attribute)
        assert parse(f"{unit.value(si)!r} {unit.label}", kind, units) == pytest.approx(
            si, rel=1e-14
        )
