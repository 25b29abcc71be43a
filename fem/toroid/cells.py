"""The half section on one side of the plane of bending as quadrilateral cells, each with its exact outline.

A cell lies between two curves that run from the inner toward the outer face: (1 - c) low(q) + c high(q), q from 0 to 1
and c from ``first`` to ``last``. Its sides are smooth, so that high-order elements converge geometrically.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from intrados.theory.quadrature import Array
from intrados.theory.section import Section

Curve = Callable[[Array], Array]

# Places closer than this share of the depth are one place.
SAME = 1e-9


@dataclass(frozen=True, eq=False)
class Cell:
    """A quadrilateral between two curves; see the module."""

    low: Curve
    high: Curve
    first: float
    last: float

    def points(self, q: Array, s: Array) -> Array:
        """(x, z), shape (2, n), at local coordinates from 0 to 1, q from inner to outer and s away from the plane."""
        c = self.first + (self.last - self.first) * s
        placed: Array = (1.0 - c) * self.low(q) + c * self.high(q)
        return placed


@dataclass(frozen=True)
class Corner:
    """A re-entrant corner; stress within ``reach`` (length) of it says how sharp it is, and nothing else."""

    x: float
    z: float
    reach: float


@dataclass(frozen=True, eq=False)
class FaceCells:
    """Cells along a face from the plane of bending outward: their sides q = 0 (inner) or 1 (outer).

    A face that is not ``is_flat`` has no width and is the corner s = 1 of its one cell. ``over_web`` is the range of z
    behind which a narrower layer lies.
    """

    is_flat: bool
    cells: tuple[int, ...]
    over_web: tuple[float, float] | None


@dataclass(frozen=True, eq=False)
class HalfSection:
    """The cells of a half section, its faces and its re-entrant corners."""

    section: Section
    cells: tuple[Cell, ...]
    inner: FaceCells
    outer: FaceCells
    corners: tuple[Corner, ...]
