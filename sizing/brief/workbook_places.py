"""Where each key of a brief stands in its workbook, so that every message names sheet and cell."""

from __future__ import annotations

from sizing.brief.findings import KeyPath, key_path_text
from sizing.brief.workbook_file import Spot, spot_text


class Places:
    """Key paths and their cells. A key without one is placed at what holds it, or is in it."""

    def __init__(self) -> None:
        self._cells: dict[KeyPath, list[str]] = {}
        self._empty: dict[KeyPath, str] = {}
        self._sheets: dict[KeyPath, str] = {}

    def record(self, path: KeyPath, title: str, spot: Spot) -> None:
        """Say that a key stands in this cell."""
        known = self._cells.setdefault(path, [])
        text = spot_text(title, spot)
        if text not in known:
            known.append(text)

    def record_empty(self, path: KeyPath, title: str, spot: Spot) -> None:
        """Say that a key belongs in this cell, which is empty."""
        self._empty.setdefault(path, spot_text(title, spot))

    def record_sheet(self, path: KeyPath, title: str) -> None:
        """Say that a table stands on this sheet, or belongs there; the first sheet counts."""
        self._sheets.setdefault(path, f"sheet {title}")

    def __call__(self, path: KeyPath) -> str:
        """Return ``Loads!C7``; several cells where a name stands in several."""
        for length in range(len(path), 0, -1):
            cells = self._cells.get(path[:length])
            other = self._empty.get(path[:length]) or self._sheets.get(path[:length])
            if cells or other:
                return (" and ".join(cells) if cells else str(other)) + _rest(path[length:])
        inside = (cells for own, cells in self._cells.items() if own[: len(path)] == path)
        return next(inside, [key_path_text(path)])[0] if path else "the workbook"


def _rest(path: KeyPath) -> str:
    """Return the key inside the cell, such as ``(long_term.snow)``."""
    words = [part for part in path if isinstance(part, str)]
    return f" ({key_path_text(tuple(words))})" if words else ""
