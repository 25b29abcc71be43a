"""stations.csv: one row for every case and station, for a spreadsheet. Same numbers as results.json."""

from __future__ import annotations

import csv
import io
import math

from intrados.compare.results import CaseResult, Fibre, Results, StationResult
from intrados.compare.units import Units

Cell = str | float | int | None


def stations_csv(results: Results) -> str:
    """The text of stations.csv: a header with units, then a row for every case and station with both fibres.

    Numbers carry 12 significant digits; a value that does not exist is an empty cell. Lines end in a line feed.
    """
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(_header(results.units))
    for case in results.cases:
        for station in case.stations:
            writer.writerow([_text(cell) for cell in _row(case, station)])
    return stream.getvalue()


def _header(units: Units) -> list[str]:
    length, force, stress = units.length, units.force, units.stress
    moment = f"{force} {length}"
    columns = ["case", "station", "piece", "angle [deg]", f"distance [{length}]"]
    columns += [f"{name} [{length}]" for name in ("s", "x", "y", "R", "depth")] + ["R/depth [-]"]
    columns += [f"N [{force}]", f"V [{force}]", f"M [{moment}]"]
    columns += [f"FE N [{force}]", f"FE V [{force}]", f"FE M [{moment}]"]
    columns += [f"area [{length}^2]", f"rn [{length}]", f"e [{length}]"]
    for face in ("inner", "outer"):
        columns += [f"{face} {name} [{stress}]" for name in ("hand", "straight", "ideal", "FE", "uncertainty", "best")]
        columns += [f"{face} {name} [{stress}]" for name in ("thick", "width", "introduction")]
        columns += [f"{face} difference [-]", f"{face} verdict", f"{face} von Mises [{stress}]"]
    columns += [f"radial {name} [{stress}]" for name in ("hand", "ideal", "FE")]
    columns += [f"{face} transverse [{stress}]" for face in ("inner", "outer")]
    return [*columns, "zone", "distance to load [depths]", "utilisation [-]"]


def _row(case: CaseResult, station: StationResult) -> list[Cell]:
    place: list[Cell] = [station.name, station.piece, station.angle, station.distance]
    shape = [station.s, station.x, station.y, station.R, station.depth, station.curvature_ratio]
    forces = [station.N, station.V, station.M, station.fe.N, station.fe.V, station.fe.M]
    section = [station.area, station.rn, station.e]
    last: list[Cell] = [station.zone, station.distance_to_load, station.utilisation]
    fibres = [*_fibre(station.inner), *_fibre(station.outer)]
    radial: list[Cell] = [None] * 3
    if station.radial is not None:
        radial = [station.radial.hand, station.radial.ideal, station.radial.fe]
    across: list[Cell] = [None] * 2
    if station.transverse is not None:
        across = [station.transverse.inner, station.transverse.outer]
    return [case.name, *place, *shape, *forces, *section, *fibres, *radial, *across, *last]


def _fibre(fibre: Fibre) -> list[Cell]:
    stresses = [fibre.hand, fibre.straight, fibre.ideal, fibre.fe, fibre.uncertainty, fibre.best]
    terms = [fibre.budget.thick, fibre.budget.width, fibre.budget.introduction]
    return [*stresses, *terms, fibre.difference, fibre.verdict, fibre.von_mises]


def _text(cell: Cell) -> str:
    if isinstance(cell, float):
        return f"{cell + 0.0:.12g}" if math.isfinite(cell) else ""
    return "" if cell is None else str(cell)
