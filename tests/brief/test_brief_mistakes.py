"""Every mistake in a brief is named with place, what was found, what belongs there and the fix."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from sizing.brief.model import SourceFile
from sizing.brief.toml_reader import brief_from_tables, read_brief
from sizing.errors import InputError

FOLDER = Path(__file__).parent / "broken"
SOUND = (FOLDER / "sound.toml").read_text(encoding="utf-8")
MISTAKES = tomllib.loads((FOLDER / "mistakes.toml").read_text(encoding="utf-8"))["mistake"]


def messages(path: Path) -> list[str]:
    """The messages of a brief without the file's name."""
    with pytest.raises(InputError) as refusal:
        read_brief(path)
    texts = str(refusal.value).split("\n")
    assert all(text.startswith(f"{path}: ") for text in texts)
    return [text.removeprefix(f"{path}: ") for text in texts]


def test_the_brief_that_is_broken_below_is_sound() -> None:
    """The starting point has neither mistakes nor cautions."""
    assert read_brief(FOLDER / "sound.toml").cautions == ()


@pytest.mark.parametrize("mistake", MISTAKES, ids=lambda m: m["name"])
def test_one_mistake_gives_its_own_message_only(mistake: dict[str, Any], tmp_path: Path) -> None:
    """A brief with one mistake is refused with exactly the messages given, and no others."""
    assert SOUND.count(mistake["old"]) >= 1
    path = tmp_path / "brief.toml"
    path.write_text(SOUND.replace(mistake["old"], mistake["new"]), encoding="utf-8")
    assert messages(path) == mistake["messages"]


def test_many_mistakes_are_told_in_one_round() -> None:
    """Mistakes in every table come out together, in the order of the file."""
    told = (FOLDER / "many_mistakes.txt").read_text(encoding="utf-8").splitlines()
    assert messages(FOLDER / "many_mistakes.toml") == told


def test_an_empty_file_names_every_missing_table(tmp_path: Path) -> None:
    """An empty brief is told all that it needs."""
    path = tmp_path / "brief.toml"
    path.write_bytes(b"")
    assert messages(path) == [
        'units: found nothing; expected { force = "kN", length = "m" }.',
        "nodes: found nothing; expected a table of nodes, such as A0 = [0.0, 0.0].",
        "supports: found nothing; expected a table of supports, such as A0 = "
        '{ held = ["x", "y"] }.',
        "groups: found nothing; expected tables [groups.NAME], one for each group.",
        "cases: found nothing; expected tables [cases.NAME], one for each load case.",
        "options: found nothing; expected tables [options.NAME], one for each option.",
        'combinations: found nothing; expected a table [[combinations]] with state = "strength", '
        "or a combination_rule.",
    ]


def test_a_missing_file_is_told(tmp_path: Path) -> None:
    """A path that leads nowhere is an input mistake."""
    assert messages(tmp_path / "none.toml") == [
        "the file: found no such file; expected an existing file. Check the path and the folder "
        "you are in."
    ]


def test_a_folder_is_no_brief(tmp_path: Path) -> None:
    """A folder given instead of a file is told as such."""
    assert messages(tmp_path) == ["the file: found a folder; expected a file."]


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (
            b'title = "Br\xfccke"\n',
            "line 1: found the byte 0xfc, which is not UTF-8; expected UTF-8 text. Save the file "
            'with the encoding "UTF-8".',
        ),
        (
            b"# " + b"x" * (5 * 1024 * 1024),
            "the file: found more than 5 MiB; expected at most 5 MiB.",
        ),
        (
            b"a = " + b"[" * 5000,
            "the file: found lists nested hundreds of levels deep; expected a brief.",
        ),
        (
            b"\x00\x01\x02",
            "line 1, column 1: found a line that is neither key = value nor [table]: "
            "<0000><0001><0002>; "
            'expected TOML, such as key = 1.5 or key = "text" or [table].',
        ),
    ],
    ids=["Latin-1", "huge", "nested", "binary"],
)
def test_files_that_are_no_briefs(content: bytes, message: str, tmp_path: Path) -> None:
    """Wrong encoding, size or kind of file: one message, no traceback."""
    path = tmp_path / "brief.toml"
    path.write_bytes(content)
    assert messages(path) == [message]


def test_a_number_of_thousands_of_digits_is_refused(tmp_path: Path) -> None:
    """A whole number too long to read is a mistake of the file, not of the tool."""
    path = tmp_path / "brief.toml"
    path.write_text(SOUND.replace("9.6", "9" * 5000), encoding="utf-8")
    assert messages(path) == ["the file: found a number of thousands of digits; expected numbers."]


SCALARS = st.one_of(
    st.none(),
    st.booleans(),
    st.integers(-(10**30), 10**30),
    st.floats(),
    st.text(max_size=8),
    st.sampled_from(["A0", "A1", "A0-A1", "snow", "all", "span/250", "6 m", "12 kN", "x"]),
)
VALUES = st.recursive(
    SCALARS,
    lambda inner: st.one_of(
        st.lists(inner, max_size=3), st.dictionaries(st.text(max_size=6), inner, max_size=3)
    ),
    max_leaves=6,
)


def places(tables: Any, path: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    """All key paths of a document, those of tables and lists too."""
    inner: Any = ()
    if isinstance(tables, dict):
        inner = tables.items()
    elif isinstance(tables, list):
        inner = enumerate(tables)
    return [path] * bool(path) + [p for k, v in inner for p in places(v, (*path, k))]


@settings(max_examples=400, deadline=None)
@given(data=st.data())
def test_no_value_anywhere_breaks_the_reader(data: st.DataObject) -> None:
    """Whatever stands at any place of a brief, it is read or refused with messages."""
    tables = tomllib.loads(SOUND)
    path = data.draw(st.sampled_from(places(tables)))
    holder: Any = tables
    for key in path[:-1]:
        holder = holder[key]
    if data.draw(st.booleans()):
        del holder[path[-1]]
    else:
        holder[path[-1]] = data.draw(VALUES)
    source = SourceFile(name="brief.toml", path=Path("brief.toml"), sha256="")
    try:
        brief = brief_from_tables(tables, source)
    except InputError as refusal:
        for problem in refusal.problems:
            words = (problem.file, problem.place, problem.found, problem.expected)
            assert all(words)
    else:
        assert brief.members
        assert brief.combinations_of("strength")
