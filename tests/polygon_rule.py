"""Section integrals of any outline by contour integrals, independent of the layers and rules of the product.

By Green's theorem the integral of f(x) over an area is the contour integral of -z f(x) dx, edge by edge with
Gauss-Legendre: f = 1 for the area, and f = x^2/(R + x) about the centroid for K2.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Outline = Sequence[tuple[float, float]]
Array = NDArray[np.float64]


@dataclass(frozen=True)
class PolygonRule:
    """Outlines (distance from the inner face, distance across), each once round; all after the first are holes."""

    outlines: tuple[Outline, ...]

    @property
    def area(self) -> float:
        return self._integral(lambda x: np.ones_like(x))

    @property
    def centroid(self) -> float:
        return self._integral(lambda x: x) / self.area

    @property
    def inertia(self) -> float:
        centroid = self.centroid
        return self._integral(lambda x: (x - centroid) ** 2)

    def K2(self, R: float) -> float:
        """int z^2/(R + z) dA about the centroid."""
        centroid = self.centroid
        return self._integral(lambda x: (x - centroid) ** 2 / (R + (x - centroid)), pole=centroid - R)

    def e(self, R: float) -> float:
        K2 = self.K2(R)
        return K2 * R / (self.area * R + K2)

    def J(self, R: float) -> float:
        return self.area / R + self.K2(R) / R**2

    def _integral(self, f: Callable[[Array], Array], pole: float = -math.inf) -> float:
        total = 0.0
        for index, outline in enumerate(self.outlines):
            inside = abs(math.fsum(_contour(outline, f, pole)))
            total += inside if index == 0 else -inside
        return total


def _contour(outline: Outline, f: Callable[[Array], Array], pole: float) -> Iterator[float]:
    for (x0, z0), (x1, z1) in zip(outline, [*outline[1:], outline[0]], strict=True):
        if x0 == x1:
            continue
        mid, half = 0.5 * (x0 + x1), 0.5 * (x1 - x0)
        nodes, weights = np.polynomial.legendre.leggauss(_points(abs((mid - pole) / half)))
        z = 0.5 * (z0 + z1) + 0.5 * (z1 - z0) * nodes
        yield -half * float(weights @ (z * f(mid + half * nodes)))


def _points(distance: float) -> int:
    """Points for a pole at ``distance`` half spans from the middle of an edge: the error falls as rho^(-2n).

    Two more make the rule exact for the cubic that the pole divides.
    """
    if math.isinf(distance):
        return 3
    rho = distance + math.sqrt(distance**2 - 1.0)
    return 2 + math.ceil(19.0 / math.log(rho))


def mirrored(half: Outline) -> Outline:
    """The closed outline whose one half, inner face outward, is (distance from inner face, half width)."""
    return [*half, *[(x, -z) for x, z in reversed(half)]]


def ellipse_polygon(centre: float, semi_depth: float, semi_width: float, sides: int) -> Outline:
    """The inscribed polygon of an ellipse, symmetric about the plane of bending."""
    angle = 2.0 * np.pi * np.arange(sides) / sides
    x, z = centre - semi_depth * np.cos(angle), semi_width * np.sin(angle)
    return list(zip(x.tolist(), z.tolist(), strict=True))
