"""The member: mesh, stations, loads and supports over the field of hoop stress."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.contour import ContourSet
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Patch, Polygon
from matplotlib.path import Path
from matplotlib.ticker import MaxNLocator, MultipleLocator
from numpy.typing import NDArray

from intrados.compare.draw import style
from intrados.compare.draw.action import draw_clamps, draw_loads
from intrados.compare.draw.placing import Placer, Point, pair
from intrados.compare.numeral import Scale, common_scale
from intrados.compare.results import CaseResult, Field, Results, StationResult

Array = NDArray[np.float64]
_ROOM = (5.4, 4.9)  # inches the member may take
_MARGIN = (1.15, 0.85)  # inches around it, for names and arrows


@dataclass(frozen=True)
class _Strip:
    """The part of the field on one piece; arrays as in Field, stress scaled."""

    x: Array
    y: Array
    hoop: Array

    @property
    def outline(self) -> Array:
        """The closed polygon around it."""
        edges = [(self.x[:, 0], self.y[:, 0]), (self.x[-1], self.y[-1])]
        edges += [(self.x[::-1, -1], self.y[::-1, -1]), (self.x[0, ::-1], self.y[0, ::-1])]
        return np.concatenate([np.stack(edge, axis=1) for edge in edges])


def draw_member(results: Results, case: CaseResult) -> Figure:
    """Figure (a): hoop stress on the mesh of the member, with stations, loads and clamped ends; axes in length."""
    stress = common_scale([_largest(case)])
    strips = _strips(case.field, stress)
    figure, axes = _canvas(results, case, strips)
    levels = style.stress_levels(_largest(case) / 10.0**stress.power)
    filled = _draw_field(axes, strips, levels)
    _draw_mesh(axes, strips, case.field.per_element)
    placer = Placer(axes)
    for strip in strips:
        placer.keep_off_area(strip.outline)
    draw_clamps(axes, placer, results.ends, case.field)
    draw_loads(axes, placer, results.units, case.loads, [Path(strip.outline) for strip in strips])
    unnamed = _draw_stations(axes, placer, case)
    _draw_isolines(axes, placer, strips, levels)
    style.draw_bar(figure, axes, filled, levels, f"hoop stress [{stress.unit(results.units.stress)}], tension > 0")
    _draw_legend(figure, results, case, unnamed)
    return figure


def _largest(case: CaseResult) -> float:
    """The largest fibre stress where theory and FE are compared; peaks under loads shall not flatten the colours."""
    along = case.along
    pairs = zip(along.inner.fe, along.outer.fe, along.comparable, strict=True)
    compared = [abs(value) for inner, outer, comparable in pairs if comparable for value in (inner, outer)]
    everywhere = [abs(value) for row in case.field.hoop for value in row if np.isfinite(value)]
    return max(compared, default=0.0) or max(everywhere, default=0.0) or 1.0


def _strips(field: Field, stress: Scale) -> list[_Strip]:
    piece = np.array(field.piece)
    x, y, hoop = (np.array(grid, dtype=float) for grid in (field.x, field.y, field.hoop))
    return [_Strip(x[piece == p], y[piece == p], hoop[piece == p] / 10.0**stress.power) for p in np.unique(piece)]


def _canvas(results: Results, case: CaseResult, strips: list[_Strip]) -> tuple[Figure, Axes]:
    """A figure whose axes have the member's proportions, with margins of fixed width."""
    low = np.array([min(s.x.min() for s in strips), min(s.y.min() for s in strips)])
    high = np.array([max(s.x.max() for s in strips), max(s.y.max() for s in strips)])
    per_inch = float(np.max((high - low) / np.array(_ROOM)))
    size = (high - low) / per_inch + 2.0 * np.array(_MARGIN)
    heading = style.title(results, case, int(13 * (size[0] + 1.6)))
    top = 0.25 + 0.18 * len(heading.splitlines())
    width, height = float(size[0]) + 2.0, float(size[1]) + 1.25 + top
    figure = style.new_figure(width, height)
    axes = figure.add_axes((0.7 / width, 1.25 / height, size[0] / width, size[1] / height))
    reach = per_inch * np.array(_MARGIN)
    axes.set_xlim(low[0] - reach[0], high[0] + reach[0])
    axes.set_ylim(low[1] - reach[1], high[1] + reach[1])
    axes.set_xlabel(f"x [{results.units.length}]")
    axes.set_ylabel(f"y [{results.units.length}]")
    step = float(np.diff(MaxNLocator(8).tick_values(0.0, per_inch * float(np.max(size))))[0])
    axes.xaxis.set_major_locator(MultipleLocator(step))
    axes.yaxis.set_major_locator(MultipleLocator(step))
    figure.text(0.7 / width, 1.0 - 0.14 / height, heading, fontsize=style.LARGE, va="top", ha="left")
    return figure, axes


def _draw_field(axes: Axes, strips: list[_Strip], levels: Array) -> ContourSet:
    """Colours between the levels; beyond the last ones (under a load) the end colours, told by the bar's tips."""
    beyond = max(float(np.nanmax(np.abs(strip.hoop))) for strip in strips) > levels[-1]
    for strip in strips:
        filled = axes.contourf(
            strip.x,
            strip.y,
            np.ma.masked_invalid(strip.hoop),
            levels,
            cmap=style.stress_colours(),
            extend="both" if beyond else "neither",
            antialiased=False,
            zorder=1,
        )
        axes.add_patch(Polygon(strip.outline, closed=True, fill=False, edgecolor=style.BLACK, linewidth=1.0, zorder=3))
    return filled


def _draw_mesh(axes: Axes, strips: list[_Strip], step: int) -> None:
    look: style.Look = {"color": style.DARK, "linewidth": 0.35, "alpha": 0.6, "zorder": 2}
    for strip in strips:
        axes.plot(strip.x[::step].T, strip.y[::step].T, **look)
        axes.plot(strip.x[:, ::step], strip.y[:, ::step], **look)


def _draw_isolines(axes: Axes, placer: Placer, strips: list[_Strip], levels: Array) -> None:
    """Solid in tension, dashed in compression, heavy at zero; each named once on a piece where there is room."""
    for strip in strips:
        masked = np.ma.masked_invalid(strip.hoop)
        styles = [style.dash(level) for level in levels]
        widths = [1.2 if level == 0 else 0.6 for level in levels]
        lines = axes.contour(
            strip.x, strip.y, masked, levels, colors=style.BLACK, linestyles=styles, linewidths=widths, zorder=2.5
        )
        inside = Path(strip.outline)
        for level, parts in zip(lines.levels, lines.allsegs, strict=True):
            longest = max(parts, key=len, default=np.empty((0, 2)))
            if len(longest) < 4:
                continue
            order = sorted(np.linspace(0.06, 0.94, 23), key=lambda share: abs(share - 0.5))
            spots = [longest[int(share * (len(longest) - 1))] for share in order]
            text = axes.text(
                *pair(spots[0]), style.minus(f"{level:g}"), fontsize=6.0, ha="center", va="center", zorder=6
            )
            text.set_bbox({"facecolor": "white", "edgecolor": "none", "alpha": 0.75, "pad": 0.6})
            placer.within(text, spots, inside)


def _draw_stations(axes: Axes, placer: Placer, case: CaseResult) -> int:
    """A line across the member and a name outside it; returns how many names had no room."""
    governing = case.governing.station if case.governing else None
    unnamed = 0
    ordered = sorted(case.stations, key=lambda station: (station.name != governing, _is_default(station)))
    cuts = [_cut(case.field, station) for station in ordered]
    for station, (inner, outer) in zip(ordered, cuts, strict=True):
        chosen = station.name == governing
        outward = outer - inner
        tip = placer.data(placer.pixel(outer) + 4.0 * placer.points * outward / np.hypot(*outward))
        width = 2.0 if chosen else 0.8
        axes.plot(*np.array([inner, tip]).T, color=style.BLACK, linewidth=width, zorder=4, solid_capstyle="butt")
        look: style.Look = {"fontsize": style.SMALL, "ha": "center", "va": "center", "zorder": 8}
        text = axes.text(*pair(tip), style.wrapped(station.name, 20), weight="bold" if chosen else "normal", **look)
        unnamed += not placer.beside(text, tip, outward, far=chosen)
    for cut in cuts:
        placer.keep_off_line(np.array(cut))
    return unnamed


def _is_default(station: StationResult) -> bool:
    """Whether the name is the automatic piece:place one; names the engineer gave go first."""
    return station.name.startswith(f"{station.piece}:")


def _cut(field: Field, station: StationResult) -> tuple[Point, Point]:
    """The ends of a station on the inner and the outer face."""
    x, y = np.array(field.x), np.array(field.y)
    ends = np.stack([x[:, [0, -1]], y[:, [0, -1]]], axis=2)
    across = ends[:, 1] - ends[:, 0]
    depth = np.hypot(across[:, 0], across[:, 1])
    across /= depth[:, None]
    centroid = np.array([station.x, station.y])
    gap = centroid - ends[:, 0]
    along = np.sum(gap * across, axis=1)
    off = gap - along[:, None] * across
    beyond = np.maximum(0.0, np.maximum(-along, along - depth))
    distance = np.hypot(off[:, 0], off[:, 1]) + beyond
    distance[np.array(field.piece) != station.piece] = np.inf
    best = int(np.argmin(distance))
    return ends[best, 0] + off[best], ends[best, 1] + off[best]


def _draw_legend(figure: Figure, results: Results, case: CaseResult, unnamed: int) -> None:
    note = f" ({unnamed} without name)" if unnamed else ""
    entries: list[Line2D | Patch] = [
        Line2D([], [], color=style.BLACK, linewidth=0.8, label=f"station{note}"),
        Line2D([], [], color=style.DARK, linewidth=0.4, alpha=0.6, label="mesh"),
        Line2D([], [], color=style.BLACK, linewidth=0.6, label="isoline, tension"),
        Line2D([], [], color=style.BLACK, linewidth=0.6, linestyle="dashed", label="isoline, compression"),
        Line2D([], [], color=style.BLACK, linewidth=1.2, linestyle="dashdot", label="zero hoop stress"),
    ]
    if case.governing:
        entries.insert(1, Line2D([], [], color=style.BLACK, linewidth=2.0, label="governing station (bold)"))
    if any(len(load.line) > 1 for load in case.loads):
        entries.append(Line2D([], [], color=style.BLACK, linewidth=3.2, label="where a load enters"))
    if "clamped" in results.ends:
        entries.append(Patch(facecolor="white", edgecolor=style.DARK, linewidth=0, hatch="//////", label="clamped end"))
    width, height = figure.get_size_inches()
    columns = max(1, min(4, int(width / 1.9)))
    figure.legend(handles=entries, loc="lower left", bbox_to_anchor=(0.6 / width, 0.06 / height), ncols=columns)
