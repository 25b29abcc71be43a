"""The exact plane-stress bar of constant curvature and rectangular section, under N, V and M.

Pure bending after Golovin, a force through the centre of curvature after Timoshenko and Goodier (Theory of Elasticity).
Any N, M is the moment M - N R of the first and the force N of the second; V is its shear. ``a``, ``b`` inner and outer
radius, ``t`` width; signs as everywhere.

The published forms are differences of nearly equal terms when the bar is slender. They are written out here in
u = h/2R, z = r/R - 1 and L = ln(b/a) = 2 atanh u, so that what cancels is cancelled by hand.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from intrados.theory.quadrature import Array

_SLENDER = 0.1


@dataclass(frozen=True)
class RectangleBar:
    """A rectangular bar of constant curvature: radii ``a`` < ``b`` and width ``t`` (length)."""

    a: float
    b: float
    t: float

    @property
    def R(self) -> float:
        """Centroid radius (length)."""
        return 0.5 * (self.a + self.b)

    def hoop(self, N: float, M: float, r: Array) -> Array:
        """Hoop stress at radii r."""
        return (M - N * self.R) * self._bending_hoop(r) + N * self._force_hoop(r)

    def radial(self, N: float, M: float, r: Array) -> Array:
        """Radial stress at radii r, > 0 tension."""
        return (M - N * self.R) * self._bending_radial(r) + N * self._force_radial(r)

    def shear(self, V: float, r: Array) -> Array:
        """Shear stress at radii r; it has the sign of V."""
        return V * self._force_radial(r)

    @property
    def _u(self) -> float:
        return (self.b - self.a) / (self.b + self.a)

    @property
    def _log(self) -> float:
        return 2.0 * math.atanh(self._u)

    @property
    def _bending_scale(self) -> float:
        """-4 R^2/(t N0), where N0 = (b^2 - a^2)^2 - 4 a^2 b^2 L^2 = 16 R^4 (u - v)(u + v), v = (1 - u^2) atanh u."""
        u = self._u
        v = (1.0 - u * u) * math.atanh(u)
        u_less_v = _odd_series(u, lambda n: 2.0 / (n * (n - 2))) if u < _SLENDER else u - v
        return -1.0 / (4.0 * self.t * self.R**2 * u_less_v * (u + v))

    def _bending_common(self, r: Array) -> Array:
        """(b^2 ln(r/b) + a^2 ln(a/r) + a^2 b^2 L) / R^2."""
        u, z = self._u, (r - self.R) / self.R
        return 4.0 * u * np.log1p(z) - u * u * self._log - 2.0 * u * math.log1p(-u * u)

    def _bending_log(self, r: Array) -> Array:
        """(1 - a^2 b^2/(r^2 R^2)) L."""
        u, z = self._u, (r - self.R) / self.R
        return self._log * (z + u * u) * (2.0 + z - u * u) / (1.0 + z) ** 2

    def _bending_radial(self, r: Array) -> Array:
        return self._bending_scale * (self._bending_common(r) - self._bending_log(r))

    def _bending_hoop(self, r: Array) -> Array:
        u = self._u
        atanh_less_u = _odd_series(u, lambda n: 1.0 / n) if u < _SLENDER else math.atanh(u) - u
        return self._bending_scale * (self._bending_common(r) + self._bending_log(r) - 4.0 * atanh_less_u)

    @property
    def _force_scale(self) -> float:
        """R^2/(t K), where K = (a^2 + b^2) L - (b^2 - a^2) = 4 R^2 ((1 + u^2) atanh u - u)."""
        u = self._u
        direct = (1.0 + u * u) * math.atanh(u) - u
        bracket = _odd_series(u, lambda n: 1.0 / n + 1.0 / (n - 2)) if u < _SLENDER else direct
        return 1.0 / (4.0 * self.t * bracket)

    def _force_radial(self, r: Array) -> Array:
        return self._force_scale / self.R**2 * (r - self.a) * (r + self.a) * (self.b - r) * (self.b + r) / r**3

    def _force_hoop(self, r: Array) -> Array:
        """-3 r + a^2 b^2/r^3 + (a^2 + b^2)/r, over R and scaled, with w = (r/R)^2 - 1."""
        u, z = self._u, (r - self.R) / self.R
        w = z * (2.0 + z)
        bracket = 4.0 * w + 3.0 * w * w - 2.0 * u * u * w - u**4
        return -self._force_scale / self.R * bracket / (1.0 + z) ** 3


def _odd_series(u: float, coefficient: Callable[[int], float]) -> float:
    """The sum of coefficient(n) u^n over n = 3, 5, 7 ..., to rounding for u below 0.1."""
    return sum(coefficient(n) * u**n for n in range(3, 21, 2))
