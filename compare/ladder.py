"""The difference budget of a station: which assumption of the hand theory costs how much.

From rung to rung with the same N, V, M: hand theory -> the ideal plane-stress bar of the same curvature and width
(``thick``) -> the exact three-dimensional bar of the same section (``width``); and beside it from the ideal bar to
the plane-stress FE of the whole member (``introduction``). best = fe + width, so the terms add up to best - hand.

On a straight the ideal bar is the hand theory and nothing acts across: thick = width = 0. On a taper and at a joint
the ideal bar is the local one; what the change of section or of curvature does is then left in ``introduction``.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Literal

from threadpoolctl import threadpool_limits

from intrados.compare.results import Budget
from intrados.fem.toroid import FaceStress, Toroid, toroid
from intrados.theory.ideal import bar
from intrados.theory.load import Face
from intrados.theory.section import Section, SectionError

FACES: tuple[Face, Face] = ("inner", "outer")
# The uncertainty of the best estimate is the sum of the membrane's and the section's: how they share the target.
MEMBRANE_SHARE, SECTION_SHARE = 0.6, 0.3


@dataclass(frozen=True)
class Rungs:
    """What the section alone says of one fibre (stress): the ideal bar, the step to three dimensions.

    ``three_d`` tells where over the width the hoop stress is largest and what acts across; None on a straight.
    ``uncertainty`` is that of ``width``. ``is_known`` is False where the three-dimensional section cannot be solved (on
    a taper between unlike hollow sections): its width term is then left out, and nothing can be concluded.
    """

    ideal: float
    width: float
    uncertainty: float
    three_d: FaceStress | None
    is_known: bool = True


def rungs(section: Section, R: float | None, nu: float, N: float, M: float, numerical: float) -> tuple[Rungs, Rungs]:
    """The rungs of the inner and of the outer fibre under N and M about the centroid.

    ``numerical`` is the job's target for the whole uncertainty, of which the section may take a share.
    """
    ideal = bar(section, R, nu).fibres(N, M)
    if R is None:
        return Rungs(ideal[0], 0.0, 0.0, None), Rungs(ideal[1], 0.0, 0.0, None)
    try:
        solved = solved_section(section, R, nu, SECTION_SHARE * numerical)
    except SectionError:
        return Rungs(ideal[0], 0.0, 0.0, None, is_known=False), Rungs(ideal[1], 0.0, 0.0, None, is_known=False)
    faces = [solved.face(face, N, M) for face in FACES]
    inner, outer = (
        Rungs(plane, face.value - plane, face.uncertainty, face) for plane, face in zip(ideal, faces, strict=True)
    )
    return inner, outer


@lru_cache(maxsize=256)
def solved_section(section: Section, R: float, nu: float, target: float) -> Toroid:
    """The three-dimensional bar of a section, solved once for all stations and cases that share it.

    ``target``: its uncertainty as a share of the larger face's stress. On one BLAS thread, as the membrane is (see
    accuracy.refine).
    """
    with threadpool_limits(limits=1, user_api="blas"):
        return toroid(section, R, nu, target)


def budget(hand: float, fe: float, of: Rungs) -> Budget:
    """The terms from the hand value to fe + width."""
    return Budget(thick=of.ideal - hand, width=of.width, introduction=fe - of.ideal)


def largest_term(terms: Budget) -> Literal["thick", "width", "introduction"]:
    """The name of the largest term with the sign of the whole: what the difference is mostly made of."""
    named: dict[Literal["thick", "width", "introduction"], float]
    named = {"thick": terms.thick, "width": terms.width, "introduction": terms.introduction}
    sign = 1.0 if sum(named.values()) >= 0.0 else -1.0
    return max(named, key=lambda name: sign * named[name])
