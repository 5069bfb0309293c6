"""Where each key of a brief stands in its workbook, so that every message names sheet and cell."""

from __future__ import annotations

from sizing.brief.findings import KeyPath, key_path_text
from sizing.brief.workbook_file import Spot, spot_text


class Places:
    """Key paths and their cells. A key that has no cell is placed at what holds it."""

    def __init__(self) -> None:
        self._cells: dict[KeyPath, list[str]] = {}

    def record(self, path: KeyPath, title: str, spot: Spot) -> None:
        """Say that a key stands in this cell, or belongs there."""
        self._add(path, spot_text(title, spot))

    def record_sheet(self, path: KeyPath, title: str) -> None:
        """Say that a table stands on this sheet, or belongs there."""
        self._add(path, f"sheet {title}")

    def _add(self, path: KeyPath, text: str) -> None:
        known = self._cells.setdefault(path, [])
        if text not in known:
            known.append(text)

    def known(self, path: KeyPath) -> bool:
        """Return whether the key has a cell of its own."""
        return path in self._cells

    def __call__(self, path: KeyPath) -> str:
        """Return ``Loads!C7``; several cells where a name stands in several."""
        for length in range(len(path), 0, -1):
            cells = self._cells.get(path[:length])
            if cells:
                rest = "" if length == len(path) else _rest(path[length:])
                return " and ".join(cells) + rest
        return key_path_text(path) if path else "the workbook"


def _rest(path: KeyPath) -> str:
    """Return the key inside the cell, such as ``(long_term.snow)``."""
    words = [part for part in path if isinstance(part, str)]
    return f" ({key_path_text(tuple(words))})" if words else ""
