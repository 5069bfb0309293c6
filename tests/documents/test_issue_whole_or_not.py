"""Documents are written whole or not at all, and what stood before survives a failure."""

from __future__ import annotations

import os
from datetime import date
from pathlib import Path

import pytest
from typer.testing import CliRunner

from sizing.cli import app
from sizing.documents import issue
from sizing.documents.issue import (
    DOCUMENTS,
    issue_date,
    refuse_impossible,
    replace_all,
    write_documents,
)
from sizing.errors import OutputError

ISSUED = date(2026, 3, 1)


def _content(folder: Path) -> dict[str, bytes]:
    return {p.name: p.read_bytes() for p in folder.iterdir() if p.is_file()}


def test_all_documents_stand_in_the_folder(girder_job, tmp_path):
    """The folder is made where missing and holds the documents and nothing else."""
    folder = tmp_path / "issue" / "a"
    paths = write_documents(girder_job, folder, issued=ISSUED)
    assert [p.name for p in paths] == list(DOCUMENTS)
    assert sorted(_content(folder)) == sorted(DOCUMENTS)
    assert all(p.stat().st_size > 1000 for p in paths)


def test_writing_again_replaces_and_leaves_others_alone(girder_job, tower_job, tmp_path):
    """A second issue replaces the documents and no other file."""
    write_documents(girder_job, tmp_path, issued=ISSUED)
    first = _content(tmp_path)
    (tmp_path / "notes.txt").write_text("mine")
    write_documents(tower_job, tmp_path, issued=ISSUED)
    second = _content(tmp_path)
    assert second.pop("notes.txt") == b"mine"
    assert sorted(second) == sorted(DOCUMENTS)
    assert all(second[name] != first[name] for name in DOCUMENTS)


def test_same_result_same_documents(girder_job, tmp_path):
    """Equal input gives equal bytes in every document."""
    write_documents(girder_job, tmp_path / "a", issued=ISSUED)
    write_documents(girder_job, tmp_path / "b", issued=ISSUED)
    assert _content(tmp_path / "a") == _content(tmp_path / "b")


@pytest.mark.parametrize("failing", range(8))
def test_a_failure_at_any_rename_restores_everything(failing, tmp_path, monkeypatch):
    """Whichever of the renames fails, old files stand as before and nothing is left over."""
    (tmp_path / "a.txt").write_bytes(b"old a")
    (tmp_path / "b.txt").write_bytes(b"old b")
    (tmp_path / "c.txt").write_bytes(b"old c")
    contents = {n: f"new {n}".encode() for n in ("a.txt", "b.txt", "c.txt", "d.txt")}
    calls = 0
    rename = Path.replace

    def breaking(self, target):
        nonlocal calls
        calls += 1
        if calls == failing + 1:
            raise OSError(28, "No space left on device")
        return rename(self, target)

    monkeypatch.setattr(Path, "replace", breaking)
    before = _content(tmp_path)
    if failing < 7:  # three old files moved away, four new ones put in place
        with pytest.raises(OutputError, match="No space left on device"):
            replace_all(tmp_path, contents)
        assert _content(tmp_path) == before
    else:
        replace_all(tmp_path, contents)
        assert _content(tmp_path) == contents


def test_a_failure_while_writing_leaves_no_trace(tmp_path, monkeypatch):
    """A full disk while the new files are written: message with file and reason, nothing else."""

    def full(descriptor):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "fsync", full)
    folder = tmp_path / "new" / "folder"
    with pytest.raises(OutputError) as caught:
        replace_all(folder, {"a.txt": b"a"})
    assert str(caught.value) == (
        f"{folder / 'a.txt'}: cannot be written: No space left on device. No document was "
        "changed; free the file (close it in other programs), or name another folder"
    )
    assert list(tmp_path.iterdir()) == []


def test_an_interrupt_leaves_what_stood_before(tmp_path, monkeypatch):
    """Ctrl-C between two renames is undone before it passes on."""
    (tmp_path / "a.txt").write_bytes(b"old")
    exchange = issue._exchange

    def interrupted(place):
        if place.target.name == "b.txt":
            raise KeyboardInterrupt
        exchange(place)

    monkeypatch.setattr(issue, "_exchange", interrupted)
    with pytest.raises(KeyboardInterrupt):
        replace_all(tmp_path, {"a.txt": b"new", "b.txt": b"new"})
    assert _content(tmp_path) == {"a.txt": b"old"}


def test_a_failing_document_changes_nothing(girder_job, tmp_path, monkeypatch):
    """All documents are rendered before the first is written."""

    def broken(job):
        raise RuntimeError("render")

    monkeypatch.setattr(issue, "json_bytes", broken)
    with pytest.raises(RuntimeError, match="render"):
        write_documents(girder_job, tmp_path / "new", issued=ISSUED)
    assert not (tmp_path / "new").exists()


def test_a_file_in_place_of_the_folder_is_refused(girder_job, tmp_path):
    """The folder's name belongs to a file: the message says so and the file stays."""
    file = tmp_path / "out"
    file.write_text("mine")
    with pytest.raises(OutputError, match="it is a file, not a folder"):
        write_documents(girder_job, file, issued=ISSUED)
    with pytest.raises(OutputError, match="cannot be used as folder for documents"):
        write_documents(girder_job, file / "below", issued=ISSUED)
    assert file.read_text() == "mine"


@pytest.mark.parametrize("name", ["x" * 300, "a\0b", "/proc/none/here"])
def test_impossible_folders_are_refused_in_words(name, tmp_path):
    """Names that no file system takes and places where nothing can be made: a plain message."""
    with pytest.raises(OutputError, match="cannot be used as folder for documents"):
        replace_all(tmp_path / "new" / name, {"a.txt": b"a"})
    assert list(tmp_path.iterdir()) == []


def test_a_folder_in_place_of_a_document_is_refused(tmp_path):
    """A folder named like a document is neither removed nor written over."""
    (tmp_path / "b.txt").mkdir()
    with pytest.raises(OutputError, match="a folder stands where the file belongs"):
        replace_all(tmp_path, {"a.txt": b"a", "b.txt": b"b"})
    assert [p.name for p in tmp_path.iterdir()] == ["b.txt"]


def test_the_date_comes_from_source_date_epoch(monkeypatch):
    """SOURCE_DATE_EPOCH dates the documents; something else than seconds is refused in words."""
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1767225600")  # 2026-01-01T00:00:00Z
    assert issue_date() == date(2026, 1, 1)
    for wrong in ("yesterday", "9" * 30):
        monkeypatch.setenv("SOURCE_DATE_EPOCH", wrong)
        with pytest.raises(OutputError, match="SOURCE_DATE_EPOCH"):
            issue_date()
    monkeypatch.delenv("SOURCE_DATE_EPOCH")
    assert isinstance(issue_date(), date)


def test_an_impossible_folder_is_refused_before_the_work(tmp_path):
    """A file in the way, a folder where a document belongs, no such name: told at once."""
    (tmp_path / "file").write_text("x", encoding="utf-8")
    (tmp_path / "blocked" / "report.html").mkdir(parents=True)
    for folder in (tmp_path / "file", tmp_path / "file" / "below", tmp_path / "blocked",
                   tmp_path / ("x" * 300), tmp_path / "nul\0byte"):  # fmt: skip
        with pytest.raises(OutputError, match="cannot be used as folder"):
            refuse_impossible(folder)
    assert [p.name for p in (tmp_path / "blocked").iterdir()] == ["report.html"]


def test_asking_leaves_no_trace(tmp_path):
    """A folder that will do is not made before there is something to put in it."""
    refuse_impossible(tmp_path / "new" / "below")
    refuse_impossible(tmp_path)
    assert list(tmp_path.iterdir()) == []


def test_a_disk_too_full_to_prepare_is_told_in_words(girder_job, tmp_path, monkeypatch):
    """A full disk while the documents are prepared is a failure to write, and changes nothing."""

    def full(*_args, **_kwargs):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(issue, "workbook_bytes", full)
    with pytest.raises(OutputError, match="prepared: No space left"):
        write_documents(girder_job, tmp_path / "out", issued=ISSUED)
    assert not (tmp_path / "out").exists()


@pytest.mark.parametrize("command", ["pick", "compare"])
def test_the_command_refuses_the_folder_before_it_picks(command, tmp_path, monkeypatch):
    """No search of minutes for documents that can be written nowhere."""
    (tmp_path / "file").write_text("x", encoding="utf-8")
    for name in ("pick_job", "compare_job"):
        monkeypatch.setattr(f"sizing.job.{name}", lambda *_, **__: pytest.fail("it picked"))
    example = Path(__file__).parents[2] / "examples" / "market-hall.toml"
    outcome = CliRunner().invoke(app, [command, str(example), "--out", str(tmp_path / "file")])
    assert isinstance(outcome.exception, OutputError)
