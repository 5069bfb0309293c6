"""The cutting list follows from the brief: order lengths, runs spliced at nodes, whole bars.

Lengths are worked by hand beside each check; the invented truss is a girder of six 3 m panels.
"""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import openpyxl
import pytest

from sizing.brief.model import Brief
from sizing.brief.toml_reader import read_brief
from sizing.cutting_pieces import pieces_of, rounded_up
from sizing.cutting_runs import runs_of, splices_of
from sizing.documents.issue import write_documents
from sizing.documents.result_json import result_document
from sizing.job import check_job, pick_job

PANELS = 6
HEADS = (
    "designation,family,area [cm2],mass [kg/m],I major [cm4],I minor [cm4],"
    "stock lengths [m],available,preferred,lead time"
)
CATALOGUE = f"""{HEADS}
S10,other,10,7.85,250,250,,yes,yes,
S14,other,14,10.99,500,500,6;12,no,,
S20,other,20,15.7,900,900,7,yes,no,6 weeks
S40,other,40,31.4,4000,4000,12,yes,,
"""


def girder_text(
    *, chord: str = "", stock: str = "", sections: str = '"S20"', load: float = 5.0
) -> str:
    nodes = [f"A{i} = [{3 * i}, 0]" for i in range(PANELS + 1)]
    nodes += [f"B{i} = [{3 * i}, 2]" for i in range(PANELS + 1)]
    bottom = [f'"A{i}-A{i + 1}"' for i in range(PANELS)]
    top = [f'"B{i}-B{i + 1}"' for i in range(PANELS)]
    webs = [f'"A{i}-B{i}"' for i in range(PANELS + 1)]
    webs += [f'"A{i}-B{i + 1}"' for i in range(PANELS)]
    loads = ", ".join(f"B{i} = [0, {-load}]" for i in range(PANELS + 1))
    return f"""
title = "Ferry shed, girder G2 (invented)"
units = {{ force = "kN", length = "m" }}
[nodes]
{chr(10).join(nodes)}
[supports]
A0 = {{ held = ["x", "y"] }}
A{PANELS} = {{ held = ["y"] }}
[groups.bottom]
members = [{", ".join(bottom)}]
sections = [{sections}]
{chord}
[groups.top]
members = [{", ".join(top)}]
[groups.webs]
members = [{", ".join(webs)}]
end_deduction = {{ start = "40 mm", end = "60 mm" }}
order_length = "10 mm"
[cases.snow]
kind = "snow"
nodal = {{ {loads} }}
[[combinations]]
name = "U1"
state = "strength"
factors = {{ snow = 1.5 }}
[options.steel]
standard = "elastic"
catalogue = "own.csv"
E = "210 GPa"
density = "7850 kg/m3"
allowable_tension = "200 MPa"
allowable_compression = "200 MPa"
buckling_safety_factor = 2.0
{stock}
"""


@pytest.fixture
def brief_of(tmp_path: Path):
    """Write brief and catalogue, and read the brief."""

    def make(**parts) -> Brief:
        (tmp_path / "own.csv").write_text(CATALOGUE, encoding="utf-8")
        path = tmp_path / "brief.toml"
        path.write_text(girder_text(**parts), encoding="utf-8")
        return read_brief(path)

    return make


STOCK = '[stock]\nlengths = ["6 m", "12 m"]\nkerf = "3 mm"\n'
CONTINUOUS = 'continuous = true\nend_deduction = { start = "100 mm", end = "50 mm" }'


def test_no_stock_no_cutting_list(brief_of) -> None:
    """Without a stock table nothing is cut, yet order lengths stand where deductions do."""
    option = pick_job(brief_of()).options[0]
    assert option.cutting == ()
    assert {m.order_length for m in option.members if m.group != "webs"} == {None}
    # diagonals: sqrt(9 + 4) = 3.60555 m, less 0.10, up to whole centimetres; posts 2 m less 0.10
    webs = {round(m.order_length, 9) for m in option.members if m.group == "webs"}
    assert webs == {3.51, 1.90}


def test_rounding_up_keeps_whole_multiples() -> None:
    """A multiple stays as it is though sums of coordinates are a hair above."""
    assert rounded_up(0.1 + 0.2, 0.1) == pytest.approx(0.3)
    assert rounded_up(2.0001, 0.005) == pytest.approx(2.005)
    assert rounded_up(2.0001, None) == 2.0001


def test_chord_is_one_run(brief_of) -> None:
    """Six members in one line are one run from end to end."""
    brief = brief_of(chord=CONTINUOUS)
    (run,) = runs_of(brief, 0)
    assert [brief.members[i].name for i in run.members] == [f"A{i}-A{i + 1}" for i in range(6)]
    assert [brief.nodes[n].name for n in run.nodes] == [f"A{i}" for i in range(7)]


def test_run_listed_from_the_middle_and_turned(brief_of) -> None:
    """The order and direction in which members are listed do not break a run."""
    text = girder_text().replace(
        ", ".join(f'"A{i}-A{i + 1}"' for i in range(6)),
        '"A4-A3", "A0-A1", "A2-A1", "A3-A2", "A5-A6", "A4-A5"',
    )
    brief = brief_of()
    brief.source.path.write_text(text, encoding="utf-8")
    brief = read_brief(brief.source.path)
    (run,) = runs_of(brief, 0)
    names = [brief.nodes[n].name for n in run.nodes]
    assert names in ([f"A{i}" for i in range(7)], [f"A{6 - i}" for i in range(7)])


def test_webs_do_not_run(brief_of) -> None:
    """Members that meet at an angle are runs of their own."""
    brief = brief_of()
    assert len(runs_of(brief, 2)) == len(brief.groups[2].members)


@pytest.mark.parametrize(
    ("lengths", "stock", "longest", "places"),
    [
        ([3.0] * 4, [12.0], 12.0, []),  # fits in one
        ([3.0] * 4, [6.0], 6.0, [2]),
        ([3.0] * 6, [12.0, 6.0], 12.0, [4]),  # 12 + 6: no loss, where 9 + 9 loses 6
        ([3.0] * 6, [12.0], 12.0, [3]),  # equal loss either way: as equal as can be
        ([3.0, 7.0, 3.0], [6.0], 6.0, [1, 2]),  # the middle one is too long and stands alone
        ([2.4] * 5, [7.2, 5.0], 7.0, [2, 4]),  # 7 m to carry: two at a time, three pieces
    ],
)
def test_places_of_splices(lengths, stock, longest, places) -> None:
    """As few pieces as possible, then least loss, then equal ones (worked by hand)."""
    assert splices_of(lengths, stock, longest) == places


def test_pieces_of_a_chord(brief_of) -> None:
    """18 m less 0.10 and 0.05 m, from 6 m and 12 m: 11.90 and 5.95, spliced at A4."""
    brief = brief_of(chord=CONTINUOUS, stock=STOCK)
    pieces = pieces_of(brief, 0, [6.0, 12.0], None)
    assert [p.length for p in pieces.pieces] == pytest.approx([11.90, 5.95])
    assert [text for _, text in pieces.splices] == ["at A4"]


def test_splices_between_nodes_only_where_allowed(brief_of) -> None:
    """A member of 3 m from 2 m bars: two equal pieces where allowed, else one too long."""
    asked = brief_of(chord="splices = true", stock=STOCK)
    pieces = pieces_of(asked, 0, [2.0], None)
    assert [p.length for p in pieces.pieces] == pytest.approx([1.5] * 12)
    plain = pieces_of(brief_of(stock=STOCK), 0, [2.0], None)
    assert [p.length for p in plain.pieces] == pytest.approx([3.0] * 6)


def test_whole_list(brief_of) -> None:
    """Every piece is cut as often as needed, of the stock of its own section, for all trusses."""
    stock = STOCK + "trusses = 3\n"
    option = pick_job(brief_of(chord=CONTINUOUS, stock=stock)).options[0]
    by_name = {r.designation: r for r in option.cutting}
    assert set(by_name) == {s.designation for s in option.sections}
    for result in option.cutting:
        assert result.status == "proven"
        assert result.objective == result.bound
        cut: dict[float, int] = {}
        for pattern in result.patterns:
            used = sum(n * (length + 0.003) for length, n in pattern.pieces)
            assert used <= pattern.stock_length + 0.003 + 1e-9
            for length, n in pattern.pieces:
                cut[length] = cut.get(length, 0) + n * pattern.bars
        assert cut == {piece.length: piece.number for piece in result.pieces}
        assert result.waste == pytest.approx(result.stock_length - result.piece_length)
    # the catalogue's own stock length of S20 is 7 m: 18 m in three pieces, two splices a chord
    chord = by_name["S20"]
    assert {p.stock_length for p in chord.patterns} == {7.0}
    assert chord.splices[0][1].count("A") == 2
    assert chord.lead_time == "6 weeks"


def test_own_table_of_a_section_comes_first(brief_of) -> None:
    """Brief before catalogue before the general lengths."""
    stock = STOCK + '[stock.per_section."S2*"]\nlengths = ["9 m"]\n'
    option = pick_job(brief_of(stock=stock)).options[0]
    chord = next(r for r in option.cutting if r.designation == "S20")
    assert {p.stock_length for p in chord.patterns} == {9.0}


def test_not_available_is_never_picked(brief_of) -> None:
    """The lightest section that would do is passed over where it is not on sale, and said so."""
    any_section = brief_of(sections='"S*"', load=25.0)
    option = pick_job(any_section).options[0]
    assert all(g.designation != "S14" for g in option.groups)
    told = "1 section was left out of the choice, marked as not available in the catalogue: S14."
    assert told in option.cautions
    path = any_section.source.path.parent / "own.csv"
    path.write_text(CATALOGUE.replace("6;12,no,", "6;12,yes,"), encoding="utf-8")
    again = pick_job(any_section).options[0]
    assert any(g.designation == "S14" for g in again.groups)
    assert not any("not available" in caution for caution in again.cautions)


def test_given_section_that_is_not_available(brief_of) -> None:
    """A check of given sections says that one of them is not on sale."""
    sections = {"steel": {"bottom": "S14", "top": "S40", "webs": "S40"}}
    option = check_job(brief_of(sections='"S*"'), sections).options[0]
    assert (
        "Group bottom: S14 was given, though the catalogue marks it as not available."
        in option.cautions
    )


def test_cautions_of_supply(brief_of) -> None:
    """Preference, lead time, missing deductions, splices and long pieces are told."""
    stock = STOCK + 'longest_piece = "2.9 m"\n'
    option = pick_job(brief_of(stock=stock)).options[0]
    assert "Group bottom: S20 by the catalogue: no preferred size, lead time 6 weeks." in (
        option.cautions
    )
    assert (
        "No end deduction is given for bottom, top: their pieces are cut to system length, from "
        "node to node." in option.cautions
    )
    assert any(
        c.startswith("S20: the piece of 3.000 m") and "can be carried" in c for c in option.cautions
    )


def test_too_long_and_too_few(brief_of) -> None:
    """A piece that fits no bar is named and left out; too few bars give no plan."""
    short = STOCK + '[stock.per_section."S20"]\nlengths = ["2 m"]\n'
    option = pick_job(brief_of(stock=short)).options[0]
    chord = next(r for r in option.cutting if r.designation == "S20")
    assert chord.patterns == ()
    assert any("longer than every bar" in p.note for p in chord.pieces)
    assert any("is in no cutting pattern" in c for c in option.cautions)
    few = STOCK + '[stock.per_section."S20"]\nlengths = ["6 m"]\nnumbers = [1]\n'
    option = pick_job(brief_of(stock=few)).options[0]
    chord = next(r for r in option.cutting if r.designation == "S20")
    assert (chord.status, chord.bars) == ("not enough stock", 0)
    assert "S20: the bars at hand are not enough for its pieces." in option.cautions


def test_no_lengths_at_all(brief_of) -> None:
    """A stock table without lengths, and a catalogue without: said, not guessed."""
    option = pick_job(brief_of(stock='[stock]\nkerf = "3 mm"\n', sections='"S10"')).options[0]
    result = next(r for r in option.cutting if r.designation == "S10")
    assert (result.status, result.patterns) == ("no stock lengths", ())


def test_documents_hold_the_list(brief_of, tmp_path: Path) -> None:
    """Workbook, report and result file show bars, patterns, pieces and order lengths."""
    job = pick_job(brief_of(chord=CONTINUOUS, stock=STOCK))
    write_documents(job, tmp_path / "out")
    book = openpyxl.load_workbook(tmp_path / "out" / "schedule.xlsx")
    assert {"Bars to order", "Cutting", "Pieces"} <= set(book.sheetnames)
    heads = [c.value for row in book["Members"].iter_rows(max_row=8) for c in row]
    assert "Order length\nm" in heads
    bars = [[c.value for c in row] for row in book["Bars to order"].iter_rows()]
    total = next(row for row in bars if row[0] == "Total")
    assert total[2] == sum(r.bars for r in job.options[0].cutting)
    page = (tmp_path / "out" / "report.html").read_text(encoding="utf-8")
    assert "Cutting list: how each bar is cut" in page
    entry = result_document(job)["options"]["steel"]["cutting"][0]
    assert entry["bars"] == job.options[0].cutting[0].bars


def test_documents_without_a_list(brief_of, tmp_path: Path) -> None:
    """Where nothing was asked, no sheet and no empty table stands."""
    job = pick_job(brief_of())
    job = replace(job, options=tuple(replace(o, cutting=()) for o in job.options))
    write_documents(job, tmp_path / "out")
    book = openpyxl.load_workbook(tmp_path / "out" / "schedule.xlsx")
    assert not {"Bars to order", "Cutting", "Pieces"} & set(book.sheetnames)
