"""The main job: hand theory and finite elements of every load case, compared at every station."""

from __future__ import annotations

import math
from dataclasses import dataclass
from importlib.metadata import version

import numpy as np

from intrados.compare import verdict
from intrados.compare.conclusion import governing, notes, peak
from intrados.compare.job import Job
from intrados.compare.results import (
    Along,
    CaseResult,
    Displacement,
    Fibre,
    FibreCurve,
    Field,
    Level,
    LoadMark,
    MeshSummary,
    Profile,
    Resultants,
    Results,
    SectionSummary,
    StationResult,
)
from intrados.compare.zone import Place, place
from intrados.fem.accuracy import FACES, FAINT, Refined, refine
from intrados.fem.cut import along, forces_beyond, hoop_profile, mean_motion, stresses
from intrados.fem.fibre import pressed
from intrados.fem.membrane import Elastic
from intrados.theory import strain_energy, winkler
from intrados.theory.load import EndLoad, Face
from intrados.theory.member import Arc
from intrados.theory.section import Array
from intrados.theory.spread import BodySpread, FaceSpread, face_points
from intrados.theory.statics import Loading, end_place

_PROFILE_POINTS = 41
_SAMPLES = np.linspace(0.0, 1.0, 5)
_PER_ELEMENT = 4


@dataclass(frozen=True)
class Checked:
    """A check's results, and the solved mesh they were read from (for the field file)."""

    results: Results
    solved: Refined


def check(job: Job) -> Checked:
    """Solve and compare a job. Raises MeshError where gmsh cannot work."""
    places = [[place(loading, s.piece, s.share) for s in job.stations] for loading in job.loadings]
    solved = refine(
        job.loadings,
        job.stations,
        tuple(tuple(where.comparable for where in row) for row in places),
        Elastic(job.material.E, job.material.nu),
        job.agreement.numerical,
    )
    cases = [_Case(job, solved, index, tuple(places[index])) for index in range(len(job.loadings))]
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
        notes=notes(job),
        sections={
            name: SectionSummary(section.area, section.centroid, section.inertia, section.depth)
            for name, section in job.sections.items()
        },
        mesh=_mesh(solved),
        missed=tuple(name for case in cases for name in case.missed()),
        cases=tuple(case.result() for case in cases),
    )
    return Checked(results, solved)


def _mesh(solved: Refined) -> MeshSummary:
    membrane = solved.pair.fine.membrane
    levels = tuple(Level(level.degree, level.cells, level.unknowns, level.worst) for level in solved.levels)
    return MeshSummary(len(membrane.scalars), membrane.unknowns, levels)


class _Case:
    """One load case of a solved job, read out into its results."""

    def __init__(self, job: Job, solved: Refined, index: int, places: tuple[Place, ...]) -> None:
        self.job = job
        self.index = index
        self.places = places
        self.loading: Loading = job.loadings[index]
        self.pair = solved.pair
        self.membrane = solved.pair.fine.membrane
        self.solution = solved.pair.fine.cases[index]
        self.fe = np.array(
            [[solved.pair.fine.fibre(index, face, station) for face in FACES] for station in job.stations]
        )
        self.scales = np.abs(self.fe).max(axis=1)

    def result(self) -> CaseResult:
        stations = tuple(self._station(number) for number in range(len(self.job.stations)))
        curves = self._along()
        highest = peak(curves, self.loading.member)
        force_residual, moment_residual = self._residuals(stations)
        name = self.job.cases[self.index].name
        return CaseResult(
            name=name,
            governing=governing(stations, highest, self.job),
            peak=highest,
            stations=stations,
            displacements=self._displacements(),
            force_residual=force_residual,
            moment_residual=moment_residual,
            loads=self._marks(),
            along=curves,
            field=self._field(),
        )

    def missed(self) -> list[str]:
        """Comparable stations whose uncertainty is beyond the numerical target."""
        found = []
        several = len(self.job.cases) > 1
        for number, station in enumerate(self.job.stations):
            scale = max(self.scales[number], FAINT * self.scales.max())
            worst = max(self.pair.at(self.index, face, station) for face in FACES)
            if self.places[number].comparable and worst > self.job.agreement.numerical * scale:
                name = self.job.cases[self.index].name
                found.append(f"{station.name} ({name})" if several else station.name)
        return found

    def _station(self, number: int) -> StationResult:
        station, where = self.job.stations[number], self.places[number]
        member = self.loading.member
        piece, share = station.piece, station.share
        section, R = member.section(piece, share), member.radius(piece, share)
        N, V, M = self.loading.resultants(piece, share)
        x, y = member.centroid_point(piece, share)
        is_arc = isinstance(member.pieces[piece], Arc)
        position = share * member.extent(piece)
        ring = None if R is None else section.ring(R)
        line = self.membrane.strip.line_at(piece, share)
        beyond = forces_beyond(self.membrane, self.solution.displacement, self.solution.forces, line)
        hand = winkler.fibres(section, R, N, M)
        straight = winkler.fibres(section, None, N, M)
        inner, outer = (self._fibre(number, face, hand[i], straight[i]) for i, face in enumerate(FACES))
        zone = "introduction" if where.in_load else "support" if where.near_clamp else None
        if inner.verdict == outer.verdict == "holds":
            zone = "theory"
        yield_stress = self.job.material.yield_stress
        return StationResult(
            name=station.name,
            piece=piece + 1,
            angle=position if is_arc else None,
            distance=None if is_arc else position,
            s=member.s(piece, share),
            x=x,
            y=y,
            R=R,
            depth=section.depth,
            curvature_ratio=None if R is None else R / section.depth,
            N=N,
            V=V,
            M=M,
            fe=Resultants(*self.loading.on_cut(piece, share, beyond)),
            rn=ring.rn if ring else None,
            e=ring.e if ring else None,
            area=section.area,
            inner=inner,
            outer=outer,
            zone=zone,
            distance_to_load=where.distance_to_load,
            utilisation=max(inner.von_mises, outer.von_mises) / yield_stress if yield_stress else None,
            profile=self._profile(number, N, M),
        )

    def _fibre(self, number: int, face: Face, hand: float, straight: float) -> Fibre:
        station = self.job.stations[number]
        section = self.loading.member.section(station.piece, station.share)
        fe = float(self.fe[number, FACES.index(face)])
        uncertainty = self.pair.at(self.index, face, station)
        scale = verdict.Scale(float(self.scales[number]), float(self.scales.max()), self.job.agreement.band)
        compared = verdict.compare(
            hand, fe, uncertainty, scale, self.places[number].comparable, verdict.is_settled(section)
        )
        normal, shear = (
            float(stress[0]) for stress in pressed(self.loading, station.piece, face, np.array([station.share]))
        )
        return Fibre(
            hand=hand,
            straight=straight,
            fe=fe,
            uncertainty=uncertainty,
            best=fe,
            difference=compared.difference,
            verdict=compared.verdict,
            von_mises=math.sqrt(fe * fe - fe * normal + normal * normal + 3.0 * shear * shear),
        )

    def _profile(self, number: int, N: float, M: float) -> Profile:
        station = self.job.stations[number]
        strip, member = self.membrane.strip, self.loading.member
        section = member.section(station.piece, station.share)
        shares = np.linspace(0.0, 1.0, _PROFILE_POINTS)
        x = shares * section.depth
        line = strip.line_at(station.piece, station.share)
        columns = strip.columns_beside(line, station.piece)
        eta = strip.inner_share(station.piece, shares)
        fe = hoop_profile(self.membrane, self.solution.displacement, columns, line, eta)
        # The faces have a better value than the stress tensor there.
        fe[0], fe[-1] = self.fe[number]
        hand = winkler.hoop(section, member.radius(station.piece, station.share), N, M, x)
        return Profile(_numbers(section.centroid - x), _numbers(hand), _numbers(fe))

    def _along(self) -> Along:
        member, strip = self.loading.member, self.membrane.strip
        rows: list[tuple[float, int, float, bool, Array, Array, Array]] = []
        sampled = np.array([self.solution.face(face).sampled(_SAMPLES) for face in FACES])
        unsure = np.array([self.pair.in_columns(self.index, face) for face in FACES])
        for number, column in enumerate(strip.columns):
            first_of_piece = number == 0 or strip.columns[number - 1].piece != column.piece
            for k, q in enumerate(_SAMPLES):
                if k == 0 and not first_of_piece:
                    continue
                share = float(column.share(q))
                N, _, M = self.loading.resultants(column.piece, share)
                section, R = member.section(column.piece, share), member.radius(column.piece, share)
                hand = np.array(winkler.fibres(section, R, N, M))
                comparable = place(self.loading, column.piece, share).comparable
                at = (member.s(column.piece, share), column.piece + 1, share, comparable)
                rows.append((*at, hand, sampled[:, number, k], unsure[:, number]))
        s, piece, shares, comparable_at, hand_at, fe_at, unsure_at = zip(*rows, strict=True)
        inner, outer = (
            FibreCurve(
                _numbers(np.array(hand_at)[:, i]), _numbers(np.array(fe_at)[:, i]), _numbers(np.array(unsure_at)[:, i])
            )
            for i in range(2)
        )
        return Along(tuple(s), tuple(piece), tuple(shares), tuple(comparable_at), inner, outer)

    def _field(self) -> Field:
        """Hoop stress on a grid of _PER_ELEMENT steps a column and a row."""
        strip, member = self.membrane.strip, self.loading.member
        q = np.linspace(0.0, 1.0, _PER_ELEMENT + 1)
        points = np.array([np.repeat(q, len(q)), np.tile(q, len(q))])
        tensor = stresses(
            self.membrane, self.solution.displacement, np.arange(len(self.membrane.scalars)), points
        ).reshape(3, len(strip.columns), len(strip.rows), len(q), len(q))
        eta = np.concatenate([[0.0], *(row.eta(q[1:]) for row in strip.rows)])
        pieces: list[int] = []
        lines: list[tuple[Array, Array, Array]] = []
        for number, column in enumerate(strip.columns):
            new_piece = number == 0 or strip.columns[number - 1].piece != column.piece
            for k in range(0 if new_piece else 1, len(q)):
                share = np.full_like(eta, column.share(q[k]))
                x = strip.inner_share(column.piece, eta) * member.depth(column.piece, share)
                across = np.concatenate(
                    [tensor[:, number, 0, k, :1], *np.moveaxis(tensor[:, number, :, k, 1:], 1, 0)], 1
                )
                hoop = along(member.tangent(column.piece, share), across)
                outward = -1 if strip.is_turned(column.piece) else 1
                lines.append((*member.points(column.piece, share, x)[:, ::outward], hoop[::outward]))
                pieces.append(column.piece + 1)
        grids = [tuple(_numbers(line[i]) for line in lines) for i in range(3)]
        return Field(_PER_ELEMENT, tuple(pieces), *grids)

    def _displacements(self) -> tuple[Displacement, ...]:
        member = self.loading.member
        wanted = [(spread.name, spread.piece, spread.centre, spread.point) for spread in self.loading.spreads]
        ends: tuple[str, ...] = tuple(end for end in ("start", "end") if getattr(self.loading, end) == "free")
        named = {load.end: load.name for load in self.loading.end_loads}
        for end in ends:
            piece, share = end_place(member, "start" if end == "start" else "end")
            wanted.append(
                (
                    named.get("start" if end == "start" else "end", end),
                    piece,
                    share,
                    member.centroid_point(piece, share),
                )
            )
        base = np.zeros(3)
        origin = np.zeros(2)
        if self.loading.start == self.loading.end == "free":
            base = self._motion(0, 0.0)
            origin = np.array(member.centroid_point(0, 0.0))
        found = []
        for name, piece, share, point in wanted:
            motion, centroid = self._motion(piece, share), np.array(member.centroid_point(piece, share))
            fe = _carried(motion, centroid, point) - _carried(base, origin, point)
            energy = strain_energy.displacement(
                self.loading, self.job.material.E, self.job.material.nu, piece, share, point
            )
            found.append(Displacement(name, point[0], point[1], (float(fe[0]), float(fe[1])), energy))
        return tuple(found)

    def _motion(self, piece: int, share: float) -> Array:
        line = self.membrane.strip.line_at(piece, share)
        return mean_motion(self.membrane, self.solution.displacement, line, piece)

    def _residuals(self, stations: tuple[StationResult, ...]) -> tuple[float, float]:
        """Largest |FE - statics| of N and V, and of M, as shares of the largest force and moment on any cut."""
        theory = np.array([[station.N, station.V, station.M] for station in stations])
        fe = np.array([[station.fe.N, station.fe.V, station.fe.M] for station in stations])
        off = np.abs(fe - theory)
        forces, moments = np.abs(theory[:, :2]).max(), np.abs(theory[:, 2]).max()
        return float(off[:, :2].max() / (forces or 1.0)), float(off[:, 2].max() / (moments or 1.0))

    def _marks(self) -> tuple[LoadMark, ...]:
        member = self.loading.member
        marks = []
        for spread in self.loading.spreads:
            shares = np.linspace(spread.first, spread.last, 25)
            if isinstance(spread, FaceSpread):
                kind = "bearing" if spread.normal else "patch"
                line = face_points(member, spread.piece, spread.face, shares)
            else:
                assert isinstance(spread, BodySpread)
                kind = "body"
                line = member.points(spread.piece, shares, member.centroid(spread.piece, shares))
            ends = (member.s(spread.piece, spread.first), member.s(spread.piece, spread.last))
            points = tuple((float(x), float(y)) for x, y in line.T)
            marks.append(LoadMark(spread.name, kind, *spread.point, spread.force, spread.moment, *ends, points))
        marks += [self._end_mark(load) for load in self.loading.end_loads]
        return tuple(marks)

    def _end_mark(self, load: EndLoad) -> LoadMark:
        member = self.loading.member
        piece, share = end_place(member, load.end)
        s = member.s(piece, share)
        depth = float(member.depth(piece, np.array(share)))
        face = member.points(piece, np.array([share, share]), np.array([0.0, depth]))
        points = tuple((float(x), float(y)) for x, y in face.T)
        return LoadMark(load.name, "end", *member.centroid_point(piece, share), load.force, load.moment, s, s, points)


def _carried(motion: Array, about: Array, point: tuple[float, float]) -> Array:
    """Displacement of a point that moves with a section: translation and rotation (small, counter-clockwise)."""
    arm = np.array(point) - about
    return motion[:2] + motion[2] * np.array([-arm[1], arm[0]])


def _numbers(values: Array) -> tuple[float, ...]:
    return tuple(float(value) for value in values)
