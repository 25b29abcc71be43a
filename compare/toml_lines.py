"""Where every key of a TOML text stands, and how its value is written: what a plain TOML reader throws away."""

from __future__ import annotations

import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from tree_sitter import Node

Path = tuple[str | int, ...]


@dataclass(frozen=True)
class Entry:
    """The line (from 1) a key or an element stands on, and its value as written (empty for a table)."""

    line: int
    literal: str


def entries(text: str) -> dict[Path, Entry]:
    """Every key and array element of a TOML text by its path, such as ("member", "pieces", 1, "arc"); 0 is the first.

    The text should be valid TOML; of one that is not, what can be made out is given.
    """
    import tree_sitter_toml
    from tree_sitter import Language, Parser

    tree = Parser(Language(tree_sitter_toml.language())).parse(text.encode())
    found: dict[Path, Entry] = {}
    counts: dict[Path, int] = {}
    for node in tree.root_node.named_children:
        if node.type == "pair":
            found.update(_pair(node, ()))
        elif node.type in ("table", "table_array_element"):
            found.update(_table(node, counts))
    return found


def line_of(found: dict[Path, Entry], path: Path) -> int:
    """The line of a path, or of the nearest table above it that is written in the file; 1 if there is none."""
    while path:
        if path in found:
            return found[path].line
        path = path[:-1]
    return 1


def _table(node: Node, counts: dict[Path, int]) -> Iterator[tuple[Path, Entry]]:
    head, *rest = [child for child in node.named_children if child.type != "comment"]
    names = _key(head)
    path: Path = ()
    for depth, name in enumerate(names, start=1):
        path = (*path, name)
        # A table below an array of tables belongs to the array's last element.
        if path in counts and not (depth == len(names) and node.type == "table_array_element"):
            path = (*path, counts[path])
    line = node.start_point[0] + 1
    if node.type == "table_array_element":
        counts[path] = counts.get(path, -1) + 1
        yield path, Entry(line, "")
        path = (*path, counts[path])
    yield path, Entry(line, "")
    for pair in rest:
        if pair.type == "pair":
            yield from _pair(pair, path)


def _pair(node: Node, above: Path) -> Iterator[tuple[Path, Entry]]:
    key, value = [child for child in node.named_children if child.type != "comment"][:2]
    names = _key(key)
    line = node.start_point[0] + 1
    for count in range(1, len(names)):
        yield (*above, *names[:count]), Entry(line, "")
    yield from _value(value, (*above, *names), line)


def _value(node: Node, path: Path, line: int) -> Iterator[tuple[Path, Entry]]:
    yield path, Entry(line, (node.text or b"").decode())
    children = [child for child in node.named_children if child.type != "comment"]
    if node.type == "array":
        for index, child in enumerate(children):
            yield from _value(child, (*path, index), child.start_point[0] + 1)
    elif node.type == "inline_table":
        for child in children:
            yield from _pair(child, path)


def _key(node: Node) -> tuple[str, ...]:
    if node.type == "dotted_key":
        return tuple(name for child in node.named_children for name in _key(child))
    text = (node.text or b"").decode()
    # A quoted key may hold escapes: the TOML reader knows them.
    return tuple(tomllib.loads(f"{text} = 0")) if node.type == "quoted_key" else (text,)
