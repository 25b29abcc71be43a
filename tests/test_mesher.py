"""The strip's mesh: one lattice of quadrilaterals, every edge traversed one way, boundaries named, gmsh left clean."""

from __future__ import annotations

import sys
from dataclasses import replace
from functools import lru_cache
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from bars import stations

from intrados.fem import mesher
from intrados.fem.mesher import MeshError, gmsh_session, mesh
from intrados.fem.strip import Strip, plan
from intrados.theory.load import FaceLoad, Patch
from intrados.theory.member import Arc, Member, Straight
from intrados.theory.section import Section
from intrados.theory.shapes import circle, tee
from intrados.theory.statics import loading

TEE = tee(60.0, 50.0, 12.0, 12.0, "inner")
ROUND = circle(30.0)
both_sections = pytest.mark.parametrize("section", [TEE, ROUND], ids=lambda section: section.shape)


@lru_cache
def hook(section: Section) -> tuple[Strip, Any]:
    both = (section, section)
    member = Member("inner", (3.0, -5.0), 20.0, (Straight(80.0, both), Arc(35.0, -150.0, both)))
    press = FaceLoad("press", 1, 0.6, "inner", (100.0, -900.0), Patch(12.0))
    strip = plan((loading(member, "clamped", "free", (press,)),), stations((0, 0.5), (1, 0.3)), 0)
    return strip, mesh(strip)


@both_sections
def test_elements_are_numbered_column_by_column_and_tile_the_strip(section: Section) -> None:
    strip, made = hook(section)
    assert made.nelements == len(strip.columns) * len(strip.rows)
    x, y = made.p[:, made.t]
    rows = len(strip.rows)
    for number in range(made.nelements):
        column, row = strip.columns[number // rows], strip.rows[number % rows]
        low, high = row.eta(np.array([0.0, 1.0]))
        first, last = column.piece + column.first, column.piece + column.last
        assert x[:, number] == pytest.approx([first, last, last, first], abs=1e-9)
        assert y[:, number] == pytest.approx([low, low, high, high], abs=1e-9)


@both_sections
def test_area_of_the_mesh_is_that_of_its_rectangle(section: Section) -> None:
    _, made = hook(section)
    (x0, x1, x2, x3), (y0, y1, y2, y3) = made.p[:, made.t]
    areas = 0.5 * ((x2 - x0) * (y3 - y1) - (x3 - x1) * (y2 - y0))
    assert areas.min() > 0.0
    assert areas.sum() == pytest.approx(2.0, rel=1e-10)


@both_sections
def test_no_vertex_is_double_and_every_inner_edge_has_two_elements(section: Section) -> None:
    strip, made = hook(section)
    columns, rows = len(strip.columns), len(strip.rows)
    assert made.nvertices == (columns + 1) * (rows + 1)
    assert (made.f2t[1] >= 0).sum() == (columns - 1) * rows + columns * (rows - 1)


@both_sections
def test_shared_edges_are_traversed_the_same_way_by_both_elements(section: Section) -> None:
    """ElementQuadP is conforming only then: its odd edge functions would else change sign across the edge."""
    _, made = hook(section)
    # The reference square's edges run from vertex 0 to 1, 1 to 2, 3 to 2 and 0 to 3 in growing coordinates.
    seen: dict[frozenset[int], tuple[int, int]] = {}
    for corners in made.t.T.tolist():
        for first, second in ((0, 1), (1, 2), (3, 2), (0, 3)):
            way = (corners[first], corners[second])
            assert seen.setdefault(frozenset(way), way) == way


@both_sections
def test_boundaries_are_named_and_complete(section: Section) -> None:
    strip, made = hook(section)
    assert sorted(made.boundaries) == ["end", "high", "low", "start"]
    assert np.array_equal(np.sort(np.concatenate(list(made.boundaries.values()))), np.sort(made.boundary_facets()))
    places = {"start": (0, 0.0), "end": (0, 2.0), "low": (1, 0.0), "high": (1, 1.0)}
    for name, (axis, value) in places.items():
        assert made.p[axis, made.facets[:, made.boundaries[name]]] == pytest.approx(value, abs=1e-12)
    assert len(made.boundaries["start"]) == len(strip.rows)
    assert len(made.boundaries["low"]) == len(strip.columns)


def test_a_mesh_other_than_the_strips_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    strip, _ = hook(TEE)
    real = mesher._meshed

    def shifted(*given: Any) -> Any:
        points, quads, edges = real(*given)
        return points + np.array([[0.0], [0.02]]) * (points[1] > 0.5), quads, edges

    def short(*given: Any) -> Any:
        points, quads, edges = real(*given)
        return points, quads[1:], edges

    monkeypatch.setattr(mesher, "_meshed", shifted)
    with pytest.raises(MeshError, match="lattice"):
        mesh(strip)
    monkeypatch.setattr(mesher, "_meshed", short)
    with pytest.raises(MeshError, match="quadrilaterals where the strip has"):
        mesh(strip)


def test_a_strip_is_meshed_the_same_way_twice() -> None:
    strip, first = hook(TEE)
    second = mesh(replace(strip))
    assert np.array_equal(first.p, second.p)
    assert np.array_equal(first.t, second.t)


def test_gmsh_is_finalised_also_after_an_error() -> None:
    with pytest.raises(RuntimeError, match="inside"), gmsh_session() as gmsh:
        assert gmsh.isInitialized()
        raise RuntimeError("inside")
    assert not gmsh.isInitialized()


def test_missing_system_libraries_are_named(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "gmsh.py").write_text("raise OSError('libGLU.so.1: cannot open shared object file')\n")
    monkeypatch.syspath_prepend(tmp_path)
    monkeypatch.delitem(sys.modules, "gmsh", raising=False)
    with pytest.raises(MeshError, match=r"libGLU\.so\.1.*apt-get install libglu1-mesa"), gmsh_session():
        pass
