"""The main job: hand theory and finite elements of every load case, compared at every station."""

from __future__ import annotations

from dataclasses import dataclass
from importlib.metadata import version

import numpy as np

from intrados.compare.check.case import SolvedCase
from intrados.compare.check.curve import along_member
from intrados.compare.check.field import hoop_field
from intrados.compare.check.mark import load_marks
from intrados.compare.check.movement import displacements
from intrados.compare.check.section_field import section_field
from intrados.compare.check.station import station_result
from intrados.compare.conclusion import governing, notes, peak
from intrados.compare.job import Job
from intrados.compare.ladder import MEMBRANE_SHARE
from intrados.compare.results import CaseResult, Level, MeshSummary, Results, SectionSummary, StationResult
from intrados.compare.zone import place
from intrados.fem.accuracy import Refined, refine
from intrados.fem.membrane import Elastic


@dataclass(frozen=True)
class Checked:
    """A check's results, and the solved mesh they were read from (for the field file)."""

    results: Results
    solved: Refined


def check(job: Job) -> Checked:
    """Solve and compare a job. Raises MeshError where gmsh cannot work."""
    places = tuple(
        tuple(place(loading, station.piece, station.share) for station in job.stations) for loading in job.loadings
    )
    solved = refine(
        job.loadings,
        job.stations,
        tuple(tuple(where.comparable for where in row) for row in places),
        Elastic(job.material.E, job.material.nu),
        MEMBRANE_SHARE * job.agreement.numerical,
    )
    cases = [SolvedCase(job, solved.pair, index, places[index]) for index in range(len(job.loadings))]
    read_out = tuple(_result(case) for case in cases)
    membrane = solved.pair.fine.membrane
    levels = tuple(Level(level.degree, level.cells, level.unknowns, level.worst) for level in solved.levels)
    results = Results(
        version=version("intrados"),
        title=job.title,
        sha256=job.sha256,
        unit_set=job.unit_set,
        units=job.units,
        band=job.agreement.band,
        numerical=job.agreement.numerical,
        yield_stress=job.material.yield_stress,
        ends=(job.loadings[0].start, job.loadings[0].end),
        notes=notes(job, [case.stations for case in read_out]),
        sections={
            name: SectionSummary(section.area, section.centroid, section.inertia, section.depth)
            for name, section in job.sections.items()
        },
        mesh=MeshSummary(len(membrane.scalars), membrane.unknowns, levels),
        missed=tuple(name for case in cases for name in case.missed()),
        cases=read_out,
    )
    return Checked(results, solved)


def _result(case: SolvedCase) -> CaseResult:
    stations = tuple(station_result(case, number) for number in range(len(case.job.stations)))
    curves = along_member(case)
    highest = peak(curves, case.loading.member)
    force_residual, moment_residual = _residuals(stations)
    decisive = governing(stations, highest, case.job)
    return CaseResult(
        name=case.name,
        governing=decisive,
        peak=highest,
        stations=stations,
        displacements=displacements(case),
        force_residual=force_residual,
        moment_residual=moment_residual,
        loads=load_marks(case.loading),
        along=curves,
        field=hoop_field(case),
        section_field=section_field(case, decisive),
    )


def _residuals(stations: tuple[StationResult, ...]) -> tuple[float, float]:
    """Largest |FE - statics| of N and V, and of M, as shares of the largest force and moment on any cut."""
    theory = np.array([[station.N, station.V, station.M] for station in stations])
    fe = np.array([[station.fe.N, station.fe.V, station.fe.M] for station in stations])
    off = np.abs(fe - theory)
    forces, moments = np.abs(theory[:, :2]).max(), np.abs(theory[:, 2]).max()
    return float(off[:, :2].max() / (forces or 1.0)), float(off[:, 2].max() / (moments or 1.0))
