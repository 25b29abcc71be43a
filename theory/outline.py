"""Whether a member is possible: faces that cross a centre of curvature, joints that do not meet, overlaps."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from intrados.theory.member import Arc, Member, Straight
from intrados.theory.quadrature import Array

_SAME_DEPTH = 1e-9
_DEGREES_A_CHORD = 6.0
# Segments that cross within this share of their ends only touch, to rounding.
_CLEAR = 1e-9
_HAIR = 1e-6


@dataclass(frozen=True)
class Fault:
    """What makes a member impossible; ``piece`` counts from 0, ``key`` is the dimension of that piece to blame."""

    piece: int
    key: str
    text: str


def faults(member: Member) -> tuple[Fault, ...]:
    """Every reason why the member cannot exist, in the order of its pieces. Overlap is sought only in a sound one."""
    found = [*_inner_radii(member), *_joints(member), *_turns(member)]
    return tuple(sorted(found, key=lambda fault: fault.piece) or _overlaps(member))


def _inner_radii(member: Member) -> list[Fault]:
    found = []
    for index, piece in enumerate(member.pieces):
        if isinstance(piece, Straight):
            continue
        # The centroid of a taper may lie further out between its ends than at either.
        shares = np.linspace(0.0, 1.0, 65)
        offset = {
            "inner": 0.0,
            "centroid": float(member.centroid(index, shares).max()),
            "outer": float(member.depth(index, shares).max()),
        }[member.datum]
        if piece.radius <= offset * (1.0 + _SAME_DEPTH):
            text = (
                f"the inner face reaches the centre of curvature: a {member.datum} radius must exceed {offset:g} here"
            )
            found.append(Fault(index, "arc", text))
    return found


def _joints(member: Member) -> list[Fault]:
    found = []
    for index in range(1, len(member.pieces)):
        before, after = member.pieces[index - 1].sections[1], member.pieces[index].sections[0]
        if abs(before.depth - after.depth) > _SAME_DEPTH * before.depth:
            text = f"depth {after.depth:g} does not meet depth {before.depth:g} of the piece before: taper instead"
            found.append(Fault(index, "section", text))
        elif (
            member.datum == "centroid"
            and member.sides[index] == member.sides[index - 1]
            and abs(before.centroid - after.centroid) > _SAME_DEPTH * before.depth
        ):
            text = "the faces do not meet: its centroid is not at the depth of the piece before; trace a face"
            found.append(Fault(index, "section", text))
    return found


def _turns(member: Member) -> list[Fault]:
    found = []
    previous: int | None = None
    for index, piece in enumerate(member.pieces):
        if not isinstance(piece, Arc):
            continue
        if previous is not None and member.sides[previous] != member.sides[index]:
            joint = (member.pieces[index - 1].sections[1], piece.sections[0])
            if member.datum != "centroid":
                text = f'turns the other way than piece {previous + 1}: that needs datum = "centroid"'
                found.append(Fault(index, "sweep", text))
            elif previous == index - 1:
                text = f"turns the other way than piece {previous + 1}: a straight must lie between them"
                found.append(Fault(index, "sweep", text))
            elif not all(section.is_symmetric for section in joint):
                text = "the bend turns over here: that needs a section symmetric about its centroid"
                found.append(Fault(index, "section", text))
        previous = index
    return found


def _overlaps(member: Member) -> list[Fault]:
    """Pieces that cross another part of the outline, the polygon of both faces and both ends; touching is none.

    A piece may also lie on another one exactly, face on face: then its spine, at mid-depth, crosses an end.
    """
    outline, spine = _outline(member), _spine(member)
    count = len(outline.owner)
    apart = np.abs(np.arange(count)[:, None] - np.arange(count)[None, :])
    faces = _crossings(outline, outline, _CLEAR) & (apart > 1) & (apart < count - 1)
    pairs = {tuple(sorted((outline.owner[i], outline.owner[j]))) for i, j in np.argwhere(faces)}
    through = _crossings(spine, outline, -_CLEAR)
    pairs |= {tuple(sorted((spine.owner[i], outline.owner[j]))) for i, j in np.argwhere(through)}
    if not pairs:
        return []
    low, high = min(pairs, key=lambda pair: (pair[1], pair[0]))
    kind = "sweep" if isinstance(member.pieces[high], Arc) else "straight"
    with_which = f"piece {low + 1}" if low != high else "itself"
    return [Fault(high, kind, f"the member runs into itself: this piece overlaps {with_which}")]


@dataclass(frozen=True)
class _Segments:
    """Straight segments from ``first`` to ``second``, both (2, n), and the piece each belongs to."""

    first: Array
    second: Array
    owner: list[int]


def _crossings(these: _Segments, those: _Segments, clear: float) -> NDArray[np.bool_]:
    """Which of these cross which of those: inside those, and inside these by the share ``clear`` of their length."""
    step, other = these.second - these.first, those.second - those.first
    crosses = _cross(step[:, :, None], other[:, None, :])
    lengths = np.hypot(*step)[:, None] * np.hypot(*other)[None, :]
    between = those.first[:, None, :] - these.first[:, :, None]
    with np.errstate(divide="ignore", invalid="ignore"):
        here = _cross(between, other[:, None, :]) / crosses
        there = _cross(between, step[:, :, None]) / crosses
    hit: NDArray[np.bool_] = np.abs(crosses) > _CLEAR * lengths
    hit &= (here > clear) & (here < 1.0 - clear) & (there > _CLEAR) & (there < 1.0 - _CLEAR)
    return hit


def _cross(a: Array, b: Array) -> Array:
    product: Array = a[0] * b[1] - a[1] * b[0]
    return product


def _chords(member: Member, piece: int) -> Array:
    """Shares of a piece at the ends of the chords that stand for it."""
    count = max(2, round(member.extent(piece) / _DEGREES_A_CHORD)) if member.turn(piece) else 2
    return np.linspace(0.0, 1.0, count + 1)


def _outline(member: Member) -> _Segments:
    left: list[Array] = []
    right: list[Array] = []
    owners: list[int] = []
    for index in range(len(member.pieces)):
        shares = _chords(member, index)[0 if index == 0 else 1 :]
        inner = member.points(index, shares, np.zeros_like(shares))
        outer = member.points(index, shares, member.depth(index, shares))
        left.append(inner if member.sides[index] > 0 else outer)
        right.append(outer if member.sides[index] > 0 else inner)
        owners += [index] * len(shares)
    ring = np.concatenate([*left, *[face[:, ::-1] for face in right[::-1]]], axis=1)
    around = owners + owners[::-1]
    owner = [max(a, b) for a, b in zip(around, [*around[1:], around[0]], strict=True)]
    return _Segments(ring, np.roll(ring, -1, axis=1), owner)


def _spine(member: Member) -> _Segments:
    """The line at mid-depth, a hair short of both ends of the member so that it does not cross them itself."""
    lines = []
    owner: list[int] = []
    for index in range(len(member.pieces)):
        shares = _chords(member, index)
        shares[0] += _HAIR * (index == 0)
        shares[-1] -= _HAIR * (index == len(member.pieces) - 1)
        lines.append(member.points(index, shares, 0.5 * member.depth(index, shares)))
        owner += [index] * (len(shares) - 1)
    firsts = np.concatenate([line[:, :-1] for line in lines], axis=1)
    return _Segments(firsts, np.concatenate([line[:, 1:] for line in lines], axis=1), owner)
