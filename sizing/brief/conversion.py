"""A brief from TOML to a workbook and back: the same tables, checked before they are written."""

from __future__ import annotations

import os
import tomllib
from collections.abc import Sequence
from contextlib import suppress
from pathlib import Path
from typing import Any

from sizing.brief.catalogue_reader import shipped_catalogues
from sizing.brief.findings import key_path_text, listed, quoted
from sizing.brief.model import Brief, SourceFile
from sizing.brief.toml_file import load_toml
from sizing.brief.toml_reader import brief_from_tables, refuse_foreign
from sizing.brief.toml_writer import toml_text
from sizing.brief.workbook_file import read_grids
from sizing.brief.workbook_reader import load_workbook_brief, tables_of_grids
from sizing.brief.workbook_sheets import CannotHoldError
from sizing.brief.workbook_writer import workbook_bytes
from sizing.errors import InputError, OutputError, Problem

WORKBOOK, TEXT = ".xlsx", ".toml"


def convert_brief(brief: Path, target: Path) -> tuple[str, ...]:
    """Write the brief at ``brief`` as the file ``target`` (.xlsx or .toml); return remarks.

    The new file is read back in memory and must hold the same tables before it is written. It
    never replaces another file. Raises :class:`~sizing.errors.InputError` for a brief with
    mistakes and for names of the wrong kind, :class:`~sizing.errors.OutputError` when the file
    exists or cannot be written.
    """
    kind = target.suffix.casefold()
    source_kind = refuse_foreign(brief)
    if kind not in (WORKBOOK, TEXT) or kind == source_kind:
        raise InputError([_wrong_target(target, source_kind)])
    if os.path.lexists(target):
        raise _exists(target)
    remarks: tuple[str, ...]
    if source_kind == WORKBOOK:
        book = load_workbook_brief(brief)
        source, tables, remarks = book.source, book.tables, book.cautions
        read = brief_from_tables(tables, source, book.places)
        content = toml_text(tables).encode("utf-8")
        back = tomllib.loads(content.decode("utf-8"))
    else:
        source, tables = load_toml(brief)
        read = brief_from_tables(tables, source)
        content, back = _as_workbook(tables, source)
        remarks = ("The remarks (lines with #) of the text are not carried over.",)
    _must_agree(tables, back, target)
    _write(target, content)
    return (*remarks, *_catalogues_elsewhere(read, target))


def _as_workbook(tables: dict[str, Any], source: SourceFile) -> tuple[bytes, dict[str, Any]]:
    try:
        content = workbook_bytes(tables)
        return content, tables_of_grids(read_grids(content, source.name), source).tables
    except (CannotHoldError, InputError) as error:
        raise OutputError(f"a workbook cannot hold this brief: {error}") from error


def _must_agree(tables: dict[str, Any], back: dict[str, Any], target: Path) -> None:
    if tables != back:
        differing = [key for key in {**tables, **back} if tables.get(key) != back.get(key)]
        names = listed([key_path_text((key,)) for key in differing])
        raise OutputError(f"{target}: cannot hold this brief without loss: {names} would change")


def _wrong_target(target: Path, source_kind: str) -> Problem:
    wanted = TEXT if source_kind == WORKBOOK else WORKBOOK
    return Problem(
        file=str(target),
        place="the file",
        found=f"a name that ends in {quoted(target.suffix)}" if target.suffix else "no ending",
        expected=f"a file {wanted} to convert a brief {source_kind} into",
    )


def _exists(target: Path) -> OutputError:
    return OutputError(f"{target}: exists already and is not replaced; name another file")


def _write(target: Path, content: bytes) -> None:
    """Write a new file, whole or not at all."""
    try:
        with target.open("xb") as stream:
            try:
                stream.write(content)
                stream.flush()
                os.fsync(stream.fileno())
            except BaseException:
                with suppress(OSError):
                    target.unlink()
                raise
    except FileExistsError as error:
        raise _exists(target) from error
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise OutputError(f"{target}: cannot be written: {reason}") from error


def _catalogues_elsewhere(brief: Brief, target: Path) -> Sequence[str]:
    """Say where a catalogue's path counts from the folder of the brief, and that has changed."""
    if target.resolve().parent == brief.source.path.parent:
        return ()
    files = dict.fromkeys(option.catalogue for option in brief.options)
    own = [f for f in files if f not in shipped_catalogues() and not Path(f).is_absolute()]
    if not own:
        return ()
    return (f"Catalogue paths count from the brief's folder, which is another now: {listed(own)}.",)
