"""Members and load cases that several tests of the finite elements share; those with an exact solution among them."""

from __future__ import annotations

from functools import lru_cache
from typing import Any

import numpy as np

from intrados.fem.accuracy import FACES, Solution, solve
from intrados.fem.membrane import Elastic, discretise
from intrados.fem.mesher import mesh
from intrados.fem.strip import Strip, plan
from intrados.theory.load import EndLoad
from intrados.theory.member import Arc, Member
from intrados.theory.quadrature import Array
from intrados.theory.rectangle_bar import RectangleBar
from intrados.theory.section import Section
from intrados.theory.shapes import rectangle
from intrados.theory.statics import Loading, Support, loading
from intrados.theory.station import Station

STEEL = Elastic(206000.0, 0.3)


def bar(section: Section, inner_radius: float, sweep: float) -> Member:
    """One arc about the origin, from the x axis, turning left."""
    return Member("inner", (inner_radius, 0.0), 90.0, (Arc(inner_radius, sweep, (section, section)),))


def rectangular_bar(a: float, b: float, t: float, sweep: float = 90.0) -> Member:
    """A rectangular bar between the radii a and b."""
    return bar(rectangle(b - a, t), a, sweep)


def pulled(member: Member, force: tuple[float, float], moment: float) -> tuple[EndLoad, EndLoad]:
    """A force and a moment on the far end, and what balances them on the start."""
    (x0, y0), (x1, y1) = member.centroid_point(0, 0.0), member.centroid_point(len(member.pieces) - 1, 1.0)
    turning = (x1 - x0) * force[1] - (y1 - y0) * force[0] + moment
    return (
        EndLoad("near", "start", (-force[0], -force[1]), -turning),
        EndLoad("far", "end", force, moment),
    )


def straightened(member: Member, moment: float) -> Loading:
    """A free member under two end moments that straighten it."""
    return loading(member, "free", "free", pulled(member, (0.0, 0.0), -member.sides[0] * moment))


def pulled_through_centre(member: Member, force: float) -> Loading:
    """A free bar about the origin, pulled by a force along y through it: N = force cos(angle)."""
    x, _ = member.centroid_point(0, 1.0)
    return loading(member, "free", "free", pulled(member, (0.0, force), -x * force))


def stations(*places: tuple[int, float]) -> tuple[Station, ...]:
    """Stations at (piece, share)."""
    return tuple(Station(f"{piece}:{share:g}", piece, share) for piece, share in places)


@lru_cache(maxsize=64)
def strip_and_mesh(case: Loading, at: tuple[Station, ...], fineness: int = 0) -> tuple[Strip, Any]:
    """Strip and mesh of one load case."""
    strip = plan((case,), at, fineness)
    return strip, mesh(strip)


def solved(
    case: Loading, at: tuple[Station, ...], degree: int, fineness: int = 0, elastic: Elastic = STEEL
) -> Solution:
    """One load case on one mesh at one degree."""
    strip, strip_mesh = strip_and_mesh(case, at, fineness)
    return solve(discretise(strip, strip_mesh, elastic, degree, case.start, case.end), (case,))


def fibres(solution: Solution, at: tuple[Station, ...]) -> Array:
    """Fibre stresses (stations, 2) of a solution's only case, inner and outer."""
    return np.array([[solution.fibre(0, face, station) for face in FACES] for station in at])


def exact_fibres(case: Loading, at: tuple[Station, ...]) -> Array:
    """Exact fibre stresses (stations, 2) of a rectangular bar under loads on its ends."""
    piece = case.member.pieces[0]
    assert isinstance(piece, Arc)
    section = piece.sections[0]
    exact = RectangleBar(piece.radius, piece.radius + section.depth, section.widest)
    faces = np.array([exact.a, exact.b])
    values = []
    for station in at:
        N, _, M = case.resultants(station.piece, station.share)
        values.append(exact.hoop(N, M, faces))
    return np.array(values)


def with_ends(case: Loading, start: Support, end: Support) -> Loading:
    """The same loads with the ends held otherwise; loads on a clamped end are its reactions and fall away."""
    kept = tuple(load for load in case.end_loads if (start if load.end == "start" else end) == "free")
    return Loading(case.member, start, end, case.spreads, kept)
