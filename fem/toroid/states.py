"""The two states of a bar of constant curvature over its half section, solved with high-order elements.

Bending (n = 0): u_r = U, u_z = W, u_theta = k r theta. With the rigid part -k R taken out of U the only source is the
hoop strain k x/r, x = r - R, so that nothing cancels in a slender bar.

Force through the centre (n = 1): u_r = U cos, u_z = W cos, u_theta = V sin + D theta cos. Its hoop strain is S/r with
S = U + V + D, its shear strains S,r - U,r - (S - 2D)/r and S,z - U,z - W/r. With D = -k R/2 the bending state's own
U, W and S = k x + U solve it but for these shears, which are of the order of the force alone; what is left,
(u, w, s), is solved for. It is of that order too: the state per unit force keeps its digits at any R/h.

Either field obeys int sigma : eps r dA = 0 for every virtual displacement of the space. Those that are even, r and x
lie in it: hence N = 0 in bending, and int sigma_theta r dA = 0 and int tau dA = int sigma_theta dA for the force, to
rounding on any mesh.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from intrados.fem.element import ReferenceSquare, reference_square
from intrados.fem.toroid.cells import SAME, HalfSection
from intrados.theory.quadrature import Array

Numbers = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class Lattice:
    """A half section discretised at one degree: nodes at Gauss-Lobatto points, so that cells agree on shared sides.

    ``position`` (2, cells, nodes) holds x (from the inner face) and z; ``numbers`` (cells, nodes) numbers the nodes,
    those on sides of cells first; ``R`` is the centroid radius, ``nu`` Poisson's ratio, Young's modulus is 1.
    """

    half: HalfSection
    R: float
    nu: float
    square: ReferenceSquare
    position: Array
    numbers: Numbers

    @property
    def lame(self) -> tuple[float, float]:
        """Lame's constants (stress) for Young's modulus 1."""
        return self.nu / ((1.0 + self.nu) * (1.0 - 2.0 * self.nu)), 0.5 / (1.0 + self.nu)

    @cached_property
    def values(self) -> Array:
        """Nodal basis functions at the quadrature points, (nodes, points)."""
        result: Array = self.square.to_coefficients.T @ self.square.values
        return result

    @cached_property
    def local(self) -> Array:
        """x = r - R (length) at the quadrature points, (cells, points)."""
        result: Array = self.position[0] @ self.values - self.half.section.centroid
        return result

    @cached_property
    def _mapped(self) -> tuple[Array, Array, Array]:
        """Derivatives of the nodal functions by r and z, (cells, nodes, points), and area per point (cells, points)."""
        reference = self.square.to_coefficients.T @ self.square.gradients
        (xq, xs), (zq, zs) = [[position @ gradient for gradient in reference] for position in self.position]
        determinant = (xq * zs - xs * zq)[:, None]
        by_r = (zs[:, None] * reference[0] - zq[:, None] * reference[1]) / determinant
        by_z = (xq[:, None] * reference[1] - xs[:, None] * reference[0]) / determinant
        return by_r, by_z, np.abs(determinant[:, 0]) * self.square.weights

    @property
    def by_r(self) -> Array:
        """d/dr of the nodal functions at the quadrature points, (cells, nodes, points)."""
        return self._mapped[0]

    @property
    def by_z(self) -> Array:
        """d/dz of the nodal functions at the quadrature points, (cells, nodes, points)."""
        return self._mapped[1]

    @property
    def area(self) -> Array:
        """Area of the half section belonging to each quadrature point, (cells, points)."""
        return self._mapped[2]

    @cached_property
    def _products(self) -> tuple[Array, Array, Array, Array, Array, Array]:
        """Integrals of products of nodal functions n and their derivatives, each (cells, nodes, nodes).

        n,r n,r r;  n,z n,z r;  n,r n,z r;  n n,r;  n n,z;  n n/r.
        """
        by_r, by_z, n = self.by_r, self.by_z, self.values
        area = self.area[:, None]
        r = self.R + self.local[:, None]
        to_r, to_z = by_r.transpose(0, 2, 1), by_z.transpose(0, 2, 1)
        weighted_r, weighted_n = by_r * (area * r), n * area
        return (
            weighted_r @ to_r,
            (by_z * (area * r)) @ to_z,
            weighted_r @ to_z,
            weighted_n @ to_r,
            weighted_n @ to_z,
            (n * (area / r)) @ n.T,
        )

    def bending_stiffness(self) -> Array:
        """Cell stiffness (cells, 2 nodes, 2 nodes) of the unknowns U, W, in this order."""
        lam, mu = self.lame
        stiff = lam + 2.0 * mu
        rr, zz, rz, nr, nz, nn = self._products
        UU = stiff * (rr + nn) + lam * (nr + _turned(nr)) + mu * zz
        UW = lam * (rz + nz) + mu * _turned(rz)
        WW = stiff * zz + mu * rr
        return _blocks([[UU, UW], [_turned(UW), WW]])

    def force_stiffness(self) -> Array:
        """Cell stiffness (cells, 3 nodes, 3 nodes) of the unknowns u, w, s, in this order."""
        lam, mu = self.lame
        stiff = lam + 2.0 * mu
        rr, zz, rz, nr, nz, nn = self._products
        uu = (stiff + mu) * rr + 2.0 * mu * zz
        uw = lam * rz + mu * (_turned(rz) + _turned(nz))
        us = lam * _turned(nr) - mu * (rr - _turned(nr)) - mu * zz
        ww = stiff * zz + mu * (rr + nn)
        ws = lam * _turned(nz) - mu * nz
        ss = stiff * nn + mu * (rr - nr - _turned(nr) + nn) + mu * zz
        return _blocks([[uu, uw, us], [_turned(uw), ww, ws], [_turned(us), _turned(ws), ss]])

    def hoop_source(self, strain: Array, stretched: int) -> Array:
        """Cell forces of a given hoop ``strain`` (cells, points); the virtual one is component ``stretched`` over r."""
        lam, mu = self.lame
        pressing = self.area * lam * strain * (self.R + self.local)
        parts = [-_tested(self.by_r, pressing), -_tested(self.by_z, pressing)]
        parts += [np.zeros_like(parts[0])] * (stretched - 1)
        parts[stretched] = parts[stretched] - (self.area * (lam + 2.0 * mu) * strain) @ self.values.T
        return np.concatenate(parts, axis=1)

    def shear_source(self, bending: Field) -> Array:
        """Cell forces on u, w, s of the hoop stress of bending and of the shears that its U and W bring along."""
        mu, n = self.lame[1], self.values
        U, W = bending.moved @ n
        over_r = mu * self.area / (self.R + self.local)
        carried = (self.area * bending.hoop) @ n.T
        sheared = mu * (_tested(self.by_r, self.area * U) + _tested(self.by_z, self.area * W))
        return np.concatenate([carried - sheared, -(over_r * W) @ n.T, sheared - (over_r * U) @ n.T - carried], axis=1)

    @cached_property
    def on_plane(self) -> Numbers:
        """Nodes on the plane of bending."""
        return np.unique(self.numbers[np.abs(self.position[1]) <= SAME * self.half.section.depth])


def _turned(blocks: Array) -> Array:
    return blocks.transpose(0, 2, 1)


def _blocks(rows: list[list[Array]]) -> Array:
    return np.concatenate([np.concatenate(row, axis=2) for row in rows], axis=1)


def lattice(half: HalfSection, R: float, nu: float, degree: int) -> Lattice:
    """The half section at a degree."""
    square = reference_square(degree)
    q, s = square.nodes
    position = np.stack([cell.points(q, s) for cell in half.cells], axis=1)
    on_side = np.any((square.nodes == 0.0) | (square.nodes == 1.0), axis=0)
    flat = position.reshape(2, -1).T
    return Lattice(half, R, nu, square, position, _numbered(flat, position.shape[1:], on_side, half.section.depth))


def _numbered(points: Array, shape: tuple[int, ...], on_side: NDArray[np.bool_], depth: float) -> Numbers:
    """Numbers of the nodes (cells, nodes): one for all at one place, those on sides of cells first and banded."""
    from scipy.sparse import coo_array
    from scipy.sparse.csgraph import reverse_cuthill_mckee
    from scipy.spatial import cKDTree

    first = np.arange(len(points))
    pairs = cKDTree(points).query_pairs(SAME * depth, output_type="ndarray")
    np.minimum.at(first, pairs.max(axis=1), pairs.min(axis=1))
    first = first.reshape(shape)
    shared, places = np.unique(first[:, on_side], return_inverse=True)
    places = places.reshape(shape[0], -1)
    rows = np.repeat(places, places.shape[1], axis=1).ravel()
    columns = np.tile(places, (1, places.shape[1])).ravel()
    graph = coo_array((np.ones(len(rows)), (rows, columns)), shape=(len(shared), len(shared))).tocsr()
    order = reverse_cuthill_mckee(graph, symmetric_mode=True)
    number = np.empty(len(shared), dtype=np.int64)
    number[order] = np.arange(len(shared))
    numbers = np.empty(shape, dtype=np.int64)
    numbers[:, on_side] = number[places]
    own = shape[0] * int((~on_side).sum())
    numbers[:, ~on_side] = len(shared) + np.arange(own).reshape(shape[0], -1)
    return numbers


def _solve(lattice: Lattice, stiffness: Array, forces: Array, held: Numbers) -> Array:
    """Displacements (cases, components, cells, nodes) under cell forces (cells, components * nodes, cases).

    What lives inside a cell is eliminated there; the rest is a banded Cholesky factor. ``held`` unknowns
    (node * components + component) are zero.
    """
    from scipy.linalg import cho_solve_banded, cholesky_banded

    nodes = lattice.numbers.shape[1]
    components = stiffness.shape[1] // nodes
    unknowns = np.concatenate([components * lattice.numbers + component for component in range(components)], axis=1)
    on_side = np.tile(np.any((lattice.square.nodes == 0.0) | (lattice.square.nodes == 1.0), axis=0), components)
    shared, own = np.flatnonzero(on_side), np.flatnonzero(~on_side)
    inner = stiffness[:, own[:, None], own]
    coupling = stiffness[:, own[:, None], shared]
    solved = np.linalg.solve(inner, np.concatenate([coupling, forces[:, own]], axis=2))
    following, alone = solved[:, :, : len(shared)], solved[:, :, len(shared) :]
    condensed = stiffness[:, shared[:, None], shared] - coupling.transpose(0, 2, 1) @ following
    passed = forces[:, shared] - coupling.transpose(0, 2, 1) @ alone
    at = unknowns[:, shared]
    size = int(at.max()) + 1
    rows = np.repeat(at[:, :, None], at.shape[1], axis=2)
    columns = rows.transpose(0, 2, 1)
    free = np.ones(size, dtype=bool)
    free[held] = False
    keep = (rows >= columns) & free[rows] & free[columns]
    width = int((rows - columns).max()) + 1
    place = (rows - columns)[keep] * size + columns[keep]
    band = np.bincount(place, weights=condensed[keep], minlength=width * size).reshape(width, size)
    band[0, held] = 1.0
    right = np.zeros((size, forces.shape[2]))
    np.add.at(right, at, passed)
    right[held] = 0.0
    factor = cholesky_banded(band, lower=True, overwrite_ab=True, check_finite=False)
    moved = cho_solve_banded((factor, True), right, check_finite=False)
    result = np.empty(forces.shape)
    result[:, shared] = moved[at]
    result[:, own] = alone - following @ moved[at]
    split: Array = result.reshape(-1, components, nodes, forces.shape[2]).transpose(3, 1, 0, 2)
    return split


@dataclass(frozen=True, eq=False)
class Field:
    """Stress (for Young's modulus 1) at the quadrature points, (cells, points) each, and what it adds up to.

    ``hoop`` is sigma_theta; ``radial``, ``across`` (along z) and ``shear`` (r-z) are the others in the section. Shear
    stress of the cut itself follows V, not N and M, and is not in it. ``moved`` are the nodal displacements U, W of the
    section (but for a constant U) and ``stretch`` the nodal values whose quotient by r is the hoop strain, less the
    source ``bent`` x/r.
    """

    lattice: Lattice
    bent: float
    moved: Array
    stretch: Array
    hoop: Array
    radial: Array
    across: Array
    shear: Array

    def times(self, factor: float) -> Field:
        """The same field, larger."""
        parts = (self.moved, self.stretch, self.hoop, self.radial, self.across, self.shear)
        return Field(self.lattice, factor * self.bent, *(factor * part for part in parts))

    def plus(self, other: Field) -> Field:
        """The sum of two fields."""
        parts = [
            (field.moved, field.stretch, field.hoop, field.radial, field.across, field.shear) for field in (self, other)
        ]
        return Field(self.lattice, self.bent + other.bent, *(one + two for one, two in zip(*parts, strict=True)))

    @property
    def N(self) -> float:
        """Normal force (stress length^2) of the whole section."""
        return 2.0 * float((self.hoop * self.lattice.area).sum())

    @property
    def M(self) -> float:
        """Moment (stress length^3) about the centroid, > 0 straightening."""
        return -2.0 * float((self.hoop * self.lattice.local * self.lattice.area).sum())


def _stress(lattice: Lattice, bent: float, moved: Array, stretch: Array) -> Field:
    lam, mu = lattice.lame
    U, W = moved
    r = lattice.R + lattice.local
    rr, zz = _along(lattice.by_r, U), _along(lattice.by_z, W)
    hoop = (bent * lattice.local + stretch @ lattice.values) / r
    mean = lam * (rr + zz + hoop)
    shear = mu * (_along(lattice.by_z, U) + _along(lattice.by_r, W))
    return Field(
        lattice,
        bent,
        moved,
        stretch,
        mean + 2.0 * mu * hoop,
        mean + 2.0 * mu * rr,
        mean + 2.0 * mu * zz,
        shear,
    )


def _along(derivative: Array, nodal: Array) -> Array:
    """Derivative at the quadrature points (cells, points) of a field by its nodal values (cells, nodes)."""
    result: Array = (nodal[:, None] @ derivative)[:, 0]
    return result


@dataclass(frozen=True, eq=False)
class States:
    """Fields per unit moment and per unit force, the latter without a moment about the centroid.

    ``shear_force`` is int tau dA of a unit force through the centre of curvature where it acts as shear: 1 by
    equilibrium, and a check of the solution.
    """

    per_M: Field
    per_N: Field
    shear_force: float


def solve_states(lattice: Lattice) -> States:
    """Both states of the section at one degree."""
    R, nodal_r = lattice.R, lattice.R + lattice.position[0] - lattice.half.section.centroid
    r = R + lattice.local
    plane = lattice.on_plane

    # The rigid part of U, and below the even extension of s, have next to no stiffness in a slender bar: they are held
    # at one node and found from equilibrium instead.
    forces = np.stack([lattice.hoop_source(lattice.local / r, 0), lattice.hoop_source(1.0 / r, 0)], axis=2)
    given, shifted = _solve(lattice, lattice.bending_stiffness(), forces, np.append(2 * plane + 1, 2 * plane[0]))
    bending, shift = _stress(lattice, 1.0, given, given[0]), _stress(lattice, 0.0, shifted, shifted[0] + 1.0)
    bending = bending.plus(shift.times(-bending.N / shift.N))

    forces = np.stack([lattice.shear_source(bending), lattice.hoop_source(np.ones_like(r), 2)], axis=2)
    held = np.concatenate([3 * plane + 1, 3 * plane[:1], 3 * plane[:1] + 2])
    (u, w, s), (ue, we, se) = _solve(lattice, lattice.force_stiffness(), forces, held)
    rest = _stress(lattice, 0.0, np.array([u, w]), s)
    extension = _stress(lattice, 0.0, np.array([ue, we]), se + nodal_r)
    share = (bending.M + rest.M - R * rest.N) / (R * extension.N - extension.M)
    rest = rest.plus(extension.times(share))
    s, u = s + share * se, u + share * ue
    tau = lattice.lame[1] * (_along(lattice.by_r, s - u) - (s + bending.moved[0]) @ lattice.values / r)
    P = rest.N
    per_M = bending.times(1.0 / bending.M)
    per_N = rest.times(1.0 / P).plus(per_M.times(-rest.M / P))
    return States(per_M, per_N, 2.0 * float((tau * lattice.area).sum()) / P)


def _tested(derivative: Array, weight: Array) -> Array:
    """Integrals (cells, nodes) of the derivative of every nodal function times ``weight`` (area included)."""
    result: Array = (derivative @ weight[:, :, None])[:, :, 0]
    return result
