"""An invented bracket as a job file, which tests change, and the ways to read it."""

from __future__ import annotations

import pytest

from intrados.compare.job import Job, parse_job
from intrados.compare.mistake import JobMistakes

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


def changed(*changes: tuple[str, str], text: str = GOOD) -> str:
    """The job with each ``old`` text, which stands in it once, replaced by its ``new`` one."""
    for old, new in changes:
        assert text.count(old) == 1, old
        text = text.replace(old, new)
    return text


def read(text: str) -> Job:
    return parse_job(text.encode(), "job.toml")


def mistakes(text: str) -> list[str]:
    """The lines that a job with mistakes gives."""
    with pytest.raises(JobMistakes) as caught:
        read(text)
    return list(caught.value.lines)
