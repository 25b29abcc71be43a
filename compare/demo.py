"""The demo jobs that come with the program."""

from __future__ import annotations

import tomllib
from pathlib import Path

from intrados.compare.mistake import JobMistakes, nearest


def demo_names() -> tuple[str, ...]:
    """Names of the demo jobs, in alphabetical order."""
    return tuple(sorted(file.stem for file in _folder().glob("*.toml")))


def demo_text(name: str) -> str:
    """The text of a demo job. Raises JobMistakes for an unknown name."""
    names = demo_names()
    if name not in names:
        raise JobMistakes((f"demo:{name}: no such demo; {nearest(name, names)}",))
    return (_folder() / f"{name}.toml").read_text(encoding="utf-8")


def demo_title(name: str) -> str:
    """The title of a demo job."""
    title: str = tomllib.loads(demo_text(name))["title"]
    return title


def _folder() -> Path:
    # importlib.resources would do the same for ten times the import time.
    return Path(__file__).with_name("demos")
