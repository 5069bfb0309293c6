"""result.json carries the whole answer in SI units, in strict JSON, with a version."""

from __future__ import annotations

import json
import math
from dataclasses import replace

import pytest

from sizing.documents.result_json import (
    FORMAT_VERSION,
    field_descriptions,
    json_bytes,
    result_document,
)


@pytest.fixture(scope="module")
def document(girder_job):
    return json.loads(json_bytes(girder_job))


def test_format_is_named_and_versioned(document):
    """A script can tell what it reads."""
    assert document["format"] == {"name": "sizing result", "version": FORMAT_VERSION}
    assert document["brief"]["sha256"] == "ab" * 32


def test_members_carry_forces_of_every_combination(document, girder_job):
    """Forces in N by combination name, tension positive, as computed."""
    answer = document["options"]["steel"]
    for member in girder_job.options[0].members:
        entry = answer["members"][member.name]
        assert list(entry["forces_N"].values()) == list(member.forces)
        assert list(entry["forces_N"]) == [c.name for c in girder_job.brief.combinations]
        assert entry["utilisation"] == member.utilisation
        assert entry["clause"] == member.governing_clause
        assert entry["met"]
        if member.compression:
            assert entry["compression"]["force_N"] == member.compression.force < 0.0


def test_reactions_balance_the_applied_loads(document):
    """What the supports give and what the loads ask add to nothing, per combination."""
    answer = document["options"]["steel"]
    for name, combination in answer["combinations"].items():
        total = [
            math.fsum(r["components_N"][axis] for r in answer["reactions"]
                      if r["combination"] == name)
            for axis in (0, 1)
        ]  # fmt: skip
        assert total == pytest.approx([-a for a in combination["applied_N"]], abs=1e-6)


def test_deflections_are_repeated_by_the_displacements(document):
    """A limited deflection is the displacement of that node in that combination."""
    answer = document["options"]["steel"]
    for entry in answer["deflections"]:
        moved = answer["displacements_m"][entry["combination"]][entry["node"]]
        assert entry["value_m"] == moved[1]
        assert entry["utilisation"] == pytest.approx(abs(entry["value_m"]) / entry["limit_m"])


def test_masses_add_up(document):
    """Members, groups and take-off total the same mass."""
    answer = document["options"]["steel"]
    for part in (answer["members"].values(), answer["groups"].values(), answer["take_off"]):
        assert math.fsum(e["mass_kg"] for e in part) == pytest.approx(answer["mass_kg"], rel=1e-12)


def test_sections_are_given_by_group(document, girder_job):
    """The short form that a later check reads: group name to designation."""
    sections = document["options"]["steel"]["sections"]
    assert sections == {g.name: g.designation for g in girder_job.options[0].groups}


def test_numbers_that_do_not_exist_are_null(girder_job):
    """No NaN or infinity reaches the file: JSON has neither."""
    option = girder_job.options[0]
    member = replace(option.members[0], utilisation=math.inf, slenderness_limit=None)
    odd = replace(
        option, bound=None, gap=None, members=(member, *option.members[1:]), adequate=False
    )
    text = json_bytes(replace(girder_job, options=(odd,))).decode()
    assert "NaN" not in text
    assert "Infinity" not in text
    answer = json.loads(text)["options"]["steel"]
    assert answer["bound"] is answer["gap"] is answer["utilisation"] is None
    assert answer["members"][member.name]["met"] is False


def test_only_the_time_taken_varies(girder_job):
    """Two runs differ in ``seconds`` alone."""
    slower = replace(girder_job.options[0], seconds=99.0)
    a = result_document(girder_job)
    b = result_document(replace(girder_job, options=(slower,)))
    a["options"]["steel"].pop("seconds")
    b["options"]["steel"].pop("seconds")
    assert a == b


def test_every_key_is_described(document):
    """The description for the manual names each key of the file and no other."""
    described = [path for path, _ in field_descriptions()]
    top = {path for path in described if "." not in path}
    inner = {path.removeprefix("options.*.") for path in described if path.startswith("options.*.")}
    assert top == set(document)
    assert inner == set(document["options"]["steel"])
    assert all(text for _, text in field_descriptions())
