"""Where keys stand in a TOML text, and what is written there."""

from __future__ import annotations

import json
import tomllib
from typing import Any

import pytest
from bracket import GOOD
from hypothesis import given, settings
from hypothesis import strategies as st

from intrados.compare.demo import demo_names, demo_text
from intrados.compare.toml_lines import Entry, Path, entries, line_of


def paths(value: object, path: Path = ()) -> list[Path]:
    """The paths of everything in what tomllib reads."""
    items: list[tuple[str | int, object]] = []
    if isinstance(value, dict):
        items = list(value.items())
    elif isinstance(value, list):
        items = list(enumerate(value))
    return [(*path, key) for key, _ in items] + [below for key, item in items for below in paths(item, (*path, key))]


def at(value: Any, path: Path) -> Any:
    for part in path:
        value = value[part]
    return value


def agree(text: str) -> None:
    """Every path of tomllib's data has its line, or a table above it has; what is written there is its value."""
    data = tomllib.loads(text)
    found = entries(text)
    lines = text.split("\n")
    for path in paths(data):
        assert 1 <= line_of(found, path) <= len(lines)
        if path not in found:
            # Only a table that is named in the header of one below it is not written itself.
            assert isinstance(at(data, path), dict)
            assert any(other[: len(path)] == path for other in found)
            continue
        entry = found[path]
        if entry.literal and not isinstance(at(data, path), float):
            assert tomllib.loads(f"value = {entry.literal}")["value"] == at(data, path)
        if entry.literal:
            assert entry.literal.split("\n")[0] in lines[entry.line - 1]
    assert {path for path, entry in found.items() if entry.literal} <= set(paths(data))


@pytest.mark.parametrize("text", [GOOD, *map(demo_text, demo_names())], ids=["bracket", *demo_names()])
def test_every_key_of_a_job_has_its_line(text: str) -> None:
    agree(text)


CASES: list[tuple[str, dict[Path, Entry]]] = [
    ("a.b = 1", {("a",): Entry(1, ""), ("a", "b"): Entry(1, "1")}),
    (
        "[a.b]\nc.d = 0x10",
        {("a", "b"): Entry(1, ""), ("a", "b", "c"): Entry(2, ""), ("a", "b", "c", "d"): Entry(2, "0x10")},
    ),
    ('"c.d" = 2', {("c.d",): Entry(1, "2")}),
    ('"c\\u0064\\"e" = 2', {('cd"e',): Entry(1, "2")}),
    ("'c\\u0064' = 2", {("c\\u0064",): Entry(1, "2")}),
    ("\"'q'\" = 2", {("'q'",): Entry(1, "2")}),
    ('a."b.c".d = 1_000', {("a",): Entry(1, ""), ("a", "b.c"): Entry(1, ""), ("a", "b.c", "d"): Entry(1, "1_000")}),
    (
        "a = [\n  # no element\n  [1, 2], # one\n  { g = 0.50 },\n]",
        {
            ("a",): Entry(1, "[\n  # no element\n  [1, 2], # one\n  { g = 0.50 },\n]"),
            ("a", 0): Entry(3, "[1, 2]"),
            ("a", 0, 0): Entry(3, "1"),
            ("a", 0, 1): Entry(3, "2"),
            ("a", 1): Entry(4, "{ g = 0.50 }"),
            ("a", 1, "g"): Entry(4, "0.50"),
        },
    ),
    (
        "[[e]]\n[e.h]\ni = 3\n[[e]]\n[e.h]\ni = +4",
        {
            ("e",): Entry(4, ""),
            ("e", 0): Entry(1, ""),
            ("e", 0, "h"): Entry(2, ""),
            ("e", 0, "h", "i"): Entry(3, "3"),
            ("e", 1): Entry(4, ""),
            ("e", 1, "h"): Entry(5, ""),
            ("e", 1, "h", "i"): Entry(6, "+4"),
        },
    ),
    (
        "[[a]]\n[[a.b]]\n[[a.b]]\n[[a]]\n[[a.b]]\nc = 'x'",
        {
            ("a",): Entry(4, ""),
            ("a", 0): Entry(1, ""),
            ("a", 0, "b"): Entry(3, ""),
            ("a", 0, "b", 0): Entry(2, ""),
            ("a", 0, "b", 1): Entry(3, ""),
            ("a", 1): Entry(4, ""),
            ("a", 1, "b"): Entry(5, ""),
            ("a", 1, "b", 0): Entry(5, ""),
            ("a", 1, "b", 0, "c"): Entry(6, "'x'"),
        },
    ),
    ('a = """\nb = 1\n"""\nc = 2', {("a",): Entry(1, '"""\nb = 1\n"""'), ("c",): Entry(4, "2")}),
]


@pytest.mark.parametrize(("text", "expected"), CASES, ids=[text.split("\n")[0] for text, _ in CASES])
def test_entries_of_what_toml_can_write(text: str, expected: dict[Path, Entry]) -> None:
    assert entries(text) == expected
    agree(text)


def test_a_place_that_is_not_written_has_the_line_of_the_table_above() -> None:
    found = entries("[a]\nb = { c = 1 }\n")
    assert line_of(found, ("a", "missing")) == 1
    assert line_of(found, ("a", "b", "c", 5, "d")) == 2
    assert line_of(found, ("elsewhere", "b")) == 1


KEYS = st.text(st.characters(codec="utf-8", exclude_categories=("Cs",)), max_size=5).map(
    lambda text: json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")
) | st.sampled_from(["a", "b-1", "7", "'lit.eral'"])
SCALARS = st.sampled_from(["1", "-0.5e3", "true", '"x # y"', "'z'", "inf", "1979-05-27", '"""one\n  two"""'])
LISTS = {"space": " ", "lines": "\n  # a comment, [\n  "}


def _array(items: list[str], space: str) -> str:
    return f"[{space}{f',{space}'.join(items)}{space}]"


def _inline(pairs: list[tuple[str, str]]) -> str:
    unique = {tomllib.loads(f"{key} = 0").popitem()[0]: (key, value) for key, value in pairs}
    return f"{{ {', '.join(f'{key} = {value}' for key, value in unique.values())} }}"


VALUES = st.recursive(
    SCALARS,
    lambda inner: (
        st.builds(_array, st.lists(inner, min_size=1, max_size=3), st.sampled_from(list(LISTS.values())))
        | st.builds(_inline, st.lists(st.tuples(KEYS, inner), min_size=1, max_size=3))
    ),
    max_leaves=6,
)


@settings(max_examples=150, deadline=None)
@given(
    st.lists(
        st.tuples(
            st.sampled_from(["[{}]", "[[{}]]", "{} = 3"]),
            st.lists(KEYS, min_size=1, max_size=3),
            st.lists(st.tuples(st.lists(KEYS, min_size=1, max_size=2), VALUES), max_size=3),
        ),
        max_size=5,
    )
)
def test_any_toml_has_its_paths(tables: list[tuple[str, list[str], list[tuple[list[str], str]]]]) -> None:
    """Tables of all kinds are added one by one; one that TOML does not allow beside the others is left out."""
    text = ""
    for head, names, pairs in tables:
        longer = text + head.format(" . ".join(names)) + "\n"
        longer += "".join(f"{'.'.join(keys)} = {value} # comment\n" for keys, value in pairs)
        try:
            tomllib.loads(longer)
        except tomllib.TOMLDecodeError:
            continue
        text = longer
    agree(text)
