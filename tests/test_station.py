"""Stations: where they fall by default, what they are called, and how named ones take their place."""

from __future__ import annotations

import pytest

from intrados.theory import shapes
from intrados.theory.member import Arc, Member, Piece, Straight
from intrados.theory.station import Station, default_stations, named_station, with_named

BAR = shapes.rectangle(40.0, 20.0)
DEEP = shapes.rectangle(60.0, 20.0)


def member(*pieces: Piece) -> Member:
    return Member("inner", (0.0, 0.0), 0.0, pieces)


def arc(sweep: float) -> Arc:
    return Arc(50.0, sweep, (BAR, BAR))


def straight(length: float) -> Straight:
    return Straight(length, (BAR, BAR))


def names(*pieces: Piece, every: float = 15.0) -> list[str]:
    return [station.name for station in default_stations(member(*pieces), every)]


@pytest.mark.parametrize(
    ("sweep", "every", "angles"),
    [
        (60.0, 15.0, ["15", "30", "45"]),
        (-60.0, 15.0, ["15", "30", "45"]),
        (62.0, 15.0, ["15", "30", "45", "60"]),
        (15.0, 15.0, ["7.5"]),
        (10.0, 15.0, ["5"]),
        (1.2, 0.4, ["0.4", "0.8"]),
        (100.0 / 3.0, 100.0 / 9.0, ["11.1111", "22.2222"]),
    ],
)
def test_on_an_arc_stations_stand_at_multiples_strictly_inside(sweep: float, every: float, angles: list[str]) -> None:
    assert names(arc(sweep), every=every) == [f"1:{angle}" for angle in angles]


@pytest.mark.parametrize(
    ("length", "distances"),
    [(40.0, ["20"]), (30.0, ["15"]), (80.0, ["20", "60"]), (81.0, ["13.5", "40.5", "67.5"])],
)
def test_on_a_straight_stations_halve_equal_parts_no_longer_than_the_depth(length: float, distances: list[str]) -> None:
    assert names(straight(length)) == [f"1:{distance}" for distance in distances]


def test_on_a_tapered_straight_the_lesser_depth_counts() -> None:
    assert len(names(Straight(120.0, (DEEP, BAR)))) == 3


def test_pieces_count_from_one_in_names_and_from_zero_inside() -> None:
    stations = default_stations(member(straight(40.0), arc(45.0)), 15.0)
    assert stations == (Station("1:20", 0, 0.5), Station("2:15", 1, 1.0 / 3.0), Station("2:30", 1, 2.0 / 3.0))


def test_a_named_station_is_placed_by_angle_or_distance() -> None:
    curved = member(straight(40.0), arc(-120.0))
    assert named_station(curved, "grip", 0, 10.0) == Station("grip", 0, 0.25)
    assert named_station(curved, "throat", 1, 30.0) == Station("throat", 1, 0.25)


def test_a_named_station_replaces_the_default_it_falls_on() -> None:
    curved = member(arc(60.0))
    stations = with_named(default_stations(curved, 15.0), (named_station(curved, "throat", 0, 30.0),))
    assert [station.name for station in stations] == ["1:15", "throat", "1:45"]


def test_stations_stand_in_the_order_of_the_member() -> None:
    curved = member(straight(40.0), arc(60.0))
    named = (named_station(curved, "tip", 1, 60.0), named_station(curved, "root", 0, 0.0))
    stations = with_named(default_stations(curved, 30.0), named)
    assert [station.name for station in stations] == ["root", "1:20", "2:30", "tip"]


def test_a_joint_may_be_named_from_either_piece() -> None:
    curved = member(straight(40.0), arc(60.0))
    before, after = named_station(curved, "before", 0, 40.0), named_station(curved, "after", 1, 0.0)
    assert with_named((), (after, before)) == (before, after)
    assert curved.radius(before.piece, before.share) is None
    assert curved.radius(after.piece, after.share) == pytest.approx(70.0)
