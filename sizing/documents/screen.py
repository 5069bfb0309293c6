"""The short answer for the terminal: one table per option that fits 80 columns."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from sizing.documents.plain_text import shortened, visible
from sizing.documents.quantities import shown_units
from sizing.documents.summary_table import objective_text
from sizing.documents.wording import met, outcome_sentence
from sizing.results import JobResult, OptionResult

if TYPE_CHECKING:
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

LONGEST_NAME = 120
"""Characters of a name that still say something on a screen."""


def print_result(result: JobResult, console: Console | None = None) -> None:
    """Print ``result`` to ``console`` (standard output by default), plain when not a terminal."""
    from rich.console import Console

    screen = console or Console(highlight=False)
    write = ScreenWriter(screen.encoding or "ascii")
    screen.print(write.text(shortened(visible(result.brief.title), LONGEST_NAME), "bold"))
    for option in result.options:
        screen.print()
        for line in _headline(result, option):
            screen.print(write.text(line))
        screen.print(_group_table(option, write))
        for line in _closing(option):
            screen.print(write.text(line))
    for name, reason in result.without_answer:
        words = f"Option {visible(name)}: no answer. {visible(reason)}"
        screen.print()
        screen.print(write.text(shortened(words, 6 * LONGEST_NAME)))


class ScreenWriter:
    """Makes text for one screen: never read as markup, nothing its encoding cannot show."""

    def __init__(self, encoding: str) -> None:
        self.encoding = encoding
        self.unicode = encoding.lower().startswith("utf")

    def text(self, words: str, style: str = "") -> Text:
        """Return ``words`` as they are, unknown characters as escapes."""
        from rich.text import Text

        shown = words.encode(self.encoding, "backslashreplace").decode(self.encoding)
        return Text(shown, style=style)


def _headline(result: JobResult, option: OptionResult) -> list[str]:
    units = shown_units(result.brief.units)
    facts = [f"Members {units.mass.text(option.mass)}"]
    if result.brief.minimise != "mass":
        total = objective_text(result, units, option.objective)
        facts.append(f"{result.brief.minimise} {total}")
    if option.bound is not None:
        least = objective_text(result, units, option.bound)
        facts.append(f"lower bound {least} ({result.brief.minimise})")
    elif option.status != "checked":
        facts.append("lower bound unknown")
    if option.gap is not None:
        facts.append(f"gap {100.0 * option.gap:.2f} %")
    name = shortened(visible(option.option), LONGEST_NAME)
    return [
        f"Option {name}: {visible(option.standard)}, {visible(option.grade)}, "
        f"{visible(option.catalogue)}",
        f"{'; '.join(facts)}.",
        outcome_sentence(option),
    ]


def _group_table(option: OptionResult, write: ScreenWriter) -> Table:
    from rich import box
    from rich.table import Table

    table = Table(box=box.SIMPLE_HEAD if write.unicode else box.ASCII2, pad_edge=False)
    table.add_column("Group", overflow="fold", max_width=18)
    table.add_column("Section", overflow="fold", max_width=20)
    table.add_column("Util.", justify="right", no_wrap=True)
    table.add_column("Governed by", overflow="fold")
    table.add_column("Combination", overflow="fold", max_width=14)
    for group in option.groups:
        passes = met(group.utilisation)
        number = f"{group.utilisation:.2f}" if math.isfinite(group.utilisation) else "none"
        governed = f"{group.governed_by} at {group.governing_member}"
        table.add_row(
            write.text(shortened(visible(group.name), LONGEST_NAME)),
            write.text(shortened(visible(group.designation), LONGEST_NAME), "bold"),
            write.text(number if passes else f"{number} NO", "" if passes else "bold red"),
            write.text(shortened(visible(governed), LONGEST_NAME)),
            write.text(shortened(visible(group.governing_combination), LONGEST_NAME)),
        )
    return table


def _closing(option: OptionResult) -> list[str]:
    lines = []
    worst = max(option.deflections, key=lambda d: d.utilisation, default=None)
    if worst is not None:
        lines.append(
            f"Deflection {visible(worst.limit_name)} at {visible(worst.node)}: utilisation "
            f"{worst.utilisation:.2f} in {visible(worst.combination)}"
            f"{'' if met(worst.utilisation) else ', NOT MET'}."
        )
    count = len(option.cautions)
    if count:
        lines.append(
            f"{count} caution{'s' if count > 1 else ''} in the documents: read them before use."
        )
    return [shortened(line, 3 * LONGEST_NAME) for line in lines]
