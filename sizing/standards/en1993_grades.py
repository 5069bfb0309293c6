"""Yield and ultimate strength of structural steels by grade, product and thickness.

Two tables that a job must not mix: the simplified values of EN 1993-1-1:2005 Table 3.1 (steps
at 40 and 80 mm) and the values of the product standards (steps at 16, 40, 63, 80 and 100 mm,
required by some National Annexes). All values are from memory; ``fy`` and ``fu`` can be set.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Literal

from sizing.standards.conditions import LIMIT_ROUNDING

GradeTable = Literal["EN 1993-1-1", "product standards"]
Product = Literal["EN 10025", "EN 10210-1", "EN 10219-1"]

# Steps are (up to mm, fy N/mm², fu N/mm²), each beginning where the one before ends.
# EN 1993-1-1:2005 Table 3.1 with AC:2009 (S355 to EN 10025-2: fu 490, first print 510).
TABLE_3_1: dict[Product, dict[str, tuple[tuple[float, float, float], ...]]] = {
    "EN 10025": {
        "S235": ((40, 235, 360), (80, 215, 360)),
        "S275": ((40, 275, 430), (80, 255, 410)),
        "S355": ((40, 355, 490), (80, 335, 470)),
        "S450": ((40, 440, 550), (80, 410, 550)),
        "S275N": ((40, 275, 390), (80, 255, 370)),
        "S355N": ((40, 355, 490), (80, 335, 470)),
        "S420N": ((40, 420, 520), (80, 390, 520)),
        "S460N": ((40, 460, 540), (80, 430, 540)),
        "S275M": ((40, 275, 370), (80, 255, 360)),
        "S355M": ((40, 355, 470), (80, 335, 450)),
        "S420M": ((40, 420, 520), (80, 390, 500)),
        "S460M": ((40, 460, 540), (80, 430, 530)),
    },
    "EN 10210-1": {
        "S235": ((40, 235, 360), (80, 215, 340)),
        "S275": ((40, 275, 430), (80, 255, 410)),
        "S355": ((40, 355, 510), (80, 335, 490)),
        "S275N": ((40, 275, 390), (80, 255, 370)),
        "S355N": ((40, 355, 490), (80, 335, 470)),
        "S420N": ((40, 420, 540), (80, 390, 520)),
        "S460N": ((40, 460, 560), (80, 430, 550)),
    },
    "EN 10219-1": {
        "S235": ((40, 235, 360),),
        "S275": ((40, 275, 430),),
        "S355": ((40, 355, 510),),
        "S275N": ((40, 275, 370),),
        "S355N": ((40, 355, 470),),
        "S460N": ((40, 460, 550),),
        "S275M": ((40, 275, 360),),
        "S355M": ((40, 355, 470),),
        "S420M": ((40, 420, 500),),
        "S460M": ((40, 460, 530),),
    },
}

# ReH and least Rm of EN 10025-2/-3/-4:2004, EN 10210-1:2006 and EN 10219-1:2006.
_S235 = ((16, 235, 360), (40, 225, 360), (63, 215, 360), (80, 215, 360), (100, 215, 360))
_S275 = ((16, 275, 410), (40, 265, 410), (63, 255, 410), (80, 245, 410), (100, 235, 410))
_S355 = ((16, 355, 470), (40, 345, 470), (63, 335, 470), (80, 325, 470), (100, 315, 470))
PRODUCT_STANDARDS: dict[Product, dict[str, tuple[tuple[float, float, float], ...]]] = {
    "EN 10025": {
        "S235": _S235,
        "S275": _S275,
        "S355": _S355,
        "S450": ((16, 450, 550), (40, 430, 550), (63, 410, 550), (80, 390, 550), (100, 380, 550)),
        "S460M": ((16, 460, 540), (40, 440, 540), (63, 430, 530), (80, 410, 510), (100, 400, 500)),
    },
    "EN 10210-1": {
        "S235": _S235,
        "S275": _S275,
        "S355": _S355,
        "S460N": ((16, 460, 540), (40, 440, 540), (65, 430, 540)),
    },
    "EN 10219-1": {
        "S235": _S235[:2],
        "S275": _S275[:2],
        "S355": _S355[:2],
        "S460N": ((16, 460, 540), (40, 440, 540)),
        "S460M": ((16, 460, 530), (40, 440, 530)),
    },
}
TABLES: dict[str, dict[Product, dict[str, tuple[tuple[float, float, float], ...]]]] = {
    "EN 1993-1-1": TABLE_3_1,
    "product standards": PRODUCT_STANDARDS,
}

_NAME = re.compile(r"S(\d{3})(JR|J0|J2|K2)?\+?(NL|ML|N|M|AR)?(H?)")


@dataclass(frozen=True, kw_only=True, slots=True)
class Grade:
    """A grade as named: ``number`` 355 for S355; ``delivery`` is ``N``, ``M`` or empty."""

    name: str
    number: int
    delivery: str

    @property
    def keys(self) -> tuple[str, ...]:
        """Return the table keys that the name may mean, for one product."""
        plain = f"S{self.number}"
        if self.delivery:
            return (plain + self.delivery,)
        return (plain, f"{plain}N", f"{plain}M")


@dataclass(frozen=True, kw_only=True, slots=True)
class Strength:
    """``fy`` and ``fu`` in Pa of one product at one thickness, with the table row they are from."""

    fy: float
    fu: float
    origin: str


def parse_grade(name: str) -> Grade | None:
    """Return the grade meant by names such as ``S355``, ``S355J2H``, ``S460NH``; else None.

    Steel to EN 10025-2 delivered normalised (``S355J2+N``) keeps the strength of its own table.
    """
    found = _NAME.fullmatch(name.upper().replace(" ", ""))
    if found is None:
        return None
    number, quality, delivery, _ = found.groups()
    fine_grain = (delivery or "")[:1] if quality is None else ""
    return Grade(name=name, number=int(number), delivery=fine_grain.replace("A", ""))


def known_grades(table: str) -> tuple[str, ...]:
    """Return the grade names of one table, for messages."""
    return tuple(dict.fromkeys(name for rows in TABLES[table].values() for name in rows))


def strength_of(grade: Grade, product: Product, thickness: float, table: str) -> Strength | str:
    """Return the strength at ``thickness`` in m, or the reason why the table has none.

    A name that leaves the delivery condition open takes the plain row, and where the product
    has none (S460) the row with the lowest fu.
    """
    rows = TABLES[table][product]
    keys = [key for key in grade.keys if key in rows]
    if not keys:
        return f"grade {grade.name} is not in the {product} rows of the table {table}"
    key = keys[0] if keys[0] == grade.keys[0] else min(keys, key=lambda k: rows[k][0][2])
    millimetres = thickness * 1000.0
    for upto, fy, fu in rows[key]:
        if millimetres <= upto * (1.0 + LIMIT_ROUNDING):
            origin = f"{table}, {product} {key}, t ≤ {upto:g} mm"
            return Strength(fy=fy * 1e6, fu=fu * 1e6, origin=origin)
    limit = rows[key][-1][0]
    return (
        f"thickness {millimetres:g} mm is beyond {limit:g} mm, where grade {grade.name} ends"
        f" ({table}, {product})"
    )
