"""Numerical uncertainty of every compared fibre stress, and the refinement that brings it within the target.

Each mesh is solved at rising degree p. The difference between two neighbouring degrees bounds the error of the higher
one: for smooth fields the error itself is several times smaller. The stated uncertainty is 1.5 times the largest
difference over the elements at the station and their neighbours on the piece; beside a joint, where the curvature jumps
and the pair falls short, three times. When the degrees are used up the mesh is halved.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np

from intrados.fem.fibre import FaceStress, face_stress
from intrados.fem.introduction import element_forces
from intrados.fem.membrane import Elastic, Membrane, discretise
from intrados.fem.mesher import mesh
from intrados.fem.strip import Strip, plan
from intrados.theory.load import Face
from intrados.theory.section import Array
from intrados.theory.statics import Loading
from intrados.theory.station import Station

_FACTOR = 1.5
_FACTOR_AT_JOINT = 3.0
_BESIDE_JOINT = 0.2
_SAMPLES = np.array([0.05, 0.275, 0.5, 0.725, 0.95])
# What rounding leaves, as a share of the largest fibre stress: the solution repeats to some 1e-10.
_ROUNDING = 1e-9
# Below this share of the member's largest fibre stress a station counts as unloaded.
UNLOADED = 1e-6
FACES: tuple[Face, Face] = ("inner", "outer")

# Degrees tried on the first mesh and on each finer one; the last but one mesh halves columns and rows once.
LADDER = ((0, (4, 5, 6, 7, 8, 9, 10)), (1, (7, 8, 9, 10)))


@dataclass(frozen=True, eq=False)
class CaseSolution:
    """One load case solved at one degree: element ``forces``, ``displacement`` (unknowns) and both faces' stress."""

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

    @cached_property
    def in_columns(self) -> dict[tuple[int, Face], Array]:
        """Absolute uncertainty (stress) of the fibre stress in each column, by case and face."""
        cases = range(len(self.fine.cases))
        return {(case, face): self._in_columns(case, face) for case in cases for face in FACES}

    def at(self, case: int, face: Face, station: Station) -> float:
        """Absolute uncertainty (stress) of a station's fibre stress."""
        strip = self.fine.membrane.strip
        columns = strip.columns_beside(strip.line_at(station.piece, station.share), station.piece)
        own = abs(self.fine.fibre(case, face, station) - self.coarse.fibre(case, face, station))
        return float(max(_FACTOR * own, self.in_columns[case, face][list(columns)].max()))

    def _in_columns(self, case: int, face: Face) -> Array:
        low, high = self.coarse.cases[case].face(face), self.fine.cases[case].face(face)
        strip = self.fine.membrane.strip
        change = np.abs(high.sampled(_SAMPLES) - low.sampled(_SAMPLES)).max(axis=1)
        pieces = np.array([column.piece for column in strip.columns])
        neighbour = np.where(pieces[1:] == pieces[:-1], 1.0, 0.0)
        around = change.copy()
        around[1:] = np.maximum(around[1:], change[:-1] * neighbour)
        around[:-1] = np.maximum(around[:-1], change[1:] * neighbour)
        factors = np.array([_factor(strip, column) for column in range(len(pieces))])
        largest = max(np.abs(self.fine.cases[case].face(side).hoop).max() for side in FACES)
        floored: Array = np.maximum(factors * around, _ROUNDING * largest)
        return floored


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

    ``compared`` says for each case and station whether it counts. If the ladder of meshes and degrees is used up before
    the target is met, the last pair is returned: the caller sees from the uncertainties where it falls short.
    """
    levels: list[LevelRecord] = []
    pair: Pair | None = None
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
    for degree in degrees:
        membrane = discretise(strip, strip_mesh, elastic, degree, loadings[0].start, loadings[0].end)
        yield solve(membrane, loadings)


def solve(membrane: Membrane, loadings: tuple[Loading, ...]) -> Solution:
    """All load cases on one factorisation."""
    forces = [element_forces(membrane, loading) for loading in loadings]
    displacements = membrane.solve(np.stack(forces, axis=2))
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


def _factor(strip: Strip, column: int) -> float:
    """How many times the change between two degrees is the uncertainty: more within 0.2 depth of a joint."""
    here = strip.columns[column]
    depth = float(strip.member.depth(here.piece, np.array(here.first)))
    near = _BESIDE_JOINT * depth / strip.member.datum_length(here.piece)
    at_start = here.piece > 0 and here.first < near
    at_end = here.piece < len(strip.member.pieces) - 1 and here.last > 1.0 - near
    return _FACTOR_AT_JOINT if at_start or at_end else _FACTOR


def _worst(pair: Pair, stations: tuple[Station, ...], compared: tuple[tuple[bool, ...], ...]) -> float:
    worst = 0.0
    for case, counts in enumerate(compared):
        stresses = np.array([[pair.fine.fibre(case, face, station) for face in FACES] for station in stations])
        scales = np.abs(stresses).max(axis=1)
        for station, scale, counted in zip(stations, scales, counts, strict=True):
            if counted and scale > UNLOADED * scales.max():
                found = max(pair.at(case, face, station) for face in FACES)
                worst = max(worst, found / float(scale))
    return worst
