"""A job file read into frozen data, or every one of its mistakes."""

from __future__ import annotations

import hashlib
import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path as FilePath

from intrados.compare import schema
from intrados.compare.loads import read_loads, scaled
from intrados.compare.mistake import JobMistakes, choices, located, nearest, shown
from intrados.compare.reader import Reader
from intrados.compare.sections import read_sections
from intrados.compare.stations import read_stations, settle
from intrados.compare.toml_lines import Path
from intrados.compare.units import UNIT_SETS, Units
from intrados.theory.hand import HandTheory
from intrados.theory.load import Load, LoadError
from intrados.theory.member import Arc, Member, Piece, Straight
from intrados.theory.outline import faults
from intrados.theory.section import Section
from intrados.theory.statics import Loading, Support, loading
from intrados.theory.station import Station

_TABLES = ("title", "units", "material", "section", "member", "ends", "load", "case", "stations", "agreement", "theory")
# A straight longer than so many depths is a slip of units.
_MOST_DEPTHS = 500
_CONTROL = re.compile(r"[\x00-\x1f\x7f-\x9f]")


@dataclass(frozen=True)
class Case:
    """A load case: factors on the loads by name, 1 where none is given. The case of a job without cases has no name."""

    name: str
    factors: Mapping[str, float]


@dataclass(frozen=True)
class Job:
    """A checked job. ``loadings`` holds the loaded member of each case, ``loads`` the loads as given."""

    title: str
    unit_set: str
    units: Units
    material: schema.Material
    sections: Mapping[str, Section]
    member: Member
    loads: tuple[Load, ...]
    cases: tuple[Case, ...]
    loadings: tuple[Loading, ...]
    stations: tuple[Station, ...]
    agreement: schema.Agreement
    hand: HandTheory
    sha256: str


def read_job(path: FilePath) -> Job:
    """The job in a file. Raises JobMistakes with a line for every mistake."""
    try:
        content = path.read_bytes()
    except OSError as error:
        raise JobMistakes((f"{path}: cannot be read ({error.strerror}); give a job file or demo:NAME",)) from error
    return parse_job(content, str(path))


def parse_job(content: bytes, source: str) -> Job:
    """The job in the bytes of a file; ``source`` names it in mistakes. Raises JobMistakes."""
    try:
        text = content.decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise JobMistakes((f"{source}:{line}: job: not UTF-8 text; save the file as UTF-8",)) from error
    try:
        data = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise JobMistakes((_not_toml(source, text, str(error)),)) from error
    except (ValueError, RecursionError) as error:
        said = "a number has thousands of digits, or brackets are nested hundreds deep"
        raise JobMistakes((f"{source}:1: job: cannot be read: {said}",)) from error
    reader = Reader()
    job = _read(reader, data, hashlib.sha256(content).hexdigest())
    if reader.mistakes or job is None:
        raise located(source, text, reader.mistakes)
    return job


def _not_toml(source: str, text: str, said: str) -> str:
    """tomllib ends its message with the place: move the line to the front."""
    message, _, place = said.partition(" (at ")
    words = place.rstrip(")").replace(",", "").split()
    line = words[1] if words[:1] == ["line"] else str(text.count("\n") + 1)
    column = f" at column {words[3]}" if len(words) == 4 else ""
    return f"{source}:{line}: job: not TOML{column}: {message[0].lower()}{message[1:]}"


def _read(reader: Reader, data: Mapping[str, object], sha256: str) -> Job | None:
    misspelt = reader.unknown(data, _TABLES, ())
    title = data.get("title", "Untitled")
    if not isinstance(title, str) or not title.strip() or _CONTROL.search(title):
        reader.add(("title",), f"given {shown(title)}; must be a text in quotes, on one line")
        title = ""
    unit_set = data.get("units", "mm-N-MPa")
    if not isinstance(unit_set, str) or unit_set not in UNIT_SETS:
        reader.add(("units",), f"given {shown(unit_set)}; must be one of {choices(UNIT_SETS)}")
        unit_set = "mm-N-MPa"
    given = {key: _required(reader, data, key, misspelt) for key in ("material", "section", "member", "ends")}
    material = None
    if given["material"] is not None:
        material = reader.table(schema.Material, given["material"], ("material",))
    agreement = reader.table(schema.Agreement, data.get("agreement", {}), ("agreement",))
    theory = reader.table(schema.Theory, data.get("theory", {}), ("theory",))
    sections = read_sections(reader, given["section"])
    member = _read_member(reader, given["member"], sections)
    ends = _read_ends(reader, given["ends"])
    loads = read_loads(reader, data.get("load", None if "load" in misspelt else []), member, ends)
    cases = _read_cases(reader, data.get("case"), loads)
    asked = read_stations(reader, data.get("stations", {}), member)
    if sections is None or member is None or ends is None or loads is None or cases is None:
        return None
    loadings = _loadings(reader, member, ends, loads, cases)
    stations = settle(reader, member, asked, loadings)
    if reader.mistakes or material is None or agreement is None or theory is None:
        return None
    sound = {name: section for name, section in sections.items() if section is not None}
    return Job(
        title,
        unit_set,
        UNIT_SETS[unit_set],
        material,
        sound,
        member,
        tuple(load for _, load in loads),
        cases,
        loadings,
        stations,
        agreement,
        HandTheory(theory.flanges, material.nu),
        sha256,
    )


def _required(reader: Reader, data: Mapping[str, object], key: str, misspelt: set[str]) -> object:
    """What the key holds; None where it is missing, which is noted unless it is there under a misspelt name."""
    if key not in data and key not in misspelt:
        reader.add((key,), f"missing; a job needs [{key}]")
    return data.get(key)


def _read_member(reader: Reader, data: object, sections: Mapping[str, Section | None] | None) -> Member | None:
    if data is None:
        return None
    head = reader.table(schema.Member, data, ("member",))
    given = data.get("pieces") if isinstance(data, Mapping) else None
    if not isinstance(given, list):
        return None
    pieces = reader.each(given, ("member", "pieces"), lambda item, path: _read_piece(reader, item, path, sections))
    if head is None or not pieces or any(piece is None for piece in pieces):
        return None
    member = Member(head.datum, (head.start[0], head.start[1]), head.heading, tuple(pieces))
    found = faults(member)
    for fault in found:
        reader.add(("member", "pieces", fault.piece, fault.key), _with_given(given[fault.piece], fault.key, fault.text))
    return None if found else member


def _with_given(table: Mapping[str, object], key: str, text: str) -> str:
    return f"given {shown(table[key])}; {text}"


def _read_piece(
    reader: Reader, data: object, path: Path, sections: Mapping[str, Section | None] | None
) -> Piece | None:
    if isinstance(data, Mapping) and ("straight" in data) == ("arc" in data):
        reader.add(path, "must have either straight = its length, or arc = its radius and sweep = its angle")
        return None
    is_arc = isinstance(data, Mapping) and "arc" in data
    table: schema.ArcPiece | schema.StraightPiece | None
    table = reader.table(schema.ArcPiece, data, path) if is_arc else reader.table(schema.StraightPiece, data, path)
    if table is None:
        return None
    if isinstance(table, schema.ArcPiece) and table.sweep == 0.0:
        reader.add((*path, "sweep"), "given 0; must not be zero: > 0 turns left, < 0 right")
    if sections is None:
        return None
    names = [table.section] * 2 if isinstance(table.section, str) else table.section
    for name in dict.fromkeys(names):
        if name not in sections:
            said = f"given {shown(name)}, which is no section of this job; {nearest(name, sections)}"
            reader.add((*path, "section"), said)
    first, second = (sections.get(name) for name in names)
    if first is None or second is None:
        return None
    if isinstance(table, schema.ArcPiece):
        return None if table.sweep == 0.0 else Arc(table.arc, table.sweep, (first, second))
    depth = min(first.depth, second.depth)
    if table.straight > _MOST_DEPTHS * depth:
        given = f"given {shown(table.straight)}, with a depth of {shown(depth)}"
        reader.add((*path, "straight"), f"{given}; must be {_MOST_DEPTHS} depths at most: are both in one unit?")
        return None
    return Straight(table.straight, (first, second))


def _read_ends(reader: Reader, data: object) -> tuple[Support, Support] | None:
    ends = None if data is None else reader.table(schema.Ends, data, ("ends",))
    if ends is None:
        return None
    if ends.start == ends.end == "clamped":
        reader.add(
            ("ends", "end"),
            'given "clamped" at both ends, which statics alone does not determine; must be "free" at one end at least',
        )
        return None
    return ends.start, ends.end


def _read_cases(reader: Reader, data: object, loads: list[tuple[Path, Load]] | None) -> tuple[Case, ...] | None:
    if data is None:
        return (Case("", {}),)
    if data == []:
        reader.add(("case",), "given no case; must hold one at least, or be left out")
    reader.unique_names(data, ("case",))
    tables = reader.each(data, ("case",), lambda item, path: reader.table(schema.Case, item, path))
    if any(table is None for table in tables) or not tables:
        return None
    if loads is None:
        return None
    names = [load.name for _, load in loads]
    known = True
    for index, table in enumerate(tables):
        for name in table.factors:
            if name not in names:
                reader.add(("case", index, "factors", name), f"no load has this name; {nearest(name, names)}")
                known = False
    return tuple(Case(table.name, table.factors) for table in tables) if known else None


def _loadings(
    reader: Reader,
    member: Member,
    ends: tuple[Support, Support],
    loads: list[tuple[Path, Load]],
    cases: tuple[Case, ...],
) -> tuple[Loading, ...]:
    """The member under the loads of each case; what cannot enter or does not balance is noted."""
    loadings = []
    for index, case in enumerate(cases):
        where: Path = ("case", index, "factors") if case.name else ("load",)
        factors = [case.factors.get(load.name, 1.0) for _, load in loads]
        acting = [scaled(load, factor) for (_, load), factor in zip(loads, factors, strict=True) if factor != 0.0]
        if not acting:
            reader.add(where, f"no load acts in case {case.name}: give one a factor that is not zero")
            continue
        try:
            loaded = loading(member, *ends, tuple(acting))
        except LoadError as error:
            reader.add(where, f"case {case.name}: {error}")
            continue
        imbalance = loaded.imbalance()
        if imbalance is not None:
            reader.add(
                where,
                f"loads on a member with both ends free must balance{' in case ' + case.name if case.name else ''}: "
                f"what is left is a force of ({imbalance.force[0]:.6g}, {imbalance.force[1]:.6g}) and a moment of "
                f"{imbalance.moment:.6g} (force times length, counter-clockwise)",
            )
        loadings.append(loaded)
    return tuple(loadings)
