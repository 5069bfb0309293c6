"""Given sections are read from TOML or from an earlier result, and mistakes are named."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from sizing.brief.sections_reader import read_sections
from sizing.brief.toml_reader import read_brief
from sizing.errors import InputError

BRIEF = read_brief(Path(__file__).parent / "broken" / "sound.toml")
CHOSEN = {"steel": {"bottom-chord": "SHS 60x60x4", "webs": "SHS 50x50x3"}}
IN_TOML = """
[sections.steel]
bottom-chord = "SHS 60x60x4"
webs = "SHS 50x50x3"
"""


def write(folder: Path, name: str, text: str) -> Path:
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path


def test_sections_in_toml(tmp_path: Path) -> None:
    """One table for each option, one line for each group."""
    assert read_sections(write(tmp_path, "given.toml", IN_TOML), BRIEF) == CHOSEN


def test_sections_of_an_earlier_result(tmp_path: Path) -> None:
    """The result of an earlier run gives its sections back."""
    result = {"title": "x", "options": {"steel": {"mass": 1.0, "sections": CHOSEN["steel"]}}}
    assert read_sections(write(tmp_path, "result.json", json.dumps(result)), BRIEF) == CHOSEN


@pytest.mark.parametrize(
    ("name", "text", "messages"),
    [
        (
            "given.toml",
            '[sections.stele]\nwebs = "a"\n[section.steel]\nwebs = "b"',
            [
                'section: found the unknown key "section"; expected tables [sections.OPTION]. Did '
                'you mean "sections"?',
                'sections.stele: found the unknown option "stele"; expected one of steel. Did you '
                'mean "steel"?',
            ],
        ),
        (
            "given.toml",
            '[sections.steel]\nbottom-chrod = "a"\nwebs = 60',
            [
                'sections.steel.bottom-chrod: found the unknown group "bottom-chrod"; expected one '
                'of bottom-chord, webs. Did you mean "bottom-chord"?',
                "sections.steel.webs: found 60; expected a designation as text.",
            ],
        ),
        (
            "given.toml",
            '[sections.steel]\nwebs = "SHS 50x50x3"',
            [
                "sections.steel.bottom-chord: found nothing; expected a designation. Every group "
                "needs a section."
            ],
        ),
        (
            "given.toml",
            "",
            ['sections: found no option; expected tables [sections.OPTION] with group = "...".'],
        ),
        (
            "given.toml",
            "[sections.steel]\nwebs = SHS",
            [
                "line 2, column 8: found a value that is not TOML: webs = SHS; expected TOML, such "
                'as key = 1.5 or key = "text" or [table]. Put text in quotation marks.'
            ],
        ),
        ("given.toml", "sections = 5", ["sections: found 5; expected tables [sections.OPTION]."]),
        (
            "result.json",
            "[1, 2",
            ["line 1, column 6: found Expecting ',' delimiter; expected JSON text."],
        ),
        (
            "result.json",
            "[1, 2]",
            ["options: found nothing; expected the options of an earlier result.json."],
        ),
        (
            "result.json",
            '{"options": {"steel": {"mass": 1}}}',
            ["options.steel.sections: found nothing; expected sections by group."],
        ),
        (
            "result.json",
            "[" * 100_000,
            ["the file: found values that cannot be read; expected JSON text."],
        ),
    ],
)
def test_mistakes_in_given_sections(
    name: str, text: str, messages: list[str], tmp_path: Path
) -> None:
    """Unknown options and groups, missing groups and unreadable files are all told."""
    path = write(tmp_path, name, text)
    with pytest.raises(InputError) as refusal:
        read_sections(path, BRIEF)
    assert str(refusal.value).split("\n") == [f"{path}: {message}" for message in messages]
