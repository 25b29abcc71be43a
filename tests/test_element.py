"""The reference square: what scikit-fem's element promises, and the rules tabulated with it."""

from __future__ import annotations

import numpy as np
import pytest
from skfem import ElementQuadP

from intrados.fem.element import basis, reference_square
from intrados.fem.membrane import first_line, last_line
from intrados.theory.quadrature import unit_gauss

DEGREES = [3, 4, 7, 10]
POINTS = np.random.default_rng(0).random((2, 9))


@pytest.mark.parametrize("degree", DEGREES)
def test_the_basis_is_scikit_fems(degree: int) -> None:
    values, gradients = basis(degree, POINTS)
    for index in range((degree + 1) ** 2):
        value, gradient = ElementQuadP(degree).lbasis(POINTS, index)
        assert np.array_equal(values[index], value)
        assert np.array_equal(gradients[:, index], gradient)


@pytest.mark.parametrize("degree", DEGREES)
def test_the_four_vertex_functions_add_up_to_one(degree: int) -> None:
    values, gradients = basis(degree, POINTS)
    assert values[:4].sum(axis=0) == pytest.approx(np.ones(9), abs=1e-14)
    assert gradients[:, :4].sum(axis=1) == pytest.approx(np.zeros((2, 9)), abs=1e-14)


@pytest.mark.parametrize("degree", DEGREES)
def test_gradients_are_the_slopes_of_the_values(degree: int) -> None:
    inside, step = 0.1 + 0.8 * POINTS, 1e-6
    _, gradients = basis(degree, inside)
    for axis in (0, 1):
        shift = np.zeros((2, 1))
        shift[axis] = step
        slope = (basis(degree, inside + shift)[0] - basis(degree, inside - shift)[0]) / (2.0 * step)
        assert gradients[axis] == pytest.approx(slope, abs=1e-7)


@pytest.mark.parametrize("degree", DEGREES)
def test_every_polynomial_of_its_degree_is_interpolated_exactly(degree: int) -> None:
    square = reference_square(degree)

    def polynomial(points: np.ndarray) -> np.ndarray:
        return (points[0] - 0.3) ** degree * (0.7 - points[1]) ** degree + points[0] * points[1]

    coefficients = square.to_coefficients @ polynomial(square.nodes)
    assert coefficients @ basis(degree, POINTS)[0] == pytest.approx(polynomial(POINTS), abs=1e-13)


@pytest.mark.parametrize("degree", DEGREES)
def test_quadrature_is_exact_to_twice_the_degree_plus_one(degree: int) -> None:
    square = reference_square(degree)
    order = 2 * degree + 1
    assert square.weights.sum() == pytest.approx(1.0, rel=1e-14)
    moments = square.weights @ (square.points[0] ** order * square.points[1] ** (order - 1))
    assert moments == pytest.approx(1.0 / ((order + 1) * order), rel=1e-12)


@pytest.mark.parametrize("degree", DEGREES)
def test_only_the_functions_of_a_line_live_on_it(degree: int) -> None:
    q = unit_gauss(5)[0]
    for end, line in ((0.0, first_line(degree)), (1.0, last_line(degree))):
        values, _ = basis(degree, np.array([np.full_like(q, end), q]))
        lives = np.abs(values).max(axis=1) > 1e-12
        assert np.flatnonzero(lives).tolist() == sorted(line)
        assert len(line) == degree + 1


@pytest.mark.parametrize("count", [2, 6, 12])
def test_gauss_points_integrate_what_they_should(count: int) -> None:
    points, weights = unit_gauss(count)
    assert weights @ points ** (2 * count - 1) == pytest.approx(0.5 / count, rel=1e-13)
    assert 0.0 < points.min() and points.max() < 1.0
