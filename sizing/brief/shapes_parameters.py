"""Parameters of a ready shape: what they are called, their bounds, and reading them."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Literal

from sizing.brief.findings import Findings, quoted, shown
from sizing.brief.model import Units
from sizing.units import Kind, QuantityError, parse

ParameterKind = Literal[
    "length", "lengths", "count", "even", "degrees", "pressure", "force", "line load", "choice"
]

Values = Mapping[str, Any]
"""Parameter values by name in SI units (spans as a tuple); None where nothing was said."""

UNITS = Units(force="kN", length="m")
"""Units of bare numbers among the parameters, and of the briefs written from them."""

MOST_SPANS = 8


@dataclass(frozen=True, kw_only=True)
class Parameter:
    """One parameter; ``usual`` is its value as a user would write it.

    An empty ``usual`` leaves the value to the shape; ``words`` then say what it takes. Bounds
    are in SI units, or degrees.
    """

    name: str
    kind: ParameterKind
    words: str
    usual: str = ""
    least: float = 0.0
    greatest: float = math.inf
    choices: tuple[str, ...] = ()


def read_parameters(
    shape: str, parameters: Sequence[Parameter], given: Mapping[str, object]
) -> dict[str, Any]:
    """Return the value of every parameter; raise :class:`InputError` with all mistakes."""
    findings = Findings(f"shape {shape}")
    known = [p.name for p in parameters]
    for name in given:
        if name not in known:
            findings.add(
                (name,),
                found=f"the unknown parameter {quoted(name)}",
                expected=f"one of {', '.join(known)}",
                fix=findings.did_you_mean(name, known),
            )
    values = {p.name: _value(p, given.get(p.name, p.usual), findings) for p in parameters}
    findings.raise_if_any()
    return values


def _value(parameter: Parameter, given: object, findings: Findings) -> Any:
    if given == "":
        if parameter.usual:
            findings.add((parameter.name,), found="nothing", expected=parameter.words)
        return None
    if parameter.kind == "choice":
        return _choice(parameter, given, findings)
    if parameter.kind == "lengths":
        parts = [t.strip() for t in given.split(",")] if isinstance(given, str) else given
        parts = [parts] if isinstance(parts, (int, float)) else parts
        if not isinstance(parts, (list, tuple)) or not 1 <= len(parts) <= MOST_SPANS:
            expected = f'1 to {MOST_SPANS} lengths, such as "24 m, 30 m"'
            findings.add((parameter.name,), found=shown(given), expected=expected)
            return None
        values = [_number(parameter, part, "length", findings) for part in parts]
        return None if None in values else tuple(values)
    if parameter.kind in ("count", "even"):
        return _count(parameter, given, findings)
    kinds: dict[str, Kind] = {
        "length": "length", "degrees": "dimensionless", "pressure": "pressure",
        "force": "force", "line load": "line load",
    }  # fmt: skip
    return _number(parameter, given, kinds[parameter.kind], findings)


def _number(parameter: Parameter, given: object, kind: Kind, findings: Findings) -> float | None:
    try:
        value = parse(_plain(given), kind, UNITS)
    except QuantityError as error:
        findings.add((parameter.name,), found=error.found, expected=error.expected, fix=error.fix)
        return None
    if not parameter.least <= value <= parameter.greatest:
        low, high = _bound(parameter.least, kind), _bound(parameter.greatest, kind)
        findings.add((parameter.name,), found=shown(given), expected=f"{low} to {high}")
        return None
    return value


def _bound(value: float, kind: Kind) -> str:
    label, size = {
        "length": (" m", 1.0), "pressure": (" kN/m2", 1e3), "force": (" kN", 1e3),
        "line load": (" kN/m", 1e3),
    }.get(kind, (" degrees", 1.0))  # fmt: skip
    return f"{value / size:g}{label}"


def _count(parameter: Parameter, given: object, findings: Findings) -> int | None:
    value = _plain(given)
    whole = isinstance(value, (int, float)) and not isinstance(value, bool)
    even = parameter.kind == "even"
    if (
        not whole
        or not parameter.least <= value <= parameter.greatest  # refuses NaN and infinity as well
        or value != int(value)
        or (even and value % 2)
    ):
        what = "an even number" if even else "a whole number"
        expected = f"{what} from {parameter.least:g} to {parameter.greatest:g}"
        findings.add((parameter.name,), found=shown(given), expected=expected)
        return None
    return int(value)


def _choice(parameter: Parameter, given: object, findings: Findings) -> str | None:
    if given in parameter.choices:
        return str(given)
    findings.add(
        (parameter.name,),
        found=shown(given),
        expected="one of " + ", ".join(parameter.choices),
        fix=findings.did_you_mean(str(given), parameter.choices),
    )
    return None


def _plain(given: object) -> Any:
    """Return a number where the text is one: on a command line everything is text."""
    if not isinstance(given, str):
        return given
    text = given.strip()
    try:
        number = float(text)
    except ValueError:
        return text
    return number if math.isfinite(number) else text
