"""`sizing start` writes a brief that runs as it is, and `sizing check BRIEF` says what it holds."""

from __future__ import annotations

import math
import tomllib
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from sizing.brief.model import SourceFile
from sizing.brief.shapes import SHAPES, shape_tables
from sizing.brief.toml_reader import brief_from_tables, read_brief
from sizing.brief.toml_writer import toml_text
from sizing.cli import main
from sizing.documents.outline_drawing import outline_svg
from sizing.documents.outline_text import outline_lines
from sizing.errors import InputError, OutputError
from sizing.mechanics.analysis import analyse
from sizing.mechanics.brief_loads import case_loads, geometry_of
from sizing.outline import outline_of, rigid_reactions
from sizing.start import brief_text, parameters_of, shapes_text, start_brief

EXAMPLES = sorted((Path(__file__).parents[1] / "examples").glob("*.toml"))


def run(*words: str, monkeypatch: pytest.MonkeyPatch) -> int:
    """The exit code of the command line."""
    monkeypatch.setattr("sys.argv", ["sizing", *words])
    with pytest.raises(SystemExit) as end:
        main()
    return int(end.value.code or 0)


@pytest.mark.parametrize("name", SHAPES)
def test_the_file_written_is_the_shape(name: str, tmp_path: Path) -> None:
    """TOML and back gives the same tables; every remark stands in the file, none twice in a row."""
    path = tmp_path / "new.toml"
    start_brief(path, name, {})
    text = path.read_text(encoding="utf-8")
    assert tomllib.loads(text) == shape_tables(name)
    assert text.startswith(f"# {name}: {SHAPES[name].words}.\n# All parameters as usual.\n")
    assert max(len(line) for line in text.splitlines() if line.startswith("#")) <= 100
    assert read_brief(path).members
    for line in ("combination_rule", "[nodes]", "[supports]", "[options.steel]", "nvented"):
        assert line in text


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda p: p.stem)
def test_the_examples_survive_being_written_again(path: Path) -> None:
    """Writing the tables of an example and reading them gives the same brief."""
    tables = tomllib.loads(path.read_text(encoding="utf-8"))
    assert tomllib.loads(toml_text(tables, {(): "a remark\nof two lines"})) == tables


WORDS = st.text(max_size=12)
SCALARS = WORDS | st.integers(-(2**60), 2**60) | st.booleans() | st.floats(allow_nan=False)
TABLES = st.dictionaries(
    WORDS,
    st.recursive(
        SCALARS,
        lambda inner: st.lists(inner, max_size=4) | st.dictionaries(WORDS, inner, max_size=4),
        max_leaves=20,
    ),
    max_size=4,
)  # fmt: skip


@settings(max_examples=60, deadline=None)
@given(TABLES, st.text(max_size=150))
def test_any_plain_tables_survive_being_written(tables: dict[str, Any], remark: str) -> None:
    """tomllib reads back exactly what was written, whatever the remarks say."""
    comments = {(): remark} | {(key,): remark for key in tables}
    assert tomllib.loads(toml_text(tables, comments)) == tables


def test_an_existing_file_is_left_as_it_is(tmp_path: Path) -> None:
    """Starting over a file, into a missing folder, or under another ending is refused."""
    path = tmp_path / "old.toml"
    path.write_text("mine", encoding="utf-8")
    with pytest.raises(OutputError, match="exists already and is left as it is"):
        start_brief(path, "fink", {})
    assert path.read_text(encoding="utf-8") == "mine"
    with pytest.raises(OutputError, match="cannot be written: No such file or directory"):
        start_brief(tmp_path / "none" / "new.toml", "fink", {})
    with pytest.raises(OutputError, match=r"a name that ends in \.toml"):
        start_brief(tmp_path / "new.txt", "fink", {})
    assert [p.name for p in tmp_path.iterdir()] == ["old.toml"]


def test_parameters_come_as_name_and_value() -> None:
    """Spaces around the sign are free; everything else is told."""
    assert parameters_of(["span=24 m", "panels = 8"]) == {"span": "24 m", "panels": "8"}
    with pytest.raises(InputError) as refusal:
        parameters_of(["span", "span=", "=3", "depth=1", "depth=2"])
    assert len(refusal.value.problems) == 4
    assert "expected each parameter once, as name=value, such as span=24m" in str(refusal.value)


def test_parameters_reach_the_file_and_its_head() -> None:
    """What was asked for stands in the head and in the geometry; feet become metres exactly."""
    text = brief_text("x.toml", "pratt-girder", {"span": "80 ft", "panels": "10"})
    assert "# Parameters: span = 80 ft, panels = 10; all others as usual.\n" in text
    assert tomllib.loads(text)["nodes"]["A10"] == [24.384, 0.0]


def test_every_shape_and_parameter_is_listed() -> None:
    """The list names each shape with its parameters, or the shape that has the same ones."""
    text = shapes_text()
    for shape in SHAPES.values():
        assert f"{shape.name}: {shape.words}\n" in text
        assert all(f"    {p.name}: " in text for p in shape.parameters)


def test_start_and_check_on_the_command_line(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """start, a second start, check with a drawing, and the list of shapes."""
    monkeypatch.chdir(tmp_path)
    words = ("start", "roof.toml", "span=7.2 m", "--shape", "fink")
    assert run(*words, monkeypatch=monkeypatch) == 0
    assert "written: roof.toml" in capsys.readouterr().out
    assert run(*words, monkeypatch=monkeypatch) == 7
    assert "roof.toml: exists already" in capsys.readouterr().err
    assert run("check", "roof.toml", "--out", "out", monkeypatch=monkeypatch) == 0
    shown = capsys.readouterr().out
    assert "Statically determinate: equilibrium alone gives every member force." in shown
    assert [p.name for p in (tmp_path / "out").iterdir()] == ["truss.svg"]
    assert run("start", "--shapes", monkeypatch=monkeypatch) == 0
    assert "double-layer-grid: " in capsys.readouterr().out
    assert run("start", "other.toml", "--shape", "fin", monkeypatch=monkeypatch) == 2
    assert 'Did you mean "fink"?' in capsys.readouterr().err
    assert run("start", "other.toml", monkeypatch=monkeypatch) == 2
    assert not (tmp_path / "other.toml").exists()


def outline(name: str, parameters: dict[str, Any] | None = None) -> Any:
    tables = shape_tables(name, parameters)
    return outline_of(brief_from_tables(tables, SourceFile(name="b", path=Path("b"), sha256="")))


def test_the_outline_of_a_simple_girder_by_hand() -> None:
    """24 m x 6 m at 0.5, 0.15, 0.8 and 0.4 kN/m2: totals and reactions as worked by hand."""
    found = outline("pratt-girder", {"span": "24 m", "panels": 12, "depth": "2 m"})
    text = "\n".join(outline_lines(found))
    assert (
        "  snow-left (snow): 86.4 kN down in all\n"
        "    area load 1 on B0..B12: 1.00 kN/m² on plan × (0.8 × 12.000 m + 0.4 × 12.000 m) × "
        "6.000 m = 86.4 kN down; at the nodes 86.4 kN down\n"
        # 57.6 kN at 6 m and 28.8 kN at 18 m from A0: (57.6 x 18 + 28.8 x 6)/24 = 50.4
        "    reactions: A0 50.4 kN up, A12 36.0 kN up\n"
    ) in text
    assert "  roofing (permanent): 72.0 kN down in all\n" in text
    assert "Span 24.000 m between supports that hold it up." in text
    assert "    reactions: A0 36.0 kN up, A12 36.0 kN up\n" in text
    assert "Reactions from equilibrium of the whole, without the weight of the members." in text
    assert "Deflection limit sag: span/250 = 96.0 mm along y at 13 nodes in" in text
    assert "  bottom-chord-outer     2.000  A0-A1         6.000  A0-A1\n" in text
    assert "  diagonals-end          2.828  B0-A1         2.828  B0-A1\n" in text


def test_reactions_of_a_canopy_rest_on_its_nodes() -> None:
    """Four directions held, yet determinate: moment over depth at the wall (worked by hand)."""
    found = outline("canopy", {"reach": "6 m", "depth": "1 m", "panels": 4})
    assert found.reactions_from == "equilibrium of the nodes"
    # 0.5 kN/m2 x 6 m width x 6 m reach = 18 kN, lever 3 m, depth 1 m: 54 kN in each chord
    (roofing,) = [one for one in found.cases if one.case.name == "roofing"]
    reactions = {found.brief.nodes[n].name: r for n, r in roofing.reactions.items()}
    assert reactions["A0"][0] == pytest.approx(54e3, rel=1e-12)
    assert reactions["B0"][0] == pytest.approx(-54e3, rel=1e-12)
    assert reactions["A0"][1] + reactions["B0"][1] == pytest.approx(18e3, rel=1e-12)


def test_reactions_that_depend_on_sections_are_not_given() -> None:
    """A continuous girder: the outline says that equilibrium does not settle its reactions."""
    found = outline("pratt-girder", {"span": "12 m, 12 m", "panels": 4})
    assert found.reactions_from == ""
    assert all(one.reactions is None for one in found.cases)
    text = "\n".join(outline_lines(found))
    assert (
        "Statically indeterminate, 1 redundant: the member forces depend on the sections." in text
    )
    assert "the reactions depend on the sections." in text
    assert "    reactions: " not in text


@pytest.mark.parametrize("name", [n for n in SHAPES if n != "canopy" and "tower" not in n])
def test_reactions_of_the_whole_are_those_of_the_analysis(name: str) -> None:
    """Rigid-body equilibrium and the stiffness method agree wherever the first one applies."""
    tables = shape_tables(name)
    brief = brief_from_tables(tables, SourceFile(name="b", path=Path("b"), sha256=""))
    geometry, loads = geometry_of(brief), case_loads(brief)
    found = rigid_reactions(geometry, loads)
    if name == "double-layer-grid":
        assert found is None
        return
    assert found is not None
    stiffness = np.linspace(1.0, 3.0, geometry.members)
    expected = analyse(geometry, stiffness, loads).reaction
    assert found == pytest.approx(expected, abs=1e-9 * np.abs(loads).sum())


@pytest.mark.parametrize("name", ["fink", "square-tower"])
def test_the_drawing_shows_every_node_and_mark(name: str) -> None:
    """Geometry alone is drawn, to scale, with names and the caution that nothing was checked."""
    from xml.etree import ElementTree as Xml

    found = outline(name)
    root = Xml.fromstring(outline_svg(found.brief))
    words = {"".join(element.itertext()) for element in root.iter()}
    assert {node.name for node in found.brief.nodes} <= words
    assert any(member.mark in words for member in found.brief.members)
    assert "Geometry only: no section was picked or checked." in words
    lines = [e for e in root.iter() if e.tag.endswith("line")]
    views = 1 if found.brief.dimensions == 2 else 4
    assert len(lines) == views * len(found.brief.members)
    if views == 1:
        drawn = [
            math.hypot(*(float(e.get(f"{a}2", "")) - float(e.get(f"{a}1", "")) for a in "xy"))
            for e in lines
        ]
        ratio = [d / m.length for d, m in zip(drawn, found.brief.members, strict=True)]
        assert max(ratio) == pytest.approx(min(ratio), rel=1e-2)
