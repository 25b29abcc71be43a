"""Displacements at loads and free ends: FE beside strain energy."""

from __future__ import annotations

import numpy as np

from intrados.compare.check.case import SolvedCase
from intrados.compare.results import Displacement
from intrados.fem.cut import mean_motion
from intrados.theory import strain_energy
from intrados.theory.load import End, Vector
from intrados.theory.quadrature import Array
from intrados.theory.statics import Loading, Support, end_place

_ENDS: tuple[End, End] = ("start", "end")


def displacements(case: SolvedCase) -> tuple[Displacement, ...]:
    """Displacement of the section at each load and free end, at the load's point or the end's centroid.

    FE gives the section's mean translation and rotation, which is what beam theory speaks of: a face dents under a load
    by an amount that depends on how the load is spread. On a free member all is relative to the section at its start.
    """
    member, material = case.loading.member, case.job.material
    is_free = case.loading.start == case.loading.end == "free"
    base = _moved(case, 0, 0.0) if is_free else np.zeros(3)
    found = []
    for name, piece, share, point in _places(case.loading):
        fe = _carried(_moved(case, piece, share), member.centroid_point(piece, share), point)
        fe = fe - _carried(base, member.centroid_point(0, 0.0), point)
        energy = strain_energy.displacement(case.loading, material.E, material.nu, piece, share, point)
        found.append(Displacement(name, point[0], point[1], (float(fe[0]), float(fe[1])), energy))
    return tuple(found)


def _places(loading: Loading) -> list[tuple[str, int, float, Vector]]:
    """Name, place and point of every load and free end; an end that carries loads bears their names."""
    places = [(spread.name, spread.piece, spread.centre, spread.point) for spread in loading.spreads]
    supports: tuple[Support, Support] = (loading.start, loading.end)
    for end, support in zip(_ENDS, supports, strict=True):
        is_reference = end == "start" and supports == ("free", "free")
        if support == "free" and not is_reference:
            loads = [load.name for load in loading.end_loads if load.end == end]
            piece, share = end_place(loading.member, end)
            point = loading.member.centroid_point(piece, share)
            places.append((", ".join([end, *loads]), piece, share, point))
    return places


def _moved(case: SolvedCase, piece: int, share: float) -> Array:
    line = case.membrane.strip.line_at(piece, share)
    return mean_motion(case.membrane, case.solution.displacement, line, piece)


def _carried(motion: Array, about: Vector, point: Vector) -> Array:
    """Displacement (2) of a point that moves with a section's motion (ux, uy, rotation) about its centroid."""
    across = np.array([about[1] - point[1], point[0] - about[0]])
    carried: Array = motion[:2] + motion[2] * across
    return carried
