"""Where a station stands: distance to the nearest load in depths, clamps, joints and tapers."""

from __future__ import annotations

import math

import pytest

from intrados.compare.zone import Place, place
from intrados.theory.load import BodyLoad, EndLoad, FaceLoad, Load, Patch
from intrados.theory.member import Arc, Member, Straight
from intrados.theory.shapes import rectangle
from intrados.theory.statics import Loading, loading

DEEP, SHALLOW = rectangle(40.0, 10.0), rectangle(20.0, 10.0)
# A straight of 400, an arc whose centroid has the radius 100, a straight that tapers over 200.
ARC = 100.0 * math.pi / 2.0
MEMBER = Member(
    "centroid",
    (0.0, 0.0),
    0.0,
    (Straight(400.0, (DEEP, DEEP)), Arc(100.0, 90.0, (DEEP, DEEP)), Straight(200.0, (DEEP, SHALLOW))),
)
# From 180 to 220 of the first piece.
PATCH = FaceLoad("patch", 0, 0.5, "inner", (0.0, -1.0), Patch(40.0))
END = EndLoad("tip", "end", (1.0, 0.0), 0.0)


def loaded(*loads: Load, start: str = "clamped", end: str = "free") -> Loading:
    ends = {"clamped": "clamped", "free": "free"}
    assert {start, end} <= set(ends)
    return loading(
        MEMBER, "clamped" if start == "clamped" else "free", "clamped" if end == "clamped" else "free", loads
    )


def at(s: float, *loads: Load, end: str = "free") -> Place:
    """The place at a distance along the first piece."""
    return place(loaded(*loads, start="free" if end == "clamped" else "clamped", end=end), 0, s / 400.0)


@pytest.mark.parametrize(
    ("s", "depths"), [(100.0, 2.0), (160.0, 0.5), (180.0, 0.0), (200.0, 0.0), (220.0, 0.0), (230.0, 0.25), (300.0, 2.0)]
)
def test_distance_is_that_to_the_nearer_edge_in_depths(s: float, depths: float) -> None:
    where = at(s, PATCH)
    assert where.distance_to_load == pytest.approx(depths, abs=1e-12)
    assert where.in_load == (depths == 0.0)
    assert where.comparable == (depths > 0.0)


def test_an_edge_counts_as_inside_whatever_rounding_does() -> None:
    assert at(math.nextafter(180.0, 0.0), PATCH).in_load
    assert at(math.nextafter(220.0, 400.0), PATCH).in_load
    assert not at(179.99, PATCH).in_load


def test_the_nearest_of_several_loads_counts_and_end_loads_do_not() -> None:
    body = BodyLoad("body", 0, 0.75, (0.0, 1.0), 0.0, 20.0)
    assert at(250.0, PATCH, body).distance_to_load == pytest.approx(30.0 / 40.0)
    assert at(280.0, PATCH, body).distance_to_load == pytest.approx(10.0 / 40.0)
    assert at(390.0, END).distance_to_load is None
    assert at(390.0, PATCH, END).distance_to_load == pytest.approx(170.0 / 40.0)


def test_distance_runs_along_the_centroid_line_through_bends_and_in_local_depths() -> None:
    middle_of_arc = place(loaded(PATCH), 1, 0.5)
    assert middle_of_arc.distance_to_load == pytest.approx((180.0 + ARC / 2.0) / 40.0)
    # Half-way along the taper the depth is 30.
    assert place(loaded(PATCH), 2, 0.5).distance_to_load == pytest.approx((180.0 + ARC + 100.0) / 30.0)


@pytest.mark.parametrize(("s", "near"), [(0.0, True), (39.9, True), (40.1, False), (399.0, False)])
def test_a_depth_from_a_clamped_start_is_support(s: float, near: bool) -> None:
    assert at(s, END).near_clamp == near
    assert at(s, END).comparable == (not near)


def test_a_depth_from_a_clamped_end_is_support_in_local_depths() -> None:
    start_load = EndLoad("pull", "start", (1.0, 0.0), 0.0)
    held = loaded(start_load, start="free", end="clamped")
    # The depth there is some 22: 0.9 is 20 from the end, 0.88 is 24 from it.
    assert place(held, 2, 0.9).near_clamp
    assert not place(held, 2, 0.87).near_clamp
    assert not place(held, 0, 0.0).near_clamp


def test_a_free_member_has_no_support() -> None:
    free = loaded(END, EndLoad("other", "start", (-1.0, 0.0), 0.0), start="free")
    assert not any(place(free, piece, share).near_clamp for piece in range(3) for share in (0.0, 0.5, 1.0))


def test_half_a_depth_from_a_joint_is_beside_it_unless_a_load_is_near() -> None:
    assert at(381.0, END).at_joint
    assert not at(379.0, END).at_joint
    # The patch ends 20 before the joint, less than a depth from either side of it.
    near = FaceLoad("near", 0, 0.9, "inner", (0.0, -1.0), Patch(40.0))
    assert not at(395.0, near).at_joint
    assert not place(loaded(near), 1, 0.05).at_joint
    # 1.1 depths away: the joint.
    away = FaceLoad("away", 0, 0.8, "inner", (0.0, -1.0), Patch(20.0))
    assert at(385.0, away).at_joint


def test_all_of_a_taper_counts_as_a_joint_whatever_is_near() -> None:
    body = BodyLoad("body", 2, 0.4, (0.0, 1.0), 0.0, 20.0)
    assert all(place(loaded(body), 2, share).at_joint for share in (0.1, 0.6, 0.9))
