"""The exact plane-stress bar of constant curvature and rectangular section, under N, V and M.

Pure bending after Golovin, a force through the centre of curvature after Timoshenko and Goodier (Theory of Elasticity).
Any N, M is the moment M - N R of the first and the force N of the second; V is its shear. ``a``, ``b`` inner and outer
radius, ``t`` width; signs as everywhere.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from intrados.theory.section import Array


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
        """Radial stress at radii r."""
        return (M - N * self.R) * self._bending_radial(r) + N * self._force_radial(r)

    def shear(self, V: float, r: Array) -> Array:
        """Shear stress at radii r."""
        return V * self._force_radial(r)

    @property
    def _log(self) -> float:
        return math.log(self.b / self.a)

    @property
    def _bending_scale(self) -> float:
        a2, b2 = self.a**2, self.b**2
        return -4.0 / (self.t * ((b2 - a2) ** 2 - 4.0 * a2 * b2 * self._log**2))

    def _bending_radial(self, r: Array) -> Array:
        a2, b2 = self.a**2, self.b**2
        terms = a2 * b2 / r**2 * self._log + b2 * np.log(r / self.b) + a2 * np.log(self.a / r)
        return self._bending_scale * terms

    def _bending_hoop(self, r: Array) -> Array:
        a2, b2 = self.a**2, self.b**2
        terms = -a2 * b2 / r**2 * self._log + b2 * np.log(r / self.b) + a2 * np.log(self.a / r) + b2 - a2
        return self._bending_scale * terms

    @property
    def _force_scale(self) -> float:
        a2, b2 = self.a**2, self.b**2
        return 1.0 / (self.t * ((a2 + b2) * self._log - (b2 - a2)))

    def _force_radial(self, r: Array) -> Array:
        a2, b2 = self.a**2, self.b**2
        return self._force_scale * (r * r - a2) * (b2 - r * r) / r**3

    def _force_hoop(self, r: Array) -> Array:
        a2, b2 = self.a**2, self.b**2
        return self._force_scale * (-3.0 * r + a2 * b2 / r**3 + (a2 + b2) / r)
