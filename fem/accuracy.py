"""Numerical uncertainty of every compared fibre stress, and the refinement that brings it within the target.

Each mesh is solved at rising degree p. The change from one degree to the next bounds the error of the higher one: for
smooth fields the error is many times smaller, while near a singular corner, where it falls only like a power of p,
the changes yet to come can add up to more than the last one. The stated uncertainty is three times the largest change
over the nearer halves of the elements at the station: in tests this covers the true error at 95 % of stations or
more, joints included. When the degrees are used up the mesh is halved.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from threadpoolctl import threadpool_limits

from intrados.fem.fibre import FaceStress, face_stress
from intrados.fem.introduction import forces_inside, forces_on_ends
from intrados.fem.membrane import Elastic, Membrane, discretise
from intrados.fem.mesher import mesh
from intrados.fem.strip import Strip, plan
from intrados.theory.load import Face
from intrados.theory.quadrature import Array
from intrados.theory.statics import Loading
from intrados.theory.station import Station

_FACTOR = 3.0
_SAMPLES = np.array([0.05, 0.2, 0.35, 0.5, 0.65, 0.8, 0.95])
_HALF = 3
# What rounding leaves, as a share of the largest fibre stress.
_ROUNDING = 1e-8
# A station whose stress is below this share of the member's largest needs no smaller absolute uncertainty than one
# at this share: what rounding leaves, some 1e-8 of the largest, would otherwise decide.
FAINT = 1e-3
FACES: tuple[Face, Face] = ("inner", "outer")

_FIRST_PAIR = 5
# A member so long that it would need more unknowns than this is left with the last pair: rounding, which grows with
# its slenderness, is then what limits it, and memory would be next.
_MOST_UNKNOWNS = 400_000
# Fineness of each mesh (how often columns and rows are halved) and the degrees tried on it.
LADDER = ((0, (4, 5, 6, 7, 8, 9, 10)), (1, (7, 8, 9, 10)))


@dataclass(frozen=True, eq=False)
class CaseSolution:
    """One load case solved at one degree: ``displacement`` (unknowns) and the stress along both faces.

    ``forces`` are the element forces of the loads between the ends, which cuts take into account.
    """

    loading: Loading
    forces: Array
    displacement: Array
    inner: FaceStress
    outer: FaceStress

    def face(self, face: Face) -> FaceStress:
        """The stress along a face."""
        return self.inner if face == "inner" else self.outer


@dataclass(frozen=True, eq=False)
class Solution:
    """All load cases at one degree on one mesh."""

    membrane: Membrane
    cases: tuple[CaseSolution, ...]

    def fibre(self, case: int, face: Face, station: Station) -> float:
        """Fibre stress at a station."""
        strip = self.membrane.strip
        columns = strip.columns_beside(strip.line_at(station.piece, station.share), station.piece)
        return self.cases[case].face(face).at_cut(columns, station.share)


@dataclass(frozen=True)
class LevelRecord:
    """One solution of the refinement; ``worst`` is the largest uncertainty over S, None for the first of a mesh."""

    degree: int
    cells: int
    unknowns: int
    worst: float | None


@dataclass(frozen=True, eq=False)
class Pair:
    """Solutions of two neighbouring degrees on one mesh; the ``fine`` one is reported."""

    coarse: Solution
    fine: Solution

    def at(self, case: int, face: Face, station: Station) -> float:
        """Absolute uncertainty (stress) of a station's fibre stress."""
        strip = self.fine.membrane.strip
        line = strip.line_at(station.piece, station.share)
        change = self.changes[case, face]
        beside = [
            change[column, _HALF:] if column < line else change[column, :-_HALF]
            for column in strip.columns_beside(line, station.piece)
        ]
        own = abs(self.fine.fibre(case, face, station) - self.coarse.fibre(case, face, station))
        return max(_FACTOR * float(np.max(beside)), own, _ROUNDING * self.largest(case))

    def in_columns(self, case: int, face: Face) -> Array:
        """Absolute uncertainty (stress) of the fibre stress anywhere in each column."""
        within: Array = np.maximum(_FACTOR * self.changes[case, face].max(axis=1), _ROUNDING * self.largest(case))
        return within

    @cached_property
    def changes(self) -> dict[tuple[int, Face], Array]:
        """|fine - coarse| of the fibre stress at sample points of each column, by case and face."""
        return {
            (case, face): np.abs(fine.face(face).sampled(_SAMPLES) - coarse.face(face).sampled(_SAMPLES))
            for case, (fine, coarse) in enumerate(zip(self.fine.cases, self.coarse.cases, strict=True))
            for face in FACES
        }

    def largest(self, case: int) -> float:
        """Largest fibre stress of a case, by magnitude."""
        return float(max(np.abs(self.fine.cases[case].face(face).hoop).max() for face in FACES))


@dataclass(frozen=True, eq=False)
class Refined:
    """The final pair of solutions and how it was reached."""

    pair: Pair
    levels: tuple[LevelRecord, ...]


def refine(
    loadings: tuple[Loading, ...],
    stations: tuple[Station, ...],
    compared: tuple[tuple[bool, ...], ...],
    elastic: Elastic,
    target: float,
) -> Refined:
    """Solve until the uncertainty at every compared station is within ``target`` times its larger fibre stress.

    ``compared`` says for each case and station whether it counts; faint ones are held to FAINT. If the ladder of
    meshes and degrees is used up before the target is met, the last pair is returned: the caller sees from the
    uncertainties where it falls short. All on one BLAS thread: on narrow bands more of them only wait for each other,
    and sums would come out differently on another machine.
    """
    levels: list[LevelRecord] = []
    pair: Pair | None = None
    with threadpool_limits(limits=1, user_api="blas"):
        for solutions in _meshes(loadings, stations, elastic):
            before: Solution | None = None
            for solution in solutions:
                worst = None
                if before is not None:
                    pair = Pair(before, solution)
                    worst = _worst(pair, stations, compared)
                membrane = solution.membrane
                levels.append(LevelRecord(membrane.square.degree, len(membrane.scalars), membrane.unknowns, worst))
                if pair is not None and worst is not None and worst <= target:
                    return Refined(pair, tuple(levels))
                before = solution
    assert pair is not None
    return Refined(pair, tuple(levels))


def _meshes(
    loadings: tuple[Loading, ...], stations: tuple[Station, ...], elastic: Elastic
) -> Iterator[Iterator[Solution]]:
    for fineness, degrees in LADDER:
        strip = plan(loadings, stations, fineness)
        yield _degrees(strip, mesh(strip), loadings, elastic, degrees)


def _degrees(
    strip: Strip, strip_mesh: Any, loadings: tuple[Loading, ...], elastic: Elastic, degrees: tuple[int, ...]
) -> Iterator[Solution]:
    cells = len(strip.columns) * len(strip.rows)
    for degree in degrees:
        # The first pair of the first mesh is always solved: there must be an answer.
        if degree > _FIRST_PAIR and 2 * cells * degree**2 > _MOST_UNKNOWNS:
            return
        membrane = discretise(strip, strip_mesh, elastic, degree, loadings[0].start, loadings[0].end)
        yield solve(membrane, loadings)


def solve(membrane: Membrane, loadings: tuple[Loading, ...]) -> Solution:
    """All load cases on one factorisation."""
    forces = [forces_inside(membrane, loading) for loading in loadings]
    total = [inside + forces_on_ends(membrane, loading) for inside, loading in zip(forces, loadings, strict=True)]
    displacements = membrane.solve(np.stack(total, axis=2))
    cases = [
        CaseSolution(
            loading,
            force,
            displacement,
            face_stress(membrane, loading, displacement, "inner"),
            face_stress(membrane, loading, displacement, "outer"),
        )
        for loading, force, displacement in zip(loadings, forces, displacements.T, strict=True)
    ]
    return Solution(membrane, tuple(cases))


def _worst(pair: Pair, stations: tuple[Station, ...], compared: tuple[tuple[bool, ...], ...]) -> float:
    worst = 0.0
    for case, counts in enumerate(compared):
        stresses = np.array([[pair.fine.fibre(case, face, station) for face in FACES] for station in stations])
        scales = np.abs(stresses).max(axis=1)
        for station, scale, counted in zip(stations, scales, counts, strict=True):
            if counted:
                found = max(pair.at(case, face, station) for face in FACES)
                worst = max(worst, found / max(float(scale), FAINT * float(scales.max())))
    return worst
