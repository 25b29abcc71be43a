"""Fibre stress along the member: hand theory against FE, with the agreement band and where loads enter."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Patch, Rectangle
from numpy.typing import NDArray

from intrados.compare.draw import style
from intrados.compare.numeral import Scale, common_scale
from intrados.compare.results import Along, CaseResult, FibreCurve, FibreName, Results, StationResult

Array = NDArray[np.float64]
_WIDTH, _LEFT, _RIGHT = 9.2, 0.85, 0.2  # inches
_PANEL, _ROW, _GAP = 2.35, 0.19, 0.14
_FACES: tuple[FibreName, FibreName] = ("inner", "outer")


def draw_along(results: Results, case: CaseResult) -> Figure:
    """Figure (b): the stress of the inner and of the outer fibre over s, the length along the centroid line."""
    along = case.along
    stress = common_scale(value for face in _FACES for value in (*_curve(along, face).hand, *_curve(along, face).fe))
    length = common_scale(along.s)
    heading = style.title(results, case, 95)
    scaled = np.array(along.s) / 10.0**length.power
    names = _chosen_names(case, length, float(scaled[-1] - scaled[0]))
    above = max((_tall(name) for _, name in names), default=0.0) + 0.12
    spread = _load_rows(case, length, float(scaled[-1] - scaled[0]))
    strip = _ROW * (1 + max((row for *_, row in spread), default=-1) + 1) + 0.06
    title_room = 0.2 + 0.2 * len(heading.splitlines())
    below, legend = 0.5, 0.78
    height = title_room + above + 2 * _PANEL + 2 * _GAP + strip + below + legend
    figure = style.new_figure(_WIDTH, height)
    top = height - title_room - above

    def panel(y0: float, tall: float) -> Axes:
        wide = (_WIDTH - _LEFT - _RIGHT) / _WIDTH
        axes = figure.add_axes((_LEFT / _WIDTH, y0 / height, wide, tall / height))
        axes.set_xlim(scaled[0], scaled[-1])
        return axes

    panels = [panel(top - _PANEL, _PANEL), panel(top - 2 * _PANEL - _GAP, _PANEL)]
    band = panel(top - 2 * _PANEL - 2 * _GAP - strip, strip)
    for axes, face in zip(panels, _FACES, strict=True):
        _draw_panel(axes, results, case, face, stress, length)
        axes.set_ylabel(f"{face} fibre stress [{stress.unit(results.units.stress)}]")
        axes.tick_params(labelbottom=False)
    _draw_names(panels[0], names, case, length)
    _draw_strip(band, case, length, spread)
    band.set_xlabel(f"s along the centroid line [{length.unit(results.units.length)}]")
    figure.text(_LEFT / _WIDTH, 1.0 - 0.12 / height, heading, fontsize=style.LARGE, va="top", ha="left")
    _draw_legend(figure, panels, results, case, stress)
    return figure


def _curve(along: Along, face: FibreName) -> FibreCurve:
    return along.inner if face == "inner" else along.outer


def _runs(flags: Sequence[bool]) -> list[tuple[int, int]]:
    """First and last index of every run of True."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], np.asarray(flags, dtype=int), [0]])))
    return [(int(a), int(b) - 1) for a, b in zip(edges[::2], edges[1::2], strict=True)]


def _draw_panel(axes: Axes, results: Results, case: CaseResult, face: FibreName, stress: Scale, length: Scale) -> None:
    along = case.along
    curve, other = _curve(along, face), _curve(along, "outer" if face == "inner" else "inner")
    s = np.array(along.s) / 10.0**length.power
    hand, fe, spread, across = (
        np.array(values, dtype=float) / 10.0**stress.power
        for values in (curve.hand, curve.fe, curve.uncertainty, other.fe)
    )
    half = results.band * np.maximum(np.abs(fe), 0.1 * np.maximum(np.abs(fe), np.abs(across)))
    low, high = _limits(hand, fe, half, np.array(along.comparable))
    axes.set_ylim(low, high)
    for first, last in _runs([not comparable for comparable in along.comparable]):
        axes.axvspan(s[first], s[last], facecolor="none", edgecolor=style.LIGHT, hatch="////", linewidth=0, zorder=0.5)
    for load in case.loads:
        for at in {load.s_from, load.s_to}:
            axes.axvline(at / 10.0**length.power, color=style.GREY, linewidth=0.7, linestyle=(0, (1, 1.5)), zorder=1)
    pieces = np.array(along.piece)
    for piece in np.unique(pieces):
        on = pieces == piece
        axes.fill_between(s[on], (fe - half)[on], (fe + half)[on], color=style.LIGHT, linewidth=0, zorder=1.5)
        sure = np.nan_to_num(spread)[on]
        axes.fill_between(s[on], fe[on] - sure, fe[on] + sure, color="#7fa8d8", linewidth=0, zorder=2)
        axes.plot(s[on], fe[on], zorder=3, gid=f"{face}-fe", **style.FE)
        axes.plot(s[on], hand[on], zorder=4, gid=f"{face}-hand", **style.HAND)
        if piece != pieces[0]:
            axes.axvline(s[on][0], color=style.DARK, linewidth=0.6, zorder=1)
    axes.axhline(0.0, color=style.DARK, linewidth=0.6, zorder=1)
    _draw_marks(axes, case, face, stress, length)


def _limits(hand: Array, fe: Array, half: Array, comparable: Array) -> tuple[float, float]:
    """Room for all hand values and all that is compared; a peak under a load may leave the panel."""
    where = comparable if bool(comparable.any()) else np.ones_like(comparable)
    core = np.concatenate([hand, (fe - half)[where], (fe + half)[where], [0.0]])
    low, high = float(np.nanmin(core)), float(np.nanmax(core))
    room = (high - low) or 1.0
    low = max(min(low, float(np.nanmin(fe))), low - 0.3 * room)
    high = min(max(high, float(np.nanmax(fe))), high + 0.3 * room)
    return low - 0.07 * room, high + 0.07 * room


def _draw_marks(axes: Axes, case: CaseResult, face: FibreName, stress: Scale, length: Scale) -> None:
    """Stations as rings on the hand curve; the governing fibre and the largest FE stress stand out."""
    unit, per_length = 10.0**stress.power, 10.0**length.power
    ring: style.Look = {
        "linestyle": "none",
        "markerfacecolor": "white",
        "markeredgecolor": style.BLACK,
        "clip_on": False,
    }
    for station in case.stations:
        fibre = station.inner if face == "inner" else station.outer
        look: style.Look = {**ring, "marker": "o", "markersize": 3.6, "markeredgewidth": 0.8, "clip_on": True}
        axes.plot([station.s / per_length], [fibre.hand / unit], zorder=5, **look)
    governing = case.governing
    if governing and governing.fibre == face:
        s = next(station.s for station in case.stations if station.name == governing.station)
        axes.plot([s / per_length], [governing.best / unit], zorder=6, **{**ring, **_GOVERNING})
    if case.peak and case.peak.fibre == face:
        axes.plot([case.peak.s / per_length], [case.peak.stress / unit], zorder=7, **{**ring, **_PEAK})


_GOVERNING: style.Look = {"marker": "s", "markersize": 9.0, "markeredgewidth": 1.4, "markerfacecolor": "none"}
_PEAK: style.Look = {"marker": "D", "markersize": 4.5, "markeredgewidth": 1.0, "markerfacecolor": style.BLACK}


def _chosen_names(case: CaseResult, length: Scale, span: float) -> list[tuple[StationResult, str]]:
    """The station names that can stand side by side, upright; the governing one first, then those given by hand."""
    governing = case.governing.station if case.governing else None
    order = sorted(case.stations, key=lambda st: (st.name != governing, st.name.startswith(f"{st.piece}:"), st.s))
    per_inch = span / (_WIDTH - _LEFT - _RIGHT)
    chosen: list[tuple[StationResult, str, float]] = []
    for station in order:
        name = style.wrapped(station.name, 22)
        half = per_inch * (0.03 + 0.065 * len(name.splitlines()))
        at = station.s / 10.0**length.power
        if all(abs(at - other.s / 10.0**length.power) >= half + taken for other, _, taken in chosen):
            chosen.append((station, name, half))
    return sorted(((station, name) for station, name, _ in chosen), key=lambda item: item[0].s)


def _tall(name: str) -> float:
    """Inches an upright name takes at most; the small type is some 0.075 inches a letter."""
    return 0.078 * max(len(line) for line in name.splitlines())


def _draw_names(axes: Axes, names: list[tuple[StationResult, str]], case: CaseResult, length: Scale) -> None:
    governing = case.governing.station if case.governing else None
    for station, name in names:
        at = station.s / 10.0**length.power
        axes.plot([at, at], [1.0, 1.02], transform=axes.get_xaxis_transform(), color=style.DARK, lw=0.7, clip_on=False)
        axes.annotate(
            name,
            (at, 1.0),
            xycoords=axes.get_xaxis_transform(),
            xytext=(0, 6),
            textcoords="offset points",
            rotation=90,
            multialignment="left",
            ha="center",
            va="bottom",
            fontsize=style.SMALL,
            weight="bold" if station.name == governing else "normal",
            annotation_clip=False,
        )


def _load_rows(case: CaseResult, length: Scale, span: float) -> list[tuple[str, float, float, float, int]]:
    """Every load's name, bar (from, to), where its name starts, and the row in which neither meets another."""
    per_letter = 0.072 * span / (_WIDTH - _LEFT - _RIGHT)
    origin = case.along.s[0] / 10.0**length.power
    taken: list[tuple[float, float, int]] = []
    rows = []
    for load in sorted(case.loads, key=lambda mark: mark.s_from):
        start, stop = load.s_from / 10.0**length.power, load.s_to / 10.0**length.power
        name = style.clipped(load.name, 60)
        wide = per_letter * (len(name) + 1.5)
        text = stop + 0.7 * per_letter if stop + wide < origin + span else start - wide
        left, right = min(start, text), max(stop, text + wide)
        row = 0
        while any(row == other and left < b and right > a for a, b, other in taken):
            row += 1
        taken.append((left, right, row))
        rows.append((name, start, stop, text, row))
    return rows


def _draw_strip(axes: Axes, case: CaseResult, length: Scale, loads: list[tuple[str, float, float, float, int]]) -> None:
    """Under the panels: the pieces of the member, and where each load enters."""
    count = 1 + max((row for *_, row in loads), default=-1) + 1
    axes.set_ylim(count + 0.1, -0.1)
    axes.set_yticks([])
    along = case.along
    s, pieces = np.array(along.s) / 10.0**length.power, np.array(along.piece)
    kinds = {station.piece: " straight" if station.angle is None else " arc" for station in case.stations}
    low, high = axes.get_xlim()
    for piece in np.unique(pieces):
        first, last = float(s[pieces == piece][0]), float(s[pieces == piece][-1])
        axes.add_patch(Rectangle((first, 0.08), last - first, 0.84, facecolor=style.PALE, edgecolor=style.DARK, lw=0.6))
        kind = kinds.get(int(piece), "")
        inches = (last - first) / (high - low) * (_WIDTH - _LEFT - _RIGHT)
        for name in (f"piece {piece}{kind}", f"{piece}{kind}", f"{piece}"):
            if 0.085 * len(name) < inches:
                middle = (first + last) / 2
                axes.text(middle, 0.52, name, fontsize=style.SMALL, ha="center", va="center")
                break
    for name, start, stop, text, row in loads:
        axes.plot(
            [start, stop], [1.5 + row] * 2, color=style.BLACK, linewidth=5.0, solid_capstyle="butt", clip_on=False
        )
        if start == stop:
            axes.plot([start], [1.5 + row], marker="|", markersize=8, color=style.BLACK, clip_on=False)
        axes.text(text, 1.52 + row, name, fontsize=style.SMALL, ha="left", va="center")


def _draw_legend(figure: Figure, panels: list[Axes], results: Results, case: CaseResult, stress: Scale) -> None:
    worst = max(
        (value for face in _FACES for value in _known(_curve(case.along, face).uncertainty, case.along.comparable)),
        default=0.0,
    )
    unit = results.units.stress
    shown = (
        f"at most ±{stress.bound(worst, stress.decimals(stress.largest) + 1)}{stress.exponent} {unit} where compared"
    )
    # The line covers what is thinner than itself.
    per_unit = min(72.0 * _PANEL / float(np.diff(axes.get_ylim())[0]) for axes in panels)
    hidden = 2.0 * worst / 10.0**stress.power * per_unit <= 1.2 * float(style.FE["linewidth"])
    spread = f"FE; uncertainty thinner than the line, {shown}" if hidden else f"FE with uncertainty (tinted), {shown}"
    entries: list[Line2D | Patch] = [
        Line2D(
            [], [], label="hand theory, rings at stations", marker="o", ms=3.6, mfc="white", mec="black", **style.HAND
        ),
        Line2D([], [], label=spread, **style.FE),
        Patch(facecolor=style.LIGHT, label=f"agreement band about FE, ±{100 * results.band:g} %"),
        Patch(facecolor="white", edgecolor=style.LIGHT, hatch="////", lw=0, label="not comparable: load or support"),
    ]
    if case.governing:
        number = style.minus(stress.quantity(case.governing.best, unit))
        label = f"governing: {style.clipped(case.governing.station, 30)}, {case.governing.fibre}, FE {number}"
        entries.append(Line2D([], [], linestyle="none", markeredgecolor="black", label=label, **_GOVERNING))
    if case.peak:
        label = f"largest FE fibre stress: {style.minus(stress.quantity(case.peak.stress, unit))}, {case.peak.fibre}"
        entries.append(Line2D([], [], linestyle="none", markeredgecolor="black", label=label, **_PEAK))
    place = ((_LEFT - 0.1) / _WIDTH, 0.05 / figure.get_size_inches()[1])
    figure.legend(handles=entries, loc="lower left", bbox_to_anchor=place, ncols=2)


def _known(values: Sequence[float], comparable: Sequence[bool]) -> list[float]:
    return [value for value, compared in zip(values, comparable, strict=True) if compared and np.isfinite(value)]
