"""Plane stress with thickness t: the member as high-order elements, its stiffness, its solution, its nodal forces.

Geometry is isoparametric: the exact member is interpolated at the Gauss-Lobatto points of each element, so that rigid
motions are in the element's space and nodal forces balance to rounding. Vectors over degrees of freedom alternate
x and y. Functions that live inside one element are eliminated there; the rest, the skeleton, is numbered along the
member, and its banded matrix is factored once for all load cases.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

# Loaded here and not where it is called: threads of a library can be limited only once it is loaded.
from scipy.linalg import cho_solve_banded, cholesky_banded

from intrados.fem.element import ReferenceSquare, reference_square
from intrados.fem.strip import Strip
from intrados.theory.quadrature import Array
from intrados.theory.statics import Support

Numbers = NDArray[np.int64]


@dataclass(frozen=True)
class Elastic:
    """Young's modulus (stress) and Poisson's ratio of an isotropic material in plane stress."""

    E: float
    nu: float

    @property
    def plane_stress(self) -> tuple[float, float, float]:
        """The constants c11, c12, c33 of sigma = c eps with the engineering shear strain."""
        stiff = self.E / (1.0 - self.nu**2)
        return stiff, self.nu * stiff, self.E / (2.0 * (1.0 + self.nu))


@dataclass(frozen=True, eq=False)
class Membrane:
    """A member discretised at one degree.

    ``scalars`` (elements, basis) numbers the basis functions along the member; ``geometry`` (2, elements, basis) are
    the coefficients of x and y; element (column i, row j) is i * rows + j. ``held`` are the unknowns fixed at zero.
    """

    strip: Strip
    elastic: Elastic
    square: ReferenceSquare
    scalars: Numbers
    geometry: Array
    held: Numbers

    @property
    def rows(self) -> int:
        """Rows of elements across the depth."""
        return len(self.strip.rows)

    @cached_property
    def unknowns(self) -> int:
        """How many degrees of freedom, held ones included."""
        return 2 * (int(self.scalars.max()) + 1)

    @cached_property
    def vectors(self) -> Numbers:
        """Unknowns of each element, (elements, 2 basis): x of all basis functions, then y."""
        return np.concatenate([2 * self.scalars, 2 * self.scalars + 1], axis=1)

    @cached_property
    def jacobians(self) -> tuple[Array, Array]:
        """At the quadrature points: the inverse transposed (2, 2, elements, points) and the determinant."""
        derivative = self.geometry[None] @ self.square.gradients[:, None]
        (xs, ys), (xq, yq) = derivative
        determinant = xs * yq - ys * xq
        return np.array([[yq, -ys], [-xq, xs]]) / determinant, np.abs(determinant)

    @cached_property
    def thickness(self) -> Array:
        """Thickness (length) at the quadrature points, (elements, points), from the exact section."""
        return self.thickness_at(self.square.points)

    def thickness_at(self, points: Array) -> Array:
        """Thickness (length) at reference points (2, n), shape (elements, n)."""
        strip = self.strip
        etas = np.array([row.eta(points[1]) for row in strip.rows])
        widths = []
        for column in strip.columns:
            inner = strip.inner_share(column.piece, etas)
            widths.append(strip.width(column.piece, column.share(points[0])[None, :], inner))
        return np.concatenate(widths)

    @cached_property
    def volumes(self) -> Array:
        """Volume belonging to each quadrature point, (elements, points)."""
        weighted: Array = self.jacobians[1] * self.thickness * self.square.weights
        return weighted

    @cached_property
    def stiffness(self) -> Array:
        """Element stiffness matrices (elements, 2 basis, 2 basis), ordered as ``vectors``."""
        inverse, _ = self.jacobians
        gradients = self.square.gradients
        gx = inverse[0, 0][:, None] * gradients[0] + inverse[0, 1][:, None] * gradients[1]
        gy = inverse[1, 0][:, None] * gradients[0] + inverse[1, 1][:, None] * gradients[1]
        c11, c12, c33 = self.elastic.plane_stress
        weighted = self.volumes[:, None]
        xx = (gx * weighted) @ gx.transpose(0, 2, 1)
        xy = (gx * weighted) @ gy.transpose(0, 2, 1)
        yy = (gy * weighted) @ gy.transpose(0, 2, 1)
        upper = np.concatenate([c11 * xx + c33 * yy, c12 * xy + c33 * xy.transpose(0, 2, 1)], axis=2)
        lower = np.concatenate([c12 * xy.transpose(0, 2, 1) + c33 * xy, c11 * yy + c33 * xx], axis=2)
        return np.concatenate([upper, lower], axis=1)

    @property
    def _skeleton(self) -> Numbers:
        """Places in ``vectors`` of the functions that live on vertices and edges, which elements share."""
        count = self.scalars.shape[1]
        shared = np.arange(4 * self.square.degree)
        return np.concatenate([shared, count + shared])

    @property
    def _bubbles(self) -> Numbers:
        """Places in ``vectors`` of the functions that vanish on the element's edge, which it has for itself."""
        return np.setdiff1d(np.arange(self.vectors.shape[1]), self._skeleton)

    @cached_property
    def _condensed(self) -> tuple[Array, Array, Array]:
        """Inverse stiffness of the bubbles, how they follow the skeleton, and the skeleton's own stiffness."""
        shared, own = self._skeleton, self._bubbles
        inverse: Array = np.asarray(np.linalg.inv(self.stiffness[:, own[:, None], own]), dtype=np.float64)
        coupling = self.stiffness[:, own[:, None], shared]
        following = inverse @ coupling
        stiffness = self.stiffness[:, shared[:, None], shared] - coupling.transpose(0, 2, 1) @ following
        return inverse, following, stiffness

    @cached_property
    def factor(self) -> Array:
        """Banded Cholesky factor of the skeleton's stiffness, held unknowns removed (unit rows in their place)."""
        unknowns = self.vectors[:, self._skeleton]
        size = int(unknowns.max()) + 1
        rows = np.repeat(unknowns[:, :, None], unknowns.shape[1], axis=2)
        columns = rows.transpose(0, 2, 1)
        free = np.ones(size, dtype=bool)
        free[self.held] = False
        keep = (rows >= columns) & free[rows] & free[columns]
        width = int((rows - columns).max()) + 1
        place = (rows - columns)[keep] * size + columns[keep]
        band = np.bincount(place, weights=self._condensed[2][keep], minlength=width * size).reshape(width, size)
        band[0, self.held] = 1.0
        factored: Array = cholesky_banded(band, lower=True, overwrite_ab=True, check_finite=False)
        return factored

    def solve(self, element_forces: Array) -> Array:
        """Displacements (unknowns, cases) under consistent forces (elements, 2 basis, cases)."""
        shared, own = self._skeleton, self._bubbles
        inverse, following, _ = self._condensed
        passed_on = following.transpose(0, 2, 1) @ element_forces[:, own]
        forces = np.zeros((self.factor.shape[1], element_forces.shape[2]))
        np.add.at(forces, self.vectors[:, shared], element_forces[:, shared] - passed_on)
        forces[self.held] = 0.0
        moved = np.zeros((self.unknowns, element_forces.shape[2]))
        moved[: len(forces)] = cho_solve_banded((self.factor, True), forces, check_finite=False)
        moved[self.vectors[:, own]] = inverse @ element_forces[:, own] - following @ moved[self.vectors[:, shared]]
        return moved


def discretise(strip: Strip, mesh: Any, elastic: Elastic, degree: int, start: Support, end: Support) -> Membrane:
    """The membrane of a strip and its gmsh ``mesh`` at a degree, with its ends held as said.

    A member with both ends free is kept from moving rigidly by three unknowns at its start, which carry no force.
    """
    from skfem import ElementQuadP
    from skfem.assembly import Dofs

    square = reference_square(degree)
    element_dofs = Dofs(mesh, ElementQuadP(degree)).element_dofs.T
    geometry = _interpolated(strip, square)
    scalars = _numbered_along(element_dofs, degree, len(strip.rows))
    return Membrane(strip, elastic, square, scalars, geometry, _held(scalars, geometry, len(strip.rows), start, end))


def _interpolated(strip: Strip, square: ReferenceSquare) -> Array:
    """Coefficients (2, elements, basis) of the exact geometry at the Gauss-Lobatto nodes."""
    q_along, q_across = square.nodes
    etas = np.concatenate([row.eta(q_across) for row in strip.rows])
    shares_of_q = np.tile(q_along, len(strip.rows))
    columns = []
    for column in strip.columns:
        share = column.share(shares_of_q)
        x = strip.inner_share(column.piece, etas) * strip.member.depth(column.piece, share)
        columns.append(strip.member.points(column.piece, share, x).reshape(2, len(strip.rows), -1))
    values = np.concatenate(columns, axis=1)
    return values @ square.to_coefficients.T


def _numbered_along(element_dofs: Numbers, degree: int, rows: int) -> Numbers:
    """The dofs renumbered so that shared ones follow the member, cut by cut; those inside elements come last."""
    place = np.full(element_dofs.max() + 1, np.inf)
    column = np.arange(element_dofs.shape[0]) // rows
    place[element_dofs[:, : 4 * degree]] = column[:, None] + 0.5
    place[element_dofs[:, first_line(degree)]] = column[:, None]
    place[element_dofs[:, last_line(degree)]] = column[:, None] + 1.0
    number = np.empty(len(place), dtype=np.int64)
    number[np.argsort(place, kind="stable")] = np.arange(len(place))
    return number[element_dofs]


def first_line(degree: int) -> list[int]:
    """Basis functions of an element that live on its first cut: two vertices and the edge between them."""
    edge = 4 + 3 * (degree - 1)
    return [0, 3, *range(edge, edge + degree - 1)]


def last_line(degree: int) -> list[int]:
    """Basis functions of an element that live on its last cut."""
    edge = 4 + (degree - 1)
    return [1, 2, *range(edge, edge + degree - 1)]


def _held(scalars: Numbers, geometry: Array, rows: int, start: Support, end: Support) -> Numbers:
    basis = scalars.shape[1]
    degree = round(basis**0.5) - 1
    if start == "clamped" or end == "clamped":
        line = scalars[:rows, first_line(degree)] if start == "clamped" else scalars[-rows:, last_line(degree)]
        held = np.unique(line)
        return np.sort(np.concatenate([2 * held, 2 * held + 1]))
    low, high = scalars[0, 0], scalars[rows - 1, 3]
    along = geometry[:, rows - 1, 3] - geometry[:, 0, 0]
    # The far corner is held across the line between the two, which is what stops the rotation.
    across = 0 if abs(along[1]) > abs(along[0]) else 1
    return np.array([2 * low, 2 * low + 1, 2 * high + across])
