"""Load cases, deflection limits and options that a ready shape starts with.

Every pressure is invented: plausible for a light roof in a mild climate, and to be replaced by
the loads of the site. Shape coefficients of snow follow EN 1991-1-3 5.3 for roofs up to 30
degrees (0.8 balanced; 0.8 and half of it on either side), those of wind are round numbers.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from sizing.brief.shapes_parameters import Parameter, Values
from sizing.brief.shapes_sketch import Sketch

ROOF_PARAMETERS = (
    Parameter(
        name="spacing", kind="length", usual="6 m", least=0.3, greatest=30.0,
        words="distance of the trusses from one another",
    ),
    Parameter(
        name="roofing", kind="pressure", usual="0.5 kN/m2", least=10.0, greatest=5e3,
        words="weight of roofing and purlins on slope (invented)",
    ),
    Parameter(
        name="snow", kind="pressure", usual="1 kN/m2", least=10.0, greatest=20e3,
        words="snow load on the ground (invented)",
    ),
    Parameter(
        name="wind", kind="pressure", usual="0.6 kN/m2", least=10.0, greatest=5e3,
        words="peak velocity pressure of the wind (invented)",
    ),
)  # fmt: skip

SERVICES = "0.15 kN/m2"
SNOW, SNOW_OTHER_SIDE = 0.8, 0.4
WIND_LIFT, WIND_PRESS, WIND_LEE = -1.1, 0.3, -0.5

INVENTED = "Invented; replace it by the load of the site."

OPTIONS: dict[str, dict[str, Any]] = {
    "steel": {
        "standard": "EN 1993-1-1", "grade": "S355", "catalogue": "square-hollow-sections",
        "slenderness_limits": {"compression": 180, "tension": 350},
    },
    "timber": {
        "standard": "EN 1995-1-1", "grade": "GL24h", "catalogue": "glulam", "service_class": 2,
        "net_section_factor": 0.6,
    },
}  # fmt: skip

FINAL_SAG = "span/200"
"""Within the span/150 to span/300 that EN 1995-1-1 Table 7.2 gives for the final deflection."""


def kilo(value: float, unit: str) -> str:
    """Return a load as text in kN, such as ``0.5 kN/m2``."""
    return f"{value / 1e3:.10g} {unit}"


def add_roof_actions(
    sketch: Sketch,
    values: Values,
    chord: str,
    *,
    soffit: str = "",
    halves: Mapping[str, str] | None = None,
    pitched: bool = False,
) -> None:
    """Add permanent, snow and wind cases on ``chord``.

    ``halves``: the two parts of the chord for one-sided loads, as ``left`` and ``right`` (the
    words themselves where the chord has a single ridge); None for a roof of one slope.
    ``pitched``: wind presses on one slope and lifts the other.
    """
    width = {"chord": chord, "spacing": f"{values['spacing']:.10g} m"}
    snow, wind = kilo(values["snow"], "kN/m2"), kilo(values["wind"], "kN/m2")
    add_self_weight(sketch)
    _area(sketch, "roofing", "permanent", kilo(values["roofing"], "kN/m2"), "slope", width, {})
    if soffit:
        below = width | {"chord": soffit}
        _area(sketch, "services", "permanent", SERVICES, "plan", below, {}, may_be_absent=True)
    _area(sketch, "snow-full", "snow", snow, "plan", width, {"coefficient": SNOW})
    if halves is not None:
        left, right = halves["left"], halves["right"]
        for name, side in (("snow-left", left), ("snow-right", right)):
            parts = {p: SNOW if p == side else SNOW_OTHER_SIDE for p in (left, right)}
            _area(sketch, name, "snow", snow, "plan", width, {"coefficients": parts})
    normal = "normal to slope"
    _area(sketch, "wind-uplift", "wind", wind, normal, width, {"coefficient": WIND_LIFT})
    if halves is None or not pitched:
        _area(sketch, "wind-pressure", "wind", wind, normal, width, {"coefficient": WIND_PRESS})
    else:
        for name, side in (("wind-from-left", left), ("wind-from-right", right)):
            parts = {p: WIND_PRESS if p == side else WIND_LEE for p in (left, right)}
            _area(sketch, name, "wind", wind, normal, width, {"coefficients": parts})
    sketch.comments[("cases", "snow-full")] = (
        f"Snow on the ground times a shape coefficient. {INVENTED}"
    )
    sketch.comments[("cases", "wind-uplift")] = (
        f"A positive pressure presses on the slope, a negative coefficient lifts it. {INVENTED}"
    )


def _area(
    sketch: Sketch,
    name: str,
    kind: str,
    pressure: str,
    on: str,
    width: Mapping[str, str],
    coefficient: Mapping[str, Any],
    **more: Any,
) -> None:
    load = {"pressure": pressure, "on": on, **width, **coefficient}
    sketch.case(name, kind, **more, area_loads=[load])
    sketch.comments.setdefault(("cases", name), INVENTED)


def add_self_weight(sketch: Sketch) -> None:
    """Add the case of the members' own weight."""
    sketch.case("self-weight", "permanent", self_weight=True)


def add_options(sketch: Sketch, steel_catalogue: str = "") -> None:
    """Add one option in steel and one in timber."""
    sketch.options = {name: dict(option) for name, option in OPTIONS.items()}
    if steel_catalogue:
        sketch.options["steel"]["catalogue"] = steel_catalogue
    sketch.comments[("options", "steel")] = (
        "Each option is one complete answer; delete those that are not wanted."
    )
    sketch.comments[("options", "timber")] = (
        "net_section_factor: what slots, dowels or bolts leave of a section in tension. Plausible "
        "for joints with slotted-in plates; replace it once the joints are drawn."
    )


def add_sag(
    sketch: Sketch, nodes: list[str], limit: str = "span/250", final: str = FINAL_SAG, **more: Any
) -> None:
    """Add the limits of the elastic and of the final sag of the nodes named."""
    add_limit(sketch, {"name": "sag", "nodes": nodes, "limit": limit} | more, final)


def add_limit(sketch: Sketch, elastic: dict[str, Any], final: str) -> None:
    """Add an elastic deflection limit, and ``final`` as the limit of the same with creep."""
    if not sketch.limits:
        sketch.comments[("deflection_limits", "1")] = (
            "With the creep of timber. Steel does not creep: for it both movements are the same."
        )
    with_creep = {"name": f"{elastic['name']}, final", "limit": final, "component": "final"}
    sketch.limits += [elastic, elastic | with_creep]
