"""The names under which a column of a section table is known: trade words and usual letters."""

from __future__ import annotations

from collections.abc import Mapping

TEXT_NAMES: Mapping[str, frozenset[str]] = {
    "designation": frozenset(
        {"designation", "section", "size", "name", "profile", "bezeichnung", "profil"}
    ),
    "family": frozenset({"family", "shape", "kind", "profilart"}),
    "product": frozenset({"product", "product standard", "standard", "norm", "produktnorm"}),
    "available": frozenset({"available", "in stock", "lieferbar"}),
    "preferred": frozenset({"preferred", "preferred size", "vorzugsmaß"}),
    "lead_time": frozenset({"lead time", "delivery", "delivery time", "lieferzeit"}),
}
"""Columns of text."""

PRICES = frozenset({"price", "cost", "preis"})
"""Names of the column of prices, per length or per mass."""

STOCK_LENGTHS = frozenset({"stock lengths", "stock length", "lagerlängen"})
"""Names of the column of stock lengths, which needs a unit of length."""

NUMBER_NAMES: Mapping[str, tuple[frozenset[str], tuple[str, ...]]] = {
    "area": (
        frozenset(
            {"area", "a", "cross section area", "cross sectional area", "section area"}
            | {"fläche", "querschnittsfläche"}
        ),
        ("area",),
    ),
    "mass": (
        frozenset(
            {"mass", "m", "mass per metre", "mass per length", "weight", "w", "g"}
            | {
                "nominal weight",
                "nominal mass",
                "weight per foot",
                "weight per metre",
                "gewicht",
                "masse",
            }
        ),
        ("mass per length", "weight per length"),
    ),
    "depth": (
        frozenset(
            {"depth", "h", "height", "overall depth", "diameter", "outside diameter", "od", "d"}
            | {"leg", "leg length", "a", "höhe", "durchmesser", "schenkel"}
        ),
        ("length",),
    ),
    "width": (
        frozenset({"width", "b", "breadth", "bf", "flange width", "other leg", "breite"}),
        ("length",),
    ),
    "thickness": (
        frozenset(
            {"thickness", "t", "wall", "wall thickness", "design wall", "t des", "tdes", "tw"}
            | {"web", "web thickness", "leg thickness", "s", "dicke", "wanddicke", "stegdicke"}
        ),
        ("length",),
    ),
    "flange": (frozenset({"flange", "flange thickness", "tf", "flanschdicke"}), ("length",)),
    "root_radius": (
        frozenset({"root radius", "fillet", "fillet radius", "r1", "ausrundungsradius"}),
        ("length",),
    ),
    "surface": (
        frozenset({"surface", "surface area", "painted area", "perimeter", "u"})
        | frozenset({"mantelfläche", "oberfläche", "umfang"}),
        ("length",),
    ),
    "plies": (frozenset({"plies", "lagen"}), ()),
}
"""Columns of numbers: accepted names, and what the unit must measure."""

STRENGTH_OF_AXIS_LETTER = {
    "x y": {"x": "major", "y": "minor", "z": "least"},
    "y z": {"y": "major", "z": "minor"},
    "x": {"x": "major"},
}
"""x-x major, y-y minor (z-z least, of angles) where x is used; else y-y major, z-z minor (EN)."""

PLAIN_HEADS = (
    "designation, family, product, area [cm2], mass [kg/m], I major [cm4], I minor [cm4], "
    "I least [cm4], i major [cm], i minor [cm], i least [cm], depth [mm], width [mm], "
    "thickness [mm], flange [mm], root radius [mm], surface [m2/m], price [EUR/m], plies, "
    "stock lengths [m], available, preferred, lead time"
)
"""Every head in its plain form."""

CONCEPTS = {
    "i": "", "r": "", "radius": "radius of gyration", "gyration": "radius of gyration",
    "trägheitsradius": "radius of gyration", "inertia": "second moment",
    "second": "second moment", "trägheitsmoment": "second moment",
    "flächenmoment": "second moment",
}  # fmt: skip
AXES = {
    "major": "major", "strong": "major", "stark": "major", "max": "major",
    "minor": "minor", "weak": "minor", "schwach": "minor",
    "least": "least", "min": "least", "v": "least", "vv": "least",
    "x": "x", "xx": "x", "y": "y", "yy": "y", "z": "z", "zz": "z",
}  # fmt: skip
FILLERS = frozenset({"of", "the", "area", "axis", "about", "moment"})
