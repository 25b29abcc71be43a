"""What acts on the member in its drawing: loads with name and magnitude, and clamped ends."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import FancyArrowPatch, Polygon
from matplotlib.path import Path

from intrados.compare.draw import style
from intrados.compare.draw.placing import Placer, Point, pair
from intrados.compare.numeral import common_scale
from intrados.compare.results import End, Field, LoadMark
from intrados.compare.units import Units

_ARROW = 38.0  # points, the longest arrow


def draw_loads(axes: Axes, placer: Placer, units: Units, loads: tuple[LoadMark, ...], outlines: list[Path]) -> None:
    """The stretch a load is spread over, an arrow for its resultant, and its name with the magnitude."""
    force = common_scale(float(np.hypot(*load.force)) for load in loads)
    moment = common_scale(load.moment for load in loads)
    moment_unit = f"{units.force}·{units.length}"
    named: list[tuple[LoadMark, Point, Point]] = []
    for load in loads:
        line = np.array(load.line)
        if len(line) > 1:
            axes.plot(line[:, 0], line[:, 1], color=style.BLACK, linewidth=3.2, solid_capstyle="butt", zorder=5)
        at = np.array([load.x, load.y])
        size = float(np.hypot(*load.force))
        if size > 0:
            tail, head = _arrow(placer, at, np.array(load.force) / size, size / force.largest, outlines)
            axes.add_patch(
                FancyArrowPatch(
                    pair(tail),
                    pair(head),
                    arrowstyle="-|>",
                    mutation_scale=11,
                    shrinkA=0,
                    shrinkB=0,
                    lw=1.6,
                    color=style.BLACK,
                    zorder=7,
                )
            )
            placer.keep_off_line(np.array([tail, head]))
            away = (tail - head) if np.allclose(head, at) else (head - tail)
            named.append((load, tail if np.allclose(head, at) else head, away))
        else:
            named.append((load, at, np.array([0.0, 1.0])))
        if load.moment:
            _draw_turn(axes, placer, at, load.moment)
    for load, tip, away in named:
        size = float(np.hypot(*load.force))
        parts = [style.wrapped(load.name, 22)]
        if size > 0:
            parts.append(force.quantity(size, units.force))
        if load.moment:
            parts.append(style.minus(moment.quantity(load.moment, moment_unit)))
        look: style.Look = {"fontsize": style.SMALL, "ha": "center", "va": "center", "zorder": 8}
        placer.beside(axes.text(*pair(tip), "\n".join(parts), **look), tip, away, far=True)


def _arrow(placer: Placer, at: Point, way: Point, share: float, outlines: list[Path]) -> tuple[Point, Point]:
    """Tail and head: a load that presses ends at its point, one that pulls starts there."""
    length = _ARROW * (0.55 + 0.45 * share) * placer.points
    step = placer.data(placer.pixel(at) + 4.0 * placer.points * way)
    presses = any(bool(outline.contains_point(pair(step))) for outline in outlines)
    back = placer.data(placer.pixel(at) - 4.0 * placer.points * way)
    presses = presses and not any(bool(outline.contains_point(pair(back))) for outline in outlines)
    far = placer.data(placer.pixel(at) + (-length if presses else length) * way)
    return (far, at) if presses else (at, far)


def _draw_turn(axes: Axes, placer: Placer, at: Point, moment: float) -> None:
    """A three-quarter turn around the point, with its head in the sense of the moment."""
    angles = np.radians(np.linspace(-45.0, 225.0, 40)[:: 1 if moment > 0 else -1])
    ring = np.array(
        [placer.data(placer.pixel(at) + 13.0 * placer.points * np.array([np.cos(a), np.sin(a)])) for a in angles]
    )
    axes.plot(ring[:, 0], ring[:, 1], color=style.BLACK, linewidth=1.6, zorder=7)
    axes.add_patch(
        FancyArrowPatch(
            pair(ring[-3]),
            pair(ring[-1]),
            arrowstyle="-|>",
            mutation_scale=11,
            shrinkA=0,
            shrinkB=0,
            lw=1.6,
            color=style.BLACK,
            zorder=7,
        )
    )
    placer.keep_off_line(ring)


def draw_clamps(axes: Axes, placer: Placer, ends: tuple[End, End], field: Field) -> None:
    """A hatched block behind every clamped end."""
    for end, (last, before) in zip(ends, ((0, 1), (-1, -2)), strict=True):
        if end != "clamped":
            continue
        near = np.array([[field.x[last][j], field.y[last][j]] for j in (0, -1)])
        inward = np.mean([[field.x[before][j], field.y[before][j]] for j in (0, -1)], axis=0) - near.mean(axis=0)
        depth = float(np.hypot(*(near[1] - near[0])))
        point = depth / float(np.hypot(*(placer.pixel(near[1]) - placer.pixel(near[0])))) * placer.points
        back = -inward / np.hypot(*inward) * 8.0 * point
        wide = (near[1] - near[0]) / depth * 8.0 * point
        block = np.array([near[0] - wide, near[1] + wide, near[1] + wide + back, near[0] - wide + back])
        look: style.Look = {
            "facecolor": "white",
            "edgecolor": style.DARK,
            "linewidth": 0.0,
            "hatch": "//////",
            "zorder": 2.8,
        }
        axes.add_patch(Polygon(block, closed=True, **look))
        axes.plot(block[:2, 0], block[:2, 1], color=style.BLACK, linewidth=2.0, zorder=3.2)
        placer.keep_off_area(np.vstack([block, block[:1]]))
