"""The command line: ``sizing pick``, ``sizing check``. One place maps errors to exit codes."""

from __future__ import annotations

import os
import signal
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any

import typer

from sizing.errors import (
    DisagreementError,
    InputError,
    NoAdequateSectionError,
    OutputError,
    SizingError,
    SolverError,
    UnstableTrussError,
)

if TYPE_CHECKING:
    from collections.abc import Callable
    from types import FrameType

    from sizing.brief.model import Brief
    from sizing.results import JobResult
    from sizing.selection.outcome import Limits, Progress

EXIT_CODES: dict[type[SizingError], int] = {
    InputError: 2,
    UnstableTrussError: 3,
    NoAdequateSectionError: 4,
    SolverError: 5,
    DisagreementError: 6,
    OutputError: 7,
}
"""Exit codes: 0 adequate and issued; 1 the given sections are not adequate (documents written);
8 a certificate is refused; 9 an error nobody foresaw; 130 interrupted."""

ONE_THREAD = ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS")
"""Matrices here are small: several threads only get in each other's way and round differently."""

NOT_ADEQUATE = 1
UNFORESEEN = 9
REFUSED = 8
INTERRUPTED = 130

app = typer.Typer(
    add_completion=False,
    no_args_is_help=True,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
    help=(
        "Pick the lightest adequate catalogue section for every group of a pin-jointed truss, "
        "with proof, and issue the member schedule. A licensed engineer must check the result."
    ),
)

BriefPath = Annotated[
    Path, typer.Argument(metavar="BRIEF", help="The brief: a TOML file or a workbook (.xlsx).")
]
OutFolder = Annotated[
    Path | None, typer.Option("--out", metavar="DIR", help="Folder for the documents.")
]
OptionNames = Annotated[
    list[str] | None,
    typer.Option("--option", metavar="NAME", help="Only this option of the brief (repeatable)."),
]
TimeLimit = Annotated[
    float, typer.Option("--time-limit", metavar="SECONDS", min=0.1, help="Per option.")
]
Since = Annotated[
    Path | None,
    typer.Option("--since", metavar="FILE", help="Earlier result.json; tell what changed."),
]
Gap = Annotated[
    float,
    typer.Option("--gap", metavar="PERCENT", min=0.0, help="Stop when the gap is this small."),
]


@app.command("pick")
def pick_command(
    brief: BriefPath,
    out: OutFolder = None,
    option: OptionNames = None,
    time_limit: TimeLimit = 600.0,
    gap: Gap = 0.0,
    near_ties: Annotated[
        int,
        typer.Option("--near-ties", metavar="N", min=0, help="List N other designs within 1 %."),
    ] = 0,
    certificate: Annotated[
        bool,
        typer.Option("--certificate", help="Write the proof as a file, for sizing verify."),
    ] = False,
    since: Since = None,
) -> None:
    """Pick the lightest adequate section for every group and issue the documents."""
    from dataclasses import replace

    from sizing.brief.toml_reader import read_brief
    from sizing.job import pick_job

    if certificate and out is None:
        raise typer.BadParameter("--certificate needs --out, the folder to write it to")
    previous = _before_the_work(out, since)
    asked = read_brief(brief)

    with _stop_on_interrupt() as stop:
        result = pick_job(
            asked,
            options=option or (),
            limits=lambda name: replace(
                _limits(f"{name}, {asked.minimise}", time_limit, gap / 100.0, stop),
                near_ties=near_ties,
                certificate=certificate,
            ),
        )
        _issue(result, out, previous)


@app.command("verify")
def verify_command(
    brief: BriefPath,
    certificate: Annotated[
        Path, typer.Argument(metavar="CERTIFICATE", help="Written by sizing pick --certificate.")
    ],
) -> None:
    """Check a certificate anew from the brief, without the search that made it."""
    from sizing.brief.toml_reader import read_brief
    from sizing.documents.verification_text import verification_lines
    from sizing.verification import verify_certificate

    asked = read_brief(brief)
    found = verify_certificate(asked, certificate)
    for line in verification_lines(asked, found):
        typer.echo(line)
    if not (found.accepted and found.adequate):
        raise typer.Exit(REFUSED)


@app.command("compare")
def compare_command(
    brief: BriefPath,
    out: OutFolder = None,
    time_limit: TimeLimit = 600.0,
    gap: Gap = 0.0,
) -> None:
    """Pick every option of the brief and set the answers side by side."""
    from sizing.brief.toml_reader import read_brief
    from sizing.documents.side_by_side import print_comparison
    from sizing.job import compare_job

    _before_the_work(out)
    asked = read_brief(brief)
    with _stop_on_interrupt() as stop:
        result = compare_job(
            asked,
            limits=lambda name: _limits(f"{name}, {asked.minimise}", time_limit, gap / 100.0, stop),
        )
        written = _write(result, out)
        print_comparison(result)
        _tell(written)


@app.command("catalogue")
def catalogue_command(
    file: Annotated[str, typer.Argument(metavar="FILE", help="A CSV file or a shipped name.")],
) -> None:
    """Check a section catalogue and print what was understood of it."""
    from sizing.brief.catalogue_reader import read_catalogue
    from sizing.documents.side_by_side import print_catalogue

    print_catalogue(read_catalogue(file, Path.cwd()))


@app.command("convert")
def convert_command(
    brief: BriefPath,
    file: Annotated[
        Path, typer.Argument(metavar="FILE", help="The new file, .xlsx or .toml; none is replaced.")
    ],
) -> None:
    """Write a brief as a workbook, or a workbook as text; both hold the same."""
    from sizing.brief.conversion import convert_brief

    for remark in convert_brief(brief, file):
        typer.echo(remark, err=True)
    typer.echo(f"written: {file}")


@app.command("check")
def check_command(
    brief: BriefPath,
    sections: Annotated[
        Path | None,
        typer.Option(
            "--sections",
            metavar="FILE",
            help="Sections per option and group: a small TOML file or a result.json.",
        ),
    ] = None,
    out: OutFolder = None,
    option: OptionNames = None,
) -> None:
    """Check given sections against the brief, or without sections the brief itself."""
    from sizing.brief.sections_reader import read_sections
    from sizing.brief.toml_reader import read_brief
    from sizing.job import check_job

    asked = read_brief(brief)
    if sections is None:
        _outline(asked, out)
        return
    given = read_sections(sections, asked)
    result = check_job(asked, given, options=option or (), given_in=sections.name)
    _issue(result, out)
    if not all(answer.adequate for answer in result.options):
        raise typer.Exit(NOT_ADEQUATE)


def _outline(brief: Brief, out: Path | None) -> None:
    """Print loads, reactions, determinacy and buckling lengths of a brief, and draw it."""
    from sizing.documents.issue import DRAWING, replace_all
    from sizing.documents.outline_drawing import outline_svg
    from sizing.documents.outline_text import print_outline
    from sizing.outline import outline_of

    outline = outline_of(brief)
    written = replace_all(out, {DRAWING: outline_svg(brief)}) if out is not None else ()
    print_outline(outline)
    for path in written:
        typer.echo(f"written: {path}")


@app.command("start")
def start_command(
    file: Annotated[
        Path | None, typer.Argument(metavar="FILE", help="The new brief, a TOML file.")
    ] = None,
    parameters: Annotated[
        list[str] | None,
        typer.Argument(metavar="NAME=VALUE", help='Parameters, such as span="24 m".'),
    ] = None,
    shape: Annotated[
        str, typer.Option("--shape", metavar="NAME", help="The shape; --shapes lists them.")
    ] = "",
    shapes: Annotated[
        bool, typer.Option("--shapes", help="List the shapes and their parameters.")
    ] = False,
) -> None:
    """Write a brief of a usual truss, complete and ready to be changed."""
    from sizing.start import parameters_of, shapes_text, start_brief

    if shapes or file is None or not shape:
        typer.echo(shapes_text())
        if not shapes:
            typer.echo("\nGive a file and one of these: sizing start FILE --shape NAME", err=True)
            raise typer.Exit(2)
        return
    start_brief(file, shape, parameters_of(parameters or ()))
    typer.echo(f"written: {file}")
    typer.echo(f"next: sizing check {file}, then sizing pick {file} --out DIR")


def _before_the_work(out: Path | None, since: Path | None = None) -> dict[str, Any] | None:
    """Refuse a folder that cannot take documents, and read the earlier result, if any."""
    if out is not None:
        from sizing.documents.issue import refuse_impossible

        refuse_impossible(out)
    if since is None:
        return None
    from sizing.documents.changes import read_previous

    return read_previous(since)


def _issue(result: JobResult, out: Path | None, previous: dict[str, Any] | None = None) -> None:
    from sizing.documents.screen import print_result

    written = _write(result, out, previous)
    print_result(result)
    if previous is not None:
        from sizing.documents.changes import changes_lines

        for line in changes_lines(previous, result):
            typer.echo(line)
    _tell(written)


def _write(
    result: JobResult, out: Path | None, previous: dict[str, Any] | None = None
) -> tuple[Path, ...]:
    if out is None:
        return ()
    from sizing.documents.issue import write_documents

    return write_documents(result, out, previous=previous)


def _tell(written: tuple[Path, ...]) -> None:
    for path in written:
        typer.echo(f"written: {path}")


def _limits(name: str, seconds: float, gap: float, stop: Callable[[], bool]) -> Limits:
    from sizing.selection.outcome import Limits

    return Limits(seconds=seconds, gap=gap, stop=stop, report=_Reporter(name))


class _Reporter:
    """One line on standard error: rewritten in place on a terminal, else only when it changes."""

    def __init__(self, name: str) -> None:
        self.name = name
        self.last = ""

    def __call__(self, progress: Progress) -> None:
        best = "none yet" if progress.incumbent is None else f"{progress.incumbent:.1f}"
        bound = "none yet" if progress.bound is None else f"{progress.bound:.1f}"
        gap = "" if progress.gap is None else f", gap {progress.gap:.2%}"
        line = f"{self.name}: {progress.phase}: best {best}, bound {bound}{gap}"
        if sys.stderr.isatty():
            timed = f"{line}, {progress.analyses} analyses, {progress.seconds:.1f} s"
            sys.stderr.write(f"\r\x1b[2K{timed[:110]}")
        elif line != self.last:
            sys.stderr.write(line + "\n")
        self.last = line
        sys.stderr.flush()


@contextmanager
def _stop_on_interrupt() -> Iterator[Callable[[], bool]]:
    """Turn the first Ctrl-C into a request to stop with the best design; the second one ends."""
    asked = False

    def handle(_signal: int, _frame: FrameType | None) -> None:
        nonlocal asked
        if asked:
            raise KeyboardInterrupt
        asked = True
        sys.stderr.write("\nstopping with the best checked design so far ...\n")

    before = signal.signal(signal.SIGINT, handle)
    try:
        yield lambda: asked
    finally:
        signal.signal(signal.SIGINT, before)
        if sys.stderr.isatty():
            sys.stderr.write("\r\x1b[2K")


def main() -> None:
    """Run the command line; a mistake in a file ends in a message and an exit code."""
    for variable in ONE_THREAD:
        os.environ.setdefault(variable, "1")
    try:
        app()
    except SizingError as error:
        _explain(error)
        raise SystemExit(EXIT_CODES[type(error)]) from None
    except KeyboardInterrupt:
        _say_interrupted()
        raise SystemExit(INTERRUPTED) from None
    except Exception as error:  # the last resort: no other code may pose as 1
        if os.environ.get("SIZING_TRACE"):
            raise
        sys.stderr.write(
            f"an error that should not happen: {type(error).__name__}: {error}\n"
            "Nothing more was written. Please report it; SIZING_TRACE=1 shows where it arose.\n"
        )
        raise SystemExit(UNFORESEEN) from None
    except SystemExit as ended:
        if ended.code == INTERRUPTED:  # typer ends with this code, without a word
            _say_interrupted()
        raise


def _say_interrupted() -> None:
    sys.stderr.write("interrupted; nothing was written\n")


def _explain(error: SizingError) -> None:
    if isinstance(error, InputError):
        many = len(error.problems)
        sys.stderr.write(f"{many} {'mistake' if many == 1 else 'mistakes'} to mend:\n")
        for problem in error.problems:
            sys.stderr.write(f"- {problem.text()}\n")
    else:
        sys.stderr.write(f"{error}\n")
    sys.stderr.write("Nothing was written.\n")
