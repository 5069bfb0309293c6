"""Opening a TOML (or JSON) file: size, encoding, syntax, each told as an ordinary mistake."""

from __future__ import annotations

import hashlib
import json
import re
import tomllib
from pathlib import Path
from typing import Any

from sizing.brief.model import SourceFile
from sizing.brief.plain_files import PlainFileError, read_plain_file
from sizing.errors import InputError, Problem

LARGEST_BRIEF = 5 * 1024 * 1024
"""Bytes. A brief of 300 members has some 30 kB; what is a hundred times larger is no brief."""

LONGEST_LINE = 80


def load_toml(path: Path, largest: int = LARGEST_BRIEF) -> tuple[SourceFile, dict[str, Any]]:
    """Return the file's identity and its tables; raise :class:`InputError` when unreadable."""
    source, text = read_text(path, largest)
    try:
        return source, tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise InputError([_syntax_problem(source.name, text, str(error))]) from error
    except RecursionError as error:
        raise _refused(source.name, "lists nested hundreds of levels deep", "a brief") from error
    except ValueError as error:  # Python reads no whole number beyond 4300 digits, by default
        raise _refused(source.name, "a number of thousands of digits", "numbers") from error


def load_json(path: Path, largest: int) -> tuple[SourceFile, Any]:
    """Return the file's identity and its content; raise :class:`InputError` when unreadable."""
    source, text = read_text(path, largest)
    try:
        return source, json.loads(text)
    except json.JSONDecodeError as error:
        place = f"line {error.lineno}, column {error.colno}"
        raise InputError(
            [Problem(file=source.name, place=place, found=error.msg, expected="JSON text")]
        ) from error
    except (RecursionError, ValueError) as error:
        raise _refused(source.name, "values that cannot be read", "JSON text") from error


def read_text(path: Path, largest: int) -> tuple[SourceFile, str]:
    """Return identity and text of a UTF-8 file (a byte-order mark is dropped)."""
    name = str(path)
    try:
        content = read_plain_file(path, largest)
    except PlainFileError as error:
        raise _refused(name, error.found, error.expected, error.fix) from error
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        problem = Problem(
            file=name,
            place=f"line {line}",
            found=f"the byte 0x{content[error.start]:02x}, which is not UTF-8",
            expected="UTF-8 text",
            fix='Save the file with the encoding "UTF-8".',
        )
        raise InputError([problem]) from error
    sha256 = hashlib.sha256(content).hexdigest()
    return SourceFile(name=name, path=path.resolve(), sha256=sha256), text


def _refused(file: str, found: str, expected: str, fix: str = "") -> InputError:
    return InputError(
        [Problem(file=file, place="the file", found=found, expected=expected, fix=fix)]
    )


_POSITION = re.compile(
    r"^(?P<what>.*) \(at (?:line (?P<line>\d+), column (?P<col>\d+)|end of .*)\)$"
)

_PLAIN_WORDS = {
    "Cannot overwrite a value": "a key that was given before",
    "Cannot declare": "a table that was given before",
    "Cannot mutate": "a key that was given before",
    "Invalid value": "a value that is not TOML",
    "Expected '=' after a key": "a line that is not key = value",
    "Unclosed array": "a list that is not closed",
    "Unterminated string": "text without its closing quotation mark",
    "Illegal character": "a character that may not stand here",
    "Expected newline or end of document after a statement": "more on the line than one value",
    "Invalid initial character for a key part": "something other than a key",
    "Unclosed inline table": "a table { ... } that is not closed",
    "Invalid statement": "a line that is neither key = value nor [table]",
}


def _syntax_problem(file: str, text: str, message: str) -> Problem:
    """Return tomllib's one complaint with line, column and the text of the line."""
    match = _POSITION.match(message)
    lines = text.replace("\r\n", "\n").split("\n")
    what = match["what"] if match else message
    plain = next((w for start, w in _PLAIN_WORDS.items() if what.startswith(start)), what)
    if match and match["line"]:
        number, column = int(match["line"]), int(match["col"])
        place = f"line {number}, column {column}"
    else:
        number = max((i for i, line in enumerate(lines, start=1) if line.strip()), default=1)
        place = f"end of the file (line {number})"
    line = lines[number - 1].strip() if number <= len(lines) else ""
    if len(line) > LONGEST_LINE:
        line = line[: LONGEST_LINE - 3] + "..."
    return Problem(
        file=file,
        place=place,
        found=f"{plain}: {line}" if line else plain,
        expected='TOML, such as key = 1.5 or key = "text" or [table]',
        fix=_likely_fix(line, what),
    )


_LIKELY_FIXES = (
    ("", r"[“”„‟″]", 'Use straight quotation marks ".'),
    ("", r"=\s*[-+\u2212]?\d+,\d+\s*(#.*)?$", "Write numbers with a decimal point."),
    ("", r"[=\[,]\s*\u2212", "Use the plain minus sign -."),
    ("Cannot", r"", "Give every name once; delete or rename one of the two."),
    ("Invalid value", r"=\s*[A-Za-z]", "Put text in quotation marks."),
    ("Unclosed inline table", r"=\s*\{[^}]*$", "A table { ... } stands on one line."),
    (
        "Unclosed inline table",
        r"\d\s*[A-Za-z%]",
        'Put a number with its unit in quotation marks, such as "120 mm".',
    ),
    ("Invalid initial character", r",\s*\}", "Delete the comma before the closing brace."),
    (
        "Expected newline",
        r"=\s*[-+]?[\d.]+\s*[A-Za-z]",
        'Put a number with its unit in quotation marks, such as "120 mm".',
    ),
)
"""Start of tomllib's complaint, pattern of the line, and what helps then; the first one counts."""


def _likely_fix(line: str, what: str) -> str:
    for complaint, pattern, fix in _LIKELY_FIXES:
        if what.startswith(complaint) and re.search(pattern, line):
            return fix
    return ""
