"""The terminal output: width, pipes, order, and numbers that say no more than is known."""

from __future__ import annotations

import io
import math
import re
from dataclasses import replace
from typing import Any

import pytest
import sample
from hypothesis import given, settings
from hypothesis import strategies as st
from rich.console import RenderableType

from intrados.compare.cautions import CAUTIONS
from intrados.compare.numeral import common_scale, percent
from intrados.compare.results import Results
from intrados.compare.table import HandRow, LadderRow, check_table, hand_table, ladder_table, show
from intrados.compare.units import Units

SAMPLES = [sample.hook, sample.hook_cases, sample.c_frame, sample.bracket, sample.crowded]
ESCAPE = re.compile(r"\x1b\[[0-9;]*m")


class Terminal(io.StringIO):
    def isatty(self) -> bool:
        return True


@pytest.fixture(autouse=True)
def plain_environment(monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("NO_COLOR", "FORCE_COLOR", "TTY_COMPATIBLE", "TTY_INTERACTIVE", "COLUMNS"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setenv("TERM", "xterm-256color")


def printed(output: RenderableType, terminal: bool = False) -> str:
    stream = Terminal() if terminal else io.StringIO()
    show(output, stream)
    return stream.getvalue()


def scaled(results: Results, stress: float, force: float) -> Results:
    """The same results with the first case's stresses and resultants multiplied."""
    case = results.cases[0]
    stations = []
    for station in case.stations:
        fibres = {
            face: replace(fibre, hand=fibre.hand * stress, fe=fibre.fe * stress, uncertainty=fibre.uncertainty * stress)
            for face, fibre in (("inner", station.inner), ("outer", station.outer))
        }
        forces = {"N": station.N * force, "V": station.V * force, "M": station.M * force}
        stations.append(replace(station, **fibres, **forces))
    return replace(results, cases=(replace(case, stations=tuple(stations)),))


def hand_rows(results: Results) -> list[HandRow]:
    return [
        HandRow(
            s.name,
            s.R,
            s.depth,
            s.curvature_ratio,
            s.N,
            s.V,
            s.M,
            s.area,
            s.rn,
            s.e,
            s.inner.hand,
            s.outer.hand,
            s.inner.straight,
            s.outer.straight,
            None if s.R is None else 12.5,
        )
        for s in results.cases[0].stations
    ]


@pytest.mark.parametrize("terminal", [False, True])
@pytest.mark.parametrize("make", SAMPLES)
def test_no_line_is_wider_than_100_columns(make: Any, terminal: bool) -> None:
    results = replace(make(), notes=("A note " * 40, "x" * 250))
    for output in (check_table(results), hand_table(results.title, results.units, hand_rows(results))):
        lines = ESCAPE.sub("", printed(output, terminal)).splitlines()
        assert max(len(line) for line in lines) <= 100
        assert terminal or all(line == line.rstrip() for line in lines)


@settings(max_examples=60, deadline=None)
@given(stress=st.floats(-9, 9), force=st.floats(-9, 9), name=st.text("abc xyz-", min_size=1, max_size=60))
def test_numbers_of_any_size_stay_whole_in_100_columns(stress: float, force: float, name: str) -> None:
    results = scaled(sample.hook(), 10.0**stress, 10.0**force)
    units = Units("in", "kip", "ksi")
    station = replace(results.cases[0].stations[3], name=name)
    case = results.cases[0]
    case = replace(case, stations=(*case.stations[:3], station, *case.stations[4:]))
    results = replace(results, units=units, cases=(case,))
    for output in (check_table(results), hand_table(results.title, units, hand_rows(results))):
        text = printed(output)
        assert max(len(line) for line in text.splitlines()) <= 100
        assert "…" not in text and "..." not in text
        assert text.count("not comparable") in (0, sum(2 for s in case.stations if s.inner.verdict == "not comparable"))


def test_a_pipe_gets_plain_text_and_a_terminal_the_same_words_in_colour() -> None:
    output = check_table(sample.hook())
    pipe, terminal = printed(output), printed(output, terminal=True)
    assert "\x1b" not in pipe and "\x1b" in terminal
    assert [line.rstrip() for line in ESCAPE.sub("", terminal).splitlines()] == pipe.splitlines()
    assert all(ord(sign) < 128 for sign in pipe.replace("±", ""))


def test_order_notes_conclusion_stations_cautions() -> None:
    results = sample.hook()
    text = " ".join(printed(check_table(results)).split())
    governing = results.cases[0].governing
    assert governing is not None
    places = [text.index(part) for part in (results.notes[0], governing.why, "hand best ±U", "Mesh:", CAUTIONS[0])]
    assert places == sorted(places)
    assert all(caution in text for caution in CAUTIONS)


def test_every_case_has_its_conclusion_and_its_stations() -> None:
    results = sample.hook_cases()
    text = printed(check_table(results))
    flat = " ".join(text.split())
    for case in results.cases:
        assert case.governing is not None
        assert f"Case {case.name}: {case.governing.why}" in flat
        assert f"Stations, case {case.name}" in text
    # Once in the stations, once in the budget, for either case.
    assert text.count("\nthroat ") == 4


def test_what_cannot_be_concluded_is_said() -> None:
    results = sample.bracket()
    assert "no station can be compared" in printed(check_table(results))
    hook = sample.hook()
    case = hook.cases[0]
    hook = replace(hook, cases=(replace(case, stations=(replace(case.stations[3], zone=None),)),), missed=("2:30",))
    text = printed(check_table(hook))
    assert "The target is NOT met at: 2:30." in text


def test_words_in_brackets_are_not_taken_for_markup() -> None:
    results = replace(sample.hook(), title="Hook [bold] :warning: [/]", notes=("[red]note",))
    text = printed(check_table(results))
    assert "Hook [bold] :warning: [/]" in text and "[red]note" in text


def test_hand_best_and_uncertainty_stand_in_the_same_decimals() -> None:
    results = sample.hook()
    lines = printed(check_table(results)).splitlines()
    row = next(line for line in lines if line.startswith("throat"))
    found = re.search(r"inner +(\S+) +(\S+) +(\S+) ", row)
    assert found is not None
    hand, best, uncertainty = found.groups()
    station = next(s for s in results.cases[0].stations if s.name == "throat")
    assert len({len(text.split(".")[1]) for text in (hand, best, uncertainty)}) == 1
    assert float(best) == pytest.approx(station.inner.best, rel=5e-4)
    assert float(uncertainty) >= station.inner.uncertainty


SIZES = st.floats(1e-9, 1e12)


@given(value=SIZES, sign=st.sampled_from([-1.0, 1.0]))
def test_a_number_keeps_four_digits(value: float, sign: float) -> None:
    scale = common_scale([value])
    assert float(scale.text(sign * value)) * 10.0**scale.power == pytest.approx(sign * value, rel=5.1e-4)


@given(values=st.lists(SIZES, min_size=1, max_size=6))
def test_a_common_scale_keeps_the_width_of_a_column(values: list[float]) -> None:
    scale = common_scale(values)
    assert all(len(scale.text(-value)) <= 10 for value in values)
    assert scale.power % 3 == 0


@given(value=st.floats(0, 1e6), decimals=st.integers(0, 6))
def test_an_uncertainty_is_rounded_up_by_less_than_one_step(value: float, decimals: int) -> None:
    shown = float(common_scale([1.0]).bound(value, decimals))
    slack = 1e-8 * value
    assert value - slack <= shown <= value + 10.0**-decimals + slack


def test_zero_has_no_sign_and_nothing_is_a_dash() -> None:
    scale = common_scale([100.0])
    assert scale.text(-1e-12) == "0" and scale.text(-1e-12, 2) == "0.00"
    assert scale.text(None) == "-" and scale.text(math.nan) == "-" and percent(None) == "-"
    assert percent(-0.0001) == "+0.0" and percent(-0.0417) == "-4.2"
    assert percent(123.0) == ">999" and percent(-123.0) == "<-999"


def test_a_number_in_running_text_is_whole() -> None:
    assert common_scale([1.481e8]).quantity(-1.481e8, "Pa") == "-148.1e6 Pa"
    assert common_scale([148.1]).quantity(148.1, "MPa") == "148.1 MPa"


def test_units_carry_the_power_of_ten() -> None:
    results = scaled(sample.hook(), 1e6, 1.0)
    text = printed(check_table(replace(results, units=Units("m", "N", "Pa"))))
    assert "[1e6 Pa]" in text and "145.6" in text


def test_the_hand_table_shows_each_station_once() -> None:
    results = sample.hook()
    text = printed(hand_table(results.title, results.units, hand_rows(results)))
    assert text.count("\nthroat ") == 1 and "145.6" in text and "12.50" in text
    assert "[N/mm" not in text and "[1e6 N mm]" in text


def test_the_budget_adds_up_as_it_is_printed() -> None:
    results = sample.hook()
    text = printed(check_table(results)).split("Difference budget")[1]
    row = next(line for line in text.splitlines() if line.startswith("throat"))
    hand, thick, width, introduction, best, fe = (float(word) for word in row.split()[2:8])
    half_a_digit = 0.5 * 10.0 ** -len(row.split()[2].split(".")[1])
    assert hand + thick + width + introduction == pytest.approx(best, abs=5 * half_a_digit)
    assert fe + width == pytest.approx(best, abs=3 * half_a_digit)
    assert "over the web" in row


def test_the_ladder_table_says_whether_the_theory_may_be_used() -> None:
    rows = [LadderRow("throat", 1.1, "inner", 100.0, 3.0, 9.0, 0.1, -0.107, "over the web")]
    rows.append(LadderRow("throat", 1.1, "outer", -50.0, -0.5, -0.5, 0.1, 0.02, "edge"))
    text = printed(ladder_table("Hook", Units("mm", "N", "MPa"), rows, 0.05))
    said = "beyond the band of 5 % on 1 of 2 loaded fibres (most at throat, inner fibre: 10.7 %)"
    assert said in " ".join(text.split())
    assert "112.0" in text
    assert max(len(line) for line in text.splitlines()) <= 100
    within = printed(ladder_table("Hook", Units("mm", "N", "MPa"), rows[1:], 0.05))
    assert "within the band of 5 % at every station" in " ".join(within.split())
