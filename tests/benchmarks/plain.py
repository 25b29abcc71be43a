"""The quarter bar solved plainly, as a user of scikit-fem would: gmsh, second-order triangles, the library's parts.

Triangles with their midsides moved onto the arcs, `linear_elasticity` with the library's plane-stress constants,
`condense` and `solve` as they come, stress projected onto continuous nodal values. Exact tractions on both ends.
"""

from __future__ import annotations

from typing import Any

import gmsh
import numpy as np
from skfem import (
    Basis,
    ElementTriP1,
    ElementTriP2,
    ElementVector,
    FacetBasis,
    LinearForm,
    MeshTri,
    MeshTri2,
    condense,
    solve,
)
from skfem.helpers import dot, sym_grad
from skfem.models.elasticity import linear_elasticity, linear_stress, plane_stress

from intrados.theory.quadrature import Array
from intrados.theory.rectangle_bar import RectangleBar


def triangles(a: float, b: float, size: float) -> Any:
    """Second-order triangles of about ``size`` on the quarter bar, with a node on each face at 45 degrees."""
    gmsh.initialize(readConfigFiles=False, interruptible=False)
    try:
        gmsh.option.setNumber("General.Terminal", 0)
        gmsh.option.setNumber("Mesh.MeshSizeMax", size)
        geo = gmsh.model.geo
        centre = geo.addPoint(0.0, 0.0, 0.0)
        middle = 0.5**0.5
        around = [(1.0, 0.0), (middle, middle), (0.0, 1.0)]
        inner, outer = ([geo.addPoint(r * x, r * y, 0.0, size) for x, y in around] for r in (a, b))
        arcs = [[geo.addCircleArc(p, centre, q) for p, q in ((i, j), (j, k))] for i, j, k in (inner, outer)]
        start, end = geo.addLine(inner[0], outer[0]), geo.addLine(outer[2], inner[2])
        geo.addPlaneSurface([geo.addCurveLoop([start, *arcs[1], end, -arcs[0][1], -arcs[0][0]])])
        geo.synchronize()
        gmsh.model.mesh.generate(2)
        tags, places, _ = gmsh.model.mesh.getNodes()
        _, corners = gmsh.model.mesh.getElementsByType(2)
    finally:
        gmsh.finalize()
    used = np.unique(corners)
    where = {int(tag): index for index, tag in enumerate(tags)}
    points = places.reshape(-1, 3)[[where[int(tag)] for tag in used], :2].T.copy()
    mesh = MeshTri(points, np.searchsorted(used, corners.reshape(-1, 3)).T.copy())
    curved = MeshTri2.from_mesh(mesh)
    nodes = curved.doflocs.copy()
    for r in (a, b):
        on_arc = curved.facets_satisfying(lambda x, r=r: np.hypot(*x) > r - 0.2 * size, boundaries_only=True)
        on_arc = [f for f in on_arc if np.allclose(np.hypot(*nodes[:, curved.facets[:, f]]), r, rtol=1e-9)]
        midside = curved.dofs.facet_dofs[0, on_arc]
        nodes[:, midside] *= r / np.hypot(*nodes[:, midside])
    return MeshTri2(nodes, curved.t).with_boundaries(
        {"start": lambda x: np.abs(x[1]) < 1e-9 * b, "end": lambda x: np.abs(x[0]) < 1e-9 * b}
    )


def solve_plainly(bar: RectangleBar, moment: float, E: float, nu: float, size: float) -> tuple[int, Array]:
    """Unknowns, and the hoop stress at 45 degrees on the inner and the outer face, under end moments."""
    mesh = triangles(bar.a, bar.b, size)
    element = ElementVector(ElementTriP2())
    space = Basis(mesh, element)
    law = plane_stress(E, nu)
    stiffness = bar.t * linear_elasticity(*law).assemble(space)

    @LinearForm
    def pull(v: Any, w: Any) -> Any:
        return bar.t * bar.hoop(0.0, moment, np.hypot(*w.x)) * dot(w.n, v)

    load = sum(pull.assemble(FacetBasis(mesh, element, facets=mesh.boundaries[end])) for end in ("start", "end"))
    vertices = mesh.doflocs[:, : mesh.nvertices]

    def vertex(x: float, y: float) -> int:
        return int(np.argmin(np.hypot(vertices[0] - x, vertices[1] - y)))

    inner, outer = vertex(bar.a, 0.0), vertex(bar.b, 0.0)
    moved = solve(*condense(stiffness, load, D=np.array([*space.nodal_dofs[:, inner], space.nodal_dofs[1, outer]])))
    stress = linear_stress(*law)(sym_grad(space.interpolate(moved)))
    x, y = space.global_coordinates().value
    hoop = (y * y * stress[0, 0] - 2.0 * x * y * stress[0, 1] + x * x * stress[1, 1]) / (x * x + y * y)
    nodes = space.with_element(ElementTriP1())
    nodal = nodes.project(hoop)
    middle = 0.5**0.5
    at = [vertex(r * middle, r * middle) for r in (bar.a, bar.b)]
    return space.N, nodal[nodes.nodal_dofs[0, at]]
