"""Grade and settings of NDS, read and checked."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any, Literal, cast, get_args

from sizing.brief.model import LoadDuration
from sizing.standards.contract import SettingsError
from sizing.standards.nds_grades import (
    OWN_VALUES,
    NDSGrade,
    NDSProduct,
    find_grade,
    nds_grades,
)
from sizing.standards.nds_strength import (
    BUILT_UP,
    C_D,
    LE_D_LIMIT,
    LE_D_LIMIT_CONSTRUCTION,
    TEMPERATURES,
    TIME_EFFECT,
)
from sizing.standards.settings import SettingsReader, nearest

NAME = "NDS"
Method = Literal["ASD", "LRFD"]
REFERENCE_KEYS = ("Ft", "Fc", "E", "Emin")
KEYS = (
    "method",
    "wet_service",
    "unseasoned",
    "incised",
    "temperature",
    "factor_Ft",
    "factor_Fc",
    "factor_E",
    "duration_factors",
    "slenderness_limit",
    "built_up_fasteners",
    *REFERENCE_KEYS,
    "specific_gravity",
    "product",
)
SAME_SPECIES = 0.75
"""Likeness from which a grade is suggested: a slip in a name, never another species."""

LEAST_DURATION_FACTOR, MOST_DURATION_FACTOR = 0.5, 2.0
"""Bounds of CD (0.9 to 2.0 for impact) and of the time effect factor (0.6 to 1.25)."""


@dataclass(frozen=True, kw_only=True, slots=True)
class NDSSettings:
    """What the user chose; ``durations`` holds CD (ASD) or the time effect factor (LRFD)."""

    method: Method
    wet: bool
    unseasoned: bool
    incised: bool
    temperature: str
    factor_Ft: float  # noqa: N815 -- the symbol of the standard
    factor_Fc: float  # noqa: N815 -- the symbol of the standard
    factor_E: float  # noqa: N815 -- the symbol of the standard
    durations: Mapping[LoadDuration, float]
    slenderness_limit: float
    built_up: float


def read_settings(settings: Mapping[str, Any]) -> tuple[SettingsReader, NDSSettings]:
    """Return the reader (for the grade) and the settings; raises :class:`SettingsError`."""
    reader = SettingsReader(NAME, settings, KEYS)
    method = cast(Method, reader.choice("method", get_args(Method), "ASD"))
    fasteners = reader.choice("built_up_fasteners", tuple(BUILT_UP), "none")
    return reader, NDSSettings(
        method=method,
        wet=_flag(settings, "wet_service"),
        unseasoned=_flag(settings, "unseasoned"),
        incised=_flag(settings, "incised"),
        temperature=reader.choice("temperature", TEMPERATURES, TEMPERATURES[0]),
        factor_Ft=reader.number("factor_Ft", 1.0, above=0.0, at_most=2.0),
        factor_Fc=reader.number("factor_Fc", 1.0, above=0.0, at_most=2.0),
        factor_E=reader.number("factor_E", 1.0, above=0.0, at_most=2.0),
        durations=_durations(settings, C_D if method == "ASD" else TIME_EFFECT),
        slenderness_limit=reader.number(
            "slenderness_limit", LE_D_LIMIT, above=0.0, at_most=LE_D_LIMIT_CONSTRUCTION
        ),
        built_up=BUILT_UP[fasteners],
    )


def read_grade(grade: str | None, settings: Mapping[str, Any], reader: SettingsReader) -> NDSGrade:
    """Return the tabulated grade, or the user's own values where ``Ft`` and the rest are given."""
    own = [key for key in (*REFERENCE_KEYS, "specific_gravity", "product") if key in settings]
    if own:
        return _own_grade(grade, settings, reader)
    names = tuple(nds_grades())
    found = find_grade(grade) if grade is not None else None
    if found is not None:
        return found
    close = get_close_matches(grade or "", names, n=1, cutoff=SAME_SPECIES)
    raise SettingsError(
        key="grade",
        found="nothing" if grade is None else f'"{grade}"',
        expected=f"one of {'; '.join(names)}; or your own values: "
        f"{', '.join(REFERENCE_KEYS)}, specific_gravity and product",
        fix=f'Did you mean "{close[0]}"?' if close else "",
    )


def _own_grade(grade: str | None, settings: Mapping[str, Any], reader: SettingsReader) -> NDSGrade:
    products: tuple[NDSProduct, ...] = get_args(NDSProduct)
    if "product" not in settings:
        raise SettingsError(
            key="product",
            found="nothing",
            expected="one of " + ", ".join(f'"{product}"' for product in products),
            fix='"dimension lumber" takes the size factors of Table 4A, "sized lumber" none.',
        )
    product = cast(NDSProduct, reader.choice("product", products, products[0]))
    values = {key: reader.required_quantity(key, "stress") for key in REFERENCE_KEYS}
    gravity = reader.required_number("specific_gravity", at_least=0.2)
    if gravity > 1.2:
        raise SettingsError(
            key="specific_gravity", found=f"{gravity:g}", expected="a number from 0.2 to 1.2"
        )
    if values["Emin"] >= values["E"]:
        raise SettingsError(
            key="Emin", found=str(settings["Emin"]), expected="a modulus below E, for buckling"
        )
    return NDSGrade(
        name=grade or "as given",
        source=OWN_VALUES,
        product=product,
        size_rule="common" if product == "dimension lumber" else "none",
        G=gravity,
        **values,
    )


def refuse_unknown_factors(grade: NDSGrade, chosen: NDSSettings) -> None:
    """Refuse settings for which NDS gives no factor for the product."""
    if chosen.wet and grade.product == "composite lumber":
        raise SettingsError(
            key="wet_service",
            found="true",
            expected="false for composite lumber: its maker gives the wet service factors",
            fix="Give them as factor_Ft, factor_Fc and factor_E.",
        )
    if chosen.incised and grade.product != "dimension lumber":
        raise SettingsError(
            key="incised",
            found="true",
            expected=f"false for {grade.product}: 4.3.8 is for dimension lumber",
            fix="Give the factors of the treatment as factor_Ft, factor_Fc and factor_E.",
        )


def _flag(settings: Mapping[str, Any], key: str) -> bool:
    value = settings.get(key, False)
    if isinstance(value, bool):
        return value
    raise SettingsError(key=key, found=f'"{value}"', expected="true or false")


def _durations(
    settings: Mapping[str, Any], usual: Mapping[LoadDuration, float]
) -> dict[LoadDuration, float]:
    """Return the factor of every load duration, with the user's own where given."""
    key, known = "duration_factors", get_args(LoadDuration)
    given = settings.get(key, {})
    if not isinstance(given, Mapping):
        raise SettingsError(
            key=key, found=f'"{given}"', expected="a table such as { short = 1.25 }"
        )
    factors = dict(usual)
    for duration, value in given.items():
        if duration not in known:
            close = nearest(str(duration), known)
            raise SettingsError(
                key=f"{key}.{duration}",
                found="an unknown load duration",
                expected="one of " + ", ".join(known),
                fix=f'Did you mean "{close}"?' if close else "",
            )
        number = isinstance(value, (int, float)) and not isinstance(value, bool)
        if not number or not LEAST_DURATION_FACTOR <= value <= MOST_DURATION_FACTOR:
            raise SettingsError(
                key=f"{key}.{duration}",
                found=str(value),
                expected=f"a number from {LEAST_DURATION_FACTOR:g} to {MOST_DURATION_FACTOR:g}",
            )
        factors[duration] = float(value)
    return factors
