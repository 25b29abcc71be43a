"""Stations: the places of a member at which theory and finite elements are compared."""

from __future__ import annotations

import math
from dataclasses import dataclass

from intrados.theory.member import Arc, Member

_SAME_PLACE = 1e-9


@dataclass(frozen=True)
class Station:
    """A named place: ``piece`` counts from 0, ``share`` (0 to 1) goes along the piece's datum line."""

    name: str
    piece: int
    share: float


def default_stations(member: Member, every: float) -> tuple[Station, ...]:
    """Stations at multiples of ``every`` degrees inside each arc, and along each straight at most a depth apart."""
    stations = []
    for index, piece in enumerate(member.pieces):
        if isinstance(piece, Arc):
            sweep = abs(piece.sweep)
            count = math.ceil(sweep / every * (1.0 - _SAME_PLACE)) - 1
            places = [every * (step + 1) for step in range(count)] or [0.5 * sweep]
        else:
            shallow = min(section.depth for section in piece.sections)
            count = math.ceil(piece.length / shallow * (1.0 - _SAME_PLACE))
            places = [piece.length * (step + 0.5) / count for step in range(count)]
        stations += [named_station(member, f"{index + 1}:{place:.6g}", index, place) for place in places]
    return tuple(stations)


def named_station(member: Member, name: str, piece: int, place: float) -> Station:
    """A station at an angle (degrees, on an arc) or a distance (length, on a straight) from the piece's start."""
    return Station(name, piece, min(place / member.extent(piece), 1.0))


def with_named(defaults: tuple[Station, ...], named: tuple[Station, ...]) -> tuple[Station, ...]:
    """Both kinds in the order of the member; a named station replaces a default at the same place."""

    def taken(station: Station) -> bool:
        return any(other.piece == station.piece and abs(other.share - station.share) <= _SAME_PLACE for other in named)

    kept = [station for station in defaults if not taken(station)]
    return tuple(sorted([*kept, *named], key=lambda station: (station.piece, station.share)))
