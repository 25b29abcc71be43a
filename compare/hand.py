"""Hand theory alone, station by station: no mesh."""

from __future__ import annotations

from functools import lru_cache

import numpy as np

from intrados.compare.job import Job
from intrados.compare.table import HandRow, LadderRow
from intrados.theory import winkler
from intrados.theory.quadrature import Array
from intrados.theory.section import Section

_DEPTHS = 41


def hand_rows(job: Job, case: int) -> tuple[HandRow, ...]:
    """What hand theory says at every station of a job, for one of its load cases (counted from 0)."""
    loading = job.loadings[case]
    member = loading.member
    rows = []
    for station in job.stations:
        section = member.section(station.piece, station.share)
        R = member.radius(station.piece, station.share)
        N, V, M = loading.resultants(station.piece, station.share)
        ring = None if R is None else section.ring(R)
        inner, outer = job.hand.fibres(section, R, N, M)
        inner_straight, outer_straight = winkler.fibres(section, None, N, M)
        rows.append(
            HandRow(
                station=station.name,
                R=R,
                depth=section.depth,
                curvature_ratio=None if R is None else R / section.depth,
                N=N,
                V=V,
                M=M,
                area=section.area,
                rn=ring.rn if ring else None,
                e=ring.e if ring else None,
                inner_hand=inner,
                outer_hand=outer,
                inner_straight=inner_straight,
                outer_straight=outer_straight,
                radial_max=None if R is None else largest_radial(section, R, N, M),
            )
        )
    return tuple(rows)


def ladder_rows(job: Job, case: int) -> tuple[LadderRow, ...]:
    """What hand theory says at every station and what the section alone adds to it, without a mesh of the member."""
    from intrados.compare.ladder import FACES, rungs
    from intrados.compare.verdict import Scale, compare

    loading = job.loadings[case]
    member = loading.member
    found: list[LadderRow] = []
    places = []
    for station in job.stations:
        section, R = member.section(station.piece, station.share), member.radius(station.piece, station.share)
        N, _, M = loading.resultants(station.piece, station.share)
        places.append(
            (
                station,
                section,
                R,
                job.hand.fibres(section, R, N, M),
                rungs(section, R, job.material.nu, N, M, job.agreement.numerical),
            )
        )
    scales = [max(abs(of.ideal + of.width) for of in steps) for *_, steps in places]
    for (station, section, R, hand, steps), scale in zip(places, scales, strict=True):
        for face, value, of in zip(FACES, hand, steps, strict=True):
            measure = Scale(scale, max(scales), job.agreement.band)
            compared = compare(value, of.ideal + of.width, of.uncertainty, measure, comparable=True)
            ratio = None if R is None else R / section.depth
            thick = of.ideal - value
            row = (station.name, ratio, face, value, thick, of.width, of.uncertainty, compared.difference)
            found.append(LadderRow(*row, None if of.three_d is None else of.three_d.place))
    return tuple(found)


def largest_radial(section: Section, R: float, N: float, M: float) -> float:
    """The radial stress of largest magnitude over the depth that hand theory gives N and M; > 0 tension."""
    of_n, of_m = _unit_radials(section, R)
    radial = N * of_n + M * of_m
    return float(radial[np.argmax(np.abs(radial))])


@lru_cache(maxsize=64)
def _unit_radials(section: Section, R: float) -> tuple[Array, Array]:
    """Radial stress over the depth of N = 1 and of M = 1: the stations of an arc share it."""
    x = np.linspace(0.0, section.depth, _DEPTHS)
    return winkler.radial(section, R, 1.0, 0.0, x), winkler.radial(section, R, 0.0, 1.0, x)
