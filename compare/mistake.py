"""Mistakes in a job: one line each, all of a file at once."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass

from intrados.compare.toml_lines import Path, entries, line_of


@dataclass(frozen=True)
class Mistake:
    """What is wrong at a ``path`` of the job; ``text`` says what was given and what is allowed."""

    path: Path
    text: str


class JobMistakes(Exception):
    """A job that cannot be used; ``lines`` holds one line for every mistake, in the order of the file."""

    def __init__(self, lines: tuple[str, ...]) -> None:
        super().__init__("\n".join(lines))
        self.lines = lines


def located(source: str, text: str, mistakes: Iterable[Mistake]) -> JobMistakes:
    """The mistakes as lines ``source:line: key: text``, sorted by line, each said once."""
    found = entries(text)
    lines = sorted(
        {(line_of(found, mistake.path), f"{key_text(mistake.path)}: {mistake.text}") for mistake in mistakes}
    )
    return JobMistakes(tuple(f"{source}:{line}: {said}" for line, said in lines))


def key_text(path: Path) -> str:
    """A path as a user writes it; elements count from 1: ``member.pieces[2].arc``."""
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part + 1}]"
        else:
            text += f".{part}" if text else part
    return text or "job"


def shown(value: object) -> str:
    """A given value for a message: short, on one line, as TOML has it."""
    if isinstance(value, bool):
        return str(value).lower()
    text = f'"{value}"' if isinstance(value, str) else f"{value:g}" if isinstance(value, float) else str(value)
    text = " ".join(text.split())
    return text if len(text) <= 60 else f"{text[:57]}..."


def choices(names: Iterable[str]) -> str:
    """Allowed words as a list: ``"clamped", "free"``."""
    return ", ".join(f'"{name}"' for name in names)


def nearest(word: str, known: Iterable[str]) -> str:
    """`` (nearest: "depth")`` for a word near a known one, else what is known."""
    known = list(known)
    close = difflib.get_close_matches(word, known, n=1, cutoff=0.6)
    return f'did you mean "{close[0]}"?' if close else f"known: {choices(known) or 'none'}"
