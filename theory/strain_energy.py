"""Displacements from the strain energy of the curved bar (Castigliano), to stand beside those of the mesh.

    U = int [ M^2/(2 A E e R) + N^2/(2 A E) - M N/(A E R) + k V^2/(2 G A) ] ds

with M > 0 straightening and N > 0 tension; on a straight M^2/(2 E I) and no coupling term. k is the shear factor of
the straight section. The displacement wanted is the work of the loads' N, V, M against those of a unit force.
"""

from __future__ import annotations

import itertools
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from intrados.theory.quadrature import Array, unit_gauss
from intrados.theory.section import Section
from intrados.theory.statics import Loading

_POINTS = 10


@dataclass(frozen=True)
class _Slice:
    """A place with its share of the centroid line, and the section's compliances there (times E)."""

    piece: int
    share: float
    length: float
    bending: float
    stretching: float
    coupling: float
    shearing: float


@lru_cache(maxsize=256)
def shear_factor(section: Section) -> float:
    """k = A/I^2 int Q^2/t dx, the shear factor of a straight bar: 6/5 for a rectangle, 10/9 for a circle.

    Source: energy of the shear stress V Q/(I t); common practice for curved bars too.
    """
    x, area = section.quadrature(np.inf)
    inside = area > 0.0
    static = section.integral_to(x[inside], lambda points: points - section.centroid)
    width = section.width(x[inside])
    return float(section.area / section.inertia**2 * (area[inside] @ (static / width) ** 2))


def displacement(
    loading: Loading, E: float, nu: float, piece: int, share: float, point: tuple[float, float]
) -> tuple[float, float]:
    """Displacement (x, y; length) of a ``point`` that moves as if rigidly joined to the section at a place.

    Relative to the clamped end; on a free member relative to the section at its start.
    """
    from_end = loading.end == "clamped"
    total = np.zeros(2)
    for part in _slices(loading, nu, piece, share, from_end):
        N, V, M = loading.resultants(part.piece, part.share)
        for axis in (0, 1):
            n, v, m = _unit_resultants(loading, part, point, axis, from_end)
            work = M * m * part.bending + N * n * part.stretching
            work += V * v * part.shearing - (M * n + N * m) * part.coupling
            total[axis] += work * part.length / E
    return float(total[0]), float(total[1])


def _unit_resultants(
    loading: Loading, part: _Slice, point: tuple[float, float], axis: int, from_end: bool
) -> tuple[float, float, float]:
    """N, V, M at a slice between the held end and the point, of a unit force along an axis at the point."""
    member = loading.member
    at = np.array([part.share])
    tangent, inward = member.tangent(part.piece, at)[:, 0], member.inward(part.piece, at)[:, 0]
    x, y = member.centroid_point(part.piece, part.share)
    # Held at the start the force is beyond the cut; held at the end it is before it, and acts with the other sign.
    sign = -1.0 if from_end else 1.0
    moment = (point[0] - x) if axis == 1 else -(point[1] - y)
    return sign * tangent[axis], -sign * inward[axis], -sign * member.sides[part.piece] * moment


def _slices(loading: Loading, nu: float, piece: int, share: float, from_end: bool) -> list[_Slice]:
    """Gauss slices of the centroid line between the held end and a place."""
    member = loading.member
    nodes, weights = unit_gauss(_POINTS)
    stretches = []
    for index in range(len(member.pieces)):
        first, last = 0.0, 1.0
        if index == piece:
            first, last = (share, 1.0) if from_end else (0.0, share)
        elif (index < piece) == from_end:
            continue
        stretches += [(index, a, b) for a, b in _smooth_parts(loading, index, first, last)]
    slices = []
    for index, first, last in stretches:
        for node, weight in zip(nodes, weights, strict=True):
            at = first + (last - first) * node
            length = (last - first) * weight * _line_speed(loading, index, at)
            slices.append(_slice(loading, nu, index, float(at), float(length)))
    return slices


def _smooth_parts(loading: Loading, piece: int, first: float, last: float) -> list[tuple[float, float]]:
    """A stretch of a piece cut where a load begins or ends."""
    edges = {first, last}
    for spread in loading.spreads:
        if spread.piece == piece:
            edges |= {edge for edge in (spread.first, spread.last) if first < edge < last}
    ordered = sorted(edges)
    return list(itertools.pairwise(ordered))


def _line_speed(loading: Loading, piece: int, share: float) -> float:
    member = loading.member
    at: Array = np.array([share])
    along, across = member.velocity(piece, at, member.centroid(piece, at), member.centroid_rate(piece, at))
    return float(np.hypot(along, across)[0])


def _slice(loading: Loading, nu: float, piece: int, share: float, length: float) -> _Slice:
    section, R = loading.member.section(piece, share), loading.member.radius(piece, share)
    shearing = 2.0 * (1.0 + nu) * shear_factor(section) / section.area
    if R is None:
        return _Slice(piece, share, length, 1.0 / section.inertia, 1.0 / section.area, 0.0, shearing)
    ring = section.ring(R)
    area_R = ring.area * R
    return _Slice(piece, share, length, 1.0 / (area_R * ring.e), 1.0 / ring.area, 1.0 / area_R, shearing)
