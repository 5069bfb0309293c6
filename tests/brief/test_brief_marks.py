"""Member marks are short, telling and different from each other."""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from sizing.brief.marks import mark_prefixes, member_marks


def test_marks_come_from_the_initials_of_the_group() -> None:
    """Initials and a running number; numbers in names stay, shared initials take more letters."""
    groups = ["bottom-chord", "top chord", "back_column", "diagonals-1", "diagonals-2", "1", "?"]
    assert mark_prefixes(groups) == ("BC", "TC", "BAC", "D1.", "D2.", "1.", "M")


def test_groups_of_one_name_stay_apart() -> None:
    """When letters run out a further letter tells groups apart."""
    assert mark_prefixes(["v", "V", "v!", "V-"]) == ("V", "VA", "VB", "VC")


@given(st.lists(st.tuples(st.text(max_size=12), st.integers(1, 30)), max_size=12))
def test_no_two_members_share_a_mark(groups: list[tuple[str, int]]) -> None:
    """Whatever the groups are called, every mark is unique and none is empty."""
    marks = member_marks([name for name, _ in groups], [size for _, size in groups])
    flat = [mark for group in marks for mark in group]
    assert len(set(flat)) == len(flat) == sum(size for _, size in groups)
