"""Fibre stress: hoop stress at the faces, from the stretch of the face itself.

On a free face the stress along it is E times the strain along it, read from the displacement at the Gauss points of
the element's edge, where it is one to two orders better than the full stress tensor at the face. Where a load presses
the face, nu times the normal stress is added.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import legendre

from intrados.fem.element import basis
from intrados.fem.membrane import Membrane
from intrados.fem.trace import along_face
from intrados.theory.load import Face
from intrados.theory.quadrature import Array, unit_gauss
from intrados.theory.spread import FaceSpread, into_material
from intrados.theory.statics import Loading


@dataclass(frozen=True, eq=False)
class FaceStress:
    """Stress along one face at the Gauss points of every column: ``hoop`` (columns, points), points as ``shares``.

    ``position`` is the distance along the face from the start of the piece's first column, in the same shape.
    """

    face: Face
    shares: Array
    position: Array
    hoop: Array

    def sampled(self, q: Array) -> Array:
        """Stress (columns, n) at local coordinates q (0 to 1), by the polynomial through each column's Gauss points."""
        nodes = 2.0 * unit_gauss(self.hoop.shape[1])[0] - 1.0
        to_q = legendre.legvander(2.0 * q - 1.0, len(nodes) - 1) @ np.linalg.inv(
            legendre.legvander(nodes, len(nodes) - 1)
        )
        values: Array = self.hoop @ to_q.T
        return values

    def at_cut(self, columns: tuple[int, ...], share: float) -> float:
        """Stress at a cut, from the columns beside it: least squares of degree p through their Gauss points."""
        if len(columns) == 1:
            first, last = self.shares[columns[0], [0, -1]]
            return float(self.sampled(np.array([1.0 if share > 0.5 * (first + last) else 0.0]))[columns[0], 0])
        shares = self.shares[list(columns)].ravel()
        low, high = shares.min(), shares.max()
        at = 2.0 * (np.append(shares, share) - low) / (high - low) - 1.0
        vandermonde = np.asarray(legendre.legvander(at, self.hoop.shape[1]))
        fitted = np.linalg.lstsq(vandermonde[:-1], self.hoop[list(columns)].ravel(), rcond=None)[0]
        return float(vandermonde[-1] @ fitted)


def face_stress(membrane: Membrane, loading: Loading, displacement: Array, face: Face) -> FaceStress:
    """Stress along a face of the solved membrane; ``displacement`` (unknowns)."""
    strip, degree = membrane.strip, membrane.square.degree
    q, _ = unit_gauss(degree)
    shares, positions, stresses = [], [], []
    reached = 0.0
    for index, column in enumerate(strip.columns):
        row, points = along_face(strip, column.piece, face, q)
        element = index * membrane.rows + row
        _, gradients = basis(degree, points)
        along = membrane.geometry[:, element] @ gradients[0]
        count = membrane.scalars.shape[1]
        local = displacement[membrane.vectors[element]].reshape(2, count) @ gradients[0]
        speed = np.hypot(*along)
        strain = (along * local).sum(axis=0) / speed**2
        share = column.share(q)
        normal, _ = pressed(loading, column.piece, face, share)
        shares.append(share)
        positions.append(reached + q * speed)
        reached += float(speed.mean())
        stresses.append(membrane.elastic.E * strain + membrane.elastic.nu * normal)
    return FaceStress(face, np.array(shares), np.array(positions), np.array(stresses))


def pressed(loading: Loading, piece: int, face: Face, share: Array) -> tuple[Array, Array]:
    """Normal (> 0 tension) and shear stress that loads put on a face, at the shares of a piece."""
    member = loading.member
    normal, shear = np.zeros_like(share), np.zeros_like(share)
    for spread in loading.spreads:
        if not isinstance(spread, FaceSpread) or spread.piece != piece or spread.face != face:
            continue
        inside = (share > spread.first) & (share < spread.last)
        traction = np.tensordot(np.array(spread.parts), spread.distributions(member, share), axes=1) * inside
        into, along = into_material(member, piece, face, share)
        sections = [member.section(piece, float(place)) for place in share]
        width = np.array([section.inner_width if face == "inner" else section.outer_width for section in sections])
        normal = normal - (traction * into).sum(axis=0) / width
        shear = shear + (traction * along).sum(axis=0) / width
    return normal, shear
