"""How loads enter the mesh: consistent forces of spreads and of end loads, one column per unit distribution.

Each load is a sum of three distributions. Their amounts are found anew on the mesh, so that the discrete resultant and
moment equal the load's to rounding.
"""

from __future__ import annotations

import numpy as np

from intrados.fem.element import basis
from intrados.fem.membrane import Membrane
from intrados.fem.trace import across_cut, along_face
from intrados.theory import winkler
from intrados.theory.load import EndLoad
from intrados.theory.quadrature import Array, unit_gauss
from intrados.theory.rectangle_bar import RectangleBar
from intrados.theory.section import Section
from intrados.theory.spread import BodySpread, FaceSpread, Spread, face_speed
from intrados.theory.statics import Loading, end_place, end_wrench

_EXTRA_POINTS = 6


def forces_inside(membrane: Membrane, loading: Loading) -> Array:
    """Consistent forces (elements, 2 basis) of the loads that enter between the ends, as ``membrane.vectors``."""
    total = np.zeros(membrane.vectors.shape)
    for spread in loading.spreads:
        total += _with_resultant(membrane, _spread_parts(membrane, spread), spread.wanted())
    return total


def forces_on_ends(membrane: Membrane, loading: Loading) -> Array:
    """Consistent forces (elements, 2 basis) of the loads on the ends, ordered as ``membrane.vectors``."""
    total = np.zeros(membrane.vectors.shape)
    for load in loading.end_loads:
        total += _with_resultant(membrane, _end_parts(membrane, load), end_wrench(membrane.strip.member, load))
    return total


def resultants(membrane: Membrane, vectors: Array) -> Array:
    """Fx, Fy and moment about the origin, shape (3, k), of element vectors (elements, 2 basis, k)."""
    count = membrane.scalars.shape[1]
    fx, fy = vectors[:, :count], vectors[:, count:]
    x, y = membrane.geometry
    # The four vertices are the basis functions whose sum is one.
    turning = np.einsum("eb,ebk->k", x, fy) - np.einsum("eb,ebk->k", y, fx)
    return np.array([fx[:, :4].sum(axis=(0, 1)), fy[:, :4].sum(axis=(0, 1)), turning])


def _with_resultant(membrane: Membrane, parts: Array, wanted: Array) -> Array:
    """The combination of three parts (elements, 2 basis, 3) whose resultant is wanted."""
    conditions = resultants(membrane, parts)
    middle = _middle(membrane)
    shift = np.eye(3)
    shift[2, :2] = middle[1], -middle[0]
    scale = np.diag([1.0, 1.0, 1.0 / membrane.strip.member.size])
    amounts = np.linalg.solve(scale @ shift @ conditions, scale @ shift @ wanted)
    combined: Array = parts @ amounts
    return combined


def _middle(membrane: Membrane) -> Array:
    corners: Array = membrane.geometry[:, :, :4].mean(axis=(1, 2))
    return corners


def _spread_parts(membrane: Membrane, spread: Spread) -> Array:
    parts = np.zeros((*membrane.vectors.shape, 3))
    strip = membrane.strip
    for index, column in enumerate(strip.columns):
        inside = column.first >= spread.first - 1e-9 and column.last <= spread.last + 1e-9
        if column.piece != spread.piece or not inside:
            continue
        if isinstance(spread, FaceSpread):
            q, weight = unit_gauss(membrane.square.degree + _EXTRA_POINTS)
            share = column.share(q)
            per_q = (column.last - column.first) * face_speed(strip.member, spread.piece, spread.face, share)
            density = spread.distributions(strip.member, share)
            face_row, points = along_face(strip, spread.piece, spread.face, q)
            values, _ = basis(membrane.square.degree, points)
            parts[index * membrane.rows + face_row] = _tested(values, density, weight * per_q)
        elif isinstance(spread, BodySpread):
            q_along, q_across = membrane.square.points
            share = column.share(q_along)
            for row_index, row in enumerate(strip.rows):
                element = index * membrane.rows + row_index
                inner = strip.inner_share(column.piece, row.eta(q_across))
                density = spread.distributions(strip.member, share, inner * strip.member.depth(column.piece, share))
                parts[element] = _tested(membrane.square.values, density, membrane.volumes[element])
    return parts


def _end_parts(membrane: Membrane, load: EndLoad) -> Array:
    """Unit N, V and M on an end as the exact bar distributes them: tractions along the cut's tangent and normal."""
    strip, member = membrane.strip, membrane.strip.member
    piece, share = end_place(member, load.end)
    section, R = member.section(piece, share), member.radius(piece, share)
    tangent, inward = member.tangent(piece, np.array([share])), member.inward(piece, np.array([share]))
    parts = np.zeros((*membrane.vectors.shape, 3))
    column = 0 if load.end == "start" else len(strip.columns) - 1
    q, weight = unit_gauss(membrane.square.degree + _EXTRA_POINTS)
    for index, row in enumerate(strip.rows):
        inner = strip.inner_share(piece, row.eta(q))
        x = inner * section.depth
        hoop_n, hoop_m, tau = end_distribution(section, R, x)
        density = np.array([hoop_n * tangent, -tau * inward, hoop_m * tangent])
        area = np.abs(row.eta_rate(q)) * section.depth * strip.width(piece, np.array(share), inner)
        values, _ = basis(membrane.square.degree, across_cut(share if load.end == "end" else 0.0, q))
        parts[column * membrane.rows + index] = _tested(values, density, weight * area)
    return parts


def end_distribution(section: Section, R: float | None, x: Array) -> tuple[Array, Array, Array]:
    """Hoop stress of N = 1 and of M = 1, and shear stress of V = 1, over the depth of an end (1/length^2, 1/length^3).

    The exact closed form for a rectangle on an arc; Winkler-Bach, or the straight beam, for any other.
    """
    if R is not None and section.has_constant_width:
        bar = RectangleBar(R - section.centroid, R - section.centroid + section.depth, section.widest)
        r = bar.a + x
        return bar.hoop(1.0, 0.0, r), bar.hoop(0.0, 1.0, r), bar.shear(1.0, r)
    return (
        winkler.hoop(section, R, 1.0, 0.0, x),
        winkler.hoop(section, R, 0.0, 1.0, x),
        winkler.shear(section, R, 1.0, x),
    )


def _tested(values: Array, density: Array, weight: Array) -> Array:
    """Forces (2 basis, 3) of three densities (3, 2, points) against basis values (basis, points)."""
    forces: Array = np.einsum("bp,kcp,p->cbk", values, density, weight).reshape(-1, 3)
    return forces
