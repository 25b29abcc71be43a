"""The exact rectangular curved bar: reference digits, and the equations that make it exact."""

from __future__ import annotations

import json
import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

from intrados.theory import shapes
from intrados.theory.rectangle_bar import RectangleBar
from intrados.theory.winkler import hoop

FOURTEEN_DIGITS = json.loads((Path(__file__).parent / "published" / "rectangle_bar.json").read_text())["cases"]
Array = NDArray[np.float64]
RATIOS = [0.55, 0.8, 1.5, 4.9, 5.1, 20.0]


def bar_of(ratio: float) -> RectangleBar:
    return RectangleBar(40.0 * (ratio - 0.5), 40.0 * (ratio + 0.5), 10.0)


def gauss(bar: RectangleBar) -> tuple[Array, Array]:
    nodes, weights = np.polynomial.legendre.leggauss(80)
    half = 0.5 * (bar.b - bar.a)
    return bar.R + half * nodes, half * bar.t * weights


@pytest.mark.parametrize("row", FOURTEEN_DIGITS, ids=lambda row: f"{row['case']}-{row['phi_deg']}-{row['r']}")
def test_stresses_equal_the_fourteen_digit_table(row: dict[str, Any]) -> None:
    bar = RectangleBar(row["a"], row["b"], row["t"])
    phi = math.radians(row["phi_deg"])
    N, V = row["P"] * math.cos(phi), row["P"] * math.sin(phi)
    M = N * bar.R + row["M_offset_Nmm"]
    r = np.array([float(row["r"])])
    assert bar.radial(N, M, r)[0] == pytest.approx(float(row["sr"]), rel=2e-13, abs=1e-12)
    assert bar.hoop(N, M, r)[0] == pytest.approx(float(row["st"]), rel=2e-13, abs=1e-12)
    assert bar.shear(V, r)[0] == pytest.approx(float(row["tau"]), rel=2e-13, abs=1e-12)
    section = shapes.rectangle(bar.b - bar.a, bar.t)
    assert hoop(section, bar.R, N, M, r - bar.a)[0] == pytest.approx(float(row["st_WB"]), rel=2e-13, abs=1e-12)


@pytest.mark.parametrize("ratio", RATIOS)
def test_stresses_add_up_to_their_resultants(ratio: float) -> None:
    bar = bar_of(ratio)
    r, weight = gauss(bar)
    N, V, M = 2000.0, 700.0, -5e4
    sigma = bar.hoop(N, M, r)
    assert weight @ sigma == pytest.approx(N, rel=1e-10)
    assert weight @ (sigma * (bar.R - r)) == pytest.approx(M, rel=1e-10)
    assert weight @ bar.shear(V, r) == pytest.approx(V, rel=1e-10)


@pytest.mark.parametrize("ratio", RATIOS)
def test_both_faces_are_free(ratio: float) -> None:
    bar = bar_of(ratio)
    faces = np.array([bar.a, bar.b])
    scale = np.abs(bar.hoop(2000.0, 5e4, faces)).max()
    assert np.abs(bar.radial(2000.0, 5e4, faces)).max() < 1e-13 * scale
    assert np.abs(bar.shear(700.0, faces)).max() == 0.0


def derivative(f: Callable[[Array], Array], r: Array) -> Array:
    """f'(r) to rounding: the imaginary part of f a vanishing step off the real axis."""
    step = 1e-30
    off_axis: Any = r + 1j * step
    return np.imag(f(off_axis)) / step


@pytest.mark.parametrize("ratio", RATIOS)
def test_pure_bending_is_in_equilibrium_and_compatible(ratio: float) -> None:
    """(r sigma_r)' = sigma_theta, and the sum of the normal stresses is A + B ln r."""
    bar = bar_of(ratio)
    r = np.linspace(bar.a, bar.b, 21)
    hoop_stress = bar.hoop(0.0, 1.0, r)
    scale = np.abs(hoop_stress).max()
    assert np.abs(derivative(lambda at: at * bar.radial(0.0, 1.0, at), r) - hoop_stress).max() < 1e-11 * scale
    B = r * derivative(lambda at: bar.radial(0.0, 1.0, at) + bar.hoop(0.0, 1.0, at), r)
    assert B == pytest.approx(np.full_like(r, B[0]), rel=1e-10)


@pytest.mark.parametrize("ratio", RATIOS)
def test_a_force_through_the_centre_is_in_equilibrium_and_compatible(ratio: float) -> None:
    """(r sigma_r)' = sigma_theta - tau, (r^2 tau)' = r sigma_theta, and the sum of the normal stresses is C r + D/r."""
    bar = bar_of(ratio)
    r = np.linspace(bar.a, bar.b, 21)
    hoop_stress, tau = bar.hoop(1.0, bar.R, r), bar.shear(1.0, r)
    scale = np.abs(hoop_stress).max()
    along_r = derivative(lambda at: at * bar.radial(1.0, bar.R, at), r) - (hoop_stress - tau)
    assert np.abs(along_r).max() < 1e-11 * scale
    around = derivative(lambda at: at * at * bar.shear(1.0, at), r) / r - hoop_stress
    assert np.abs(around).max() < 1e-11 * scale
    twice_C = derivative(lambda at: at * (bar.radial(1.0, bar.R, at) + bar.hoop(1.0, bar.R, at)), r) / r
    assert twice_C == pytest.approx(np.full_like(r, twice_C[0]), rel=1e-10)


@pytest.mark.parametrize("ratio", [0.55, 3.0, 200.0])
def test_shear_and_radial_stress_of_a_force_through_the_centre_are_one_function(ratio: float) -> None:
    bar = bar_of(ratio)
    r = np.linspace(bar.a, bar.b, 11)
    difference = bar.radial(1.0, bar.R, r) - bar.shear(1.0, r)
    assert np.abs(difference).max() < 1e-12 * np.abs(bar.shear(1.0, r)).max()


@pytest.mark.parametrize("ratio", [30.0, 1e2, 1e3, 1e4])
def test_hand_theory_is_low_by_a_twentieth_of_the_squared_curvature(ratio: float) -> None:
    """Force through the centre: hand/exact = K rn/(8 R h e) at either fibre, whose series in h/R is 1 - (h/R)^2/20."""
    bar = bar_of(ratio)
    section = shapes.rectangle(40.0, 10.0)
    exact = bar.hoop(1.0, bar.R, np.array([bar.a, bar.b]))
    winkler = hoop(section, bar.R, 1.0, bar.R, np.array([0.0, 40.0]))
    # The next term of the series is of the order (h/R)^4; rounding is 1e-15 of the stress.
    error = 1.0 / ratio**2 + 1e-14 * ratio**2
    assert (winkler / exact - 1.0) * ratio**2 == pytest.approx([-0.05, -0.05], abs=error)


@pytest.mark.parametrize("ratio", [1e2, 1e4, 1e6])
def test_slender_bar_tends_to_the_straight_beam(ratio: float) -> None:
    bar = bar_of(ratio)
    section = shapes.rectangle(40.0, 10.0)
    x = np.linspace(0.0, 40.0, 9)
    for N, M in ((0.0, 1e5), (2000.0, 0.0), (2000.0, 1e5)):
        straight = hoop(section, None, N, M, x)
        assert bar.hoop(N, M, bar.a + x) == pytest.approx(straight, abs=2.0 / ratio * np.abs(straight).max())
    parabola = 1.5 * 700.0 / 400.0 * (1.0 - ((x - 20.0) / 20.0) ** 2)
    assert bar.shear(700.0, bar.a + x) == pytest.approx(parabola, abs=2.0 / ratio * parabola.max())
