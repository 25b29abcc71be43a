"""The membrane: its stiffness against scikit-fem's, its solution against a plain solve, and its space."""

from __future__ import annotations

import itertools
from types import SimpleNamespace
from typing import Any

import numpy as np
import pytest
from bars import STEEL, bar, pulled, pulled_through_centre, rectangular_bar, strip_and_mesh
from scipy.sparse import coo_matrix
from scipy.sparse.linalg import spsolve
from skfem import Basis, BilinearForm, ElementQuadP, ElementVector
from skfem.assembly import Dofs
from skfem.helpers import ddot, sym_grad
from skfem.mapping import MappingIsoparametric
from skfem.models.elasticity import linear_elasticity, linear_stress, plane_stress

from intrados.fem.element import basis
from intrados.fem.introduction import forces_inside, forces_on_ends
from intrados.fem.membrane import Membrane, discretise
from intrados.theory.load import BodyLoad, EndLoad
from intrados.theory.member import Arc, Member, Straight
from intrados.theory.quadrature import Array
from intrados.theory.section import Section
from intrados.theory.shapes import box, circle, ellipse, i_section, rectangle, tee, trapezoid, triangle, tube
from intrados.theory.statics import Loading, Support, loading

SECTIONS = [
    rectangle(40.0, 10.0),
    trapezoid(60.0, 40.0, 20.0),
    triangle(60.0, 40.0, "inner"),
    triangle(60.0, 40.0, "outer"),
    circle(40.0),
    ellipse(40.0, 30.0),
    tube(50.0, 30.0),
    tee(60.0, 50.0, 12.0, 12.0, "inner"),
    i_section(80.0, 10.0, 50.0, 12.0, 40.0, 10.0),
    box(60.0, 40.0, 8.0, 6.0),
]
each_section = pytest.mark.parametrize("section", SECTIONS, ids=lambda section: section.shape)


def loaded(member: Member, start: Support = "free", end: Support = "free") -> Loading:
    return loading(member, start, end, pulled(member, (300.0, -200.0), 4e3))


def discretised(case: Loading, degree: int) -> tuple[Membrane, Any]:
    strip, mesh = strip_and_mesh(case, ())
    return discretise(strip, mesh, STEEL, degree, case.start, case.end), mesh


def all_forces(membrane: Membrane, case: Loading) -> Array:
    return forces_inside(membrane, case) + forces_on_ends(membrane, case)


def assembled(membrane: Membrane) -> Any:
    rows = np.repeat(membrane.vectors[:, :, None], membrane.vectors.shape[1], axis=2)
    places = (rows.ravel(), rows.transpose(0, 2, 1).ravel())
    return coo_matrix((membrane.stiffness.ravel(), places), shape=(membrane.unknowns,) * 2).tocsc()


def renumbered(matrix: Any, space: Basis, membrane: Membrane) -> Any:
    """A matrix that scikit-fem assembled, in the membrane's numbering of the same unknowns."""
    number = np.empty(space.N, dtype=np.int64)
    number[space.element_dofs[0::2].T] = 2 * membrane.scalars
    number[space.element_dofs[1::2].T] = 2 * membrane.scalars + 1
    entries = matrix.tocoo()
    return coo_matrix((entries.data, (number[entries.row], number[entries.col])), shape=entries.shape).tocsc()


def bent_over() -> Member:
    """An S of two arcs with a straight between them, its depth falling along the last piece."""
    deep, shallow = (rectangle(depth, 12.0) for depth in (30.0, 20.0))
    pieces = (Arc(60.0, 70.0, (deep, deep)), Straight(50.0, (deep, deep)), Arc(50.0, -60.0, (deep, shallow)))
    return Member("centroid", (10.0, -20.0), 15.0, pieces)


@pytest.mark.parametrize("degree", [3, 4, 6])
def test_stiffness_equals_scikit_fems_own_assembly(degree: int) -> None:
    """scikit-fem's Basis on its own isoparametric mapping, the library's form times the exact width."""
    section = trapezoid(60.0, 40.0, 20.0)
    membrane, mesh = discretised(loaded(bar(section, 35.0, 80.0)), degree)
    element = ElementQuadP(degree)
    dofs = Dofs(mesh, element)
    coefficients = np.empty((2, dofs.N))
    coefficients[:, dofs.element_dofs.T] = membrane.geometry
    curved = SimpleNamespace(doflocs=coefficients, dofs=dofs, dim=lambda: 2)
    space = Basis(mesh, ElementVector(element), mapping=MappingIsoparametric(curved, element), intorder=2 * degree + 1)
    law = linear_stress(*plane_stress(STEEL.E, STEEL.nu))

    @BilinearForm
    def energy(u: Any, v: Any, w: Any) -> Any:
        depth = np.hypot(w.x[0], w.x[1]) - 35.0
        return section.width(depth) * ddot(law(sym_grad(u)), sym_grad(v))

    ours, theirs = assembled(membrane), renumbered(energy.assemble(space), space, membrane)
    # The interpolated arc is off the true one by what the degree leaves, and so is the width that is read from it.
    off = {3: 1e-5, 4: 1e-6, 6: 1e-9}[degree]
    assert abs(ours - theirs).max() <= off * abs(theirs).max()


def test_stiffness_equals_the_librarys_elasticity_form() -> None:
    """On a straight of constant width: `linear_elasticity` with the library's plane-stress constants, to rounding."""
    section = rectangle(40.0, 10.0)
    member = Member("inner", (0.0, 0.0), 0.0, (Straight(70.0, (section, section)),))
    membrane, mesh = discretised(loaded(member), 5)
    element = ElementQuadP(5)
    # The straight runs along x and its inner side is the left: x grows along it and y falls from 0 across it.
    space = Basis(mesh.scaled((70.0, -40.0)), ElementVector(element), intorder=11)
    theirs = renumbered(10.0 * linear_elasticity(*plane_stress(STEEL.E, STEEL.nu)).assemble(space), space, membrane)
    # The coordinates that gmsh hands back are good to some 1e-12.
    assert abs(assembled(membrane) - theirs).max() <= 1e-11 * abs(theirs).max()


@pytest.mark.parametrize("case", [loaded(bent_over()), loaded(bar(SECTIONS[6], 30.0, 100.0))], ids=["S", "tube"])
def test_rigid_motions_need_no_force(case: Loading) -> None:
    membrane, _ = discretised(case, 5)
    count = membrane.scalars.shape[1]
    motions = np.zeros((*membrane.vectors.shape, 3))
    motions[:, :4, 0] = 1.0
    motions[:, count : count + 4, 1] = 1.0
    motions[:, :count, 2] = -membrane.geometry[1] / case.member.size
    motions[:, count:, 2] = membrane.geometry[0] / case.member.size
    forces = membrane.stiffness @ motions
    assert np.abs(forces).max() <= 1e-12 * np.abs(membrane.stiffness).max()


@pytest.mark.parametrize("supports", [("clamped", "free"), ("free", "clamped"), ("free", "free")])
@pytest.mark.parametrize("degree", [3, 6])
def test_the_condensed_banded_solution_is_the_plain_one(supports: tuple[Support, Support], degree: int) -> None:
    case = loaded(bent_over(), *supports)
    membrane, _ = discretised(case, degree)
    forces = all_forces(membrane, case)
    total = np.bincount(membrane.vectors.ravel(), weights=forces.ravel(), minlength=membrane.unknowns)
    free = np.setdiff1d(np.arange(membrane.unknowns), membrane.held)
    plain = np.zeros(membrane.unknowns)
    plain[free] = spsolve(assembled(membrane)[free][:, free], total[free])
    both = membrane.solve(np.stack([forces, -2.0 * forces], axis=2))
    assert np.abs(both[:, 0] - plain).max() <= 1e-9 * np.abs(plain).max()
    assert np.abs(both[:, 1] + 2.0 * plain).max() <= 2e-9 * np.abs(plain).max()


def test_the_held_unknowns_of_a_free_member_carry_nothing() -> None:
    for case in (loaded(bent_over()), pulled_through_centre(rectangular_bar(30.0, 70.0, 10.0), 2000.0)):
        membrane, _ = discretised(case, 6)
        forces = all_forces(membrane, case)
        moved = membrane.solve(forces[:, :, None])[:, 0]
        total = np.bincount(membrane.vectors.ravel(), weights=forces.ravel(), minlength=membrane.unknowns)
        left = assembled(membrane) @ moved - total
        assert len(membrane.held) == 3
        assert np.abs(left).max() <= 1e-9 * np.abs(forces).sum()


def test_reactions_of_a_clamped_end_balance_the_loads() -> None:
    member = bent_over()
    loads = (EndLoad("pull", "end", (300.0, -200.0), 4e3), BodyLoad("b", 0, 0.5, (50.0, 70.0), -9e3, 20.0))
    case = loading(member, "clamped", "free", loads)
    membrane, _ = discretised(case, 5)
    forces = all_forces(membrane, case)
    total = np.bincount(membrane.vectors.ravel(), weights=forces.ravel(), minlength=membrane.unknowns)
    left = assembled(membrane) @ membrane.solve(forces[:, :, None])[:, 0] - total
    # The work of the nodal forces on a unit motion of the whole: it is the four vertex functions that make one.
    motion = np.zeros((membrane.unknowns, 2))
    motion[2 * membrane.scalars[:, :4], 0] = 1.0
    motion[2 * membrane.scalars[:, :4] + 1, 1] = 1.0
    assert motion.T @ left == pytest.approx([-350.0, 130.0], rel=1e-9)
    free = np.setdiff1d(np.arange(membrane.unknowns), membrane.held)
    assert np.abs(left[free]).max() <= 1e-9 * np.abs(forces).sum()


@each_section
def test_the_volume_is_area_times_the_way_of_the_centroid(section: Section) -> None:
    """Pappus, on an arc of 130 degrees; what is left is the interpolation of the circle at this degree."""
    member = bar(section, 25.0, 130.0)
    membrane, _ = discretised(loaded(member), 8)
    way = np.radians(130.0) * (25.0 + section.centroid)
    assert membrane.volumes.sum() == pytest.approx(section.area * way, rel=1e-10)
    assert membrane.jacobians[1].min() > 0.0


def test_displacement_and_geometry_go_on_across_every_edge() -> None:
    case = loaded(bent_over())
    membrane, _ = discretised(case, 5)
    moved = membrane.solve(all_forces(membrane, case)[:, :, None])[:, 0]
    count = membrane.scalars.shape[1]
    local = moved[membrane.vectors].reshape(-1, 2, count).transpose(1, 0, 2)
    q, rows = np.linspace(0.0, 1.0, 7), membrane.rows
    zero, one = np.zeros_like(q), np.ones_like(q)
    number = np.arange(len(membrane.scalars))
    along, across = number[: -rows or None], number[number % rows < rows - 1]
    pairs = [
        (along, along + rows, np.array([one, q]), np.array([zero, q])),
        (across, across + 1, np.array([q, one]), np.array([q, zero])),
    ]
    for field in (local, membrane.geometry):
        largest = np.abs(field).max()
        for first, second, there, here in pairs:
            jump = field[:, first] @ basis(5, there)[0] - field[:, second] @ basis(5, here)[0]
            assert np.abs(jump).max() <= 1e-12 * largest


def test_the_nodes_lie_on_the_member() -> None:
    """Ends of the elements are the member's own points, and the whole arc is met as the degree says."""
    member = bar(rectangle(40.0, 10.0), 30.0, 90.0)
    q = np.array([np.repeat(np.linspace(0.0, 1.0, 6), 2), np.tile([0.0, 1.0], 6)])

    def off(degree: int) -> float:
        membrane, _ = discretised(loaded(member), degree)
        x, y = membrane.geometry @ basis(degree, q)[0]
        radii: Array = np.hypot(x, y)
        low = [30.0 + 40.0 * float(row.eta(np.array(0.0))) for row in membrane.strip.rows]
        high = [30.0 + 40.0 * float(row.eta(np.array(1.0))) for row in membrane.strip.rows]
        wanted = np.where(q[1] == 0.0, np.array(low)[:, None], np.array(high)[:, None])
        return float(np.abs(radii - np.tile(wanted, (len(membrane.strip.columns), 1))).max())

    errors = [off(degree) for degree in (3, 5, 7)]
    assert errors[2] < 1e-10 * 70.0
    assert all(after < 1e-2 * before for before, after in itertools.pairwise(errors))
