"""Buckling lengths of a group: one rule for both planes, or one for each."""

from __future__ import annotations

from collections.abc import Sequence

from sizing.brief.findings import Findings, KeyPath, Quantities, shown
from sizing.brief.model import BucklingLength
from sizing.brief.nodes_and_supports import FARTHEST
from sizing.brief.raw_tables import RawGroup

GREATEST_FACTOR = 100.0
LEAST_FACTOR = 0.02
"""Nobody restrains a member fifty times along its length: the length is in another unit."""
LEAST_USUAL_FACTOR = 0.5
"""A member held against turning at both ends buckles over half its length (Euler); a shorter
buckling length means intermediate restraint that the brief does not show."""
GREATEST_USUAL_IN_PLANE = 2.0
"""A cantilever buckles over twice its length (Euler); a greater factor in plane may be a length
written without its unit."""

EXPECTED = (
    'a factor on the member\'s length, such as 0.9, a length with its unit, such as "5.0 m", '
    "or { in_plane = ..., out_of_plane = ... }"
)
EXPECTED_ONE = (
    'a factor on the member\'s length, such as 0.9, or a length with its unit, such as "5.0 m"'
)
OWN_LENGTH = BucklingLength()


def read_buckling_length(
    group: KeyPath,
    entry: RawGroup,
    lengths: Sequence[float],
    findings: Findings,
    quantities: Quantities,
    *,
    given: bool,
) -> tuple[BucklingLength, BucklingLength]:
    """Return the rules in plane and out of plane; ``lengths`` are the members' own, in m.

    A group that says nothing takes its own length in both planes, with a caution: the length
    between restraints out of plane is the most dangerous thing to take for granted.
    """
    path = (*group, "buckling_length")
    value, name = entry.buckling_length, str(group[-1])
    if value is None:
        if given:
            _caution_default(name, entry, findings, "buckling_length is not given")
        return OWN_LENGTH, OWN_LENGTH
    if not isinstance(value, dict):
        if entry.restrained_nodes:
            findings.add(
                path,
                found="one buckling length for both planes beside restrained_nodes",
                expected="the length out of plane given once",
                fix="Write buckling_length = { in_plane = ... } and keep restrained_nodes.",
            )
        rule = _one(path, value, EXPECTED, findings, quantities)
        _judge(path, name, "", rule, lengths, findings)
        return rule, rule
    return _two(path, value, name, entry, lengths, findings, quantities)


def _two(
    path: KeyPath,
    value: dict[str, object],
    name: str,
    entry: RawGroup,
    lengths: Sequence[float],
    findings: Findings,
    quantities: Quantities,
) -> tuple[BucklingLength, BucklingLength]:
    known = ("in_plane", "out_of_plane")
    for key in value:
        if key not in known:
            findings.add(
                (*path, key),
                found=f'the unknown key "{key}"',
                expected="in_plane and out_of_plane",
                fix=findings.did_you_mean(key, known),
            )
    rules = []
    for key in known:
        words = key.replace("_", " ")
        if key not in value:
            rules.append(OWN_LENGTH)
            if set(value) <= set(known):
                _caution_default(name, entry, findings, f"no buckling length {words} is given", key)
            continue
        rule = _one((*path, key), value[key], EXPECTED_ONE, findings, quantities)
        _judge((*path, key), name, words, rule, lengths, findings)
        rules.append(rule)
    if entry.restrained_nodes and "out_of_plane" in value:
        findings.add(
            (*path, "out_of_plane"),
            found="a buckling length out of plane beside restrained_nodes",
            expected="the length out of plane given once",
            fix="Delete out_of_plane or restrained_nodes.",
        )
    return rules[0], rules[1]


def _caution_default(
    name: str, entry: RawGroup, findings: Findings, what: str, key: str = ""
) -> None:
    if entry.restrained_nodes and key == "out_of_plane":
        return
    planes = {"in_plane": "in plane", "out_of_plane": "out of plane"}.get(key, "in both planes")
    if entry.restrained_nodes:
        planes = "in plane"
    findings.caution(
        f"Group {name}: {what}; each member's own length is taken {planes}"
        + (
            "."
            if planes == "in plane"
            else ", so every node of the group must be held out of plane."
        )
    )


def _one(
    path: KeyPath, value: object, expected: str, findings: Findings, quantities: Quantities
) -> BucklingLength:
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        factor = quantities.read(path, value, "dimensionless")
        if factor is not None and not 0.0 < factor <= GREATEST_FACTOR:
            findings.add(
                path,
                found=f"{factor:g}",
                expected=f"a factor above 0 and up to {GREATEST_FACTOR:g}",
                fix='A length is written with its unit, such as "5.0 m".',
            )
        return BucklingLength(rule="factor", value=1.0 if factor is None else factor)
    if not isinstance(value, str):
        findings.add(path, found=shown(value), expected=expected)
        return OWN_LENGTH
    length = quantities.read(path, value, "length")
    if length is not None and not 0.0 < length <= FARTHEST:
        findings.add(path, found=shown(value), expected="a length above 0 and up to 10 km")
    return BucklingLength(rule="length", value=1.0 if length is None else length)


def _judge(
    path: KeyPath,
    name: str,
    plane: str,
    rule: BucklingLength,
    lengths: Sequence[float],
    findings: Findings,
) -> None:
    longest = max(lengths, default=0.0)
    if longest <= 0.0 or rule.value <= 0.0:
        return
    ratio = rule.of(longest) / longest
    where = f" {plane}" if plane else ""
    if ratio < LEAST_FACTOR:
        findings.add(
            path,
            found=f"{ratio:.2g} of the longest member",
            expected=f"at least {LEAST_FACTOR:g} of it",
            fix="Check the unit of length.",
        )
    elif ratio < LEAST_USUAL_FACTOR:
        findings.caution(
            f"Group {name}: the buckling length{where} is {ratio:.2f} of the longest member; below "
            "0.5 it needs restraint between the nodes that the brief does not show."
        )
    if rule.rule == "factor" and plane != "out of plane" and ratio > GREATEST_USUAL_IN_PLANE:
        findings.caution(
            f"Group {name}: the buckling length{where} is {ratio:g} times each member's length; "
            'if a length was meant, write its unit, such as "5.0 m".'
        )
