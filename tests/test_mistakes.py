"""Every mistake of a job gives one line: its key, its line in the file, what was given, what is allowed."""

from __future__ import annotations

import re
import sys
from pathlib import Path

import pytest
from bracket import GOOD, changed, mistakes, read
from hypothesis import given, settings
from hypothesis import strategies as st

from intrados.compare.demo import demo_names, demo_text
from intrados.compare.job import parse_job, read_job
from intrados.compare.mistake import JobMistakes

# What to replace, by what, the line and key the mistake must name, and words it must say.
SINGLE = [
    ('units = "mm-N-MPa"', 'units = "mm-kg"', 2, "units", ["mm-kg", "in-kip-ksi"]),
    ("E = 206000.0", "E = -1.0", 5, "material.E", ["-1", "at least"]),
    ("E = 206000.0", "E = 0", 5, "material.E", ["given 0"]),
    ("E = 206000.0", "E = nan", 5, "material.E", ["nan", "finite"]),
    ("E = 206000.0", "E = inf", 5, "material.E", ["inf", "finite"]),
    ("E = 206000.0", 'E = "steel"', 5, "material.E", ["steel", "number"]),
    ("E = 206000.0", "E = true", 5, "material.E", ["true", "number"]),
    ("E = 206000.0", "E = 1e300", 5, "material.E", ["1e+300", "at most"]),
    ("nu = 0.3", "nu = 0.5", 6, "material.nu", ["0.5", "less than 0.5"]),
    ("nu = 0.3", "nu = -0.1", 6, "material.nu", ["-0.1", "at least 0"]),
    ("nu = 0.3", "nu = 0.3\nyeild = 200.0", 7, "material.yeild", ["unknown", '"yield"']),
    ("nu = 0.3\n", "", 4, "material.nu", ["missing"]),
    ("[section.plate]\nshape", "[section.plate]\nshap", 9, "section.plate.shap", ["unknown", '"shape"']),
    ('[section.plate]\nshape = "rectangle"\n', "[section.plate]\n", 8, "section.plate.shape", ["missing", '"T"']),
    (
        'shape = "rectangle"\ndepth = 60.0',
        'shape = "rectangel"\ndepth = 60.0',
        9,
        "section.plate.shape",
        ['"rectangle"'],
    ),
    ("depth = 60.0", "depth = 0.0", 10, "section.plate.depth", ["given 0"]),
    ("depth = 60.0", "depth = 60.0\nbore = 3.0", 11, "section.plate.bore", ["unknown"]),
    ('datum = "inner"', 'datum = "middle"', 19, "member.datum", ["middle", "centroid"]),
    ("start = [0.0, 0.0]\nheading", "start = [0.0]\nheading", 20, "member.start", ["1 value", "2"]),
    ("arc = 50.0, sweep = 90.0", "arc = 50.0, sweep = 0.0", 24, "member.pieces[2].sweep", ["zero"]),
    ("arc = 50.0, sweep = 90.0", "arc = 50.0, sweep = 400.0", 24, "member.pieces[2].sweep", ["400", "360"]),
    ("arc = 50.0, sweep = 90.0", "arc = -50.0, sweep = 90.0", 24, "member.pieces[2].arc", ["-50"]),
    ("arc = 50.0, ", "straight = 2.0, arc = 50.0, ", 24, "member.pieces[2]", ["either straight"]),
    ('sweep = 90.0, section = "plate"', 'sweep = 90.0, section = "plait"', 24, "member.pieces[2].section", ['"plate"']),
    (
        'sweep = 90.0, section = "plate"',
        'sweep = 90.0, section = ["plate", "bar"]',
        25,
        "member.pieces[3].section",
        ["depth", "taper"],
    ),
    ('datum = "inner"', 'datum = "outer"', 24, "member.pieces[2].arc", ["centre of curvature", "60"]),
    (
        "arc = 50.0, sweep = 90.0",
        "arc = 50.0, sweep = 300.0",
        24,
        "member.pieces[2].sweep",
        ["into itself", "piece 1"],
    ),
    ('end = "free"', 'end = "clamped"', 30, "ends.end", ["both ends", "does not determine"]),
    ('end = "free"', 'end = "pinned"', 30, "ends.end", ["pinned", '"clamped"']),
    ("piece = 3, distance = 75.0", "piece = 4, distance = 75.0", 34, "load[1].at.piece", ["given 4", "1 to 3"]),
    ("piece = 3, distance = 75.0", "piece = 3, angle = 75.0", 34, "load[1].at.angle", ["straight", "distance"]),
    ("piece = 3, distance = 75.0", "piece = 3, distance = 151.0", 34, "load[1].at.distance", ["151", "0 to 150"]),
    ("piece = 3, distance = 75.0", "piece = 3", 34, "load[1].at", ["distance"]),
    ('face = "inner"', 'face = "left"', 35, "load[1].face", ["left", '"outer"']),
    ("force = [-4000.0, 0.0]", "force = [0.0, 0.0]", 36, "load[1].force", ["zero"]),
    ('enters = "patch"', 'enters = "pin"', 37, "load[1].enters", ["pin", '"bearing"']),
    ("width = 20.0\n\n[[load]]", "width = 200.0\n\n[[load]]", 38, "load[1].width", ["200", "0 to 150"]),
    ("width = 20.0\n\n[[load]]", "width = 20.0\nmoment = 5.0\n\n[[load]]", 39, "load[1].moment", ["centroid"]),
    ('at = "end"', 'at = "start"', 42, "load[2].at", ["clamped"]),
    ('at = "end"', 'at = "end"\nface = "inner"', 43, "load[2].face", ["end"]),
    ('name = "tip"', 'name = "pull"', 41, "load[2].name", ["taken", "differ"]),
    ("factors = { pull = 1.0 }", "factors = { pul = 1.0 }", 47, "case[1].factors.pul", ['"pull"']),
    ("factors = { pull = 1.0 }", "factors = { pull = 0.0, tip = 0.0 }", 47, "case[1].factors", ["no load acts"]),
    ("every = 15.0", "every = 0.0", 50, "stations.every", ["at least 0.5"]),
    ("piece = 2, angle = 45.0", "piece = 2, angle = 95.0", 51, "stations.named[1].angle", ["95", "0 to 90"]),
    ("piece = 2, angle = 45.0", "piece = 2", 51, "stations.named[1]", ["angle"]),
    ('name = "corner"', 'name = "2:30"', 51, "stations.named[1].name", ["another station"]),
    ("[stations]", "[agreement]\nband = 2.0\n[stations]", 50, "agreement.band", ["2", "at most 1"]),
    ("[stations]", "[stations]\nevrey = 3.0", 50, "stations.evrey", ['"every"']),
    ("[stations]", "[[hand]]\nstation = 'corner'\n[stations]", 49, "hand", ["unknown"]),
    ('title = "Invented bracket"', "title = 3", 1, "title", ["given 3", "text"]),
    ('title = "Invented bracket"', 'title = "a\\u001b[31mb"', 1, "title", ["on one line"]),
    ("E = 206000.0", "E = 1e16", 5, "material.E", ["1e+16", "at most 1e+15"]),
    ("E = 206000.0", "E = 2020-01-01", 5, "material.E", ["2020-01-01", "number"]),
    ("E = 206000.0", "e = 206000.0", 5, "material.e", ["unknown", '"E"']),
    # Never so rounded that it reads as the limit itself.
    ("nu = 0.3", "nu = 0.50000001", 6, "material.nu", ["given 0.50000001", "less than 0.5"]),
    ("nu = 0.3", 'nu = 0.3\n"a\\nb" = 1', 7, 'material."a\\nb"', ["unknown"]),
    ("nu = 0.3", "nu = 0.3\nyield = 0.0", 7, "material.yield", ["given 0", "at least"]),
    ("arc = 50.0, sweep = 90.0", "arc = 50.0, swep = 90.0", 24, "member.pieces[2].swep", ["unknown", '"sweep"']),
    ('{ arc = 50.0, sweep = 90.0, section = "plate" }', '"arc"', 24, "member.pieces[2]", ['"arc"', "table"]),
    ('["plate", "bar"]', '["plate", "bar", "bar"]', 25, "member.pieces[3].section", ["list of two"]),
    ('["plate", "bar"]', '["plate", 3]', 25, "member.pieces[3].section", ["name of a section"]),
    (
        '{ straight = 150.0, section = "plate" }',
        '{ straight = 5e6, section = "plate" }',
        23,
        "member.pieces[1].straight",
        ["5e+06", "depth of 60", "one unit"],
    ),
    ("piece = 3, distance = 75.0", "piece = 3, distnace = 75.0", 34, "load[1].at.distnace", ["unknown", '"distance"']),
    ("piece = 3, distance = 75.0", "piece = 3.0, distance = 75.0", 34, "load[1].at.piece", ["whole number"]),
    ("piece = 3, distance = 75.0", "piece = true, distance = 75.0", 34, "load[1].at.piece", ["true", "whole number"]),
    ("piece = 3, distance = 75.0", "piece = 0, distance = 75.0", 34, "load[1].at.piece", ["given 0", "at least 1"]),
    ("piece = 3, distance = 75.0", "piece = 3, distance = -1.0", 34, "load[1].at.distance", ["-1", "at least 0"]),
    ("piece = 3, distance = 75.0", "piece = 3, distance = 150.0000001", 34, "load[1].at.distance", ["150.0000001"]),
    ("at = { piece = 3, distance = 75.0 }", 'at = "middle"', 34, "load[1].at", ["middle", '"start", "end"']),
    ("at = { piece = 3, distance = 75.0 }\n", "", 32, "load[1].at", ["missing"]),
    ('face = "inner"\n', "", 32, "load[1].face", ["missing", '"centroid"']),
    ('face = "inner"', 'fase = "inner"', 35, "load[1].fase", ["unknown", '"face"']),
    ("force = [-4000.0, 0.0]", "force = -4000.0", 36, "load[1].force", ["-4000", "list"]),
    ("force = [-4000.0, 0.0]", "force = [-4000.0, nan]", 36, "load[1].force[2]", ["nan", "finite"]),
    ("force = [-4000.0, 0.0]", "force = [-4000.0, 1e16]", 36, "load[1].force[2]", ["1e+16"]),
    ("force = [-4000.0, 0.0]", "force = [-4000.0, 0.0, 1.0]", 36, "load[1].force", ["3 values", "2"]),
    ('enters = "patch"', 'entres = "patch"', 37, "load[1].entres", ["unknown", '"enters"']),
    ("width = 20.0\n\n[[load]]", "widht = 20.0\n\n[[load]]", 38, "load[1].widht", ["unknown", '"width"']),
    (
        "width = 20.0\n\n[[load]]",
        "pin_diameter = 20.0\nwidth = 20.0\n\n[[load]]",
        38,
        "load[1].pin_diameter",
        ["unknown"],
    ),
    ('at = "end"', 'at = "end"\nwidth = 3.0', 43, "load[2].width", ["end"]),
    ('name = "tip"', 'name = " "', 41, "load[2].name", ["1 to 60 characters"]),
    ('name = "tip"', 'name = "a\\nb"', 41, "load[2].name", ['"a\\nb"', "one line"]),
    ("[[case]]", "[case]", 45, "case", ["array", "[[case]]"]),
    ("factors = { pull = 1.0 }", "factors = { pull = nan }", 47, "case[1].factors.pull", ["nan", "finite"]),
    ("factors = { pull = 1.0 }", "factors = { pull = true }", 47, "case[1].factors.pull", ["true", "number"]),
    ("factors = { pull = 1.0 }\n", "", 45, "case[1].factors", ["missing"]),
    ("[stations]", '[[case]]\nname = "both"\nfactors = {}\n[stations]', 50, "case[2].name", ["taken"]),
    ("[stations]", "[[stations]]", 49, "stations", ["table"]),
    ("every = 15.0", "every = 200.0", 50, "stations.every", ["200", "at most 180"]),
    (
        "named = [ ",
        'named = [ { name = "corner", piece = 1, distance = 9.0 }, ',
        51,
        "stations.named[2].name",
        ["taken"],
    ),
    (
        "named = [ ",
        'named = [ { name = "b", piece = 1, distance = 160.0 }, ',
        51,
        "stations.named[1].distance",
        ["0 to 150"],
    ),
    ("named = [ ", 'named = [ { name = "b", piece = 4, distance = 1.0 }, ', 51, "stations.named[1].piece", ["1 to 3"]),
    ("named = [ ", 'named = [ { name = "b", peice = 1, distance = 1.0 }, ', 51, "stations.named[1].peice", ['"piece"']),
    (
        "named = [ ",
        'named = [ { name = "b", piece = 2, angle = 45.001 }, ',
        51,
        "stations.named[2]",
        ["45.001", "station b", "0.009"],
    ),
    (
        "named = [ ",
        'named = [ { name = "b", piece = 3, distance = 65.001 }, ',
        51,
        "stations.named[1]",
        ["edge of load pull at 65"],
    ),
    (
        "named = [ ",
        'named = [ { name = "b", piece = 1, distance = 149.99 }, ',
        51,
        "stations.named[1]",
        ["end of piece 1 at 150"],
    ),
    ("[stations]", "[agreement]\nnumerical = 0.0\n[stations]", 50, "agreement.numerical", ["given 0", "1e-06"]),
    ("[stations]", '[theory]\nflanges = "some"\n[stations]', 50, "theory.flanges", ['"effective"']),
    ("[stations]", "[chart]\n[stations]", 49, "chart", ["unknown"]),
    ("[material]", "[materail]", 4, "materail", ["unknown", '"material"']),
    ("[ends]", "[end]", 28, "end", ["unknown", '"ends"']),
    ("[member]", "[membre]", 18, "membre", ["unknown", '"member"']),
]


@pytest.mark.parametrize(("old", "new", "line", "key", "words"), SINGLE, ids=lambda value: str(value)[:30])
def test_one_mistake_gives_one_line(old: str, new: str, line: int, key: str, words: list[str]) -> None:
    found = mistakes(changed((old, new)))
    assert len(found) == 1, found
    assert found[0].startswith(f"job.toml:{line}: {key}: "), found[0]
    for word in words:
        assert word in found[0]
    assert found[0].isprintable()


MISTAKES_AT_ONCE = [
    ('title = "Invented bracket"', "title = 0", "title"),
    ('units = "mm-N-MPa"', 'units = "mm"', "units"),
    ("E = 206000.0", "E = -1.0", "material.E"),
    ("nu = 0.3", "nu = 0.7\nyeild = 3.0", "material.nu"),
    ("depth = 40.0", "depth = -4.0", "section.bar.depth"),
    ('datum = "inner"', 'datum = "x"', "member.datum"),
    ("sweep = 90.0", "sweep = 0.0", "member.pieces[2].sweep"),
    ("[ends]", "[colours]\n[ends]", "colours"),
    ('end = "free"', 'end = "fre"', "ends.end"),
    ('face = "inner"', 'face = "left"', "load[1].face"),
    ("force = [-4000.0, 0.0]", "force = [-4000.0, inf]", "load[1].force[2]"),
    ('name = "tip"', 'name = "pull"', "load[2].name"),
    ("factors = { pull = 1.0 }", "factors = 3", "case[1].factors"),
    ("every = 15.0", "evry = 15.0", "stations.evry"),
    ('name = "corner"', "name = 7", "stations.named[1].name"),
]


def test_all_mistakes_come_at_once_in_the_order_of_the_file() -> None:
    found = mistakes(changed(*((old, new) for old, new, _ in MISTAKES_AT_ONCE)))
    keys = [line.split(": ")[1] for line in found]
    expected = [key for *_, key in MISTAKES_AT_ONCE]
    expected.insert(4, "material.yeild")
    assert keys == expected
    lines = [int(line.split(":")[1]) for line in found]
    assert lines == sorted(lines)


@pytest.mark.parametrize(
    ("changes", "keys"),
    [
        # A section that is wrong is said once, not once for each piece that names it.
        ([("depth = 60.0", "depth = -60.0")], ["section.plate.depth"]),
        ([("[section.plate]", "[sections.plate]"), ("[section.bar]", "[sections.bar]")], ["sections"]),
        # Without a member nothing can be said of places on it, nor of loads without ends.
        ([("sweep = 90.0", "sweep = 0.0"), ("distance = 75.0", "angle = 75.0")], ["member.pieces[2].sweep"]),
        (
            [
                ('[[load]]\nname = "pull"', '[[loads]]\nname = "pull"'),
                ('[[load]]\nname = "tip"', '[[loads]]\nname = "tip"'),
            ],
            ["loads"],
        ),
        # What a load that is wrong is called is not looked for in the cases.
        ([("force = [-4000.0, 0.0]", "force = []"), ("pull = 1.0", "pul = 1.0")], ["load[1].force"]),
        ([("width = 20.0\n\n[section.bar]", "width = 20.0\n\n[section.bars]")], ["member.pieces[3].section"]),
    ],
    ids=["section", "sections", "member", "loads", "load", "name"],
)
def test_what_follows_from_a_mistake_is_not_said(changes: list[tuple[str, str]], keys: list[str]) -> None:
    assert [line.split(": ")[1] for line in mistakes(changed(*changes))] == keys


def test_an_empty_file_is_told_what_a_job_needs() -> None:
    found = mistakes("")
    assert [line.split(": ")[1] for line in found] == ["ends", "load", "material", "member", "section"]
    assert all("missing" in line for line in found)


def test_an_empty_list_of_cases_is_a_mistake() -> None:
    without = changed(('[[case]]\nname = "both"\nfactors = { pull = 1.0 }\n', ""))
    assert read(without).cases[0].name == ""
    assert mistakes(f"case = []\n{without}") == [
        "job.toml:1: case: given no case; must hold one at least, or be left out"
    ]


TEE = """shape = "T"
depth = 40.0
flange_width = 30.0
flange_thickness = {flange_thickness}
web_thickness = {web_thickness}
flange = "inner"
"""
ODD_SECTIONS = [
    ('shape = "polygon"\npoints = [[0.0, 10.0], [40.0, 8.0], [30.0, 4.0]]', "points", "decrease"),
    ('shape = "polygon"\npoints = [[5.0, 10.0], [40.0, 8.0]]', "points", "start at the inner face"),
    ('shape = "polygon"\npoints = [[0.0, 10.0]]', "points", "at least 2"),
    ('shape = "widths"\ntable = [[0.0, 10.0], [20.0, 0.0], [40.0, 8.0]]', "table", "zero inside"),
    ('shape = "widths"\ntable = [[0.0, 10.0], [20.0, -1.0]]', "table[2][2]", "-1"),
    ('shape = "tube"\ndiameter = 40.0\nbore = 50.0', "bore", "less than the diameter 40"),
    (
        'shape = "box"\ndepth = 40.0\nwidth = 30.0\nflange_thickness = 25.0\nweb_thickness = 3.0',
        "flange_thickness",
        "half the depth 40",
    ),
    ('shape = "trapezoid"\ndepth = 40.0\ninner_width = 30.0\nouter_width = 0.0', "outer_width", "given 0"),
    ('shape = "triangle"\ndepth = 40.0\nwidth = 30.0\nbase = "left"', "base", '"outer"'),
    (
        TEE.format(flange_thickness=45.0, web_thickness=5.0),
        "flange_thickness",
        "depth",
    ),
    (
        TEE.format(flange_thickness=4.0, web_thickness=35.0),
        "web_thickness",
        "flange",
    ),
]


@pytest.mark.parametrize(("section", "key", "word"), ODD_SECTIONS, ids=lambda value: value[:40])
def test_impossible_sections_name_the_dimension(section: str, key: str, word: str) -> None:
    found = mistakes(GOOD + f"\n[section.odd]\n{section}\n")
    assert len(found) == 1
    assert f": section.odd.{key}: given" in found[0]
    assert word in found[0]


FREE = changed(('start = "clamped"\nend', 'start = "free"\nend'))


def test_loads_on_a_free_member_must_balance_and_what_is_left_is_said() -> None:
    text = demo_text("clamp-frame").replace("force = [0.0, -8000.0]", "force = [0.0, -7900.0]")
    found = mistakes(text)
    assert len(found) == 1
    assert "force of (0, 100)" in found[0]
    assert "must balance" in found[0]


def test_each_case_that_does_not_balance_is_said() -> None:
    found = mistakes(f'{FREE}\n[[case]]\nname = "second"\nfactors = {{ tip = 2.0 }}\n')
    assert [line.split(": ")[1] for line in found] == ["case[1].factors", "case[2].factors"]
    assert "force of (-4000, 500)" in found[0]
    assert "force of (-4000, 1000)" in found[1]


def test_a_moment_that_is_left_is_said() -> None:
    text = demo_text("clamp-frame").replace("piece = 5, distance = 70.0", "piece = 5, distance = 60.0")
    (line,) = mistakes(text)
    # 8000 times the 10 by which the forces miss each other's line.
    assert re.search(r"force of \(0, 0\) and a moment of -?80000 ", line), line


def hook(pin: float, force: str) -> str:
    head, _, tail = (
        demo_text("recovery-hook").replace('enters = "patch"', 'enters = "bearing"').rpartition("width = 20.0")
    )
    return f"{head}pin_diameter = {pin}{tail}".replace("force = [0.0, -25000.0]", f"force = {force}")


def test_a_bearing_must_find_its_normal_and_its_seat() -> None:
    assert read(hook(30.0, "[0.0, -25000.0]"))
    assert "given 80; must not exceed the diameter of the seat, 70" in mistakes(hook(80.0, "[0.0, -25000.0]"))[0]
    (away,) = mistakes(hook(30.0, "[25000.0, 25000.0]"))
    assert "load[1].force: given [25000, 25000]" in away
    assert "nowhere on this piece parallel to the normal" in away


def test_a_factor_that_turns_a_bearing_round_is_said_of_its_case() -> None:
    found = mistakes(hook(30.0, "[0.0, -25000.0]").replace("sling = 1.4", "sling = -1.4"))
    assert len(found) == 1
    assert "case[2].factors: case snatch: " in found[0]


S_BEND = changed(
    ('datum = "inner"', 'datum = "centroid"'),
    (
        '{ arc = 50.0, sweep = 90.0, section = "plate" },',
        '{ arc = 50.0, sweep = 90.0, section = "plate" },\n  { arc = 50.0, sweep = -90.0, section = "plate" },',
    ),
    ("piece = 3, distance", "piece = 4, distance"),
)


@pytest.mark.parametrize(
    ("changes", "line", "key", "word"),
    [
        ([], 25, "member.pieces[3].sweep", "a straight must lie between"),
        ([('datum = "centroid"', 'datum = "inner"')], 25, "member.pieces[3].sweep", 'needs datum = "centroid"'),
        (
            [
                ('datum = "centroid"', 'datum = "outer"'),
                ("arc = 50.0, sweep = 90", "arc = 90.0, sweep = 90"),
                ("arc = 50.0, sweep = -90", "arc = 90.0, sweep = -90"),
            ],
            25,
            "member.pieces[3].sweep",
            'needs datum = "centroid"',
        ),
    ],
    ids=["no straight", "inner", "outer"],
)
def test_a_bend_to_the_other_side_keeps_the_rules(
    changes: list[tuple[str, str]], line: int, key: str, word: str
) -> None:
    found = mistakes(changed(*changes, text=S_BEND))
    assert len(found) == 1, found
    assert found[0].startswith(f"job.toml:{line}: {key}: ")
    assert word in found[0]


def test_a_bend_to_the_other_side_needs_a_symmetric_section() -> None:
    turned = changed(
        (
            '{ arc = 50.0, sweep = 90.0, section = "plate" },',
            '{ arc = 50.0, sweep = 90.0, section = "plate" },\n  { straight = 20.0, section = "plate" },',
        ),
        ("{ arc = 50.0, sweep = -90.0", "{ arc = 50.0, sweep = -90.0"),
        ("piece = 4, distance", "piece = 5, distance"),
        text=S_BEND,
    )
    assert len(read(turned).member.pieces) == 5
    unsymmetric = turned.replace(
        'shape = "rectangle"\ndepth = 60.0\nwidth = 20.0',
        'shape = "triangle"\ndepth = 60.0\nwidth = 20.0\nbase = "inner"',
    )
    found = mistakes(unsymmetric)
    assert len(found) == 1
    assert "member.pieces[4].section" in found[0]
    assert "symmetric" in found[0]


def test_stations_are_limited_and_the_cause_is_named() -> None:
    dense = changed(("every = 15.0", "every = 0.5"), ("arc = 50.0, sweep = 90.0", "arc = 50.0, sweep = 350.0"))
    # The member runs into itself, so nothing is said of its stations.
    assert len(mistakes(dense)) == 1
    ring = changed(
        ('  { straight = 150.0, section = "plate" },\n', ""),
        ('  { straight = 150.0, section = ["plate", "bar"] },\n', ""),
        ("arc = 50.0, sweep = 90.0", "arc = 50.0, sweep = 300.0"),
        ("piece = 3, distance", "piece = 1, angle"),
        ("piece = 2, angle", "piece = 1, angle"),
        ("every = 15.0", "every = 0.5"),
    )
    (line,) = mistakes(ring)
    assert "stations.every: " in line
    assert "599" in line
    slender = changed(("depth = 60.0", "depth = 0.6"), ("depth = 40.0", "depth = 0.4"))
    (line,) = mistakes(slender)
    assert "member.pieces: " in line
    assert "625" in line


def test_a_file_that_is_not_toml_gives_its_line() -> None:
    (line,) = mistakes(changed(("nu = 0.3", "nu = = 0.3")))
    assert line.startswith("job.toml:6: job: not TOML at column 6: ")
    (line,) = mistakes(changed(("nu = 0.3", "nu = 0.3\nnu = 0.3")))
    assert line.startswith("job.toml:7: job: not TOML")
    (line,) = mistakes(GOOD + 'a = "')
    assert line.startswith(f"job.toml:{GOOD.count(chr(10)) + 1}: job: not TOML")


@pytest.mark.parametrize(
    "value", ["1" * (sys.get_int_max_str_digits() + 1), "[" * 5000 + "]" * 5000], ids=["digits", "nested"]
)
def test_what_the_toml_reader_chokes_on_is_one_line(value: str) -> None:
    assert len(mistakes(changed(("E = 206000.0", f"E = {value}")))) == 1


def test_files_that_cannot_be_read_give_one_line(tmp_path: Path) -> None:
    for path in (tmp_path / "none.toml", tmp_path):
        with pytest.raises(JobMistakes) as caught:
            read_job(path)
        (line,) = caught.value.lines
        assert line.startswith(f"{path}: cannot be read (")
    latin = tmp_path / "latin.toml"
    latin.write_bytes(GOOD.encode() + b"\ntitle2 = '\xe4'\n")
    with pytest.raises(JobMistakes) as caught:
        read_job(latin)
    assert caught.value.lines == (f"{latin}:{GOOD.count(chr(10)) + 2}: job: not UTF-8 text; save the file as UTF-8",)


VALUES = ["-1.0", "0", "nan", "inf", "1e99", '"x"', "true", "[]", "{}", "[1.0, 2.0, 3.0]", "1e-9", "2", "9999999999"]
VALUES += ['""', "[[]]", "1979-05-27", '"\\n"', "-0.0", "1e7", "1e-6", "{ piece = 1 }", '"end"', '["plate", "bar"]']


def lines_are_in_the_file(text: str) -> None:
    """A text gives a job, or lines of that file, each on one line of the terminal; never another exception."""
    try:
        parse_job(text.encode(), "job.toml")
    except JobMistakes as caught:
        assert caught.lines
        for line in caught.lines:
            assert line.isprintable()
            assert 1 <= int(line.split(":")[1]) <= text.count("\n") + 1


@settings(max_examples=150, deadline=None)
@given(data=st.data())
def test_any_change_of_a_job_gives_a_job_or_lines_of_that_file(data: st.DataObject) -> None:
    """Values replaced, keys renamed, lines dropped or doubled at random."""
    lines = data.draw(st.sampled_from([GOOD, *(demo_text(name) for name in demo_names())])).splitlines()
    for _ in range(data.draw(st.integers(1, 3))):
        index = data.draw(st.integers(0, len(lines) - 1))
        match data.draw(st.sampled_from(["drop", "double", "value", "key", "number"])):
            case "drop" if len(lines) > 1:
                lines.pop(index)
            case "double":
                lines.insert(index, lines[index])
            case "value" if "=" in lines[index]:
                lines[index] = f"{lines[index].split('=')[0]}= {data.draw(st.sampled_from(VALUES))}"
            case "key" if "=" in lines[index]:
                lines[index] = f"x{lines[index]}"
            case "number":
                value = data.draw(st.sampled_from(VALUES))
                lines[index] = re.sub(r"-?\d+\.\d+", value.replace("\\", r"\\"), lines[index])
    lines_are_in_the_file("\n".join(lines))


@settings(max_examples=100, deadline=None)
@given(at=st.integers(0, len(GOOD)), count=st.integers(0, 20), put=st.text(max_size=6))
def test_any_characters_put_into_a_job_give_a_job_or_lines(at: int, count: int, put: str) -> None:
    lines_are_in_the_file(GOOD[:at] + put + GOOD[at + count :])


@settings(max_examples=60, deadline=None)
@given(st.binary(max_size=200))
def test_any_bytes_give_lines(content: bytes) -> None:
    with pytest.raises(JobMistakes):
        parse_job(content, "job.toml")
