"""Gauss-Legendre rules, worked out once each."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@lru_cache(maxsize=512)
def unit_gauss(points: int) -> tuple[Array, Array]:
    """Points and weights on 0 to 1: exact for polynomials of degree 2 points - 1."""
    nodes, weights = np.polynomial.legendre.leggauss(points)
    return 0.5 * (nodes + 1.0), 0.5 * weights
