"""Hoop stress over the depth at a few stations: the governing one, the worst one, and some along the member."""

from __future__ import annotations

import math

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.ticker import MaxNLocator

from intrados.compare.draw import style
from intrados.compare.numeral import Scale, common_scale
from intrados.compare.results import CaseResult, Results, StationResult

_MOST = 6
_WIDTH, _LEFT, _RIGHT = 9.2, 0.75, 0.15  # inches
_TALL, _BELOW, _TITLE = 2.1, 0.55, 0.62  # of one panel: the axes, what is under and what is over them
_LEGEND = 0.42


def draw_profile(results: Results, case: CaseResult) -> Figure:
    """Figure (c): hand theory, straight-beam formula and FE over the depth, inner face on top; up to six stations."""
    chosen = choose(case)
    columns = min(3, len(chosen)) or 1
    rows = math.ceil(len(chosen) / columns)
    heading = style.title(results, case, 95)
    title_room = 0.2 + 0.2 * len(heading.splitlines())
    panel = _TITLE + _TALL + _BELOW
    height = title_room + rows * panel + _LEGEND
    figure = style.new_figure(_WIDTH, height)
    stress = common_scale(value for st, _ in chosen for value in (*st.profile.hand, *st.profile.fe))
    depth = common_scale(value for station, _ in chosen for value in station.profile.y)
    wide = (_WIDTH - _RIGHT) / columns
    for index, (station, reason) in enumerate(chosen):
        row, column = divmod(index, columns)
        left, bottom = column * wide + _LEFT, height - title_room - row * panel - _TITLE - _TALL
        axes = figure.add_axes((left / _WIDTH, bottom / height, (wide - _LEFT - 0.1) / _WIDTH, _TALL / height))
        _draw_station(axes, station, reason, stress, depth)
        axes.set_xlabel(f"hoop stress [{stress.unit(results.units.stress)}]")
        axes.set_ylabel(f"y from centroid [{depth.unit(results.units.length)}]")
    figure.text(_LEFT / _WIDTH, 1.0 - 0.12 / height, heading, fontsize=style.LARGE, va="top", ha="left")
    _draw_legend(figure)
    return figure


def choose(case: CaseResult) -> list[tuple[StationResult, str]]:
    """At most six stations in the order of s, each with the reason it was chosen (empty: spread along the member).

    The governing one; the one with the largest difference that is compared; of those not comparable the one with the
    largest hand stress; then one by one the station farthest from those chosen.
    """
    reasons: dict[int, str] = {}
    stations = case.stations
    if case.governing:
        governing = case.governing.station
        reasons[next(i for i, station in enumerate(stations) if station.name == governing)] = "governing"
    compared = [i for i, station in enumerate(stations) if _difference(station) is not None]
    if compared:
        worst = max(compared, key=lambda i: (_difference(stations[i]) or 0.0, -i))
        reasons[worst] = " and ".join(filter(None, (reasons.get(worst), "largest difference")))
    apart = [i for i, station in enumerate(stations) if station.inner.verdict == "not comparable"]
    if apart:
        largest = max(apart, key=lambda i: (max(abs(stations[i].inner.hand), abs(stations[i].outer.hand)), -i))
        reasons[largest] = ""
    loaded = [i for i, station in enumerate(stations) if station.inner.verdict != "unloaded"] or range(len(stations))
    while len(reasons) < _MOST and (rest := [i for i in loaded if i not in reasons]):
        reasons[max(rest, key=lambda i: min((abs(stations[i].s - stations[j].s) for j in reasons), default=0.0))] = ""
    return [(stations[i], reasons[i]) for i in sorted(reasons)]


def _difference(station: StationResult) -> float | None:
    """The larger difference of its fibres, None where nothing is compared."""
    fibres = [fibre for fibre in (station.inner, station.outer) if fibre.verdict not in ("not comparable", "unloaded")]
    return max((abs(fibre.difference) for fibre in fibres if fibre.difference is not None), default=None)


def _draw_station(axes: Axes, station: StationResult, reason: str, stress: Scale, depth: Scale) -> None:
    unit, per_length = 10.0**stress.power, 10.0**depth.power
    y = np.array(station.profile.y) / per_length
    ends = y[[0, -1]]
    axes.axvline(0.0, color=style.DARK, linewidth=0.6)
    for end in ends:
        axes.axhline(end, color=style.DARK, linewidth=0.6)
    axes.plot(np.array([station.inner.straight, station.outer.straight]) / unit, ends, gid="straight", **style.STRAIGHT)
    axes.plot(np.array(station.profile.fe) / unit, y, gid="fe", **style.FE)
    axes.plot(np.array(station.profile.hand) / unit, y, gid="hand", **style.HAND)
    for fibre, end in ((station.inner, ends[0]), (station.outer, ends[1])):
        axes.errorbar(fibre.best / unit, end, xerr=fibre.uncertainty / unit, **_BEST)
    axes.margins(x=0.1)
    room = 0.09 * float(ends[0] - ends[1])
    axes.set_ylim(ends[1] - room, ends[0] + room)
    low, high = axes.get_xlim()
    least = 1e-3 * stress.largest / unit
    if high - low < least:
        axes.set_xlim((low + high - least) / 2, (low + high + least) / 2)
    axes.xaxis.set_major_locator(MaxNLocator(5))
    ratio = "straight" if station.curvature_ratio is None else f"R/h {station.curvature_ratio:.3g}"
    name = style.wrapped(station.name, 34).splitlines()
    shown = name if len(name) <= 2 else [name[0], style.clipped(f"{name[1]} {name[2]}", 34)]
    verdicts = [fibre.verdict or "not settled" for fibre in (station.inner, station.outer)]
    both = f"both faces: {verdicts[0]}" if verdicts[0] == verdicts[1] else f"inner {verdicts[0]}, outer {verdicts[1]}"
    facts = f"{', '.join(filter(None, (ratio, reason)))}\n{both}"
    look: style.Look = {"transform": axes.transAxes, "ha": "left", "va": "bottom", "linespacing": 1.15}
    axes.text(0.0, 1.02, facts, fontsize=style.SMALL, **look)
    axes.annotate(
        "\n".join(shown),
        (0.0, 1.02),
        xycoords="axes fraction",
        xytext=(0, 1.5 + 2.6 * style.SMALL),
        textcoords="offset points",
        weight="bold",
        va="bottom",
    )


_BEST: style.Look = {
    "fmt": "o",
    "markersize": 4.0,
    "color": style.FE["color"],
    "capsize": 4.0,
    "elinewidth": 1.2,
    "zorder": 5,
}


def _draw_legend(figure: Figure) -> None:
    entries = [
        Line2D([], [], label="hand theory (curved beam)", **style.HAND),
        Line2D([], [], label="FE, with its uncertainty at the faces", marker="o", markersize=4.0, **style.FE),
        Line2D([], [], label="straight-beam formula", **style.STRAIGHT),
    ]
    height = figure.get_size_inches()[1]
    note = "Inner face on top. Every panel has its own stress scale."
    figure.legend(handles=entries, loc="lower left", bbox_to_anchor=((_LEFT - 0.1) / _WIDTH, 0.2 / height), ncols=3)
    figure.text(_LEFT / _WIDTH, 0.08 / height, note, fontsize=style.SMALL, va="bottom", ha="left")
