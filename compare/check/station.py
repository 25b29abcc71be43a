"""One station: statics, hand theory and FE side by side, the budget between them, and the comparison of both fibres."""

from __future__ import annotations

import math

import numpy as np

from intrados.compare import verdict
from intrados.compare.check.case import SolvedCase
from intrados.compare.hand import largest_radial
from intrados.compare.ladder import Rungs, budget, largest_term
from intrados.compare.results import Fibre, Profile, Radial, Resultants, StationResult, Transverse, Zone
from intrados.compare.zone import Place
from intrados.fem.accuracy import FACES
from intrados.fem.cut import forces_beyond, stress_profile
from intrados.fem.fibre import pressed
from intrados.theory import winkler
from intrados.theory.ideal import bar
from intrados.theory.load import Face
from intrados.theory.member import Arc
from intrados.theory.quadrature import Array

_PROFILE_POINTS = 41


def station_result(case: SolvedCase, number: int) -> StationResult:
    """The results of the station ``number`` (from 0) of a job."""
    station, where = case.job.stations[number], case.places[number]
    member, piece, share = case.loading.member, station.piece, station.share
    section, R = member.section(piece, share), member.radius(piece, share)
    ring = None if R is None else section.ring(R)
    N, V, M = case.loading.resultants(piece, share)
    hand, straight = case.job.hand.fibres(section, R, N, M), winkler.fibres(section, None, N, M)
    steps = case.rungs[number]
    inner, outer = (_fibre(case, number, i, hand[i], straight[i], steps[i]) for i in range(len(FACES)))
    line = case.membrane.strip.line_at(piece, share)
    beyond = forces_beyond(case.membrane, case.solution.displacement, case.solution.forces, line)
    x, y = member.centroid_point(piece, share)
    is_arc = isinstance(member.pieces[piece], Arc)
    position = share * member.extent(piece)
    yield_stress = case.job.material.yield_stress
    profile, radial = _profiles(case, number, N, M)
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
        fe=Resultants(*case.loading.on_cut(piece, share, beyond)),
        rn=ring.rn if ring else None,
        e=ring.e if ring else None,
        area=section.area,
        inner=inner,
        outer=outer,
        zone=_zone(where, inner, outer) if all(of.is_known for of in steps) else None,
        distance_to_load=where.distance_to_load,
        radial=radial,
        transverse=_transverse(steps),
        utilisation=max(inner.von_mises, outer.von_mises) / yield_stress if yield_stress else None,
        profile=profile,
    )


def _zone(where: Place, inner: Fibre, outer: Fibre) -> Zone | None:
    """Why a station is not compared, that the theory holds, or what the difference is mostly made of."""
    if where.in_load:
        return "introduction"
    if where.near_clamp:
        return "support"
    if {inner.verdict, outer.verdict} <= {"holds", "unloaded"}:
        return "theory"
    worse = max(inner, outer, key=lambda fibre: abs(fibre.difference or 0.0))
    cause: Zone = largest_term(worse.budget)
    return "joint" if cause == "introduction" and where.at_joint else cause


def _fibre(case: SolvedCase, number: int, side: int, hand: float, straight: float, steps: Rungs) -> Fibre:
    station, face = case.job.stations[number], FACES[side]
    fe, best = float(case.fibres[number, side]), float(case.best[number, side])
    uncertainty = case.pair.at(case.index, face, station) + steps.uncertainty
    scale = verdict.Scale(float(case.scales[number]), float(case.scales.max()), case.job.agreement.band)
    compared = verdict.compare(hand, best, uncertainty, scale, case.places[number].comparable and steps.is_known)
    return Fibre(
        hand=hand,
        straight=straight,
        ideal=steps.ideal,
        fe=fe,
        uncertainty=uncertainty,
        best=best,
        difference=compared.difference,
        verdict=compared.verdict,
        von_mises=_von_mises(case, number, face, best, steps),
        place=None if steps.three_d is None else steps.three_d.place,
        budget=budget(hand, fe, steps),
    )


def _von_mises(case: SolvedCase, number: int, face: Face, hoop: float, steps: Rungs) -> float:
    """Of the hoop stress, what loads put on the face, and the stress across it that the section's shape brings."""
    station = case.job.stations[number]
    pressure, shear = pressed(case.loading, station.piece, face, np.array([station.share]))
    normal, tau = float(pressure[0]), float(shear[0])
    across = 0.0 if steps.three_d is None else steps.three_d.transverse
    square = (hoop - normal) ** 2 + (normal - across) ** 2 + (across - hoop) ** 2
    return math.sqrt(0.5 * square + 3.0 * tau * tau)


def _transverse(steps: tuple[Rungs, Rungs]) -> Transverse | None:
    inner, outer = (of.three_d for of in steps)
    return None if inner is None or outer is None else Transverse(inner.transverse, outer.transverse)


def _profiles(case: SolvedCase, number: int, N: float, M: float) -> tuple[Profile, Radial | None]:
    """Hoop stress over the depth, and the largest radial stress, which a straight has none of by theory."""
    station = case.job.stations[number]
    strip, member = case.membrane.strip, case.loading.member
    section, R = member.section(station.piece, station.share), member.radius(station.piece, station.share)
    shares = np.linspace(0.0, 1.0, _PROFILE_POINTS)
    x = shares * section.depth
    line = strip.line_at(station.piece, station.share)
    fe, across = stress_profile(
        case.membrane,
        case.solution.displacement,
        strip.columns_beside(line, station.piece),
        line,
        strip.inner_share(station.piece, shares),
    )
    # The stretch of a face gives a better value there than the stress tensor.
    fe[0], fe[-1] = case.fibres[number]
    exact = bar(section, R, case.job.material.nu)
    hand = case.job.hand.hoop(section, R, N, M, x)
    profile = Profile(
        y=tuple((section.centroid - x).tolist()),
        hand=tuple(hand.tolist()),
        ideal=tuple(exact.hoop(N, M, x).tolist()),
        fe=tuple(fe.tolist()),
    )
    if R is None:
        return profile, None
    radial = Radial(
        hand=largest_radial(section, R, N, M),
        ideal=_largest(exact.radial(N, M, x)),
        fe=_largest(across),
        depth=float(x[np.abs(across).argmax()]),
    )
    return profile, radial


def _largest(values: Array) -> float:
    """The value of largest magnitude."""
    return float(values[np.abs(values).argmax()])
