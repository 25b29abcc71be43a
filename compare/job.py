"""A job file read into frozen data, or every one of its mistakes."""

from __future__ import annotations

import hashlib
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path as FilePath

from intrados.compare import schema
from intrados.compare.loads import read_loads, scaled
from intrados.compare.location import read_place
from intrados.compare.mistake import JobMistakes, choices, located, nearest, shown
from intrados.compare.reader import Reader
from intrados.compare.sections import read_sections
from intrados.compare.toml_lines import Path
from intrados.compare.units import UNIT_SETS, Units
from intrados.theory.hand import HandTheory
from intrados.theory.load import Load, LoadError
from intrados.theory.member import Arc, Member, Piece, Straight
from intrados.theory.outline import faults
from intrados.theory.section import Section
from intrados.theory.statics import Loading, Support, loading
from intrados.theory.station import Station, default_stations, named_station, with_named

_TABLES = ("title", "units", "material", "section", "member", "ends", "load", "case", "stations", "agreement", "theory")
_MOST_STATIONS = 500


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
    for key in data:
        if key not in _TABLES:
            reader.add((key,), f"unknown key; {nearest(key, _TABLES)}")
    title = data.get("title", "Untitled")
    if not isinstance(title, str) or not title.strip():
        reader.add(("title",), f"given {shown(title)}; must be a text in quotes")
        title = ""
    unit_set = data.get("units", "mm-N-MPa")
    if not isinstance(unit_set, str) or unit_set not in UNIT_SETS:
        reader.add(("units",), f"given {shown(unit_set)}; must be one of {choices(UNIT_SETS)}")
        unit_set = "mm-N-MPa"
    material = reader.table(schema.Material, _required(reader, data, "material"), ("material",))
    agreement = reader.table(schema.Agreement, data.get("agreement", {}), ("agreement",))
    theory = reader.table(schema.Theory, data.get("theory", {}), ("theory",))
    sections = read_sections(reader, _required(reader, data, "section"))
    member = _read_member(reader, _required(reader, data, "member"), sections)
    ends = _read_ends(reader, _required(reader, data, "ends"))
    loads = read_loads(reader, data.get("load", []), member, ends)
    cases = _read_cases(reader, data.get("case"), loads)
    stations = _read_stations(reader, data.get("stations", {}), member)
    if member is None or ends is None or loads is None or cases is None:
        return None
    loadings = _loadings(reader, member, ends, loads, cases)
    if reader.mistakes or material is None or agreement is None or theory is None:
        return None
    sound = {name: section for name, section in sections.items() if section is not None}
    given = tuple(load for _, load in loads)
    return Job(
        title,
        unit_set,
        UNIT_SETS[unit_set],
        material,
        sound,
        member,
        given,
        cases,
        loadings,
        stations,
        agreement,
        HandTheory(theory.flanges, material.nu),
        sha256,
    )


def _required(reader: Reader, data: Mapping[str, object], key: str) -> object:
    if key not in data:
        reader.add((key,), f"missing; a job needs [{key}]")
        return None
    return data[key]


def _read_member(reader: Reader, data: object, sections: Mapping[str, Section | None]) -> Member | None:
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


def _read_piece(reader: Reader, data: object, path: Path, sections: Mapping[str, Section | None]) -> Piece | None:
    if isinstance(data, Mapping) and ("straight" in data) == ("arc" in data):
        reader.add(path, "must have either straight = its length, or arc = its radius and sweep = its angle")
        return None
    is_arc = isinstance(data, Mapping) and "arc" in data
    table: schema.ArcPiece | schema.StraightPiece | None
    table = reader.table(schema.ArcPiece, data, path) if is_arc else reader.table(schema.StraightPiece, data, path)
    if table is None:
        return None
    names = [table.section] * 2 if isinstance(table.section, str) else table.section
    for name in dict.fromkeys(names):
        if name not in sections:
            reader.add(
                (*path, "section"), f'given "{name}", which is no section of this job; {nearest(name, sections)}'
            )
    first, second = (sections.get(name) for name in names)
    if isinstance(table, schema.ArcPiece) and table.sweep == 0.0:
        reader.add((*path, "sweep"), "given 0; must not be zero: > 0 turns left, < 0 right")
        return None
    if first is None or second is None:
        return None
    if isinstance(table, schema.ArcPiece):
        return Arc(table.arc, table.sweep, (first, second))
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


def _read_stations(reader: Reader, data: object, member: Member | None) -> tuple[Station, ...]:
    table = reader.table(schema.Stations, data, ("stations",))
    named_data = data.get("named", []) if isinstance(data, Mapping) else []
    path: Path = ("stations", "named")
    named = reader.each(named_data, path, lambda item, at: reader.table(schema.NamedStation, item, at))
    reader.unique_names(named_data, path)
    if member is None or table is None:
        return ()
    placed = []
    for index, item in enumerate(named):
        at = None if item is None else read_place(reader, item, member, (*path, index))
        if at is not None:
            placed.append(named_station(member, item.name, *at))
    defaults = default_stations(member, table.every)
    if len(defaults) > _MOST_STATIONS:
        reader.add(
            ("stations", "every"),
            f"given {table.every:g}, which makes {len(defaults)} stations; must make {_MOST_STATIONS} at most",
        )
    stations = with_named(defaults, tuple(placed))
    automatic = {station.name for station in stations if station not in placed}
    for index, item in enumerate(named):
        if item is not None and item.name in automatic:
            reader.add((*path, index, "name"), f'given "{item.name}", which is the name of another station')
    return stations


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
