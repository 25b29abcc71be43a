"""The curved member: straight and arc pieces traced along one line, and every point of it.

A place is (piece, share): the piece counted from 0 and the share, 0 to 1, of its datum line. Across, ``x`` is the
distance from the inner face along the cut, which is normal to the datum line. Lengths in the job's unit.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np

from intrados.theory.quadrature import Array, unit_gauss
from intrados.theory.section import Section, blend

Datum = Literal["inner", "centroid", "outer"]
_LENGTH_POINTS = 16


@dataclass(frozen=True)
class Straight:
    """A straight piece; ``sections`` at its start and its end."""

    length: float
    sections: tuple[Section, Section]


@dataclass(frozen=True)
class Arc:
    """An arc; ``radius`` is that of the datum line, ``sweep`` in degrees, > 0 turns left."""

    radius: float
    sweep: float
    sections: tuple[Section, Section]


Piece = Straight | Arc


@dataclass(frozen=True)
class Member:
    """A member with G1-continuous datum line from ``start``, heading in degrees from +x."""

    datum: Datum
    start: tuple[float, float]
    heading: float
    pieces: tuple[Piece, ...]

    @cached_property
    def sides(self) -> tuple[int, ...]:
        """+1 where a piece's inner side is to the left of its heading, -1 where it is to the right.

        A straight takes the inner side of the arc before it, else of the arc after it, else the left.
        """
        turns = [int(math.copysign(1, piece.sweep)) if isinstance(piece, Arc) else 0 for piece in self.pieces]
        sides = []
        for index, turn in enumerate(turns):
            before = [t for t in turns[:index] if t]
            after = [t for t in turns[index:] if t]
            sides.append(turn or (before[-1] if before else after[0] if after else 1))
        return tuple(sides)

    def datum_length(self, piece: int) -> float:
        """Length of a piece's datum line."""
        shape = self.pieces[piece]
        return shape.length if isinstance(shape, Straight) else shape.radius * self.turn(piece)

    def turn(self, piece: int) -> float:
        """The angle a piece turns through, in radians, >= 0."""
        shape = self.pieces[piece]
        return math.radians(abs(shape.sweep)) if isinstance(shape, Arc) else 0.0

    @cached_property
    def _starts(self) -> tuple[tuple[complex, float], ...]:
        """Start (as a complex number) and heading (radians) of each piece, and of the end."""
        position, heading = complex(*self.start), math.radians(self.heading)
        starts = [(position, heading)]
        for index, side in enumerate(self.sides):
            turn = self.turn(index)
            chord = self.datum_length(index) * float(np.sinc(turn / (2.0 * math.pi)))
            position += chord * np.exp(1j * (heading + 0.5 * side * turn))
            heading += side * turn
            starts.append((position, heading))
        return tuple(starts)

    def tangent(self, piece: int, share: Array) -> Array:
        """Unit tangents of the datum line, shape (2, n), at the shares (n)."""
        angle = self._starts[piece][1] + self.sides[piece] * self.turn(piece) * share
        return np.array([np.cos(angle), np.sin(angle)])

    def inward(self, piece: int, share: Array) -> Array:
        """Unit normals of the datum line toward the inner side, shape (2, n)."""
        tx, ty = self.tangent(piece, share)
        return self.sides[piece] * np.array([-ty, tx])

    def depth(self, piece: int, share: Array) -> Array:
        """Depths of the member (length) at the shares."""
        first, second = self.pieces[piece].sections
        return first.depth + (second.depth - first.depth) * share

    def depth_rate(self, piece: int) -> float:
        """d(depth)/d(share) along a piece (length)."""
        first, second = self.pieces[piece].sections
        return second.depth - first.depth

    def centroid(self, piece: int, share: Array) -> Array:
        """Distances of the centroid from the inner face (length): what ``blend`` gives, in closed form."""
        return self._centroid_and_rate(piece, share)[0]

    def centroid_rate(self, piece: int, share: Array) -> Array:
        """d(centroid)/d(share) along a piece (length)."""
        return self._centroid_and_rate(piece, share)[1]

    def _centroid_and_rate(self, piece: int, share: Array) -> tuple[Array, Array]:
        # At one share of depth the width goes linearly, so area/depth and first moment/depth^2 do so too.
        first, second = self.pieces[piece].sections
        mean_widths = [section.area / section.depth for section in (first, second)]
        moments = [
            width * section.centroid / section.depth
            for width, section in zip(mean_widths, (first, second), strict=True)
        ]
        mean_width = mean_widths[0] + (mean_widths[1] - mean_widths[0]) * share
        moment = moments[0] + (moments[1] - moments[0]) * share
        depth, ratio = self.depth(piece, share), moment / mean_width
        ratio_rate = (moments[1] - moments[0] - ratio * (mean_widths[1] - mean_widths[0])) / mean_width
        return depth * ratio, self.depth_rate(piece) * ratio + depth * ratio_rate

    def section(self, piece: int, share: float) -> Section:
        """The cross-section at a place."""
        return blend(*self.pieces[piece].sections, share)

    def _inner_offset(self, piece: int, share: Array) -> Array:
        """How far inward of the datum line the inner face lies (length)."""
        if self.datum == "inner":
            return np.zeros_like(share)
        return self.depth(piece, share) if self.datum == "outer" else self.centroid(piece, share)

    def points(self, piece: int, share: Array, x: Array) -> Array:
        """Points, shape (2, n), at the shares and distances ``x`` from the inner face (both shape (n))."""
        share = np.asarray(share, dtype=np.float64)
        origin, heading = self._starts[piece]
        side, turn = self.sides[piece], self.turn(piece)
        # The chord form has no cancellation, however slight the curvature.
        half = 0.5 * turn * share
        chord = self.datum_length(piece) * share * np.sinc(half / math.pi)
        line = origin + chord * np.exp(1j * (heading + side * half))
        return np.array([line.real, line.imag]) + self.inward(piece, share) * (self._inner_offset(piece, share) - x)

    def velocity(self, piece: int, share: Array, x: Array, x_rate: Array) -> tuple[Array, Array]:
        """d(point)/d(share) along the tangent and along the inward normal, where x changes at ``x_rate``."""
        offset_rate = {
            "inner": np.zeros_like(share),
            "centroid": self.centroid_rate(piece, share),
            "outer": np.full_like(share, self.depth_rate(piece)),
        }[self.datum]
        offset = self._inner_offset(piece, share)
        return self.datum_length(piece) - self.turn(piece) * (offset - x), offset_rate - x_rate

    def radius(self, piece: int, share: float) -> float | None:
        """R, from the arc's centre to the local centroid; None on a straight."""
        shape = self.pieces[piece]
        if isinstance(shape, Straight):
            return None
        at = np.array(share)
        return float(shape.radius - self._inner_offset(piece, at) + self.centroid(piece, at))

    def centroid_point(self, piece: int, share: float) -> tuple[float, float]:
        """The centroid at a place."""
        at = np.array([share])
        x, y = self.points(piece, at, self.centroid(piece, at))[:, 0]
        return float(x), float(y)

    @cached_property
    def _piece_lengths(self) -> tuple[float, ...]:
        return tuple(self._length_to(piece, 1.0) for piece in range(len(self.pieces)))

    def _length_to(self, piece: int, share: float) -> float:
        """Length of a piece's centroid line from its start."""
        first, second = self.pieces[piece].sections
        if first == second:
            # Nothing changes along it: one point tells the length.
            nodes, weights = np.array([0.0]), np.array([1.0])
        else:
            nodes, weights = unit_gauss(_LENGTH_POINTS)
        shares = share * nodes
        along, across = self.velocity(piece, shares, self.centroid(piece, shares), self.centroid_rate(piece, shares))
        return float(share * (weights @ np.hypot(along, across)))

    @property
    def length(self) -> float:
        """Length of the centroid line."""
        return sum(self._piece_lengths)

    def s(self, piece: int, share: float) -> float:
        """Distance along the centroid line from the start of the member to a place."""
        return sum(self._piece_lengths[:piece]) + self._length_to(piece, share)

    def extent(self, piece: int) -> float:
        """What a place on a piece is measured in: degrees of an arc, length of a straight."""
        shape = self.pieces[piece]
        return abs(shape.sweep) if isinstance(shape, Arc) else shape.length

    @property
    def size(self) -> float:
        """The largest distance between two points of the centroid line (length): a scale for moments."""
        shares = np.linspace(0.0, 1.0, 33)
        lines = [self.points(piece, shares, self.centroid(piece, shares)) for piece in range(len(self.pieces))]
        line = np.concatenate(lines, axis=1)
        return float(np.hypot(*(line[:, :, None] - line[:, None, :])).max())
