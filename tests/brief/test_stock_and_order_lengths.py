"""Stock bars and what joints take off are read as given, asked for where missing, never guessed."""

from __future__ import annotations

from pathlib import Path

import pytest

from sizing.brief.model import Stock, StockBars
from sizing.brief.toml_reader import read_brief
from sizing.errors import InputError

BRIEF = """
units = { force = "kN", length = "m" }
[nodes]
A0 = [0, 0]
A1 = [3, 0]
A2 = [6, 0]
B1 = [3, 2]
[supports]
A0 = { held = ["x", "y"] }
A2 = { held = ["y"] }
[groups.chord]
members = ["A0-A1", "A1-A2"]
GROUP
[groups.web]
members = ["A0-B1", "B1-A2", "A1-B1"]
[cases.snow]
kind = "snow"
nodal = { B1 = [0, -10] }
[[combinations]]
name = "U1"
state = "strength"
factors = { snow = 1.5 }
[options.steel]
standard = "elastic"
catalogue = "square-hollow-sections"
"""


def brief_with(tmp_path: Path, *, group: str = "", stock: str = ""):
    path = tmp_path / "brief.toml"
    path.write_text(BRIEF.replace("GROUP", group) + stock, encoding="utf-8")
    return read_brief(path)


def mistakes(tmp_path: Path, **parts: str) -> list[str]:
    with pytest.raises(InputError) as refusal:
        brief_with(tmp_path, **parts)
    return [text.partition("brief.toml: ")[2] for text in str(refusal.value).split("\n")]


def test_nothing_given_nothing_assumed(tmp_path: Path) -> None:
    """Without the keys there is no stock, no deduction, no run, no splice."""
    brief = brief_with(tmp_path)
    chord = brief.groups[0]
    assert brief.stock is None
    assert (chord.end_deduction, chord.order_step) == (None, None)
    assert (chord.continuous, chord.splices) == (False, False)


def test_everything_given(tmp_path: Path) -> None:
    """Lengths with their units, in SI; a section's own stock beside the general one."""
    brief = brief_with(
        tmp_path,
        group='end_deduction = { start = "90 mm", end = 0.05 }\norder_length = "5 mm"\n'
        "continuous = true\nsplices = true",
        stock="""
[stock]
lengths = ["6 m", "20 ft"]
kerf = "3 mm"
trim = "1 cm"
minimise = "bars"
trusses = 4
longest_piece = 11.5
[stock.per_section."SHS 80*"]
lengths = [7.5]
prices = [210.5]
numbers = [3]
""",
    )
    chord = brief.groups[0]
    assert chord.end_deduction == pytest.approx((0.09, 0.05))
    assert chord.order_step == pytest.approx(0.005)
    assert chord.continuous
    assert chord.splices
    assert brief.stock == Stock(
        bars=StockBars(lengths=(6.0, pytest.approx(6.096))),
        per_section=(("SHS 80*", StockBars(lengths=(7.5,), prices=(210.5,), numbers=(3,))),),
        kerf=pytest.approx(0.003),
        trim=pytest.approx(0.01),
        minimise="bars",
        trusses=4,
        longest_piece=11.5,
    )


def test_one_deduction_for_both_ends(tmp_path: Path) -> None:
    """A single length is taken off at each end."""
    brief = brief_with(tmp_path, group='end_deduction = "35 mm"')
    assert brief.groups[0].end_deduction == pytest.approx((0.035, 0.035))


@pytest.mark.parametrize(
    ("group", "told"),
    [
        (
            'order_length = "5 mm"',
            "groups.chord.order_length: found order_length without end_deduction; expected "
            "end_deduction in the same group. Write end_deduction = 0 where nothing is taken off.",
        ),
        (
            'end_deduction = "1.5 m"',
            "groups.chord.end_deduction: found 3 m at both ends together; expected less than the "
            "shortest member of the group, 3 m.",
        ),
        (
            'end_deduction = { start = "35 mm" }',
            'groups.chord.end_deduction.end: found nothing; expected a length, such as "35 mm".',
        ),
        (
            'end_deduction = 0\norder_length = "0 mm"',
            "groups.chord.order_length: found 0 m; expected a step that order lengths are rounded "
            'up to, such as "5 mm".',
        ),
        (
            'continuous = "yes"',
            'groups.chord.continuous: found "yes"; expected true or false.',
        ),
    ],
)
def test_mistakes_of_a_group(tmp_path: Path, group: str, told: str) -> None:
    """Each mistake names its key and what belongs there."""
    assert mistakes(tmp_path, group=group) == [told]


@pytest.mark.parametrize(
    ("stock", "told"),
    [
        (
            '[stock]\nlengths = ["6 m"]',
            'stock.kerf: found nothing; expected the width of a saw cut, such as "3 mm".',
        ),
        (
            '[stock]\nlengths = ["6 m", "6 m"]\nkerf = 0',
            'stock.lengths[2]: found "6 m"; expected each length once, above 0.',
        ),
        (
            "[stock]\nlengths = [6000]\nkerf = 0",
            "stock.lengths[1]: found 6000 m; expected a length from 0 to 100 m.",
        ),
        (
            "[stock]\nlengths = [6]\nkerf = 3",
            "stock.kerf: found 3 m; expected a length from 0 to 0.02 m.",
        ),
        (
            '[stock]\nlengths = [6]\nkerf = 0\nminimise = "cost"',
            "stock.prices: found nothing while cost is minimised; expected a price per bar for "
            'each of lengths. Give prices, or write minimise = "length".',
        ),
        (
            "[stock]\nlengths = [6, 12]\nkerf = 0\nnumbers = [3]",
            "stock.numbers: found a list of 1 value; expected one value for each of lengths.",
        ),
        (
            "[stock]\nkerf = 0\ntrusses = 1.5",
            "stock.trusses: found 1.5; expected a whole number from 1 to 1000.",
        ),
        (
            "[stock]\nkerf = 0\n[stock.per_section.X]\nnumbers = [1]",
            "stock.per_section.X.lengths: found nothing; expected stock lengths, such as "
            '["6 m", "12 m"].',
        ),
        (
            "[stock]\nkerf = 0\nlength = [6]",
            'stock.length: found the unknown key "length"; expected one of lengths, prices, '
            "numbers, kerf, trim, minimise, trusses, longest_piece, per_section. "
            'Did you mean "lengths"?',
        ),
    ],
)
def test_mistakes_of_the_stock(tmp_path: Path, stock: str, told: str) -> None:
    """Each mistake names its key and what belongs there."""
    assert mistakes(tmp_path, stock=stock) == [told]
