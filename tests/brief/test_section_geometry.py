"""Section formulas against their outlines, invariants and limits."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from sizing.brief import section_geometry as geometry

Outline = NDArray[np.float64]

ARC_POINTS = 2000
"""Chords per quarter circle; area and second moments of the polygon are then right to 1e-6."""


def arc(x: float, y: float, r: float, start: float, turn: float) -> Outline:
    """Points on a quarter circle about (x, y) from angle ``start``, turning by ``turn``."""
    angles = np.linspace(start, start + turn, ARC_POINTS)
    return np.column_stack([x + r * np.cos(angles), y + r * np.sin(angles)])


def moments(outline: Outline) -> tuple[float, float, float, float]:
    """Area and centroidal second moments of a polygon (Green's theorem, a published formula)."""
    x, y = outline[:, 0], outline[:, 1]
    xn, yn = np.roll(x, -1), np.roll(y, -1)
    cross = x * yn - xn * y
    area = cross.sum() / 2
    cx, cy = ((x + xn) * cross).sum() / 6 / area, ((y + yn) * cross).sum() / 6 / area
    ixx = ((y * y + y * yn + yn * yn) * cross).sum() / 12 - area * cy**2
    iyy = ((x * x + x * xn + xn * xn) * cross).sum() / 12 - area * cx**2
    ixy = ((x * yn + 2 * x * y + 2 * xn * yn + xn * y) * cross).sum() / 24 - area * cx * cy
    return float(area), float(ixx), float(iyy), float(ixy)


def length(outline: Outline) -> float:
    return float(np.hypot(*(np.roll(outline, -1, axis=0) - outline).T).sum())


def angle_outline(a: float, b: float, t: float, r1: float, r2: float) -> Outline:
    quarter = math.pi / 2
    return np.vstack(
        [
            [[0.0, 0.0], [b, 0.0]],
            arc(b - r2, t - r2, r2, 0.0, quarter),
            arc(t + r1, t + r1, r1, -quarter, -quarter),
            arc(t - r2, a - r2, r2, 0.0, quarter),
            [[0.0, a]],
        ]
    )


def rounded_outline(h: float, b: float, r: float) -> Outline:
    quarter = math.pi / 2
    return np.vstack(
        [
            arc(sx * (b / 2 - r), sy * (h / 2 - r), r, start, quarter)
            for sx, sy, start in ((1, -1, -quarter), (1, 1, 0), (-1, 1, quarter), (-1, -1, math.pi))
        ]
    )


def half_i_outline(h: float, b: float, web: float, flange: float, r: float) -> Outline:
    """The right half of an I section."""
    quarter, x, y = math.pi / 2, web / 2 + r, h / 2 - flange - r
    return np.vstack(
        [
            [[0.0, -h / 2], [b / 2, -h / 2], [b / 2, -h / 2 + flange]],
            arc(x, -y, r, -quarter, -quarter),
            arc(x, y, r, math.pi, -quarter),
            [[b / 2, h / 2 - flange], [b / 2, h / 2], [0.0, h / 2]],
        ]
    )


@given(st.floats(30, 250), st.floats(0.5, 1.0), st.floats(0.06, 0.13), st.floats(0.8, 1.6))
def test_angle_agrees_with_its_outline(a: float, ratio: float, slim: float, root: float) -> None:
    """An angle, equal or not, has the moments of its drawn outline, along and across v-v."""
    b, t = a * ratio, a * slim
    r1 = root * t
    found = geometry.angle(leg=a, other_leg=b, thickness=t, root_radius=r1, toe_radius=r1 / 2)
    outline = angle_outline(a, b, t, r1, r1 / 2)
    area, ixx, iyy, ixy = moments(outline)
    least = (ixx + iyy) / 2 - math.hypot((ixx - iyy) / 2, ixy)
    assert found.area == pytest.approx(area, rel=2e-6)
    assert found.i_major == pytest.approx(ixx, rel=2e-6)
    assert found.i_minor == pytest.approx(iyy, rel=2e-6)
    assert found.i_least == pytest.approx(least, rel=1e-5)
    assert found.surface == pytest.approx(length(outline), rel=2e-6)


@given(st.floats(0.0, math.pi))
def test_principal_moments_do_not_depend_on_the_axes(turn: float) -> None:
    """Turning an L 100x100x10 outline leaves least, greatest and their sum as they were."""
    found = geometry.equal_angle(leg=100, thickness=10, root_radius=12)
    c, s = math.cos(turn), math.sin(turn)
    outline = angle_outline(100, 100, 10, 12, 6) @ np.array([[c, s], [-s, c]])
    _, ixx, iyy, ixy = moments(outline)
    radius = math.hypot((ixx - iyy) / 2, ixy)
    assert found.i_least == pytest.approx((ixx + iyy) / 2 - radius, rel=1e-5)
    assert found.i_greatest == pytest.approx((ixx + iyy) / 2 + radius, rel=1e-5)
    assert found.i_major + found.i_minor == pytest.approx(ixx + iyy, rel=1e-6)


def test_angle_100_10_has_its_published_principal_moments() -> None:
    """EN 10056-1 tables: L 100x100x10, Iu 280 and Iv 73.0 cm4, iv 1.95 cm (from memory)."""
    found = geometry.equal_angle(leg=0.1, thickness=0.01, root_radius=0.012)
    assert found.i_greatest * 1e8 == pytest.approx(280, rel=0.005)
    assert found.i_least * 1e8 == pytest.approx(73.0, rel=0.005)
    assert math.sqrt(found.i_least / found.area) * 1e2 == pytest.approx(1.95, abs=0.005)


@given(st.floats(40, 500), st.floats(0.4, 1.0), st.floats(0.02, 0.1))
def test_hollow_sections_agree_with_their_outlines(h: float, ratio: float, slim: float) -> None:
    """Hot and cold formed hollow sections are the outer less the inner rounded rectangle."""
    b, t = h * ratio, h * ratio * slim
    corner = geometry.cold_formed_corner(t / 1e3) * 1e3
    for found, ro, ri in (
        (geometry.hot_finished_hollow(depth=h, width=b, wall=t), 1.5 * t, t),
        (
            geometry.rectangular_hollow(
                depth=h, width=b, wall=t, outside_radius=corner, inside_radius=corner - t
            ),
            corner,
            corner - t,
        ),
    ):
        outer = moments(rounded_outline(h, b, ro))
        inner = moments(rounded_outline(h - 2 * t, b - 2 * t, ri))
        assert found.area == pytest.approx(outer[0] - inner[0], rel=1e-5)
        assert found.i_major == pytest.approx(outer[1] - inner[1], rel=1e-5)
        assert found.i_minor == pytest.approx(outer[2] - inner[2], rel=1e-5)
        assert found.surface == pytest.approx(length(rounded_outline(h, b, ro)), rel=1e-6)


def test_hollow_section_follows_the_formula_of_the_annex() -> None:
    """SHS 100x100x8 term by term as EN 10210-2 Annex A writes it (from memory)."""
    h = b = 100.0
    t, ro, ri, pi = 8.0, 12.0, 8.0, math.pi
    ag, ax = (1 - pi / 4) * ro**2, (1 - pi / 4) * ri**2
    lever = (10 - 3 * pi) / (12 - 3 * pi)
    hg, hx = h / 2 - ro * lever, (h - 2 * t) / 2 - ri * lever
    igg, ixx = ((1 / 3 - pi / 16 - 1 / (3 * (12 - 3 * pi))) * r**4 for r in (ro, ri))
    area = 2 * t * (b + h - 2 * t) - 4 * (ag - ax)
    inertia = b * h**3 / 12 - (b - 2 * t) * (h - 2 * t) ** 3 / 12
    inertia += -4 * (igg + ag * hg**2) + 4 * (ixx + ax * hx**2)
    found = geometry.hot_finished_hollow(depth=h, width=b, wall=t)
    assert found.area == pytest.approx(area, rel=1e-13)
    assert found.i_major == pytest.approx(inertia, rel=1e-13)


@given(st.floats(80, 600), st.floats(0.4, 1.0), st.floats(0.02, 0.05), st.floats(0.5, 1.3))
def test_i_section_agrees_with_its_outline(h: float, wide: float, web: float, root: float) -> None:
    """An I section is twice the half that is drawn, with root fillets."""
    b, tw = h * wide, h * web
    tf, r = 1.5 * tw, root * 2 * tw
    found = geometry.i_section(depth=h, width=b, web=tw, flange=tf, root_radius=r)
    outline = half_i_outline(h, b, tw, tf, r)
    area, ixx, iyy, _ = moments(outline)
    x = outline[:, 0]
    cross = x * np.roll(outline[:, 1], -1) - np.roll(x, -1) * outline[:, 1]
    centroid = float(((x + np.roll(x, -1)) * cross).sum() / 6 / area)
    assert found.area == pytest.approx(2 * area, rel=1e-6)
    assert found.i_major == pytest.approx(2 * ixx, rel=1e-6)
    assert found.i_minor == pytest.approx(2 * (iyy + area * centroid**2), rel=1e-6)
    assert found.surface == pytest.approx(2 * (length(outline) - h), rel=1e-6)


@given(st.floats(20, 600), st.floats(1e-4, 1e-3))
def test_thin_tubes_and_squares_approach_their_middle_lines(d: float, slim: float) -> None:
    """As the wall goes to zero: tube A = π d t, I = π d³ t/8; square A = 4 a t, I = 2/3 a³ t."""
    t = d * slim
    mid = d - t
    tube = geometry.circular_hollow(diameter=d, wall=t)
    square = geometry.hot_finished_hollow(depth=d, width=d, wall=t)
    assert tube.area == pytest.approx(math.pi * mid * t, rel=1e-12)
    assert tube.i_major == pytest.approx(math.pi * mid**3 * t / 8, rel=2 * slim)
    assert square.area == pytest.approx(4 * mid * t, rel=2 * slim)
    assert square.i_major == pytest.approx(2 / 3 * mid**3 * t, rel=6 * slim)


@given(st.floats(20, 600), st.floats(20, 600), st.floats(0.001, 1000))
def test_moments_scale_with_the_unit_of_length(h: float, b: float, k: float) -> None:
    """Lengths times k give area times k², second moments times k⁴ and surface times k."""
    one, many = geometry.rectangle(depth=h, width=b), geometry.rectangle(depth=k * h, width=k * b)
    assert many.area == pytest.approx(k**2 * one.area, rel=1e-12)
    assert many.i_major == pytest.approx(k**4 * one.i_major, rel=1e-12)
    assert many.surface == pytest.approx(k * one.surface, rel=1e-12)


def test_us_angles_are_two_rectangles_less_what_printed_tables_lack() -> None:
    """Area is b t + (a - t) t less 0.5 %; the least radius is hardly above the printed one."""
    found = geometry.us_angle(leg=4.0, other_leg=3.0, thickness=0.25)
    assert found.area == pytest.approx(0.995 * 0.25 * (4 + 3 - 0.25), rel=1e-14)
    assert found.surface == pytest.approx(14.0)
    # L4x4x1/4, AISC Manual Table 1-7, from memory: A 1.93 in2, I 3.00 in4, rz 0.783 in
    known = geometry.us_angle(leg=4.0, other_leg=4.0, thickness=0.25)
    assert known.area <= 1.93 * 1.0005
    assert known.i_major <= 3.00 * 1.005
    assert math.sqrt(known.i_least / known.area) <= 0.783 * 1.004


def test_wider_than_deep_still_puts_the_greater_moment_first() -> None:
    """Major means the greater second moment, also where the width exceeds the depth."""
    lying = geometry.rectangle(depth=50.0, width=100.0)
    standing = geometry.rectangle(depth=100.0, width=50.0)
    assert (lying.i_major, lying.i_minor) == pytest.approx((standing.i_major, standing.i_minor))


def test_cold_formed_corners_change_at_6_and_10_mm() -> None:
    """EN 10219-2 Annex A: 2.0 t up to 6 mm, 2.5 t up to 10 mm, 3.0 t above."""
    for wall, factor in ((3, 2.0), (6, 2.0), (6.3, 2.5), (10, 2.5), (12.5, 3.0)):
        assert geometry.cold_formed_corner(wall * 1e-3) == pytest.approx(factor * wall * 1e-3)


def test_plies_add_up_without_help_across_the_joints() -> None:
    """Three 1.5 x 7.25 boards: n b h³/12 in their depth, n h b³/12 across the joints."""
    three = geometry.built_up_plies(depth=7.25, ply=1.5, plies=3)
    assert three.area == pytest.approx(3 * 1.5 * 7.25)
    assert three.i_major == pytest.approx(3 * 1.5 * 7.25**3 / 12)
    assert three.i_minor == three.i_least == pytest.approx(3 * 7.25 * 1.5**3 / 12)
    assert three.surface == pytest.approx(2 * (7.25 + 4.5))
