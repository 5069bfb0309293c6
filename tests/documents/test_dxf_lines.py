"""truss.dxf holds the centre lines in millimetres, a layer per group, every name literally."""

from __future__ import annotations

import io
import math
from datetime import date

import pytest
from ezdxf import recover
from ezdxf.lldxf.validator import is_valid_layer_name

from sizing.documents.dxf_drawing import dxf_bytes
from sizing.documents.issue import render_documents
from sizing.documents.plain_text import visible


def read(job):
    document, audit = recover.read(io.BytesIO(dxf_bytes(job)))
    assert not audit.errors
    return document


@pytest.mark.parametrize("name", ["girder_job", "tower_job"])
def test_lines_are_the_members_in_millimetres(name, request):
    """Each member is one line from node to node on the layer of its group, unit millimetre."""
    job = request.getfixturevalue(name)
    document = read(job)
    assert document.header["$INSUNITS"] == 4  # DXF reference, INSUNITS: millimetres
    lines = list(document.modelspace().query("LINE"))
    assert len(lines) == len(job.brief.members)
    for line, member in zip(lines, job.brief.members, strict=True):
        assert line.dxf.layer == job.brief.groups[member.group].name
        assert math.isclose(line.dxf.start.distance(line.dxf.end), 1e3 * member.length)
        start = (*(1e3 * x for x in job.brief.nodes[member.start].position), 0.0)[:3]
        assert line.dxf.start.isclose(start)


def test_marks_stand_as_text_on_the_layer_of_their_group(girder_job):
    """A mark and, with one answer, its section."""
    words = {(t.dxf.text, t.dxf.layer) for t in read(girder_job).modelspace().query("TEXT")}
    for member in girder_job.options[0].members:
        assert (f"{member.mark}  {member.designation}", member.group) in words


def test_names_of_any_kind_stand_literally(hostile_job, hostile_names):
    """Nodes and groups keep their names as text; layer names obey the format."""
    document = read(hostile_job)
    words = {text.plain_text() for text in document.modelspace().query("TEXT")}
    described = {layer.description for layer in document.layers}
    for name in hostile_names:
        assert visible(name) in words
    for group in hostile_job.brief.groups:
        assert visible(group.name) in described
    for layer in document.layers:
        assert is_valid_layer_name(layer.dxf.name)


def test_codes_in_names_are_text(girder_job):
    """Sequences that drawing programs take for signs print as they were written."""
    from dataclasses import replace

    odd = ("50%%d", "a^Jb", r"\U+00B0", "%%%", "100%")
    nodes = girder_job.brief.nodes
    renamed = tuple(
        replace(node, name=odd[i]) if i < len(odd) else node for i, node in enumerate(nodes)
    )
    document = read(replace(girder_job, brief=replace(girder_job.brief, nodes=renamed)))
    words = [text.plain_text() for text in document.modelspace().query("TEXT")]
    assert set(odd) <= set(words)


def test_same_job_same_bytes(girder_job):
    """No time, no random identifier."""
    assert dxf_bytes(girder_job) == dxf_bytes(girder_job)
    assert "truss.dxf" in render_documents(girder_job, date(2026, 3, 1))
