"""The same brief in kN and m and in kip and ft picks the same sections."""

import re
from pathlib import Path

from sizing.brief.toml_reader import read_brief
from sizing.job import pick_job

EXAMPLE = Path(__file__).parents[1] / "examples" / "market-hall.toml"
KIP, FOOT = 4.4482216152605, 0.3048


def in_us_units(text):
    """Rewrite the example: every node in ft, every nodal force in kip, lengths as text kept."""
    text = text.replace('force = "kN", length = "m"', 'force = "kip", length = "ft"')
    rows = []
    for line in text.splitlines():
        node = re.fullmatch(r"(\w+) = \[([-\d.]+), ([-\d.]+)\]", line)
        new = line
        if node:
            force = node[2] == "0"
            unit = KIP if force else FOOT
            x, y = (float(node[k]) / unit for k in (2, 3))
            new = f"{node[1]} = [{x!r}, {y!r}]"
        rows.append(new)
    return "\n".join(rows)


def test_unit_systems_pick_the_same_sections(tmp_path):
    """Same sections, same mass, same forces to rounding, in metric and US customary units."""
    other = tmp_path / "us.toml"
    other.write_text(in_us_units(EXAMPLE.read_text(encoding="utf-8")), encoding="utf-8")
    metric, us = (pick_job(read_brief(path)).options[0] for path in (EXAMPLE, other))
    assert [g.designation for g in us.groups] == [g.designation for g in metric.groups]
    assert abs(us.mass - metric.mass) < 1e-6
    for a, b in zip(us.members, metric.members, strict=True):
        assert all(
            abs(x - y) <= 1e-6 + 1e-9 * abs(y) for x, y in zip(a.forces, b.forces, strict=True)
        )
