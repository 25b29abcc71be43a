"""Hand theory against the best estimate, fibre by fibre: difference and verdict."""

from __future__ import annotations

from dataclasses import dataclass

from intrados.compare.results import Verdict

# The reference of a difference is never less than this share of the station's larger stress.
_LEAST_REFERENCE = 0.1
_UNLOADED = 1e-6


@dataclass(frozen=True)
class Comparison:
    """``difference`` is (hand - best)/reference; ``verdict`` None: within the band, but not settled by plane stress."""

    difference: float | None
    verdict: Verdict


@dataclass(frozen=True)
class Scale:
    """What a station's comparison is measured by: its larger |best|, the member's, the agreement band."""

    station: float
    member: float
    band: float


def compare(hand: float, best: float, uncertainty: float, scale: Scale, comparable: bool) -> Comparison:
    """The comparison of one fibre (stresses)."""
    if scale.station <= _UNLOADED * scale.member:
        return Comparison(None, "unloaded")
    reference = max(abs(best), _LEAST_REFERENCE * scale.station)
    difference = (hand - best) / reference
    if not comparable:
        return Comparison(difference, "not comparable")
    if abs(hand - best) <= scale.band * reference + uncertainty:
        return Comparison(difference, "holds")
    unsafe = abs(hand) < abs(best) or hand * best < 0.0
    return Comparison(difference, "low" if unsafe else "high")
