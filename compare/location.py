"""A place of the member as a job names it: a piece, and an angle on an arc or a distance on a straight."""

from __future__ import annotations

from intrados.compare import schema
from intrados.compare.mistake import shown
from intrados.compare.reader import Reader
from intrados.compare.toml_lines import Path
from intrados.theory.member import Arc, Member


def read_place(reader: Reader, at: schema.At, member: Member, path: Path) -> tuple[int, float] | None:
    """The piece (from 0) and the angle (degrees) or distance along it; None, with the mistake noted, if it is off."""
    count = len(member.pieces)
    if at.piece > count:
        pieces = f"1 to {count}" if count > 1 else "1"
        reader.add((*path, "piece"), f"given {at.piece}; the member has no such piece: must be {pieces}")
        return None
    piece = at.piece - 1
    is_arc = isinstance(member.pieces[piece], Arc)
    key, other = ("angle", "distance") if is_arc else ("distance", "angle")
    kind = "an arc" if is_arc else "a straight"
    value: float | None = getattr(at, key)
    if getattr(at, other) is not None:
        reader.add((*path, other), f"does not go with piece {at.piece}, which is {kind}: give {key} = ...")
        return None
    if value is None:
        reader.add(path, f"must give {key} = ... along piece {at.piece}, which is {kind}")
        return None
    extent = member.extent(piece)
    if value > extent * (1.0 + 1e-12):
        reader.add((*path, key), f"given {shown(value)}; is off the piece: must be from 0 to {shown(extent)}")
        return None
    return piece, value
