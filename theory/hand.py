"""The hand theory of a job: Winkler-Bach, with the full width of flanges or their effective one."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Literal

import numpy as np

from intrados.theory import winkler
from intrados.theory.flange import EffectiveBar, effective
from intrados.theory.quadrature import Array
from intrados.theory.section import Section

Flanges = Literal["full", "effective"]


@dataclass(frozen=True)
class HandTheory:
    """How hand stresses are found. ``flanges`` "full" is what a hand calculation does that does not know of curling.

    N, M act at the centroid of the full section throughout; ``nu`` is Poisson's ratio, which effective widths need.
    """

    flanges: Flanges
    nu: float

    def hoop(self, section: Section, R: float | None, N: float, M: float, x: Array) -> Array:
        """Hoop stress at the distances ``x`` from the inner face; a straight has no effective width."""
        if R is None or self.flanges == "full":
            return winkler.hoop(section, R, N, M, x)
        narrowed = _effective(section, R, self.nu)
        return winkler.hoop(narrowed.section, narrowed.R, N, narrowed.moment(N, M), x)

    def fibres(self, section: Section, R: float | None, N: float, M: float) -> tuple[float, float]:
        """Hoop stress at the inner and the outer fibre."""
        inner, outer = self.hoop(section, R, N, M, np.array([0.0, section.depth]))
        return float(inner), float(outer)


@lru_cache(maxsize=256)
def _effective(section: Section, R: float, nu: float) -> EffectiveBar:
    return effective(section, R, nu)
