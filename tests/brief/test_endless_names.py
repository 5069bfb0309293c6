"""A name of thousands of characters is cut in every message, wherever it stands."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from sizing.brief.catalogue_reader import read_catalogue
from sizing.brief.findings import key_path_text
from sizing.brief.model import SourceFile
from sizing.brief.shapes import shape_tables
from sizing.brief.toml_reader import brief_from_tables
from sizing.errors import InputError, Problem

ENDLESS = "g" * 5000


@pytest.mark.parametrize("table", ["nodes", "supports", "groups", "cases", "options"])
@pytest.mark.parametrize("inside", [False, True])
@pytest.mark.parametrize("name", [ENDLESS, "g " * 2500 + "g", "g!" * 2500])
def test_an_endless_name_is_cut(table: str, inside: bool, name: str) -> None:
    """As the name of an entry and of a key: each message is shorter than the name by far."""
    tables: dict[str, Any] = shape_tables("king-post")
    if inside and table in ("supports", "groups", "cases"):  # options have values of their standard
        next(iter(tables[table].values()))[name] = 1
    else:
        tables[table][name] = dict(next(iter(tables[table].values()))) if table != "nodes" else [1]
    with pytest.raises(InputError) as refusal:
        brief_from_tables(tables, SourceFile(name="b", path=Path("b"), sha256=""))
    assert all(len(line) < 700 for line in str(refusal.value).splitlines())


@pytest.mark.parametrize("key", ["combinations", "deflection_limits"])
def test_an_endless_name_in_a_list_of_tables_is_cut(key: str) -> None:
    """Entries that carry their name inside are named short as well."""
    tables = shape_tables("king-post")
    tables[key] = [{"name": ENDLESS}]
    with pytest.raises(InputError) as refusal:
        brief_from_tables(tables, SourceFile(name="b", path=Path("b"), sha256=""))
    assert all(len(line) < 700 for line in str(refusal.value).splitlines())


def test_an_endless_catalogue_is_cut(tmp_path: Path) -> None:
    """The name of a file that cannot be is told short, in each part of the message."""
    with pytest.raises(InputError) as refusal:
        read_catalogue(ENDLESS, tmp_path)
    assert len(str(refusal.value)) < 1000


def test_usual_places_and_paths_stay_whole() -> None:
    """What is no longer than a name may be is not cut."""
    assert key_path_text(("groups", "g" * 60, "members", 3)) == f"groups.{'g' * 60}.members[3]"
    assert key_path_text(("groups", "g" * 61)) == f"groups.{'g' * 57}..."
    assert key_path_text(("deflection_limits", f"[{'g' * 60}]")) == (
        f"deflection_limits[{'g' * 60}]"
    )
    assert key_path_text(("deflection_limits", f"[{'g' * 61}]")) == (
        f"deflection_limits[{'g' * 57}...]"
    )
    path = "/".join(["f" * 255] * 3)
    assert Problem(file=path, place="p", found="f", expected="e").text().startswith(path)
