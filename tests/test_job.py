"""Job files: what is read, and that every mistake comes back as one line with its key, its line and what is allowed."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from intrados.compare.demo import demo_names, demo_text
from intrados.compare.job import Job, parse_job, read_job
from intrados.compare.mistake import JobMistakes
from intrados.compare.toml_lines import Path as KeyPath
from intrados.compare.toml_lines import entries

GOOD = """\
title = "Invented bracket"
units = "mm-N-MPa"

[material]
E = 206000.0
nu = 0.3

[section.plate]
shape = "rectangle"
depth = 60.0
width = 20.0

[section.bar]
shape = "rectangle"
depth = 40.0
width = 20.0

[member]
datum = "inner"
start = [0.0, 0.0]
heading = 0.0
pieces = [
  { straight = 150.0, section = "plate" },
  { arc = 50.0, sweep = 90.0, section = "plate" },
  { straight = 150.0, section = ["plate", "bar"] },
]

[ends]
start = "clamped"
end = "free"

[[load]]
name = "pull"
at = { piece = 3, distance = 75.0 }
face = "inner"
force = [-4000.0, 0.0]
enters = "patch"
width = 20.0

[[load]]
name = "tip"
at = "end"
force = [0.0, 500.0]

[[case]]
name = "both"
factors = { pull = 1.0 }

[stations]
every = 15.0
named = [ { name = "corner", piece = 2, angle = 45.0 } ]
"""


def read(text: str) -> Job:
    return parse_job(text.encode(), "job.toml")


def mistakes(text: str) -> list[str]:
    with pytest.raises(JobMistakes) as caught:
        read(text)
    return list(caught.value.lines)


def test_a_good_job_is_read_as_it_stands() -> None:
    job = read(GOOD)
    assert job.title == "Invented bracket"
    assert job.material.E == 206000.0
    assert [load.name for load in job.loads] == ["pull", "tip"]
    assert [case.name for case in job.cases] == ["both"]
    assert job.agreement.band == 0.05
    assert "corner" in [station.name for station in job.stations]
    # The named station replaces the default at the same place.
    assert "2:45" not in [station.name for station in job.stations]
    assert job.member.pieces[2].sections[1].depth == 40.0


def test_windows_line_ends_and_a_byte_order_mark_are_read() -> None:
    windows = b"\xef\xbb\xbf" + GOOD.replace("\n", "\r\n").encode()
    assert parse_job(windows, "job.toml").stations == read(GOOD).stations


@pytest.mark.parametrize("name", demo_names())
def test_every_demo_is_a_job_said_to_be_invented(name: str) -> None:
    text = demo_text(name)
    assert "Invented" in text.splitlines()[0]
    job = read(text)
    assert job.title
    assert all(loading.imbalance() is None for loading in job.loadings)


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
    ("[section.plate]\nshape", "[section.plate]\nshap", 8, "section.plate.shape", ["missing"]),
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
    ("start = [0.0, 0.0]\nheading", "start = [0.0]\nheading", 20, "member.start", ["1 values", "2"]),
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
]


@pytest.mark.parametrize(("old", "new", "line", "key", "words"), SINGLE, ids=lambda value: str(value)[:30])
def test_one_mistake_gives_one_line(old: str, new: str, line: int, key: str, words: list[str]) -> None:
    assert GOOD.count(old) == 1
    found = mistakes(GOOD.replace(old, new))
    assert len(found) == 1, found
    assert found[0].startswith(f"job.toml:{line}: {key}: "), found[0]
    for word in words:
        assert word in found[0]


def test_all_mistakes_come_at_once_in_the_order_of_the_file() -> None:
    text = GOOD
    changes = [("E = 206000.0", "E = -1.0"), ("depth = 40.0", "depth = -4.0"), ('datum = "inner"', 'datum = "x"')]
    changes += [("sweep = 90.0", "sweep = 0.0"), ('end = "free"', 'end = "fre"'), ('name = "tip"', 'name = "pull"')]
    changes += [
        ("every = 15.0", "evry = 15.0"),
        ("[ends]", "[colours]\n[ends]"),
        ("factors = { pull = 1.0 }", "factors = 3"),
    ]
    for old, new in changes:
        text = text.replace(old, new)
    lines = [int(line.split(":")[1]) for line in mistakes(text)]
    assert len(lines) == len(changes)
    assert lines == sorted(lines)


def test_a_section_that_is_wrong_is_said_once_not_once_a_piece() -> None:
    assert len(mistakes(GOOD.replace("depth = 60.0", "depth = -60.0"))) == 1


@pytest.mark.parametrize(
    ("section", "key", "word"),
    [
        ('shape = "polygon"\npoints = [[0.0, 10.0], [40.0, 8.0], [30.0, 4.0]]', "points", "decrease"),
        ('shape = "polygon"\npoints = [[5.0, 10.0], [40.0, 8.0]]', "points", "start at the inner face"),
        ('shape = "widths"\ntable = [[0.0, 10.0], [20.0, 0.0], [40.0, 8.0]]', "table", "zero inside"),
        ('shape = "tube"\ndiameter = 40.0\nbore = 50.0', "bore", "less than the diameter 40"),
        (
            'shape = "box"\ndepth = 40.0\nwidth = 30.0\nflange_thickness = 25.0\nweb_thickness = 3.0',
            "flange_thickness",
            "half the depth 40",
        ),
        ('shape = "trapezoid"\ndepth = 40.0\ninner_width = 30.0\nouter_width = 0.0', "outer_width", "given 0"),
    ],
)
def test_impossible_sections_name_the_dimension(section: str, key: str, word: str) -> None:
    found = mistakes(GOOD + f"\n[section.odd]\n{section}\n")
    assert len(found) == 1
    assert f"section.odd.{key}: given" in found[0]
    assert word in found[0]


def test_loads_on_a_free_member_must_balance_and_what_is_left_is_said() -> None:
    text = demo_text("clamp-frame").replace("force = [0.0, -8000.0]", "force = [0.0, -7900.0]")
    found = mistakes(text)
    assert len(found) == 1
    assert "force of (0, 100)" in found[0]
    assert "must balance" in found[0]


def test_a_bearing_must_find_its_normal_and_its_seat() -> None:
    hook = demo_text("recovery-hook").replace('enters = "patch"', 'enters = "bearing"')
    head, _, tail = hook.rpartition("width = 20.0")
    assert "given 80; must not exceed the diameter of the seat, 70" in mistakes(f"{head}pin_diameter = 80.0{tail}")[0]
    away = f"{head}pin_diameter = 60.0{tail}".replace("force = [0.0, -25000.0]", "force = [25000.0, 25000.0]")
    assert "nowhere on this piece parallel to the normal" in mistakes(away)[0]


def test_a_file_that_is_not_toml_gives_its_line() -> None:
    found = mistakes(GOOD.replace("nu = 0.3", "nu = = 0.3"))
    assert found == [line for line in found if line.startswith("job.toml:6: job: not TOML")]


def test_files_that_cannot_be_read_give_one_line(tmp_path: Path) -> None:
    for path in (tmp_path / "none.toml", tmp_path):
        with pytest.raises(JobMistakes) as caught:
            read_job(path)
        assert len(caught.value.lines) == 1
        assert "cannot be read" in caught.value.lines[0]
    latin = tmp_path / "latin.toml"
    latin.write_bytes(GOOD.encode() + b"\ntitle2 = '\xe4'\n")
    with pytest.raises(JobMistakes, match="not UTF-8"):
        read_job(latin)


def keys_of(value: object, path: KeyPath = ()) -> list[KeyPath]:
    items: list[tuple[str | int, object]] = []
    if isinstance(value, dict):
        items = list(value.items())
    elif isinstance(value, list):
        items = list(enumerate(value))
    return [path, *(below for key, item in items for below in keys_of(item, (*path, key)))] if items else [path]


@pytest.mark.parametrize("text", [GOOD, *(demo_text(name) for name in demo_names())], ids=["good", *demo_names()])
def test_every_key_of_a_file_has_its_line(text: str) -> None:
    found = entries(text)
    lines = text.splitlines()
    for path in keys_of(tomllib.loads(text))[1:]:
        # A table that only holds others is not written itself.
        assert path in found or path == ("section",), path
        if path in found and isinstance(path[-1], str) and found[path].literal:
            assert path[-1] in lines[found[path].line - 1]


def test_dotted_quoted_and_nested_keys_are_found() -> None:
    text = 'a.b = 1\n"c.d" = 2\n[[e]]\nf = [\n  # no value\n  [1, 2],\n  { g = 0.50 },\n]\n'
    text += "[e.h]\ni = 3\n[[e]]\n[e.h]\ni = 4\n"
    found = entries(text)
    assert found["a", "b"].line == 1
    assert found["c.d",].line == 2
    assert found["e", 0, "f", 0, 1].line == 6
    assert found["e", 0, "f", 1, "g"].literal == "0.50"
    assert found["e", 0, "h", "i"].line == 10
    assert found["e", 1, "h", "i"].line == 13


VALUES = ["-1.0", "0", "nan", "inf", "1e99", '"x"', "true", "[]", "{}", "[1.0, 2.0, 3.0]", "1e-9", "2", "9999999999"]


@settings(max_examples=150, deadline=None, derandomize=True)
@given(data=st.data())
def test_any_change_of_a_job_gives_a_job_or_lines_of_that_file(data: st.DataObject) -> None:
    """Values replaced, lines dropped or doubled at random: never another exception, never a line outside the file."""
    lines = data.draw(st.sampled_from([GOOD, *(demo_text(name) for name in demo_names())])).splitlines()
    for _ in range(data.draw(st.integers(1, 3))):
        index = data.draw(st.integers(0, len(lines) - 1))
        match data.draw(st.sampled_from(["drop", "double", "value", "key"])):
            case "drop":
                lines.pop(index)
            case "double":
                lines.insert(index, lines[index])
            case "value" if "=" in lines[index]:
                lines[index] = f"{lines[index].split('=')[0]}= {data.draw(st.sampled_from(VALUES))}"
            case "key" if "=" in lines[index]:
                lines[index] = f"x{lines[index]}"
        if not lines:
            lines = [""]
    text = "\n".join(lines)
    try:
        read(text)
    except JobMistakes as caught:
        assert caught.lines
        for line in caught.lines:
            assert 1 <= int(line.split(":")[1]) <= len(lines) + 1


@settings(max_examples=60, deadline=None, derandomize=True)
@given(st.binary(max_size=200))
def test_any_bytes_give_lines(content: bytes) -> None:
    with pytest.raises(JobMistakes):
        parse_job(content, "job.toml")
