"""One gmsh session: the strip as transfinite quadrilateral blocks, handed on as a scikit-fem mesh.

The mesh lives in the strip's own coordinates (number of the piece plus share along it, eta across it); the member's
exact geometry carries it into the plane later, at the nodes of the high-order elements.
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from itertools import groupby
from typing import Any

import numpy as np
from numpy.typing import NDArray

from intrados.fem.strip import Strip

SYSTEM_PACKAGES = "libglu1-mesa libgl1 libxcursor1 libxft2 libxinerama1 libxrender1 libxfixes3 libfontconfig1 libgomp1"


class MeshError(RuntimeError):
    """A mesh that could not be made, or is not the one that was asked for."""


@contextmanager
def gmsh_session() -> Iterator[Any]:
    """The gmsh module, initialised without user files and always finalised. Raises MeshError where it cannot load."""
    try:
        import gmsh
    except OSError as error:
        raise MeshError(
            f"gmsh cannot load its system libraries ({error}); on Debian or Ubuntu: apt-get install {SYSTEM_PACKAGES}"
        ) from error
    gmsh.initialize(readConfigFiles=False, interruptible=False)
    try:
        gmsh.option.setNumber("General.Terminal", 0)
        yield gmsh
    finally:
        gmsh.finalize()


def mesh(strip: Strip) -> Any:
    """A skfem.MeshQuad of the strip, its element (column i, row j) numbered i * rows + j.

    Every element's vertices go round as (first line, lower row line), (last, lower), (last, upper), (first, upper), so
    that each shared edge is traversed the same way by both its elements: ElementQuadP is conforming only then.
    Boundaries "start", "end", "low" (eta = 0) and "high". Raises MeshError.
    """
    import skfem

    along, across = _lines(strip)
    with gmsh_session() as gmsh:
        points, quads, edges = _meshed(gmsh, strip, along, across)
    columns, rows = len(strip.columns), len(strip.rows)
    if quads.shape[0] != columns * rows:
        raise MeshError(f"gmsh made {quads.shape[0]} quadrilaterals where the strip has {columns * rows}")
    middle = points[:, quads].mean(axis=2)
    i = np.searchsorted(along, middle[0]) - 1
    j = np.searchsorted(across, middle[1]) - 1
    quads = quads[np.lexsort((j, i))]
    right, high = (side > side.mean(axis=1, keepdims=True) for side in points[:, quads])
    order = np.argsort(np.where(high, 3 - right, right), axis=1)
    quads = np.take_along_axis(quads, order, axis=1)
    _assert_lattice(points[:, quads], along, across)
    result = skfem.MeshQuad(points, quads.T, sort_t=False, validate=False)
    return result.with_boundaries(_boundaries(result, edges))


def _lines(strip: Strip) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Coordinates of the lines between columns and between rows."""
    along = [column.piece + column.first for column in strip.columns]
    along.append(strip.columns[-1].piece + 1.0)
    across = [float(row.eta(np.array(0.0))) for row in strip.rows]
    return np.array(along), np.array([*across, 1.0])


def _meshed(
    gmsh: Any, strip: Strip, along: NDArray[np.float64], across: NDArray[np.float64]
) -> tuple[NDArray[np.float64], NDArray[np.int64], dict[str, NDArray[np.int64]]]:
    """Points (2, n), quadrilaterals (m, 4) and named boundary edges (k, 2) from a transfinite mesh."""
    geo = gmsh.model.geo
    blocks = _blocks(strip)
    cuts = [along[start] for start, _ in blocks] + [along[-1]]
    corner = [[geo.addPoint(x, y, 0.0) for y in across] for x in cuts]
    rows = len(across) - 1
    upright = [[geo.addLine(line[j], line[j + 1]) for j in range(rows)] for line in corner]
    flat = [[geo.addLine(corner[b][j], corner[b + 1][j]) for j in range(rows + 1)] for b in range(len(blocks))]
    for lines in upright:
        for tag in lines:
            geo.mesh.setTransfiniteCurve(tag, 2)
    for (_, count), lines in zip(blocks, flat, strict=True):
        for tag in lines:
            geo.mesh.setTransfiniteCurve(tag, count + 1)
    for b in range(len(blocks)):
        for j in range(rows):
            loop = geo.addCurveLoop([flat[b][j], upright[b + 1][j], -flat[b][j + 1], -upright[b][j]])
            surface = geo.addPlaneSurface([loop])
            geo.mesh.setTransfiniteSurface(surface)
            geo.mesh.setRecombine(2, surface)
    geo.synchronize()
    gmsh.model.mesh.generate(2)
    named = {
        "start": upright[0],
        "end": upright[-1],
        "low": [lines[0] for lines in flat],
        "high": [lines[-1] for lines in flat],
    }
    tags, coordinates, _ = gmsh.model.mesh.getNodes()
    number = np.zeros(int(tags.max()) + 1, dtype=np.int64)
    number[tags] = np.arange(len(tags))
    kinds, _, nodes = gmsh.model.mesh.getElements(2)
    if [gmsh.model.mesh.getElementProperties(kind)[0] for kind in kinds] != ["Quadrilateral 4"]:
        raise MeshError("gmsh made cells other than quadrilaterals")
    edges = {
        name: np.concatenate([number[gmsh.model.mesh.getElements(1, tag)[2][0]].reshape(-1, 2) for tag in lines])
        for name, lines in named.items()
    }
    return coordinates.reshape(-1, 3)[:, :2].T.copy(), number[nodes[0]].reshape(-1, 4), edges


def _blocks(strip: Strip) -> list[tuple[int, int]]:
    """Runs of equal columns, as (first column, how many): each becomes one transfinite block."""
    keys = [(column.piece, round((column.last - column.first) * 1e9)) for column in strip.columns]
    runs = [len(list(run)) for _, run in groupby(keys)]
    starts = np.cumsum([0, *runs[:-1]])
    return list(zip((int(start) for start in starts), runs, strict=True))


def _assert_lattice(corners: NDArray[np.float64], along: NDArray[np.float64], across: NDArray[np.float64]) -> None:
    """MeshError unless element (i, j) spans exactly lines i, i + 1 and j, j + 1, its vertices in the promised order."""
    rows = len(across) - 1
    i, j = np.divmod(np.arange(corners.shape[1]), rows)
    x = np.stack([along[i], along[i + 1], along[i + 1], along[i]], axis=1)
    y = np.stack([across[j], across[j], across[j + 1], across[j + 1]], axis=1)
    if np.abs(corners - np.array([x, y])).max() > 1e-7 * min(np.diff(along).min(), np.diff(across).min()):
        raise MeshError("gmsh's mesh is not the strip's lattice")


def _boundaries(mesh: Any, edges: dict[str, NDArray[np.int64]]) -> dict[str, NDArray[np.int64]]:
    """Facet numbers of the named boundary edges."""
    facets = {tuple(sorted(pair)): index for index, pair in enumerate(mesh.facets.T.tolist())}
    return {name: np.array([facets[tuple(sorted(pair))] for pair in pairs.tolist()]) for name, pairs in edges.items()}
