"""The difference budget of every station as stacked signed bars, against the agreement band."""

from __future__ import annotations

from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Patch

from intrados.compare.draw import style
from intrados.compare.results import CaseResult, Fibre, FibreName, Results, StationResult

_FACES: tuple[FibreName, FibreName] = ("inner", "outer")
_WIDTH, _LEFT, _RIGHT, _PANEL, _GAP = 9.2, 0.85, 0.2, 2.2, 0.14  # inches
_LEGEND, _LETTERS = 0.75, 16
# Terms apart by their hatch first, so that they read in black and white.
_LOOKS: dict[str, style.Look] = {
    "thick": {"facecolor": "#2b6cb0", "hatch": "", "label": "thick: ideal plane-stress bar less hand theory"},
    "width": {"facecolor": "#e6a15c", "hatch": "////", "label": "width: three-dimensional section less ideal bar"},
    "introduction": {"facecolor": style.PALE, "hatch": "....", "label": "introduction: FE less ideal bar"},
}
_REFERENCE, _FAINT = 0.1, 0.05


def draw_budget(results: Results, case: CaseResult) -> Figure:
    """What each assumption of the hand theory costs at every station, in percent of the best estimate's size.

    The bars of a station add up to (best - hand)/reference, the negative of its difference. Stations that are not
    compared, or carry less than 5 % of the largest stress, have none.
    """
    stations = case.stations
    heading = style.title(results, case, 95)
    title_room = 0.2 + 0.2 * len(heading.splitlines())
    names = [style.clipped(station.name, _LETTERS) for station in stations]
    below = 0.5 + 0.075 * max(len(name) for name in names)
    height = title_room + 2 * _PANEL + _GAP + below + _LEGEND
    figure = style.new_figure(_WIDTH, height)
    wide = (_WIDTH - _LEFT - _RIGHT) / _WIDTH
    shown = [_is_shown(station, case) for station in stations]
    reach = _reach(results, stations, shown)
    for index, face in enumerate(_FACES):
        bottom = height - title_room - (index + 1) * _PANEL - index * _GAP
        axes = figure.add_axes((_LEFT / _WIDTH, bottom / height, wide, _PANEL / height))
        _draw_panel(axes, results, stations, shown, face, reach)
        axes.set_ylabel(f"{face}: best − hand [% of best]")
        axes.set_xticks(range(len(stations)), names, rotation=90)
        axes.tick_params(labelbottom=index == 1)
    governing = case.governing.station if case.governing else None
    for label, station in zip(axes.get_xticklabels(), stations, strict=True):
        label.set_fontweight("bold" if station.name == governing else "normal")
    axes.set_xlabel(f"station [name, or piece:angle in deg, or piece:distance in {results.units.length}]")
    figure.text(_LEFT / _WIDTH, 1.0 - 0.12 / height, heading, fontsize=style.LARGE, va="top", ha="left")
    _draw_legend(figure, results, height)
    return figure


def _terms(fibre: Fibre, station: StationResult) -> dict[str, float]:
    """The terms in percent of the reference of the comparison."""
    larger = max(abs(station.inner.best), abs(station.outer.best))
    reference = max(abs(fibre.best), _REFERENCE * larger)
    return {name: 100.0 * getattr(fibre.budget, name) / reference for name in _LOOKS}


def _is_shown(station: StationResult, case: CaseResult) -> bool:
    largest = max(abs(fibre.best) for st in case.stations for fibre in (st.inner, st.outer))
    own = max(abs(station.inner.best), abs(station.outer.best))
    return station.inner.verdict not in ("not comparable", "unloaded") and own >= _FAINT * largest


def _reach(results: Results, stations: tuple[StationResult, ...], shown: list[bool]) -> float:
    """How far the axis goes either way, in percent."""
    sizes = [150.0 * results.band]
    for station, counts in zip(stations, shown, strict=True):
        for fibre in (station.inner, station.outer) if counts else ():
            terms = _terms(fibre, station).values()
            sizes += [sum(value for value in terms if value > 0), -sum(value for value in terms if value < 0)]
    return 1.12 * max(sizes)


def _draw_panel(
    axes: Axes,
    results: Results,
    stations: tuple[StationResult, ...],
    shown: list[bool],
    face: FibreName,
    reach: float,
) -> None:
    band = 100.0 * results.band
    axes.axhspan(-band, band, facecolor=style.LIGHT, alpha=0.45, zorder=0, gid="band")
    axes.axhline(0.0, color=style.DARK, linewidth=0.8, zorder=3)
    for index, (station, counts) in enumerate(zip(stations, shown, strict=True)):
        if not counts:
            axes.axvspan(index - 0.5, index + 0.5, facecolor="none", edgecolor=style.LIGHT, hatch="////", linewidth=0.0)
            continue
        fibre: Fibre = getattr(station, face)
        above = below = 0.0
        terms = _terms(fibre, station)
        for name, value in terms.items():
            look = {key: item for key, item in _LOOKS[name].items() if key != "label"}
            base = above if value >= 0.0 else below
            axes.bar(index, value, bottom=base, width=0.62, edgecolor=style.BLACK, linewidth=0.6, zorder=2, **look)
            above, below = (above + value, below) if value >= 0.0 else (above, below + value)
        axes.plot(index, sum(terms.values()), marker="D", markersize=4.5, color=style.BLACK, zorder=4, gid="net")
    axes.set_xlim(-0.5, len(stations) - 0.5)
    axes.set_ylim(-reach, reach)
    axes.grid(axis="y", color=style.PALE, linewidth=0.5, zorder=1)
    axes.tick_params(axis="x", length=2.0)


def _draw_legend(figure: Figure, results: Results, height: float) -> None:
    handles: list[Patch | Line2D] = [Patch(edgecolor=style.BLACK, linewidth=0.6, **look) for look in _LOOKS.values()]
    handles.append(
        Line2D([], [], marker="D", markersize=4.5, color=style.BLACK, linestyle="none", label="all together")
    )
    handles.append(Patch(facecolor=style.LIGHT, alpha=0.45, label=f"agreement band, ±{100.0 * results.band:g} %"))
    handles.append(
        Patch(facecolor="none", edgecolor=style.LIGHT, hatch="////", label="not compared, or under 5 % of the largest")
    )
    place = (_LEFT / _WIDTH, 0.06 / height)
    figure.legend(handles=handles, loc="lower left", bbox_to_anchor=place, ncols=2, borderaxespad=0.0)
