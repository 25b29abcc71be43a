"""Hand theory: its limits, its resultants, its equilibrium, and its error against the exact rectangular bar."""

from __future__ import annotations

import math

import numpy as np
import pytest
from rescaling import rescaled
from scipy.integrate import quad

from intrados.theory import shapes
from intrados.theory.rectangle_bar import RectangleBar
from intrados.theory.section import Section
from intrados.theory.winkler import fibres, hoop, radial, shear

SECTIONS = [
    shapes.rectangle(40.0, 20.0),
    shapes.trapezoid(60.0, 40.0, 15.0),
    shapes.triangle(60.0, 45.0, "inner"),
    shapes.triangle(60.0, 45.0, "outer"),
    shapes.circle(40.0),
    shapes.tube(40.0, 28.0),
    shapes.tee(60.0, 60.0, 12.0, 10.0, "inner"),
    shapes.i_section(62.0, 10.0, 60.0, 12.0, 40.0, 10.0),
    shapes.box(60.0, 50.0, 8.0, 6.0),
]
each_section = pytest.mark.parametrize("section", SECTIONS, ids=lambda section: section.shape)
N, V, M = 3000.0, 1100.0, -8e4


def radius(section: Section, inner_radius_over_depth: float) -> float:
    return section.centroid + inner_radius_over_depth * section.depth


@each_section
def test_error_against_the_straight_beam_falls_as_depth_over_radius(section: Section) -> None:
    straight = np.array(fibres(section, None, N, M))
    errors = [np.abs(np.array(fibres(section, ratio * section.depth, N, M)) - straight) for ratio in (1e3, 2e3, 4e3)]
    assert np.log2(errors[0] / errors[1]) == pytest.approx([1.0, 1.0], abs=2e-3)
    assert np.log2(errors[1] / errors[2]) == pytest.approx([1.0, 1.0], abs=1e-3)


def test_straight_beam_is_force_over_area_and_moment_times_distance_over_inertia() -> None:
    # A = 1350, centroid 20 from the base, I = b h^3/36 = 270000; M > 0 pulls on the inner fibre.
    inner, outer = fibres(shapes.triangle(60.0, 45.0, "inner"), None, 2700.0, 5.4e5)
    assert (inner, outer) == pytest.approx((2.0 + 2.0 * 20.0, 2.0 - 2.0 * 40.0), rel=1e-13)


def test_a_straightening_moment_pulls_on_the_inner_fibre() -> None:
    inner, outer = fibres(shapes.circle(40.0), 60.0, 0.0, 1.0)
    assert inner > 0.0 > outer
    assert inner > -outer


@each_section
@pytest.mark.parametrize("clear", [0.05, 1.0, 1e4])
def test_hoop_stress_adds_up_to_N_and_M(section: Section, clear: float) -> None:
    R = radius(section, clear)
    x, area = section.quadrature(R)
    sigma = hoop(section, R, N, M, x)
    force_scale = float(area @ np.abs(sigma))
    assert area @ sigma == pytest.approx(N, abs=1e-12 * force_scale)
    assert area @ (sigma * (section.centroid - x)) == pytest.approx(M, abs=1e-12 * force_scale * section.depth)


@each_section
@pytest.mark.parametrize("clear", [0.05, 1.0, 1e4, math.inf])
def test_shear_stress_adds_up_to_V(section: Section, clear: float) -> None:
    R = None if math.isinf(clear) else radius(section, clear)
    x, area = section.quadrature(math.inf if R is None else R)
    assert area @ shear(section, R, V, x) == pytest.approx(V, rel=1e-12)


@each_section
@pytest.mark.parametrize("clear", [0.05, 1.0])
def test_radial_and_shear_stress_keep_the_inner_part_in_equilibrium(section: Section, clear: float) -> None:
    """(r t sigma_r)' = t sigma_theta - t tau_1 N and (r^2 t tau)' = r t sigma_theta, by adaptive quadrature.

    On an unloaded arc dV/d(phi) = N, and tau = V tau_1; the hoop stress that shear balances is that of a force through
    the centre, N = V there and M = N R.
    """
    R = radius(section, clear)

    def r(x: float) -> float:
        return R + x - section.centroid

    def width(x: float) -> float:
        return float(section.width(x))

    def lifted(x: float) -> float:
        at = np.array([x])
        return width(x) * float((hoop(section, R, N, M, at) - N * shear(section, R, 1.0, at))[0])

    def pushed(x: float) -> float:
        return r(x) * width(x) * float(hoop(section, R, V, V * R, np.array([x]))[0])

    scale = max(map(abs, fibres(section, R, N, M)))
    for x in (0.1 * section.depth, 0.55 * section.depth, 0.93 * section.depth):
        stops = [b for b in section.breaks if 0.0 < b < x] or None
        flow = quad(lifted, 0.0, x, points=stops, epsabs=0.0, epsrel=1e-10)[0]
        found = float(radial(section, R, N, M, np.array([x]))[0])
        assert found == pytest.approx(flow / (r(x) * width(x)), abs=1e-9 * scale)
        flow = quad(pushed, 0.0, x, points=stops, epsabs=0.0, epsrel=1e-10)[0]
        found = float(shear(section, R, V, np.array([x]))[0])
        assert found == pytest.approx(flow / (r(x) ** 2 * width(x)), abs=1e-9 * scale)


@each_section
@pytest.mark.parametrize("curved", [False, True])
def test_radial_and_shear_stress_vanish_at_both_faces(section: Section, curved: bool) -> None:
    R = radius(section, 0.5) if curved else None
    faces = np.array([0.0, section.depth])
    near = np.array([1e-9, 1.0 - 1e-9]) * section.depth
    scale = max(map(abs, fibres(section, R, N, M)))
    for stress in (radial(section, R, N, M, faces), shear(section, R, V, faces)):
        assert stress.tolist() == [0.0, 0.0]
    assert np.abs(radial(section, R, N, M, near)).max() < 1e-7 * scale
    assert np.abs(shear(section, R, V, near)).max() < 1e-7 * scale


@each_section
def test_a_straight_has_no_radial_stress(section: Section) -> None:
    assert not radial(section, None, N, M, np.linspace(0.0, section.depth, 9)).any()


@pytest.mark.parametrize("ratio", [1e4, 1e6])
def test_radial_stress_of_a_slender_rectangle_is_the_hoop_flow_over_the_radius(ratio: float) -> None:
    """With c = x/h: sigma_r R t = 6 M c (1 - c)/h + N (c - 3 c^2 + 2 c^3); the shear takes the rest of N."""
    R, c = 40.0 * ratio, np.linspace(0.0, 1.0, 9)
    flow = 6.0 * M * c * (1.0 - c) / 40.0 + N * (c - 3.0 * c**2 + 2.0 * c**3)
    found = radial(shapes.rectangle(40.0, 20.0), R, N, M, 40.0 * c)
    assert found * R * 20.0 == pytest.approx(flow, abs=2.0 / ratio * np.abs(flow).max())


def test_straight_shear_is_the_handbook_parabola_and_the_four_thirds_of_a_circle() -> None:
    x = np.linspace(0.0, 40.0, 9)
    parabola = 1.5 * V / 800.0 * (1.0 - ((x - 20.0) / 20.0) ** 2)
    assert shear(shapes.rectangle(40.0, 20.0), None, V, x) == pytest.approx(parabola, abs=1e-12)
    middle = shear(shapes.circle(40.0), None, V, np.array([20.0]))[0]
    assert middle == pytest.approx(4.0 / 3.0 * V / (math.pi * 400.0), rel=1e-12)


@each_section
def test_curved_shear_tends_to_the_straight_one(section: Section) -> None:
    x = np.linspace(0.0, section.depth, 11)[1:-1]
    straight = shear(section, None, V, x)
    assert shear(section, 1e6 * section.depth, V, x) == pytest.approx(straight, rel=1e-5)


@each_section
@pytest.mark.parametrize("unit", [1e-3, 1.0 / 25.4])
def test_stresses_scale_with_the_units(section: Section, unit: float) -> None:
    """Lengths times ``unit`` and forces as they are: stresses go with its inverse square."""
    scaled = rescaled(section, unit)
    R, x = radius(section, 0.3), np.linspace(0.0, section.depth, 7)[1:-1]
    for small, large in (
        (hoop(scaled, R * unit, N, M * unit, x * unit), hoop(section, R, N, M, x)),
        (radial(scaled, R * unit, N, M * unit, x * unit), radial(section, R, N, M, x)),
        (shear(scaled, R * unit, V, x * unit), shear(section, R, V, x)),
    ):
        assert small * unit**2 == pytest.approx(large, rel=1e-10, abs=1e-12 * np.abs(large).max())


# Error of Winkler-Bach in % of the exact stress, computed apart from this code from the closed forms of Golovin and of
# Timoshenko and Goodier, rounded: R/h, pure M at the inner and outer fibre, force through the centre (both fibres).
PRINTED_ERRORS = [
    ("0.55", "24.0", "-20.8", "-23.7"),
    ("0.6", "9.3", "-14.5", "-18.1"),
    ("0.75", "1.2", "-6.8", "-10.2"),
    ("1", "-0.30", "-3.0", "-5.4"),
    ("1.5", "-0.39", "-1.1", "-2.3"),
    ("2", "-0.27", "-0.56", "-1.27"),
    ("3", "-0.14", "-0.23", "-0.56"),
    ("5", "-0.06", "-0.08", "-0.20"),
    ("10", "-0.016", "-0.018", "-0.05"),
    ("20", "-0.004", "-0.004", "-0.013"),
]


@pytest.mark.parametrize(("ratio", "inner", "outer", "force"), PRINTED_ERRORS)
def test_error_against_the_exact_bar_is_as_printed(ratio: str, inner: str, outer: str, force: str) -> None:
    R = float(ratio)
    section, bar = shapes.rectangle(1.0, 1.0), RectangleBar(R - 0.5, R + 0.5, 1.0)
    faces = np.array([bar.a, bar.b])
    bending = 100.0 * (np.array(fibres(section, R, 0.0, 1.0)) / bar.hoop(0.0, 1.0, faces) - 1.0)
    through = 100.0 * (np.array(fibres(section, R, 1.0, R)) / bar.hoop(1.0, R, faces) - 1.0)
    for found, printed in zip([*bending, *through], [inner, outer, force, force], strict=True):
        half_unit = 0.5 * 10.0 ** -len(printed.partition(".")[2])
        assert abs(found - float(printed)) <= half_unit * (1.0 + 1e-9)


def peaks(ratio: float) -> tuple[Section, RectangleBar, np.ndarray]:
    return shapes.rectangle(1.0, 1.0), RectangleBar(ratio - 0.5, ratio + 0.5, 1.0), np.linspace(0.0, 1.0, 401)


@pytest.mark.parametrize(("ratio", "within"), [(0.75, 3.5e-2), (1.0, 1e-2), (2.0, 1.5e-3)])
def test_peak_radial_stress_of_pure_bending_is_close_to_exact(ratio: float, within: float) -> None:
    section, bar, x = peaks(ratio)
    exact = bar.radial(0.0, 1.0, bar.a + x).max()
    assert radial(section, ratio, 0.0, 1.0, x).max() == pytest.approx(exact, rel=within)


@pytest.mark.parametrize("ratio", [0.75, 1.0, 1.5, 2.0, 5.0, 20.0])
def test_peak_radial_stress_of_a_force_through_the_centre_is_within_one_percent(ratio: float) -> None:
    section, bar, x = peaks(ratio)
    exact = bar.radial(1.0, ratio, bar.a + x).max()
    assert radial(section, ratio, 1.0, ratio, x).max() == pytest.approx(exact, rel=1e-2)


def test_leaving_the_shear_out_would_over_predict_radial_stress_by_29_percent() -> None:
    section, bar, x = peaks(1.0)
    lifted = section.integral_to(x, lambda at: hoop(section, 1.0, 1.0, 1.0, at), 1.0) / (bar.a + x)
    assert lifted.max() / bar.radial(1.0, 1.0, bar.a + x).max() == pytest.approx(1.29, abs=0.005)


def test_straight_shear_formula_would_be_ten_percent_low_at_a_ratio_of_one() -> None:
    section, bar, x = peaks(1.0)
    exact = bar.shear(1.0, bar.a + x).max()
    assert shear(section, None, 1.0, x).max() / exact == pytest.approx(0.90, abs=0.005)
    assert shear(section, 1.0, 1.0, x).max() / exact == pytest.approx(1.0, abs=0.01)
