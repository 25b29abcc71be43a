"""The results of a check: the one object that tables, figures and results.json are made from.

All numbers are in the job's unit set (length, force, stress; moments in force x length), angles in
degrees. ``None`` means "has no value here" and becomes null in results.json. The first of ``cases`` is the
one written at the top level of results.json.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from intrados.compare.units import Units

Verdict = Literal["holds", "low", "high", "unloaded", "not comparable"]
Zone = Literal["theory", "thick", "width", "introduction", "joint", "support"]
FibreName = Literal["inner", "outer"]
End = Literal["clamped", "free"]
Numbers = tuple[float, ...]
Grid = tuple[Numbers, ...]


@dataclass(frozen=True)
class Resultants:
    """Normal force N (tension > 0), shear force V and moment M (> 0 straightens) about the centroid."""

    N: float
    V: float
    M: float


@dataclass(frozen=True)
class Budget:
    """What each assumption of the hand theory costs (stress); the terms add up to best - hand.

    ``thick``: ideal plane-stress bar less hand theory. ``width``: exact three-dimensional bar less ideal bar.
    ``introduction``: plane-stress FE of the whole member less ideal bar.
    """

    thick: float
    width: float
    introduction: float


@dataclass(frozen=True)
class Fibre:
    """Hoop stress at one face of a station: hand theory, straight-beam formula, ideal bar, FE, and the comparison.

    ``best`` = fe + budget.width; ``uncertainty`` is absolute (stress) and belongs to it. ``difference`` is
    (hand - best)/ref of the design. ``place`` says where over the face's width the three-dimensional bar has
    its largest hoop stress (None on a straight). ``von_mises`` is that of best with the stress across the face.
    """

    hand: float
    straight: float
    ideal: float
    fe: float
    uncertainty: float
    best: float
    difference: float | None
    verdict: Verdict
    von_mises: float
    place: str | None
    budget: Budget


@dataclass(frozen=True)
class Radial:
    """The radial stress of largest magnitude over the depth, > 0 tension: hand, ideal, FE; ``depth``: where FE has it.

    ``depth`` is measured from the inner face (length).
    """

    hand: float
    ideal: float
    fe: float
    depth: float


@dataclass(frozen=True)
class Transverse:
    """Stress across the inner and outer face where its hoop stress is largest, from the three-dimensional bar."""

    inner: float
    outer: float


@dataclass(frozen=True)
class Profile:
    """Hoop stress over the depth, 41 points from the inner face to the outer; y from the centroid, > 0 inward."""

    y: Numbers
    hand: Numbers
    ideal: Numbers
    fe: Numbers


@dataclass(frozen=True)
class StationResult:
    """One station of the member. ``piece`` counts from 1; exactly one of ``angle`` and ``distance`` is set."""

    name: str
    piece: int
    angle: float | None
    distance: float | None
    s: float
    x: float
    y: float
    R: float | None
    depth: float
    curvature_ratio: float | None
    N: float
    V: float
    M: float
    fe: Resultants
    rn: float | None
    e: float | None
    area: float
    inner: Fibre
    outer: Fibre
    zone: Zone | None
    distance_to_load: float | None
    radial: Radial | None
    transverse: Transverse | None
    utilisation: float | None
    profile: Profile


@dataclass(frozen=True)
class Governing:
    """The comparable fibre with the largest stress, and the sentence an engineer should conclude (``why``)."""

    station: str
    fibre: FibreName
    hand: float
    best: float
    uncertainty: float
    difference: float | None
    verdict: Verdict
    why: str
    utilisation: float | None


@dataclass(frozen=True)
class Peak:
    """The largest FE fibre stress anywhere outside load introduction and support, stations or not."""

    fibre: FibreName
    piece: int
    angle: float | None
    distance: float | None
    s: float
    stress: float
    uncertainty: float
    hand: float


@dataclass(frozen=True)
class Displacement:
    """Displacement (x, y components) of the section at a load or a free end: FE beside strain energy."""

    at: str
    x: float
    y: float
    fe: tuple[float, float]
    energy: tuple[float, float]


@dataclass(frozen=True)
class FibreCurve:
    """Fibre stress along one face, sampled at the ``s`` of its Along; ``uncertainty`` is absolute."""

    hand: Numbers
    fe: Numbers
    uncertainty: Numbers


@dataclass(frozen=True)
class Along:
    """Fibre stress along the member. A joint is sampled on both sides (two entries at one s, two pieces).

    ``share`` (0 to 1) goes along the datum line of each piece.
    """

    s: Numbers
    piece: tuple[int, ...]
    share: Numbers
    comparable: tuple[bool, ...]
    inner: FibreCurve
    outer: FibreCurve


@dataclass(frozen=True)
class Field:
    """Hoop stress over the member on a grid: first index along it, second across it.

    Across it goes from the inner face to the outer.

    Every ``per_element``-th line of the grid, starting with the first, is a line of the mesh.
    Between pieces the joint line is given twice, once for either piece (``piece`` of each line tells which).
    """

    per_element: int
    piece: tuple[int, ...]
    x: Grid
    y: Grid
    hoop: Grid


@dataclass(frozen=True)
class SectionField:
    """Hoop stress over half the section (z >= 0) of the governing station, from the three-dimensional bar.

    ``x`` from the inner face, ``z`` from the plane of bending (length); ``triangles`` index them. ``plane_x`` and
    ``plane_hoop``: what plane stress of the same bar has at a depth, over the whole width.
    """

    station: str
    x: Numbers
    z: Numbers
    triangles: tuple[tuple[int, int, int], ...]
    hoop: Numbers
    plane_x: Numbers
    plane_hoop: Numbers


@dataclass(frozen=True)
class LoadMark:
    """A load as the drawing shows it: where its resultant acts, and the part of the member it enters over.

    ``enters``: "patch", "bearing", "body" (spread over the depth) or "end". ``s_from`` and ``s_to`` bound it along the
    centroid line (equal for an end load); ``line`` is the stretch of face (or centroid line) it is spread over.
    """

    name: str
    enters: str
    x: float
    y: float
    force: tuple[float, float]
    moment: float
    s_from: float
    s_to: float
    line: tuple[tuple[float, float], ...]


@dataclass(frozen=True)
class CaseResult:
    """All that depends on the load case.

    The residuals compare N, V, M of the FE (from nodal forces) with statics on the stations' cuts: the largest
    difference as a share of the largest force, and of the largest moment.
    """

    name: str
    governing: Governing | None
    peak: Peak | None
    stations: tuple[StationResult, ...]
    displacements: tuple[Displacement, ...]
    force_residual: float
    moment_residual: float
    loads: tuple[LoadMark, ...]
    along: Along
    field: Field
    section_field: SectionField | None


@dataclass(frozen=True)
class SectionSummary:
    """A named section; ``centroid`` is measured from the inner face."""

    area: float
    centroid: float
    inertia: float
    depth: float


@dataclass(frozen=True)
class Level:
    """One solution of the p-pair ladder: degree, elements along and across, and what it left uncertain.

    ``worst`` is the largest uncertainty over all compared fibres, as a share of the station's larger stress
    (None for the first solution, which has nothing to be compared with).
    """

    degree: int
    cells: int
    dofs: int
    worst: float | None


@dataclass(frozen=True)
class MeshSummary:
    """The final mesh, and the solutions that led to it."""

    cells: int
    dofs: int
    levels: tuple[Level, ...]


@dataclass(frozen=True)
class Results:
    """A whole check. ``notes`` are what the reader must know before any number, most important first.

    ``ends``: how the member is held at its start and its end.
    ``missed`` names the stations (with their case) whose uncertainty did not reach the numerical target.
    """

    version: str
    title: str
    sha256: str
    unit_set: str
    units: Units
    band: float
    numerical: float
    yield_stress: float | None
    notes: tuple[str, ...]
    ends: tuple[End, End]
    sections: dict[str, SectionSummary]
    mesh: MeshSummary
    missed: tuple[str, ...]
    cases: tuple[CaseResult, ...]
