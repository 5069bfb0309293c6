"""Member marks are short, telling and different from each other."""

from __future__ import annotations

from pathlib import Path

from hypothesis import given
from hypothesis import strategies as st

from sizing.brief.marks import mark_prefixes, member_marks
from sizing.brief.model import SourceFile
from sizing.brief.shapes import shape_tables
from sizing.brief.toml_reader import brief_from_tables


def test_marks_come_from_the_initials_of_the_group() -> None:
    """Initials and a running number; numbers in names stay, shared initials take more letters."""
    groups = ["bottom-chord", "top chord", "back_column", "diagonals-1", "diagonals-2", "1", "?"]
    assert mark_prefixes(groups) == ("BC", "TC", "BAC", "D1.", "D2.", "1.", "M")


def test_groups_of_one_name_stay_apart() -> None:
    """When letters run out a further letter tells groups apart."""
    assert mark_prefixes(["v", "V", "v!", "V-"]) == ("V", "VA", "VB", "VC")


def test_no_mark_is_a_node_or_a_combination() -> None:
    """U1 and S1 are combinations of a rule; a name met up to the last member is passed over."""
    nodes = [f"D{k}" for k in range(15)]
    assert mark_prefixes(["untergurt", "struts"]) == ("UN", "ST")
    assert mark_prefixes(["diagonals"], [14], nodes) == ("DI",)
    assert mark_prefixes(["diagonals", "posts"], [3, 2], ["D4", "P3"]) == ("D", "P")
    assert mark_prefixes(["posts"], [3], ["p3"]) == ("PO",)


def test_marks_of_a_brief_keep_clear_of_its_names() -> None:
    """Braces among nodes B1 to B3, struts beside a rule, posts beside a combination P1."""
    tables = shape_tables("queen-post")
    tables["combinations"] = [
        {"name": "P1", "state": "strength", "factors": {"roofing": 1.35}},
    ]
    source = SourceFile(name="b", path=Path("b"), sha256="")
    brief = brief_from_tables(tables, source)
    marks = {member.mark for member in brief.members}
    assert {"BR1", "PO1", "BC1"} <= marks
    assert marks.isdisjoint(node.name for node in brief.nodes)
    assert marks.isdisjoint(combination.name for combination in brief.combinations)


@given(st.lists(st.tuples(st.text(max_size=12), st.integers(1, 30)), max_size=12))
def test_no_two_members_share_a_mark(groups: list[tuple[str, int]]) -> None:
    """Whatever the groups are called, every mark is unique and none is empty."""
    marks = member_marks([name for name, _ in groups], [size for _, size in groups])
    flat = [mark for group in marks for mark in group]
    assert len(set(flat)) == len(flat) == sum(size for _, size in groups)
