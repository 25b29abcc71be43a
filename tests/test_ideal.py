"""The ideal bar: closed forms, reference values, equilibrium, compatibility, convergence, its limits, and the mesh."""

from __future__ import annotations

import json
import math
from decimal import Decimal, localcontext
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from bars import STEEL, bar, fibres, pulled, solved, stations
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.polynomial import Chebyshev
from rescaling import rescaled

from intrados.theory import ideal, shapes, winkler
from intrados.theory.quadrature import Array
from intrados.theory.rectangle_bar import RectangleBar
from intrados.theory.section import Section, blend
from intrados.theory.statics import loading

PUBLISHED = Path(__file__).parent / "published"
FOURTEEN_DIGITS = json.loads((PUBLISHED / "rectangle_bar.json").read_text())["cases"]
HANDBOOK = json.loads((PUBLISHED / "published.json").read_text())["cases"]
TOROID = json.loads((PUBLISHED / "toroid.json").read_text())["cases"]

SECTIONS = [
    shapes.rectangle(40.0, 10.0),
    shapes.trapezoid(60.0, 40.0, 20.0),
    shapes.trapezoid(60.0, 2.0, 40.0),
    shapes.triangle(60.0, 40.0, "inner"),
    shapes.triangle(60.0, 40.0, "outer"),
    shapes.circle(40.0),
    shapes.ellipse(40.0, 30.0),
    shapes.tube(50.0, 30.0),
    shapes.tube(50.0, 46.0),
    shapes.tee(60.0, 50.0, 12.0, 12.0, "inner"),
    shapes.tee(60.0, 50.0, 12.0, 12.0, "outer"),
    shapes.i_section(80.0, 10.0, 50.0, 12.0, 40.0, 10.0),
    shapes.box(60.0, 40.0, 8.0, 6.0),
    shapes.polygon([(0.0, 10.0), (15.0, 20.0), (40.0, 5.0)]),
    shapes.widths([(0.0, 30.0), (10.0, 30.0), (10.0, 12.0), (50.0, 18.0)]),
    blend(shapes.circle(40.0), shapes.rectangle(50.0, 40.0), 0.4),
]
STEPPED = [section for section in SECTIONS if section.shape in ("T", "I", "box", "widths")]
each_section = pytest.mark.parametrize("section", SECTIONS, ids=lambda section: section.shape)


def radius(section: Section, ratio: float) -> float:
    """The centroid radius at which the mid-depth radius is ``ratio`` depths."""
    return section.centroid + (ratio - 0.5) * section.depth


def largest(*values: Array) -> float:
    return float(max(np.abs(value).max() for value in values))


# Closed forms and reference values


@pytest.mark.parametrize("ratio", [0.501, 0.51, 0.55, 0.75, 1.0, 2.0, 5.0, 20.0, 1e2, 1e3, 1e4, 1e6])
def test_a_rectangle_has_its_closed_forms(ratio: float) -> None:
    exact = RectangleBar(40.0 * (ratio - 0.5), 40.0 * (ratio + 0.5), 10.0)
    section, x = shapes.rectangle(40.0, 10.0), np.linspace(0.0, 40.0, 41)
    found, r = ideal.bar(section, exact.R, 0.3), exact.a + x
    # The closed form of N alone is a difference of two states R/h times as large: that is what it loses.
    for N, M, digits in ((0.0, 1.0, 1e-11), (1.0, exact.R, 1e-11), (1.0, 0.0, 1e-11 + 1e-14 * ratio)):
        hoop = exact.hoop(N, M, r)
        assert np.abs(found.hoop(N, M, x) - hoop).max() <= digits * largest(hoop)
        assert np.abs(found.radial(N, M, x) - exact.radial(N, M, r)).max() <= digits * largest(hoop)
    assert np.abs(found.shear(1.0, x) - exact.shear(1.0, r)).max() <= 1e-11 * largest(exact.shear(1.0, r))


@pytest.mark.parametrize("row", FOURTEEN_DIGITS, ids=lambda row: f"{row['case']}-{row['phi_deg']}-{row['r']}")
def test_stresses_equal_the_fourteen_digit_table(row: dict[str, Any]) -> None:
    section, R = shapes.rectangle(row["b"] - row["a"], row["t"]), 0.5 * (row["a"] + row["b"])
    phi = math.radians(row["phi_deg"])
    N, V = row["P"] * math.cos(phi), row["P"] * math.sin(phi)
    M = N * R + row["M_offset_Nmm"]
    found, x = ideal.bar(section, R, 0.3), np.array([float(row["r"] - row["a"])])
    scale = largest(np.array(found.fibres(row["P"], row["P"] * R + row["M_offset_Nmm"])))
    assert found.hoop(N, M, x)[0] == pytest.approx(float(row["st"]), abs=1e-12 * scale)
    assert found.radial(N, M, x)[0] == pytest.approx(float(row["sr"]), abs=1e-12 * scale)
    assert found.shear(V, x)[0] == pytest.approx(float(row["tau"]), abs=1e-12 * scale)


def fifty_digits(R: float, h: float, x: float) -> tuple[float, float]:
    """Hoop and radial stress of N = 1, M = 0 in a rectangular bar of unit width, from the closed forms as printed."""
    with localcontext() as context:
        context.prec = 50
        D = Decimal
        a, b = D(R) - D(h) / 2, D(R) + D(h) / 2
        r, log = a + D(x), (b / a).ln()
        N0 = (b * b - a * a) ** 2 - 4 * a * a * b * b * log * log
        K = (a * a + b * b) * log - (b * b - a * a)
        lift, spread = a * a * b * b / (r * r) * log, b * b * (r / b).ln() + a * a * (a / r).ln()
        bending = -4 * -D(R) / N0
        hoop = bending * (-lift + spread + b * b - a * a)
        hoop += (-3 * r + a * a * b * b / r**3 + (a * a + b * b) / r) / K
        radial = bending * (lift + spread) + (r * r - a * a) * (b * b - r * r) / r**3 / K
        return float(hoop), float(radial)


@pytest.mark.parametrize("ratio", [0.6, 3.0, 1e2, 1e4, 1e6])
def test_a_slender_bar_loses_no_digits(ratio: float) -> None:
    """N alone, about the centroid: hoop stress near N/A, radial stress smaller by the square of h/R, both to 1e-11."""
    found, x = ideal.bar(shapes.rectangle(40.0, 1.0), 40.0 * ratio, 0.3), np.linspace(0.0, 40.0, 9)
    hoop, radial = np.array([fifty_digits(40.0 * ratio, 40.0, float(at)) for at in x]).T
    assert found.hoop(1.0, 0.0, x) == pytest.approx(hoop, abs=1e-11 * largest(hoop))
    assert found.radial(1.0, 0.0, x) == pytest.approx(radial, abs=1e-11 * largest(radial))


@pytest.mark.parametrize(
    "row", [row for row in HANDBOOK if row["quantity"].startswith("exact")], ids=lambda row: row["source"]
)
def test_timoshenko_and_goodiers_exact_column(row: dict[str, Any]) -> None:
    ratio = float(row["source"].partition("b/a=")[2])
    inner, outer = ideal.bar(shapes.rectangle(ratio - 1.0, 1.0), 0.5 * (1.0 + ratio), 0.3).fibres(0.0, 1.0)
    found = inner if row["quantity"].endswith("r=a") else outer
    assert found == pytest.approx(row["computed"], rel=1e-11)
    assert found == pytest.approx(row["value"], abs=0.5 * 10.0 ** -len(str(row["value"]).partition(".")[2]))


def published_section(row: dict[str, Any]) -> Section:
    size = row["geometry"]
    if row["section"] == "circle":
        return shapes.circle(2.0 * size["radius"])
    if row["section"] == "rect":
        return shapes.rectangle(size["depth"], size["width"])
    if row["section"] == "trap":
        return shapes.trapezoid(size["depth"], size["inner_width"], size["outer_width"])
    table, x = [], 0.0
    for width, height in size["layers_b_h_from_inside"]:
        table += [(x, width), (x + height, width)]
        x += height
    return shapes.widths(table)


@pytest.mark.parametrize(
    "row", TOROID, ids=lambda row: f"{row['section']}-{row['R']:.4g}-{max(row['geometry'].values(), key=str)}"
)
def test_fibre_stress_equals_the_reference_membrane(row: dict[str, Any]) -> None:
    """To 0.1 % of the value: the table has six digits, from a computation refined once."""
    section = published_section(row)
    found = ideal.bar(section, row["R"], row["nu"])
    for state, N, M in (("n0", 0.0, 1.0), ("n1", 1.0, row["R"])):
        assert found.fibres(N, M) == pytest.approx((row[state]["mem_i"], row[state]["mem_o"]), rel=1e-3)


def test_a_circle_of_twice_its_radius_leaves_hand_theory_as_computed_elsewhere() -> None:
    """Four digits from a global polynomial of 14 terms: 1.0263 for a moment, 1.0641 for a force through the centre."""
    section = shapes.circle(2.0)
    found = ideal.bar(section, 2.0, 0.3)
    assert found.fibres(0.0, 1.0)[0] / winkler.fibres(section, 2.0, 0.0, 1.0)[0] == pytest.approx(1.0263, abs=1e-4)
    assert found.fibres(1.0, 2.0)[0] / winkler.fibres(section, 2.0, 1.0, 2.0)[0] == pytest.approx(1.0641, abs=1e-4)


# Equilibrium


@each_section
@pytest.mark.parametrize("ratio", [0.51, 0.6, 1.0, 3.0, 100.0, 1e4])
def test_stresses_add_up_to_their_resultants(section: Section, ratio: float) -> None:
    R = radius(section, ratio)
    found, (x, area) = ideal.bar(section, R, 0.3), section.quadrature(R)
    lever = section.centroid - x
    pull, bending = found.hoop(1.0, 0.0, x), found.hoop(0.0, 1.0, x)
    assert area @ pull == pytest.approx(1.0, rel=1e-10)
    assert area @ (pull * lever) == pytest.approx(0.0, abs=1e-10 * section.depth)
    assert area @ bending == pytest.approx(0.0, abs=1e-10 / section.depth)
    assert area @ (bending * lever) == pytest.approx(1.0, rel=1e-10)
    assert area @ found.shear(1.0, x) == pytest.approx(1.0, rel=1e-10)


@each_section
@pytest.mark.parametrize("ratio", [0.6, 3.0, 100.0])
def test_every_part_from_the_inner_face_is_in_equilibrium(section: Section, ratio: float) -> None:
    """r t sigma_r = int sigma_theta dA of a moment; r^2 t tau = int r sigma_theta dA of a force through the centre."""
    R = radius(section, ratio)
    found, x = ideal.bar(section, R, 0.3), np.linspace(0.0, section.depth, 12)[1:-1]
    r, width = R + x - section.centroid, section.width(x)
    lifted = section.integral_to(x, lambda at: found.hoop(0.0, 1.0, at), R)
    assert found.radial(0.0, 1.0, x) * r * width == pytest.approx(lifted, abs=1e-9 * largest(lifted))
    turned = section.integral_to(x, lambda at: found.hoop(1.0, R, at) * (R + at - section.centroid), R)
    # The hoop stress of that state is R/h times the shear, and leaves as much of its rounding.
    assert found.shear(1.0, x) * r * r * width == pytest.approx(turned, abs=1e-11 * max(ratio, 100.0) * largest(turned))
    assert found.radial(1.0, R, x) == pytest.approx(found.shear(1.0, x), abs=1e-12 * largest(found.shear(1.0, x)))


@each_section
def test_both_faces_are_free(section: Section) -> None:
    found = ideal.bar(section, radius(section, 0.8), 0.3)
    near = section.depth * np.array([0.0, 1e-6, 1.0 - 1e-6, 1.0])
    scale = largest(np.array(found.fibres(1.0, 50.0)))
    assert found.radial(1.0, 50.0, near)[[0, 3]].tolist() == found.shear(1.0, near)[[0, 3]].tolist() == [0.0, 0.0]
    assert largest(found.radial(1.0, 50.0, near), found.shear(1.0, near)) < 1e-4 * scale


# Compatibility


def strains(found: ideal.IdealBar, N: float, M: float, nu: float, x: Array) -> tuple[Array, Array]:
    """Radial and hoop strain, times E."""
    hoop, radial = found.hoop(N, M, x), found.radial(N, M, x)
    return radial - nu * hoop, hoop - nu * radial


@each_section
@pytest.mark.parametrize("ratio", [0.7, 2.0])
@pytest.mark.parametrize("nu", [0.0, 0.3])
def test_strains_are_compatible_within_every_layer(section: Section, ratio: float, nu: float) -> None:
    """A moment: d(r e_theta)/dr - e_r is the curvature, a constant. A force through the centre, whose displacements are
    u_r = U cos + D th sin and u_theta = V sin + D th cos: r gamma - r d(r e_theta)/dr + r (e_r + e_theta) is 2 D.

    Differentiated as Chebyshev series of degree 40 clear of the layer's ends, where round ones have no Taylor series.
    """
    R = radius(section, ratio)
    found = ideal.bar(section, R, nu)
    constants = []
    for layer in section.layers:
        clear = 0.05 * (layer.outer - layer.inner)
        domain = (layer.inner + clear, layer.outer - clear)
        x = np.linspace(*domain, 7)
        r = R + x - section.centroid

        def rate(N: float, M: float, x: Array = x, domain: tuple[float, float] = domain) -> Array:
            series = Chebyshev.interpolate(
                lambda at: (R + at - section.centroid) * strains(found, N, M, nu, at)[1], 40, domain
            )
            return np.asarray(series.deriv()(x))

        curvature = rate(0.0, 1.0) - strains(found, 0.0, 1.0, nu, x)[0]
        radial, hoop = strains(found, 1.0, R, nu, x)
        offset = r * (2.0 * (1.0 + nu) * found.shear(1.0, x) - rate(1.0, R) + radial + hoop)
        constants.append(np.stack([curvature, offset]))
    together = np.concatenate(constants, axis=1)
    spread = np.ptp(together, axis=1) / np.abs(together).max(axis=1)
    assert spread.max() < 1e-6


@pytest.mark.parametrize("section", STEPPED, ids=lambda section: section.shape)
@pytest.mark.parametrize("ratio", [0.6, 2.0, 1e3])
def test_a_step_of_the_width_keeps_the_hoop_strain_and_the_radial_flow(section: Section, ratio: float) -> None:
    R, nu = radius(section, ratio), 0.3
    found = ideal.bar(section, R, nu)
    beyond = np.array(section.breaks[1:-1])
    before = np.nextafter(beyond, 0.0)
    for N, M in ((0.0, 1.0), (1.0, R), (1.0, 0.0)):
        there, here = strains(found, N, M, nu, beyond)[1], strains(found, N, M, nu, before)[1]
        assert there == pytest.approx(here, abs=1e-11 * largest(np.array(found.fibres(N, M))))
        flows = [found.radial(N, M, x) * section.width(x) for x in (beyond, before)]
        assert flows[0] == pytest.approx(flows[1], rel=1e-11)
    jump = found.hoop(0.0, 1.0, beyond) - found.hoop(0.0, 1.0, before)
    assert jump == pytest.approx(nu * (found.radial(0.0, 1.0, beyond) - found.radial(0.0, 1.0, before)), rel=1e-8)


def test_poissons_ratio_moves_the_hoop_stress_only_where_the_width_varies() -> None:
    for section, moved in ((SECTIONS[0], 0.0), (SECTIONS[1], 1e-3), (shapes.circle(40.0), 5e-3)):
        R = radius(section, 0.8)
        first, second = (np.array(ideal.bar(section, R, nu).fibres(0.0, 1.0)) for nu in (0.0, 0.49))
        change = np.abs(second / first - 1.0).max()
        assert change < 1e-12 if moved == 0.0 else change > moved


# Convergence


@each_section
@pytest.mark.parametrize("ratio", [0.55, 1.5])
def test_convergence_is_geometric_in_the_degree(section: Section, ratio: float) -> None:
    """Fibre stress at five degrees against the accepted solution: the logarithm falls in a straight line."""
    R = radius(section, ratio)
    accepted = ideal.bar(section, R, 0.3)
    assert isinstance(accepted, ideal.CurvedBar)
    counts = [len(series.strain) - 1 for series in accepted.series]
    wanted = np.array([accepted.fibres(0.0, 1.0), accepted.fibres(1.0, 0.0)])
    shares, errors = np.array([0.3, 0.4, 0.5, 0.6, 0.7]), []
    for share in shares:
        coarse = ideal.bar_of_degree(section, R, 0.3, [round(share * count) for count in counts])
        found = np.array([coarse.fibres(0.0, 1.0), coarse.fibres(1.0, 0.0)])
        errors.append((np.abs(found - wanted) / np.abs(wanted).max(axis=1, keepdims=True)).max())
    logarithms = np.log10(errors)
    line = np.polyfit(shares, logarithms, 1)
    assert line[0] < -8.0
    assert errors[-1] < 1e-5
    assert np.abs(np.polyval(line, shares) - logarithms).max() < 1.2


@each_section
@pytest.mark.parametrize("ratio", [0.51, 2.0, 1e4])
def test_the_accepted_degree_is_enough(section: Section, ratio: float) -> None:
    """A quarter more changes no fibre by 1e-8 of the larger."""
    R = radius(section, ratio)
    accepted = ideal.bar(section, R, 0.3)
    assert isinstance(accepted, ideal.CurvedBar)
    finer = ideal.bar_of_degree(section, R, 0.3, [round(1.25 * len(series.strain)) for series in accepted.series])
    for N, M in ((0.0, 1.0), (1.0, 0.0)):
        wanted = np.array(finer.fibres(N, M))
        assert accepted.fibres(N, M) == pytest.approx(wanted, abs=1e-8 * largest(wanted))


# Limits and invariance


@each_section
def test_a_slender_bar_tends_to_the_straight_beam(section: Section) -> None:
    x = np.linspace(0.0, section.depth, 15)[1:-1]
    straight = ideal.bar(section, None, 0.3)
    far, farther = (ideal.bar(section, ratio * section.depth, 0.3) for ratio in (1e3, 1e5))
    for values in (
        [each.hoop(0.0, 1.0, x) for each in (straight, far, farther)],
        [each.hoop(1.0, 0.0, x) for each in (straight, far, farther)],
        [each.shear(1.0, x) for each in (straight, far, farther)],
    ):
        wanted, found, better = values
        assert found == pytest.approx(wanted, abs=5e-3 * largest(wanted))
        assert better == pytest.approx(wanted, abs=5e-5 * largest(wanted))


@each_section
def test_a_straight_piece_has_hand_theory(section: Section) -> None:
    x = np.linspace(0.0, section.depth, 7)
    found = ideal.bar(section, None, 0.3)
    assert found.fibres(3.0, -20.0) == winkler.fibres(section, None, 3.0, -20.0)
    assert found.hoop(3.0, -20.0, x).tolist() == winkler.hoop(section, None, 3.0, -20.0, x).tolist()
    assert found.shear(2.0, x).tolist() == winkler.shear(section, None, 2.0, x).tolist()
    assert not found.radial(3.0, -20.0, x).any()


@each_section
@pytest.mark.parametrize("unit", [1e-3, 25.4])
def test_the_unit_of_length_does_not_matter(section: Section, unit: float) -> None:
    R, x = radius(section, 0.9), np.linspace(0.0, section.depth, 7)
    found, scaled = ideal.bar(section, R, 0.3), ideal.bar(rescaled(section, unit), R * unit, 0.3)
    N, V, M = 3.0, 2.0, -40.0
    for small, large in (
        (scaled.hoop(N, M * unit, x * unit), found.hoop(N, M, x)),
        (scaled.radial(N, M * unit, x * unit), found.radial(N, M, x)),
        (scaled.shear(V, x * unit), found.shear(V, x)),
    ):
        assert small * unit**2 == pytest.approx(large, abs=1e-8 * largest(large))


@given(
    inner=st.floats(1.0, 40.0),
    web=st.floats(1.0, 40.0),
    outer=st.floats(1.0, 40.0),
    thickness=st.tuples(st.floats(1.0, 20.0), st.floats(1.0, 20.0)),
    inner_radius=st.floats(1.0, 1e4),
    nu=st.floats(0.0, 0.499),
)
@settings(max_examples=40, deadline=None)
def test_any_stepped_section_is_in_equilibrium(
    inner: float, web: float, outer: float, thickness: tuple[float, float], inner_radius: float, nu: float
) -> None:
    first, last = thickness
    table = [(0.0, inner), (first, inner), (first, web), (60.0 - last, web), (60.0 - last, outer), (60.0, outer)]
    section = shapes.widths(table)
    R = inner_radius + section.centroid
    found, (x, area) = ideal.bar(section, R, nu), section.quadrature(R)
    sigma = found.hoop(2.0, 30.0, x)
    assert area @ sigma == pytest.approx(2.0, rel=1e-10)
    assert area @ (sigma * (section.centroid - x)) == pytest.approx(30.0, rel=1e-10, abs=1e-9)
    assert area @ found.shear(1.0, x) == pytest.approx(1.0, rel=1e-10)


@pytest.mark.parametrize("inner_radius", [0.0, -1.0])
def test_an_inner_face_at_the_centre_of_curvature_is_refused(inner_radius: float) -> None:
    section = shapes.rectangle(40.0, 10.0)
    with pytest.raises(ValueError, match="reaches the centre of curvature"):
        ideal.bar(section, inner_radius + section.centroid, 0.3)


# The mesh


@pytest.mark.parametrize(
    ("section", "digits"),
    [
        (shapes.tee(60.0, 50.0, 12.0, 12.0, "inner"), 1e-7),
        (shapes.box(60.0, 40.0, 8.0, 6.0), 1e-7),
        (shapes.tube(50.0, 30.0), 1e-7),
        # Where the width vanishes the elements converge more slowly.
        (shapes.circle(40.0), 1e-6),
        (shapes.triangle(60.0, 40.0, "outer"), 1e-5),
    ],
    ids=lambda value: value.shape if isinstance(value, Section) else "",
)
def test_the_membrane_under_end_loads_is_the_ideal_bar(section: Section, digits: float) -> None:
    """An arc under N, V and M on its ends, two-dimensional elements against one dimension, away from the ends."""
    member = bar(section, 0.5 * section.depth, 150.0)
    R = 0.5 * section.depth + section.centroid
    case = loading(member, "free", "free", pulled(member, (300.0, -200.0), 4e3))
    at = stations((0, 0.25), (0, 0.5), (0, 0.7))
    exact = ideal.bar(section, R, STEEL.nu)
    wanted = np.array([exact.fibres(*np.array(case.resultants(0, station.share))[[0, 2]]) for station in at])
    errors = [np.abs(fibres(solved(case, at, degree), at) - wanted).max() / largest(wanted) for degree in (4, 6, 8)]
    assert errors[-1] < digits
    assert all(after < 0.2 * before for before, after in pairwise(errors))
