"""The cross-section at the governing station: as plane stress takes it, and as it is in three dimensions."""

from __future__ import annotations

from collections import Counter

import numpy as np
from matplotlib.axes import Axes
from matplotlib.contour import ContourSet
from matplotlib.figure import Figure
from matplotlib.tri import Triangulation

from intrados.compare.draw import style
from intrados.compare.numeral import Scale, common_scale
from intrados.compare.results import CaseResult, Fibre, Results, SectionField, StationResult

_LEFT, _RIGHT, _GAP, _BELOW, _ABOVE = 0.85, 1.2, 0.75, 1.05, 0.75  # inches
_TALLEST, _WIDEST, _LEAST = 3.5, 3.6, 1.6


def draw_section(results: Results, case: CaseResult, field: SectionField) -> Figure:
    """Hoop stress over the section under N and M alone, both ideas of it in one scale, inner face on top."""
    stress = common_scale([*field.hoop, *field.plane_hoop])
    length = common_scale([*field.x, *field.z])
    unit, per_length = 10.0**stress.power, 10.0**length.power
    x, z = np.array(field.x) / per_length, np.array(field.z) / per_length
    corners = np.array(field.triangles)
    # The other half is the mirror image.
    mesh = Triangulation(np.append(z, -z), np.append(x, x), np.concatenate([corners, corners + len(x)]))
    solid = np.tile(np.array(field.hoop) / unit, 2)
    plane = np.tile(np.interp(field.x, field.plane_x, np.array(field.plane_hoop) / unit), 2)
    # Peaks at re-entrant corners, which grow without bound as the mesh is refined, shall not flatten the colours.
    levels = style.stress_levels(float(max(np.percentile(np.abs(solid), 99.5), np.abs(plane).max())) or 1.0)
    aspect = float(np.ptp(mesh.x) / np.ptp(mesh.y))
    wide = float(np.clip(_TALLEST * aspect, _LEAST, _WIDEST))
    tall = float(np.clip(wide / aspect, _LEAST, _TALLEST))
    figure = style.new_figure(max(_LEFT + 2 * wide + _GAP + _RIGHT, 7.4), _BELOW + tall + _ABOVE)
    size = figure.get_size_inches()
    station = next(station for station in case.stations if station.name == field.station)
    names = ("plane stress of the same bar", "three-dimensional section")
    for index, (name, values) in enumerate(zip(names, (plane, solid), strict=True)):
        left = _LEFT + index * (wide + _GAP)
        axes = figure.add_axes((left / size[0], _BELOW / size[1], wide / size[0], tall / size[1]))
        filled = _draw(axes, mesh, values, levels)
        axes.set_title(name, loc="left")
        axes.set_xlabel(f"across the width [{length.unit(results.units.length)}]")
        if index == 0:
            axes.set_ylabel(f"from the inner face [{length.unit(results.units.length)}]")
    style.draw_bar(figure, axes, filled, levels, f"hoop stress [{stress.unit(results.units.stress)}], tension > 0")
    heading = f"{style.title(results, case, 80)}, station {style.clipped(field.station, 30)}"
    figure.text(_LEFT / size[0], 1.0 - 0.12 / size[1], heading, fontsize=style.LARGE, va="top", ha="left")
    figure.text(_LEFT / size[0], 0.08 / size[1], _faces(station, stress, results.units.stress), va="bottom", ha="left")
    return figure


def _draw(axes: Axes, mesh: Triangulation, values: style.Array, levels: style.Array) -> ContourSet:
    beyond = float(np.abs(values).max()) > levels[-1]
    extend = "both" if beyond else "neither"
    filled = axes.tricontourf(mesh, values, levels, cmap=style.stress_colours(), extend=extend)
    axes.tricontour(
        mesh,
        values,
        levels,
        colors=style.BLACK,
        linestyles=[style.dash(level) for level in levels],
        linewidths=[1.2 if level == 0 else 0.6 for level in levels],
    )
    for edge in _outline(mesh):
        axes.plot(mesh.x[edge], mesh.y[edge], color=style.BLACK, linewidth=1.0)
    axes.set_aspect("equal", anchor="NW")
    axes.invert_yaxis()
    axes.margins(0.04)
    return filled


def _outline(mesh: Triangulation) -> style.Array:
    """The edges (n, 2) of the triangles that no other shares, but for those on the plane of symmetry."""
    sides = np.sort(np.concatenate([mesh.triangles[:, pair] for pair in ([0, 1], [1, 2], [2, 0])]), axis=1)
    # Cells have points of their own: edges are told apart by place.
    places = np.round(np.stack([mesh.x, mesh.y], axis=1) / max(np.ptp(mesh.x), np.ptp(mesh.y)), 7)
    keys = [tuple(sorted((tuple(places[a]), tuple(places[b])))) for a, b in sides]
    counts = Counter(keys)
    alone = [side for side, key in zip(sides, keys, strict=True) if counts[key] == 1]
    return np.array([side for side in alone if np.abs(mesh.x[side]).max() > 1e-9 * np.ptp(mesh.x)])


def _faces(station: StationResult, stress: Scale, unit: str) -> str:
    """What both ideas have at either face, and where over the width the section has it."""

    def said(name: str, fibre: Fibre) -> str:
        plane, solid = fibre.ideal, fibre.ideal + fibre.budget.width
        where = f" ({fibre.place})" if fibre.place else ""
        return (
            f"{name} face: plane stress {style.minus(stress.text(plane))}, "
            f"largest in three dimensions {style.minus(stress.text(solid))}{where}"
        )

    ends = [said("inner", station.inner), said("outer", station.outer)]
    return "\n".join(ends) + f"  [{stress.unit(unit)}], of N and M at the station"
