"""The stations of a job: the default ones, the named ones, and that each can have a cut of its own."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from intrados.compare import schema
from intrados.compare.location import read_place
from intrados.compare.mistake import shown
from intrados.compare.reader import Reader
from intrados.compare.toml_lines import Path
from intrados.theory.member import Arc, Member
from intrados.theory.statics import Loading
from intrados.theory.station import Station, default_stations, named_station, with_named

_NAMED: Path = ("stations", "named")
_MOST_STATIONS = 500
_SAME = 1e-9
# Two cuts nearer than this share of their piece leave no room for elements between them.
_TOO_CLOSE = 1e-4


@dataclass(frozen=True)
class Asked:
    """The stations a job asks for: the default ones, and the named ones by their index in the file."""

    defaults: tuple[Station, ...]
    named: Mapping[int, Station]


def read_stations(reader: Reader, data: object, member: Member | None) -> Asked:
    """The stations of the [stations] table; mistakes are noted. Without a member none can be placed."""
    table = reader.table(schema.Stations, data, ("stations",))
    items = data.get("named") if isinstance(data, Mapping) else None
    # What is no list is noted with the table.
    items = items if isinstance(items, list) else []
    tables = reader.each(items, _NAMED, lambda item, path: reader.table(schema.NamedStation, item, path))
    reader.unique_names(items, _NAMED)
    if member is None or table is None:
        return Asked((), {})
    named = {}
    for index, item in enumerate(tables):
        place = None if item is None else read_place(reader, item, member, (*_NAMED, index))
        if place is not None:
            named[index] = named_station(member, item.name, *place)
    defaults = default_stations(member, table.every)
    if len(defaults) > _MOST_STATIONS:
        on_arcs = sum(isinstance(member.pieces[station.piece], Arc) for station in defaults)
        key: Path = ("stations", "every") if on_arcs > _MOST_STATIONS // 2 else ("member", "pieces")
        reader.add(
            key,
            f"stations every {shown(table.every)} degrees on arcs are {on_arcs}, stations one depth apart on straights "
            f"{len(defaults) - on_arcs}; must be {_MOST_STATIONS} in all at most",
        )
    kept = tuple(station for station in defaults if not any(_crowds(station, other) for other in named.values()))
    automatic = {station.name for station in kept}
    for index, station in named.items():
        if station.name in automatic:
            reader.add((*_NAMED, index, "name"), f"given {shown(station.name)}, which is the name of another station")
    return Asked(kept, named)


def settle(reader: Reader, member: Member, asked: Asked, loadings: tuple[Loading, ...]) -> tuple[Station, ...]:
    """All stations in the order of the member.

    One that all but coincides with a joint, a load or another station leaves no room for a mesh between them: a default
    one is left out, a named one is a mistake, which is noted.
    """
    marks = [(Station(f"the start of piece {index + 1}", index, 0.0)) for index in range(len(member.pieces))]
    marks += [Station(f"the end of piece {index + 1}", index, 1.0) for index in range(len(member.pieces))]
    for spread in {spread.name: spread for loaded in loadings for spread in loaded.spreads}.values():
        marks += [Station(f"an edge of load {spread.name}", spread.piece, at) for at in (spread.first, spread.last)]
        marks.append(Station(f"the middle of load {spread.name}", spread.piece, spread.centre))
    for index, station in asked.named.items():
        near = next((mark for mark in marks if _crowds(station, mark) and not _coincide(station, mark)), None)
        if near is not None:
            extent = member.extent(station.piece)
            reader.add(
                (*_NAMED, index),
                f"given {station.share * extent:.9g}, all but the same place as {near.name} at "
                f"{near.share * extent:.9g}; must be the same, or {_TOO_CLOSE * extent:.3g} away at least",
            )
        marks.append(Station(f"station {station.name}", station.piece, station.share))
    defaults = (
        station
        for station in asked.defaults
        if not any(_crowds(station, mark) and not _coincide(station, mark) for mark in marks)
    )
    return with_named(tuple(defaults), tuple(asked.named.values()))


def _crowds(station: Station, other: Station) -> bool:
    return station.piece == other.piece and abs(station.share - other.share) < _TOO_CLOSE


def _coincide(station: Station, other: Station) -> bool:
    return station.piece == other.piece and abs(station.share - other.share) <= _SAME
