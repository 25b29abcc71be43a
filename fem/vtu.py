"""The solved mesh as a VTU file: displacement, stresses and thickness at a lattice of points in every element."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from intrados.fem.accuracy import Refined
from intrados.fem.cut import stresses
from intrados.fem.element import basis
from intrados.fem.membrane import Numbers
from intrados.theory.quadrature import Array

# Steps of the lattice along either side of an element: enough for its degree to show.
_STEPS = 6


def write_fields(path: Path, solved: Refined, case_names: tuple[str, ...]) -> None:
    """Write ``path`` for ParaView and its like. Names of the point data carry the case where there are several.

    Elements keep points of their own, so that nothing is averaged between them. Stresses are global components.
    """
    import meshio

    solution = solved.pair.fine
    membrane = solution.membrane
    q = np.linspace(0.0, 1.0, _STEPS + 1)
    points = np.array([np.repeat(q, len(q)), np.tile(q, len(q))])
    values, _ = basis(membrane.square.degree, points)
    place = (membrane.geometry @ values).reshape(2, -1)
    elements = np.arange(len(membrane.scalars))
    data: dict[str, Array] = {"thickness": membrane.thickness_at(points).ravel()}
    for name, case in zip(case_names, solution.cases, strict=True):
        label = f" ({name})" if len(case_names) > 1 else ""
        count = membrane.scalars.shape[1]
        moved = case.displacement[membrane.vectors].reshape(len(elements), 2, count) @ values
        data[f"displacement{label}"] = _spatial(moved[:, 0].ravel(), moved[:, 1].ravel())
        tensor = stresses(membrane, case.displacement, elements, points).reshape(3, -1)
        for component, stress in zip(("xx", "yy", "xy"), tensor, strict=True):
            data[f"stress {component}{label}"] = stress
    mesh = meshio.Mesh(_spatial(*place), [("quad", _cells(len(elements)))], point_data=data)
    meshio.write(path, mesh, file_format="vtu")


def _spatial(x: Array, y: Array) -> Array:
    return np.stack([x, y, np.zeros_like(x)], axis=1)


def _cells(elements: int) -> Numbers:
    """Quadrilaterals of the lattices of all elements."""
    side = _STEPS + 1
    i, j = np.divmod(np.arange(_STEPS * _STEPS), _STEPS)
    corner = i * side + j
    one = np.stack([corner, corner + side, corner + side + 1, corner + 1], axis=1)
    all_of_them: Numbers = (one[None] + (np.arange(elements) * side * side)[:, None, None]).reshape(-1, 4)
    return all_of_them
