"""For the screen: options side by side, and what was understood of a catalogue."""

from __future__ import annotations

from typing import TYPE_CHECKING

from sizing.brief.catalogue_view import inspect_catalogue
from sizing.brief.sections import Catalogue
from sizing.documents.plain_text import shortened, visible
from sizing.documents.quantities import shown_units
from sizing.documents.screen import LONGEST_NAME, ScreenWriter
from sizing.documents.summary_table import summary_table
from sizing.documents.tables import printed
from sizing.results import JobResult

if TYPE_CHECKING:
    from rich.console import Console
    from rich.table import Table


def print_comparison(result: JobResult, console: Console | None = None) -> None:
    """Print the summary of options with one column for each option, one row for each criterion."""
    from rich.console import Console

    screen = console or Console(highlight=False)
    write = ScreenWriter(screen.encoding or "ascii")
    summary = summary_table(result, shown_units(result.brief.units))
    screen.print(write.text(shortened(visible(result.brief.title), LONGEST_NAME), "bold"))
    table = _grid(write, ["", *(str(row[0]) for row in summary.rows)])
    for j, column in enumerate(summary.columns[1:], start=1):
        head = f"{column.head}, {column.unit}" if column.unit else column.head
        cells = [shortened(printed(row[j], column), LONGEST_NAME) for row in summary.rows]
        if any(cells):
            table.add_row(write.text(head), *(write.text(cell) for cell in cells))
    screen.print(table)
    for note in summary.notes:
        screen.print(write.text(note))
    count = max((len(option.cautions) for option in result.options), default=0)
    screen.print(
        write.text(
            f"Up to {count} cautions for each option in the documents: read them before use."
        )
    )


def print_catalogue(catalogue: Catalogue, console: Console | None = None) -> None:
    """Print file, columns as understood, ranges, gaps and remarks of a catalogue."""
    from rich.console import Console

    screen = console or Console(highlight=False)
    write = ScreenWriter(screen.encoding or "ascii")
    table = _grid(write, ["", "understood as"])
    for what, finding in inspect_catalogue(catalogue):
        table.add_row(write.text(what), write.text(visible(finding)))
    screen.print(table)


def _grid(write: ScreenWriter, heads: list[str]) -> Table:
    from rich import box
    from rich.table import Table

    table = Table(box=box.SIMPLE_HEAD if write.unicode else box.ASCII2, pad_edge=False)
    for k, head in enumerate(heads):
        table.add_column(
            write.text(shortened(head, LONGEST_NAME), "bold"),
            overflow="fold",
            max_width=26 if k == 0 else None,
        )
    return table
