"""How a load enters the member: as traction on a stretch of face, or as a body force over the depth.

A spread is a sum of three simple distributions whose amounts are found from three conditions: its resultant is
the load's force (two components) and its moment about the load's point is exactly the load's moment.
"""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from dataclasses import dataclass, replace

import numpy as np

from intrados.theory.load import Bearing, BodyLoad, Face, FaceLoad, LoadError, Patch, Vector
from intrados.theory.member import Member
from intrados.theory.quadrature import Array, unit_gauss

Amounts = tuple[float, float, float]

_ALONG_POINTS = 48
# The sine up to which a force counts as normal to a straight face: its components are often given to four digits.
_PARALLEL = 1e-3


@dataclass(frozen=True)
class Spread(ABC):
    """A load as it enters, over the shares ``first`` to ``last`` of a piece, its middle at ``centre``.

    ``point`` is where the resultant acts; ``parts`` are the amounts of the three distributions.
    """

    name: str
    piece: int
    first: float
    centre: float
    last: float
    point: Vector
    force: Vector
    moment: float
    parts: Amounts

    @abstractmethod
    def part_resultants(self, member: Member, first: float, last: float) -> Array:
        """Fx, Fy and moment about the origin, shape (3 components, 3 parts), of unit parts between two shares."""

    def resultant(self, member: Member, first: float, last: float) -> Array:
        """Fx, Fy and moment about the origin, shape (3), of what enters between two shares of the piece."""
        if first <= self.first and last >= self.last:
            return self.wanted()
        first, last = max(first, self.first), min(last, self.last)
        if last <= first:
            return np.zeros(3)
        total: Array = self.part_resultants(member, first, last) @ np.array(self.parts)
        return total

    def wanted(self) -> Array:
        """Fx, Fy and moment about the origin, shape (3), of the whole load."""
        (x, y), (fx, fy) = self.point, self.force
        return np.array([fx, fy, x * fy - y * fx + self.moment])

    def position(self, share: Array) -> Array:
        """Where shares stand in the spread: -1 at its first, 0 at its centre, 1 at its last."""
        return (share - self.centre) / (0.5 * (self.last - self.first))


@dataclass(frozen=True)
class FaceSpread(Spread):
    """Traction on a face, as force per length of face (the width is in it)."""

    face: Face
    normal: bool

    def distributions(self, member: Member, share: Array) -> Array:
        """Force per length of face of the three unit parts, shape (3, 2, n).

        Patch: along x, along y, and a couple of forces along the face's normal at the centre. Bearing (``normal``):
        along the inward normal, the same growing along the face, and along the face.
        """
        xi = self.position(share)
        if self.normal:
            into, along = into_material(member, self.piece, self.face, share)
            pressure = np.cos(0.5 * math.pi * xi)
            return np.array([pressure * into, pressure * xi * into, pressure * along])
        into, _ = into_material(member, self.piece, self.face, np.array([self.centre]))
        bell = np.cos(0.5 * math.pi * xi) ** 2
        zero = np.zeros_like(bell)
        return np.array([[bell, zero], [zero, bell], bell * xi * into])

    def part_resultants(self, member: Member, first: float, last: float) -> Array:
        """As promised by Spread."""
        share, weight = _gauss(first, last)
        per_share = weight * face_speed(member, self.piece, self.face, share)
        density = self.distributions(member, share)
        points = face_points(member, self.piece, self.face, share)
        return _resultants(density, points, per_share)


@dataclass(frozen=True)
class BodySpread(Spread):
    """A body force over the depth, as force per volume, in proportion to the width at every depth."""

    def distributions(self, member: Member, share: Array, x: Array) -> Array:
        """Force per volume of the three unit parts, shape (3, 2, n): along x, along y, a couple along the tangent."""
        bell = np.cos(0.5 * math.pi * self.position(share)) ** 2
        zero = np.zeros_like(bell)
        lever = (x - member.centroid(self.piece, share)) / member.depth(self.piece, share)
        return np.array([[bell, zero], [zero, bell], bell * lever * member.tangent(self.piece, share)])

    def part_resultants(self, member: Member, first: float, last: float) -> Array:
        """As promised by Spread."""
        total = np.zeros((3, 3))
        for share, weight in zip(*_gauss(first, last), strict=True):
            x, area = member.section(self.piece, float(share)).quadrature(math.inf)
            shares = np.full_like(x, share)
            along, _ = member.velocity(self.piece, shares, x, np.zeros_like(x))
            density = self.distributions(member, shares, x)
            total += _resultants(density, member.points(self.piece, shares, x), weight * area * along)
        return total


def face_points(member: Member, piece: int, face: Face, share: Array) -> Array:
    """Points of a face, shape (2, n)."""
    return member.points(piece, share, _face_depth(member, piece, face, share))


def face_speed(member: Member, piece: int, face: Face, share: Array) -> Array:
    """Length of face per share of the piece, shape (n)."""
    return np.hypot(*_face_velocity(member, piece, face, share))


def into_material(member: Member, piece: int, face: Face, share: Array) -> tuple[Array, Array]:
    """Unit normals of a face into the material, and its unit tangents, both shape (2, n)."""
    along, inward = _face_velocity(member, piece, face, share)
    speed = np.hypot(along, inward)
    tangent, normal = member.tangent(piece, share), member.inward(piece, share)
    line = (along * tangent + inward * normal) / speed
    into = (inward * tangent - along * normal) / speed
    return (into if face == "inner" else -into), line


def _face_depth(member: Member, piece: int, face: Face, share: Array) -> Array:
    return np.zeros_like(share) if face == "inner" else member.depth(piece, share)


def _face_velocity(member: Member, piece: int, face: Face, share: Array) -> tuple[Array, Array]:
    rate = 0.0 if face == "inner" else member.depth_rate(piece)
    return member.velocity(piece, share, _face_depth(member, piece, face, share), np.full_like(share, rate))


def _gauss(first: float, last: float) -> tuple[Array, Array]:
    nodes, weights = unit_gauss(_ALONG_POINTS)
    return first + (last - first) * nodes, (last - first) * weights


def _resultants(density: Array, points: Array, weight: Array) -> Array:
    fx, fy = density[:, 0] @ weight, density[:, 1] @ weight
    moments = (density[:, 1] * points[0] - density[:, 0] * points[1]) @ weight
    return np.array([fx, fy, moments])


def enter(member: Member, load: FaceLoad | BodyLoad) -> Spread:
    """How a load enters the member. Raises LoadError where it cannot.

    A face of zero width cannot take a traction: there the load becomes a body force with the same resultant.
    """
    if isinstance(load, BodyLoad):
        half = 0.5 * load.width / member.datum_length(load.piece)
        point = member.centroid_point(load.piece, load.share)
        return _body(member, load.name, load.piece, load.share, half, "width", point, load.force, load.moment)
    if isinstance(load.enters, Patch):
        key, centre = "width", load.share
        speed = face_speed(member, load.piece, load.face, np.array([centre]))
        half = float(0.5 * load.enters.width / speed[0])
    else:
        key, centre = "pin_diameter", _bearing_centre(member, load)
        half = _bearing_half_share(member, load, centre)
    x, y = face_points(member, load.piece, load.face, np.array([centre]))[:, 0]
    point = (float(x), float(y))
    section = member.section(load.piece, centre)
    if (section.inner_width if load.face == "inner" else section.outer_width) <= 1e-9 * section.widest:
        return _body(member, load.name, load.piece, centre, half, key, point, load.force, 0.0)
    spread = FaceSpread(
        load.name,
        load.piece,
        centre - half,
        centre,
        centre + half,
        point,
        load.force,
        0.0,
        (0.0, 0.0, 0.0),
        load.face,
        isinstance(load.enters, Bearing),
    )
    return _balanced(member, spread, key)


def _body(
    member: Member,
    name: str,
    piece: int,
    centre: float,
    half: float,
    key: str,
    point: Vector,
    force: Vector,
    moment: float,
) -> Spread:
    spread = BodySpread(name, piece, centre - half, centre, centre + half, point, force, moment, (0.0, 0.0, 0.0))
    return _balanced(member, spread, key)


def _balanced(member: Member, spread: Spread, key: str) -> Spread:
    """The spread with the parts that give its resultant; LoadError if it runs off its piece."""
    if spread.first < -1e-12 or spread.last > 1.0 + 1e-12:
        extent = member.extent(spread.piece)
        text = (
            f"the load is spread from {spread.first * extent:.4g} to {spread.last * extent:.4g} of its piece, "
            f"which goes from 0 to {extent:.4g}"
        )
        raise LoadError(key, text)
    conditions = spread.part_resultants(member, spread.first, spread.last)
    # Scaled so that force and moment conditions weigh alike, whatever the unit of length.
    scale = np.diag([1.0, 1.0, 1.0 / member.size])
    shift = np.eye(3)
    shift[2, :2] = spread.point[1], -spread.point[0]
    parts = np.linalg.solve(scale @ shift @ conditions, scale @ shift @ spread.wanted())
    return replace(spread, parts=(float(parts[0]), float(parts[1]), float(parts[2])))


def _bearing_centre(member: Member, load: FaceLoad) -> float:
    """The share at which the inward normal is parallel to the force."""
    shares = np.linspace(0.0, 1.0, 721)
    direction = np.array(load.force) / math.hypot(*load.force)

    def turned(at: Array) -> Array:
        into, _ = into_material(member, load.piece, load.face, at)
        sine: Array = into[0] * direction[1] - into[1] * direction[0]
        return sine

    across = turned(shares)
    into, _ = into_material(member, load.piece, load.face, shares)
    facing = direction @ into > 0.0
    if np.all(np.abs(across[facing]) <= _PARALLEL) and facing.all():
        return load.share
    crossings = np.flatnonzero(facing[:-1] & facing[1:] & (across[:-1] * across[1:] <= 0.0))
    if not crossings.size:
        text = "the force is nowhere on this piece parallel to the normal into its face, so no bearing carries it"
        raise LoadError("force", text)
    low, high = shares[crossings[0]], shares[crossings[0] + 1]
    for _ in range(60):
        middle = 0.5 * (low + high)
        if turned(np.array([low]))[0] * turned(np.array([middle]))[0] <= 0.0:
            high = middle
        else:
            low = middle
    return float(0.5 * (low + high))


def _bearing_half_share(member: Member, load: FaceLoad, centre: float) -> float:
    """Half the stretch of face that a pin presses, as a share: by its angle in a seat, else by its diameter."""
    assert isinstance(load.enters, Bearing)
    diameter = load.enters.pin_diameter
    at = np.array([centre])
    speed = float(face_speed(member, load.piece, load.face, at)[0])
    turn = member.turn(load.piece)
    if load.face == "outer" or turn == 0.0:
        return 0.5 * diameter / speed
    seat = 2.0 * speed / turn
    if diameter > seat * (1.0 + 1e-9):
        raise LoadError("pin_diameter", f"must not exceed the diameter of the seat, {seat:.6g}")
    return math.asin(min(diameter / seat, 1.0)) / turn
