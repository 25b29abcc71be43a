"""results.json and stations.csv: nothing is lost on the way out and back but digits beyond the twelfth."""

from __future__ import annotations

import csv
import io
import json
import math
from collections.abc import Iterator
from dataclasses import fields, is_dataclass, replace
from typing import Any

import pytest
import sample
from hypothesis import given, settings
from hypothesis import strategies as st

from intrados.compare import record
from intrados.compare.results import Results
from intrados.compare.sheet import stations_csv

SAMPLES = [sample.hook, sample.hook_cases, sample.c_frame, sample.bracket, sample.crowded]
FINITE = st.floats(allow_nan=False, allow_infinity=False)


def leaves(value: Any, path: str = "") -> Iterator[tuple[str, Any]]:
    """Every number and word of a dataclass, with where it stands."""
    if is_dataclass(value):
        for field in fields(value):
            yield from leaves(getattr(value, field.name), f"{path}.{field.name}")
    elif isinstance(value, tuple):
        yield f"{path}#", len(value)
        for index, item in enumerate(value):
            yield from leaves(item, f"{path}.{index}")
    elif isinstance(value, dict):
        for key, item in value.items():
            yield from leaves(item, f"{path}.{key}")
    else:
        yield path, value


def same(one: Results, other: Results) -> None:
    mine, theirs = list(leaves(one)), list(leaves(other))
    assert [path for path, _ in mine] == [path for path, _ in theirs]
    for (path, left), (_, right) in zip(mine, theirs, strict=True):
        if isinstance(left, float):
            assert isinstance(right, float), path
            assert right == pytest.approx(left, rel=1e-11, abs=0.0, nan_ok=True), path
        else:
            assert left == right and type(left) is type(right), path


@pytest.mark.parametrize("make", SAMPLES)
def test_the_file_gives_the_results_back(make: Any) -> None:
    results = make()
    same(results, record.read(json.loads(record.to_json(results))))


@pytest.mark.parametrize("make", SAMPLES)
def test_writing_what_was_read_gives_the_same_bytes(make: Any) -> None:
    text = record.to_json(make())
    assert record.to_json(record.read(json.loads(text))) == text
    assert "NaN" not in text and "Infinity" not in text


WORDS = st.text(max_size=20)


@settings(max_examples=60, deadline=None)
@given(
    numbers=st.tuples(FINITE, FINITE, FINITE, FINITE),
    maybe=st.none() | FINITE,
    words=st.tuples(WORDS, WORDS.filter(bool), WORDS),
    verdict=st.sampled_from(["holds", "low", "high", "unloaded", "not comparable"]),
)
def test_round_trip_of_any_numbers_and_words(
    numbers: tuple[float, float, float, float], maybe: float | None, words: tuple[str, str, str], verdict: Any
) -> None:
    results = sample.bracket()
    case = results.cases[0]
    station = case.stations[0]
    fibre = replace(station.inner, hand=numbers[0], uncertainty=numbers[1], difference=maybe, verdict=verdict)
    profile = replace(station.profile, fe=numbers)
    changed = replace(station, name=words[0], inner=fibre, utilisation=maybe, e=maybe, zone=None, profile=profile)
    case = replace(case, name=words[1], stations=(changed,), force_residual=numbers[2])
    results = replace(results, title=words[2], yield_stress=maybe, cases=(case, replace(case, name=words[0])))
    same(results, record.read(json.loads(record.to_json(results))))


def test_what_is_not_finite_becomes_null_and_comes_back_as_not_a_number() -> None:
    results = sample.bracket()
    case = results.cases[0]
    curve = replace(case.along.inner, uncertainty=(math.nan, math.inf, *case.along.inner.uncertainty[2:]))
    results = replace(results, cases=(replace(case, along=replace(case.along, inner=curve)),))
    written = json.loads(record.to_json(results))
    assert written["along"]["inner"]["uncertainty"][:2] == [None, None]
    back = record.read(written).cases[0].along.inner.uncertainty
    assert math.isnan(back[0]) and math.isnan(back[1]) and back[2:] == pytest.approx(curve.uncertainty[2:], rel=1e-11)


def test_layout_of_the_file() -> None:
    written = record.write(sample.hook_cases())
    assert written["schema"] == 1 and written["program"] == {"name": "intrados", "version": "0.1.0"}
    assert written["job"]["units"] == "mm-N-MPa"
    assert written["case"] == "lift" and [case["name"] for case in written["cases"]] == ["proof, 125 %"]
    assert set(written["equilibrium"]) == {"force_residual", "moment_residual"}
    on_straight, on_arc = written["stations"][0], written["stations"][3]
    assert "distance" in on_straight and "angle" not in on_straight and on_straight["R"] is None
    assert "angle" in on_arc and "distance" not in on_arc
    assert len(on_arc["profile"]["y"]) == len(on_arc["profile"]["ideal"]) == 41
    assert set(on_arc["inner"]["budget"]) == {"thick", "width", "introduction"}
    assert on_straight["radial"] is None and set(on_arc["radial"]) == {"hand", "ideal", "fe", "depth"}
    assert written["stations"] != written["cases"][0]["stations"]
    assert "case" not in record.write(sample.hook())


def test_numbers_have_twelve_digits_and_zero_has_no_sign() -> None:
    results = replace(sample.bracket(), band=1.0 / 3.0, numerical=-0.0)
    agreement = record.write(results)["agreement"]
    assert agreement["band"] == 0.333333333333
    assert math.copysign(1.0, agreement["numerical"]) == 1.0


def test_unknown_keys_of_later_versions_are_passed_over() -> None:
    written = record.write(sample.hook())
    written["audit"] = []
    written["stations"][0]["inner"]["budget"]["contact"] = 0.1
    same(sample.hook(), record.read(written))


def test_each_mistake_is_one_line_with_the_key_of_the_file() -> None:
    written = record.write(sample.hook_cases())
    del written["equilibrium"]["moment_residual"]
    del written["job"]["title"]
    written["stations"][2]["inner"]["hand"] = "much"
    written["cases"][0]["governing"]["fibre"] = "middle"
    written["ends"]["end"] = "glued"
    with pytest.raises(record.RecordError) as caught:
        record.read(written)
    keys = [line.split(":")[0] for line in str(caught.value).splitlines()]
    expected = ["job.title", "ends.end", "stations.2.inner.hand", "equilibrium.moment_residual"]
    assert sorted(keys) == sorted([*expected, "cases.0.governing.fibre"])


@pytest.mark.parametrize("given_", [{}, {"schema": 2}, [], None, {"schema": 1}, {"schema": 1, "cases": 3, "job": []}])
def test_something_else_is_refused(given_: Any) -> None:
    with pytest.raises(record.RecordError):
        record.read(given_)


def test_stations_csv_has_a_row_for_every_case_and_station() -> None:
    results = sample.hook_cases()
    text = stations_csv(results)
    rows = list(csv.DictReader(io.StringIO(text)))
    assert [(row["case"], row["station"]) for row in rows] == [
        (case.name, station.name) for case in results.cases for station in case.stations
    ]
    row, station = rows[3], results.cases[0].stations[3]
    assert float(row["M [N mm]"]) == pytest.approx(station.M, rel=1e-11)
    assert float(row["outer best [MPa]"]) == pytest.approx(station.outer.best, rel=1e-11)
    assert row["inner verdict"] == station.inner.verdict and row["distance [mm]"] == ""
    assert rows[0]["R [mm]"] == "" and rows[0]["angle [deg]"] == ""
    assert "\r" not in text


def test_every_number_of_the_csv_has_a_unit() -> None:
    header = stations_csv(sample.hook()).splitlines()[0].split(",")
    words = {"case", "station", "piece", "zone", "inner verdict", "outer verdict"}
    assert all(column in words or column.endswith("]") for column in header)
    assert len(set(header)) == len(header)
