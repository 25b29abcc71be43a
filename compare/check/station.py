"""One station: statics, hand theory and FE side by side, with the comparison of both fibres."""

from __future__ import annotations

import math

import numpy as np

from intrados.compare import verdict
from intrados.compare.check.case import SolvedCase
from intrados.compare.results import Fibre, Profile, Resultants, StationResult, Zone
from intrados.compare.zone import Place
from intrados.fem.accuracy import FACES
from intrados.fem.cut import forces_beyond, hoop_profile
from intrados.fem.fibre import pressed
from intrados.theory import winkler
from intrados.theory.load import Face
from intrados.theory.member import Arc

_PROFILE_POINTS = 41


def station_result(case: SolvedCase, number: int) -> StationResult:
    """The results of the station ``number`` (from 0) of a job."""
    station, where = case.job.stations[number], case.places[number]
    member, piece, share = case.loading.member, station.piece, station.share
    section, R = member.section(piece, share), member.radius(piece, share)
    ring = None if R is None else section.ring(R)
    N, V, M = case.loading.resultants(piece, share)
    hand, straight = winkler.fibres(section, R, N, M), winkler.fibres(section, None, N, M)
    inner, outer = (_fibre(case, number, face, hand[i], straight[i]) for i, face in enumerate(FACES))
    line = case.membrane.strip.line_at(piece, share)
    beyond = forces_beyond(case.membrane, case.solution.displacement, case.solution.forces, line)
    x, y = member.centroid_point(piece, share)
    is_arc = isinstance(member.pieces[piece], Arc)
    position = share * member.extent(piece)
    yield_stress = case.job.material.yield_stress
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
        zone=_zone(where, inner, outer),
        distance_to_load=where.distance_to_load,
        utilisation=max(inner.von_mises, outer.von_mises) / yield_stress if yield_stress else None,
        profile=_profile(case, number, N, M),
    )


def _zone(where: Place, inner: Fibre, outer: Fibre) -> Zone | None:
    """Why a station is not compared, or that the theory holds; None where it is left and the cause is not known."""
    if where.in_load:
        return "introduction"
    if where.near_clamp:
        return "support"
    return "theory" if inner.verdict == outer.verdict == "holds" else None


def _fibre(case: SolvedCase, number: int, face: Face, hand: float, straight: float) -> Fibre:
    station = case.job.stations[number]
    section = case.loading.member.section(station.piece, station.share)
    fe = float(case.fibres[number, FACES.index(face)])
    uncertainty = case.pair.at(case.index, face, station)
    scale = verdict.Scale(float(case.scales[number]), float(case.scales.max()), case.job.agreement.band)
    compared = verdict.compare(
        hand, fe, uncertainty, scale, case.places[number].comparable, verdict.is_settled(section)
    )
    pressure, shear = pressed(case.loading, station.piece, face, np.array([station.share]))
    normal, tau = float(pressure[0]), float(shear[0])
    return Fibre(
        hand=hand,
        straight=straight,
        fe=fe,
        uncertainty=uncertainty,
        best=fe,
        difference=compared.difference,
        verdict=compared.verdict,
        von_mises=math.sqrt(fe * fe - fe * normal + normal * normal + 3.0 * tau * tau),
    )


def _profile(case: SolvedCase, number: int, N: float, M: float) -> Profile:
    station = case.job.stations[number]
    strip, member = case.membrane.strip, case.loading.member
    section, R = member.section(station.piece, station.share), member.radius(station.piece, station.share)
    shares = np.linspace(0.0, 1.0, _PROFILE_POINTS)
    x = shares * section.depth
    line = strip.line_at(station.piece, station.share)
    fe = hoop_profile(
        case.membrane,
        case.solution.displacement,
        strip.columns_beside(line, station.piece),
        line,
        strip.inner_share(station.piece, shares),
    )
    # The stretch of a face gives a better value there than the stress tensor.
    fe[0], fe[-1] = case.fibres[number]
    hand = winkler.hoop(section, R, N, M, x)
    return Profile(tuple((section.centroid - x).tolist()), tuple(hand.tolist()), tuple(fe.tolist()))
