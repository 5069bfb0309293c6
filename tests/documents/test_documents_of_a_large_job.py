"""Three hundred members in twenty-five combinations make documents of a size to send by mail."""

from __future__ import annotations

import time
from datetime import date

import pytest

from sizing.documents.issue import render_documents

LARGEST = 3_000_000
"""Bytes of one document that still travel by mail (common practice)."""


def test_documents_stay_small(large_job):
    """No document of a large job exceeds 3 MB."""
    option = large_job.options[0]
    assert len(option.members) >= 300
    assert len(option.combinations) >= 25
    for name, content in render_documents(large_job, date(2026, 3, 1)).items():
        assert len(content) < LARGEST, name


@pytest.mark.bench
def test_time_for_documents_of_a_large_job(large_job):
    """Print processor seconds and bytes of each run; wanted under 5 s, never asserted."""
    for _ in range(3):
        start = time.process_time()
        contents = render_documents(large_job, date(2026, 3, 1))
        seconds = time.process_time() - start
        sizes = ", ".join(f"{name} {len(c) / 1e3:.0f} kB" for name, c in contents.items())
        print(f"\n{seconds:.2f} s; {sizes}")
