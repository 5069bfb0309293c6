"""Lightest adequate catalogue sections for pin-jointed trusses, checked and proven.

The names below are the public surface; each is loaded when first used, so that importing the
package costs nothing.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

_HOME = {
    "Brief": "sizing.brief.model",
    "Catalogue": "sizing.brief.sections",
    "DisagreementError": "sizing.errors",
    "InputError": "sizing.errors",
    "JobResult": "sizing.results",
    "Limits": "sizing.selection.outcome",
    "NoAdequateSectionError": "sizing.errors",
    "OptionResult": "sizing.results",
    "OutputError": "sizing.errors",
    "Pick": "sizing.selection.outcome",
    "Problem": "sizing.errors",
    "SizingError": "sizing.errors",
    "SizingProblem": "sizing.selection.problem",
    "SolverError": "sizing.errors",
    "UnstableTrussError": "sizing.errors",
    "check_job": "sizing.job",
    "formulate": "sizing.formulation",
    "pick": "sizing.selection.pick",
    "pick_job": "sizing.job",
    "read_brief": "sizing.brief.toml_reader",
    "read_catalogue": "sizing.brief.catalogue_reader",
    "write_documents": "sizing.documents.issue",
}

__all__ = sorted(_HOME)  # noqa: PLE0605 - the names live in one place, a test compares them


def __getattr__(name: str) -> Any:
    """Load a public name from the module that defines it."""
    if name not in _HOME:
        raise AttributeError(f"module 'sizing' has no attribute {name!r}")
    return getattr(import_module(_HOME[name]), name)


def __dir__() -> list[str]:
    return sorted(_HOME)
