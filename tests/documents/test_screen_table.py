"""The terminal gets a short table that fits 80 columns and stays plain in a file."""

from __future__ import annotations

import io
from dataclasses import replace

from rich.console import Console

from sizing.documents.screen import print_result


def _printed(job, *, width: int = 80, terminal: bool = False) -> str:
    stream = io.StringIO()
    print_result(job, Console(file=stream, width=width, force_terminal=terminal))
    return stream.getvalue()


def test_short_answer_names_everything_that_matters(girder_job):
    """Mass, bound, gap, status, and per group section, utilisation and what governs."""
    text = " ".join(_printed(girder_job, width=200).split())
    option = girder_job.options[0]
    assert f"Members {option.mass:.1f} kg; lower bound {option.mass:.1f} kg (mass)" in text
    assert "gap 0.00 %" in text
    assert "Every check is met; proven lightest" in text
    for group in option.groups:
        assert f"{group.name} {group.designation} {group.utilisation:.2f}" in text
        assert f"{group.governed_by} at {group.governing_member}" in text
    assert "2 cautions in the documents: read them before use." in text
    assert "Deflection sag at A4" in text


def test_table_fits_eighty_columns_and_is_plain(tower_job, large_job):
    """No line is longer than 80 characters, and no escape codes reach a file."""
    for job in (tower_job, large_job):
        text = _printed(job)
        assert all(len(line) <= 80 for line in text.splitlines())
        assert "\x1b" not in text
    assert "\x1b[" in _printed(tower_job, terminal=True)


def test_failing_checks_are_told_by_word(girder_job):
    """NO stands beside a utilisation above one, and the headline says it too."""
    option = girder_job.options[0]
    groups = (replace(option.groups[0], utilisation=1.004), *option.groups[1:])
    failing = replace(option, groups=groups, adequate=False, bound=None, gap=None)
    text = _printed(replace(girder_job, options=(failing,)))
    assert "1.00 NO" in text
    assert "NOT ADEQUATE: at least one check fails" in text
    assert "lower bound unknown" in text


def test_us_units_reach_the_screen(tower_job):
    """A brief in kip reads its mass in lb."""
    option = tower_job.options[0]
    pounds = option.mass / 0.45359237  # exact: international yard and pound agreement, 1959
    assert f"Members {pounds:.1f} lb" in _printed(tower_job)
