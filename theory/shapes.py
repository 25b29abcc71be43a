"""The section shapes of a job file, each from the dimensions the trade gives it. Lengths in the job's unit."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import replace
from typing import Literal

from intrados.theory.section import EllipticChord, Layer, Section, SectionError, StraightChord

Side = Literal["inner", "outer"]


def rectangle(depth: float, width: float) -> Section:
    """A rectangle."""
    return _stack("rectangle", [(depth, width, width)])


def trapezoid(depth: float, inner_width: float, outer_width: float) -> Section:
    """A trapezoid, its parallel sides along the faces."""
    return _stack("trapezoid", [(depth, inner_width, outer_width)])


def triangle(depth: float, width: float, base: Side) -> Section:
    """An isosceles triangle with its ``base`` of ``width`` on one face and its apex on the other."""
    widths = (width, 0.0) if base == "inner" else (0.0, width)
    return _stack("triangle", [(depth, *widths)])


def circle(diameter: float) -> Section:
    """A round bar."""
    return _round("circle", diameter, diameter)


def ellipse(depth: float, width: float) -> Section:
    """An ellipse with one axis in the plane of bending."""
    return _round("ellipse", depth, width)


def tube(diameter: float, bore: float) -> Section:
    """A round tube. Raises SectionError unless ``bore`` is less than ``diameter``."""
    if not bore < diameter:
        raise SectionError("bore", f"must be less than the diameter {diameter:g}")
    radius, hole = 0.5 * diameter, 0.5 * bore
    solid = EllipticChord(radius, radius, radius)
    wall = radius - hole
    layers = (
        Layer(0.0, wall, (solid,)),
        Layer(wall, diameter - wall, (solid, EllipticChord(radius, hole, -hole)), (EllipticChord(radius, hole, hole),)),
        Layer(diameter - wall, diameter, (solid,)),
    )
    return Section("tube", layers)


def tee(depth: float, flange_width: float, flange_thickness: float, web_thickness: float, flange: Side) -> Section:
    """A T with its ``flange`` at one face. Raises SectionError where flange and web do not make a T."""
    if not flange_thickness < depth:
        raise SectionError("flange_thickness", f"must be less than the depth {depth:g}")
    _web_within("web_thickness", web_thickness, flange_width)
    rows = [
        (flange_thickness, flange_width, flange_width),
        (depth - flange_thickness, web_thickness, web_thickness),
    ]
    return _stack("T", rows if flange == "inner" else rows[::-1])


def i_section(
    depth: float,
    web_thickness: float,
    inner_flange_width: float,
    inner_flange_thickness: float,
    outer_flange_width: float,
    outer_flange_thickness: float,
) -> Section:
    """An I, its flanges equal or not. Raises SectionError where the flanges leave no web."""
    web_depth = depth - inner_flange_thickness - outer_flange_thickness
    if not web_depth > 0.0:
        raise SectionError("depth", f"must exceed both flanges together, {depth - web_depth:g}")
    _web_within("web_thickness", web_thickness, min(inner_flange_width, outer_flange_width))
    return _stack(
        "I",
        [
            (inner_flange_thickness, inner_flange_width, inner_flange_width),
            (web_depth, web_thickness, web_thickness),
            (outer_flange_thickness, outer_flange_width, outer_flange_width),
        ],
    )


def box(depth: float, width: float, flange_thickness: float, web_thickness: float) -> Section:
    """A rectangular hollow section. Raises SectionError where the walls leave no hollow."""
    if not 2.0 * flange_thickness < depth:
        raise SectionError("flange_thickness", f"must be less than half the depth {depth:g}")
    if not 2.0 * web_thickness < width:
        raise SectionError("web_thickness", f"must be less than half the width {width:g}")
    webs = 2.0 * web_thickness
    inner, middle, outer = _stack(
        "box",
        [
            (flange_thickness, width, width),
            (depth - 2.0 * flange_thickness, webs, webs),
            (flange_thickness, width, width),
        ],
    ).layers
    return Section("box", (inner, replace(middle, void=(StraightChord(width - webs, 0.0),)), outer))


def polygon(points: Sequence[tuple[float, float]]) -> Section:
    """A polygon given by one half of its outline: (distance from inner face, half width), inner face outward.

    Raises SectionError as ``widths`` does.
    """
    return _table("polygon", "points", [(x, 2.0 * half) for x, half in points])


def widths(table: Sequence[tuple[float, float]]) -> Section:
    """A profile given by rows (distance from inner face, width), linear between rows; equal distances make a step.

    Raises SectionError where the rows do not start at 0, decrease, jump twice at one distance, or leave the
    width zero inside the depth.
    """
    return _table("widths", "table", list(table))


def _table(shape: str, key: str, rows: list[tuple[float, float]]) -> Section:
    if len(rows) < 2:
        raise SectionError(key, "must have at least two rows")
    if rows[0][0] != 0.0:
        raise SectionError(key, f"must start at the inner face, 0, not at {rows[0][0]:g}")
    for index, (before, after) in enumerate(itertools.pairwise(rows), start=2):
        if after[0] < before[0]:
            raise SectionError(key, f"row {index}: distances must not decrease ({before[0]:g}, then {after[0]:g})")
    if any(width < 0.0 for _, width in rows):
        raise SectionError(key, "must have no negative width")
    distances = [x for x, _ in rows]
    if any(distances.count(x) > 2 for x in distances):
        raise SectionError(key, "must have at most two rows at one distance")
    if rows[0][0] == rows[1][0] or rows[-1][0] == rows[-2][0]:
        raise SectionError(key, "must have one row only at either face")
    for index, (x, width) in enumerate(rows[1:-1], start=2):
        if width == 0.0:
            raise SectionError(key, f"row {index}: the width must not be zero inside the depth (at {x:g})")
    if len(rows) == 2 and rows[0][1] == rows[1][1] == 0.0:
        raise SectionError(key, "must have a width somewhere")
    pairs = itertools.pairwise(rows)
    return _stack(shape, [(b[0] - a[0], a[1], b[1]) for a, b in pairs if b[0] > a[0]], distances)


def _stack(shape: str, rows: Sequence[tuple[float, float, float]], distances: Sequence[float] | None = None) -> Section:
    """Layers of (thickness, width at inner end, width at outer end); exact ``distances`` where they are given."""
    ends = sorted(set(distances)) if distances is not None else _cumulated([row[0] for row in rows])
    layers = []
    for inner, outer, (_, first, last) in zip(ends[:-1], ends[1:], rows, strict=True):
        slope = (last - first) / (outer - inner)
        layers.append(Layer(inner, outer, (StraightChord(first - slope * inner, slope),)))
    return Section(shape, tuple(layers))


def _cumulated(thicknesses: Sequence[float]) -> list[float]:
    ends = [0.0]
    for thickness in thicknesses:
        ends.append(ends[-1] + thickness)
    return ends


def _round(shape: str, depth: float, width: float) -> Section:
    return Section(shape, (Layer(0.0, depth, (EllipticChord(0.5 * depth, 0.5 * depth, 0.5 * width),)),))


def _web_within(key: str, web: float, flange: float) -> None:
    if not web <= flange:
        raise SectionError(key, f"must not exceed the flange width {flange:g}")
