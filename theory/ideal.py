"""The ideal bar: exact plane stress of a bar of constant curvature and any width t(r) under N, V and M.

Hand theory keeps the energy of the hoop stress alone; r sigma_theta is then a straight line over the depth. Here the
radial stress and the shear that equilibrium demands count as well. With D = r d/dr, one unknown function each serves

    a moment alone:             t sigma_r = g/r,      t sigma_theta = D g/r,                          int g dr = M
    a force through the centre: t sigma_r = Q/r cos,  t sigma_theta = (D Q + Q)/r cos,  t tau = Q/r sin,  int Q dr/r = 1

and both make one form of complementary energy stationary, g with n = 1, m = nu, and Q with n = 2, m = nu - 1:

    int [ (D g)^2 + n^2 g^2 - 2 m g D g ]/t dr/r

t sigma_r is continuous over a step of the width. That the hoop strain is so too, which is compatibility there, is the
natural condition of the form; the hoop stress itself jumps by nu times the jump of the radial stress. So the basis is
D g/t, smooth within each layer of the section and free to jump between them, and g is its running integral: continuous,
and of itself small enough where the width vanishes. The basis is a Legendre series in ln r, in which the equations have
constant coefficients, or in an angle in which round ends are smooth; it converges geometrically.

A slender bar would lose its digits in M - N R. There Q = R g + P, where P is the radial stress of N = 1, M = 0 and
solves the second form with g as its load; what cancels between the two states is cancelled by hand.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.polynomial import legendre

from intrados.theory import winkler
from intrados.theory.flow_basis import LogGrid, flow_basis
from intrados.theory.quadrature import Array
from intrados.theory.section import Section

# Degrees of the first series, its growth while the tail is above rounding, and its end.
_FIRST_DEGREE = 12
_GROWTH = 1.5
_LAST_DEGREE = 135
_TAIL = 4
_ROUNDING = 1e-11


@dataclass(frozen=True)
class StraightBar:
    """A straight piece: N/A + M y/I and V Q/(I t) are exact in plane stress of any width, and nothing acts across.

    The axial strain is a straight line over the depth and the shear strain a function of the depth alone, so both sides
    of the compatibility equation are zero.
    """

    section: Section

    def hoop(self, N: float, M: float, x: Array) -> Array:
        """Axial stress at the distances ``x`` from the inner face."""
        return winkler.hoop(self.section, None, N, M, x)

    def radial(self, N: float, M: float, x: Array) -> Array:
        """Stress across the piece: none."""
        return winkler.radial(self.section, None, N, M, x)

    def shear(self, V: float, x: Array) -> Array:
        """Shear stress at ``x``; it has the sign of V."""
        return winkler.shear(self.section, None, V, x)

    def fibres(self, N: float, M: float) -> tuple[float, float]:
        """Axial stress at the inner and the outer fibre."""
        return winkler.fibres(self.section, None, N, M)


@dataclass(frozen=True, eq=False)
class LayerSeries:
    """Legendre series over one layer; columns: M = 1 alone, N = 1 alone.

    ``strain``: D g/t and D P/t, in the grid's ``argument``; ``flow``: g and P, which are r t sigma_r, in its angle.
    """

    strain: Array
    flow: Array


@dataclass(frozen=True, eq=False)
class CurvedBar:
    """The ideal bar at centroid radius ``R`` (length): stresses over the depth per N, V and M.

    ``x`` is the distance from the inner face, shape (n); at a step of the width the layer beyond counts. Signs as in
    winkler.py; M about the centroid.
    """

    section: Section
    R: float
    nu: float
    series: tuple[LayerSeries, ...]

    def hoop(self, N: float, M: float, x: Array) -> Array:
        """Hoop stress at ``x``, > 0 tension."""
        r, strain, stress = self._at(x)
        result: Array = (M * strain[0] + N * (strain[1] + stress[1] + self.R * stress[0])) / r
        return result

    def radial(self, N: float, M: float, x: Array) -> Array:
        """Radial stress at ``x``, > 0 tension; zero at both faces."""
        r, _, stress = self._at(x)
        result: Array = (M * stress[0] + N * stress[1]) / r
        return result

    def shear(self, V: float, x: Array) -> Array:
        """Shear stress at ``x``; it has the sign of V and vanishes at both faces."""
        r, _, stress = self._at(x)
        result: Array = V * (stress[1] + self.R * stress[0]) / r
        return result

    def fibres(self, N: float, M: float) -> tuple[float, float]:
        """Hoop stress at the inner and the outer fibre."""
        inner, outer = self.hoop(N, M, np.array([0.0, self.section.depth]))
        return float(inner), float(outer)

    def _at(self, x: Array) -> tuple[Array, Array, Array]:
        """r (n), and for M = 1 and N = 1 alone (2, n): D g/t, and g/t, which is r times the radial stress."""
        x = np.asarray(x, dtype=np.float64)
        strain, flow = np.zeros((2, *x.shape)), np.zeros((2, *x.shape))
        owner = np.clip(np.searchsorted(self.section.breaks[1:], x, side="right"), 0, len(self.series) - 1)
        for index, (layer, series) in enumerate(zip(self.section.layers, self.series, strict=True)):
            here = owner == index
            grid = LogGrid(layer, self.R - self.section.centroid)
            share = grid.share(x[here])
            strain[:, here] = legendre.legval(grid.argument(share), series.strain)
            flow[:, here] = legendre.legval(2.0 * share - 1.0, series.flow)
        width = self.section.width(x)
        inside = (x > 0.0) & (x < self.section.depth) & (width > 0.0)
        stress = np.where(inside, flow / np.where(inside, width, 1.0), 0.0)
        return self.R + x - self.section.centroid, strain, stress


IdealBar = CurvedBar | StraightBar


@lru_cache(maxsize=512)
def bar(section: Section, R: float | None, nu: float) -> IdealBar:
    """The ideal bar of ``section`` at the centroid radius ``R`` (length), None on a straight; ``nu`` Poisson's ratio.

    Good to some 1e-9 of the largest stress, and to 1e-11 where no end is round. Sides that all but meet in a point (at
    an end narrower than a thousandth of the other) leave 1e-6 there. Raises ValueError where the inner face reaches the
    centre of curvature. Source: equilibrium and complementary energy, as in the module's header.
    """
    if R is None:
        return StraightBar(section)
    if not R > section.centroid:
        raise ValueError(f"inner face at radius {R - section.centroid:g} reaches the centre of curvature")
    degrees = [_FIRST_DEGREE] * len(section.layers)
    while True:
        found = bar_of_degree(section, R, nu, degrees)
        largest = np.max([np.abs(layer.strain).max(axis=0) for layer in found.series], axis=0)
        tails = [float((np.abs(layer.strain[-_TAIL:]) / largest).max()) for layer in found.series]
        longer = [
            min(int(_GROWTH * degree), _LAST_DEGREE) if tail > _ROUNDING else degree
            for degree, tail in zip(degrees, tails, strict=True)
        ]
        if longer == degrees:
            return found
        degrees = longer


def bar_of_degree(section: Section, R: float, nu: float, degrees: Sequence[int]) -> CurvedBar:
    """The bar of stationary energy among series of the given degree in each layer; ``bar`` finds the degrees."""
    basis = flow_basis(section, R, degrees)
    weighted_z = basis.weight * basis.z
    moment_alone, force_through_centre = basis.energies((1, nu), (2, nu - 1.0))
    # int g dr = -int z t (D g/t) dr/r, since D z = r.
    conditions = np.stack([basis.net, -weighted_z @ basis.strain])
    bending, multipliers = _constrained(moment_alone, conditions, np.array([0.0, 1.0]), np.zeros_like(basis.net))
    g, slope = basis.stress @ bending, basis.strain @ bending
    # The second form of R g against a test function w: R times the first, which is the multiplier times int w dr, and
    # what the two forms differ by. int w dr = R int w dr/r + int z w dr/r, and a multiple of int w dr/r does no work.
    load = (multipliers[1] * weighted_z + basis.weight * (3.0 * g + slope)) @ basis.stress
    load += (basis.weight * g) @ basis.strain
    # int Q dr/r = 1 and int g dr = 1 leave int P dr/r = int z g dr/r.
    conditions = np.stack([basis.net, basis.weight @ basis.stress])
    pull, _ = _constrained(force_through_centre, conditions, np.array([0.0, weighted_z @ g]), -R * load)
    both = np.stack([bending, pull], axis=1)
    ends = np.cumsum([degree + 1 for degree in degrees])[:-1]
    parts = zip(np.split(both, ends), basis.flows, strict=True)
    return CurvedBar(section, R, nu, tuple(LayerSeries(part, flow @ both) for part, flow in parts))


def _constrained(energy: Array, conditions: Array, values: Array, load: Array) -> tuple[Array, Array]:
    """The u that makes u energy u/2 - load u stationary under conditions @ u = values, and their multipliers."""
    solved = np.linalg.solve(energy, np.concatenate([conditions, load[None]]).T)
    response, free = solved[:, :-1], solved[:, -1]
    multipliers = np.linalg.solve(conditions @ response, values - conditions @ free)
    return np.asarray(free + response @ multipliers), np.asarray(multipliers)
