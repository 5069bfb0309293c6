"""Looking into a workbook's archive before anything unpacks it: traps, passwords, oddities.

An .xlsx file is a ZIP archive of XML parts. A packed trap unpacks to gigabytes; a part can also
hold entities that grow without end. Here the archive's own table of contents and every part's
first lines are looked at; the parts are read later, and only as many bytes as were declared.
"""

from __future__ import annotations

import io
import zipfile

MAGIC = b"PK\x03\x04"

MOST_PARTS = 500
"""A workbook has some 10 to 100 parts."""

LARGEST_RATIO = 200
"""Unpacked over packed size. XML packs ten to fifty to one, whole sheets of empty styled rows up
to a hundred; deflate reaches a thousand to one on a trap."""

FREE_SIZE = 1024 * 1024
"""Bytes. What unpacks to less cannot hurt, however well it packs."""

_PACKED = (".zip", ".xlsx", ".xlsm", ".xlsb", ".docx", ".jar", ".gz", ".7z", ".rar")
_METHODS = (zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED)
_ENCRYPTED = 0x1


class ArchiveError(Exception):
    """An archive that is not opened: what was found and what belongs there."""

    def __init__(self, found: str, expected: str) -> None:
        self.found, self.expected = found, expected
        super().__init__(f"found {found}; expected {expected}")


def open_archive(data: bytes, largest_unpacked: int) -> zipfile.ZipFile:
    """Return the archive, once its table of contents and its XML parts are harmless.

    Raises :class:`ArchiveError` for a password, an odd packing, a size beyond
    ``largest_unpacked`` bytes or out of proportion, an archive inside, a part that names a
    place outside, and XML with declarations of its own (document types, entities). A file that
    is no archive raises :class:`zipfile.BadZipFile` as usual.
    """
    archive = zipfile.ZipFile(io.BytesIO(data))
    parts = archive.infolist()
    if len(parts) > MOST_PARTS:
        raise ArchiveError(f"a workbook of {len(parts)} parts", f"at most {MOST_PARTS}")
    unpacked = sum(part.file_size for part in parts)
    if unpacked > largest_unpacked:
        raise ArchiveError(
            f"a workbook of {unpacked / 1024 / 1024:.0f} MiB unpacked",
            f"at most {largest_unpacked // 1024 // 1024} MiB",
        )
    seen: set[str] = set()
    for part in parts:
        _look_at(part)
        if part.filename in seen:
            raise ArchiveError(f"the part {part.filename!r} twice", "each part once")
        seen.add(part.filename)
    for part in parts:
        if part.filename.casefold().endswith((".xml", ".rels", ".vml")):
            _refuse_declarations(archive.read(part), part.filename)
    return archive


def _look_at(part: zipfile.ZipInfo) -> None:
    name = part.filename
    if part.flag_bits & _ENCRYPTED:
        raise ArchiveError("a workbook with a password", "a workbook without one")
    if part.compress_type not in _METHODS:
        raise ArchiveError(f"the part {name!r} packed in an odd way", "an .xlsx workbook")
    if part.file_size > FREE_SIZE and part.file_size > LARGEST_RATIO * max(part.compress_size, 1):
        raise ArchiveError(
            f"the part {name!r}, packed out of all proportion",
            f"a part that unpacks to at most {LARGEST_RATIO} times its size",
        )
    if name.casefold().endswith(_PACKED):
        raise ArchiveError(f"the archive {name!r} inside the workbook", "sheets only")
    if name.startswith(("/", "\\")) or ".." in name.replace("\\", "/").split("/") or ":" in name:
        raise ArchiveError(f"the part {name!r}, which names a place outside", "an .xlsx workbook")


def _refuse_declarations(content: bytes, name: str) -> None:
    plain = content.replace(b"\x00", b"")  # UTF-16 and UTF-32 look the same then
    if b"<!DOCTYPE" in plain or b"<!ENTITY" in plain:
        raise ArchiveError(
            f"a document type or an entity in the part {name!r}", "plain XML, as workbooks have it"
        )
