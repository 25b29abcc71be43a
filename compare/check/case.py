"""One load case of a solved job."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from intrados.compare.job import Job
from intrados.compare.ladder import Rungs, rungs
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
    def rungs(self) -> tuple[tuple[Rungs, Rungs], ...]:
        """What the section alone says of both fibres of each station under its N and M."""
        member, nu = self.loading.member, self.job.material.nu
        numerical = self.job.agreement.numerical
        found = []
        for station in self.job.stations:
            N, _, M = self.loading.resultants(station.piece, station.share)
            section, R = member.section(station.piece, station.share), member.radius(station.piece, station.share)
            found.append(rungs(section, R, nu, N, M, numerical))
        return tuple(found)

    @cached_property
    def best(self) -> Array:
        """Best estimate of the fibre stress at the stations, (stations, 2): FE and what the third dimension adds."""
        best: Array = self.fibres + np.array([[of.width for of in pair] for pair in self.rungs])
        return best

    @cached_property
    def scales(self) -> Array:
        """The larger |best| of each station."""
        larger: Array = np.abs(self.best).max(axis=1)
        return larger

    def missed(self) -> list[str]:
        """Names of the comparable stations whose uncertainty is beyond the numerical target."""
        found = []
        for station, where, scale, steps in zip(self.job.stations, self.places, self.scales, self.rungs, strict=True):
            allowed = self.job.agreement.numerical * max(scale, FAINT * self.scales.max())
            worst = max(
                self.pair.at(self.index, face, station) + of.uncertainty for face, of in zip(FACES, steps, strict=True)
            )
            if where.comparable and worst > allowed:
                found.append(f"{station.name} ({self.name})" if self.name else station.name)
        return found
