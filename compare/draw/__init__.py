"""The figures of a check, drawn from its results alone."""

from __future__ import annotations

import re
from collections.abc import Iterator
from pathlib import Path

from matplotlib.figure import Figure

from intrados.compare.draw import style
from intrados.compare.draw.along import draw_along
from intrados.compare.draw.budget import draw_budget
from intrados.compare.draw.member import draw_member
from intrados.compare.draw.profile import draw_profile
from intrados.compare.draw.section import draw_section
from intrados.compare.results import Results

_DRAWERS = {"member": draw_member, "along": draw_along, "profile": draw_profile, "budget": draw_budget}


def draw_all(results: Results) -> Iterator[tuple[str, Figure]]:
    """Name and figure, one after the other: member, along, profile, budget and, on an arc, section for every case.

    With more than one case the name carries the case (``member-lift``). To be used within ``style.house_style()``.
    """
    suffixes = _suffixes([case.name for case in results.cases])
    for case, suffix in zip(results.cases, suffixes, strict=True):
        for name, draw in _DRAWERS.items():
            yield name + suffix, draw(results, case)
        if case.section_field is not None:
            yield f"section{suffix}", draw_section(results, case, case.section_field)


def save_all(results: Results, folder: Path) -> tuple[Path, ...]:
    """Write ``figures/NAME.svg`` and ``.png`` into a folder, made if needed; returns the paths of the SVG files."""
    figures = folder / "figures"
    figures.mkdir(parents=True, exist_ok=True)
    written = []
    with style.house_style():
        for name, figure in draw_all(results):
            style.save(figure, figures, name)
            written.append(figures / f"{name}.svg")
    return tuple(written)


def _suffixes(names: list[str]) -> list[str]:
    """What a case adds to a file name: its name with plain letters only, and a number where two would be the same."""
    if len(names) == 1:
        return [""]
    plain = [re.sub(r"[^a-z0-9]+", "-", name.lower()).strip("-") for name in names]
    return [
        f"-{word}" if word and plain.count(word) == 1 else f"-{word or 'case'}-{index}"
        for index, word in enumerate(plain, start=1)
    ]
