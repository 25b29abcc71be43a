"""The unit sets of a job: names for labels, never a conversion."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Units:
    """The names of a job's units, as labels carry them."""

    length: str
    force: str
    stress: str


UNIT_SETS = {
    "mm-N-MPa": Units("mm", "N", "MPa"),
    "m-N-Pa": Units("m", "N", "Pa"),
    "in-lbf-psi": Units("in", "lbf", "psi"),
    "in-kip-ksi": Units("in", "kip", "ksi"),
}
