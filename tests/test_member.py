"""The member's geometry against elementary geometry, in both turnings and on each datum."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from intrados.theory import shapes
from intrados.theory.member import Arc, Datum, Member, Piece, Straight
from intrados.theory.section import Section, blend

Array = NDArray[np.float64]
BAR = shapes.rectangle(40.0, 20.0)
TRAPEZOID = shapes.trapezoid(60.0, 40.0, 20.0)
DATUMS: list[Datum] = ["inner", "centroid", "outer"]
each_datum = pytest.mark.parametrize("datum", DATUMS)
each_turning = pytest.mark.parametrize("turning", [1, -1], ids=["left", "right"])


def straight(length: float, first: Section = BAR, last: Section | None = None) -> Straight:
    return Straight(length, (first, last or first))


def arc(radius: float, sweep: float, first: Section = BAR, last: Section | None = None) -> Arc:
    return Arc(radius, sweep, (first, last or first))


def member(*pieces: Piece, datum: Datum = "centroid", heading: float = 0.0) -> Member:
    return Member(datum, (0.0, 0.0), heading, pieces)


def at(*shares: float) -> Array:
    return np.array(shares)


def inner_offset(datum: Datum, section: Section) -> float:
    """How far inside the datum line the inner face lies."""
    return {"inner": 0.0, "centroid": section.centroid, "outer": section.depth}[datum]


HOOK_PIECES = [straight(90.0, TRAPEZOID), arc(95.0, 120.0, TRAPEZOID, BAR), arc(80.0, 70.0), straight(50.0)]


def hook(datum: Datum = "inner", turning: int = 1, heading: float = 25.0) -> Member:
    pieces = [
        Arc(piece.radius, turning * piece.sweep, piece.sections) if isinstance(piece, Arc) else piece
        for piece in HOOK_PIECES
    ]
    return Member(datum, (12.0, -7.0), heading, tuple(pieces))


@each_turning
@each_datum
def test_quarter_bend_lies_on_circles_about_its_centre(datum: Datum, turning: int) -> None:
    bend = member(arc(100.0, turning * 90.0, TRAPEZOID), datum=datum)
    centre = np.array([[0.0], [turning * 100.0]])
    share = np.linspace(0.0, 1.0, 7)
    inner_radius = 100.0 - inner_offset(datum, TRAPEZOID)
    for x in (0.0, TRAPEZOID.centroid, 60.0):
        angle = 0.5 * math.pi * share
        radius = inner_radius + x
        expected = centre + radius * np.array([np.sin(angle), -turning * np.cos(angle)])
        assert bend.points(0, share, np.full(7, x)) == pytest.approx(expected, abs=1e-12)
    assert bend.radius(0, 0.3) == pytest.approx(inner_radius + TRAPEZOID.centroid, rel=1e-14)


@each_turning
def test_tangent_turns_with_the_arc_and_the_inner_side_faces_the_centre(turning: int) -> None:
    bend = member(arc(100.0, turning * 90.0), heading=30.0)
    heading = math.radians(30.0 + turning * 45.0)
    assert bend.tangent(0, at(0.5))[:, 0] == pytest.approx([math.cos(heading), math.sin(heading)], abs=1e-14)
    centre = 100.0 * turning * np.array([-math.sin(math.radians(30.0)), math.cos(math.radians(30.0))])
    toward = centre - np.array(bend.centroid_point(0, 0.5))
    assert bend.inward(0, at(0.5))[:, 0] == pytest.approx(toward / 100.0, abs=1e-14)


@each_datum
def test_pieces_follow_one_another_without_a_gap_or_a_kink(datum: Datum) -> None:
    curved = hook(datum)
    for piece in range(3):
        for x in (0.0, curved.depth(piece, at(1.0))[0]):
            end, start = curved.points(piece, at(1.0), at(x)), curved.points(piece + 1, at(0.0), at(x))
            assert end == pytest.approx(start, abs=1e-11)
        assert curved.tangent(piece, at(1.0)) == pytest.approx(curved.tangent(piece + 1, at(0.0)), abs=1e-14)


def test_u_bend_comes_back_alongside() -> None:
    u = member(straight(50.0), arc(30.0, 180.0), straight(50.0), datum="centroid")
    assert u.centroid_point(2, 1.0) == pytest.approx((0.0, 60.0), abs=1e-12)
    assert u.length == pytest.approx(100.0 + 30.0 * math.pi, rel=1e-14)


@each_datum
def test_s_is_measured_along_the_centroid(datum: Datum) -> None:
    bend = member(straight(50.0, TRAPEZOID), arc(100.0, -90.0, TRAPEZOID), datum=datum)
    R = 100.0 - inner_offset(datum, TRAPEZOID) + TRAPEZOID.centroid
    assert bend.s(0, 0.4) == pytest.approx(20.0, rel=1e-14)
    assert bend.s(1, 0.0) == pytest.approx(50.0, rel=1e-14)
    assert bend.s(1, 2.0 / 3.0) == pytest.approx(50.0 + R * math.radians(60.0), rel=1e-13)
    assert bend.length == pytest.approx(50.0 + R * math.radians(90.0), rel=1e-13)


def test_s_along_a_straight_taper_is_the_slant_of_its_centroid() -> None:
    # On its inner face a rectangle of depth 60 to 40 has its centroid at 30, then at 20.
    taper = member(straight(100.0, shapes.rectangle(60.0, 20.0), BAR), datum="inner")
    assert taper.length == pytest.approx(math.hypot(100.0, 10.0), rel=1e-14)


@pytest.mark.parametrize("share", [0.0, 0.2, 0.37, 0.9, 1.0])
@pytest.mark.parametrize(
    ("first", "last"),
    [
        (TRAPEZOID, BAR),
        (shapes.triangle(60.0, 45.0, "inner"), shapes.triangle(40.0, 45.0, "outer")),
        (shapes.tube(50.0, 30.0), shapes.circle(30.0)),
        (shapes.tee(60.0, 60.0, 12.0, 10.0, "inner"), shapes.box(60.0, 50.0, 8.0, 6.0)),
    ],
)
def test_centroid_of_a_taper_is_that_of_its_blended_section(first: Section, last: Section, share: float) -> None:
    taper = member(straight(100.0, first, last))
    assert taper.centroid(0, at(share))[0] == pytest.approx(blend(first, last, share).centroid, rel=1e-13)
    assert taper.depth(0, at(share))[0] == pytest.approx(blend(first, last, share).depth, rel=1e-14)
    assert taper.section(0, share) == blend(first, last, share)


@each_datum
def test_R_of_a_tapered_arc_is_the_distance_of_its_local_centroid_from_the_centre(datum: Datum) -> None:
    bend = member(arc(130.0, 100.0, TRAPEZOID, BAR), datum=datum)
    for share in (0.0, 0.3, 1.0):
        x, y = bend.centroid_point(0, share)
        assert bend.radius(0, share) == pytest.approx(math.hypot(x, y - 130.0), rel=1e-13)


def test_a_straight_has_no_R() -> None:
    assert member(straight(50.0)).radius(0, 0.5) is None


@pytest.mark.parametrize(
    ("pieces", "sides"),
    [
        ([straight(50.0)], (1,)),
        ([straight(50.0), arc(50.0, -90.0)], (-1, -1)),
        ([straight(50.0), straight(20.0), arc(50.0, 90.0), straight(50.0)], (1, 1, 1, 1)),
        ([arc(50.0, -90.0), straight(50.0), arc(50.0, 90.0), straight(9.0)], (-1, -1, 1, 1)),
    ],
    ids=["alone: left", "before an arc: its side", "two straights before an arc", "between arcs: the one before"],
)
def test_inner_side_of_a_straight(pieces: list[Piece], sides: tuple[int, ...]) -> None:
    assert member(*pieces).sides == sides


def test_s_shape_on_the_centroid_keeps_its_faces_in_line_while_inner_and_outer_swap() -> None:
    s_shape = member(arc(50.0, 90.0), straight(30.0), arc(50.0, -90.0))
    inner, outer = s_shape.points(1, at(1.0, 1.0), at(0.0, 40.0)).T
    next_inner, next_outer = s_shape.points(2, at(0.0, 0.0), at(0.0, 40.0)).T
    assert inner == pytest.approx(next_outer, abs=1e-12)
    assert outer == pytest.approx(next_inner, abs=1e-12)
    assert s_shape.centroid_point(2, 1.0) == pytest.approx((100.0, 130.0), abs=1e-12)


def every_point(curved: Member) -> Array:
    """Points of the faces and the centroid line on all pieces, shape (2, n)."""
    share = np.linspace(0.0, 1.0, 5)
    found = []
    for piece in range(len(curved.pieces)):
        depth = curved.depth(piece, share)
        found += [curved.points(piece, share, x) for x in (0.0 * depth, curved.centroid(piece, share), depth)]
    return np.concatenate(found, axis=1)


@each_datum
def test_the_mirrored_member_is_the_mirror_image(datum: Datum) -> None:
    left, right = Member(datum, (0.0, 0.0), 25.0, hook(datum).pieces), hook(datum, -1, -25.0)
    right = Member(datum, (0.0, 0.0), -25.0, right.pieces)
    assert every_point(right) == pytest.approx(every_point(left) * [[1.0], [-1.0]], abs=1e-11)
    assert right.length == pytest.approx(left.length, rel=1e-14)


@given(turn=st.floats(-360.0, 360.0), x=st.floats(-1e3, 1e3), y=st.floats(-1e3, 1e3))
@settings(deadline=None, max_examples=30)
def test_a_moved_and_turned_member_is_the_same_member(turn: float, x: float, y: float) -> None:
    still = Member("inner", (0.0, 0.0), 0.0, hook().pieces)
    moved = Member("inner", (x, y), turn, hook().pieces)
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    expected = np.array([[c, -s], [s, c]]) @ every_point(still) + [[x], [y]]
    assert every_point(moved) == pytest.approx(expected, abs=1e-10)
    assert moved.s(3, 0.5) == still.s(3, 0.5)


@each_turning
@each_datum
def test_velocity_is_the_derivative_of_the_points(datum: Datum, turning: int) -> None:
    curved = hook(datum, turning)
    step = 1e-3
    for piece in range(4):
        share = at(0.2, 0.5, 0.8)

        def path(share: Array, piece: int = piece) -> Array:
            return curved.points(piece, share, 10.0 + 8.0 * share)

        # Fourth-order central differences: the error is of the order of step^4.
        near, far = path(share + step) - path(share - step), path(share + 2 * step) - path(share - 2 * step)
        expected = (8.0 * near - far) / (12.0 * step)
        along, inward = curved.velocity(piece, share, 10.0 + 8.0 * share, np.full(3, 8.0))
        found = along * curved.tangent(piece, share) + inward * curved.inward(piece, share)
        assert found == pytest.approx(expected, abs=1e-8)


@each_datum
def test_centroid_rate_is_the_derivative_of_the_centroid(datum: Datum) -> None:
    taper = member(straight(100.0, shapes.triangle(60.0, 45.0, "inner"), BAR), datum=datum)
    share, step = at(0.1, 0.5, 0.9), 1e-3
    near = taper.centroid(0, share + step) - taper.centroid(0, share - step)
    far = taper.centroid(0, share + 2 * step) - taper.centroid(0, share - 2 * step)
    assert taper.centroid_rate(0, share) == pytest.approx((8.0 * near - far) / (12.0 * step), rel=1e-9)


@pytest.mark.parametrize("radius", [1e5, 1e8, 1e12])
def test_a_slight_arc_loses_no_digits(radius: float) -> None:
    """An arc 100 long: its rise is L^2/2R less L^4/24R^3 and its end falls short of L by L^3/6R^2, less L^5/120R^4."""
    slight = member(arc(radius, math.degrees(100.0 / radius)))
    x, y = slight.centroid_point(0, 1.0)
    assert y == pytest.approx(100.0**2 / (2.0 * radius) - 100.0**4 / (24.0 * radius**3), rel=1e-12)
    assert x == pytest.approx(100.0 - 100.0**3 / (6.0 * radius**2) + 100.0**5 / (120.0 * radius**4), rel=1e-14)
    assert slight.length == pytest.approx(100.0, rel=1e-14)


def test_extent_is_degrees_of_an_arc_and_length_of_a_straight() -> None:
    assert [hook(turning=-1).extent(piece) for piece in range(4)] == [90.0, 120.0, 70.0, 50.0]


def test_size_is_the_largest_distance_between_two_points_of_the_centroid_line() -> None:
    u = member(straight(50.0), arc(30.0, 180.0), straight(50.0))
    # From the tip of one leg, through the centre of the bend, to the far side of the bend.
    assert u.size == pytest.approx(np.hypot(50.0, 30.0) + 30.0, rel=1e-3)
    assert replace(u, heading=37.0).size == pytest.approx(u.size, rel=1e-12)
