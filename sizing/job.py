"""The whole job: formulate each option of a brief, pick, check, and gather what is issued."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from difflib import get_close_matches
from importlib.metadata import PackageNotFoundError, version

from sizing.answer import describe
from sizing.brief.model import Brief, Option
from sizing.errors import InputError, NoAdequateSectionError, Problem
from sizing.formulation import Formulation, formulate
from sizing.no_answer import why_none
from sizing.results import JobResult, OptionResult
from sizing.selection.outcome import Limits
from sizing.selection.pick import pick


def tool_version() -> str:
    """Return the installed version of this package."""
    try:
        return version("sizing")
    except PackageNotFoundError:
        return "unpackaged"


def pick_job(
    brief: Brief,
    *,
    options: Sequence[str] = (),
    limits: Callable[[str], Limits] = lambda _: Limits(),
) -> JobResult:
    """Pick, check and describe every option of the brief (or only those named).

    ``limits`` gives the limits for the option of that name. Raises what the parts raise:
    :class:`InputError`, :class:`UnstableTrussError`, :class:`NoAdequateSectionError`,
    :class:`SolverError`, :class:`DisagreementError`.
    """
    formulations = [formulate(brief, option) for option in _chosen(brief, options)]
    results = []
    for formulation in formulations:
        picked = pick(formulation.problem, limits(formulation.option.name))
        if picked.sections is None:
            raise NoAdequateSectionError(why_none(formulation, picked))
        results.append(describe(formulation, picked.sections.tolist(), picked, tool_version()))
    return JobResult(brief=brief, version=tool_version(), options=tuple(results))


def compare_job(brief: Brief, *, limits: Callable[[str], Limits] = lambda _: Limits()) -> JobResult:
    """Pick every option of the brief; one that no section fits is named, not fatal.

    Raises as :func:`pick_job` does, and :class:`NoAdequateSectionError` when no option has an
    answer.
    """
    results: list[OptionResult] = []
    without: list[tuple[str, str]] = []
    for option in brief.options:
        try:
            results += pick_job(brief, options=[option.name], limits=limits).options
        except NoAdequateSectionError as error:
            without.append((option.name, str(error)))
    if not results:
        raise NoAdequateSectionError("; ".join(reason for _, reason in without))
    return JobResult(
        brief=brief,
        version=tool_version(),
        options=tuple(results),
        without_answer=tuple(without),
    )


def check_job(
    brief: Brief,
    sections: Mapping[str, Mapping[str, str]],
    options: Sequence[str] = (),
    *,
    given_in: str | None = None,
) -> JobResult:
    """Check given designations per option and group, without picking.

    ``given_in`` names the file of the sections, for messages; by default that of the brief.
    Raises :class:`InputError` for a group without a section or a designation that the
    catalogue does not hold.
    """
    file = brief.source.name if given_in is None else given_in
    results = []
    for option in _chosen(brief, options or [o.name for o in brief.options if o.name in sections]):
        formulation = formulate(brief, option)
        rows = _rows_of(formulation, sections.get(option.name, {}), file)
        results.append(describe(formulation, rows, None, tool_version()))
    return JobResult(brief=brief, version=tool_version(), options=tuple(results))


def _chosen(brief: Brief, names: Sequence[str]) -> list[Option]:
    known = {option.name: option for option in brief.options}
    unknown = [name for name in names if name not in known]
    if unknown:
        raise InputError(
            [
                Problem(
                    file=brief.source.name,
                    place="options",
                    found=f"no option {name!r}",
                    expected="one of " + ", ".join(known),
                    fix=_nearest(name, list(known)),
                )
                for name in unknown
            ]
        )
    return [known[name] for name in names] if names else list(brief.options)


def _nearest(name: str, known: list[str]) -> str:
    close = get_close_matches(name, known, n=1)
    return f"Did you mean {close[0]!r}?" if close else ""


def _rows_of(formulation: Formulation, given: Mapping[str, str], file: str) -> list[int]:
    designations = formulation.catalogue.designation
    index = {name: row for row, name in enumerate(designations)}
    problems, rows = [], []
    for group in formulation.brief.groups:
        name = given.get(group.name)
        if name is not None and name in index:
            rows.append(index[name])
            continue
        problems.append(
            Problem(
                file=file,
                place=f"sections.{formulation.option.name}.{group.name}",
                found="no section" if name is None else repr(name),
                expected=f"a designation of catalogue {formulation.catalogue.name}",
                fix=_nearest(name or "", list(designations)),
            )
        )
    if problems:
        raise InputError(problems)
    return rows
