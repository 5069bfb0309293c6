"""From the bytes of a catalogue file to cells with their line numbers; nothing is interpreted.

A catalogue is a text table. Lines that begin with ``#`` are its header: free text, or settings
``# key = value``. The first other line holds the column heads.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from sizing.errors import Problem

LARGEST_FILE = 5 * 1024 * 1024
"""Bytes. A thousand rows take about 0.1 MiB; anything near this size is not a section table."""

HEADS_WANTED = (
    "column heads such as designation, area [cm2], mass [kg/m], I major [cm4], I minor [cm4]"
)
MOST_TITLE_LINES = 20
"""Lines among which the column heads are looked for."""

DELIMITERS = {
    ";": ";",
    ",": ",",
    "tab": "\t",
    "semicolon": ";",
    "comma": ",",
    "\t": "\t",
}
DELIMITER_WORDS = {";": "semicolons", ",": "commas", "\t": "tabs"}
SETTING_KEYS = frozenset(
    {"delimiter", "decimal", "density", "family", "product", "standard", "edition", "title"}
    | {"units", "obtained", "source", "surface", "axes", "mass", "note", "currency"}
)
"""Keys of ``# key = value`` lines. The first five are acted upon, the others are for the reader."""

_COMMENT = re.compile(r'^[\s"]*#(?!(?:N/A|REF!|VALUE!|NAME\?|DIV/0!|NULL!|NUM!))')
_SETTING = re.compile(r"^\s*([A-Za-z][A-Za-z ]{0,30}?)\s*=\s*(.+?)\s*$")


@dataclass(frozen=True, kw_only=True, slots=True)
class Row:
    """The cells of one row and the number of the line on which it begins."""

    line: int
    cells: tuple[str, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class TextTable:
    """A catalogue as text: header lines, settings, column heads and rows."""

    header: tuple[str, ...]
    settings: Mapping[str, str]
    delimiter: str
    heads: Row
    rows: tuple[Row, ...]
    remarks: tuple[str, ...]


class TextProblemsError(Exception):
    """The file cannot be split into cells; carries the problems found."""

    def __init__(self, *problems: Problem) -> None:
        self.problems = problems
        super().__init__(str(problems))


def decode(data: bytes, file: str) -> tuple[str, tuple[str, ...]]:
    """Return the text and a remark on its encoding where that was not plain UTF-8.

    Raises :class:`TextProblemsError` for workbooks, other binary files and empty ones.
    """
    refuse_large(len(data), file)
    _refuse_what_is_no_text(data, file)
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        try:
            return data.decode("utf-16"), ("The file is written in UTF-16.",)
        except UnicodeDecodeError:
            _refuse_binary(file)
    try:
        return data.decode("utf-8-sig"), ()
    except UnicodeDecodeError:
        text = data.decode("cp1252", errors="replace")
        return text, ("The file is not UTF-8; it was read as Western European (Windows-1252).",)


def refuse_large(size: int, file: str) -> None:
    """Raise :class:`TextProblemsError` for a file of more than :data:`LARGEST_FILE` bytes."""
    if size > LARGEST_FILE:
        raise TextProblemsError(
            Problem(
                file=file,
                place="file",
                found=f"{size / 1024 / 1024:.1f} MiB",
                expected=f"at most {LARGEST_FILE // 1024 // 1024} MiB",
                fix="A section table of a thousand rows takes about 0.1 MiB.",
            )
        )


def _refuse_what_is_no_text(data: bytes, file: str) -> None:
    if data.startswith(b"\xd0\xcf\x11\xe0"):
        raise TextProblemsError(
            Problem(
                file=file,
                place="file",
                found="a workbook of the old kind (.xls), or one with a password",
                expected="a text table (CSV) or a workbook (.xlsx)",
                fix="Save the sheet as CSV (UTF-8) and name that file.",
            )
        )
    if b"\x00" in data and not data.startswith((b"\xff\xfe", b"\xfe\xff")):
        _refuse_binary(file)


def _refuse_binary(file: str) -> None:
    raise TextProblemsError(
        Problem(
            file=file,
            place="file",
            found="bytes that are not text",
            expected="a text table (CSV)",
            fix="Save the table as CSV (UTF-8).",
        )
    )


def split(text: str, file: str, looks_like_heads: Callable[[list[str]], bool]) -> TextTable:
    """Split the text into header, column heads and rows.

    ``looks_like_heads`` recognises the line of column heads among the cells of the first lines;
    titles above it join the header. Raises :class:`TextProblemsError` with every problem that
    stops the splitting.
    """
    lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
    header = tuple(line.strip().lstrip("#").strip() for line in lines if is_comment(line))
    settings = header_settings(header)
    body = ["" if is_comment(line) else line for line in lines]
    hint = re.match(r"^sep=(.)$", body[0].strip('"'))  # spreadsheets write their delimiter so
    if hint:
        settings.setdefault("delimiter", hint[1])
        body[0] = ""
    first, titles = _head_line(body, looks_like_heads)
    header += titles
    remarks: tuple[str, ...] = ()
    if titles:
        remarks = (f"Taken as a title, above the column heads: {'; '.join(titles)}.",)
    delimiter, detected = _delimiter(settings, "" if first is None else body[first], file)
    rows = _cells(body, delimiter, file)
    if first is None or not rows:
        raise TextProblemsError(
            Problem(
                file=file,
                place="file",
                found="only header lines" if header else "nothing",
                expected="a line of column heads and at least one row",
                fix=f"Write {HEADS_WANTED}.",
            )
        )
    heads, rest = rows[0], rows[1:]
    _check_widths(heads, rest, delimiter, file)
    return TextTable(
        header=tuple(line for line in header if line),
        settings=settings,
        delimiter=delimiter,
        heads=heads,
        rows=tuple(rest),
        remarks=(*remarks, *detected),
    )


def _head_line(
    body: list[str], looks_like_heads: Callable[[list[str]], bool]
) -> tuple[int | None, tuple[str, ...]]:
    """Return the place of the column heads and the titles above them, which are blanked.

    When no line looks like heads it is the first one that is not empty.
    """
    filled = [i for i, line in enumerate(body) if line.strip(' ;,\t"')]
    for place in filled[:MOST_TITLE_LINES]:
        if looks_like_heads(re.split(r"[;,\t]", body[place].replace('"', ""))):
            titles = tuple(body[i].strip(' ;,\t"') for i in filled if i < place)
            body[:place] = [""] * place
            return place, titles
    return (filled[0] if filled else None), ()


def is_comment(line: str) -> bool:
    """Say whether a line is a header line; ``#N/A`` and its like are a spreadsheet's errors.

    Spreadsheets quote a header line that holds the delimiter: ``"# a; b";;;``.
    """
    return _COMMENT.match(line) is not None


def header_settings(header: tuple[str, ...]) -> dict[str, str]:
    """Return the settings ``key = value`` among the header lines."""
    found: dict[str, str] = {}
    for line in header:
        match = _SETTING.match(line.rstrip('";,\t '))
        if match and match[1].casefold() in SETTING_KEYS:
            found[match[1].casefold()] = match[2]
    # A delimiter that is itself ";" or "," has just been stripped with the trailing ones.
    for line in header:
        match = re.match(r"^\s*delimiter\s*=\s*(\S+)", line, re.IGNORECASE)
        if match:
            found["delimiter"] = match[1]
    return found


def _delimiter(settings: Mapping[str, str], heads: str, file: str) -> tuple[str, tuple[str, ...]]:
    declared = settings.get("delimiter")
    if declared is not None:
        if declared.casefold() not in DELIMITERS:
            raise TextProblemsError(
                Problem(
                    file=file,
                    place="header, delimiter",
                    found=repr(declared),
                    expected="one of ; , tab",
                    fix="Write for instance: # delimiter = ;",
                )
            )
        return DELIMITERS[declared.casefold()], ()
    outside_quotes = re.sub(r'"[^"]*"', "", heads)
    for mark in (";", "\t"):
        if mark in outside_quotes:
            return mark, (f"Columns are separated by {DELIMITER_WORDS[mark]} (detected).",)
    return ",", ()


def _cells(body: list[str], delimiter: str, file: str) -> list[Row]:
    reader = csv.reader((f"{line}\n" for line in body), delimiter=delimiter, strict=True)
    rows: list[Row] = []
    before = 0
    try:
        for cells in reader:
            line, before = before + 1, reader.line_num
            if any(cell.strip() for cell in cells):
                rows.append(Row(line=line, cells=tuple(cell.strip() for cell in cells)))
    except csv.Error as error:
        raise TextProblemsError(
            Problem(
                file=file,
                place=f"line {before + 1}",
                found=f"quotation marks that do not close ({error})",
                expected='cells, quoted where they hold the delimiter: "2 1/2, long"',
                fix="Close the quotation mark; a quotation mark inside a cell is doubled. An inch "
                "mark is better written in.",
            )
        ) from error
    return rows


def _check_widths(heads: Row, rows: list[Row], delimiter: str, file: str) -> None:
    """Refuse rows with another number of cells than heads; empty cells at the end do not count."""
    columns = len(_trimmed(heads.cells))
    if columns < 2:
        raise TextProblemsError(
            Problem(
                file=file,
                place=f"line {heads.line}",
                found=f"{heads.cells[0]!r}, which is no line of column heads",
                expected=HEADS_WANTED,
                fix="Lines above the column heads must begin with #.",
            )
        )
    problems = []
    for row in rows:
        found = len(_trimmed(row.cells))
        if found > columns or len(row.cells) < columns:
            comma = delimiter == "," and found > columns
            problems.append(
                Problem(
                    file=file,
                    place=f"line {row.line} ({row.cells[0] or 'no designation'})",
                    found=f"{found if found > columns else len(row.cells)} cells",
                    expected=f"{columns} cells, as many as there are column heads",
                    fix="A decimal comma also splits a cell: separate the columns with ; or "
                    "write decimal points."
                    if comma
                    else "Leave a cell empty where there is no value, but keep its delimiter.",
                )
            )
    if problems:
        raise TextProblemsError(*problems)


def _trimmed(cells: tuple[str, ...]) -> tuple[str, ...]:
    end = len(cells)
    while end and not cells[end - 1]:
        end -= 1
    return cells[:end]
