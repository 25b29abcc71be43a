"""Members that cannot exist, each for one reason, and sound ones that are close to it."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from intrados.theory import shapes
from intrados.theory.member import Arc, Datum, Member, Piece, Straight
from intrados.theory.outline import faults
from intrados.theory.section import Section

BAR = shapes.rectangle(40.0, 20.0)
DEEP = shapes.rectangle(60.0, 20.0)
TEE = shapes.tee(40.0, 40.0, 10.0, 8.0, "inner")


def straight(length: float, first: Section = BAR, last: Section | None = None) -> Straight:
    return Straight(length, (first, last or first))


def arc(radius: float, sweep: float, first: Section = BAR, last: Section | None = None) -> Arc:
    return Arc(radius, sweep, (first, last or first))


def member(*pieces: Piece, datum: Datum = "centroid") -> Member:
    return Member(datum, (0.0, 0.0), 0.0, pieces)


SOUND: dict[str, Member] = {
    "a straight": member(straight(100.0)),
    "a quarter bend": member(arc(30.0, 90.0)),
    "a bend of 350 degrees": member(arc(30.0, 350.0)),
    "a bend of 350 degrees to the right, on its outer face": member(arc(60.0, -350.0), datum="outer"),
    "an inner radius of next to nothing": member(arc(0.1, 90.0), datum="inner"),
    "a hook": member(straight(90.0), arc(50.0, 230.0), datum="inner"),
    "a U with its legs close": member(straight(90.0), arc(20.5, 180.0), straight(90.0)),
    "an S with a straight between": member(arc(40.0, 180.0), straight(10.0), arc(40.0, -180.0)),
    "a closed frame cut once": member(
        straight(50.0), arc(40.0, 180.0), straight(100.0), arc(40.0, 180.0), straight(49.0)
    ),
    "a taper": member(straight(60.0, DEEP), arc(80.0, 90.0, DEEP, BAR), straight(60.0)),
    "a jump in width": member(straight(60.0), arc(80.0, 90.0, shapes.rectangle(40.0, 35.0))),
    "another shape of the same depth, traced on a face": member(straight(60.0), arc(30.0, 90.0, TEE), datum="inner"),
}


@pytest.mark.parametrize("name", SOUND)
def test_a_sound_member_has_no_fault(name: str) -> None:
    assert faults(SOUND[name]) == ()


FAULTY: dict[str, tuple[Member, int, str, str]] = {
    "inner face at the centre": (member(arc(0.0, 90.0), datum="inner"), 0, "arc", "must exceed 0"),
    "centroid on the centre of its inner face": (member(arc(20.0, 90.0)), 0, "arc", "must exceed 20"),
    "round bar whose centroid rounds down": (member(arc(20.0, 90.0, shapes.circle(40.0))), 0, "arc", "must exceed 20"),
    "outer radius no more than the depth": (member(arc(40.0, 90.0), datum="outer"), 0, "arc", "must exceed 40"),
    "taper whose far end is too deep": (member(arc(50.0, 90.0, BAR, DEEP), datum="outer"), 0, "arc", "must exceed 60"),
    "taper whose centroid lies furthest out between its ends": (
        # Centroids 30 and 30 at the ends, 30.25 midway.
        member(
            arc(30.1, 90.0, shapes.trapezoid(50.0, 10.0, 40.0), shapes.rectangle(60.0, 25.0)),
        ),
        0,
        "arc",
        "must exceed 30.25",
    ),
    "depths that do not meet": (member(straight(60.0, DEEP), arc(80.0, 90.0)), 1, "section", "taper instead"),
    "centroids that do not meet": (member(straight(60.0), arc(80.0, 90.0, TEE)), 1, "section", "trace a face"),
    "turning over on a face": (
        member(arc(60.0, 90.0), straight(10.0), arc(60.0, -90.0), datum="inner"),
        2,
        "sweep",
        'datum = "centroid"',
    ),
    "turning over without a straight": (member(arc(60.0, 90.0), arc(60.0, -90.0)), 1, "sweep", "a straight must lie"),
    "turning over an unsymmetric section": (
        member(arc(60.0, 90.0, TEE), straight(10.0, TEE), arc(60.0, -90.0, TEE)),
        2,
        "section",
        "symmetric about its centroid",
    ),
    "a leg through a leg": (
        member(straight(50.0), arc(40.0, 270.0), straight(200.0)),
        2,
        "straight",
        "overlaps piece 1",
    ),
    "a bend through the first leg": (
        member(straight(50.0), arc(40.0, 180.0), straight(20.0), arc(40.0, 150.0)),
        3,
        "sweep",
        "overlaps piece 1",
    ),
    "legs closer than the depth": (
        member(straight(90.0), arc(30.0, 175.0), straight(20.0), arc(30.0, 40.0), straight(400.0)),
        4,
        "straight",
        "overlaps piece 1",
    ),
    "a bend past a full turn": (member(arc(50.0, 400.0)), 0, "sweep", "overlaps itself"),
    "a bend past a full turn by whole chords": (member(arc(50.0, 396.0)), 0, "sweep", "overlaps itself"),
    "a closed frame that goes on into its first leg": (
        member(straight(50.0), arc(40.0, 180.0), straight(100.0), arc(40.0, 180.0), straight(75.0)),
        4,
        "straight",
        "overlaps piece 1",
    ),
}


HEADINGS = st.floats(-180.0, 180.0)


@given(heading=HEADINGS)
@settings(deadline=None, max_examples=40)
def test_a_frame_that_just_closes_is_sound_whichever_way_it_lies(heading: float) -> None:
    for pieces in (
        (straight(50.0), arc(40.0, 180.0), straight(100.0), arc(40.0, 180.0), straight(50.0)),
        (arc(40.0, 180.0), arc(40.0, 180.0)),
        (arc(40.0, -200.0), arc(40.0, -160.0)),
    ):
        assert faults(Member("centroid", (7.0, 3.0), heading, pieces)) == ()


@given(heading=HEADINGS, more=st.floats(0.01, 199.0))
@settings(deadline=None, max_examples=40)
def test_a_frame_that_goes_on_into_itself_is_faulty_whichever_way_it_lies(heading: float, more: float) -> None:
    pieces = (straight(50.0), arc(40.0, 180.0), straight(100.0), arc(40.0, 180.0), straight(50.0 + more))
    (fault,) = faults(Member("centroid", (7.0, 3.0), heading, pieces))
    assert (fault.piece, fault.key) == (4, "straight")


@given(heading=HEADINGS, sweep=st.sampled_from([180.1, 190.0, 198.0, 240.0, 300.0]))
@settings(deadline=None, max_examples=40)
def test_a_ring_that_goes_on_into_itself_is_faulty_whichever_way_it_lies(heading: float, sweep: float) -> None:
    (fault,) = faults(Member("centroid", (7.0, 3.0), heading, (arc(40.0, 180.0), arc(40.0, sweep))))
    assert (fault.piece, fault.key) == (1, "sweep")


@pytest.mark.parametrize("name", FAULTY)
def test_an_impossible_member_has_its_one_fault(name: str) -> None:
    faulty, piece, key, text = FAULTY[name]
    (fault,) = faults(faulty)
    assert (fault.piece, fault.key) == (piece, key)
    assert text in fault.text


def test_every_fault_is_named_at_once() -> None:
    found = faults(member(arc(10.0, 90.0), straight(50.0, DEEP), arc(20.0, -90.0, DEEP)))
    assert [(fault.piece, fault.key) for fault in found] == [(0, "arc"), (1, "section"), (2, "arc")]


def test_faults_come_in_the_order_of_the_pieces() -> None:
    found = faults(member(straight(50.0, DEEP), straight(50.0), arc(10.0, 90.0)))
    assert [fault.piece for fault in found] == [1, 2]
