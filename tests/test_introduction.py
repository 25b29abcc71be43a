"""How loads enter the mesh: resultants, Saint-Venant between two ways to spread a load, traction found at the face."""

from __future__ import annotations

import math

import numpy as np
import pytest
from bars import STEEL, bar, exact_fibres, fibres, pulled, solved, stations, strip_and_mesh

from intrados.fem.accuracy import Solution
from intrados.fem.cut import stresses
from intrados.fem.element import basis
from intrados.fem.fibre import pressed
from intrados.fem.introduction import end_distribution, forces_inside, forces_on_ends, resultants
from intrados.fem.membrane import Membrane, discretise
from intrados.fem.trace import along_face
from intrados.theory.load import Bearing, BodyLoad, EndLoad, Face, FaceLoad, Load, Patch
from intrados.theory.member import Arc, Member, Straight
from intrados.theory.quadrature import Array
from intrados.theory.section import Section
from intrados.theory.shapes import circle, i_section, rectangle, tee, trapezoid, tube
from intrados.theory.spread import FaceSpread, face_points, into_material
from intrados.theory.statics import Loading, loading

TRAPEZOID = trapezoid(60.0, 40.0, 20.0)


def hook(section: Section, tip: Section, load: Load) -> Loading:
    pieces = (Straight(90.0, (section, section)), Arc(35.0, 230.0, (section, tip)))
    return loading(Member("inner", (7.0, -3.0), -120.0, pieces), "clamped", "free", (load,))


def discretised(case: Loading, degree: int) -> Membrane:
    strip, mesh = strip_and_mesh(case, ())
    return discretise(strip, mesh, STEEL, degree, case.start, case.end)


LOADS: dict[str, Load] = {
    "patch on the inner face": FaceLoad("a", 1, 0.5, "inner", (3e3, -25e3), Patch(20.0)),
    "patch on the outer face": FaceLoad("a", 1, 0.7, "outer", (3e3, -25e3), Patch(13.0)),
    "patch on a straight": FaceLoad("a", 0, 0.4, "inner", (-800.0, 300.0), Patch(33.0)),
    "patch along the face": FaceLoad("a", 0, 0.4, "outer", (50.0, 86.6), Patch(5.0)),
    "bearing in the bend": FaceLoad("a", 1, 0.5, "inner", (0.0, -25e3), Bearing(60.0)),
    "bearing of the bend's own diameter": FaceLoad("a", 1, 0.5, "inner", (0.0, -25e3), Bearing(68.0)),
    "bearing on the outer face": FaceLoad("a", 1, 0.5, "outer", (1e3, 25e3), Bearing(30.0)),
    "body force and couple": BodyLoad("a", 1, 0.3, (1e3, 2e3), -4e5, 18.0),
}


@pytest.mark.parametrize("tip", [TRAPEZOID, rectangle(40.0, 16.0)], ids=["constant", "taper"])
@pytest.mark.parametrize("name", LOADS)
@pytest.mark.parametrize("degree", [3, 6])
def test_the_mesh_receives_exactly_the_load(name: str, tip: Section, degree: int) -> None:
    """Force, and moment about the load's own point, to 1e-10."""
    load = LOADS[name]
    case = hook(TRAPEZOID, tip, load)
    membrane = discretised(case, degree)
    fx, fy, about_origin = resultants(membrane, forces_inside(membrane, case)[:, :, None])[:, 0]
    (x, y), size = case.spreads[0].point, math.hypot(*load.force)
    moment = about_origin - (x * fy - y * fx)
    assert (fx, fy) == pytest.approx(load.force, abs=1e-10 * size)
    wanted = load.moment if isinstance(load, BodyLoad) else 0.0
    assert moment == pytest.approx(wanted, abs=1e-10 * (size * case.member.size + abs(wanted)))
    assert not forces_on_ends(membrane, case).any()


@pytest.mark.parametrize("section", [TRAPEZOID, circle(50.0), tube(50.0, 30.0)], ids=lambda section: section.shape)
def test_loads_on_ends_arrive_exactly(section: Section) -> None:
    both = (section, section)
    member = Member("outer", (1.0, 2.0), 40.0, (Arc(90.0, -100.0, both), Straight(50.0, both)))
    for load in pulled(member, (500.0, -300.0), 2e4):
        case = loading(member, "free", "free", (load,))
        membrane = discretised(case, 4)
        found = resultants(membrane, forces_on_ends(membrane, case)[:, :, None])[:, 0]
        x, y = member.centroid_point(0, 0.0) if load.end == "start" else member.centroid_point(1, 1.0)
        wanted = [*load.force, x * load.force[1] - y * load.force[0] + load.moment]
        assert found == pytest.approx(wanted, rel=1e-10, abs=1e-10 * 500.0 * member.size)
        assert not forces_inside(membrane, case).any()


def test_a_force_on_a_face_of_no_width_enters_as_a_body_force() -> None:
    case = hook(circle(50.0), circle(50.0), FaceLoad("a", 1, 0.5, "inner", (0.0, -25e3), Patch(20.0)))
    assert not isinstance(case.spreads[0], FaceSpread)
    membrane = discretised(case, 4)
    fx, fy, about_origin = resultants(membrane, forces_inside(membrane, case)[:, :, None])[:, 0]
    x, _ = face_points(case.member, 1, "inner", np.array([0.5]))[:, 0]
    assert (fx, fy, about_origin) == pytest.approx((0.0, -25e3, -25e3 * x), rel=1e-10, abs=1e-6)


def test_far_from_it_only_the_resultant_of_a_load_counts() -> None:
    """Patches of 10 and 30 on a depth of 60: what is left of their difference falls by a decade a depth or more."""
    depths = np.array([0.7, 1.05, 1.4, 1.75, 2.1])
    middle, turn = 0.45, math.radians(230.0) * (35.0 + TRAPEZOID.centroid)
    at = stations(*[(1, middle + 60.0 * float(depth) / turn) for depth in depths])
    cases = [
        hook(TRAPEZOID, TRAPEZOID, FaceLoad("a", 1, middle, "inner", (0.0, -25e3), Patch(width)))
        for width in (10.0, 30.0)
    ]
    wide, narrow = (fibres(solved(case, at, 7), at) for case in cases)
    off = np.abs(wide - narrow).max(axis=1) / np.abs(wide).max()
    assert off[0] > 1e-2
    assert np.polyfit(depths, np.log10(off), 1)[0] < -1.0
    assert off[-1] < 1e-3


def at_face(solution: Solution, case: Loading, face: Face, piece: int, column: int, q: Array) -> tuple[Array, ...]:
    """Normal, shear and hoop stress on a face from the full tensor, and the shares of the points."""
    membrane = solution.membrane
    row, points = along_face(membrane.strip, piece, face, q)
    element = np.array([column * membrane.rows + row])
    sxx, syy, sxy = stresses(membrane, solution.cases[0].displacement, element, points)[:, 0]
    share = membrane.strip.columns[column].share(q)
    (nx, ny), (tx, ty) = into_material(case.member, piece, face, share)
    normal = nx * nx * sxx + ny * ny * syy + 2.0 * nx * ny * sxy
    hoop = tx * tx * sxx + ty * ty * syy + 2.0 * tx * ty * sxy
    # Traction on the material is minus stress times the normal that points into it.
    shear = -(tx * (sxx * nx + sxy * ny) + ty * (sxy * nx + syy * ny))
    return normal, shear, hoop, share


@pytest.mark.parametrize("name", ["patch on the inner face", "patch on the outer face", "bearing in the bend"])
def test_the_traction_put_on_a_face_is_found_there(name: str) -> None:
    """And the hoop stress of the full tensor there is the fibre stress, its share of the pressure included."""
    load = LOADS[name]
    assert isinstance(load, FaceLoad)
    case = hook(TRAPEZOID, TRAPEZOID, load)
    solution = solved(case, (), 10)
    spread, strip = case.spreads[0], solution.membrane.strip
    q = np.linspace(0.1, 0.9, 5)
    largest = 0.0
    off: list[float] = []
    for index, column in enumerate(strip.columns):
        if column.piece != 1 or column.first < spread.first - 1e-9 or column.last > spread.last + 1e-9:
            continue
        normal, shear, hoop, share = at_face(solution, case, load.face, 1, index, q)
        wanted_normal, wanted_shear = pressed(case, 1, load.face, share)
        fibre = solution.cases[0].face(load.face).sampled(q)[index]
        largest = max(largest, float(np.abs(wanted_normal).max()))
        off += [float(np.abs(found).max()) for found in (normal - wanted_normal, shear - wanted_shear, hoop - fibre)]
    assert largest > 10.0
    assert max(off) < 0.02 * largest
    assert float(np.median(off)) < 0.004 * largest


def test_pressure_is_nothing_where_no_load_presses() -> None:
    case = hook(TRAPEZOID, TRAPEZOID, LOADS["patch on the inner face"])
    spread = case.spreads[0]
    share = np.array([spread.first - 1e-6, spread.centre, spread.last + 1e-6])
    normal, shear = pressed(case, 1, "inner", share)
    assert normal[[0, 2]].tolist() == shear[[0, 2]].tolist() == [0.0, 0.0]
    # cos^2 over 20 has the mean 1/2: at its middle the force per length is twice the load over its width.
    into, _along = into_material(case.member, 1, "inner", share)
    per_length = np.array([3e3, -25e3]) * 2.0 / 20.0 / 40.0
    assert normal[1] == pytest.approx(-per_length @ into[:, 1], rel=3e-2)
    assert not np.any(pressed(case, 1, "outer", share))
    assert not np.any(pressed(case, 0, "inner", share))


SECTIONS = [
    rectangle(40.0, 10.0),
    TRAPEZOID,
    circle(40.0),
    tee(60.0, 50.0, 12.0, 12.0, "inner"),
    i_section(80.0, 10.0, 50.0, 12.0, 40.0, 10.0),
]


@pytest.mark.parametrize("section", SECTIONS, ids=lambda section: section.shape)
@pytest.mark.parametrize("R_over_depth", [0.8, 3.0, 150.0, 1e3, math.inf])
def test_the_distribution_on_an_end_has_its_unit_resultants(section: Section, R_over_depth: float) -> None:
    R = None if math.isinf(R_over_depth) else R_over_depth * section.depth
    x, area = section.quadrature(math.inf if R is None else R)
    hoop_n, hoop_m, tau = end_distribution(section, R, x)
    lever = section.centroid - x
    digits = 1e-9
    assert area @ hoop_n == pytest.approx(1.0, rel=digits)
    assert area @ (hoop_n * lever) == pytest.approx(0.0, abs=digits * section.depth)
    assert area @ hoop_m == pytest.approx(0.0, abs=digits / section.depth)
    assert area @ (hoop_m * lever) == pytest.approx(1.0, rel=digits)
    assert area @ tau == pytest.approx(1.0, rel=digits)


def test_an_end_load_on_a_rectangle_disturbs_nothing() -> None:
    """As near to the end as a hundredth of the arc the exact bar holds; other sections enter as hand theory has it."""
    member = bar(rectangle(40.0, 10.0), 20.0, 120.0)
    case = loading(member, "free", "free", (*pulled(member, (800.0, 500.0), 3e4),))
    at = stations((0, 0.01), (0, 0.5), (0, 0.99))
    exact = exact_fibres(case, at)
    assert np.abs(fibres(solved(case, at, 9), at) - exact).max() <= 1e-6 * np.abs(exact).max()


def test_a_load_stays_on_its_own_stretch_of_face() -> None:
    case = hook(TRAPEZOID, TRAPEZOID, LOADS["patch on the inner face"])
    membrane = discretised(case, 5)
    forces = forces_inside(membrane, case)
    loaded = {int(number) for number in np.flatnonzero(np.abs(forces).max(axis=1) > 0.0)}
    spread, strip = case.spreads[0], membrane.strip
    first, last = strip.line_at(1, spread.first), strip.line_at(1, spread.last)
    row, points = along_face(strip, 1, "inner", np.linspace(0.0, 1.0, 7))
    assert loaded == {column * membrane.rows + row for column in range(first, last)}
    lives = np.abs(basis(5, points)[0]).max(axis=1) > 1e-12
    count = membrane.scalars.shape[1]
    largest = np.abs(forces).max()
    assert np.abs(forces.reshape(len(forces), 2, count)[:, :, ~lives]).max() <= 1e-14 * largest


def test_several_loads_add_up() -> None:
    loads = (
        *tuple(load for load in LOADS.values() if isinstance(load, BodyLoad)),
        EndLoad("e", "end", (-100.0, 40.0), 5000.0),
    )
    member = hook(TRAPEZOID, TRAPEZOID, loads[0]).member
    cases = [loading(member, "clamped", "free", given) for given in (loads, loads[:1], loads[1:])]
    at = stations((0, 0.5), (1, 0.6))
    both, first, second = (fibres(solved(case, at, 5), at) for case in cases)
    assert np.abs(both - first - second).max() <= 1e-8 * np.abs(both).max()
