"""Hand theory against the best estimate, fibre by fibre: difference and verdict."""

from __future__ import annotations

from dataclasses import dataclass

from intrados.compare.results import Verdict
from intrados.theory.section import Section

# The reference of a difference is never less than this share of the station's larger stress.
_LEAST_REFERENCE = 0.1
_UNLOADED = 1e-6
_UNSETTLED = frozenset({"T", "I", "box", "tube"})
_NARROW = 0.5


@dataclass(frozen=True)
class Comparison:
    """``difference`` is (hand - best)/reference; ``verdict`` None: within the band, but not settled by plane stress."""

    difference: float | None
    verdict: Verdict | None


@dataclass(frozen=True)
class Scale:
    """What a station's comparison is measured by: its larger |best|, the member's, the agreement band."""

    station: float
    member: float
    band: float


def compare(hand: float, best: float, uncertainty: float, scale: Scale, comparable: bool, settled: bool) -> Comparison:
    """The comparison of one fibre (stresses). ``settled``: whether plane stress is a sound model of the section."""
    if scale.station <= _UNLOADED * scale.member:
        return Comparison(None, "unloaded")
    reference = max(abs(best), _LEAST_REFERENCE * scale.station)
    difference = (hand - best) / reference
    if not comparable:
        return Comparison(difference, "not comparable")
    if abs(hand - best) <= scale.band * reference + uncertainty:
        return Comparison(difference, "holds" if settled else None)
    unsafe = abs(hand) < abs(best) or hand * best < 0.0
    return Comparison(difference, "low" if unsafe else "high")


def is_settled(section: Section) -> bool:
    """Whether plane stress may give a ``holds`` here: not for a section whose flanges or walls curl out of plane."""
    return not _UNSETTLED & set(section.shape.split(" to "))


def is_compact(section: Section) -> bool:
    """Whether the section is a plate in the plane of bending: constant width, at most half the depth."""
    return section.has_constant_width and section.widest <= _NARROW * section.depth * (1.0 + 1e-9)
