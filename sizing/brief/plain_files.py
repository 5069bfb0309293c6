"""Opening a file that somebody named: an ordinary one, of ordinary size, and where it seems to be.

What a brief or a command line names is read as named: relative to its folder, with ``..`` or
absolute where the user wrote it so. A symbolic link is followed inside its own folder only: a
job folder that came from elsewhere cannot lead to files that nobody named. Devices, pipes and
folders are told, never waited for.
"""

from __future__ import annotations

import os
import stat
from pathlib import Path

_KINDS = (
    (stat.S_ISDIR, "a folder"),
    (stat.S_ISFIFO, "a pipe"),
    (stat.S_ISSOCK, "a socket"),
    (stat.S_ISCHR, "a device"),
    (stat.S_ISBLK, "a device"),
)


class PlainFileError(Exception):
    """A file that is not read: what was found, what belongs there, how to mend it."""

    def __init__(self, found: str, expected: str = "a file", fix: str = "") -> None:
        self.found, self.expected, self.fix = found, expected, fix
        super().__init__(f"found {found}; expected {expected}. {fix}".strip())


def read_plain_file(path: Path, largest: int, *, base: Path | None = None) -> bytes:
    """Return the content of an ordinary file of at most ``largest`` bytes.

    ``base``: the folder that ``path`` was written relative to; links on the way down from it
    must stay inside it. Without one, only the file's own link is looked at. Raises
    :class:`PlainFileError`.
    """
    try:
        _refuse_links(path, base)
        flags = os.O_RDONLY | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_BINARY", 0)
        _refuse_kind(path.stat().st_mode)
        with open(os.open(path, flags), "rb") as stream:  # noqa: PTH123 - flags against pipes
            _refuse_kind(os.fstat(stream.fileno()).st_mode)
            content = stream.read(largest + 1)
    except FileNotFoundError as error:
        raise PlainFileError(
            "no such file", "an existing file", "Check the path and the folder you are in."
        ) from error
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise PlainFileError(f"a file that cannot be opened ({reason})") from error
    if len(content) > largest:
        limit = f"{largest // 1024**2} MiB"
        raise PlainFileError(f"more than {limit}", f"at most {limit}")
    return content


def _refuse_kind(mode: int) -> None:
    if not stat.S_ISREG(mode):
        kind = next((words for is_kind, words in _KINDS if is_kind(mode)), "no ordinary file")
        raise PlainFileError(kind)


def _refuse_links(path: Path, base: Path | None) -> None:
    """Raise for a link on the way from ``base`` to the file that leads out of its folder."""
    steps = [path]
    if base is not None and path.is_relative_to(base):
        steps += [folder for folder in path.parents if base in folder.parents]
    for step in steps:
        if not step.is_symlink():
            continue
        target = Path(os.path.realpath(step))
        homes = [step.parent] if base is None else [step.parent, base]
        if not any(target.is_relative_to(os.path.realpath(home)) for home in homes):
            raise PlainFileError(
                f"a link {step.name} that leads to {target}",
                "a file, or a link inside its own folder",
                "Copy the file there, or name the file itself.",
            )
