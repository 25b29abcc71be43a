"""What is concluded from the stations: which fibre governs, where FE peaks, and what the sentence says."""

from __future__ import annotations

from dataclasses import replace

import pytest
import sample
from bracket import GOOD, changed, read

from intrados.compare.conclusion import governing, notes, peak
from intrados.compare.demo import demo_text
from intrados.compare.results import Along, Budget, Fibre, FibreCurve, Peak, StationResult, Verdict

JOB = read(GOOD)
FIRST, SECOND, THIRD = sample.hook().cases[0].stations[4:7]


def fibre(best: float, verdict: Verdict = "holds", hand: float | None = None, budget: Budget | None = None) -> Fibre:
    given = best if hand is None else hand
    terms = budget or Budget(0.0, 0.0, best - given)
    difference = (given - best) / abs(best)
    return replace(
        FIRST.inner,
        hand=given,
        best=best,
        fe=best,
        uncertainty=0.01,
        difference=difference,
        verdict=verdict,
        budget=terms,
    )


def station(at: StationResult, inner: Fibre, outer: Fibre | None = None) -> StationResult:
    zone = "introduction" if inner.verdict == "not comparable" else "theory"
    return replace(at, inner=inner, outer=outer or fibre(-1.0), zone=zone)


def decided(*stations: StationResult, highest: Peak | None = None) -> tuple[str, str, str]:
    found = governing(stations, highest, JOB)
    assert found is not None
    return found.station, found.fibre, found.why


def test_the_largest_comparable_stress_governs_whatever_its_sign() -> None:
    low, high = station(FIRST, fibre(50.0)), station(SECOND, fibre(60.0), fibre(-80.0))
    apart = station(THIRD, fibre(500.0, "not comparable"), fibre(-400.0, "not comparable"))
    assert decided(low, high, apart)[:2] == (SECOND.name, "outer")


def test_a_tie_goes_to_the_station_nearer_the_start_and_then_to_the_inner_fibre() -> None:
    tied = [station(at, fibre(60.0), fibre(-60.0)) for at in (FIRST, SECOND)]
    assert decided(*tied)[:2] == (FIRST.name, "inner")
    # To rounding is a tie too.
    assert decided(tied[0], station(SECOND, fibre(60.0 * (1.0 + 1e-12))))[:2] == (FIRST.name, "inner")
    assert decided(tied[0], station(SECOND, fibre(60.0 * (1.0 + 1e-6))))[:2] == (SECOND.name, "inner")


def test_the_fields_are_those_of_the_fibre() -> None:
    found = governing((station(FIRST, fibre(60.0, hand=58.5)),), None, JOB)
    assert found is not None
    assert (found.hand, found.best, found.uncertainty, found.verdict) == (58.5, 60.0, 0.01, "holds")
    assert found.difference == pytest.approx(-1.5 / 60.0)
    assert found.utilisation == FIRST.utilisation


def test_without_a_comparable_station_nothing_governs() -> None:
    apart = station(FIRST, fibre(50.0, "not comparable"), fibre(-50.0, "not comparable"))
    unloaded = station(SECOND, fibre(1e-9, "unloaded"), fibre(-1e-9, "unloaded"))
    assert governing((apart, unloaded), None, JOB) is None


def test_what_holds_is_said_to_hold() -> None:
    _, _, why = decided(station(FIRST, fibre(60.0, hand=59.0)), station(SECOND, fibre(50.0)))
    assert why.startswith(f"The hand theory holds at the governing station {FIRST.name}, inner fibre")
    assert "hand 59.00 MPa, best 60.00 ± 0.01 MPa" in why
    assert "holds on both fibres at all 2 loaded stations compared" in why


def test_what_is_low_is_said_not_to_be_relied_on_with_its_cause() -> None:
    thick = fibre(60.0, "low", hand=54.0, budget=Budget(5.0, 0.5, 0.5))
    _, _, why = decided(station(FIRST, thick))
    assert why.startswith(f"Do not rely on the hand theory at the governing station {FIRST.name}, inner fibre")
    assert "10.0 % low, on the unsafe side" in why
    assert "too thick for its radius" in why
    # 5 of the best estimate's 60.
    assert "8.3 %" in why
    assert "is low, on the unsafe side, at 1" in why


def test_what_is_high_is_said_to_be_on_the_safe_side() -> None:
    _, _, why = decided(station(FIRST, fibre(-60.0, "high", hand=-66.0)))
    assert "is 10.0 % high" in why
    assert "on the safe side" in why
    assert "the load enters still reaches here" in why


def test_a_lower_stress_that_is_farther_off_is_named_too() -> None:
    held = station(FIRST, fibre(60.0))
    off = station(SECOND, fibre(40.0, "low", hand=30.0))
    assert f"farthest off at {SECOND.name}, inner fibre: 25.0 % low" in decided(held, off)[2]
    # With less than half of the governing stress it is not worth the name.
    assert "farthest off" not in decided(held, station(SECOND, fibre(29.0, "low", hand=20.0)))[2]


def test_a_larger_hand_stress_outside_comparison_is_named_with_its_reason() -> None:
    held = station(FIRST, fibre(60.0))
    apart = station(SECOND, fibre(90.0, "not comparable", hand=75.0), fibre(-1.0, "not comparable"))
    assert f"Station {SECOND.name} has a larger hand stress, 75.00 MPa" in decided(held, apart)[2]
    assert "a load enters there" in decided(held, apart)[2]
    smaller = station(SECOND, fibre(90.0, "not comparable", hand=59.0), fibre(-1.0, "not comparable"))
    assert "larger hand stress" not in decided(held, smaller)[2]


def test_a_peak_between_stations_is_named_if_it_is_noteworthy() -> None:
    held = station(FIRST, fibre(60.0))
    beyond = Peak("outer", 2, 33.3, None, 100.0, -70.0, 0.1, -69.0)
    why = decided(held, highest=beyond)[2]
    assert "the FE reaches -70.00 MPa (outer fibre, piece 2 at 33.3 deg): set a station there" in why
    assert "set a station" not in decided(held, highest=replace(beyond, stress=-61.0))[2]


def test_the_peak_is_the_largest_comparable_stress_of_either_face() -> None:
    nothing = (0.0, 0.0, 0.0)
    curves = Along(
        s=(0.0, 50.0, 160.0),
        piece=(1, 1, 2),
        share=(0.0, 1.0 / 3.0, 0.25),
        comparable=(False, True, True),
        inner=FibreCurve(nothing, (99.0, 10.0, 20.0), (1.0, 2.0, 3.0)),
        outer=FibreCurve((0.0, 0.0, -29.0), (-99.0, -10.0, -30.0), (4.0, 5.0, 6.0)),
    )
    # The second piece is an arc of 90 degrees.
    assert peak(curves, JOB.member) == Peak("outer", 2, 22.5, None, 160.0, -30.0, 6.0, -29.0)
    assert peak(replace(curves, comparable=(False, True, False)), JOB.member) == Peak(
        "inner", 1, None, 50.0, 50.0, 10.0, 2.0, 0.0
    )
    assert peak(replace(curves, comparable=(False, False, False)), JOB.member) is None


def test_notes_say_that_a_face_of_zero_width_takes_no_pressure() -> None:
    text = changed(
        ('shape = "rectangle"\ndepth = 60.0\nwidth = 20.0', 'shape = "circle"\ndiameter = 60.0'),
        ('shape = "rectangle"\ndepth = 40.0\nwidth = 20.0', 'shape = "circle"\ndiameter = 40.0'),
    )
    assert any("face of zero width" in note and "pull" in note for note in notes(read(text), [()]))
    assert not any("zero width" in note for note in notes(JOB, [()]))


def test_notes_say_where_a_bearing_settles_and_that_a_width_jumps() -> None:
    head, _, tail = (
        demo_text("recovery-hook").replace('enters = "patch"', 'enters = "bearing"').rpartition("width = 20.0")
    )
    moved = f"{head}pin_diameter = 30.0{tail}".replace("angle = 120.0", "angle = 100.0")
    (note,) = notes(read(moved), [()])
    assert "settles at 120 deg of piece 2" in note
    assert "not at 100 deg" in note
    wide = changed(
        ("depth = 40.0", "depth = 60.0"),
        ("width = 20.0\n\n[member]", "width = 30.0\n\n[member]"),
        ('["plate", "bar"]', '"bar"'),
    )
    assert any("width jumps at the end of piece 2" in note for note in notes(read(wide), [()]))


def test_notes_say_what_displacements_of_a_free_member_are_relative_to() -> None:
    assert any("relative to the section at the start" in note for note in notes(read(demo_text("clamp-frame")), [()]))
    assert not any("relative" in note for note in notes(JOB, [()]))
