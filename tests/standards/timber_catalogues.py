"""Small catalogues of rectangles and members for the tests of the timber standards."""

from collections.abc import Sequence
from pathlib import Path

import numpy as np

from sizing.brief.model import SourceFile
from sizing.brief.sections import Catalogue
from sizing.standards.contract import MemberConditions


def rectangles(
    sides: Sequence[tuple[float, float]], product: str = "", family: str = "rectangle"
) -> Catalogue:
    """Return a catalogue of rectangles, each (width, depth) in m with width <= depth."""
    b, h = np.array(sides, dtype=float).T
    n = len(b)
    return Catalogue(
        name="trial",
        source=SourceFile(name="trial", path=Path("trial"), sha256=""),
        header=(),
        designation=tuple(f"{1e3 * x:g}x{1e3 * y:g}" for x, y in zip(b, h, strict=True)),
        row=tuple(range(2, n + 2)),
        family=(family,) * n,
        product=(product,) * n,
        area=b * h,
        i_major=b * h**3 / 12.0,
        i_minor=h * b**3 / 12.0,
        i_least=h * b**3 / 12.0,
        mass=np.full(n, np.nan),
        depth=h,
        width=b,
        thickness=np.full(n, np.nan),
        flange=np.full(n, np.nan),
        root_radius=np.full(n, np.nan),
        surface=2.0 * (b + h),
        price=np.full(n, np.nan),
    )


def members(
    in_plane: Sequence[float],
    out_of_plane: Sequence[float] | None = None,
    *,
    net: float = 1.0,
    depth_in_plane: bool = True,
    compression_limit: float = np.inf,
    tension_limit: float = np.inf,
) -> MemberConditions:
    """Return members with the given buckling lengths in m (the same out of plane by default)."""
    length = np.array(in_plane, dtype=float)
    n = len(length)
    return MemberConditions(
        length=length,
        in_plane=length,
        out_of_plane=length if out_of_plane is None else np.array(out_of_plane, dtype=float),
        depth_in_plane=np.full(n, depth_in_plane),
        net_factor=np.full(n, net),
        max_slenderness_compression=np.full(n, compression_limit),
        max_slenderness_tension=np.full(n, tension_limit),
        role=("web",) * n,
    )
