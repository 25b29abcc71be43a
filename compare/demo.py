"""The demo jobs that come with the program."""

from __future__ import annotations

import tomllib
from importlib.resources import files

from intrados.compare.mistake import JobMistakes, nearest


def demo_names() -> tuple[str, ...]:
    """Names of the demo jobs, in alphabetical order."""
    folder = files("intrados.compare") / "demos"
    return tuple(sorted(file.name.removesuffix(".toml") for file in folder.iterdir() if file.name.endswith(".toml")))


def demo_text(name: str) -> str:
    """The text of a demo job. Raises JobMistakes for an unknown name."""
    names = demo_names()
    if name not in names:
        raise JobMistakes((f"demo:{name}: no such demo; {nearest(name, names)}",))
    return (files("intrados.compare") / "demos" / f"{name}.toml").read_text(encoding="utf-8")


def demo_title(name: str) -> str:
    """The title of a demo job."""
    title: str = tomllib.loads(demo_text(name))["title"]
    return title
