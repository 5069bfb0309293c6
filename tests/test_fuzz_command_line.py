"""Whatever stands in a brief, the commands end with a documented code, a message, whole files."""

from __future__ import annotations

import sys
import time
import tomllib
from pathlib import Path
from typing import Any

import pytest
from brief_mutations import LONGEST, edits, mutated
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

from sizing.brief.toml_writer import toml_text
from sizing.brief.workbook_sheets import CannotHoldError
from sizing.brief.workbook_writer import workbook_bytes
from sizing.cli import EXIT_CODES, INTERRUPTED, NOT_ADEQUATE, main

SOUND = tomllib.loads(
    (Path(__file__).parent / "brief" / "broken" / "sound.toml").read_text(encoding="utf-8")
)
CODES = {0, NOT_ADEQUATE, *EXIT_CODES.values()}
SECTIONS = '[sections.steel]\nbottom-chord = "SHS 80x80x5"\nwebs = "SHS 60x60x4"\n'
QUIET: dict[str, Any] = {
    "deadline": None,
    "suppress_health_check": list(HealthCheck),
    "phases": [Phase.explicit, Phase.reuse, Phase.generate],
}
COMMANDS = {
    "pick": ["--time-limit", "2", "--out", "documents"],
    "compare": ["--time-limit", "2", "--out", "documents"],
    "check": ["--sections", "sections.toml", "--out", "documents"],
    "convert": ["documents.xlsx"],
}


def run(arguments: list[str], monkeypatch: pytest.MonkeyPatch) -> int:
    monkeypatch.setattr(sys, "argv", ["sizing", *arguments])
    try:
        main()
    except SystemExit as end:
        return int(end.code or 0)
    return 0


def written_as(tables: dict[str, Any], folder: Path, suffix: str) -> Path:
    path = folder / f"brief{suffix}"
    if suffix == ".xlsx":
        path.write_bytes(workbook_bytes(tables))
    else:
        path.write_text(toml_text(tables), encoding="utf-8")
    return path


def must_end_well(
    folder: Path,
    tables: dict[str, Any],
    command: str,
    suffix: str,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> int:
    try:
        path = written_as(tables, folder, suffix)
    except (TypeError, ValueError, CannotHoldError):
        return -1  # what no file of this kind can hold
    (folder / "sections.toml").write_text(SECTIONS, encoding="utf-8")
    before = set(folder.rglob("*"))
    start = time.perf_counter()
    code = run([command, str(path), *COMMANDS[command]], monkeypatch)
    seconds = time.perf_counter() - start
    said = capsys.readouterr()
    made = set(folder.rglob("*")) - before
    assert code in CODES
    assert seconds < LONGEST + 2
    assert "Traceback" not in said.err + said.out
    if code not in (0, NOT_ADEQUATE):
        assert "Nothing was written." in said.err
        assert not made
        assert len(said.err.splitlines()) >= 2
    for made_path in sorted(made, reverse=True):
        made_path.rmdir() if made_path.is_dir() else made_path.unlink()
    return code


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("job")


@pytest.fixture(scope="module")
def module_patch() -> Any:
    with pytest.MonkeyPatch.context() as patch:
        yield patch


cases = (st.sampled_from(sorted(COMMANDS)), st.sampled_from([".toml", ".toml", ".xlsx"]), edits)


def test_the_brief_that_is_broken_below_ends_well(
    folder: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """The starting point is picked, compared, checked and converted."""
    monkeypatch.chdir(folder)
    for command in COMMANDS:
        assert must_end_well(folder, SOUND, command, ".toml", monkeypatch, capsys) == 0


@settings(max_examples=60, **QUIET)
@given(*cases)
def test_broken_briefs_end_well(
    folder: Path,
    module_patch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
    command: str,
    suffix: str,
    changes: Any,
) -> None:
    """Exit code as documented, a message on standard error, nothing written on failure."""
    module_patch.chdir(folder)
    must_end_well(folder, mutated(SOUND, changes), command, suffix, module_patch, capsys)


@pytest.mark.bench
@settings(max_examples=3_000, **QUIET)
@given(*cases)
def test_many_broken_briefs_end_well(
    folder: Path,
    module_patch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
    command: str,
    suffix: str,
    changes: Any,
) -> None:
    """Three thousand times."""
    module_patch.chdir(folder)
    must_end_well(folder, mutated(SOUND, changes), command, suffix, module_patch, capsys)


def test_interruption_has_a_code_of_its_own() -> None:
    """No error shares the code of an interrupted job."""
    assert INTERRUPTED not in CODES
