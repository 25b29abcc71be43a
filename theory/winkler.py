"""Hand theory: the curved beam of Winkler and Bach, and the straight beam it becomes.

``R`` is the centroid radius, None on a straight piece. ``x`` is the distance from the inner face, shape (n). Signs as
everywhere: N > 0 tension, M > 0 straightens, tau has the sign of V; moments about the centroid.
"""

from __future__ import annotations

import numpy as np

from intrados.theory.quadrature import Array
from intrados.theory.section import Section


def hoop(section: Section, R: float | None, N: float, M: float, x: Array) -> Array:
    """Hoop stress sigma = N/A + M (rn - r)/(A e r); on a straight N/A + M y/I. Stress, > 0 tension.

    Source: Winkler-Bach theory as in the handbooks; r - rn is formed in local coordinates (z + e).
    """
    z = np.asarray(x) - section.centroid
    if R is None:
        return N / section.area - M * z / section.inertia
    ring = section.ring(R)
    return N / ring.area - M * (z + ring.e) / (ring.area * ring.e * (R + z))


def fibres(section: Section, R: float | None, N: float, M: float) -> tuple[float, float]:
    """Hoop stress at the inner and the outer fibre."""
    inner, outer = hoop(section, R, N, M, np.array([0.0, section.depth]))
    return float(inner), float(outer)


def shear(section: Section, R: float | None, V: float, x: Array) -> Array:
    """Shear stress over the depth: V Q/(I t) on a straight, its curved counterpart on an arc.

    Curved: tau = V rn (R A' - Q')/(A e t r^2), from equilibrium of the part between the inner face and r.
    """
    x = np.asarray(x, dtype=np.float64)
    static = -section.integral_to(x, lambda points: points - section.centroid)
    if R is None:
        return _over_width(section, V * static / section.inertia, x)
    ring = section.ring(R)
    r = R + x - section.centroid
    return _over_width(section, V * ring.rn * static / (ring.area * ring.e * r * r), x)


def radial(section: Section, R: float | None, N: float, M: float, x: Array) -> Array:
    """Radial stress over the depth, > 0 tension; zero on a straight.

    The moment M - N R bends alone, sigma_r = m (rn Am' - A')/(A e t r), and the force N acts through the centre of
    curvature, sigma_r = N rn (R A' - Q')/(A e t r^2); A', Am', Q' are the integrals of t, t/r, r t from the inner face.
    """
    x = np.asarray(x, dtype=np.float64)
    if R is None:
        return np.zeros_like(x)
    ring = section.ring(R)

    def bending(points: Array) -> Array:
        z = points - section.centroid
        return -(z + ring.e) / (R + z)

    r = R + x - section.centroid
    # rn Am' - A' and R A' - Q' as integrals of small quantities: no digits are lost at slight curvature.
    pure = section.integral_to(x, bending, R) * (M - N * R) / r
    through_centre = -section.integral_to(x, lambda points: points - section.centroid) * N * ring.rn / r**2
    return _over_width(section, (pure + through_centre) / (ring.area * ring.e), x)


def _over_width(section: Section, flow: Array, x: Array) -> Array:
    """Stress of a flow (force per length) in the width; both faces are free, also where the width vanishes."""
    width = section.width(x)
    inside = (x > 0.0) & (x < section.depth) & (width > 0.0)
    return np.where(inside, flow / np.where(inside, width, 1.0), 0.0)
