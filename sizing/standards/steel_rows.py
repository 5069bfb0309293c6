"""What a steel standard may take for steel: catalogue rows and strengths."""

from __future__ import annotations

import re

from sizing.standards.settings import Range

STEEL_STRENGTH = Range(
    least=100e6,
    greatest=2000e6,
    text="a strength of structural steel, 100 to 2000 N/mm2 (15 to 290 ksi)",
)
"""Softest iron to hardest wire; structural grades lie between 185 and 960 N/mm²."""

STEEL_PRODUCT = re.compile(r"EN\s*10\d{3}|ASTM\s*A\s*\d+|STEEL", re.IGNORECASE)


def not_steel(family: str, product: str) -> str:
    """Return why a row is not taken for steel, empty when it is.

    Solid rectangles are timber unless their product names a steel standard (flats to EN 10058,
    squares to EN 10059, bars to ASTM A36): timber checked as steel would seem ten times too
    strong.
    """
    if family != "rectangle" or STEEL_PRODUCT.search(product):
        return ""
    named = f"product {product}" if product else "no product named"
    return (
        f"a solid rectangle, {named}, counts as timber; give its product as a steel standard "
        "(EN 10058, ASTM A36) to use it"
    )
