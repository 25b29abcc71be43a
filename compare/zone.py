"""Where a station stands: how far from loads and clamps, and so whether theory and FE can be compared there."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from intrados.theory.statics import Loading

# A clamp moves fibre stress by 0.5 % at one depth.
_SUPPORT_DEPTHS = 1.0
# Within so many depths of a joint, and farther than so many from any load, it is the joint that disturbs.
_JOINT_DEPTHS = 0.5
_AWAY_FROM_LOAD = 1.0
_ON_EDGE = 1e-9


@dataclass(frozen=True)
class Place:
    """A place of a loaded member. ``distance_to_load`` is in local depths, 0 inside a load, None where none enters.

    ``at_joint``: on a taper, or beside a joint and away from every load.
    """

    distance_to_load: float | None
    near_clamp: bool
    at_joint: bool

    @property
    def in_load(self) -> bool:
        """Whether a load enters here."""
        return self.distance_to_load == 0.0

    @property
    def comparable(self) -> bool:
        """Whether hand theory and FE are to be compared here: outside every load, a depth away from a clamp."""
        return not self.in_load and not self.near_clamp


def place(loading: Loading, piece: int, share: float) -> Place:
    """Where a place (piece from 0, share) stands. Loads on an end do not count: they enter as theory would have it."""
    member = loading.member
    s = member.s(piece, share)
    depth = float(member.depth(piece, np.array(share)))
    edges = [(member.s(load.piece, load.first), member.s(load.piece, load.last)) for load in loading.spreads]
    distances = [max(first - s, s - last, 0.0) / depth for first, last in edges]
    nearest = min(distances) if distances else None
    if nearest is not None and nearest < _ON_EDGE:
        nearest = 0.0
    clamp = s if loading.start == "clamped" else member.length - s if loading.end == "clamped" else np.inf
    return Place(nearest, bool(clamp < _SUPPORT_DEPTHS * depth), _at_joint(loading, piece, share, depth, nearest))


def _at_joint(loading: Loading, piece: int, share: float, depth: float, nearest: float | None) -> bool:
    member = loading.member
    first, second = member.pieces[piece].sections
    if first != second:
        return True
    joints = [member.s(index, 0.0) for index in range(1, len(member.pieces))]
    s = member.s(piece, share)
    beside = any(abs(s - joint) <= _JOINT_DEPTHS * depth for joint in joints)
    return beside and (nearest is None or nearest > _AWAY_FROM_LOAD)
