"""The hoop stress over the section of the governing station, as the drawing shows it."""

from __future__ import annotations

import numpy as np

from intrados.compare.check.case import SolvedCase
from intrados.compare.ladder import SECTION_SHARE, solved_section
from intrados.compare.results import Governing, SectionField
from intrados.theory.ideal import bar

_DEPTHS = 81


def section_field(case: SolvedCase, governing: Governing | None) -> SectionField | None:
    """The three-dimensional hoop stress at the governing station beside the ideal bar's; None on a straight."""
    if governing is None:
        return None
    station = next(station for station in case.job.stations if station.name == governing.station)
    member, nu = case.loading.member, case.job.material.nu
    section, R = member.section(station.piece, station.share), member.radius(station.piece, station.share)
    if R is None:
        return None
    N, _, M = case.loading.resultants(station.piece, station.share)
    over = solved_section(section, R, nu, SECTION_SHARE * case.job.agreement.numerical).map
    hoop = N * over.stress[0, 0] + M * over.stress[0, 1]
    x = np.linspace(0.0, section.depth, _DEPTHS)
    return SectionField(
        station=station.name,
        x=tuple(over.x.tolist()),
        z=tuple(over.z.tolist()),
        triangles=tuple((a, b, c) for a, b, c in over.triangles.tolist()),
        hoop=tuple(hoop.tolist()),
        plane_x=tuple(x.tolist()),
        plane_hoop=tuple(bar(section, R, nu).hoop(N, M, x).tolist()),
    )
