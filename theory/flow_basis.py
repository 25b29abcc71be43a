"""Self-balanced hoop flows over a section: the basis in which the ideal bar's energy is made stationary.

A function of the basis is smooth within one layer of the section and zero in the others. With D = r d/dr it stands for
D g/t, and its running integral g, a force per length, is continuous over the steps of the width t. g has to vanish at
both faces, which are free.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.polynomial import legendre

from intrados.theory.quadrature import Array, running_series, unit_gauss
from intrados.theory.section import Layer, Section

# Share of a layer's larger end width below which the other is a point, and below which it is nearly one.
_POINT = 1e-9
_NEARLY_POINTED = 0.1
# Points beyond the degree: products of two basis functions, the width and 1/r.
_EXTRA_POINTS = 12


@dataclass(frozen=True)
class LogGrid:
    """Places in a layer by the share (0 to 1) of an angle p: ln r goes from face to face like (1 - cos p)/2.

    Both a round end of the width and, in ln r, the centre of curvature, however near, then leave everything smooth.
    ``inner_radius`` (length) is that of the section's inner face.
    """

    layer: Layer
    inner_radius: float

    @property
    def _first(self) -> float:
        return self.inner_radius + self.layer.inner

    @property
    def _span(self) -> float:
        return float(np.log1p((self.layer.outer - self.layer.inner) / self._first))

    def x(self, share: Array) -> Array:
        """Distance from the inner face."""
        rise = self._span * np.sin(0.5 * np.pi * share) ** 2
        return self.layer.inner + self._first * np.expm1(rise)

    def rate(self, share: Array) -> Array:
        """d ln r / d share."""
        return 0.5 * np.pi * self._span * np.sin(np.pi * share)

    def share(self, x: Array) -> Array:
        """The inverse of ``x``."""
        rise = np.log1p((x - self.layer.inner) / self._first) / self._span
        return 2.0 / np.pi * np.arcsin(np.sqrt(np.clip(rise, 0.0, 1.0)))

    def argument(self, share: Array) -> Array:
        """What the basis is a Legendre series of, -1 to 1: ln r, or the angle where the width has a round end.

        The angle also where the sides all but meet in a point: it crowds the basis toward that end.
        """
        ends = self.layer.width(np.array([self.layer.inner, self.layer.outer]))
        pointed = _POINT * ends.max() < ends.min() < _NEARLY_POINTED * ends.max()
        if self.layer.branch_points or pointed:
            return 2.0 * share - 1.0
        return -np.cos(np.pi * share)


@dataclass(frozen=True, eq=False)
class FlowBasis:
    """The basis at the points of every layer: ``strain`` D g/t and ``stress`` g/t, both (points, functions).

    ``weight`` is t dr/r at each point, so that int f t dr/r = weight @ f; ``z`` = r - R. ``flows`` are the series of g
    in each layer, (terms, functions); ``net`` (functions) is int D g dr/r over the depth, which has to vanish.
    """

    strain: Array
    stress: Array
    weight: Array
    z: Array
    flows: tuple[Array, ...]
    net: Array

    def energies(self, *orders: tuple[int, float]) -> list[Array]:
        """The matrix (functions, functions) of int [(D g)^2 + n^2 g^2 - 2 m g D g]/t dr/r for each (n, m)."""
        weighted = self.weight[:, None] * self.stress
        radial, mixed = self.stress.T @ weighted, self.strain.T @ weighted
        mixed += mixed.T
        hoop = self.strain.T @ (self.weight[:, None] * self.strain)
        return [hoop + n * n * radial - m * mixed for n, m in orders]


def flow_basis(section: Section, R: float, degrees: Sequence[int]) -> FlowBasis:
    """The basis of the given degree in each layer, the section bent to the centroid radius ``R`` (length)."""
    functions = sum(degrees) + len(degrees)
    strains: list[Array] = []
    weights: list[Array] = []
    xs: list[Array] = []
    widths: list[Array] = []
    flows: list[Array] = []
    constant, net = np.zeros(functions), np.zeros(functions)
    first = 0
    for layer, degree in zip(section.layers, degrees, strict=True):
        grid = LogGrid(layer, R - section.centroid)
        nodes, weight = unit_gauss(2 * degree + _EXTRA_POINTS)
        x = grid.x(nodes)
        width = layer.width(x)
        weight = weight * width * grid.rate(nodes)
        own = slice(first, first + degree + 1)
        first = own.stop
        strain, flow = np.zeros((len(x), functions)), np.zeros((len(x) + 1, functions))
        strain[:, own] = legendre.legvander(grid.argument(nodes), degree)
        flow[:, own] = running_series(len(x)) @ (weight[:, None] * strain[:, own])
        # Every Legendre polynomial is 1 at the outer end: the sum of a series is its value there.
        flow[0] += net
        net = flow.sum(axis=0)
        constant[own.start] = 1.0
        strains.append(strain)
        weights.append(weight)
        xs.append(x)
        widths.append(width)
        flows.append(flow)
    # With its mean taken out every basis function vanishes at the outer face by itself, as at the inner one: g/t then
    # stays finite where the width does not.
    flows = [flow - np.outer(flow @ constant, net / (net @ constant)) for flow in flows]
    stresses = [
        legendre.legvander(2.0 * unit_gauss(len(width))[0] - 1.0, len(width)) @ flow / width[:, None]
        for flow, width in zip(flows, widths, strict=True)
    ]
    z = np.concatenate(xs) - section.centroid
    return FlowBasis(np.concatenate(strains), np.concatenate(stresses), np.concatenate(weights), z, tuple(flows), net)
