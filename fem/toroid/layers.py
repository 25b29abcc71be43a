"""The half section of a stack of layers as rows and columns of cells.

Rows run across the depth, columns between the hollow (or the plane of bending) and the outline. A round face starts the
outline like a square root, which an angle for q makes smooth; a face of no width is a side of zero length. Every step
of the width is a line between cells, and cells shrink geometrically toward re-entrant corners and toward the edges of
the faces, where the solution is less smooth.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np

from intrados.fem.toroid.cells import SAME, Cell, Corner, FaceCells, HalfSection
from intrados.theory.quadrature import Array
from intrados.theory.section import Layer, Section, SectionError

# Cells shrink by this factor toward a re-entrant corner, toward the edge of a face, and toward one where the outline
# runs on at an obtuse angle, so often.
_SHRINK = 0.15
_SHRINKINGS = 2
_EDGE_SHRINKINGS = 1
_OBTUSE_SHRINKINGS = 3
# The outline turns at least so much (radians) where a kink counts: outward it is a re-entrant corner.
_KINK = 0.25
# A row reaches to twice the radius it starts from at most, and over half the depth.
_RADIUS_RATIO = 2.0
_DEEPEST_ROW = 0.5
# A column is at most so many times as wide as its part of the section is deep.
_WIDEST_COLUMN = 2.0
# Stress closer to a re-entrant corner than this share of the thinner wall is not counted as a peak: there it grows
# without bound, for the model has no fillet. Common practice for structural stress at weld toes, 0.4 t.
_NEAR_CORNER = 0.4


def layered(section: Section, R: float) -> HalfSection:
    """The cells for a bar bent to the centroid radius ``R`` (length).

    Raises SectionError where two layers have no material in common.
    """
    layers, depth = section.layers, section.depth
    joints = [_joint(section, index) for index in range(len(layers) - 1)]
    columns = _columns(section, joints)
    cells: list[Cell] = []
    count = []
    for index, layer in enumerate(layers):
        grading = [
            (end, joints[joint].scales[side], joints[joint].shrinkings)
            for joint, side, end in ((index - 1, 1, layer.inner), (index, 0, layer.outer))
            if 0 <= joint < len(joints) and joints[joint].shrinkings
        ]
        for end, is_face in ((layer.inner, index == 0), (layer.outer, index == len(layers) - 1)):
            half_width = 0.5 * _at(layer.width, end)
            if is_face and half_width > SAME * depth:
                scale = min(half_width, _run(section, index, 1 if index == 0 else -1))
                grading.append((end, scale, _edge_shrinkings(layer, end)))
        rows = _rows(layer, grading, depth, R - section.centroid)
        for first, last in itertools.pairwise(rows):
            low = partial(_straight, layer, first, last)
            high = partial(_outline, layer, first, last, layer.is_round_at(first), layer.is_round_at(last))
            cells += [Cell(low, high, c0, c1) for c0, c1 in itertools.pairwise(columns[index])]
        count.append(len(columns[index]) - 1)
    last_row = tuple(range(len(cells) - count[-1], len(cells)))
    return HalfSection(
        section,
        tuple(cells),
        _face(section, layers[0], 0.0, tuple(range(count[0])), joints[:1], 1),
        _face(section, layers[-1], depth, last_row, joints[-1:], 0),
        tuple(corner for joint in joints for corner in joint.corners),
    )


def _face(
    section: Section, layer: Layer, x: float, cells: tuple[int, ...], joint: Sequence[_Joint], beyond: int
) -> FaceCells:
    if _at(layer.width, x) <= SAME * section.depth:
        return FaceCells(False, cells[-1:], None)
    narrower = joint and joint[0].is_step and joint[0].spans[beyond] == joint[0].shared
    return FaceCells(True, cells, joint[0].shared if narrower else None)


def _straight(layer: Layer, first: float, last: float, q: Array) -> Array:
    x = first + (last - first) * q
    return np.array([x, layer.half_void(x)])


def _outline(layer: Layer, first: float, last: float, starts_round: bool, ends_round: bool, q: Array) -> Array:
    """The outline over a row, by an angle from an end where it starts like a square root."""
    if starts_round:
        x = first + (last - first) * (1.0 - np.cos(0.5 * math.pi * q))
    elif ends_round:
        x = first + (last - first) * np.sin(0.5 * math.pi * q)
    else:
        x = first + (last - first) * q
    return np.array([x, layer.half_outline(x)])


@dataclass(frozen=True)
class _Joint:
    """Where two layers meet at ``x``: the ``spans`` of z of either, the one they share, and re-entrant corners there.

    ``scales`` are the lengths over which cells shrink toward the joint in the layer before and the layer beyond, so
    often as ``shrinkings`` says; ``kink`` tells a kink of the outline outward (> 0) or inward (< 0) from none (0).
    """

    x: float
    spans: tuple[tuple[float, float], tuple[float, float]]
    shared: tuple[float, float]
    is_step: bool
    corners: tuple[Corner, ...]
    scales: tuple[float, float]
    shrinkings: int
    kink: int


def _joint(section: Section, index: int) -> _Joint:
    before, beyond = section.layers[index], section.layers[index + 1]
    x, same = before.outer, SAME * section.depth
    spans = [(_at(layer.half_void, x), _at(layer.half_outline, x)) for layer in (before, beyond)]
    shared = (max(span[0] for span in spans), min(span[1] for span in spans))
    wall = shared[1] - shared[0]
    if wall <= same:
        raise SectionError("shape", f"at {x:g} from the inner face the section has no material across")
    stepped = [abs(spans[0][end] - spans[1][end]) > same for end in (0, 1)]
    places = [shared[end] for end in (0, 1) if stepped[end]]
    kink = 0 if stepped[1] else _kink(before, beyond, x)
    if kink > 0:
        places.append(shared[1])
    thick = wall if shared[0] > same else 2.0 * wall
    depths = [_run(section, index, -1), _run(section, index + 1, 1)]
    scales = (min(depths[0], thick), min(depths[1], thick))
    corners = tuple(Corner(x, z, _NEAR_CORNER * min(*depths, thick)) for z in places)
    shrinkings = _SHRINKINGS if corners or kink else 0
    return _Joint(x, (spans[0], spans[1]), shared, any(stepped), corners, scales, shrinkings, kink)


def _kink(before: Layer, beyond: Layer, x: float) -> int:
    """1 where the outline turns away from the plane of bending between two layers, -1 where toward it, 0 if little."""
    step = 1e-4 * min(before.outer - before.inner, beyond.outer - beyond.inner)
    inner = _at(before.half_outline, x) - _at(before.half_outline, x - step)
    outer = _at(beyond.half_outline, x + step) - _at(beyond.half_outline, x)
    turn = math.atan2(outer, step) - math.atan2(inner, step)
    return int(math.copysign(1.0, turn)) if abs(turn) > _KINK else 0


def _run(section: Section, index: int, way: int) -> float:
    """Depth of the layers from one onward that follow each other without a step or a kink."""
    total = 0.0
    layers = section.layers[index:] if way > 0 else section.layers[index::-1]
    for layer, following in itertools.zip_longest(layers, layers[1:]):
        total += layer.outer - layer.inner
        if following is None:
            break
        before, beyond = (layer, following) if way > 0 else (following, layer)
        ends = [(_at(one.half_void, before.outer), _at(one.half_outline, before.outer)) for one in (before, beyond)]
        stepped = any(abs(one - other) > SAME * section.depth for one, other in zip(*ends, strict=True))
        if stepped or _kink(before, beyond, before.outer):
            break
    return total


def _rows(layer: Layer, grading: Sequence[tuple[float, float, int]], depth: float, inner_radius: float) -> list[float]:
    """Lines across the layer, from its inner to its outer end."""
    thickness = layer.outer - layer.inner
    cuts = [layer.inner, layer.outer]
    for end, scale, times in grading:
        into = 1.0 if end == layer.inner else -1.0
        cuts += [end + into * length for length in _shrinking(scale, thickness, times)]
    cuts = _distinct(cuts, SAME * depth)
    both_round = layer.is_round_at(layer.inner) and layer.is_round_at(layer.outer)
    lines = [cuts[0]]
    for first, last in itertools.pairwise(cuts):
        ratio = (inner_radius + last) / (inner_radius + first)
        by_radius = math.ceil(math.log(ratio) / math.log(_RADIUS_RATIO) - 1e-9)
        parts = max(by_radius, math.ceil((last - first) / (_DEEPEST_ROW * depth) - 1e-9), 2 if both_round else 1)
        if by_radius > 1:
            shares = (ratio ** (np.arange(1, parts + 1) / parts) - 1.0) / (ratio - 1.0)
        else:
            shares = np.arange(1, parts + 1) / parts
        lines += [first + (last - first) * float(share) for share in shares]
    return lines


def _columns(section: Section, joints: Sequence[_Joint]) -> list[list[float]]:
    """Lines along each layer, as shares of the way from hollow to outline; they match where layers meet."""
    same = SAME * section.depth
    lines: list[list[float]] = [[0.0, 1.0] for _ in section.layers]
    for index, joint in enumerate(joints):
        low, high = joint.shared
        for side, layer in enumerate((index, index + 1)):
            span = joint.spans[side]
            lines[layer] += [_share(z, span) for z in joint.shared]
            if joint.kink < 0:
                lines[layer] += [1.0 - share for share in _shrinking(1.0, 1.0, _SHRINKINGS)]
            if joint.corners:
                for z in (corner.z for corner in joint.corners):
                    inward = 1.0 if z == low else -1.0
                    reaches = [(inward, high - low, high - low)]
                    beyond = span[1] - high if z == high else low - span[0]
                    if beyond > same:
                        reaches.append((-inward, beyond, min(joint.scales[side], beyond)))
                    for way, room, scale in reaches:
                        lines[layer] += [
                            _share(z + way * length, span) for length in _shrinking(scale, room, _SHRINKINGS)
                        ]
    for index, end in ((0, 0.0), (len(lines) - 1, section.depth)):
        half_width = 0.5 * _at(section.layers[index].width, end)
        if half_width > same:
            scale = min(half_width, _run(section, index, 1 if index == 0 else -1))
            times = _edge_shrinkings(section.layers[index], end)
            lines[index] += [1.0 - length / half_width for length in _shrinking(scale, half_width, times)]
    for index in range(len(lines)):
        lines[index] = _fill(section, index, _distinct(lines[index], SAME))
    for order, way in ((range(len(joints)), 0), (range(len(joints) - 1, -1, -1), 1)):
        for index in order:
            spans = joints[index].spans
            source, target = (index, index + 1) if way == 0 else (index + 1, index)
            carried = [spans[way][0] + c * (spans[way][1] - spans[way][0]) for c in lines[source]]
            shares = [_share(z, spans[1 - way]) for z in carried]
            lines[target] = _distinct([*lines[target], *(c for c in shares if SAME < c < 1.0 - SAME)], SAME)
    return lines


def _edge_shrinkings(layer: Layer, end: float) -> int:
    """How often cells shrink toward the edge of the face at an end of a layer."""
    into = 1e-4 * (layer.outer - layer.inner)
    inside = end + into if end == layer.inner else end - into
    opening = math.atan2(_at(layer.half_outline, inside) - _at(layer.half_outline, end), into)
    return _OBTUSE_SHRINKINGS if opening > _KINK else _EDGE_SHRINKINGS


def _fill(section: Section, index: int, shares: list[float]) -> list[float]:
    """More lines where columns would be too wide."""
    layer = section.layers[index]
    widest = max(0.5 * _at(layer.width, x) for x in (layer.inner, 0.5 * (layer.inner + layer.outer), layer.outer))
    deep = _run(section, index, -1) + _run(section, index, 1) - (layer.outer - layer.inner)
    lines = [shares[0]]
    for first, last in itertools.pairwise(shares):
        parts = math.ceil((last - first) * widest / (_WIDEST_COLUMN * deep) - 1e-9)
        lines += [first + (last - first) * part / parts for part in range(1, max(parts, 1) + 1)]
    return lines


def _shrinking(scale: float, room: float, times: int) -> list[float]:
    """Distances from a corner at which cells end."""
    return [
        length for length in (scale * _SHRINK**power for power in range(times + 1)) if length < (1.0 - _SHRINK) * room
    ]


def _share(z: float, span: tuple[float, float]) -> float:
    return (z - span[0]) / (span[1] - span[0])


def _distinct(values: Iterable[float], same: float) -> list[float]:
    """Increasing, those closer than ``same`` to the one before left out."""
    ordered = sorted(values)
    kept = ordered[:1]
    for value in ordered[1:]:
        if value - kept[-1] > same:
            kept.append(value)
    return kept


def _at(function: Callable[[Array], Array], x: float) -> float:
    return float(function(np.array(x)))
