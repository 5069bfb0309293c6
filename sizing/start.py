"""Starting a brief from a ready shape: a filled-in, commented TOML file that runs as it is."""

from __future__ import annotations

import textwrap
from collections.abc import Mapping, Sequence
from pathlib import Path

from sizing.brief.model import SourceFile
from sizing.brief.shapes import SHAPES, draw_shape
from sizing.brief.toml_reader import brief_from_tables
from sizing.brief.toml_writer import toml_text
from sizing.errors import InputError, OutputError, Problem
from sizing.mechanics.brief_loads import geometry_of
from sizing.mechanics.stability import require_stable

SUFFIX = ".toml"

HEAD = """\
{words}.
{parameters}

A first draft to work on. The geometry follows from the parameters; loads, restraint, grades and \
catalogues are plausible inventions: replace them by those of the job, and have the result \
checked by a licensed engineer against the code in force at the site.

Lists take ranges and chains: "A0..A8" is every node, or every member along them; "A0-B1-A2" a \
chain; "A1..A7 to B1..B7" a member between each pair; "A0..A12 by 3" every third node.

combination_rule makes the combinations from the load cases; [[combinations]] may stand beside it \
or in its place."""


def start_brief(path: Path, shape: str, parameters: Mapping[str, str]) -> None:
    """Write the brief of ``shape`` with ``parameters`` (others as usual) to ``path``.

    Raises :class:`InputError` for an unknown shape, a bad parameter, or parameters that give no
    sound truss, and :class:`OutputError` when the file exists or cannot be written. An existing
    file is never touched.
    """
    text = brief_text(path.name, shape, parameters)
    if path.suffix.lower() != SUFFIX:
        raise OutputError(f"{path}: a brief is written as TOML; give a name that ends in {SUFFIX}")
    try:
        with path.open("x", encoding="utf-8", newline="\n") as stream:
            stream.write(text)
    except FileExistsError:
        raise OutputError(
            f"{path}: exists already and is left as it is; give another name, or move it away"
        ) from None
    except OSError as failure:
        raise OutputError(f"{path}: cannot be written: {failure.strerror or failure}") from failure


def brief_text(name: str, shape: str, parameters: Mapping[str, str]) -> str:
    """Return the text of the brief, after a trial reading; raises as :func:`start_brief` does."""
    sketch = draw_shape(shape, parameters)
    tables = sketch.tables()
    brief = brief_from_tables(tables, SourceFile(name=name, path=Path(name), sha256=""))
    require_stable(geometry_of(brief), [node.name for node in brief.nodes])
    given = ", ".join(f"{key} = {value}" for key, value in parameters.items())
    head = HEAD.format(
        words=f"{shape}: {SHAPES[shape].words}",
        parameters=f"Parameters: {given}; all others as usual."
        if given
        else "All parameters as usual.",
    )
    return toml_text(tables, {(): head, **sketch.comments})


def parameters_of(words: Sequence[str]) -> dict[str, str]:
    """Return parameters written as ``name=value``; raise :class:`InputError` for other words."""
    parameters: dict[str, str] = {}
    problems: list[Problem] = []
    for word in words:
        name, sign, value = (part.strip() for part in word.partition("="))
        found = ""
        if not (name and sign and value):
            found = f'"{word}"'
        elif name in parameters:
            found = f"{name} for the second time"
        if found:
            problems.append(
                Problem(
                    file="command line",
                    place="parameters",
                    found=found,
                    expected='each parameter once, as name=value, such as span=24m or "span=24 m"',
                )
            )
        parameters[name] = value
    if problems:
        raise InputError(problems)
    return parameters


def shapes_text(width: int = 90) -> str:
    """Return every shape with its parameters and their usual values, for a screen."""
    blocks = []
    shown: dict[tuple[object, ...], str] = {}
    for shape in SHAPES.values():
        lines = [f"{shape.name}: {shape.words}"]
        first = shown.setdefault(shape.parameters, shape.name)
        if first != shape.name:
            lines.append(f"    parameters as {first}")
        for parameter in shape.parameters if first == shape.name else ():
            usual = f"usually {parameter.usual}; " if parameter.usual else ""
            choices = f"{' or '.join(parameter.choices)}; " if parameter.choices else ""
            text = f"{parameter.name}: {choices}{usual}{parameter.words}"
            lines += textwrap.wrap(text, width, initial_indent="    ", subsequent_indent="        ")
        blocks.append("\n".join(lines))
    return "\n".join(blocks)
