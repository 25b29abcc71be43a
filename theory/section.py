"""Cross-sections: depth, width at any depth, area, centroid, inertia and ring integrals.

A section is a stack of layers from the inner face outward. Within a layer the width is a sum of chords, each
straight-sided or cut from an ellipse, so every shape of the trade, and every blend of two of them along a
taper, is the same kind of object. ``x`` is the distance from the inner face throughout, 0 <= x <= depth.

All integrals use one rule: Gauss-Legendre in an angle p with x = mid - half cos(p) over each layer. It is exact to
rounding for round ends (the width is smooth in p) and converges geometrically however near the centre
of curvature comes. Ring integrals keep local coordinates, so that e loses no digits at any R/h:

    K2 = int z^2/(R + z) dA,   J = int dA/r = A/R + K2/R^2,   e = K2 R/(A R + K2),   z = x - centroid
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np

from intrados.theory.quadrature import Array, unit_gauss

# Gauss-Legendre converges like rho^(-2n): n = 19/ln(rho) takes the error to 1e-16.
_DECADES = 19.0
_FEWEST_POINTS = 20
# Enough for an inner radius of a millionth of the depth; beyond that the rule would outgrow the memory.
_MOST_POINTS = 500
# Places closer than this share of the depth are one place.
_COINCIDENT = 1e-9


class SectionError(ValueError):
    """A section whose geometry is impossible; ``key`` is the dimension to blame, ``text`` says what is allowed."""

    def __init__(self, key: str, text: str) -> None:
        super().__init__(f"{key}: {text}")
        self.key = key
        self.text = text


@dataclass(frozen=True)
class StraightChord:
    """A width that is ``at_inner`` at x = 0 and grows by ``slope`` per unit of depth."""

    at_inner: float
    slope: float

    def width(self, x: Array) -> Array:
        """Width (length) at ``x``."""
        return self.at_inner + self.slope * x

    def scaled(self, stretch: float, share: float) -> StraightChord:
        """The same chord with depths times ``stretch`` and widths times ``share``."""
        return StraightChord(self.at_inner * share, self.slope * share / stretch)

    @property
    def branch_points(self) -> tuple[float, ...]:
        """Depths at which the width is not smooth."""
        return ()


@dataclass(frozen=True)
class EllipticChord:
    """The chord of an ellipse with its centre at depth ``centre``; a negative ``semi_width`` is a hole."""

    centre: float
    semi_depth: float
    semi_width: float

    def width(self, x: Array) -> Array:
        """Width (length) at ``x``; zero where rounding puts x just outside the ellipse."""
        above = x - (self.centre - self.semi_depth)
        below = (self.centre + self.semi_depth) - x
        return 2.0 * self.semi_width / self.semi_depth * np.sqrt(np.maximum(above * below, 0.0))

    def scaled(self, stretch: float, share: float) -> EllipticChord:
        """The same chord with depths times ``stretch`` and widths times ``share``."""
        return EllipticChord(self.centre * stretch, self.semi_depth * stretch, self.semi_width * share)

    @property
    def branch_points(self) -> tuple[float, ...]:
        """Depths at which the width is not smooth."""
        return (self.centre - self.semi_depth, self.centre + self.semi_depth)


Chord = StraightChord | EllipticChord


@dataclass(frozen=True)
class Layer:
    """A part of the depth, from ``inner`` to ``outer``, over which the width is smooth.

    ``void`` are chords of a hollow about the plane of bending; what ``chords`` add up to is the solid on both its
    sides.
    """

    inner: float
    outer: float
    chords: tuple[Chord, ...]
    void: tuple[Chord, ...] = ()

    def width(self, x: Array) -> Array:
        """Width (length) at ``x``, which lies in this layer."""
        total = np.zeros_like(x)
        for chord in self.chords:
            total = total + chord.width(x)
        return np.maximum(total, 0.0)

    def half_void(self, x: Array) -> Array:
        """Distance (length) from the plane of bending to the solid; zero where there is no hollow."""
        total = np.zeros_like(x)
        for chord in self.void:
            total = total + chord.width(x)
        return 0.5 * total

    def half_outline(self, x: Array) -> Array:
        """Distance (length) from the plane of bending to the outline."""
        return self.half_void(x) + 0.5 * self.width(x)

    @property
    def branch_points(self) -> tuple[float, ...]:
        """Depths, in this layer or beyond it, at which its width as a function is not smooth."""
        return tuple(point for chord in self.chords for point in chord.branch_points)

    def is_round_at(self, x: float) -> bool:
        """Whether the width starts like a square root at the end ``x`` of the layer."""
        return any(abs(point - x) <= _COINCIDENT * (self.outer - self.inner) for point in self.branch_points)


@dataclass(frozen=True)
class Ring:
    """Ring integrals of a section bent to the centroid radius R (length units throughout).

    ``K2`` = int z^2/(R+z) dA, ``J`` = int dA/r, ``rn`` = A/J the neutral radius, ``e`` = R - rn.
    """

    R: float
    area: float
    K2: float
    J: float
    rn: float
    e: float


@dataclass(frozen=True)
class Section:
    """A cross-section, symmetric about the plane of bending. ``shape`` is its name in a job file."""

    shape: str
    layers: tuple[Layer, ...]

    @property
    def depth(self) -> float:
        """Depth in the plane of bending (length)."""
        return self.layers[-1].outer

    @property
    def breaks(self) -> tuple[float, ...]:
        """Both faces and every depth between at which the width steps or kinks, increasing."""
        return (0.0, *(layer.outer for layer in self.layers))

    def width(self, x: Array | float) -> Array:
        """Width (length) at the distances ``x`` from the inner face; the layer beyond a step counts."""
        x = np.asarray(x, dtype=np.float64)
        owner = np.clip(np.searchsorted(self.breaks[1:], x, side="right"), 0, len(self.layers) - 1)
        result = np.zeros_like(x)
        for index, layer in enumerate(self.layers):
            result = np.where(owner == index, layer.width(x), result)
        return result

    @cached_property
    def inner_width(self) -> float:
        """Width of the inner face (length)."""
        return float(self.layers[0].width(np.array(0.0)))

    @cached_property
    def outer_width(self) -> float:
        """Width of the outer face (length)."""
        return float(self.layers[-1].width(np.array(self.depth)))

    @cached_property
    def area(self) -> float:
        """Area (length^2)."""
        return float(self._points_and_weights[1].sum())

    @cached_property
    def centroid(self) -> float:
        """Distance of the centroid from the inner face (length)."""
        x, weights = self._points_and_weights
        return float(weights @ x) / self.area

    @cached_property
    def inertia(self) -> float:
        """Second moment of area about the centroid (length^4)."""
        x, weights = self._points_and_weights
        return float(weights @ (x - self.centroid) ** 2)

    @cached_property
    def widest(self) -> float:
        """Largest width (length)."""
        x = np.concatenate([np.linspace(layer.inner, layer.outer, 65) for layer in self.layers])
        ends = [layer.width(np.array([layer.inner, layer.outer])) for layer in self.layers]
        return float(max(self.width(x).max(), *(end.max() for end in ends)))

    @cached_property
    def is_symmetric(self) -> bool:
        """Whether the inner half mirrors the outer half."""
        x = self._points_and_weights[0]
        mirrored = self.width(self.depth - x)
        return bool(np.all(np.abs(mirrored - self.width(x)) <= 1e-9 * self.widest))

    @cached_property
    def has_constant_width(self) -> bool:
        """Whether the width is the same at every depth."""
        x = self._points_and_weights[0]
        return bool(np.all(np.abs(self.width(x) - self.widest) <= 1e-9 * self.widest))

    @cached_property
    def _points_and_weights(self) -> tuple[Array, Array]:
        return self.quadrature(math.inf)

    def quadrature(self, R: float) -> tuple[Array, Array]:
        """Points x and weights (width included, so that they sum to the area), right for functions of 1/r."""
        rules = [_layer_rule(layer, layer.outer, self.centroid - R if R < math.inf else None) for layer in self.layers]
        return np.concatenate([x for x, _ in rules]), np.concatenate([weights for _, weights in rules])

    def ring(self, R: float) -> Ring:
        """Ring integrals about a centre of curvature at the distance ``R`` (length) from the centroid.

        Raises ValueError where the inner face reaches the centre of curvature, to a billionth of the depth.
        Source: definitions above; the stable form of e is derived in the module's header.
        """
        return _ring(self, R)

    def integral_to(self, x: Array, integrand: Callable[[Array], Array], R: float = math.inf) -> Array:
        """int of ``integrand`` dA from the inner face to each ``x``; R as in ``quadrature``, for terms in 1/r."""
        x = np.asarray(x, dtype=np.float64)
        pole = self.centroid - R if R < math.inf else None
        total = np.zeros_like(x)
        for layer in self.layers:
            for index in np.flatnonzero(x > layer.inner):
                points, weights = _layer_rule(layer, min(float(x[index]), layer.outer), pole)
                total[index] += float(weights @ integrand(points))
        return total


@lru_cache(maxsize=1024)
def _ring(section: Section, R: float) -> Ring:
    if not R - section.centroid > _COINCIDENT * section.depth:
        raise ValueError(f"inner face at radius {R - section.centroid:g} reaches the centre of curvature")
    x, weights = section.quadrature(R)
    z = x - section.centroid
    area = section.area
    K2 = float(weights @ (z * z / (R + z)))
    e = K2 * R / (area * R + K2)
    return Ring(R=R, area=area, K2=K2, J=area / R + K2 / R**2, rn=R / (1.0 + K2 / (area * R)), e=e)


def _layer_rule(layer: Layer, outer: float, pole: float | None) -> tuple[Array, Array]:
    """Points and area weights over a layer cut off at ``outer``, fine enough for a pole at depth ``pole``."""
    half = 0.5 * (outer - layer.inner)
    mid = layer.inner + half
    # A square root that starts at an end of the rule is smooth in the angle; one beyond an end is not.
    ends = (layer.inner, outer)
    singular = [
        point for point in layer.branch_points if min(abs(point - end) for end in ends) > _COINCIDENT * layer.outer
    ]
    if pole is not None:
        singular.append(pole)
    points = _FEWEST_POINTS
    for point in singular:
        ratio = abs(point - mid) / half
        if ratio > 1.0:
            # The angle of a real point beyond the layer is imaginary: seen from [-1, 1] it stands above an end.
            z = complex(-1.0, 2.0 / math.pi * math.acosh(ratio))
            root = (z * z - 1.0) ** 0.5
            rho = max(abs(z + root), abs(z - root))
            points = max(points, min(math.ceil(_DECADES / math.log(rho)), _MOST_POINTS))
    nodes, weights = unit_gauss(points)
    angle = math.pi * nodes
    x = mid - half * np.cos(angle)
    return x, math.pi * half * weights * np.sin(angle) * layer.width(x)


def blend(first: Section, second: Section, share: float) -> Section:
    """The section a ``share`` (0 to 1) of the way along a taper from ``first`` to ``second``.

    The depth goes linearly; the width, and a hollow's, is the mean, so weighted, of the two widths at the same share
    of depth.
    """
    if share <= 0.0 or first == second:
        return first
    if share >= 1.0:
        return second
    depth = (1.0 - share) * first.depth + share * second.depth
    cuts = common_shares([first, second])
    layers = []
    for inner, outer in itertools.pairwise(cuts):
        middle = 0.5 * (inner + outer)
        chords: list[Chord] = []
        void: list[Chord] = []
        for section, weight in ((first, 1.0 - share), (second, share)):
            owner = next(layer for layer in section.layers if middle * section.depth < layer.outer)
            chords += [chord.scaled(depth / section.depth, weight) for chord in owner.chords]
            void += [chord.scaled(depth / section.depth, weight) for chord in owner.void]
        layers.append(Layer(inner * depth, outer * depth, tuple(chords), tuple(void)))
    shape = first.shape if first.shape == second.shape else f"{first.shape} to {second.shape}"
    return Section(shape, tuple(layers))


def common_shares(sections: list[Section]) -> list[float]:
    """Shares of the depth (0 to 1) at which the width of any of the sections steps or kinks, faces included."""
    shares = sorted({depth / section.depth for section in sections for depth in section.breaks})
    distinct = [shares[0]]
    distinct += [after for before, after in itertools.pairwise(shares) if after - before > 1e-9]
    return [0.0, *distinct[1:-1], 1.0]
