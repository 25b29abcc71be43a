"""The plan of the strip: lines where they were asked for, rows at every step of the width, grading."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from bars import bar, pulled, stations

from intrados.fem.strip import Column, Row, Strip, plan
from intrados.theory.load import BodyLoad, FaceLoad, Patch
from intrados.theory.member import Arc, Member, Straight
from intrados.theory.section import Section
from intrados.theory.shapes import box, circle, i_section, rectangle, tee, trapezoid, tube
from intrados.theory.statics import Loading, loading
from intrados.theory.station import Station

SECTIONS = [
    rectangle(40.0, 10.0),
    trapezoid(60.0, 40.0, 20.0),
    tee(60.0, 50.0, 12.0, 12.0, "outer"),
    i_section(80.0, 10.0, 50.0, 12.0, 40.0, 10.0),
    box(60.0, 40.0, 8.0, 6.0),
    circle(40.0),
    tube(50.0, 30.0),
]
each_section = pytest.mark.parametrize("section", SECTIONS, ids=lambda section: section.shape)


def pressed_hook(section: Section, width: float = 12.0) -> Loading:
    both = (section, section)
    member = Member("inner", (0.0, 0.0), -120.0, (Straight(90.0, both), Arc(35.0, 230.0, both)))
    press = BodyLoad("press", 1, 0.55, (0.0, -900.0), 0.0, width)
    return loading(member, "clamped", "free", (press,))


def straight_through_steps(strip: Strip) -> None:
    ends = [float(row.eta(np.array(end))) for row in strip.rows for end in (0.0, 1.0)]
    assert ends[0] == 0.0
    assert ends[-1] == pytest.approx(1.0, abs=1e-14)
    assert ends[1:-1:2] == pytest.approx(ends[2::2], abs=1e-14)


@each_section
@pytest.mark.parametrize("fineness", [0, 1])
def test_columns_tile_every_piece_and_rows_the_depth(section: Section, fineness: int) -> None:
    case = pressed_hook(section)
    strip = plan((case,), (), fineness)
    for piece in (0, 1):
        own = [column for column in strip.columns if column.piece == piece]
        assert own[0].first == 0.0
        assert own[-1].last == 1.0
        assert all(before.last == after.first for before, after in pairwise(own))
        assert all(column.first < column.last for column in own)
    straight_through_steps(strip)
    q = np.linspace(0.0, 1.0, 9)
    for row in strip.rows:
        assert row.eta_rate(q).min() >= 0.0
        numeric = (row.eta(q + 1e-6) - row.eta(q - 1e-6)) / 2e-6
        assert row.eta_rate(q) == pytest.approx(numeric, abs=1e-8)


@each_section
def test_every_step_of_the_width_is_a_line_between_rows(section: Section) -> None:
    strip = plan((pressed_hook(section),), (), 0)
    lines = [float(row.eta(np.array(0.0))) for row in strip.rows] + [1.0]
    for x in section.breaks:
        assert min(abs(line - x / section.depth) for line in lines) < 1e-12


@each_section
def test_the_width_is_smooth_in_every_row(section: Section) -> None:
    """A polynomial of degree 14 in the local coordinate gives it to 1e-6: also where it starts like a square root."""
    strip = plan((pressed_hook(section),), (), 0)
    q = 0.5 - 0.5 * np.cos(np.pi * (np.arange(15) + 0.5) / 15)
    between = np.linspace(0.01, 0.99, 50)
    for row in strip.rows:
        through = np.polynomial.Chebyshev.fit(q, section.width(row.eta(q) * section.depth), 14, domain=[0.0, 1.0])
        wanted = section.width(row.eta(between) * section.depth)
        assert through(between) == pytest.approx(wanted, abs=1e-6 * section.widest)


@pytest.mark.parametrize("fineness", [0, 2])
def test_stations_joints_and_load_edges_are_lines(fineness: int) -> None:
    case = pressed_hook(SECTIONS[0])
    at = stations((0, 0.123), (1, 1.0 / 3.0), (1, 1.0))
    strip = plan((case,), at, fineness)
    spread = case.spreads[0]
    places = [(station.piece, station.share) for station in at]
    places += [(1, spread.first), (1, spread.centre), (1, spread.last), (0, 0.0), (0, 1.0), (1, 0.0)]
    for piece, share in places:
        line = strip.line_at(piece, share)
        for column in strip.columns_beside(line, piece):
            end = strip.columns[column].last if column < line else strip.columns[column].first
            assert end == pytest.approx(share, abs=1e-12)


def test_a_place_that_was_not_asked_for_has_no_line() -> None:
    strip = plan((pressed_hook(SECTIONS[0]),), (), 0)
    with pytest.raises(ValueError, match=r"no cut at share 0\.1234 of piece 0"):
        strip.line_at(0, 0.1234)


def test_the_columns_at_a_joint_belong_to_the_piece_asked_for() -> None:
    strip = plan((pressed_hook(SECTIONS[0]),), (), 0)
    joint = strip.line_at(1, 0.0)
    assert joint == strip.line_at(0, 1.0)
    assert strip.columns_beside(joint, 0) == (joint - 1,)
    assert strip.columns_beside(joint, 1) == (joint,)
    assert strip.columns_beside(0, 0) == (0,)


def test_lines_that_all_cases_need_are_in_the_one_strip() -> None:
    member = pressed_hook(SECTIONS[0]).member
    cases = [
        loading(member, "clamped", "free", (BodyLoad("b", 1, share, (0.0, -1.0), 0.0, 10.0),)) for share in (0.3, 0.7)
    ]
    strip = plan(tuple(cases), (), 0)
    for case in cases:
        strip.line_at(1, case.spreads[0].first)
        strip.line_at(1, case.spreads[0].last)


@each_section
def test_columns_are_no_longer_than_a_depth_or_twenty_degrees(section: Section) -> None:
    case = pressed_hook(section)
    member = case.member
    for fineness in (0, 1):
        for column in plan((case,), (), fineness).columns:
            share = column.last - column.first
            assert share * member.datum_length(column.piece) <= 0.5**fineness * section.depth * (1.0 + 1e-9)
            assert share * math.degrees(member.turn(column.piece)) <= 0.5**fineness * 20.0 * (1.0 + 1e-9)


def test_columns_shrink_toward_joints_clamps_and_load_edges() -> None:
    case = pressed_hook(SECTIONS[0])
    member, spread = case.member, case.spreads[0]
    strip = plan((case,), (), 0)

    def length(column: Column) -> float:
        return (column.last - column.first) * member.datum_length(column.piece)

    joint, edge = strip.line_at(1, 0.0), strip.line_at(1, spread.first)
    longest = max(length(column) for column in strip.columns)
    assert max(length(strip.columns[column]) for column in (0, joint - 1, joint, edge - 1, edge)) < 0.3 * longest


def test_a_step_of_fineness_halves_every_row_and_keeps_every_line() -> None:
    case = pressed_hook(SECTIONS[2])
    coarse, fine = plan((case,), (), 0), plan((case,), (), 1)
    assert len(fine.rows) == 2 * len(coarse.rows)
    assert len(fine.columns) > 1.5 * len(coarse.columns)
    for column in coarse.columns:
        fine.line_at(column.piece, column.first)


def test_rows_narrow_toward_a_sharp_inner_radius() -> None:
    """From radius to radius a row grows by no more than a factor of two, whatever the depth."""
    member = bar(rectangle(40.0, 10.0), 8.0, 90.0)
    strip = plan((loading(member, "free", "free", pulled(member, (0.0, 0.0), 1.0)),), (), 0)
    for row in strip.rows:
        low, high = 8.0 + 40.0 * row.eta(np.array([0.0, 1.0]))
        assert high / low <= 2.0 + 1e-9


def test_a_narrow_load_gets_shallow_rows_below_its_face() -> None:
    section = rectangle(40.0, 10.0)
    member = bar(section, 60.0, 90.0)

    def outermost(width: float) -> float:
        press = FaceLoad("press", 0, 0.5, "outer", (-1.0, -1.0), Patch(width))
        strip = plan((loading(member, "clamped", "free", (press,)),), (), 0)
        return 1.0 - float(strip.rows[-1].eta(np.array(0.0)))

    assert 0.05 < outermost(4.0) < 0.6 * outermost(40.0) < 0.1


def test_inner_and_outer_change_places_where_a_member_bends_over() -> None:
    both = (rectangle(30.0, 10.0),) * 2
    pieces = (Arc(60.0, 60.0, both), Straight(40.0, both), Arc(60.0, -60.0, both))
    member = Member("centroid", (0.0, 0.0), 0.0, pieces)
    strip = plan((loading(member, "free", "free", pulled(member, (1.0, 2.0), 3.0)),), (), 0)
    eta = np.array([0.2])
    assert [strip.is_turned(piece) for piece in range(3)] == [False, False, True]
    assert strip.inner_share(0, eta) == pytest.approx([0.2])
    assert strip.inner_share(2, eta) == pytest.approx([0.8])
    # The joint is one line of points, seen from either piece.
    x = eta * 30.0
    before, after = member.points(1, np.array([1.0]), x), member.points(2, np.array([0.0]), 30.0 - x)
    assert before == pytest.approx(after, abs=1e-12)


def test_the_width_on_a_taper_is_that_of_the_blended_section() -> None:
    first, second = tee(60.0, 50.0, 12.0, 12.0, "inner"), trapezoid(40.0, 30.0, 10.0)
    member = Member("inner", (0.0, 0.0), 0.0, (Arc(50.0, 120.0, (first, second)),))
    strip = plan((loading(member, "free", "free", pulled(member, (1.0, 2.0), 3.0)),), (Station("m", 0, 0.4),), 0)
    inner = np.array([0.05, 0.15, 0.3, 0.77])
    for share in (0.0, 0.4, 1.0):
        blended = member.section(0, share)
        assert strip.width(0, np.array(share), inner) == pytest.approx(blended.width(inner * blended.depth), rel=1e-12)


def test_a_row_that_starts_round_is_a_square_of_its_coordinate() -> None:
    row = Row((0.0, 0.0, 0.5))
    assert row.eta(np.array([0.0, 0.5, 1.0])) == pytest.approx([0.0, 0.125, 0.5])
    assert row.eta_rate(np.array([0.0, 1.0])) == pytest.approx([0.0, 1.0])
