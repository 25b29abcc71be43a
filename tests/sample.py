"""Results made from simple formulas, for the tests of what is made from them: no mesh, no solution.

A rectangular member is clamped at its start and loaded by forces; the "FE" stress is the hand stress times a smooth
factor, plus a disturbance under each load and at the clamp.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from intrados.compare.results import (
    Along,
    Budget,
    CaseResult,
    Displacement,
    Fibre,
    FibreCurve,
    FibreName,
    Field,
    Governing,
    Level,
    LoadMark,
    MeshSummary,
    Numbers,
    Peak,
    Profile,
    Radial,
    Resultants,
    Results,
    SectionField,
    SectionSummary,
    StationResult,
    Transverse,
    Verdict,
)
from intrados.compare.units import Units

Array = NDArray[np.float64]
BAND = 0.05


@dataclass(frozen=True)
class Piece:
    """A straight (``sweep`` zero) of the given length, or an arc of centroid radius ``size``; angles in degrees."""

    size: float
    sweep: float = 0.0

    @property
    def length(self) -> float:
        return self.size * np.radians(self.sweep) if self.sweep else self.size


@dataclass(frozen=True)
class Push:
    """A force on the inner face (``side`` 1), the outer face (-1) or the centroid line (0) at a share of a piece."""

    name: str
    piece: int
    share: float
    force: tuple[float, float]
    side: int = 1
    width: float = 20.0


@dataclass(frozen=True)
class Shape:
    """A member of constant rectangular section, from the origin with a heading in degrees."""

    pieces: tuple[Piece, ...]
    heading: float
    depth: float
    width: float

    def frame(self, piece: int, along: float) -> tuple[Array, Array]:
        """Centroid and unit tangent at a distance along a piece (counted from 0)."""
        point, heading = np.zeros(2), np.radians(self.heading)
        for index, part in enumerate(self.pieces):
            length = part.length if index < piece else along
            turn = length / part.size if part.sweep else 0.0
            tangent = np.array([np.cos(heading), np.sin(heading)])
            normal = np.array([-tangent[1], tangent[0]])
            if part.sweep:
                point = point + part.size * (np.sin(turn) * tangent + (1.0 - np.cos(turn)) * normal)
            else:
                point = point + length * tangent
            heading += turn
            if index == piece:
                break
        return point, np.array([np.cos(heading), np.sin(heading)])

    def start(self, piece: int) -> float:
        return float(sum(part.length for part in self.pieces[:piece]))

    def normal(self, piece: int, along: float) -> Array:
        tangent = self.frame(piece, along)[1]
        return np.array([-tangent[1], tangent[0]])

    def radius(self, piece: int) -> float | None:
        return self.pieces[piece].size if self.pieces[piece].sweep else None

    def hoop(self, piece: int, forces: Resultants, y: Array) -> Array:
        """Curved-beam stress at y from the centroid, positive toward the centre of curvature."""
        area, h, radius = self.depth * self.width, self.depth, self.radius(piece)
        if radius is None:
            return forces.N / area + forces.M * y * 12.0 / (self.width * h**3)
        rn = h / np.log((radius + h / 2) / (radius - h / 2))
        e = radius - rn
        return forces.N / area + forces.M * (rn - (radius - y)) / (area * e * (radius - y))


def resultants(shape: Shape, pushes: tuple[Push, ...], piece: int, along: float) -> Resultants:
    """N, V, M from the forces that act beyond the cut."""
    point, tangent = shape.frame(piece, along)
    normal = np.array([-tangent[1], tangent[0]])
    s = shape.start(piece) + along
    total, moment = np.zeros(2), 0.0
    for push in pushes:
        at = push.share * shape.pieces[push.piece].length
        centroid = shape.frame(push.piece, at)[0]
        place = centroid + push.side * shape.depth / 2 * shape.normal(push.piece, at)
        beyond = float(np.clip((shape.start(push.piece) + at - s) / push.width + 0.5, 0.0, 1.0))
        force = beyond * np.array(push.force)
        arm = place - point
        total += force
        moment -= arm[0] * force[1] - arm[1] * force[0]
    return Resultants(float(total @ tangent), float(-total @ normal), float(moment))


def _disturbed(shape: Shape, pushes: tuple[Push, ...], piece: int, along: float, y: Array) -> Array:
    """The "FE" stress on a cut."""
    hand = shape.hoop(piece, resultants(shape, pushes, piece, along), y)
    s, h = shape.start(piece) + along, shape.depth
    value = hand * (1.0 + 0.015 * np.cos(2.0 * y / h) + 0.01 * np.sin(s / h))
    for push in pushes:
        gap = s - shape.start(push.piece) - push.share * shape.pieces[push.piece].length
        size = float(np.hypot(*push.force)) / (push.width * shape.width)
        value = value - size * np.exp(-((2.5 * gap / h) ** 2)) * (0.5 + push.side * y / h) ** 2
    return np.asarray(value * (1.0 + 0.1 * np.exp(-6.0 * s / h) * (2.0 * y / h) ** 2))


def _distance(shape: Shape, pushes: tuple[Push, ...], s: float) -> float:
    gaps = [abs(s - shape.start(p.piece) - p.share * shape.pieces[p.piece].length) - p.width / 2 for p in pushes]
    return max(0.0, min(gaps)) / shape.depth


def _fibre(hand: float, fe: float, other: float, comparable: bool, straight: float, curved: bool) -> Fibre:
    """A fibre of which thickness costs 1 % of hand and the third dimension 2 % of FE, on an arc."""
    thick, width = (0.01 * hand, 0.02 * fe) if curved else (0.0, 0.0)
    ideal, best = hand + thick, fe + width
    larger = max(abs(best), abs(other))
    uncertainty = 4e-4 * larger
    budget = Budget(thick, width, fe - ideal)
    place = "over the web" if curved else None
    verdict: Verdict
    difference: float | None = None
    if larger < 1e-3:
        verdict = "unloaded"
    else:
        reference = max(abs(best), 0.1 * larger)
        difference = (hand - best) / reference
        if not comparable:
            verdict = "not comparable"
        elif abs(hand - best) <= BAND * reference + uncertainty:
            verdict = "holds"
        else:
            verdict = "low" if abs(hand) < abs(best) or hand * best < 0 else "high"
    stresses = (hand, straight, ideal, fe, uncertainty, best)
    return Fibre(*stresses, difference, verdict, 1.01 * abs(best), place, budget)


def _station(shape: Shape, pushes: tuple[Push, ...], piece: int, along: float, name: str) -> StationResult:
    forces = resultants(shape, pushes, piece, along)
    s, h, area, radius = shape.start(piece) + along, shape.depth, shape.depth * shape.width, shape.radius(piece)
    y = np.linspace(h / 2, -h / 2, 41)
    hand, fe = shape.hoop(piece, forces, y), _disturbed(shape, pushes, piece, along, y)
    bending = forces.M * 6.0 / (shape.width * h**2)
    distance = _distance(shape, pushes, s)
    comparable = distance > 0 and s > h
    ends = [(float(hand[i]), float(fe[i]), float(fe[40 - i])) for i in (0, 40)]
    arc = bool(shape.pieces[piece].sweep)
    inner = _fibre(*ends[0], comparable, forces.N / area + bending, arc)
    outer = _fibre(*ends[1], comparable, forces.N / area - bending, arc)
    degrees = float(np.degrees(along / shape.pieces[piece].size)) if arc else None
    default = f"{piece + 1}:{degrees if degrees is not None else along:.3g}"
    point = shape.frame(piece, along)[0]
    rn = None if radius is None else h / float(np.log((radius + h / 2) / (radius - h / 2)))
    agreed = {inner.verdict, outer.verdict} <= {"holds", "unloaded"}
    return StationResult(
        name=name or default,
        piece=piece + 1,
        angle=degrees,
        distance=None if arc else along,
        s=s,
        x=float(point[0]),
        y=float(point[1]),
        R=radius,
        depth=h,
        curvature_ratio=None if radius is None else radius / h,
        N=forces.N,
        V=forces.V,
        M=forces.M,
        fe=Resultants(forces.N * (1 + 1e-10), forces.V, forces.M * (1 - 1e-10)),
        rn=rn,
        e=None if radius is None or rn is None else radius - rn,
        area=area,
        inner=inner,
        outer=outer,
        zone="support" if distance > 0 and not comparable else "theory" if agreed else "introduction",
        distance_to_load=distance,
        radial=Radial(0.3 * ends[0][0], 0.31 * ends[0][0], 0.32 * ends[0][0], 0.3 * h) if arc else None,
        transverse=Transverse(-0.4 * ends[0][1], 0.1 * ends[1][1]) if arc else None,
        utilisation=max(inner.von_mises, outer.von_mises) / 355.0,
        profile=Profile(_numbers(y), _numbers(hand), _numbers(1.01 * hand), _numbers(fe)),
    )


def _numbers(values: Array) -> Numbers:
    return tuple(float(value) for value in values)


def _along(shape: Shape, pushes: tuple[Push, ...]) -> Along:
    faces = np.array([shape.depth / 2, -shape.depth / 2])
    rows: list[tuple[float, int, float, bool, Array, Array]] = []
    for piece, part in enumerate(shape.pieces):
        for along in np.linspace(0.0, part.length, max(9, int(part.length / shape.depth * 12))):
            s = shape.start(piece) + float(along)
            forces = resultants(shape, pushes, piece, float(along))
            comparable = _distance(shape, pushes, s) > 0 and s > shape.depth
            fe = _disturbed(shape, pushes, piece, float(along), faces)
            rows.append((s, piece + 1, float(along) / part.length, comparable, shape.hoop(piece, forces, faces), fe))
    curves = []
    for face in (0, 1):
        spread = tuple(4e-4 * float(np.max(np.abs(row[5]))) for row in rows)
        curves.append(
            FibreCurve(tuple(float(row[4][face]) for row in rows), tuple(float(row[5][face]) for row in rows), spread)
        )
    s, pieces, shares, comparable_at, _, _ = zip(*rows, strict=True)
    return Along(s, pieces, shares, comparable_at, *curves)


def _field(shape: Shape, pushes: tuple[Push, ...], per_element: int = 4, across: int = 4) -> Field:
    offsets = np.linspace(shape.depth / 2, -shape.depth / 2, across * per_element + 1)
    pieces, xs, ys, hoops = [], [], [], []
    for piece, part in enumerate(shape.pieces):
        count = max(2, round(part.length / shape.depth * 2)) * per_element + 1
        for along in np.linspace(0.0, part.length, count):
            point, normal = shape.frame(piece, float(along))[0], shape.normal(piece, float(along))
            pieces.append(piece + 1)
            xs.append(_numbers(point[0] + offsets * normal[0]))
            ys.append(_numbers(point[1] + offsets * normal[1]))
            hoops.append(_numbers(_disturbed(shape, pushes, piece, float(along), offsets)))
    return Field(per_element, tuple(pieces), tuple(xs), tuple(ys), tuple(hoops))


def _mark(shape: Shape, push: Push) -> LoadMark:
    part = shape.pieces[push.piece]
    at = push.share * part.length
    s = shape.start(push.piece) + at

    def face(along: float) -> tuple[float, float]:
        offset = push.side * shape.depth / 2 * shape.normal(push.piece, along)
        point = shape.frame(push.piece, along)[0] + offset
        return float(point[0]), float(point[1])

    line = tuple(face(at + d) for d in np.linspace(-push.width / 2, push.width / 2, 7))
    x, y = face(at)
    half = push.width / 2
    return LoadMark(push.name, "patch" if push.side else "body", x, y, push.force, 0.0, s - half, s + half, line)


def case(
    shape: Shape,
    pushes: tuple[Push, ...],
    name: str = "",
    every: float = 30.0,
    names: dict[tuple[int, float], str] | None = None,
) -> CaseResult:
    """One load case. ``names`` maps a piece (from 0) and a share of it to the name of an extra station."""
    places: list[tuple[int, float, str]] = []
    for piece, part in enumerate(shape.pieces):
        if part.sweep:
            count = int((part.sweep - 1e-9) / every)
            places += [(piece, np.radians(every * k) * part.size, "") for k in range(1, count + 1)]
        else:
            count = max(1, int(np.ceil(part.length / shape.depth)))
            places += [(piece, part.length * (k + 0.5) / count, "") for k in range(count)]
    places += [(p, share * shape.pieces[p].length, text) for (p, share), text in (names or {}).items()]
    places.sort(key=lambda place: shape.start(place[0]) + place[1])
    stations = tuple(_station(shape, pushes, *place) for place in places)
    along = _along(shape, pushes)
    return CaseResult(
        name=name,
        governing=_governing(stations),
        peak=_peak(shape, along),
        stations=stations,
        displacements=tuple(
            Displacement(push.name, *_mark(shape, push).line[3], (0.0123, -1.2345), (0.0121, -1.2251))
            for push in pushes
        ),
        force_residual=3.1e-13,
        moment_residual=8.2e-13,
        loads=tuple(_mark(shape, push) for push in pushes),
        along=along,
        field=_field(shape, pushes),
        section_field=_section_field(shape, stations, _governing(stations)),
    )


def _section_field(
    shape: Shape, stations: tuple[StationResult, ...], governing: Governing | None
) -> SectionField | None:
    """A rectangle of the shape's depth and width whose stress bends and falls off toward the edge."""
    station = next((station for station in stations if governing and station.name == governing.station), None)
    if station is None or station.R is None:
        return None
    x, z = (grid.ravel() for grid in np.meshgrid(np.linspace(0, shape.depth, 9), np.linspace(0, shape.width / 2, 5)))
    plane = np.interp(x, np.linspace(0, shape.depth, 41), station.profile.ideal)
    hoop = plane * (1.05 - 0.2 * z / shape.width)
    corners = [i * 9 + j for i in range(4) for j in range(8)]
    triangles = tuple(t for c in corners for t in ((c, c + 1, c + 10), (c, c + 10, c + 9)))
    depths = np.linspace(0, shape.depth, 41)
    fields = (_numbers(x), _numbers(z), triangles, _numbers(hoop), _numbers(depths), station.profile.ideal)
    return SectionField(station.name, *fields)


def _governing(stations: tuple[StationResult, ...]) -> Governing | None:
    faces: tuple[FibreName, ...] = ("inner", "outer")
    found = [(getattr(st, face), st, face) for st in stations for face in faces]
    found = [item for item in found if item[0].verdict not in ("not comparable", "unloaded")]
    if not found:
        return None
    fibre, station, face = max(found, key=lambda item: abs(item[0].best))
    why = (
        f"Governing: {face} fibre at {station.name}: hand {fibre.hand:.1f} MPa, FE {fibre.best:.1f} "
        f"± {fibre.uncertainty:.1f} MPa; the hand theory {fibre.verdict} there ({fibre.difference:+.1%}, band 5 %)."
    )
    values = (fibre.hand, fibre.best, fibre.uncertainty, fibre.difference, fibre.verdict)
    return Governing(station.name, face, *values, why, abs(fibre.best) / 355.0)


def _peak(shape: Shape, along: Along) -> Peak | None:
    faces: tuple[FibreName, ...] = ("inner", "outer")
    found = [
        (abs(getattr(along, face).fe[i]), i, face) for face in faces for i in range(len(along.s)) if along.comparable[i]
    ]
    if not found:
        return None
    _, i, face = max(found)
    curve, piece = getattr(along, face), along.piece[i]
    offset = along.s[i] - shape.start(piece - 1)
    radius = shape.radius(piece - 1)
    angle = None if radius is None else float(np.degrees(offset / radius))
    distance = offset if radius is None else None
    return Peak(face, piece, angle, distance, along.s[i], curve.fe[i], curve.uncertainty[i], curve.hand[i])


def assemble(shape: Shape, *cases: CaseResult, title: str = "Invented hook", notes: tuple[str, ...] = ()) -> Results:
    """A whole check of one member under the given cases."""
    area = shape.depth * shape.width
    section = SectionSummary(area, shape.depth / 2, area * shape.depth**2 / 12, shape.depth)
    levels = (Level(3, 96, 1022, None), Level(4, 96, 1750, 4.2e-3), Level(5, 96, 2670, 4e-4))
    return Results(
        version="0.1.0",
        title=title,
        sha256="0" * 64,
        unit_set="mm-N-MPa",
        units=Units("mm", "N", "MPa"),
        band=BAND,
        numerical=0.002,
        yield_stress=355.0,
        notes=notes,
        ends=("clamped", "free"),
        sections={"bend": section},
        mesh=MeshSummary(96, 2670, levels),
        missed=(),
        cases=cases,
    )


HOOK = Shape((Piece(90.0), Piece(65.0, 230.0)), -120.0, 60.0, 30.0)
SLING = Push("sling", 1, 120.0 / 230.0, (0.0, -25000.0))
SIDE = Push("side pull", 1, 0.8, (6000.0, 2000.0), side=-1)


def hook() -> Results:
    """A shank and a 230 degree arc with a load on the seat."""
    notes = ("The section does not vary over the depth: plane stress settles it.",)
    return assemble(HOOK, case(HOOK, (SLING,), names={(1, 0.13): "throat"}), notes=notes)


def hook_cases() -> Results:
    """The same hook in two named load cases."""
    heavy = replace(SLING, force=(0.0, -31250.0))
    first = case(HOOK, (SLING, SIDE), name="lift", names={(1, 0.13): "throat"})
    second = case(HOOK, (heavy,), name="proof, 125 %", names={(1, 0.13): "throat"})
    return assemble(HOOK, first, second, title="Invented hook in two load cases")


def c_frame() -> Results:
    """A clamp frame: two arms and a back between two corners."""
    shape = Shape((Piece(220.0), Piece(80.0, 90.0), Piece(260.0), Piece(80.0, 90.0), Piece(220.0)), 180.0, 70.0, 25.0)
    screw = Push("screw", 4, 0.93, (0.0, -9000.0), side=1)
    anvil = Push("anvil", 0, 0.07, (0.0, 9000.0), side=1)
    made = case(shape, (anvil, screw), every=30.0, names={(2, 0.5): "middle of the back"})
    return replace(assemble(shape, made, title="Invented clamp frame"), ends=("free", "free"))


def bracket() -> Results:
    """A tiny, thick bracket: one quarter bend, all of it near a load or the support."""
    shape = Shape((Piece(4.0, 90.0),), 0.0, 5.0, 2.0)
    push = Push("eye", 0, 0.9, (-30.0, 40.0), side=0, width=1.0)
    return assemble(shape, case(shape, (push,)), title="Invented bracket")


def crowded() -> Results:
    """Some forty stations, long names, and three loads side by side."""
    pushes = tuple(
        Push(f"hanger number {k + 1} of the long row", 1, 0.55 + 0.04 * k, (500.0 * k, -8000.0 - 1000.0 * k))
        for k in range(3)
    )
    names = {
        (1, 0.13): "throat, 2 mm before",
        (1, 0.135): "throat at the weld of the stiffener plate, which is on the left as one looks along the beam",
    }
    title = "Invented hook whose title goes on and on so that it cannot stand on one line of a figure, revision 12 B"
    return assemble(HOOK, case(HOOK, pushes, every=5.0, names=names), title=title)
