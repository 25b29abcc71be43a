"""Loads as the drawing shows them."""

from __future__ import annotations

import numpy as np

from intrados.compare.results import LoadMark
from intrados.theory.load import EndLoad
from intrados.theory.quadrature import Array
from intrados.theory.spread import FaceSpread, Spread, face_points
from intrados.theory.statics import Loading, end_place

_POINTS = 25


def load_marks(loading: Loading) -> tuple[LoadMark, ...]:
    """One mark for every load of a case."""
    spreads = [_spread_mark(loading, spread) for spread in loading.spreads]
    return (*spreads, *(_end_mark(loading, load) for load in loading.end_loads))


def _spread_mark(loading: Loading, spread: Spread) -> LoadMark:
    member = loading.member
    shares = np.linspace(spread.first, spread.last, _POINTS)
    if isinstance(spread, FaceSpread):
        kind = "bearing" if spread.normal else "patch"
        line = face_points(member, spread.piece, spread.face, shares)
    else:
        kind = "body"
        line = member.points(spread.piece, shares, member.centroid(spread.piece, shares))
    ends = (member.s(spread.piece, spread.first), member.s(spread.piece, spread.last))
    return LoadMark(spread.name, kind, *spread.point, spread.force, spread.moment, *ends, _points(line))


def _end_mark(loading: Loading, load: EndLoad) -> LoadMark:
    member = loading.member
    piece, share = end_place(member, load.end)
    s = member.s(piece, share)
    both = np.array([share, share])
    cut = member.points(piece, both, np.array([0.0, 1.0]) * member.depth(piece, both))
    return LoadMark(load.name, "end", *member.centroid_point(piece, share), load.force, load.moment, s, s, _points(cut))


def _points(line: Array) -> tuple[tuple[float, float], ...]:
    return tuple((float(x), float(y)) for x, y in line.T)
