"""The comparison of one fibre: reference, difference and verdict, against the rules as written."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from intrados.compare.verdict import Scale, compare

BAND = 0.05
SCALE = Scale(station=100.0, member=250.0, band=BAND)


@pytest.mark.parametrize(
    ("hand", "best", "uncertainty", "difference", "verdict"),
    [
        (96.0, 100.0, 0.0, -0.04, "holds"),
        (105.0, 100.0, 0.0, 0.05, "holds"),
        (94.0, 100.0, 0.5, -0.06, "low"),
        (94.0, 100.0, 1.0, -0.06, "holds"),
        (106.0, 100.0, 0.0, 0.06, "high"),
        (-94.0, -100.0, 0.0, 0.06, "low"),
        (-106.0, -100.0, 0.0, -0.06, "high"),
        # A sign that differs is unsafe however large the hand value is.
        (-300.0, 100.0, 0.0, -4.0, "low"),
        # Of a fibre with little stress the reference is a tenth of the station's: 10.
        (1.4, 1.0, 0.0, 0.04, "holds"),
        (2.0, 1.0, 0.0, 0.1, "high"),
        (0.0, 1.0, 0.0, -0.1, "low"),
        (-0.4, 0.0, 0.0, -0.04, "holds"),
    ],
)
def test_one_fibre(hand: float, best: float, uncertainty: float, difference: float, verdict: str) -> None:
    found = compare(hand, best, uncertainty, SCALE, comparable=True)
    assert found.verdict == verdict
    assert found.difference == pytest.approx(difference, abs=1e-12)


def test_a_fibre_that_is_not_comparable_keeps_its_difference() -> None:
    found = compare(90.0, 100.0, 0.0, SCALE, comparable=False)
    assert (found.verdict, found.difference) == ("not comparable", pytest.approx(-0.1))


@pytest.mark.parametrize("comparable", [True, False])
def test_a_station_without_stress_is_unloaded_and_has_no_difference(comparable: bool) -> None:
    found = compare(1e-5, 1e-4, 0.0, Scale(1e-4, 250.0, BAND), comparable)
    assert (found.verdict, found.difference) == ("unloaded", None)
    assert compare(2e-3, 1e-3, 0.0, Scale(1e-3, 250.0, BAND), comparable).verdict != "unloaded"


def test_a_member_without_any_stress_is_unloaded() -> None:
    assert compare(0.0, 0.0, 0.0, Scale(0.0, 0.0, BAND), comparable=True).verdict == "unloaded"


stresses = st.floats(-1.0, 1.0).map(lambda share: 100.0 * share)


@given(hand=stresses, best=stresses, uncertainty=st.floats(0.0, 20.0), unit=st.sampled_from([1e-3, 1e6]))
def test_neither_signs_nor_units_matter(hand: float, best: float, uncertainty: float, unit: float) -> None:
    found = compare(hand, best, uncertainty, SCALE, comparable=True)
    turned = compare(-hand, -best, uncertainty, SCALE, comparable=True)
    assert turned.verdict == found.verdict
    assert turned.difference == -(found.difference or 0.0)
    scale = Scale(unit * SCALE.station, unit * SCALE.member, BAND)
    gap = abs(hand - best) - BAND * max(abs(best), 10.0) - uncertainty
    if abs(gap) > 1e-9:
        assert compare(unit * hand, unit * best, unit * uncertainty, scale, comparable=True).verdict == found.verdict


@given(hand=stresses, best=stresses, uncertainty=st.floats(0.0, 20.0))
def test_what_holds_is_within_the_band_and_the_uncertainty_and_the_rest_is_unsafe_or_safe(
    hand: float, best: float, uncertainty: float
) -> None:
    verdict = compare(hand, best, uncertainty, SCALE, comparable=True).verdict
    within = abs(hand - best) <= BAND * max(abs(best), 10.0) + uncertainty
    if within:
        assert verdict == "holds"
    elif verdict == "low":
        assert abs(hand) < abs(best) or hand * best < 0.0
    else:
        assert verdict == "high"
        assert abs(hand) >= abs(best)
