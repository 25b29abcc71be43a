"""What a cut of the mesh says: resultants, hoop stress over the depth, and how the section moves."""

from __future__ import annotations

import numpy as np

from intrados.fem.element import basis
from intrados.fem.introduction import resultants
from intrados.fem.membrane import Membrane, Numbers, first_line, last_line
from intrados.fem.trace import across_cut
from intrados.theory.quadrature import Array, unit_gauss

# Share of a row's depth from an edge at which a stress is taken where the mapping has no gradient on the edge.
_JUST_INSIDE = 1e-6


def forces_beyond(membrane: Membrane, displacement: Array, forces: Array, line: int) -> Array:
    """Fx, Fy and moment about the origin, shape (3), that the part beyond a line exerts on the part before it.

    From nodal forces: what the stiffness of the elements beside the line has taken up, less the loads on them. The
    sum is over the cut's own unknowns, which is exact on any mesh; ``forces`` are the consistent element forces of
    the loads between the ends, so that on the line of an end the answer is the load or the reaction there.
    """
    before = line == len(membrane.strip.columns)
    column = line - 1 if before else line
    elements = np.arange(column * membrane.rows, (column + 1) * membrane.rows)
    local = displacement[membrane.vectors[elements]]
    taken = (membrane.stiffness[elements] @ local[:, :, None])[:, :, 0] - forces[elements]
    on_cut = _cut_functions(membrane, last=before)
    only_cut = np.zeros((len(membrane.scalars), taken.shape[1], 1))
    only_cut[elements[:, None], on_cut[None, :], 0] = taken[:, on_cut]
    # Forces the cut exerts on the elements beyond it are minus those it exerts on the elements before it.
    on_elements: Array = resultants(membrane, only_cut)[:, 0]
    return on_elements if before else -on_elements


def _cut_functions(membrane: Membrane, last: bool) -> Numbers:
    degree, count = membrane.square.degree, membrane.scalars.shape[1]
    line = last_line(degree) if last else first_line(degree)
    return np.array([*line, *(count + index for index in line)], dtype=np.int64)


def hoop_profile(membrane: Membrane, displacement: Array, columns: tuple[int, ...], line: int, eta: Array) -> Array:
    """Hoop stress (n) at shares ``eta`` of the depth on a line: the mean of what the columns beside it say."""
    sides = [_hoop_in(membrane, displacement, column, line - column, eta) for column in columns]
    mean: Array = np.mean(sides, axis=0)
    return mean


def _hoop_in(membrane: Membrane, displacement: Array, column: int, end: int, eta: Array) -> Array:
    strip = membrane.strip
    piece = strip.columns[column].piece
    share = strip.columns[column].share(np.array([float(end)]))
    tangent = strip.member.tangent(piece, share)[:, 0]
    result = np.empty_like(eta)
    for index, row in enumerate(strip.rows):
        low, high = row.eta(np.array([0.0, 1.0]))
        inside = (eta >= low - 1e-12) & (eta <= high + 1e-12)
        points = across_cut(float(end), local_q(row.coefficients, eta[inside]))
        element = np.array([column * membrane.rows + index])
        result[inside] = along(tangent, stresses(membrane, displacement, element, points)[:, 0])
    return result


def local_q(coefficients: tuple[float, float, float], eta: Array) -> Array:
    """The local coordinate at which a row reaches eta."""
    c0, c1, c2 = coefficients
    root = np.sqrt(np.maximum(c1 * c1 - 4.0 * c2 * (c0 - eta), 0.0))
    # The form of the root that divides by a sum: right for c2 = 0 too. Rows rise, so the root counts positive.
    return np.clip(2.0 * (eta - c0) / np.maximum(c1 + root, 1e-300), 0.0, 1.0)


def stresses(membrane: Membrane, displacement: Array, elements: Numbers, points: Array) -> Array:
    """sigma_xx, sigma_yy, tau_xy, shape (3, elements, n), at reference points (2, n) of each element.

    Where a row starts as a square root of the depth its edge has no gradient: the value just inside is taken.
    """
    ends = np.array([0.0, 1.0])
    rates = np.array([row.eta_rate(ends) for row in membrane.strip.rows])[np.unique(elements % membrane.rows)]
    low, high = np.where(rates.min(axis=0) <= 1e-12, _JUST_INSIDE, 0.0)
    inside = np.array([points[0], np.clip(points[1], low, 1.0 - high)])
    count = membrane.scalars.shape[1]
    _, gradients = basis(membrane.square.degree, inside)
    local = displacement[membrane.vectors[elements]].reshape(len(elements), 2, count).transpose(1, 0, 2)
    (xs, ys), (xq, yq) = membrane.geometry[None, :, elements] @ gradients[:, None]
    (us, vs), (uq, vq) = local[None] @ gradients[:, None]
    determinant = xs * yq - ys * xq
    ux, uy = (us * yq - uq * ys) / determinant, (uq * xs - us * xq) / determinant
    vx, vy = (vs * yq - vq * ys) / determinant, (vq * xs - vs * xq) / determinant
    c11, c12, c33 = membrane.elastic.plane_stress
    return np.array([c11 * ux + c12 * vy, c12 * ux + c11 * vy, c33 * (uy + vx)])


def along(tangent: Array, stress: Array) -> Array:
    """Normal stress in the direction ``tangent`` (2, ...) of stresses (3, ...)."""
    turned: Array = (
        tangent[0] ** 2 * stress[0] + tangent[1] ** 2 * stress[1] + 2.0 * tangent[0] * tangent[1] * stress[2]
    )
    return turned


def mean_motion(membrane: Membrane, displacement: Array, line: int, piece: int) -> Array:
    """How a section moves: mean ux, uy over its area, and its rotation (counter-clockwise), shape (3)."""
    strip = membrane.strip
    column = strip.columns_beside(line, piece)[0]
    end = line - column
    share = strip.columns[column].share(np.array(float(end)))
    section = strip.member.section(piece, float(share))
    tangent = strip.member.tangent(piece, share[None])[:, 0]
    q, weight = unit_gauss(membrane.square.degree + 6)
    count = membrane.scalars.shape[1]
    total = np.zeros(3)
    for index, row in enumerate(strip.rows):
        inner = strip.inner_share(piece, row.eta(q))
        area = weight * np.abs(row.eta_rate(q)) * section.depth * strip.width(piece, share, inner)
        values, _ = basis(membrane.square.degree, across_cut(float(end), q))
        vectors = membrane.vectors[column * membrane.rows + index]
        ux, uy = displacement[vectors].reshape(2, count) @ values
        lever = inner * section.depth - section.centroid
        stretch = tangent[0] * ux + tangent[1] * uy
        total += np.array(
            [ux @ area / section.area, uy @ area / section.area, (stretch * lever) @ area / section.inertia]
        )
    # A point x outward of the centroid moves along the tangent by side * x under a counter-clockwise turn.
    total[2] *= strip.member.sides[piece]
    return total
