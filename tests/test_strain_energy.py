"""Displacements from strain energy: closed forms of thin rings and straight beams, and the mesh for what is left."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from bars import STEEL, pulled, solved

from intrados.fem.cut import mean_motion
from intrados.fem.membrane import Elastic
from intrados.theory import shapes
from intrados.theory.load import EndLoad, FaceLoad, Patch
from intrados.theory.member import Arc, Member, Straight
from intrados.theory.section import Section
from intrados.theory.statics import Loading, loading
from intrados.theory.strain_energy import displacement, shear_factor

E, NU = STEEL.E, STEEL.nu
FORCE = 100.0


def quarter(R: float, force: tuple[float, float], section: Section, start: str = "clamped") -> Loading:
    """A quarter ring about the origin, clamped on the x axis, loaded where it crosses the y axis."""
    member = Member("centroid", (R, 0.0), 90.0, (Arc(R, 90.0, (section, section)),))
    if start == "clamped":
        return loading(member, "clamped", "free", (EndLoad("tip", "end", force, 0.0),))
    return loading(member, "free", "clamped", (EndLoad("tip", "start", force, 0.0),))


def at_tip(case: Loading) -> tuple[float, float]:
    place = (0, 0.0) if case.start == "free" else (len(case.member.pieces) - 1, 1.0)
    return displacement(case, E, NU, *place, case.member.centroid_point(*place))


@pytest.mark.parametrize(("force", "axis"), [((FORCE, 0.0), 0), ((0.0, FORCE), 1)], ids=["tangential", "radial"])
def test_a_thin_quarter_ring_moves_as_the_handbooks_say(force: tuple[float, float], axis: int) -> None:
    """P R^3/EI times pi/4 and 1/2 under a radial force, 3 pi/4 - 2 and 1/2 under a tangential one (bending alone).

    Elementary: the moment is P R sin(a) or P R (1 - cos(a)) at the angle a from the free end. What is left falls with
    the square of h/R: stretching, shear and curvature.
    """
    own, cross = {0: (0.75 * math.pi - 2.0, 0.5), 1: (0.25 * math.pi, 0.5)}[axis]
    section = shapes.rectangle(1.0, 2.0)
    off = []
    for R in (10.0, 20.0, 40.0, 80.0):
        found = at_tip(quarter(R, force, section))
        unit = FORCE * R**3 / (E * section.inertia)
        off.append([abs(found[axis] / unit - own) / own, abs(abs(found[1 - axis]) / unit - cross) / cross])
    for before, after in pairwise(np.array(off)):
        assert before / after == pytest.approx([4.0, 4.0], rel=0.05)
    assert max(off[-1]) < 2e-3


def test_a_straight_cantilever_moves_by_its_elementary_deflections() -> None:
    """P L^3/3EI + k P L/GA across, P L/EA along."""
    section = shapes.rectangle(20.0, 5.0)
    member = Member("centroid", (0.0, 0.0), 0.0, (Straight(150.0, (section, section)),))
    case = loading(member, "clamped", "free", (EndLoad("tip", "end", (700.0, FORCE), 0.0),))
    shear = 1.2 * FORCE * 150.0 * 2.0 * (1.0 + NU) / (E * 100.0)
    wanted = (700.0 * 150.0 / (E * 100.0), FORCE * 150.0**3 / (3.0 * E * section.inertia) + shear)
    assert at_tip(case) == pytest.approx(wanted, rel=1e-10)


@pytest.mark.parametrize(
    ("section", "factor"), [(shapes.rectangle(30.0, 7.0), 6.0 / 5.0), (shapes.circle(25.0), 10.0 / 9.0)]
)
def test_shear_factors_of_the_textbooks(section: Section, factor: float) -> None:
    assert shear_factor(section) == pytest.approx(factor, rel=1e-10)


def test_the_shear_factor_of_a_thin_webbed_i_is_area_over_web() -> None:
    """Common practice: A over the area of the web, within some percent while the flanges are thin."""
    section = shapes.i_section(200.0, 6.0, 100.0, 8.0, 100.0, 8.0)
    assert shear_factor(section) == pytest.approx(section.area / (6.0 * 192.0), rel=0.05)


def test_a_member_clamped_at_the_other_end_moves_alike() -> None:
    section = shapes.trapezoid(20.0, 12.0, 6.0)
    there = at_tip(quarter(80.0, (30.0, 50.0), section))
    # The mirror image at the line x = y exchanges the ends, and x with y.
    here = at_tip(quarter(80.0, (50.0, 30.0), section, start="free"))
    assert here == pytest.approx(there[::-1], rel=1e-9)


def test_displacements_are_reciprocal() -> None:
    """Maxwell: what a unit force at A along x does at B along y, one at B along y does at A along x."""
    both = (shapes.tee(30.0, 24.0, 6.0, 6.0, "inner"),) * 2
    member = Member("inner", (0.0, 0.0), 20.0, (Straight(60.0, both), Arc(50.0, 110.0, both)))

    def moved(piece: int, share: float, force: tuple[float, float], at: tuple[int, float]) -> tuple[float, float]:
        load = FaceLoad("f", piece, share, "inner", force, Patch(1e-3))
        case = loading(member, "clamped", "free", (load,))
        x, y = member.points(at[0], np.array([at[1]]), np.array([0.0]))[:, 0]
        return displacement(case, E, NU, *at, (float(x), float(y)))

    first = moved(0, 0.7, (1e3, 0.0), (1, 0.6))[1]
    second = moved(1, 0.6, (0.0, 1e3), (0, 0.7))[0]
    assert first == pytest.approx(second, rel=1e-5)


def differences(section: Section, nu: float) -> list[float]:
    """|FE - energy| over the displacement of a free quarter ring's end relative to its start: R/h 4, 8, 16, 32."""
    off = []
    for R in (4.0, 8.0, 16.0, 32.0):
        member = Member("centroid", (R, 0.0), 90.0, (Arc(R, 90.0, (section, section)),))
        case = loading(member, "free", "free", pulled(member, (40.0, 100.0), 0.0))
        found = solved(case, (), 6, elastic=Elastic(E, nu))
        last, moved = len(found.membrane.strip.columns), found.cases[0].displacement
        start, end = mean_motion(found.membrane, moved, 0, 0), mean_motion(found.membrane, moved, last, 0)
        (x0, y0), (x1, y1) = member.centroid_point(0, 0.0), member.centroid_point(0, 1.0)
        relative = end[:2] - start[:2] - start[2] * np.array([y0 - y1, x1 - x0])
        energy = np.array(displacement(case, E, nu, 0, 1.0, (x1, y1)))
        off.append(float(np.abs(relative - energy).max() / np.abs(energy).max()))
    return off


@pytest.mark.parametrize(
    ("section", "nu", "order"),
    [
        (shapes.rectangle(1.0, 0.5), 0.3, 2.0),
        (shapes.circle(1.0), 0.3, 2.0),
        (shapes.trapezoid(1.0, 0.6, 0.3), 0.0, 2.0),
        (shapes.trapezoid(1.0, 0.6, 0.3), 0.3, 1.2),
    ],
    ids=["rectangle", "circle", "trapezoid without contraction", "trapezoid"],
)
def test_the_mesh_moves_as_strain_energy_says_when_slender(section: Section, nu: float, order: float) -> None:
    """The ratio goes to one as (h/R)^2.

    Only the fibres' contraction over the depth (nu) spoils the order: it goes with z^2, bends a bar through
    int z^3 dA / R, and so leaves a term in h/R where the section is not symmetric about its centroid.
    """
    off = differences(section, nu)
    assert -np.polyfit(np.log([4.0, 8.0, 16.0, 32.0]), np.log(off), 1)[0] == pytest.approx(order, abs=0.15)
    assert off[-1] < 1e-3


def test_a_clamp_stiffens_a_slender_ring_by_little() -> None:
    """It stops the contraction of the section it holds, which is worth a hundredth of a depth of the ring's length."""
    section = shapes.rectangle(1.0, 0.5)
    for R in (8.0, 16.0, 32.0, 64.0):
        case = quarter(R, (40.0, 100.0), section)
        found = solved(case, (), 6)
        motion = mean_motion(found.membrane, found.cases[0].displacement, len(found.membrane.strip.columns), 0)
        assert motion[:2] == pytest.approx(at_tip(case), rel=0.01 / R + 0.06 / R**2)
