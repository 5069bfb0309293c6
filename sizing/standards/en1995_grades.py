"""Strength classes of solid timber and glued laminated timber, by edition.

Values are characteristic, in N/mm² and kg/m³ as the standards print them, and become SI in
:class:`TimberGrade`. The 2009 and 2016 editions of EN 338 differ for the same class names, and
so do EN 1194:1999 and EN 14080:2013 (EN 1194 is superseded and left out: it gives no mean
density). Sources: EN 338:2016 Table 1 and Table 3, EN 338:2009 Table 1 (recalled; confirmed by
the relations of EN 384 within rounding), EN 14080:2013 Tables 4 and 5.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Product = Literal["solid timber", "glulam"]

N_PER_MM2 = 1e6


@dataclass(frozen=True, kw_only=True, slots=True)
class TimberGrade:
    """One strength class: ``ft0k``, ``fc0k``, ``E0_mean``, ``E0_05`` in Pa, ``rho`` in kg/m³."""

    name: str
    edition: str
    product: Product
    ft0k: float
    fc0k: float
    E0_mean: float
    E0_05: float
    rho_k: float
    rho_mean: float


# class: ft0k, fc0k, E0,mean, E0,05 (N/mm²), rho_k, rho_mean (kg/m³)
EN_338_2016: dict[str, tuple[float, float, float, float, float, float]] = {
    "C14": (7.2, 16, 7000, 4700, 290, 350),
    "C16": (8.5, 17, 8000, 5400, 310, 370),
    "C18": (10, 18, 9000, 6000, 320, 380),
    "C20": (11.5, 19, 9500, 6400, 330, 400),
    "C22": (13, 20, 10000, 6700, 340, 410),
    "C24": (14.5, 21, 11000, 7400, 350, 420),
    "C27": (16.5, 22, 11500, 7700, 360, 430),
    "C30": (19, 24, 12000, 8000, 380, 460),
    "C35": (22.5, 25, 13000, 8700, 390, 470),
    "C40": (26, 27, 14000, 9400, 400, 480),
    "C45": (30, 29, 15000, 10100, 410, 490),
    "C50": (33.5, 30, 16000, 10700, 430, 520),
    "D18": (11, 18, 9500, 8000, 475, 570),
    "D24": (14, 21, 10000, 8400, 485, 580),
    "D30": (18, 24, 11000, 9200, 530, 640),
    "D35": (21, 25, 12000, 10100, 540, 650),
    "D40": (24, 27, 13000, 10900, 550, 660),
    "D50": (30, 30, 14000, 11800, 620, 740),
    "D60": (36, 33, 17000, 14300, 700, 840),
    "D70": (42, 36, 20000, 16800, 800, 960),
}
# class: ft0k, fc0k, E0,mean, E0,05 (N/mm²), rho_k, rho_mean (kg/m³)
EN_338_2009: dict[str, tuple[float, float, float, float, float, float]] = {
    "C14": (8, 16, 7000, 4700, 290, 350),
    "C16": (10, 17, 8000, 5400, 310, 370),
    "C18": (11, 18, 9000, 6000, 320, 380),
    "C20": (12, 19, 9500, 6400, 330, 390),
    "C22": (13, 20, 10000, 6700, 340, 410),
    "C24": (14, 21, 11000, 7400, 350, 420),
    "C27": (16, 22, 11500, 7700, 370, 450),
    "C30": (18, 23, 12000, 8000, 380, 460),
    "C35": (21, 25, 13000, 8700, 400, 480),
    "C40": (24, 26, 14000, 9400, 420, 500),
    "C45": (27, 27, 15000, 10000, 440, 520),
    "C50": (30, 29, 16000, 10700, 460, 550),
    "D30": (18, 23, 11000, 9200, 530, 640),
    "D35": (21, 25, 12000, 10100, 540, 650),
    "D40": (24, 26, 13000, 10900, 550, 660),
    "D50": (30, 29, 14000, 11800, 620, 750),
    "D60": (36, 32, 17000, 14300, 700, 840),
    "D70": (42, 34, 20000, 16800, 900, 1080),
}
# class: ft0k, fc0k, E0,mean, E0,05 (N/mm²), rho_k, rho_mean (kg/m³)
EN_14080_2013: dict[str, tuple[float, float, float, float, float, float]] = {
    "GL20h": (16, 20, 8400, 7000, 340, 370),
    "GL22h": (17.6, 22, 10500, 8800, 370, 410),
    "GL24h": (19.2, 24, 11500, 9600, 385, 420),
    "GL26h": (20.8, 26, 12100, 10100, 405, 445),
    "GL28h": (22.3, 28, 12600, 10500, 425, 460),
    "GL30h": (24, 30, 13600, 11300, 430, 480),
    "GL32h": (25.6, 32, 14200, 11800, 440, 490),
    "GL20c": (15, 18.5, 10400, 8600, 355, 390),
    "GL22c": (16, 20, 10400, 8600, 355, 390),
    "GL24c": (17, 21.5, 11000, 9100, 365, 400),
    "GL26c": (19, 23.5, 12000, 10000, 385, 420),
    "GL28c": (19.5, 24, 12500, 10400, 390, 420),
    "GL30c": (19.5, 24.5, 13000, 10800, 390, 430),
    "GL32c": (19.5, 24.5, 13500, 11200, 400, 440),
}

EDITIONS_338 = {"2016": EN_338_2016, "2009": EN_338_2009}


def grade_names(edition_338: str = "2016") -> tuple[str, ...]:
    """Return the names of all strength classes, solid timber of the given edition first."""
    return (*EDITIONS_338[edition_338], *EN_14080_2013)


def timber_grade(name: str, edition_338: str = "2016") -> TimberGrade:
    """Return a strength class by its exact name; raises :class:`KeyError` for an unknown one."""
    if name in EN_14080_2013:
        return _grade(name, "EN 14080:2013", "glulam", EN_14080_2013[name])
    edition = f"EN 338:{edition_338}"
    return _grade(name, edition, "solid timber", EDITIONS_338[edition_338][name])


def _grade(
    name: str,
    edition: str,
    product: Product,
    values: tuple[float, float, float, float, float, float],
) -> TimberGrade:
    ft0k, fc0k, mean, fifth, rho_k, rho_mean = values
    return TimberGrade(
        name=name,
        edition=edition,
        product=product,
        ft0k=ft0k * N_PER_MM2,
        fc0k=fc0k * N_PER_MM2,
        E0_mean=mean * N_PER_MM2,
        E0_05=fifth * N_PER_MM2,
        rho_k=rho_k,
        rho_mean=rho_mean,
    )
