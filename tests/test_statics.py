"""N, V and M: by hand, by their differential equations, and from either side."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from intrados.theory import shapes
from intrados.theory.load import BodyLoad, EndLoad, FaceLoad, Load, Patch, Vector
from intrados.theory.member import Arc, Member, Piece, Straight
from intrados.theory.section import Section
from intrados.theory.statics import Imbalance, Loading, Support, end_place, loading

BAR = shapes.rectangle(40.0, 20.0)
TEE = shapes.tee(60.0, 40.0, 12.0, 10.0, "inner")


def straight(length: float, first: Section = BAR, last: Section | None = None) -> Straight:
    return Straight(length, (first, last or first))


def arc(radius: float, sweep: float, first: Section = BAR, last: Section | None = None) -> Arc:
    return Arc(radius, sweep, (first, last or first))


def member(*pieces: Piece, heading: float = 0.0) -> Member:
    return Member("centroid", (0.0, 0.0), heading, pieces)


def held(curved: Member, *loads: Load, start: Support = "clamped", end: Support = "free") -> Loading:
    return loading(curved, start, end, loads)


def tip(force: Vector, moment: float = 0.0) -> EndLoad:
    return EndLoad("tip", "end", force, moment)


def test_cantilever_under_a_tip_force() -> None:
    # Heading +x, inner side to the left (up). A force up at the tip pulls on the lower fibre: M < 0 at the root.
    cantilever = held(member(straight(200.0)), tip((300.0, 500.0)))
    assert cantilever.resultants(0, 0.0) == pytest.approx((300.0, -500.0, -500.0 * 200.0), rel=1e-13)
    assert cantilever.resultants(0, 0.75) == pytest.approx((300.0, -500.0, -500.0 * 50.0), rel=1e-13)
    assert cantilever.resultants(0, 1.0) == pytest.approx((300.0, -500.0, 0.0), abs=1e-9)


def test_cantilever_clamped_at_its_end_has_the_same_resultants_seen_from_the_other_side() -> None:
    # The force up at the start: the part at smaller s is pushed up, so the other pulls it down, toward the outside.
    load = EndLoad("tip", "start", (0.0, 500.0), 0.0)
    cantilever = held(member(straight(200.0)), load, start="free", end="clamped")
    assert cantilever.resultants(0, 0.5) == pytest.approx((0.0, 500.0, -500.0 * 100.0), rel=1e-13)


def test_a_counter_clockwise_tip_moment_closes_a_left_bend_and_opens_a_right_one() -> None:
    for sweep, M in ((90.0, -7000.0), (-90.0, 7000.0)):
        assert held(member(arc(100.0, sweep)), tip((0.0, 0.0), 7000.0)).resultants(0, 0.4) == pytest.approx(
            (0.0, 0.0, M), abs=1e-9
        )


@pytest.mark.parametrize("f", [0.0, 20.0, 45.0, 90.0])
def test_quarter_bend_under_a_force_through_its_centre(f: float) -> None:
    """At the angle f before the end N = P cos f, V = -P sin f, M = N R, by moments about the centre."""
    P, R = 2000.0, 100.0
    # The bend ends heading up at (R, R); its centre is (0, R). Pulled straight on.
    quarter = held(member(arc(R, 90.0)), tip((0.0, P)), EndLoad("couple", "end", (0.0, 0.0), -P * R))
    angle = math.radians(f)
    N, V, M = quarter.resultants(0, 1.0 - f / 90.0)
    assert (N, V) == pytest.approx((P * math.cos(angle), -P * math.sin(angle)), abs=1e-9)
    assert M == pytest.approx(P * R * math.cos(angle), abs=1e-9 * P * R)


@pytest.mark.parametrize("turning", [1, -1])
def test_hook_carries_its_load_through_the_centre_of_its_bend(turning: int) -> None:
    """A shank going down, then a half circle R; W down through the centre from a point of the inner face.

    Where the bend starts the cut is horizontal: N = W, V = 0, M = W R; halfway to the load it lies at 45 degrees.
    """
    W, R = 25000.0, 80.0
    hook = member(straight(150.0), arc(R, turning * 180.0), heading=-90.0)
    load = FaceLoad("sling", 1, 0.5, "inner", (0.0, -W), Patch(20.0))
    loaded = held(hook, load)
    N, V, M = loaded.resultants(1, 0.0)
    assert (N, V) == pytest.approx((W, 0.0), abs=1e-9 * W)
    assert M == pytest.approx(W * R, rel=1e-12)
    N, V, M = loaded.resultants(1, 0.25)
    assert (N, V) == pytest.approx((W / math.sqrt(2.0), W / math.sqrt(2.0)), rel=1e-12)
    assert M == pytest.approx(N * R, rel=1e-12)
    assert loaded.resultants(0, 0.3) == pytest.approx((W, 0.0, W * R), abs=1e-9 * W * R)
    assert loaded.resultants(1, 0.9) == pytest.approx((0.0, 0.0, 0.0), abs=1e-9 * W)


def test_within_a_patch_the_force_has_entered_in_part() -> None:
    cantilever = held(member(straight(200.0)), FaceLoad("load", 0, 0.5, "inner", (0.0, -400.0), Patch(40.0)))
    assert cantilever.resultants(0, 0.5)[1] == pytest.approx(200.0, rel=1e-12)
    # A quarter of the way along the patch 1/4 - 1/(2 pi) of a cosine square has entered.
    beyond = 1.0 - (0.25 - 0.5 / math.pi)
    assert cantilever.resultants(0, 0.45)[1] == pytest.approx(400.0 * beyond, rel=1e-12)
    assert cantilever.resultants(0, 0.2) == pytest.approx((0.0, 400.0, 400.0 * 60.0), abs=1e-8)


def test_a_force_along_an_eccentric_face_bends_the_member() -> None:
    cantilever = held(member(straight(200.0)), FaceLoad("load", 0, 0.5, "inner", (400.0, 0.0), Patch(40.0)))
    # Along the upper, inner face, 20 above the centroid: tension there, M = +400 * 20.
    assert cantilever.resultants(0, 0.1) == pytest.approx((400.0, 0.0, 8000.0), abs=1e-8)


def test_a_moment_at_the_centroid_steps_the_bending_moment() -> None:
    cantilever = held(member(straight(200.0)), BodyLoad("load", 0, 0.5, (0.0, 0.0), 6000.0, 20.0))
    assert cantilever.resultants(0, 0.1) == pytest.approx((0.0, 0.0, -6000.0), abs=1e-8)
    assert cantilever.resultants(0, 0.9) == pytest.approx((0.0, 0.0, 0.0), abs=1e-8)


def frame(heading: float = 0.0, turning: int = 1) -> Member:
    """A clamp frame: two arms and a back with two bends, T section."""
    bend = arc(90.0, turning * 90.0, TEE)
    return member(straight(150.0, TEE), bend, straight(200.0, TEE), bend, straight(150.0, TEE), heading=heading)


def turned(vector: Vector, degrees: float, turning: int = 1) -> Vector:
    """A vector mirrored in the x axis (``turning`` -1), then turned."""
    c, s = math.cos(math.radians(degrees)), math.sin(math.radians(degrees))
    x, y = vector[0], turning * vector[1]
    return (c * x - s * y, s * x + c * y)


def clamp(heading: float = 0.0, turning: int = 1) -> tuple[Load, ...]:
    """Opening forces on both jaws, one on a face and one on an end, with the couple that balances their offset."""
    opening, closing = turned((0.0, -8000.0), heading, turning), turned((0.0, 8000.0), heading, turning)
    # The jaw's force acts 120 from the start, the other at the end, which stands above the start.
    return (
        FaceLoad("jaw", 0, 0.8, "inner", opening, Patch(30.0)),
        EndLoad("end", "end", closing, turning * 8000.0 * 120.0),
    )


def test_a_frame_under_balanced_loads_is_in_balance() -> None:
    free = held(frame(), *clamp(), start="free", end="free")
    assert free.imbalance() is None
    # At the middle of the back, 90 beyond the start of the bends: N = P, M = P times the distance of 120 from 240.
    assert free.resultants(2, 0.5) == pytest.approx((8000.0, 0.0, 8000.0 * 120.0), rel=1e-10, abs=1e-6)


PLACES = [(0, 0.3), (0, 0.78), (1, 0.1), (1, 0.5), (2, 0.5), (3, 0.8), (4, 0.5)]


def test_a_free_member_seen_from_either_side_is_the_same() -> None:
    either = [
        held(frame(), *clamp(), start="free", end="free"),
        held(frame(), *clamp(), start="free", end="clamped"),
        held(frame(), *clamp(), start="clamped", end="free"),
    ]
    for place in PLACES:
        first, *others = [case.resultants(*place) for case in either]
        for other in others:
            assert other == pytest.approx(first, abs=1e-9 * 8000.0 * 440.0)


@given(turn=st.floats(-360.0, 360.0))
@settings(deadline=None, max_examples=15)
def test_a_turned_job_keeps_N_V_M(turn: float) -> None:
    still = held(frame(), *clamp(), start="free", end="free")
    moved = held(frame(turn), *clamp(turn), start="free", end="free")
    assert moved.imbalance() is None
    for place in PLACES:
        N, V, M = still.resultants(*place)
        assert moved.resultants(*place)[:2] == pytest.approx((N, V), abs=1e-9 * 8000.0)
        assert moved.resultants(*place)[2] == pytest.approx(M, abs=1e-9 * 8000.0 * 440.0)


@given(turn=st.floats(-360.0, 360.0))
@settings(deadline=None, max_examples=15)
def test_a_mirrored_job_keeps_N_V_M(turn: float) -> None:
    left = held(frame(turn), *clamp(turn), start="free", end="free")
    right = held(frame(turn, -1), *clamp(turn, -1), start="free", end="free")
    for place in PLACES:
        N, V, M = left.resultants(*place)
        assert right.resultants(*place)[:2] == pytest.approx((N, V), abs=1e-9 * 8000.0)
        assert right.resultants(*place)[2] == pytest.approx(M, abs=1e-9 * 8000.0 * 440.0)


@pytest.mark.parametrize("sweep", [130.0, -130.0])
@pytest.mark.parametrize("end_held", [False, True])
def test_on_an_unloaded_arc_the_differential_equations_hold(sweep: float, end_held: bool) -> None:
    """dM/ds = -V and dN/ds = -V/R, also dV/ds = N/R; sixth-order differences."""
    curved = member(straight(50.0), arc(100.0, sweep), straight(70.0), heading=33.0)
    load = EndLoad("tip", "start" if end_held else "end", (900.0, -1700.0), 3e4)
    case = held(curved, load, start="free", end="clamped") if end_held else held(curved, load)
    share, step = 0.37, 0.01
    stencil = {-3: -1, -2: 9, -1: -45, 1: 45, 2: -9, 3: 1}
    samples = {k: np.array(case.resultants(1, share + k * step)) for k in stencil}
    ds = step * 100.0 * math.radians(130.0)
    rates = np.sum([weight * samples[k] for k, weight in stencil.items()], axis=0) / (60.0 * ds)
    N, V, _ = case.resultants(1, share)
    assert rates[0] == pytest.approx(-V / 100.0, rel=1e-8)
    assert rates[1] == pytest.approx(N / 100.0, rel=1e-8)
    assert rates[2] == pytest.approx(-V, rel=1e-8)


@pytest.mark.parametrize("side", [1, -1])
def test_on_an_unloaded_straight_the_moment_falls_by_V(side: int) -> None:
    curved = member(arc(100.0, side * 40.0), straight(70.0))
    case = held(curved, tip((900.0, -1700.0), 3e4))
    (N0, V0, M0), (N1, V1, M1) = case.resultants(1, 0.0), case.resultants(1, 1.0)
    assert (N1, V1) == pytest.approx((N0, V0), rel=1e-12)
    assert M1 - M0 == pytest.approx(-V0 * 70.0, rel=1e-11)


def test_N_V_M_are_the_same_on_both_sides_of_a_joint() -> None:
    case = held(frame(), *clamp(), start="free", end="free")
    for piece in range(4):
        before, after = case.resultants(piece, 1.0), case.resultants(piece + 1, 0.0)
        assert before == pytest.approx(after, abs=1e-9 * 8000.0 * 440.0)


def test_where_an_s_turns_over_V_and_M_change_sign_with_the_inner_side() -> None:
    s_shape = member(arc(50.0, 90.0), straight(30.0), arc(50.0, -90.0))
    case = held(s_shape, tip((400.0, -900.0), 1e4))
    N, V, M = case.resultants(1, 1.0)
    assert case.resultants(2, 0.0) == pytest.approx((N, -V, -M), rel=1e-12)


def test_loads_add_up_and_scale() -> None:
    first, second = clamp()
    both = np.array(held(frame(), first, second).resultants(1, 0.5))
    apart = [np.array(held(frame(), load).resultants(1, 0.5)) for load in (first, second)]
    assert sum(apart) == pytest.approx(both, abs=1e-6)
    doubled = replace(second, force=(0.0, 16000.0), moment=2.0 * 8000.0 * 120.0)
    assert held(frame(), doubled).resultants(1, 0.5) == pytest.approx(tuple(2.0 * apart[1]), rel=1e-12)


def test_an_unbalanced_force_is_stated() -> None:
    jaw, end = clamp()
    free = held(frame(), jaw, replace(end, force=(10.0, 8003.0)), start="free", end="free")
    left = free.imbalance()
    assert left is not None
    assert left.force == pytest.approx((10.0, 3.0), abs=1e-9)


def test_an_unbalanced_moment_is_stated_by_its_value() -> None:
    jaw, end = clamp()
    free = held(frame(), jaw, replace(end, moment=8000.0 * 120.0 - 500.0), start="free", end="free")
    left = free.imbalance()
    assert left is not None
    assert left.force == pytest.approx((0.0, 0.0), abs=1e-9)
    assert left.moment == pytest.approx(-500.0, rel=1e-9)


@pytest.mark.parametrize(("residual", "balanced"), [(0.9e-6, True), (1.1e-6, False)])
def test_balance_is_judged_to_a_millionth_of_the_forces(residual: float, balanced: bool) -> None:
    jaw, end = clamp()
    off = replace(end, force=(residual * 16000.0, 8000.0))
    assert (held(frame(), jaw, off, start="free", end="free").imbalance() is None) == balanced


@pytest.mark.parametrize(("residual", "balanced"), [(0.9e-6, True), (1.1e-6, False)])
def test_couples_alone_are_judged_to_a_millionth_of_the_couples(residual: float, balanced: bool) -> None:
    inside = BodyLoad("inside", 0, 0.5, (0.0, 0.0), 6000.0, 20.0)
    at_end = EndLoad("at the end", "end", (0.0, 0.0), -6000.0 + residual * 12000.0)
    free = held(member(straight(200.0)), inside, at_end, start="free", end="free")
    assert (free.imbalance() is None) == balanced


@pytest.mark.parametrize(("start", "end"), [("clamped", "free"), ("free", "clamped")])
def test_a_clamped_member_balances_whatever_its_loads(start: Support, end: Support) -> None:
    assert held(frame(), clamp()[0], start=start, end=end).imbalance() is None


def test_imbalance_is_a_force_and_a_moment_about_the_middle_of_the_loads() -> None:
    # Two equal forces up, 100 apart on a straight: their middle has no moment.
    bar = member(straight(100.0))
    loads = (EndLoad("left", "start", (0.0, 5.0), 0.0), EndLoad("right", "end", (0.0, 5.0), 0.0))
    left = held(bar, *loads, start="free", end="free").imbalance()
    assert left == Imbalance((0.0, 10.0), pytest.approx(0.0, abs=1e-12))


def test_two_clamped_ends_are_not_determinate() -> None:
    with pytest.raises(ValueError, match="not determined by statics"):
        held(frame(), *clamp(), end="clamped")


def test_ends_are_the_first_and_the_last_place() -> None:
    assert end_place(frame(), "start") == (0, 0.0)
    assert end_place(frame(), "end") == (4, 1.0)
