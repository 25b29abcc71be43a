"""How loads enter: every spread has exactly its load's resultant, lies where it should, or is refused."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from rescaling import rescaled

from intrados.theory import shapes
from intrados.theory.load import Bearing, BodyLoad, Face, FaceLoad, LoadError, Patch, Vector
from intrados.theory.member import Arc, Datum, Member, Piece, Straight
from intrados.theory.section import Section
from intrados.theory.spread import BodySpread, FaceSpread, Spread, enter, face_points, face_speed, into_material

Array = NDArray[np.float64]
BAR = shapes.rectangle(40.0, 20.0)
DEEP = shapes.trapezoid(60.0, 40.0, 20.0)
FACES: list[Face] = ["inner", "outer"]
each_face = pytest.mark.parametrize("face", FACES)


def straight(length: float, first: Section = BAR, last: Section | None = None) -> Straight:
    return Straight(length, (first, last or first))


def arc(radius: float, sweep: float, first: Section = BAR, last: Section | None = None) -> Arc:
    return Arc(radius, sweep, (first, last or first))


def member(*pieces: Piece, datum: Datum = "inner", heading: float = 0.0) -> Member:
    return Member(datum, (30.0, -20.0), heading, pieces)


def patch(force: Vector, face: Face = "inner", share: float = 0.5, width: float = 20.0, piece: int = 0) -> FaceLoad:
    return FaceLoad("load", piece, share, face, force, Patch(width))


def bearing(force: Vector, face: Face = "inner", share: float = 0.5, pin: float = 30.0, piece: int = 0) -> FaceLoad:
    return FaceLoad("load", piece, share, face, force, Bearing(pin))


def body(force: Vector, moment: float, share: float = 0.5, width: float = 20.0) -> BodyLoad:
    return BodyLoad("load", 0, share, force, moment, width)


MEMBERS = {
    "straight": member(straight(120.0), heading=20.0),
    "straight taper": member(straight(120.0, DEEP, BAR), heading=20.0, datum="centroid"),
    "left arc": member(arc(50.0, 150.0), heading=-70.0),
    "right arc": member(arc(90.0, -150.0), heading=70.0, datum="outer"),
    "tapered arc": member(arc(60.0, 150.0, DEEP, BAR), datum="centroid"),
}
each_member = pytest.mark.parametrize("name", MEMBERS)
OBLIQUE = (-700.0, 1900.0)


def gauss(first: float, last: float) -> tuple[Array, Array]:
    nodes, weights = np.polynomial.legendre.leggauss(96)
    half = 0.5 * (last - first)
    return first + half * (nodes + 1.0), half * weights


def face_traction(curved: Member, spread: FaceSpread) -> tuple[Array, Array, Array]:
    """Force per length, points and lengths at Gauss points of the loaded face: lengths from the points themselves."""
    share, weight = gauss(spread.first, spread.last)
    step = 1e-5
    ahead = face_points(curved, spread.piece, spread.face, share + step)
    behind = face_points(curved, spread.piece, spread.face, share - step)
    length = weight * np.hypot(*(ahead - behind)) / (2.0 * step)
    traction = np.tensordot(spread.parts, spread.distributions(curved, share), axes=1)
    return traction, face_points(curved, spread.piece, spread.face, share), length


def assert_statically_equal(spread: Spread, found: Array, rel: float) -> None:
    """Force, and moment about the load's point, against the load; ``found`` is about the origin."""
    (x, y), (fx, fy) = spread.point, spread.force
    size = math.hypot(fx, fy)
    assert found[:2] == pytest.approx([fx, fy], abs=rel * size)
    about_point = found[2] - (x * found[1] - y * found[0])
    assert about_point == pytest.approx(spread.moment, abs=rel * (100.0 * size + abs(spread.moment)))


@each_member
@each_face
def test_a_patch_has_the_resultant_of_its_load(name: str, face: Face) -> None:
    spread = enter(MEMBERS[name], patch(OBLIQUE, face, share=0.4))
    assert isinstance(spread, FaceSpread)
    assert_statically_equal(
        spread, spread.part_resultants(MEMBERS[name], spread.first, spread.last) @ spread.parts, 1e-12
    )
    traction, points, length = face_traction(MEMBERS[name], spread)
    moment = (points[0] * traction[1] - points[1] * traction[0]) @ length
    # Lengths by differences: right to about step^2.
    assert_statically_equal(spread, np.array([*(traction @ length), moment]), 1e-8)


@each_member
@each_face
def test_a_patch_acts_at_its_place_and_covers_its_width(name: str, face: Face) -> None:
    curved = MEMBERS[name]
    spread = enter(curved, patch(OBLIQUE, face, share=0.4))
    assert spread.point == pytest.approx(face_points(curved, 0, face, np.array([0.4]))[:, 0].tolist(), rel=1e-14)
    share, weight = gauss(spread.first, spread.last)
    # Along a tapered arc the face's length per share varies: the middle counts.
    assert weight @ face_speed(curved, 0, face, share) == pytest.approx(20.0, rel=1e-3)
    assert spread.centre == 0.4


def test_a_patch_fades_to_nothing_at_its_edges_and_is_smooth_there() -> None:
    curved = MEMBERS["left arc"]
    spread = enter(curved, patch((0.0, 1000.0)))
    assert isinstance(spread, FaceSpread)
    near = spread.first + (spread.last - spread.first) * np.array([0.0, 1e-3, 0.5])
    size = np.hypot(*np.tensordot(spread.parts, spread.distributions(curved, near), axes=1))
    # cos^2 starts like the square of the distance from the edge.
    assert size[0] < 1e-15 * size[2]
    assert size[1] / size[2] == pytest.approx((math.pi * 1e-3) ** 2, rel=2e-2)


def test_a_central_patch_on_a_straight_is_a_plain_cosine_square() -> None:
    spread = enter(member(straight(100.0)), patch((0.0, -1000.0), "inner"))
    assert spread.parts == pytest.approx((0.0, -1000.0 / 10.0, 0.0), abs=1e-10)


@each_member
@each_face
def test_part_of_a_spread_and_the_rest_make_the_whole(name: str, face: Face) -> None:
    curved = MEMBERS[name]
    spread = enter(curved, patch(OBLIQUE, face, share=0.4))
    cut = 0.3 * spread.first + 0.7 * spread.last
    total = spread.resultant(curved, 0.0, cut) + spread.resultant(curved, cut, 1.0)
    assert total == pytest.approx(spread.wanted(), rel=1e-12)
    assert not spread.resultant(curved, 0.0, spread.first).any()
    assert not spread.resultant(curved, spread.last, 1.0).any()


def normal_force(curved: Member, face: Face, share: float, size: float) -> Vector:
    into, _ = into_material(curved, 0, face, np.array([share]))
    return (float(size * into[0, 0]), float(size * into[1, 0]))


@each_member
@each_face
def test_a_bearing_has_the_resultant_of_its_load(name: str, face: Face) -> None:
    curved = MEMBERS[name]
    spread = enter(curved, bearing(normal_force(curved, face, 0.45, 2000.0), face, share=0.45))
    assert isinstance(spread, FaceSpread)
    assert spread.centre == pytest.approx(0.45, abs=1e-9)
    assert_statically_equal(spread, spread.part_resultants(curved, spread.first, spread.last) @ spread.parts, 1e-12)
    traction, points, length = face_traction(curved, spread)
    moment = (points[0] * traction[1] - points[1] * traction[0]) @ length
    assert_statically_equal(spread, np.array([*(traction @ length), moment]), 1e-8)


@each_member
@each_face
def test_a_bearing_presses_and_never_pulls(name: str, face: Face) -> None:
    curved = MEMBERS[name]
    spread = enter(curved, bearing(normal_force(curved, face, 0.45, 2000.0), face, share=0.45))
    assert isinstance(spread, FaceSpread)
    traction, _, _ = face_traction(curved, spread)
    into, _ = into_material(curved, 0, face, gauss(spread.first, spread.last)[0])
    assert np.all((traction * into).sum(axis=0) > 0.0)


def test_bearing_in_a_seat_is_the_cosine_pressure_of_the_handbooks() -> None:
    """Seat radius a, half-angle w, pressure p cos(pi f/2w): the force is the integral of p cos(pi f/2w) cos f a df."""
    curved = member(arc(50.0, 180.0), heading=-90.0)
    spread = enter(curved, bearing(normal_force(curved, "inner", 0.5, 2000.0), pin=60.0))
    half_angle = math.asin(60.0 / 100.0)
    assert (spread.last - spread.first) * math.pi == pytest.approx(2.0 * half_angle, rel=1e-13)
    k = 0.5 * math.pi / half_angle
    per_pressure = 50.0 * 2.0 * k * math.cos(half_angle) / (k * k - 1.0)
    assert spread.parts == pytest.approx((2000.0 / per_pressure, 0.0, 0.0), abs=1e-8)


def test_a_pin_that_fills_its_seat_bears_over_a_half_circle() -> None:
    curved = member(arc(50.0, 270.0))
    spread = enter(curved, bearing(normal_force(curved, "inner", 0.5, 2000.0), pin=100.0))
    assert (spread.last - spread.first) * 270.0 == pytest.approx(180.0, rel=1e-6)


@pytest.mark.parametrize(("name", "face"), [("straight", "inner"), ("straight", "outer"), ("left arc", "outer")])
def test_on_a_straight_or_convex_face_a_bearing_covers_the_pin_diameter(name: str, face: Face) -> None:
    curved = MEMBERS[name]
    spread = enter(curved, bearing(normal_force(curved, face, 0.5, 2000.0), face))
    share, weight = gauss(spread.first, spread.last)
    assert weight @ face_speed(curved, 0, face, share) == pytest.approx(30.0, rel=1e-12)


@pytest.mark.parametrize("angle", [30.0, 90.0, 140.0])
def test_a_bearing_is_centred_where_the_normal_is_parallel_to_the_force(angle: float) -> None:
    # Centre of curvature above the start: at the angle f along the arc the inner normal into it is (sin f, -cos f).
    curved = member(arc(50.0, 170.0))
    f = math.radians(angle)
    spread = enter(curved, bearing((2000.0 * math.sin(f), -2000.0 * math.cos(f)), share=0.1))
    assert spread.centre * 170.0 == pytest.approx(angle, abs=1e-9)
    assert spread.point == pytest.approx((30.0 + 50.0 * math.sin(f), 30.0 - 50.0 * math.cos(f)), rel=1e-12)


def test_on_a_straight_a_bearing_stays_where_it_is_put() -> None:
    assert enter(member(straight(120.0)), bearing((0.0, -2000.0), share=0.3)).centre == 0.3


def test_a_force_given_to_four_digits_is_normal_to_a_straight_face() -> None:
    curved = member(straight(120.0), heading=30.0)
    spread = enter(curved, bearing((2500.0, -4330.0)))
    assert spread.centre == 0.5
    assert_statically_equal(spread, spread.part_resultants(curved, spread.first, spread.last) @ spread.parts, 1e-12)


def test_a_force_a_degree_off_the_normal_of_a_straight_face_is_not() -> None:
    with pytest.raises(LoadError, match="nowhere on this piece"):
        enter(member(straight(120.0)), bearing((math.sin(math.radians(1.0)), -1.0)))


@each_member
def test_a_body_load_has_the_resultant_and_moment_of_its_load(name: str) -> None:
    curved = MEMBERS[name]
    spread = enter(curved, body(OBLIQUE, 45000.0, share=0.4))
    assert isinstance(spread, BodySpread)
    assert spread.point == curved.centroid_point(0, 0.4)
    # Area elements by the cross product of differences of the points, widths from the section itself.
    total = np.zeros(3)
    step = 1e-5
    for share, weight in zip(*gauss(spread.first, spread.last), strict=True):
        section = curved.section(0, float(share))
        x, dA = section.quadrature(math.inf)
        at = np.full_like(x, share)
        along = (curved.points(0, at + step, x) - curved.points(0, at - step, x)) / (2.0 * step)
        volume = weight * dA * (along * curved.tangent(0, at)).sum(axis=0)
        density = np.tensordot(spread.parts, spread.distributions(curved, at, x), axes=1)
        px, py = curved.points(0, at, x)
        total += [*(density @ volume), (px * density[1] - py * density[0]) @ volume]
    assert_statically_equal(spread, total, 1e-8)


def test_a_pure_couple_may_enter_as_a_body_load() -> None:
    curved = MEMBERS["left arc"]
    spread = enter(curved, body((0.0, 0.0), 45000.0))
    found = spread.part_resultants(curved, spread.first, spread.last) @ spread.parts
    assert found[:2] == pytest.approx([0.0, 0.0], abs=1e-9)
    assert found[2] == pytest.approx(45000.0, rel=1e-12)


@given(
    fx=st.floats(-1e4, 1e4),
    fy=st.floats(-1e4, 1e4),
    share=st.floats(0.2, 0.8),
    name=st.sampled_from(sorted(MEMBERS)),
    face=st.sampled_from(FACES),
    unit=st.sampled_from([1e-3, 1.0, 1.0 / 25.4]),
)
@settings(deadline=None, max_examples=40)
def test_any_patch_has_its_resultant_in_any_unit(
    fx: float, fy: float, share: float, name: str, face: Face, unit: float
) -> None:
    # A force below rounding of any other is none.
    assume(math.hypot(fx, fy) > 1e-6)
    curved = scaled(MEMBERS[name], unit)
    spread = enter(curved, patch((fx, fy), face, share, 20.0 * unit))
    found = spread.part_resultants(curved, spread.first, spread.last) @ spread.parts
    (x, y), size = spread.point, math.hypot(fx, fy)
    assert found[:2] == pytest.approx([fx, fy], abs=1e-10 * size)
    assert found[2] - (x * fy - y * fx) == pytest.approx(0.0, abs=1e-10 * size * 100.0 * unit)


def scaled(curved: Member, unit: float) -> Member:
    pieces: list[Piece] = []
    for piece in curved.pieces:
        sections = (rescaled(piece.sections[0], unit), rescaled(piece.sections[1], unit))
        if isinstance(piece, Arc):
            pieces.append(Arc(piece.radius * unit, piece.sweep, sections))
        else:
            pieces.append(Straight(piece.length * unit, sections))
    x, y = curved.start
    return Member(curved.datum, (x * unit, y * unit), curved.heading, tuple(pieces))


ZERO_WIDTH: list[tuple[Section, Face]] = [
    (shapes.circle(40.0), "inner"),
    (shapes.ellipse(40.0, 25.0), "outer"),
    (shapes.tube(40.0, 30.0), "inner"),
    (shapes.triangle(40.0, 30.0, "inner"), "outer"),
    (shapes.widths([(0.0, 0.0), (10.0, 20.0), (40.0, 20.0)]), "inner"),
]


@pytest.mark.parametrize(("section", "face"), ZERO_WIDTH, ids=lambda value: getattr(value, "shape", value))
@pytest.mark.parametrize("kind", ["patch", "bearing"])
def test_on_a_face_without_width_a_load_enters_over_the_depth_with_the_same_resultant(
    section: Section, face: Face, kind: str
) -> None:
    curved = member(arc(60.0, 150.0, section))
    load: Any = {
        "patch": patch(OBLIQUE, face, share=0.5),
        "bearing": bearing(normal_force(curved, face, 0.5, 2000.0), face),
    }[kind]
    spread = enter(curved, load)
    assert isinstance(spread, BodySpread)
    assert spread.point == pytest.approx(face_points(curved, 0, face, np.array([0.5]))[:, 0].tolist(), rel=1e-9)
    found = spread.part_resultants(curved, spread.first, spread.last) @ spread.parts
    assert_statically_equal(spread, found, 1e-12)


@pytest.mark.parametrize(
    "section", [shapes.triangle(40.0, 30.0, "inner"), shapes.widths([(0.0, 20.0), (40.0, 0.0)])], ids=["base", "row"]
)
def test_the_other_face_of_such_a_section_takes_a_traction(section: Section) -> None:
    assert isinstance(enter(member(arc(60.0, 150.0, section)), patch(OBLIQUE)), FaceSpread)


REFUSED: dict[str, tuple[Member, FaceLoad | BodyLoad, str, str]] = {
    "patch over the start": (
        member(straight(120.0)),
        patch(OBLIQUE, share=0.05),
        "width",
        "from -4 to 16 of its piece, which goes from 0 to 120",
    ),
    "patch over the end of an arc": (
        member(arc(50.0, -90.0)),
        patch(OBLIQUE, share=0.95),
        "width",
        "of its piece, which goes from 0 to 90",
    ),
    "body load wider than its piece": (member(straight(120.0)), body(OBLIQUE, 0.0, width=130.0), "width", "-5 to 125"),
    "bearing over the end": (
        member(straight(120.0)),
        bearing((0.0, -1.0), share=0.9),
        "pin_diameter",
        "from 93 to 123",
    ),
    "pin larger than its seat": (
        member(arc(50.0, 180.0)),
        bearing((1.0, 0.0), pin=101.0),
        "pin_diameter",
        "diameter of the seat, 100",
    ),
    "force along a straight face": (member(straight(120.0)), bearing((1.0, 0.0)), "force", "nowhere on this piece"),
    "force away from a straight face": (member(straight(120.0)), bearing((0.0, 1.0)), "force", "nowhere on this piece"),
    "force out of a seat": (member(arc(50.0, 90.0)), bearing((-1.0, 1.0)), "force", "nowhere on this piece"),
    "force parallel only beyond the piece": (
        member(arc(50.0, 90.0)),
        bearing((1.0, 0.2)),
        "force",
        "nowhere on this piece",
    ),
}


@pytest.mark.parametrize("case", REFUSED)
def test_a_load_that_cannot_enter_is_refused_by_its_key(case: str) -> None:
    curved, load, key, text = REFUSED[case]
    with pytest.raises(LoadError, match=text) as refused:
        enter(curved, load)
    assert refused.value.key == key
