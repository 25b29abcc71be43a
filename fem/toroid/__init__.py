"""The exact three-dimensional bar of constant curvature: hoop stress of a section under N and M.

Where plane stress of width t(r) takes a section to keep its shape, this model lets it deform: flanges curl, tubes
become oval, wide bars bend across. Every quantity is per unit N and per unit M about the centroid, so that
sigma = N f_N + M f_M; the shear force V adds no hoop stress. Stresses do not depend on Young's modulus.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np
from threadpoolctl import threadpool_limits

from intrados.fem.toroid.cells import Corner, HalfSection
from intrados.fem.toroid.layers import layered
from intrados.fem.toroid.states import States, lattice, solve_states
from intrados.fem.toroid.trace import FaceTrace, SectionMap, face_trace, section_map
from intrados.fem.toroid.tube import tubular
from intrados.theory.load import Face
from intrados.theory.quadrature import Array
from intrados.theory.section import EllipticChord, Section

__all__ = ["FaceStress", "Peak", "Toroid", "toroid"]

Place = Literal["mid", "over the web", "between", "edge"]

# Degrees tried until the change from one to the next is small enough.
_DEGREES = (4, 5, 6, 7, 8, 9, 10, 11, 12)
# But no more nodes than this, which keeps the dearest sections below a second or so.
_MOST_NODES = 8000
# The stated uncertainty is so many times the change from one degree to the next, and never less than this share of
# the face's largest stress: two degrees may agree by chance, and what the smallest cells at re-entrant corners leave,
# some parts in 1e5, no degree shows.
_FACTOR = 3.0
_LEAST = 1e-4
# Share of the half width within which a place counts as mid-width or edge.
_NEAR = 1e-6


@dataclass(frozen=True)
class FaceStress:
    """Stress of a face under N and M (stress units).

    ``value`` is the hoop stress of largest magnitude over the face's width, at ``z`` (length) from the plane of
    bending: a ``place`` "over the web" lies on a flange where the web joins it from behind. ``mid`` and ``edge`` are
    the hoop stress at mid-width and at the edge; ``transverse`` is the stress across the face at ``z``; ``von_mises``
    and ``tresca`` are the largest over the face. ``uncertainty`` is the numerical uncertainty of the hoop stress.
    """

    value: float
    z: float
    place: Place
    mid: float
    edge: float
    transverse: float
    von_mises: float
    tresca: float
    uncertainty: float


@dataclass(frozen=True)
class Peak:
    """Largest equivalent stress over the section (stress units), where it is (length), its numerical uncertainty."""

    value: float
    x: float
    z: float
    uncertainty: float


@dataclass(frozen=True, eq=False)
class Solution:
    """The states at one degree."""

    degree: int
    states: States
    inner: FaceTrace
    outer: FaceTrace

    @property
    def faces(self) -> tuple[FaceTrace, FaceTrace]:
        """Inner and outer face."""
        return self.inner, self.outer

    def trace(self, side: Face) -> FaceTrace:
        """Stress along a face, per unit N and per unit M."""
        return self.inner if side == "inner" else self.outer

    @cached_property
    def map(self) -> SectionMap:
        """Stress over the half section, per unit N and per unit M."""
        return section_map(self.states)


@dataclass(frozen=True, eq=False)
class Toroid:
    """The solved section, ``fine`` one degree above ``coarse``."""

    section: Section
    R: float
    nu: float
    half: HalfSection
    coarse: Solution
    fine: Solution

    @property
    def map(self) -> SectionMap:
        """Stress over the half section, for a figure. Cells at re-entrant corners are not to be read closely."""
        return self.fine.map

    @property
    def flexibility(self) -> float:
        """Turning of one end against the other under a moment, over that of straight-beam theory, M s/(E I)."""
        return abs(self.fine.states.per_M.bent) * self.section.inertia / self.R

    @property
    def corners(self) -> tuple[Corner, ...]:
        """Re-entrant corners of the half section, where stress grows without bound."""
        return self.half.corners

    def trace(self, side: Face) -> FaceTrace:
        """Stress along a face, per unit N and per unit M."""
        return self.fine.trace(side)

    def face(self, side: Face, N: float, M: float) -> FaceStress:
        """Stress of a face under N and M: superposed first, then the largest taken."""
        coarse, fine = self.coarse.trace(side), self.fine.trace(side)
        acting = np.array([N, M])
        hoop, transverse = acting @ fine.hoop, acting @ fine.transverse
        largest = int(np.abs(hoop).argmax())
        change = np.abs(hoop - acting @ coarse.hoop).max()
        uncertainty = float(max(_FACTOR * change, _LEAST * np.abs(hoop).max()))
        # Where mid-width or edge cannot be told from the largest, that is the place.
        near = np.abs(hoop) >= np.abs(hoop[largest]) - uncertainty
        at = next((end for end in (0, len(hoop) - 1) if near[end]), largest)
        stress = np.array([hoop, np.zeros_like(hoop), transverse, np.zeros_like(hoop)])
        return FaceStress(
            value=float(hoop[largest]),
            z=float(fine.z[at]),
            place=self._place(side, float(fine.z[at]), float(fine.z[-1])),
            mid=float(hoop[0]),
            edge=float(hoop[-1]),
            transverse=float(transverse[at]),
            von_mises=float(von_mises(stress).max()),
            tresca=float(tresca(stress).max()),
            uncertainty=uncertainty,
        )

    def von_mises(self, N: float, M: float) -> Peak:
        """Largest von Mises stress over the section under N and M, away from re-entrant corners and without V."""
        return self._peak([von_mises(self._acting(one, N, M)) for one in (self.coarse.map, self.fine.map)])

    def tresca(self, N: float, M: float) -> Peak:
        """Largest Tresca stress over the section under N and M, away from re-entrant corners and without V."""
        return self._peak([tresca(self._acting(one, N, M)) for one in (self.coarse.map, self.fine.map)])

    def _acting(self, over: SectionMap, N: float, M: float) -> Array:
        return N * over.stress[:, 0] + M * over.stress[:, 1]

    def _peak(self, equivalent: list[Array]) -> Peak:
        over = self.map
        counts = np.ones(len(over.x), dtype=bool)
        for corner in self.corners:
            counts &= np.hypot(over.x - corner.x, over.z - corner.z) > corner.reach
        coarse, fine = (np.where(counts, values, -math.inf) for values in equivalent)
        at = int(fine.argmax())
        change = abs(float(fine[at] - coarse.max()))
        value = float(fine[at])
        return Peak(value, float(over.x[at]), float(over.z[at]), max(_FACTOR * change, _LEAST * value))

    def _place(self, side: Face, z: float, half_width: float) -> Place:
        web = (self.half.inner if side == "inner" else self.half.outer).over_web
        near = _NEAR * half_width
        if web is not None and web[0] - near <= z <= web[1] + near:
            return "over the web"
        if z <= near:
            return "mid"
        return "edge" if z >= half_width - near else "between"


def von_mises(stress: Array) -> Array:
    """Von Mises stress of hoop, radial, transverse and their shear, (4, n)."""
    h, r, t, tau = stress
    result: Array = np.sqrt(0.5 * ((h - r) ** 2 + (r - t) ** 2 + (t - h) ** 2) + 3.0 * tau**2)
    return result


def tresca(stress: Array) -> Array:
    """Tresca stress, the largest difference of principal stresses, of hoop, radial, transverse and shear, (4, n)."""
    h, r, t, tau = stress
    middle, half = 0.5 * (r + t), np.hypot(0.5 * (r - t), tau)
    result: Array = np.maximum.reduce([2.0 * half, np.abs(h - middle - half), np.abs(h - middle + half)])
    return result


def toroid(section: Section, R: float, nu: float, target: float = 5e-4) -> Toroid:
    """The exact bar of a section bent to the centroid radius ``R`` (length) with Poisson's ratio ``nu``, 0 <= nu < 0.5.

    The degree of the elements rises until the uncertainty of the hoop stress on both faces, per unit N as per unit M,
    is within ``target`` times the larger face's stress, or the degrees are used up: the uncertainties then say so.
    Raises ValueError where the inner face reaches the centre of curvature, and SectionError for a hollow section of no
    one kind (a taper from a tube to a box).
    """
    section.ring(R)
    half = half_section(section, R)
    affordable = [degree for degree in _DEGREES if len(half.cells) * degree**2 <= _MOST_NODES]
    # More threads would wait for each other: the matrices are small.
    with threadpool_limits(limits=1, user_api="blas"):
        coarse = _read(half, R, nu, _DEGREES[0])
        fine = _read(half, R, nu, _DEGREES[1])
        for degree in affordable[2:]:
            if _FACTOR * _change(coarse.faces, fine.faces) <= target:
                break
            coarse, fine = fine, _read(half, R, nu, degree)
    return Toroid(section, R, nu, half, coarse, fine)


def half_section(section: Section, R: float) -> HalfSection:
    """The cells of the half section of a bar bent to the centroid radius ``R`` (length)."""
    if any(isinstance(chord, EllipticChord) for layer in section.layers for chord in layer.void):
        return tubular(section)
    return layered(section, R)


def _read(half: HalfSection, R: float, nu: float, degree: int) -> Solution:
    solved = solve_states(lattice(half, R, nu, degree))
    inner, outer = face_trace(solved, half.inner, "inner"), face_trace(solved, half.outer, "outer")
    return Solution(degree, solved, inner, outer)


def _change(coarse: tuple[FaceTrace, ...], fine: tuple[FaceTrace, ...]) -> float:
    """Largest change of the faces' hoop stress, as a share of the largest, per unit N or per unit M."""
    changes = [np.abs(one.hoop - other.hoop).max(axis=1) for one, other in zip(coarse, fine, strict=True)]
    sizes = [np.abs(one.hoop).max(axis=1) for one in fine]
    return float((np.max(changes, axis=0) / np.max(sizes, axis=0)).max())
