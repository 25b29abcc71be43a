"""The stated uncertainty: it covers the true error, is not idle, and refinement goes on until it meets the target."""

from __future__ import annotations

import itertools
import math
from functools import lru_cache

import numpy as np
import pytest
from bars import STEEL, exact_fibres, fibres, pulled, rectangular_bar, solved, stations, straightened

from intrados.fem import accuracy
from intrados.fem.accuracy import FACES, Pair, refine
from intrados.theory.load import Bearing, BodyLoad, EndLoad, FaceLoad, Patch
from intrados.theory.member import Arc, Member, Straight
from intrados.theory.quadrature import Array
from intrados.theory.shapes import rectangle, tee, trapezoid
from intrados.theory.statics import Loading, loading
from intrados.theory.station import Station

DEGREES = (2, 3, 4, 5, 6)


@lru_cache
def random_bars() -> dict[int, tuple[Array, ...]]:
    """Errors, uncertainties and scales at 5 stations of 40 random bars, both fibres, by the finer degree of a pair.

    All draws count together, so they are drawn from one seed. R/h goes from nearly a point to 5.
    """
    draw = np.random.default_rng(20)
    found: dict[int, list[tuple[Array, Array, Array]]] = {degree: [] for degree in DEGREES[1:]}
    for _ in range(40):
        depth = draw.uniform(5.0, 200.0)
        inner = depth * (draw.uniform(0.53, 5.0) - 0.5)
        member = rectangular_bar(inner, inner + depth, draw.uniform(0.1, 2.0) * depth, draw.uniform(30.0, 270.0))
        force = tuple(draw.normal(size=2) * 1e3)
        case = loading(member, "free", "free", pulled(member, force, draw.normal() * 3e3 * depth))
        at = stations(*[(0, float(share)) for share in np.sort(draw.uniform(0.03, 0.97, 5))])
        exact = exact_fibres(case, at)
        solutions = [solved(case, at, degree) for degree in DEGREES]
        for coarse, fine in itertools.pairwise(solutions):
            pair = Pair(coarse, fine)
            stated = np.array([[pair.at(0, face, station) for face in FACES] for station in at])
            scale = np.abs(exact).max(axis=1, keepdims=True) + 0.0 * exact
            found[fine.membrane.square.degree].append((np.abs(fibres(fine, at) - exact), stated, scale))
    return {degree: tuple(np.array(values) for values in zip(*rows, strict=True)) for degree, rows in found.items()}


@pytest.mark.parametrize("degree", DEGREES[1:])
def test_the_uncertainty_of_every_pair_covers_the_error_on_random_bars(degree: int) -> None:
    error, stated, _ = random_bars()[degree]
    assert error.size == 400
    assert np.mean(error <= stated) >= 0.95


def test_coverage_is_no_worse_on_the_worst_bar() -> None:
    """No single bar falls out: on each, at each degree, at least eight of its ten numbers are covered."""
    for error, stated, _ in random_bars().values():
        assert np.mean(error <= stated, axis=(1, 2)).min() >= 0.8


def test_the_uncertainty_falls_with_the_error() -> None:
    """It is a bound, but not an idle one: it falls by a factor of four a degree, as solutions do."""
    medians = [float(np.median(stated / scale)) for _, stated, scale in random_bars().values()]
    assert np.polyfit(np.arange(len(medians)), np.log10(medians), 1)[0] < -0.6
    assert medians[0] < 0.1


def hook_under(load: FaceLoad) -> tuple[Loading, tuple[Station, ...]]:
    both = (trapezoid(60.0, 40.0, 20.0),) * 2
    member = Member("inner", (0.0, 0.0), -120.0, (Straight(90.0, both), Arc(35.0, 230.0, both)))
    places = [(0, 0.7), (0, 0.99), (1, 0.01), (1, 0.05), (1, 0.13), (1, 0.3), (1, 0.42), (1, 0.65), (1, 0.9)]
    return loading(member, "clamped", "free", (load,)), stations(*places)


def clamp_frame() -> tuple[Loading, tuple[Station, ...]]:
    both = (tee(60.0, 50.0, 12.0, 12.0, "inner"),) * 2
    member = Member("inner", (0.0, 0.0), 180.0, (Straight(80.0, both), Arc(40.0, 180.0, both), Straight(80.0, both)))
    loads = (
        FaceLoad("screw", 0, 0.25, "inner", (0.0, 8000.0), Patch(16.0)),
        FaceLoad("anvil", 2, 0.75, "inner", (0.0, -8000.0), Patch(16.0)),
    )
    return loading(member, "free", "free", loads), stations((0, 0.6), (0, 0.99), (1, 0.01), (1, 0.3), (1, 0.5))


def bent_over() -> tuple[Loading, tuple[Station, ...]]:
    deep, shallow = (rectangle(depth, 12.0) for depth in (30.0, 20.0))
    pieces = (Arc(60.0, 70.0, (deep, deep)), Straight(50.0, (deep, deep)), Arc(50.0, -60.0, (deep, shallow)))
    member = Member("centroid", (10.0, -20.0), 15.0, pieces)
    loads = (EndLoad("pull", "start", (300.0, -200.0), 4e3), BodyLoad("b", 1, 0.5, (50.0, 70.0), -9e3, 20.0))
    places = [(0, 0.3), (0, 0.98), (1, 0.02), (1, 0.15), (1, 0.95), (2, 0.03), (2, 0.4), (2, 0.6)]
    return loading(member, "free", "clamped", loads), stations(*places)


MEMBERS = {
    "hook, patch": hook_under(FaceLoad("sling", 1, 120.0 / 230.0, "inner", (0.0, -25000.0), Patch(20.0))),
    "hook, bearing": hook_under(FaceLoad("pin", 1, 120.0 / 230.0, "inner", (0.0, -25000.0), Bearing(50.0))),
    "clamp frame": clamp_frame(),
    "bent over": bent_over(),
}


def test_the_uncertainty_covers_the_error_beside_joints_clamps_and_loads() -> None:
    """Against a mesh of half the size at a higher degree; stations as near as 1 % of a piece to its joint."""
    covered: list[Array] = []
    for case, at in MEMBERS.values():
        reference = fibres(solved(case, at, 8, fineness=1), at)
        solutions = [solved(case, at, degree) for degree in (3, 4, 5)]
        for coarse, fine in itertools.pairwise(solutions):
            pair = Pair(coarse, fine)
            stated = np.array([[pair.at(0, face, station) for face in FACES] for station in at])
            covered.append((np.abs(fibres(fine, at) - reference) <= stated).ravel())
    assert np.concatenate(covered).size >= 120
    assert np.mean(np.concatenate(covered)) >= 0.95


def test_refinement_stops_at_the_first_pair_that_meets_the_target() -> None:
    case = straightened(rectangular_bar(30.0, 70.0, 10.0), 1e5)
    at = stations((0, 0.5))
    used = {}
    for target in (1e-2, 1e-6, 2e-8):
        refined = refine((case,), at, ((True,),), STEEL, target)
        worst = [level.worst for level in refined.levels]
        assert worst[0] is None
        assert all(value is not None and value > target for value in worst[1:-1])
        assert worst[-1] is not None and worst[-1] <= target
        assert refined.pair.fine.membrane.square.degree == refined.levels[-1].degree
        used[target] = refined.levels[-1].degree
    assert used[1e-2] < used[1e-6] < used[2e-8]


def test_what_is_not_compared_asks_for_no_refinement() -> None:
    case, _ = MEMBERS["bent over"]
    near = stations((2, 0.98), (0, 0.3))
    both = refine((case,), near, ((True, True),), STEEL, 2e-2)
    away = refine((case,), near, ((False, True),), STEEL, 2e-2)
    assert len(away.levels) < len(both.levels)


def test_a_target_out_of_reach_ends_with_the_last_pair(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(accuracy, "LADDER", ((0, (3, 4)), (1, (3, 4))))
    case = straightened(rectangular_bar(10.0, 70.0, 10.0), 1e5)
    refined = refine((case,), stations((0, 0.5)), ((True,),), STEEL, 1e-12)
    assert [level.degree for level in refined.levels] == [3, 4, 3, 4]
    assert [level.worst is None for level in refined.levels] == [True, False, True, False]
    assert refined.levels[2].cells > 2 * refined.levels[0].cells


def test_two_cases_on_one_factorisation_are_the_two_alone() -> None:
    member = MEMBERS["bent over"][0].member
    loads = [EndLoad("pull", "start", (300.0, -200.0), 4e3), EndLoad("push", "start", (-50.0, 900.0), 0.0)]
    cases = tuple(loading(member, "free", "clamped", (load,)) for load in loads)
    at = stations((0, 0.5), (1, 0.5))
    together = refine(cases, at, ((True,) * 2,) * 2, STEEL, 1e-3).pair.fine
    for index, case in enumerate(cases):
        alone = fibres(solved(case, at, together.membrane.square.degree), at)
        found = np.array([[together.fibre(index, face, station) for face in FACES] for station in at])
        assert found == pytest.approx(alone, rel=1e-9)


def test_the_uncertainty_between_stations_is_that_of_the_worst_point_of_a_column() -> None:
    case, at = MEMBERS["bent over"]
    pair = Pair(solved(case, at, 4), solved(case, at, 5))
    for face in FACES:
        within = pair.in_columns(0, face)
        assert within.shape == (len(pair.fine.membrane.strip.columns),)
        for station in at:
            line = pair.fine.membrane.strip.line_at(station.piece, station.share)
            beside = pair.fine.membrane.strip.columns_beside(line, station.piece)
            own = abs(pair.fine.fibre(0, face, station) - pair.coarse.fibre(0, face, station))
            assert pair.at(0, face, station) <= max(float(within[list(beside)].max()), own) * (1.0 + 1e-12)
    assert math.isclose(pair.largest(0), max(np.abs(pair.fine.cases[0].face(face).hoop).max() for face in FACES))
