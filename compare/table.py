"""The terminal output of ``check`` and ``hand``: at most 100 columns, and plain text in a pipe."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import TextIO

from rich.box import Box
from rich.console import Console, Group, RenderableType
from rich.table import Table
from rich.text import Text

from intrados.compare.cautions import CAUTIONS
from intrados.compare.numeral import Scale, common_scale, percent
from intrados.compare.results import CaseResult, Fibre, Peak, Results, StationResult
from intrados.compare.units import Units

WIDTH = 100
# A rule of ASCII hyphens under the header and no other line: the same on every terminal and in every pipe.
_RULED = Box("    \n    \n -- \n    \n    \n    \n    \n    \n", ascii=True)
_LADDER_LEGEND = (
    "thick: ideal plane-stress bar less hand theory; width: three-dimensional section less ideal bar; U: its "
    "uncertainty; diff: (hand - sum) over |sum|, or over a tenth of the station's larger stress; width at: where over "
    "the face's width the hoop stress is largest. Stress > 0 tension."
)
_BUDGET_LEGEND = (
    "thick: ideal plane-stress bar less hand theory; width: three-dimensional section less ideal bar; introd.: FE less "
    "ideal bar (loads, joints, tapers); radial: largest over the depth, ideal bar; across: stress across the face, "
    "three-dimensional; width at: where over the face's width the hoop stress is largest."
)
_STYLES = {"holds": "green", "low": "bold red", "high": "bold yellow"}


@dataclass(frozen=True)
class HandRow:
    """One station of the hand theory, in the job's units; R, rn, e and the curvature ratio R/h are None on a straight.

    N > 0 tension, M > 0 straightens, stresses > 0 tension. ``inner_straight`` and ``outer_straight``: N/A and M c/I.
    ``radial_max``: the radial stress of largest magnitude over the depth, None where there is none.
    """

    station: str
    R: float | None
    depth: float
    curvature_ratio: float | None
    N: float
    V: float
    M: float
    area: float
    rn: float | None
    e: float | None
    inner_hand: float
    outer_hand: float
    inner_straight: float
    outer_straight: float
    radial_max: float | None


@dataclass(frozen=True)
class LadderRow:
    """One fibre of a station without a mesh (stresses): hand theory and what the section alone adds to it.

    ``difference``: (hand - settled)/reference with settled = hand + thick + width, the reference of a comparison;
    ``uncertainty`` is that of ``width``.
    """

    station: str
    curvature_ratio: float | None
    fibre: str
    hand: float
    thick: float
    width: float
    uncertainty: float
    difference: float | None
    place: str | None


def show(output: RenderableType, stream: TextIO) -> None:
    """Print to a stream: colour only where it is a terminal, never wider than 100 columns, no trailing blanks."""
    console = Console(file=stream, width=WIDTH, highlight=False, markup=False, emoji=False)
    with console.capture() as captured:
        console.print(output)
    stream.write("".join(f"{line.rstrip()}\n" for line in captured.get().splitlines()))


def check_table(results: Results) -> Group:
    """What ``check`` prints: notes, conclusion, for every case stations, peak and displacements, then cautions."""
    units = results.units
    parts: list[RenderableType] = [
        Text(results.title, style="bold"),
        Text(f"intrados {results.version}, units {units.length}, {units.force}, {units.stress}", style="dim"),
        Text(),
    ]
    if results.notes:
        parts += [_heading("Know first"), *_items(results.notes), Text()]
    parts += [_heading("Conclusion"), *_items(_conclusions(results)), Text()]
    for case in results.cases:
        parts += [*_case(results, case), Text()]
    parts += [_heading("Solution"), *_items(_solution(results)), Text(), _heading("Cautions"), *_items(CAUTIONS)]
    return Group(*parts)


def hand_table(title: str, units: Units, rows: Sequence[HandRow]) -> Group:
    """What ``hand`` prints: the sections, resultants and hand stresses of every station, and the cautions."""
    length = common_scale(value for row in rows for value in (row.R, row.depth, row.rn))
    shift = common_scale(row.e for row in rows)
    area = common_scale(row.area for row in rows)
    force = common_scale(value for row in rows for value in (row.N, row.V))
    moment = common_scale(row.M for row in rows)
    stress = common_scale(
        value
        for row in rows
        for value in (row.inner_hand, row.outer_hand, row.inner_straight, row.outer_straight, row.radial_max)
    )
    table = _table(
        "station",
        f"R [{length.unit(units.length)}]\nR/h",
        f"h [{length.unit(units.length)}]\nA [{area.unit(units.length + '^2')}]",
        f"rn [{length.unit(units.length)}]\ne [{shift.unit(units.length)}]",
        f"N [{force.unit(units.force)}]\nV [{force.unit(units.force)}]",
        f"M\n[{moment.unit(_moment(units))}]",
        f"radial\n[{stress.unit(units.stress)}]",
        "fibre",
        f"hand\n[{stress.unit(units.stress)}]",
        f"straight\n[{stress.unit(units.stress)}]",
    )
    for row in rows:
        inner = stress.decimals(row.inner_hand, row.inner_straight)
        outer = stress.decimals(row.outer_hand, row.outer_straight)
        table.add_row(
            Text(row.station),
            _ratio(length.text(row.R), row.curvature_ratio),
            f"{length.text(row.depth)}\n{area.text(row.area)}",
            f"{length.text(row.rn)}\n{shift.text(row.e)}",
            f"{force.text(row.N)}\n{force.text(row.V)}",
            moment.text(row.M),
            stress.text(row.radial_max),
            "inner\nouter",
            f"{stress.text(row.inner_hand, inner)}\n{stress.text(row.outer_hand, outer)}",
            f"{stress.text(row.inner_straight, inner)}\n{stress.text(row.outer_straight, outer)}",
        )
    legend = (
        "hand: curved-beam theory; straight: N/A and M c/I; radial: largest over the depth. "
        "N > 0 tension, M > 0 straightens, both at the centroid; stress > 0 tension."
    )
    return Group(
        Text(title, style="bold"),
        Text(),
        _heading("Hand theory only, no finite elements"),
        table,
        Text(legend, style="dim"),
        Text(),
        _heading("Cautions"),
        *_items(CAUTIONS),
    )


def ladder_table(title: str, units: Units, rows: Sequence[LadderRow], band: float) -> Group:
    """What ``hand --ladder`` prints: thick and width of every station, and whether the theory may be used."""
    stress = common_scale(value for row in rows for value in (row.hand, row.hand + row.thick + row.width))
    unit = stress.unit(units.stress)
    heads = ("hand", "thick", "width", "sum", "±U")
    table = _table("station", "R/h", "fibre", *(f"{head}\n[{unit}]" for head in heads), "diff\n[%]", "width at")
    for row in rows:
        total = row.hand + row.thick + row.width
        decimals = stress.decimals(row.hand, total)
        table.add_row(
            Text(row.station),
            "straight" if row.curvature_ratio is None else f"{row.curvature_ratio:.4g}",
            row.fibre,
            *(stress.text(value, decimals) for value in (row.hand, row.thick, row.width, total)),
            stress.bound(row.uncertainty, decimals),
            percent(row.difference),
            row.place or "-",
        )
    return Group(
        Text(title, style="bold"),
        Text(),
        _heading("Hand theory and the section alone, no mesh of the member"),
        *_items([_usable(rows, band)]),
        Text(),
        table,
        Text(_LADDER_LEGEND, style="dim"),
        Text(),
        _heading("Cautions"),
        *_items(CAUTIONS),
    )


def _usable(rows: Sequence[LadderRow], band: float) -> str:
    """Whether the section and its curvature alone leave the theory within the band."""
    off = [(abs(row.difference), row) for row in rows if row.difference is not None]
    if not off:
        return "No station carries a stress."
    largest, row = max(off, key=lambda item: item[0])
    where = f"{row.station}, {row.fibre} fibre: {100.0 * largest:.1f} %"
    beyond = sum(share > band for share, _ in off)
    if not beyond:
        return (
            f"Thickness and section leave the hand theory within the band of {100.0 * band:g} % at every station "
            f"(most at {where}). Loads, supports and joints are not looked at here: run check."
        )
    return (
        f"Thickness and section alone put the hand theory beyond the band of {100.0 * band:g} % on {beyond} of "
        f"{len(off)} loaded fibres (most at {where})."
    )


def _heading(text: str) -> Text:
    return Text(text, style="bold")


def _items(sentences: Iterable[str]) -> list[RenderableType]:
    """Sentences with a hanging indent."""
    grid = Table.grid(padding=(0, 1))
    grid.add_column(width=3, justify="right")
    grid.add_column(overflow="fold")
    for sentence in sentences:
        grid.add_row("-", Text(sentence))
    return [grid]


def _table(*headers: str) -> Table:
    """An empty table: the first column takes what is left and folds, the others keep their numbers whole."""
    table = Table(box=_RULED, padding=(0, 1, 0, 0), pad_edge=False, show_edge=False, header_style="bold")
    for index, header in enumerate(headers):
        left = index == 0 or header in {"fibre", "verdict"}
        table.add_column(
            header, justify="left" if left else "right", no_wrap=index > 0, overflow="fold", vertical="top"
        )
    return table


def _moment(units: Units) -> str:
    return f"{units.force} {units.length}"


def _ratio(above: str, ratio: float | None) -> str:
    """A value over R/h, or the word for a straight, which has neither."""
    return "straight\n" if ratio is None else f"{above}\n{ratio:.4g}"


def _conclusions(results: Results) -> list[str]:
    sentences = []
    for case in results.cases:
        where = f"Case {case.name}: " if case.name else ""
        if case.governing is None:
            sentences.append(
                f"{where}no station can be compared: each lies under a load or within one depth of a clamped end."
            )
            continue
        sentences.append(where + case.governing.why)
        if case.governing.utilisation is not None and results.yield_stress is not None:
            sentences.append(
                f"{where}Utilisation there {case.governing.utilisation:.3f} "
                f"of yield {results.yield_stress:g} {results.units.stress}."
            )
    return sentences


def _case(results: Results, case: CaseResult) -> list[RenderableType]:
    name = f"Stations, case {case.name}" if case.name else "Stations"
    legend = (
        "R: centroid radius (none on a straight); h: depth; d: distance to the nearest load; "
        "best: FE plus what the third dimension adds; U: its uncertainty, rounded up; diff: (hand - best) over |best|, "
        f"or over a tenth of the station's larger stress; holds: within {100 * results.band:g} % plus U. "
        "Zone: the theory holds, or what the difference is mostly made of. "
        "N > 0 tension, M > 0 straightens; stress > 0 tension."
    )
    parts: list[RenderableType] = [_heading(name), _stations(results.units, case), Text(legend, style="dim")]
    parts += [
        Text(),
        _heading("Difference budget: hand + thick + width + introduction = best"),
        _budgets(results.units, case),
    ]
    parts += [Text(_BUDGET_LEGEND, style="dim")]
    if case.peak is not None:
        parts += [Text(), *_items([_peak(results.units, case.peak)])]
    if case.displacements:
        parts += [Text(), _heading("Displacements, FE beside strain energy"), _displacements(results.units, case)]
    return parts


def _stations(units: Units, case: CaseResult) -> Table:
    stations = case.stations
    force = common_scale(value for station in stations for value in (station.N, station.V))
    moment = common_scale(station.M for station in stations)
    stress = common_scale(
        value for station in stations for f in (station.inner, station.outer) for value in (f.hand, f.best)
    )
    unit = stress.unit(units.stress)
    table = _table(
        "station\n zone",
        "R/h\nd/h",
        f"N [{force.unit(units.force)}]\nV [{force.unit(units.force)}]",
        f"M\n[{moment.unit(_moment(units))}]",
        "fibre",
        f"hand\n[{unit}]",
        f"best\n[{unit}]",
        f"±U\n[{unit}]",
        "diff\n[%]",
        "verdict",
    )
    for station in stations:
        fibres = (station.inner, station.outer)
        written = [_fibre(stress, fibre) for fibre in fibres]
        distance = station.distance_to_load
        table.add_row(
            Text(f"{station.name}\n {station.zone or '-'}"),
            ("-" if station.curvature_ratio is None else f"{station.curvature_ratio:.4g}")
            + ("\n-" if distance is None else f"\n{distance:.2f}"),
            f"{force.text(station.N)}\n{force.text(station.V)}",
            moment.text(station.M),
            "inner\nouter",
            *("\n".join(column) for column in zip(*written, strict=True)),
            Text("\n").join(_verdict(fibre) for fibre in fibres),
        )
    return table


def _fibre(stress: Scale, fibre: Fibre) -> tuple[str, str, str, str]:
    """Hand, best, uncertainty and difference; the first three with the same decimals."""
    decimals = stress.decimals(fibre.hand, fibre.best)
    return (
        stress.text(fibre.hand, decimals),
        stress.text(fibre.best, decimals),
        stress.bound(fibre.uncertainty, decimals),
        percent(fibre.difference),
    )


def _budgets(units: Units, case: CaseResult) -> Table:
    """The terms from the hand value to the best estimate, with radial and transverse stress; both fibres a station."""
    stations = case.stations
    fibres = [fibre for station in stations for fibre in (station.inner, station.outer)]
    stress = common_scale(value for fibre in fibres for value in (fibre.hand, fibre.fe, fibre.best))
    unit = stress.unit(units.stress)
    heads = ("hand", "thick", "width", "introd.", "best", "FE", "radial", "across")
    table = _table("station", "fibre", *(f"{head}\n[{unit}]" for head in heads), "width\nat")
    for station in stations:
        pair = (station.inner, station.outer)
        decimals = max(stress.decimals(max(abs(fibre.best), abs(fibre.hand))) for fibre in pair)
        columns = [
            [
                stress.text(value, decimals)
                for value in (
                    fibre.hand,
                    fibre.budget.thick,
                    fibre.budget.width,
                    fibre.budget.introduction,
                    fibre.best,
                    fibre.fe,
                )
            ]
            for fibre in pair
        ]
        radial = "-" if station.radial is None else stress.text(station.radial.ideal, decimals)
        across = station.transverse
        table.add_row(
            Text(station.name),
            "inner\nouter",
            *("\n".join(column) for column in zip(*columns, strict=True)),
            radial,
            "-" if across is None else f"{stress.text(across.inner, decimals)}\n{stress.text(across.outer, decimals)}",
            "\n".join(fibre.place or "-" for fibre in pair),
        )
    return table


def _verdict(fibre: Fibre) -> Text:
    return Text(fibre.verdict, style=_STYLES.get(fibre.verdict, "dim"))


def _peak(units: Units, peak: Peak) -> str:
    stress = common_scale([peak.stress, peak.hand])
    decimals = stress.decimals(peak.stress, peak.hand)
    power, unit = stress.exponent, units.stress
    return (
        f"Largest FE fibre stress away from loads and supports: {stress.text(peak.stress, decimals)}{power} "
        f"± {stress.bound(peak.uncertainty, decimals)}{power} {unit}, {peak.fibre} fibre, piece {peak.piece} "
        f"at {place(units, peak)} (s = {common_scale([peak.s]).quantity(peak.s, units.length)}); "
        f"hand theory there {stress.text(peak.hand, decimals)}{power} {unit}."
    )


def place(units: Units, at: Peak | StationResult) -> str:
    """Where on its piece a peak or a station lies: an angle on an arc, a distance on a straight."""
    if at.angle is not None:
        return f"{at.angle:.4g} deg"
    return f"{at.distance:.4g} {units.length}"


def _displacements(units: Units, case: CaseResult) -> Table:
    rows = case.displacements
    scale = common_scale(value for row in rows for value in (*row.fe, *row.energy))
    unit = scale.unit(units.length)
    table = _table("at", *(f"{name}\n[{unit}]" for name in ("FE x", "energy x", "FE y", "energy y")), "diff\n[%]")
    for row in rows:
        size = (row.fe[0] ** 2 + row.fe[1] ** 2) ** 0.5
        gap = ((row.energy[0] - row.fe[0]) ** 2 + (row.energy[1] - row.fe[1]) ** 2) ** 0.5
        decimals = scale.decimals(*row.fe, *row.energy)
        numbers = (row.fe[0], row.energy[0], row.fe[1], row.energy[1])
        share = f"{100.0 * gap / size:.1f}" if size > 0 else "-"
        table.add_row(Text(row.at), *(scale.text(value, decimals) for value in numbers), share)
    return table


def _solution(results: Results) -> list[str]:
    mesh = results.mesh
    degrees = ", ".join(str(level.degree) for level in mesh.levels)
    worst = mesh.levels[-1].worst if mesh.levels else None
    reached = (
        "" if worst is None else f"; largest uncertainty of the FE {100 * worst:.2g} % of the station's larger stress"
    )
    sentences = [
        f"Mesh: {mesh.cells} cells, {mesh.dofs} unknowns, degrees {degrees}{reached} "
        f"(target {100 * results.numerical:g} %)."
    ]
    if results.missed:
        sentences.append(f"The target is NOT met at: {', '.join(results.missed)}.")
    for case in results.cases:
        where = f"case {case.name}: " if case.name else ""
        sentences.append(
            f"Equilibrium: {where}reactions and loads balance to {case.force_residual:.1e} of the forces "
            f"and {case.moment_residual:.1e} of the moments."
        )
    return sentences
