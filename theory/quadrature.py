"""Gauss-Legendre rules and running integrals, worked out once each."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.polynomial import legendre
from numpy.typing import NDArray

Array = NDArray[np.float64]


@lru_cache(maxsize=512)
def unit_gauss(points: int) -> tuple[Array, Array]:
    """Points and weights on 0 to 1: exact for polynomials of degree 2 points - 1."""
    nodes, weights = np.polynomial.legendre.leggauss(points)
    return 0.5 * (nodes + 1.0), 0.5 * weights


@lru_cache(maxsize=128)
def running_series(points: int) -> Array:
    """From values at the points of ``unit_gauss``, times its weights, to the series of their running integral from 0.

    Shape (points + 1, points); the Legendre series is in 2 x - 1.
    """
    nodes, _ = unit_gauss(points)
    values = legendre.legvander(2.0 * nodes - 1.0, points - 1)
    series = legendre.legint(np.diag(np.arange(points) + 0.5) @ values.T, lbnd=-1.0)
    return np.asarray(series, dtype=np.float64)
