"""The strip of elements a member is meshed with: columns along it, rows across it.

Stations, joints and the edges of loads are lines between columns; every step or kink of the width is a line between
rows. ``eta`` (0 to 1) is the share of the depth from the face that is the inner one on the first piece; where a member
bends over to the other side, inner and outer exchange places and ``eta`` runs on.
"""

from __future__ import annotations

import itertools
import math
from dataclasses import dataclass, replace

import numpy as np

from intrados.theory.member import Member
from intrados.theory.quadrature import Array
from intrados.theory.section import Section, common_shares
from intrados.theory.statics import Loading
from intrados.theory.station import Station

_SAME = 1e-9
# A row reaches at most half the depth and, on the tightest arc, to twice the radius it starts from, as far as
# _LEAST_GAP lets it.
_DEEPEST_ROW = 0.5
_RADIUS_RATIO = 2.0
# A column is at most two depths long and turns through 20 degrees at most.
_LONGEST_COLUMN = 2.0
_DEGREES = 20.0
# Rows graded for curvature and for loads are not set closer than this to another line, in depths.
_LEAST_GAP = 0.06
# Size of the columns beside a mark, in depths (or in widths of a load), and how fast they may grow away from it.
_AT_CLAMP = 0.06
_AT_JOINT = 0.12
_AT_LOAD = 0.34
_AT_LOAD_EDGE = 0.12
_EDGE_DEPTHS = 0.05
_UNDER_LOAD = 0.35
_UNDER_LOAD_DEPTHS = 0.12
_GROWTH = 0.8


@dataclass(frozen=True)
class Column:
    """The elements between two neighbouring cuts: ``first`` and ``last`` are shares of the piece."""

    piece: int
    first: float
    last: float

    def share(self, q: Array) -> Array:
        """Share of the piece at the local coordinate q, 0 to 1."""
        return self.first + (self.last - self.first) * q


@dataclass(frozen=True)
class Row:
    """A row of elements: eta = c0 + c1 q + c2 q^2 in the local coordinate q.

    Where the width starts like a square root (a round face), eta is a square of q there: width and solution are then
    smooth in q, and high-order elements keep their accuracy.
    """

    coefficients: tuple[float, float, float]

    def eta(self, q: Array) -> Array:
        """Share of the depth at q, 0 to 1."""
        c0, c1, c2 = self.coefficients
        return c0 + q * (c1 + q * c2)

    def eta_rate(self, q: Array) -> Array:
        """d(eta)/dq."""
        _, c1, c2 = self.coefficients
        return c1 + 2.0 * c2 * q


@dataclass(frozen=True)
class Strip:
    """Columns and rows of a member. Line ``c`` is the cut between columns c - 1 and c."""

    member: Member
    columns: tuple[Column, ...]
    rows: tuple[Row, ...]

    def is_turned(self, piece: int) -> bool:
        """Whether eta counts from the outer face on this piece."""
        return self.member.sides[piece] != self.member.sides[0]

    def inner_share(self, piece: int, eta: Array) -> Array:
        """Share of the depth from the inner face."""
        return 1.0 - eta if self.is_turned(piece) else eta

    def line_at(self, piece: int, share: float) -> int:
        """The line at a place that was asked for when the strip was planned."""
        for index, column in enumerate(self.columns):
            if column.piece == piece and abs(column.first - share) <= _SAME:
                return index
            if column.piece == piece and abs(column.last - share) <= _SAME:
                return index + 1
        raise ValueError(f"no cut at share {share} of piece {piece}")

    def columns_beside(self, line: int, piece: int) -> tuple[int, ...]:
        """The columns that meet at a line and belong to ``piece``."""
        beside = [index for index in (line - 1, line) if 0 <= index < len(self.columns)]
        return tuple(index for index in beside if self.columns[index].piece == piece)

    def width(self, piece: int, share: Array, inner_share: Array) -> Array:
        """Widths (length), arrays broadcast together; on a taper the mean at the same share of depth."""
        first, second = self.member.pieces[piece].sections
        start = first.width(inner_share * first.depth)
        if first == second:
            return start + 0.0 * share
        return start + (second.width(inner_share * second.depth) - start) * share


def plan(loadings: tuple[Loading, ...], stations: tuple[Station, ...], fineness: int) -> Strip:
    """The strip for a member with a cut at every station, joint and load of any of its load cases.

    Each step of ``fineness`` halves the rows and the length a column may have.
    """
    loading = _all_together(loadings)
    member = loading.member
    columns: list[Column] = []
    for piece in range(len(member.pieces)):
        lines = sorted({0.0, 1.0, *_asked_for(loading, stations, piece)})
        distinct = [share for index, share in enumerate(lines) if index == 0 or share - lines[index - 1] > _SAME]
        distinct[-1] = 1.0
        for first, last in itertools.pairwise(distinct):
            columns += _divided(loading, Column(piece, first, last), 0.5**fineness)
    return Strip(member, tuple(columns), _rows(loading, 2**fineness))


def _all_together(loadings: tuple[Loading, ...]) -> Loading:
    """One loading with the spreads of all: a mesh that suits it suits each."""
    spreads = {(spread.piece, spread.first, spread.last): spread for case in loadings for spread in case.spreads}
    return replace(loadings[0], spreads=tuple(spreads.values()))


def _asked_for(loading: Loading, stations: tuple[Station, ...], piece: int) -> list[float]:
    shares = [station.share for station in stations if station.piece == piece]
    for spread in loading.spreads:
        if spread.piece == piece:
            shares += [max(spread.first, 0.0), spread.centre, min(spread.last, 1.0)]
    return shares


def _divided(loading: Loading, column: Column, scale: float) -> list[Column]:
    """The column in halves until each is as short as its place asks for."""
    member, piece = loading.member, column.piece
    length = (column.last - column.first) * member.datum_length(piece)
    turn = math.degrees(member.turn(piece)) * (column.last - column.first)
    if length <= scale * _size(loading, column) and turn <= scale * _DEGREES * (1.0 + _SAME):
        return [column]
    middle = 0.5 * (column.first + column.last)
    halves = (Column(piece, column.first, middle), Column(piece, middle, column.last))
    return [part for half in halves for part in _divided(loading, half, scale)]


def _size(loading: Loading, column: Column) -> float:
    """Longest column (length along the datum line) allowed anywhere between the column's ends."""
    member, piece = loading.member, column.piece
    depth = float(member.depth(piece, np.array([column.first, column.last])).min())
    last = len(member.pieces) - 1
    marks = []
    for share in (0.0, 1.0):
        end = (piece == 0 and share == 0.0) or (piece == last and share == 1.0)
        held = (loading.start if share == 0.0 else loading.end) == "clamped"
        if not end:
            marks.append((share, _AT_JOINT * depth))
        elif held:
            marks.append((share, _AT_CLAMP * depth))
    for spread in loading.spreads:
        if spread.piece == piece:
            width = (spread.last - spread.first) * member.datum_length(piece)
            marks += [(spread.centre, _AT_LOAD * width)]
            edge = min(_AT_LOAD_EDGE * width, _EDGE_DEPTHS * depth)
            marks += [(share, edge) for share in (spread.first, spread.last)]
    sizes = [_LONGEST_COLUMN * depth]
    for share, size in marks:
        away = max(column.first - share, share - column.last, 0.0) * member.datum_length(piece)
        sizes.append(size + _GROWTH * away)
    return min(sizes)


def _rows(loading: Loading, parts: int) -> tuple[Row, ...]:
    member = loading.member
    sections = [section for piece in member.pieces for section in piece.sections]
    layers = common_shares(sections)
    round_shares = {share for section in sections for share in _round_shares(section)}
    if len(set(member.sides)) > 1:
        layers = _merged([1.0 - share for share in layers], _SAME, layers)
        round_shares |= {1.0 - share for share in round_shares}
    cuts = _merged([*_graded(member, layers), *_under_loads(loading)], _LEAST_GAP, layers)
    rows: list[Row] = []
    for first, last in itertools.pairwise(layers):
        inside = [share for share in cuts if first - _SAME <= share <= last + _SAME]
        ends = [any(abs(share - end) <= _SAME for share in round_shares) for end in (first, last)]
        rows += _layer_rows(inside, (ends[0], ends[1]), parts)
    return tuple(rows)


def _round_shares(section: Section) -> list[float]:
    """Shares of the depth at which a layer's width starts like a square root."""
    ends = [(layer, x) for layer in section.layers for x in (layer.inner, layer.outer)]
    return [x / section.depth for layer, x in ends if layer.is_round_at(x)]


def _graded(member: Member, layers: list[float]) -> list[float]:
    """Cuts that keep rows to half the depth and, on the tightest arc, to a ratio of radii, equal within a layer."""
    shares = np.array([0.0, 1.0])
    inner_radii = [
        (member.radius(index, share) or math.inf) - float(member.centroid(index, np.array(share)))
        for index in range(len(member.pieces))
        for share in shares
    ]
    depths = [float(member.depth(index, np.array(share))) for index in range(len(member.pieces)) for share in shares]
    tightest = min(radius / depth for radius, depth in zip(inner_radii, depths, strict=True))
    cuts: list[float] = []
    for first, last in itertools.pairwise(layers):
        count = math.ceil((last - first) / _DEEPEST_ROW * (1.0 - _SAME))
        if tightest == math.inf:
            cuts += list(np.linspace(first, last, count + 1)[1:-1])
            continue
        low, high = tightest + first, tightest + last
        count = max(count, math.ceil(math.log(high / low) / math.log(_RADIUS_RATIO) * (1.0 - _SAME)))
        cuts += list(np.geomspace(low, high, count + 1)[1:-1] - tightest)
    turned = [1.0 - share for share in cuts] if len(set(member.sides)) > 1 else []
    return [*cuts, *turned]


def _under_loads(loading: Loading) -> list[float]:
    """Cuts below the face that a narrow load presses, at one width of it, then three, then seven ..."""
    cuts: list[float] = []
    for spread in loading.spreads:
        member = loading.member
        face = getattr(spread, "face", None)
        if face is None:
            continue
        width = (spread.last - spread.first) * member.datum_length(spread.piece)
        step = width / float(member.depth(spread.piece, np.array(spread.centre)))
        step = min(_UNDER_LOAD * step, _UNDER_LOAD_DEPTHS)
        reach = step
        while reach < 0.45:
            low = (face == "inner") != (member.sides[spread.piece] != member.sides[0])
            cuts.append(reach if low else 1.0 - reach)
            step *= 2.0
            reach += step
    return cuts


def _merged(shares: list[float], gap: float, kept: list[float]) -> list[float]:
    """``kept`` and those of ``shares`` that are farther than ``gap`` from every other, sorted."""
    result = list(kept)
    for share in sorted(set(shares)):
        if all(abs(share - other) > gap for other in result):
            result.append(share)
    return sorted(result)


def _layer_rows(cuts: list[float], is_round: tuple[bool, bool], parts: int) -> list[Row]:
    """Rows of one layer, cut at ``cuts`` and each then into ``parts``."""
    first, last = cuts[0], cuts[-1]
    if not any(is_round):
        fine = np.concatenate([np.linspace(a, b, parts + 1)[:-1] for a, b in itertools.pairwise(cuts)])
        edges = [*fine, last]
        return [Row((a, b - a, 0.0)) for a, b in itertools.pairwise(edges)]
    if all(is_round):
        middle = 0.5 * (first + last)
        halves = (
            [c for c in cuts if c < middle - _SAME] + [middle],
            [middle] + [c for c in cuts if c > middle + _SAME],
        )
        return _layer_rows(halves[0], (True, False), parts) + _layer_rows(halves[1], (False, True), parts)
    # From the round end, eta - end = span v^2: equal parts are taken in v.
    end, span = (first, last - first) if is_round[0] else (last, first - last)
    values = sorted(math.sqrt(max((cut - end) / span, 0.0)) for cut in cuts)
    fine_v = [v for a, b in itertools.pairwise(values) for v in np.linspace(a, b, parts + 1)[:-1]]
    fine_v.append(1.0)
    rows = []
    for a, b in itertools.pairwise(fine_v):
        low, step = (a, b - a) if is_round[0] else (b, a - b)
        rows.append(Row((end + span * low * low, 2.0 * span * low * step, span * step * step)))
    return rows if is_round[0] else rows[::-1]
