"""The reference square of degree p: scikit-fem's ElementQuadP tabulated once, for all elements of all members."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from intrados.theory.quadrature import Array, unit_gauss


@dataclass(frozen=True, eq=False)
class ReferenceSquare:
    """Basis of degree ``degree`` on the unit square (first coordinate along the member, second across).

    ``values`` (basis, points) and ``gradients`` (2, basis, points) at the tensor Gauss ``points`` (2, points) with
    ``weights``; ``nodes`` (2, basis) are Gauss-Lobatto points and ``to_coefficients`` (basis, nodes) turns values there
    into coefficients.
    """

    degree: int
    points: Array
    weights: Array
    values: Array
    gradients: Array
    nodes: Array
    to_coefficients: Array


@lru_cache(maxsize=16)
def reference_square(degree: int) -> ReferenceSquare:
    """The tabulated element. Quadrature is exact to order 2p + 1: less leaves modes without energy."""
    gauss, weight = unit_gauss(degree + 1)
    points = np.array([np.repeat(gauss, len(gauss)), np.tile(gauss, len(gauss))])
    values, gradients = basis(degree, points)
    inner = np.polynomial.legendre.Legendre.basis(degree).deriv().roots()
    lobatto = 0.5 * (np.concatenate([[-1.0], np.sort(inner.real), [1.0]]) + 1.0)
    nodes = np.array([np.repeat(lobatto, degree + 1), np.tile(lobatto, degree + 1)])
    return ReferenceSquare(
        degree=degree,
        points=points,
        weights=np.outer(weight, weight).ravel(),
        values=values,
        gradients=gradients,
        nodes=nodes,
        to_coefficients=np.linalg.inv(basis(degree, nodes)[0].T).astype(np.float64),
    )


def basis(degree: int, points: Array) -> tuple[Array, Array]:
    """Values (basis, points) and gradients (2, basis, points) of ElementQuadP at reference points (2, points)."""
    return _basis(degree, np.ascontiguousarray(points).tobytes())


@lru_cache(maxsize=512)
def _basis(degree: int, points: bytes) -> tuple[Array, Array]:
    from skfem import ElementQuadP

    element = ElementQuadP(degree)
    at = np.frombuffer(points).reshape(2, -1)
    pairs = [element.lbasis(at, index) for index in range((degree + 1) ** 2)]
    values = np.array([np.broadcast_to(value, at.shape[1]) for value, _ in pairs])
    return values, np.array([gradient for _, gradient in pairs]).transpose(1, 0, 2)
