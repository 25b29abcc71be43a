"""The bar over its section against the same bar as a solid, solved by a general-purpose library (NGSolve).

A quarter of a ring is cut where symmetry or the state itself says how its end moves, so that the solid is the exact
bar without any end effect: in bending the end turns as a plane, u_x = r there; pulled through the centre, it moves
along y alone and is free of hoop stress. Twice the energy is the moment, or the force, times that movement.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from intrados.fem.toroid import toroid
from intrados.theory import shapes
from intrados.theory.quadrature import Array
from intrados.theory.section import Section

NU = 0.3

# Half outlines (r, z), the mesh size and the degree that settle the stress at the faces to some 0.1 %.
TRAPEZOID = (shapes.trapezoid(60.0, 40.0, 16.0), [(30.0, 0.0), (90.0, 0.0), (90.0, 8.0), (30.0, 20.0)], 15.0, 5)
TEE = (
    shapes.tee(60.0, 60.0, 10.0, 10.0, "inner"),
    [(60.0, 0.0), (120.0, 0.0), (120.0, 5.0), (70.0, 5.0), (70.0, 30.0), (60.0, 30.0)],
    8.0,
    4,
)


def quarter_ring(outline: list[tuple[float, float]], size: float, degree: int) -> Any:
    from netgen.occ import Axes, Axis, OCCGeometry, WorkPlane, X, Y, Z
    from ngsolve import Mesh

    plane = WorkPlane(Axes((0, 0, 0), n=-Y, h=X)).MoveTo(*outline[0])
    for point in outline[1:]:
        plane.LineTo(*point)
    solid = plane.Close().Face().Revolve(Axis((0, 0, 0), Z), 90)
    solid.faces.Min(Y).name, solid.faces.Min(X).name, solid.faces.Min(Z).name = "start", "end", "plane"
    return Mesh(OCCGeometry(solid).GenerateMesh(maxh=size)).Curve(degree)


def hoop_at_start(mesh: Any, degree: int, bending: bool, points: list[tuple[float, float]]) -> Array:
    """Hoop stress at points (r, z) of the start, per unit M in bending, else per unit force through the centre."""
    import ngsolve as ng

    held = ("end", "start", "plane") if bending else ("", "start|end", "plane|end")
    space = ng.FESpace([ng.H1(mesh, order=degree, dirichlet=names) for names in held])
    trial, test = space.TnT()
    lam, mu = NU / ((1.0 + NU) * (1.0 - 2.0 * NU)), 0.5 / (1.0 + NU)

    def strain(parts: Any) -> Any:
        slopes = [ng.grad(part) for part in parts]
        return ng.CF(tuple(0.5 * (slopes[i][j] + slopes[j][i]) for i in range(3) for j in range(3)), dims=(3, 3))

    def stress(parts: Any) -> Any:
        return lam * ng.Trace(strain(parts)) * ng.Id(3) + 2.0 * mu * strain(parts)

    form = ng.BilinearForm(space, symmetric=True)
    form += ng.InnerProduct(stress(trial), strain(test)) * ng.dx
    moved = ng.GridFunction(space)
    end = mesh.Boundaries("end")
    if bending:
        moved.components[0].Set(ng.y, definedon=end)
    else:
        moved.components[1].Set(1.0, definedon=end)
    form.Assemble()
    rest = moved.vec.CreateVector()
    rest.data = -form.mat * moved.vec
    moved.vec.data += form.mat.Inverse(space.FreeDofs(), "sparsecholesky") * rest
    rest.data = form.mat * moved.vec
    hoop = stress(moved.components)[1, 1]
    return np.array([hoop(mesh(r, 1e-6, z)) for r, z in points]) / (2.0 * ng.InnerProduct(rest, moved.vec))


@pytest.mark.parametrize(("section", "outline", "size", "degree"), [TRAPEZOID, TEE], ids=["trapezoid", "T"])
def test_faces_of_a_solid_quarter_ring(
    section: Section, outline: list[tuple[float, float]], size: float, degree: int
) -> None:
    a = outline[0][0]
    R = a + section.centroid
    bar = toroid(section, R, NU)
    mesh = quarter_ring(outline, size, degree)
    places = [(side, share) for side in ("inner", "outer") for share in (0.0, 0.4, 0.8)]
    points, expected = [], []
    for side, share in places:
        trace = bar.trace(side)
        z = share * trace.z[-1]
        points.append((a + 1e-6 if side == "inner" else a + section.depth - 1e-6, float(np.clip(z, 1e-6, z - 1e-6))))
        expected.append([np.interp(z, trace.z, row) for row in trace.hoop])
    per_N, per_M = np.array(expected).T
    bent = hoop_at_start(mesh, degree, True, points)
    pulled = hoop_at_start(mesh, degree, False, points)
    # Half a percent of the largest: read straight from the stress in a cell of the solid, next to its surface.
    assert bent == pytest.approx(per_M, abs=5e-3 * np.abs(per_M).max())
    assert pulled == pytest.approx(per_N + R * per_M, abs=5e-3 * np.abs(per_N + R * per_M).max())
    # Away from corners it is better.
    assert bent[3:] == pytest.approx(per_M[3:], rel=1e-3)
