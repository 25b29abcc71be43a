"""One load case of a solved job."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from intrados.compare.job import Job
from intrados.compare.zone import Place
from intrados.fem.accuracy import FACES, FAINT, CaseSolution, Pair
from intrados.fem.membrane import Membrane
from intrados.theory.quadrature import Array
from intrados.theory.statics import Loading


@dataclass(frozen=True, eq=False)
class SolvedCase:
    """A job, its final pair of solutions, which load case (from 0), and where the stations stand in it."""

    job: Job
    pair: Pair
    index: int
    places: tuple[Place, ...]

    @property
    def name(self) -> str:
        """The case's name; empty where the job has no cases."""
        return self.job.cases[self.index].name

    @property
    def loading(self) -> Loading:
        """The member under the loads of this case."""
        return self.job.loadings[self.index]

    @property
    def membrane(self) -> Membrane:
        """The reported discretisation."""
        return self.pair.fine.membrane

    @property
    def solution(self) -> CaseSolution:
        """The reported solution."""
        return self.pair.fine.cases[self.index]

    @cached_property
    def fibres(self) -> Array:
        """FE fibre stress at the stations, (stations, 2): inner, outer."""
        return np.array(
            [[self.pair.fine.fibre(self.index, face, station) for face in FACES] for station in self.job.stations]
        )

    @cached_property
    def scales(self) -> Array:
        """The larger |fibre stress| of each station."""
        larger: Array = np.abs(self.fibres).max(axis=1)
        return larger

    def missed(self) -> list[str]:
        """Names of the comparable stations whose uncertainty is beyond the numerical target."""
        found = []
        for station, where, scale in zip(self.job.stations, self.places, self.scales, strict=True):
            allowed = self.job.agreement.numerical * max(scale, FAINT * self.scales.max())
            worst = max(self.pair.at(self.index, face, station) for face in FACES)
            if where.comparable and worst > allowed:
                found.append(f"{station.name} ({self.name})" if self.name else station.name)
        return found
