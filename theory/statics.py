"""Statics: N, V and M at any place of a member, from the loads on one side of its cut, each as it enters."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np

from intrados.theory.load import End, EndLoad, Load
from intrados.theory.member import Member
from intrados.theory.quadrature import Array
from intrados.theory.spread import Spread, enter

Support = Literal["clamped", "free"]
_BALANCE = 1e-6


@dataclass(frozen=True)
class Imbalance:
    """What is left of the loads on a free member: a force (x, y) and a moment about the middle of the loads."""

    force: tuple[float, float]
    moment: float


@dataclass(frozen=True)
class Loading:
    """A member, how its ends are held, and the loads of one case (``factors`` already in them)."""

    member: Member
    start: Support
    end: Support
    spreads: tuple[Spread, ...]
    end_loads: tuple[EndLoad, ...]

    def resultants(self, piece: int, share: float) -> tuple[float, float, float]:
        """N, V, M at a place, by statics."""
        return self.on_cut(piece, share, self.beyond(piece, share))

    def on_cut(self, piece: int, share: float, wrench: Array) -> tuple[float, float, float]:
        """N, V, M on the cut at a place, which is normal to the datum line, about its centroid.

        ``wrench``, shape (3): Fx, Fy and moment about the origin that the part at greater s exerts. N > 0 tension;
        M > 0 straightens; V > 0 where the part at greater s pulls the other away from the centre of curvature.
        """
        fx, fy, about_origin = wrench
        x, y = self.member.centroid_point(piece, share)
        at = np.array([share])
        tangent, inward = self.member.tangent(piece, at)[:, 0], self.member.inward(piece, at)[:, 0]
        moment = about_origin - (x * fy - y * fx)
        N = fx * tangent[0] + fy * tangent[1]
        V = -(fx * inward[0] + fy * inward[1])
        return float(N), float(V), float(-self.member.sides[piece] * moment)

    def beyond(self, piece: int, share: float) -> Array:
        """Fx, Fy and moment about the origin, shape (3), that the part at greater s exerts on the part at smaller s."""
        before = np.zeros(3)
        after = np.zeros(3)
        for load in self.end_loads:
            if load.end == "start":
                before += end_wrench(self.member, load)
            else:
                after += end_wrench(self.member, load)
        for spread in self.spreads:
            cut = share if spread.piece == piece else (1.0 if spread.piece < piece else 0.0)
            before += spread.resultant(self.member, 0.0, cut)
            after += spread.resultant(self.member, cut, 1.0)
        return -before if self.end == "clamped" else after

    def imbalance(self) -> Imbalance | None:
        """What does not balance on a member with both ends free; None if it balances or is clamped.

        The limit is 1e-6 of the sum of |force|, times the member's size for moments (plus 1e-6 of the |moment|s).
        """
        if "clamped" in (self.start, self.end):
            return None
        wrenches = [end_wrench(self.member, load) for load in self.end_loads]
        wrenches += [spread.wanted() for spread in self.spreads]
        total = np.sum(wrenches, axis=0)
        points = [self.member.centroid_point(*end_place(self.member, load.end)) for load in self.end_loads] + [
            spread.point for spread in self.spreads
        ]
        x, y = np.mean(points, axis=0)
        moment = float(total[2] - (x * total[1] - y * total[0]))
        forces = sum(math.hypot(w[0], w[1]) for w in wrenches)
        moments = sum(abs(load.moment) for load in self.end_loads) + sum(abs(load.moment) for load in self.spreads)
        balanced = math.hypot(total[0], total[1]) <= _BALANCE * forces
        scale = forces * self.member.size + moments
        if balanced and abs(moment) <= _BALANCE * scale:
            return None
        # What is left by rounding is not worth a digit.
        x_left, y_left = (float(value) if abs(value) > 1e-12 * forces else 0.0 for value in total[:2])
        return Imbalance((x_left, y_left), moment if abs(moment) > 1e-12 * scale else 0.0)


def end_place(member: Member, end: End) -> tuple[int, float]:
    """The place (piece, share) of an end."""
    return (0, 0.0) if end == "start" else (len(member.pieces) - 1, 1.0)


def end_wrench(member: Member, load: EndLoad) -> Array:
    """Fx, Fy and moment about the origin, shape (3), of a load on an end."""
    x, y = member.centroid_point(*end_place(member, load.end))
    fx, fy = load.force
    return np.array([fx, fy, x * fy - y * fx + load.moment])


def loading(member: Member, start: Support, end: Support, loads: tuple[Load, ...]) -> Loading:
    """The loads as they enter. Raises LoadError for one that cannot, ValueError for two clamped ends."""
    if start == end == "clamped":
        raise ValueError("two clamped ends: N, V and M are not determined by statics alone")
    spreads = tuple(enter(member, load) for load in loads if not isinstance(load, EndLoad))
    return Loading(member, start, end, spreads, tuple(load for load in loads if isinstance(load, EndLoad)))
