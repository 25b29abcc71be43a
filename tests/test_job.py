"""Job files: what is read from a good one."""

from __future__ import annotations

import hashlib

import pytest
from bracket import GOOD, changed, read

from intrados.compare.demo import demo_text
from intrados.compare.job import parse_job
from intrados.theory.load import BodyLoad, EndLoad, FaceLoad, Patch
from intrados.theory.member import Arc, Straight
from intrados.theory.spread import FaceSpread


def test_a_good_job_is_read_as_it_stands() -> None:
    job = read(GOOD)
    assert job.title == "Invented bracket"
    assert (job.units.length, job.units.force, job.units.stress) == ("mm", "N", "MPa")
    assert (job.material.E, job.material.nu, job.material.yield_stress) == (206000.0, 0.3, None)
    assert (job.member.datum, job.member.start, job.member.heading) == ("inner", (0.0, 0.0), 0.0)
    first, second, third = job.member.pieces
    assert isinstance(first, Straight) and first.length == 150.0
    assert isinstance(second, Arc) and (second.radius, second.sweep) == (50.0, 90.0)
    assert [section.depth for section in third.sections] == [60.0, 40.0]
    pull, tip = job.loads
    assert pull == FaceLoad("pull", 2, 0.5, "inner", (-4000.0, 0.0), Patch(20.0))
    assert tip == EndLoad("tip", "end", (0.0, 500.0), 0.0)
    assert [(case.name, dict(case.factors)) for case in job.cases] == [("both", {"pull": 1.0})]
    assert (job.agreement.band, job.agreement.numerical, job.hand.flanges) == (0.05, 0.002, "full")
    assert job.sha256 == hashlib.sha256(GOOD.encode()).hexdigest()


def test_stations_lie_where_the_rules_put_them() -> None:
    # Straights: 150 at most a depth of 60 (of 40 on the taper) apart; the named one replaces the default at 45.
    assert [station.name for station in read(GOOD).stations] == [
        *("1:25", "1:75", "1:125"),
        *("2:15", "2:30", "corner", "2:60", "2:75"),
        *("3:18.75", "3:56.25", "3:93.75", "3:131.25"),
    ]


def test_an_arc_shorter_than_the_step_has_its_middle() -> None:
    names = [
        station.name
        for station in read(changed(("every = 15.0", "every = 100.0"), ("angle = 45.0", "angle = 10.0"))).stations
    ]
    assert [name for name in names if name.startswith("2:") or name == "corner"] == ["corner", "2:45"]


def test_a_named_station_takes_the_place_of_a_default_one_it_all_but_coincides_with() -> None:
    names = [station.name for station in read(changed(("angle = 45.0", "angle = 45.000001"))).stations]
    assert "corner" in names
    assert "2:45" not in names


def test_stations_of_two_names_may_share_a_place_and_stand_on_joints_and_ends() -> None:
    more = (
        '{ name = "corner again", piece = 2, angle = 45.0 }, { name = "root", piece = 1, distance = 0.0 }, '
        '{ name = "joint", piece = 1, distance = 150.0 }, { name = "joint of the arc", piece = 2, angle = 0.0 }, '
        '{ name = "end", piece = 3, distance = 150.0 }, '
    )
    placed = {
        station.name: (station.piece, station.share)
        for station in read(changed(("named = [ ", f"named = [ {more}"))).stations
    }
    assert placed["corner"] == placed["corner again"]
    assert (placed["joint"], placed["joint of the arc"]) == ((0, 1.0), (1, 0.0))
    assert (placed["root"], placed["end"]) == ((0, 0.0), (2, 1.0))


def test_loads_without_a_factor_act_in_full_and_one_with_zero_not_at_all() -> None:
    job = read(changed(("factors = { pull = 1.0 }", "factors = { pull = 0.0 }")))
    (loading,) = job.loadings
    assert loading.spreads == ()
    assert [load.name for load in loading.end_loads] == ["tip"]
    assert [load.name for load in job.loads] == ["pull", "tip"]


def test_a_load_on_the_centroid_line_may_carry_a_moment() -> None:
    job = read(changed(('face = "inner"\nforce = [-4000.0, 0.0]', 'face = "centroid"\nmoment = 30.0')))
    assert job.loads[0] == BodyLoad("pull", 2, 0.5, (0.0, 0.0), 30.0, 20.0)


def test_a_bearing_settles_where_the_face_is_normal_to_its_force() -> None:
    text = demo_text("recovery-hook").replace('enters = "patch"', 'enters = "bearing"')
    head, _, tail = text.rpartition("width = 20.0")
    (spread,) = read(f"{head}pin_diameter = 30.0{tail}").loadings[0].spreads
    assert isinstance(spread, FaceSpread) and spread.normal
    # The heading is -120 where the arc begins; its face looks up where it is 0, after 120 degrees of 160.
    assert spread.centre == pytest.approx(120.0 / 160.0, abs=1e-9)


def test_optional_tables_have_their_defaults() -> None:
    start = GOOD.index("[[case]]")
    job = read(GOOD[:start].replace('units = "mm-N-MPa"\n', "").replace("start = [0.0, 0.0]\nheading = 0.0\n", ""))
    assert [case.name for case in job.cases] == [""]
    assert job.unit_set == "mm-N-MPa"
    assert job.agreement == read(GOOD).agreement
    assert job.member == read(GOOD).member
    assert "2:45" in [station.name for station in job.stations]


def test_windows_line_ends_and_a_byte_order_mark_are_read() -> None:
    windows = b"\xef\xbb\xbf" + GOOD.replace("\n", "\r\n").encode()
    assert parse_job(windows, "job.toml").stations == read(GOOD).stations


def test_whole_numbers_stand_for_lengths_and_forces() -> None:
    whole = changed(("E = 206000.0", "E = 206000"), ("force = [-4000.0, 0.0]", "force = [-4000, 0]"))
    assert read(whole).loads == read(GOOD).loads
