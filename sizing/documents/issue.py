"""Issues the documents: all of them whole, or none and what stood there before."""

from __future__ import annotations

import os
import secrets
from collections.abc import Mapping, Sequence
from contextlib import suppress
from dataclasses import dataclass
from datetime import UTC, date, datetime
from pathlib import Path
from typing import Any

from sizing.documents.drawing import draw_options, svg_bytes
from sizing.documents.dxf_drawing import dxf_bytes
from sizing.documents.report import report_bytes
from sizing.documents.result_json import json_bytes
from sizing.documents.workbook import workbook_bytes
from sizing.errors import OutputError
from sizing.results import JobResult

WORKBOOK, DRAWING, RESULT, REPORT = "schedule.xlsx", "truss.svg", "result.json", "report.html"
LINES = "truss.dxf"
DOCUMENTS = (WORKBOOK, REPORT, DRAWING, LINES, RESULT)
"""File names of the documents, in the order in which they are named to the user."""

CERTIFICATE = "certificate-{}.npz"
"""File name of the proof of one option, where it was asked for (option names are fit for files)."""


def write_documents(
    result: JobResult,
    folder: Path,
    *,
    issued: date | None = None,
    previous: Mapping[str, Any] | None = None,
) -> tuple[Path, ...]:
    """Write all documents of ``result`` into ``folder`` and return their paths.

    ``folder`` is made where it is missing. ``issued`` is the date on the documents; by default
    :func:`issue_date`. ``previous`` is an earlier result.json as read by
    :func:`sizing.documents.changes.read_previous`; what changed since is then told.

    Everything is rendered before the first byte is written, each file is written beside its
    place and then renamed, and a failed rename undoes the earlier ones, so that a failure leaves
    the folder as it was. (Only a power cut between two renames can leave old files aside, as
    hidden files that end in ``.old``.)

    Raises :class:`OutputError` with file and reason.
    """
    try:
        contents = render_documents(result, issued or issue_date(), previous)
    except OSError as failure:  # openpyxl puts its sheets into temporary files first
        raise OutputError(
            f"the documents cannot be prepared: {failure.strerror or failure}. Free space in the "
            "folder for temporary files (the environment variable TMPDIR names another one)"
        ) from failure
    return replace_all(folder, contents)


def render_documents(
    result: JobResult, issued: date, previous: Mapping[str, Any] | None = None
) -> dict[str, bytes]:
    """Return the content of every document by file name."""
    drawings = draw_options(result)
    return {
        WORKBOOK: workbook_bytes(result, issued, previous),
        REPORT: report_bytes(result, issued, drawings, previous),
        DRAWING: svg_bytes(result, drawings),
        LINES: dxf_bytes(result),
        RESULT: json_bytes(result),
        **{
            CERTIFICATE.format(option.option): option.certificate
            for option in result.options
            if option.certificate
        },
    }


def issue_date() -> date:
    """Return the date for documents: SOURCE_DATE_EPOCH (seconds, UTC) where set, else today.

    SOURCE_DATE_EPOCH is the convention of the reproducible-builds project. Raises
    :class:`OutputError` when it is set to something else than seconds.
    """
    epoch = os.environ.get("SOURCE_DATE_EPOCH", "")
    if not epoch:
        return datetime.now(tz=UTC).astimezone().date()
    try:
        return datetime.fromtimestamp(int(epoch), tz=UTC).date()
    except (ValueError, OverflowError, OSError):
        raise OutputError(
            f"the environment variable SOURCE_DATE_EPOCH is {epoch!r}; expected whole seconds "
            "since 1970, such as 1767225600. Unset it to date documents with today"
        ) from None


def refuse_impossible(folder: Path) -> None:
    """Raise :class:`OutputError` where no document could be written into ``folder``.

    Asked before a pick that may take minutes. The folder is made and a hidden file written and
    removed in it, since nothing short of writing tells whether writing works; what was made for
    it is removed again, so that a pick without an answer leaves no empty folder behind.
    """
    made = _make(folder)
    probe = folder / f".{secrets.token_hex(6)}.new"
    try:
        _write(probe, b"")
        for name in DOCUMENTS:
            if (folder / name).is_dir():
                raise IsADirectoryError(None, f"a folder stands where {name} belongs")
    except OSError as failure:
        raise OutputError(
            f"{folder}: cannot be used as folder for documents: {failure.strerror or failure}. "
            "Name a folder that can be written to"
        ) from failure
    finally:
        with suppress(OSError):  # never written, or already gone
            probe.unlink(missing_ok=True)
        _remove(made)


@dataclass(slots=True)
class _Place:
    """One file on its way: the new content beside it, and where the old one was put."""

    target: Path
    fresh: Path
    old: Path
    moved_away: bool = False
    in_place: bool = False


def replace_all(folder: Path, contents: dict[str, bytes]) -> tuple[Path, ...]:
    """Write ``contents`` (file name to bytes) into ``folder``: all files or none."""
    made = _make(folder)
    tag = secrets.token_hex(4)
    places = [
        _Place(
            target=folder / name,
            fresh=folder / f".{name}.{tag}.new",
            old=folder / f".{name}.{tag}.old",
        )
        for name in contents
    ]
    current = folder
    try:
        for place, content in zip(places, contents.values(), strict=True):
            current = place.target
            if place.target.is_dir():
                raise IsADirectoryError(None, "a folder stands where the file belongs")
            _write(place.fresh, content)
        for place in places:
            current = place.target
            _exchange(place)
    except OSError as failure:
        _undo(places, made)
        raise OutputError(
            f"{current}: cannot be written: {failure.strerror or failure}. No document was "
            "changed; free the file (close it in other programs), or name another folder"
        ) from failure
    except BaseException:  # interrupted: tidy up, then let it pass
        _undo(places, made)
        raise
    for place in places:
        with suppress(OSError):  # the new files stand; a left-over hidden copy does no harm
            place.old.unlink(missing_ok=True)
    return tuple(place.target for place in places)


def _make(folder: Path) -> tuple[Path, ...]:
    """Make ``folder`` and return the folders made, the deepest first."""
    made: list[Path] = []
    try:
        missing = [p for p in (folder, *folder.parents) if not p.exists()]
        if not missing and not folder.is_dir():
            raise NotADirectoryError(None, "it is a file, not a folder")
        for path in reversed(missing):
            path.mkdir(exist_ok=True)
            made.insert(0, path)
    except (OSError, ValueError) as failure:  # ValueError: a name that no file system takes
        _remove(made)
        reason = getattr(failure, "strerror", None) or failure
        raise OutputError(
            f"{folder}: cannot be used as folder for documents: {reason}. "
            "Name a folder that can be written to"
        ) from failure
    return tuple(made)


def _write(path: Path, content: bytes) -> None:
    with path.open("xb") as file:
        file.write(content)
        file.flush()
        os.fsync(file.fileno())


def _exchange(place: _Place) -> None:
    if place.target.exists() or place.target.is_symlink():
        place.target.replace(place.old)
        place.moved_away = True
    place.fresh.replace(place.target)
    place.in_place = True


def _undo(places: Sequence[_Place], made: Sequence[Path]) -> None:
    for place in reversed(places):
        with suppress(OSError):  # undo what can be undone; the first failure is reported
            if place.in_place and not place.moved_away:
                place.target.unlink()
            if place.moved_away:
                place.old.replace(place.target)
        with suppress(OSError):
            place.fresh.unlink(missing_ok=True)
    _remove(made)


def _remove(folders: Sequence[Path]) -> None:
    for folder in folders:
        with suppress(OSError):
            folder.rmdir()
