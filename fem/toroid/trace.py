"""Stress along the two faces of a section, and over the section, read from the states of one degree.

A face is free: its stress is E/(1 - nu^2) (strain along one way + nu strain along the other). Hoop strain and strain
along the side of a cell are read at the Gauss points of the side, where they are one to two orders better than the
stress in the cell, and carried on by the polynomial through them.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import legendre

from intrados.fem.element import basis
from intrados.fem.toroid.cells import FaceCells
from intrados.fem.toroid.states import Field, States
from intrados.theory.load import Face
from intrados.theory.quadrature import Array, unit_gauss

# Places along the side of a cell, and along either coordinate of a cell, at which stress is given.
_ALONG = 0.5 - 0.5 * np.cos(np.linspace(0.0, np.pi, 65))
_WITHIN = np.linspace(0.0, 1.0, 7)


@dataclass(frozen=True, eq=False)
class FaceTrace:
    """Stress along a face from the plane of bending to its edge: ``z`` (n), both stresses (2, n) per unit N and M.

    ``hoop`` is the stress along the member, ``transverse`` that across it within the face.
    """

    z: Array
    hoop: Array
    transverse: Array


@dataclass(frozen=True, eq=False)
class SectionMap:
    """Stress over the half section: ``x`` (from the inner face) and ``z`` of n points, ``triangles`` (m, 3) of them.

    ``stress`` (4, 2, n): hoop, radial, transverse (along z) and their shear, each per unit N and per unit M.
    """

    x: Array
    z: Array
    triangles: np.ndarray[tuple[int, ...], np.dtype[np.int64]]
    stress: Array

    def hoop(self, N: float, M: float) -> Array:
        """Hoop stress (n) under N and M."""
        hoop: Array = N * self.stress[0, 0] + M * self.stress[0, 1]
        return hoop


def face_trace(states: States, face: FaceCells, side: Face) -> FaceTrace:
    """The stress along a face; of a face without width, at its one point."""
    lattice = states.per_M.lattice
    degree = lattice.square.degree
    gauss, _ = unit_gauss(degree)
    end = np.full(degree, 0.0 if side == "inner" else 1.0)
    to = _carried(gauss, _ALONG if face.is_flat else end[:1], degree - 1)
    points = np.array([end, gauss]) if face.is_flat else np.array([gauss, np.ones(degree)])
    values, gradients = basis(degree, points)
    values = lattice.square.to_coefficients.T @ values
    along = lattice.square.to_coefficients.T @ gradients[1 if face.is_flat else 0]
    cells = list(face.cells)
    x, z = lattice.position[:, cells]
    r = lattice.R + x @ values - lattice.half.section.centroid
    speed = np.array([x @ along, z @ along])
    stiff = 1.0 / (1.0 - lattice.nu**2)
    hoop, transverse = [], []
    for field in (states.per_N, states.per_M):
        around = (field.bent * (r - lattice.R) + field.stretch[cells] @ values) / r
        across = (speed * (field.moved[:, cells] @ along)).sum(axis=0) / (speed**2).sum(axis=0)
        hoop.append(_joined(stiff * (around + lattice.nu * across) @ to.T))
        transverse.append(_joined(stiff * (across + lattice.nu * around) @ to.T))
    sides = lattice.position[1][cells][:, np.all(lattice.square.nodes == np.array([[end[0]], [0.0]]), axis=0)]
    other = lattice.position[1][cells][:, np.all(lattice.square.nodes == np.array([[end[0]], [1.0]]), axis=0)]
    reach = _joined(sides + (other - sides) * _ALONG) if face.is_flat else np.zeros(1)
    return FaceTrace(reach, np.array(hoop), np.array(transverse))


def section_map(states: States) -> SectionMap:
    """The stress over the section, from the quadrature points of every cell by least squares of one degree less."""
    lattice = states.per_M.lattice
    degree, cells = lattice.square.degree, len(lattice.numbers)
    gauss, _ = unit_gauss(degree + 1)
    one = _carried(gauss, _WITHIN, degree - 1)
    to: Array = np.kron(one, one).astype(np.float64)
    count = len(_WITHIN)
    inside = np.array([np.repeat(_WITHIN, count), np.tile(_WITHIN, count)])
    places = lattice.square.to_coefficients.T @ basis(degree, inside)[0]
    x, z = (lattice.position @ places).reshape(2, -1)
    stress = np.array([[_over(part, to) for part in _parts(field)] for field in (states.per_N, states.per_M)])
    return SectionMap(x, z, _triangles(count, cells), stress.transpose(1, 0, 2))


def _parts(field: Field) -> tuple[Array, Array, Array, Array]:
    return field.hoop, field.radial, field.across, field.shear


def _over(values: Array, to: Array) -> Array:
    result: Array = (values @ to.T).ravel()
    return result


def _triangles(count: int, cells: int) -> np.ndarray[tuple[int, ...], np.dtype[np.int64]]:
    """Two triangles to every square of a cell's lattice, for all cells."""
    corner = (np.arange(count - 1)[:, None] * count + np.arange(count - 1)).ravel()
    square = np.stack([corner, corner + count, corner + count + 1, corner, corner + count + 1, corner + 1], axis=1)
    return (square[None] + count**2 * np.arange(cells)[:, None, None]).reshape(-1, 3)


def _carried(gauss: Array, to: Array, degree: int) -> Array:
    """Matrix (to, gauss) from values at Gauss points to values anywhere, by the best polynomial of a degree."""
    at = legendre.legvander(2.0 * to - 1.0, degree)
    result: Array = at @ np.linalg.pinv(legendre.legvander(2.0 * gauss - 1.0, degree))
    return result


def _joined(samples: Array) -> Array:
    """Samples (cells, along) in one row; where two cells meet, their mean."""
    middle = 0.5 * (samples[:-1, -1] + samples[1:, 0])
    samples = samples.copy()
    samples[1:, 0] = middle
    return np.append(samples[:, :-1].ravel() if samples.shape[1] > 1 else [], samples[-1, -1])
