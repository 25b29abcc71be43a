"""Hand theory alone, station by station: no mesh."""

from __future__ import annotations

import numpy as np

from intrados.compare.job import Job
from intrados.compare.table import HandRow
from intrados.theory import winkler

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
        inner, outer = winkler.fibres(section, R, N, M)
        inner_straight, outer_straight = winkler.fibres(section, None, N, M)
        radial = winkler.radial(section, R, N, M, np.linspace(0.0, section.depth, _DEPTHS))
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
                radial_max=None if R is None else float(radial[np.argmax(np.abs(radial))]),
            )
        )
    return tuple(rows)
