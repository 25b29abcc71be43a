"""Fibre stress of the mesh against exact solutions: the rectangular bar, the straight beam, bars of any width.

The known values are closed forms (theory/rectangle_bar is tested against its own published digits), elementary beam
formulas, eigenvalues of the strip and of the curved bar, and the membrane values of published/toroid.json.
"""

from __future__ import annotations

import cmath
import json
import math
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from bars import (
    STEEL,
    bar,
    exact_fibres,
    fibres,
    pulled,
    pulled_through_centre,
    rectangular_bar,
    solved,
    stations,
    straightened,
    with_ends,
)
from scipy.optimize import fsolve

from intrados.fem.accuracy import FACES, Pair, refine
from intrados.fem.membrane import Elastic
from intrados.theory import shapes
from intrados.theory.load import EndLoad
from intrados.theory.member import Member, Straight
from intrados.theory.quadrature import Array
from intrados.theory.section import Section
from intrados.theory.statics import loading
from intrados.theory.winkler import hoop

TOROID = json.loads((Path(__file__).parent / "published" / "toroid.json").read_text())
MIDDLE = stations((0, 0.5))
# Golovin's solution for a = 30, b = 70, t = 10, M = 1e5, evaluated from the closed form to 14 digits.
GOLOVIN = np.array([[51.600901788706, -29.674600155829]])
# The same bar under a force through the centre: 2000 (-3 r + a^2 b^2/r^3 + (a^2 + b^2)/r)/K at r = a, a share of cos f.
THROUGH_CENTRE = 58.330661682206

SECTIONS = [
    shapes.rectangle(40.0, 10.0),
    shapes.trapezoid(60.0, 40.0, 20.0),
    shapes.triangle(60.0, 40.0, "inner"),
    shapes.triangle(60.0, 40.0, "outer"),
    shapes.circle(40.0),
    shapes.ellipse(40.0, 30.0),
    shapes.tube(50.0, 30.0),
    shapes.tee(60.0, 50.0, 12.0, 12.0, "inner"),
    shapes.i_section(80.0, 10.0, 50.0, 12.0, 40.0, 10.0),
    shapes.box(60.0, 40.0, 8.0, 6.0),
    shapes.polygon([(0.0, 10.0), (15.0, 20.0), (40.0, 5.0)]),
    shapes.widths([(0.0, 30.0), (10.0, 30.0), (10.0, 12.0), (50.0, 18.0)]),
]
each_section = pytest.mark.parametrize("section", SECTIONS, ids=lambda section: section.shape)


def test_quarter_bar_under_end_moments_has_golovins_fibre_stresses() -> None:
    case = straightened(rectangular_bar(30.0, 70.0, 10.0), 1e5)
    pair = refine((case,), MIDDLE, ((True,),), STEEL, 0.002).pair
    found = fibres(pair.fine, MIDDLE)
    stated = np.array([pair.at(0, face, MIDDLE[0]) for face in FACES])
    assert found == pytest.approx(GOLOVIN, rel=1e-5)
    assert (np.abs(found - GOLOVIN) <= stated).all()
    assert (stated <= 0.002 * 51.6).all()


def test_quarter_bar_pulled_through_its_centre_has_its_cosine() -> None:
    at = stations((0, 1.0 / 6.0), (0, 0.5), (0, 5.0 / 6.0))
    case = pulled_through_centre(rectangular_bar(30.0, 70.0, 10.0), 2000.0)
    pair = refine((case,), at, ((True,) * 3,), STEEL, 1e-4).pair
    for station, degrees in zip(at, (15.0, 45.0, 75.0), strict=True):
        wanted = THROUGH_CENTRE * math.cos(math.radians(degrees))
        found = pair.fine.fibre(0, "inner", station)
        assert found == pytest.approx(wanted, rel=1e-5)
        assert abs(found - wanted) <= pair.at(0, "inner", station)


@pytest.mark.parametrize("b", [60.0, 70.0, 120.0])
def test_convergence_with_the_degree_is_geometric(b: float) -> None:
    """At stations the error falls at least fivefold a degree, and its logarithm is a straight line in the degree."""
    case = straightened(rectangular_bar(30.0, b, 10.0), 1e5)
    exact = exact_fibres(case, MIDDLE)
    degrees = np.arange(2, 8)
    errors = np.array([np.abs(fibres(solved(case, MIDDLE, p), MIDDLE) / exact - 1.0).max() for p in degrees])
    assert all(after < 0.2 * before for before, after in pairwise(errors))
    slope, start = np.polyfit(degrees, np.log10(errors), 1)
    assert slope < -1.0
    assert np.abs(np.polyval([slope, start], degrees) - np.log10(errors)).max() < 0.8


def test_convergence_along_the_whole_face_is_geometric() -> None:
    """Everywhere on the inner face, not only where it is read out; the last point is six digits below the first."""
    case = straightened(rectangular_bar(30.0, 70.0, 10.0), 1e5)
    degrees = np.arange(2, 11)
    errors = [np.abs(solved(case, MIDDLE, p).cases[0].inner.hoop / GOLOVIN[0, 0] - 1.0).max() for p in degrees]
    assert all(after < 0.3 * before for before, after in pairwise(errors))
    assert np.polyfit(degrees, np.log10(errors), 1)[0] < -0.8


def decay_of_curved_bar(b_over_a: float) -> complex:
    """The smallest root of sin z = -z sinh(B)/B, z = kB, B = ln(b/a): fibre stress then dies like exp(-k angle).

    The Airy function r exp(-k angle) f(ln r) with both faces free leads to it; as B goes to 0 it is the strip's
    sin z = -z, whose root is twice 2.106 + 1.125 i (Fadle, Papkovich; memory).
    """
    B = math.log(b_over_a)

    def both(parts: Array) -> list[float]:
        z = complex(*parts)
        left = cmath.sin(z) + z * math.sinh(B) / B
        return [left.real, left.imag]

    return complex(*fsolve(both, [4.212, 2.251], xtol=1e-13)) / B


def test_the_decay_of_the_flat_strip_is_the_published_one() -> None:
    z = decay_of_curved_bar(1.0 + 1e-5) * 1e-5
    assert (z.real, z.imag) == pytest.approx((2.0 * 2.106, 2.0 * 1.125), abs=1e-3)


def decay(differences: Array, step: float) -> complex:
    """k of exp(-k s) cos(...) from equally spaced values, (faces, n): d'' = 2 exp(-x) cos(y) d' - exp(-2x) d."""
    rows = np.concatenate([np.stack([d[:-2], d[1:-1]], axis=1) for d in differences])
    right = np.concatenate([d[2:] for d in differences])
    # Every row weighs alike, however far the disturbance has fallen.
    weight = 1.0 / np.hypot(*rows.T)
    low, high = np.linalg.lstsq(rows * weight[:, None], right * weight, rcond=None)[0]
    k = -cmath.log(0.5 * high + cmath.sqrt(0.25 * high * high + low)) / step
    return complex(k.real, abs(k.imag))


@pytest.mark.parametrize("b", [40.0, 70.0, 120.0])
def test_what_a_clamp_disturbs_dies_along_an_arc_as_saint_venant_says(b: float) -> None:
    """From 1.2 depths off the clamp on only the slowest mode is left: its rate and its wave, to 0.2 %."""
    step = 0.2 * (b - 30.0) / (0.5 * (b + 30.0))
    case = with_ends(straightened(rectangular_bar(30.0, b, 10.0, math.degrees(20 * step)), 1e5), "clamped", "free")
    at = stations(*[(0, (6 + index) / 20) for index in range(8)])
    found = decay((fibres(solved(case, at, 7), at) - exact_fibres(case, at)).T, step)
    wanted = decay_of_curved_bar(b / 30.0)
    assert found.real == pytest.approx(wanted.real, rel=2e-3)
    assert found.imag == pytest.approx(wanted.imag, rel=2e-3)


@pytest.mark.parametrize(
    ("force", "moment", "mode"),
    [(1e4, 0.0, complex(2 * 2.10620, 2 * 1.12536)), (0.0, 1e5, complex(2 * 3.74884, 2 * 1.38434))],
    ids=["pull", "bending"],
)
def test_what_a_clamp_disturbs_dies_along_a_straight_as_saint_venant_says(
    force: float, moment: float, mode: complex
) -> None:
    """The lowest even and odd roots of Fadle and Papkovich (memory), for half the depth as unit of length."""
    section = shapes.rectangle(40.0, 10.0)
    member = Member("inner", (0.0, 0.0), 0.0, (Straight(160.0, (section, section)),))
    case = loading(member, "clamped", "free", (EndLoad("far", "end", (force, 0.0), moment),))
    at = stations(*[(0, (8 + index) / 40) for index in range(7)])
    elementary = np.array([force, force]) / 400.0 + np.array([-1.0, 1.0]) * moment * 6.0 / (10.0 * 40.0**2)
    found = decay((fibres(solved(case, at, 9), at) - elementary).T, 0.1)
    assert found.real == pytest.approx(mode.real, rel=1e-2)
    assert found.imag == pytest.approx(mode.imag, rel=1e-2)


def test_a_clamp_moves_the_fibre_stress_as_the_zone_rule_supposes() -> None:
    """The rule leaves out one depth from a clamp: half a percent there, under 0.1 % from 1.25 depths on."""
    case = with_ends(straightened(rectangular_bar(30.0, 70.0, 10.0, 120.0), 1e5), "clamped", "free")
    depths = np.array([0.5, 1.0, 1.25, 1.6, 2.0])
    at = stations(*[(0, float(place)) for place in depths * 40.0 / case.member.length])
    off = np.abs(fibres(solved(case, at, 8), at) / exact_fibres(case, at) - 1.0).max(axis=1)
    assert 0.01 < off[0]
    assert off[1] < 0.006
    assert off[2:].max() < 0.001


@each_section
def test_a_straight_beam_of_any_section_has_its_elementary_stress(section: Section) -> None:
    """N/A + M y/I and V Q/(I t) are exact in plane stress of any width t(y): no cross stress, compatible strains.

    With the axial strain linear in the depth and the shear strain a function of the depth alone, both sides of the
    compatibility equation are zero.
    """
    member = Member("inner", (5.0, 8.0), 33.0, (Straight(3.0 * section.depth, (section, section)),))
    case = loading(member, "free", "free", pulled(member, (400.0, -150.0), 9e3))
    at = stations((0, 0.2), (0, 0.5), (0, 0.9))
    coarse, fine = solved(case, at, 6), solved(case, at, 7)
    pair = Pair(coarse, fine)
    for station in at:
        N, _, M = case.resultants(0, station.share)
        wanted = hoop(section, None, N, M, np.array([0.0, section.depth]))
        largest = np.abs(wanted).max()
        for face, stress in zip(FACES, wanted, strict=True):
            error = abs(fine.fibre(0, face, station) - stress)
            assert error <= 2e-6 * largest
            assert error <= pair.at(0, face, station)


@each_section
def test_on_an_arc_every_section_converges_geometrically(section: Section) -> None:
    """Round faces and pointed ones too: the width is smooth in the coordinate the rows are mapped with."""
    case = straightened(bar(section, 0.6 * section.depth, 180.0), 1e5)
    found = [fibres(solved(case, MIDDLE, p), MIDDLE) for p in (3, 4, 5, 6, 9)]
    errors = np.array([np.abs(values - found[-1]).max() / np.abs(found[-1]).max() for values in found[:-1]])
    assert np.polyfit(np.arange(4), np.log10(errors), 1)[0] < -0.5
    assert errors[-1] < 1e-5


def published_bar(row: dict[str, Any]) -> tuple[Section, float]:
    """Section and inner radius of a row of toroid.json."""
    size, R = row["geometry"], row["R"]
    if row["section"] == "circle":
        return shapes.circle(2.0 * size["radius"]), R - size["radius"]
    if row["section"] == "rect":
        return shapes.rectangle(size["depth"], size["width"]), R - 0.5 * size["depth"]
    if row["section"] == "trap":
        return shapes.trapezoid(size["depth"], size["inner_width"], size["outer_width"]), size["ri"]
    (flange, thickness), (web, web_depth), *outer = size["layers_b_h_from_inside"]
    depth = thickness + web_depth + sum(h for _, h in outer)
    if not outer:
        return shapes.tee(depth, flange, thickness, web, "inner"), size["ri"]
    return shapes.i_section(depth, web, flange, thickness, *outer[0]), size["ri"]


@pytest.mark.parametrize("row", TOROID["cases"], ids=lambda row: f"{row['section']}-{row['R']:.4g}-nu{row['nu']}")
def test_plane_stress_of_every_section_equals_the_reference_membrane(row: dict[str, Any]) -> None:
    """In the middle of an arc long enough to forget how its ends are loaded: more than once round, if need be.

    The table promises 0.3 % for its 3-D values; its membrane values turn out to be good to 0.05 %.
    """
    section, inner_radius = published_bar(row)
    R = inner_radius + section.centroid
    assert pytest.approx(row["R"], rel=1e-7) == R
    # Web and flanges of a stepped section pass on a disturbance about half as fast as a solid bar of the depth does.
    fading = 8.0 if len(section.layers) == 1 else 16.0
    rate = decay_of_curved_bar(1.0 + section.depth / inner_radius).real
    member = bar(section, inner_radius, math.degrees(2.0 * fading / rate))
    for state, case in (("n0", straightened(member, 1.0)), ("n1", pulled_through_centre(member, 1.0))):
        N, _, M = case.resultants(0, 0.5)
        unit = M if state == "n0" else N
        found = fibres(solved(case, MIDDLE, 5, elastic=Elastic(1.0, row["nu"])), MIDDLE)[0] / unit
        assert found == pytest.approx([row[state]["mem_i"], row[state]["mem_o"]], rel=5e-4)
