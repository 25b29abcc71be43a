"""Mistakes in a job: one line each, all of a file at once."""

from __future__ import annotations

import difflib
import json
import re
from collections.abc import Iterable, Mapping
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
            key = part if re.fullmatch(r"[A-Za-z0-9_-]+", part) else _quoted(part)
            text += f".{key}" if text else key
    return text or "job"


def shown(value: object) -> str:
    """A given value for a message: short, on one line, as TOML has it."""
    text = _written(value)
    return text if len(text) <= 60 else f"{text[:57]}..."


def _written(value: object) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return _quoted(value)
    if isinstance(value, float):
        # Short, but never so that a value beyond a limit reads as the limit itself.
        return f"{value:g}" if float(f"{value:g}") == value or value != value else repr(value)
    if isinstance(value, list):
        return f"[{', '.join(map(_written, value))}]"
    if isinstance(value, Mapping):
        return f"{{ {', '.join(f'{key} = {_written(item)}' for key, item in value.items())} }}"
    return str(value)


def _quoted(text: str) -> str:
    # JSON's escapes are TOML's: a line break inside a name does not break the line, and what is unseen is shown.
    written = json.dumps(text, ensure_ascii=False)
    return "".join(
        c if c.isprintable() else f"\\u{ord(c):04x}" if ord(c) < 0x10000 else f"\\U{ord(c):08x}" for c in written
    )


def choices(names: Iterable[str]) -> str:
    """Allowed words as a list: ``"clamped", "free"``."""
    return ", ".join(map(_quoted, names))


def meant(word: str, known: Iterable[str]) -> str | None:
    """The known word that a word is nearest to, whatever its capitals; None if none is near."""
    by_letters: dict[str, str] = {}
    for name in known:
        by_letters.setdefault(name.lower(), name)
    close = difflib.get_close_matches(word.lower(), by_letters, n=1, cutoff=0.6)
    return by_letters[close[0]] if close else None


def nearest(word: str, known: Iterable[str]) -> str:
    """``did you mean "depth"?`` for a word near a known one, else what is known."""
    known = list(known)
    close = meant(word, known)
    return f"known: {choices(known) or 'none'}" if close is None else f"did you mean {_quoted(close)}?"
