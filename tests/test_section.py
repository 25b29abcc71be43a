"""Sections against closed forms, 17-digit reference values and an independent contour integral."""

from __future__ import annotations

import json
import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from polygon_rule import PolygonRule, ellipse_polygon, mirrored
from rescaling import rescaled

from intrados.theory import shapes
from intrados.theory.section import Section, SectionError, blend

SEVENTEEN_DIGITS = json.loads((Path(__file__).parent / "published" / "sections.json").read_text())["cases"]
HALF_POLYGON = [(0.0, 25.0), (10.0, 30.0), (60.0, 12.0), (70.0, 0.0)]

STRAIGHT_SIDED: dict[str, tuple[Section, PolygonRule]] = {
    "rectangle": (shapes.rectangle(40.0, 20.0), PolygonRule((mirrored([(0, 10), (40, 10)]),))),
    "trapezoid": (shapes.trapezoid(60.0, 40.0, 15.0), PolygonRule((mirrored([(0, 20), (60, 7.5)]),))),
    "triangle, base inside": (shapes.triangle(60.0, 45.0, "inner"), PolygonRule((mirrored([(0, 22.5), (60, 0)]),))),
    "triangle, base outside": (shapes.triangle(60.0, 45.0, "outer"), PolygonRule((mirrored([(0, 0), (60, 22.5)]),))),
    "T, flange inside": (
        shapes.tee(60.0, 60.0, 12.0, 10.0, "inner"),
        PolygonRule((mirrored([(0, 30), (12, 30), (12, 5), (60, 5)]),)),
    ),
    "T, flange outside": (
        shapes.tee(60.0, 60.0, 12.0, 10.0, "outer"),
        PolygonRule((mirrored([(0, 5), (48, 5), (48, 30), (60, 30)]),)),
    ),
    "I": (
        shapes.i_section(62.0, 10.0, 60.0, 12.0, 40.0, 10.0),
        PolygonRule((mirrored([(0, 30), (12, 30), (12, 5), (52, 5), (52, 20), (62, 20)]),)),
    ),
    "box": (
        shapes.box(60.0, 50.0, 8.0, 6.0),
        PolygonRule((mirrored([(0, 25), (60, 25)]), mirrored([(8, 19), (52, 19)]))),
    ),
    "polygon": (shapes.polygon(HALF_POLYGON), PolygonRule((mirrored(HALF_POLYGON),))),
    "widths": (
        shapes.widths([(0.0, 30.0), (5.0, 30.0), (5.0, 12.0), (40.0, 20.0)]),
        PolygonRule((mirrored([(0, 15), (5, 15), (5, 6), (40, 10)]),)),
    ),
}

ROUND: dict[str, tuple[Section, Callable[[int], PolygonRule]]] = {
    "circle": (shapes.circle(40.0), lambda sides: PolygonRule((ellipse_polygon(20, 20, 20, sides),))),
    "ellipse": (shapes.ellipse(60.0, 30.0), lambda sides: PolygonRule((ellipse_polygon(30, 30, 15, sides),))),
    "tube": (
        shapes.tube(40.0, 28.0),
        lambda sides: PolygonRule((ellipse_polygon(20, 20, 20, sides), ellipse_polygon(20, 14, 14, sides))),
    ),
}

EVERY_SECTION = [section for section, _ in [*STRAIGHT_SIDED.values(), *ROUND.values()]]

# R in depths beyond the centroid, from an inner radius of a fiftieth of the depth to all but straight.
CURVATURES = st.floats(-2.0, 6.0).map(lambda power: 10.0**power)


def section_of(shape: str, params: dict[str, Any]) -> Section:
    """The product's section for a row of the reference table."""
    layers = params.get("layers_b_h_from_inside", [])
    depth = sum(height for _, height in layers)
    match shape:
        case "rectangle":
            return shapes.rectangle(params["h"], params["b"])
        case "trapezoid":
            return shapes.trapezoid(params["h"], params["bi"], params["bo"])
        case "triangle_base_in":
            return shapes.triangle(params["h"], params["bi"], "inner")
        case "triangle_apex_in":
            return shapes.triangle(params["h"], params["bo"], "outer")
        case "circle":
            return shapes.circle(2.0 * params["c"])
        case "ellipse":
            return shapes.ellipse(2.0 * params["a_radial"], 2.0 * params["b_axial"])
        case "hollow_circle":
            return shapes.tube(2.0 * params["co"], 2.0 * params["ci"])
        case "T":
            (flange, thickness), (web, _) = layers
            return shapes.tee(depth, flange, thickness, web, "inner")
        case "I_unequal":
            (inner, inner_thickness), (web, _), (outer, outer_thickness) = layers
            return shapes.i_section(depth, web, inner, inner_thickness, outer, outer_thickness)
        case "box":
            (width, wall), (webs, _), _ = layers
            return shapes.box(depth, width, wall, 0.5 * webs)
        case "polygon":
            return shapes.polygon(sorted((x, z) for x, z in params["yz_local"] if z > 0.0 or x == 70.0))
    raise AssertionError(shape)


@pytest.mark.parametrize("row", SEVENTEEN_DIGITS, ids=lambda row: f"{row['shape']}-{row['ri']:g}")
def test_ring_integrals_equal_the_seventeen_digit_table(row: dict[str, Any]) -> None:
    section = section_of(row["shape"], row["params"])
    ring = section.ring(float(row["R"]))
    assert section.area == pytest.approx(float(row["A"]), rel=1e-12)
    assert row["ri"] + section.centroid == pytest.approx(float(row["R"]), rel=1e-12)
    assert ring.J == pytest.approx(float(row["J"]), rel=1e-12)
    assert ring.rn == pytest.approx(float(row["rn"]), rel=1e-12)
    assert ring.e == pytest.approx(float(row["e"]), rel=1e-12)


@pytest.mark.parametrize("name", STRAIGHT_SIDED)
@pytest.mark.parametrize("ratio", [0.02, 0.2, 1.0, 10.0, 1e3, 1e6])
def test_straight_sided_sections_equal_the_polygon_rule(name: str, ratio: float) -> None:
    section, rule = STRAIGHT_SIDED[name]
    R = section.centroid + ratio * section.depth
    assert section.area == pytest.approx(rule.area, rel=1e-13)
    assert section.centroid == pytest.approx(rule.centroid, rel=1e-13)
    assert section.inertia == pytest.approx(rule.inertia, rel=1e-13)
    ring = section.ring(R)
    assert ring.K2 == pytest.approx(rule.K2(R), rel=1e-12)
    assert ring.e == pytest.approx(rule.e(R), rel=1e-12)
    assert ring.J == pytest.approx(rule.J(R), rel=1e-12)


@pytest.mark.parametrize("name", ROUND)
@pytest.mark.parametrize("ratio", [0.2, 1.0, 1e3])
def test_round_sections_are_the_limit_of_polygons_at_second_order(name: str, ratio: float) -> None:
    section, polygons = ROUND[name]
    R = section.centroid + ratio * section.depth
    exact = section.ring(R).e
    coarse, middle, fine = (polygons(sides).e(R) for sides in (64, 128, 256))
    assert math.log2((coarse - exact) / (middle - exact)) == pytest.approx(2.0, abs=0.02)
    assert math.log2((middle - exact) / (fine - exact)) == pytest.approx(2.0, abs=0.005)
    # Richardson twice: what is left falls with the sixth power of the number of sides.
    once = (4.0 * middle - coarse) / 3.0, (4.0 * fine - middle) / 3.0
    assert (16.0 * once[1] - once[0]) / 15.0 == pytest.approx(exact, rel=1e-9)


@given(curvature=CURVATURES)
@settings(deadline=None, max_examples=60)
def test_rectangle_has_the_inverse_hyperbolic_tangent_form(curvature: float) -> None:
    section = shapes.rectangle(40.0, 20.0)
    R = 20.0 + 40.0 * curvature
    u = 20.0 / R
    excess = sum(u**n / n for n in range(3, 81, 2)) if u < 0.5 else math.atanh(u) - u
    K2 = 2.0 * 20.0 * R**2 * excess
    assert section.ring(R).e == pytest.approx(K2 * R / (800.0 * R + K2), rel=1e-12)


@given(curvature=CURVATURES, width=st.floats(5.0, 200.0))
@settings(deadline=None, max_examples=60)
def test_ellipse_has_the_square_root_form_whatever_its_width(curvature: float, width: float) -> None:
    section = shapes.ellipse(40.0, width)
    R = 20.0 + 40.0 * curvature
    s = math.sqrt((R - 20.0) * (R + 20.0))
    ring = section.ring(R)
    assert ring.rn == pytest.approx(0.5 * (R + s), rel=1e-12)
    assert ring.e == pytest.approx(400.0 / (2.0 * (R + s)), rel=1e-12)


@given(curvature=CURVATURES, share=st.floats(0.05, 0.99))
@settings(deadline=None, max_examples=60)
def test_tube_has_the_two_square_roots_form(curvature: float, share: float) -> None:
    outer, inner = 20.0, 20.0 * share
    R = outer + 40.0 * curvature
    s_o, s_i = (math.sqrt((R - c) * (R + c)) for c in (outer, inner))
    ring = shapes.tube(40.0, 40.0 * share).ring(R)
    assert ring.rn == pytest.approx(0.5 * (s_o + s_i), rel=1e-12)
    assert ring.e == pytest.approx(0.5 * (outer**2 / (R + s_o) + inner**2 / (R + s_i)), rel=1e-12)
    # J = 2 pi (s_i - s_o) with the difference multiplied out
    assert ring.J == pytest.approx(2.0 * math.pi * (outer**2 - inner**2) / (s_i + s_o), rel=1e-12)


def test_trapezoid_has_the_logarithm_form() -> None:
    # Where the bar is thick the common handbook form keeps its digits.
    ri, ro, bi, bo = 15.0, 75.0, 40.0, 15.0
    section = shapes.trapezoid(60.0, bi, bo)
    J = (bi * ro - bo * ri) / 60.0 * math.log(ro / ri) - (bi - bo)
    assert section.ring(ri + section.centroid).J == pytest.approx(J, rel=1e-13)


def t_properties(flange: float, thickness: float, web: float, depth: float) -> tuple[float, float, float]:
    """Area, centroid from the flange's face and inertia of a T, by the parallel-axis theorem."""
    a1, a2 = flange * thickness, web * (depth - thickness)
    x1, x2 = 0.5 * thickness, 0.5 * (depth + thickness)
    centroid = (a1 * x1 + a2 * x2) / (a1 + a2)
    inertia = flange * thickness**3 / 12 + a1 * (x1 - centroid) ** 2
    inertia += web * (depth - thickness) ** 3 / 12 + a2 * (x2 - centroid) ** 2
    return a1 + a2, centroid, inertia


T_AREA, T_CENTROID, T_INERTIA = t_properties(60.0, 12.0, 10.0, 60.0)
HANDBOOK = [
    (shapes.rectangle(40.0, 20.0), 800.0, 20.0, 20.0 * 40.0**3 / 12),
    (
        shapes.trapezoid(60.0, 40.0, 15.0),
        60.0 * 55.0 / 2,
        60.0 * (40.0 + 2 * 15.0) / (3 * 55.0),
        60.0**3 * (40.0**2 + 4 * 40.0 * 15.0 + 15.0**2) / (36 * 55.0),
    ),
    (shapes.triangle(60.0, 45.0, "inner"), 1350.0, 20.0, 45.0 * 60.0**3 / 36),
    (shapes.triangle(60.0, 45.0, "outer"), 1350.0, 40.0, 45.0 * 60.0**3 / 36),
    (shapes.circle(40.0), math.pi * 400.0, 20.0, math.pi * 40.0**4 / 64),
    (shapes.ellipse(60.0, 30.0), math.pi * 450.0, 30.0, math.pi * 30.0 * 60.0**3 / 64),
    (shapes.tube(40.0, 28.0), math.pi * (400.0 - 196.0), 20.0, math.pi * (40.0**4 - 28.0**4) / 64),
    (shapes.tee(60.0, 60.0, 12.0, 10.0, "inner"), T_AREA, T_CENTROID, T_INERTIA),
    (shapes.tee(60.0, 60.0, 12.0, 10.0, "outer"), T_AREA, 60.0 - T_CENTROID, T_INERTIA),
    (
        shapes.i_section(60.0, 10.0, 50.0, 8.0, 50.0, 8.0),
        60.0 * 50.0 - 44.0 * 40.0,
        30.0,
        (50.0 * 60.0**3 - 40.0 * 44.0**3) / 12,
    ),
    (shapes.box(60.0, 50.0, 8.0, 6.0), 1328.0, 30.0, (50.0 * 60.0**3 - 38.0 * 44.0**3) / 12),
]


@pytest.mark.parametrize(("section", "area", "centroid", "inertia"), HANDBOOK, ids=[row[0].shape for row in HANDBOOK])
def test_area_centroid_and_inertia_equal_the_handbook_forms(
    section: Section, area: float, centroid: float, inertia: float
) -> None:
    assert section.area == pytest.approx(area, rel=1e-13)
    assert section.centroid == pytest.approx(centroid, rel=1e-13)
    assert section.inertia == pytest.approx(inertia, rel=1e-13)


def test_box_and_i_of_the_same_widths_are_one_section_to_the_theory() -> None:
    box, i = shapes.box(60.0, 50.0, 8.0, 6.0), shapes.i_section(60.0, 12.0, 50.0, 8.0, 50.0, 8.0)
    assert box.ring(45.0) == i.ring(45.0)


def test_width_of_a_circle_is_its_chord() -> None:
    x = np.linspace(0.0, 40.0, 21)
    assert shapes.circle(40.0).width(x) == pytest.approx(2.0 * np.sqrt(400.0 - (x - 20.0) ** 2), abs=1e-12)


def test_width_of_a_tube_leaves_the_bore_out() -> None:
    chord = 2.0 * (math.sqrt(400.0 - 25.0) - math.sqrt(196.0 - 25.0))
    assert float(shapes.tube(40.0, 28.0).width(15.0)) == pytest.approx(chord, rel=1e-14)


def test_at_a_step_the_layer_beyond_counts() -> None:
    assert shapes.tee(60.0, 60.0, 12.0, 10.0, "inner").width(np.array([11.999, 12.0, 60.0])).tolist() == [60, 10, 10]


@pytest.mark.parametrize("section", EVERY_SECTION, ids=lambda section: section.shape)
def test_face_widths_are_the_width_at_the_faces(section: Section) -> None:
    assert section.inner_width == float(section.width(0.0))
    assert section.outer_width == float(section.width(section.depth))


def test_widest_is_the_largest_width() -> None:
    largest = [40.0, 30.0, 2.0 * math.sqrt(20.0**2 - 14.0**2), 60.0, 60.0, 60.0]
    built = [
        shapes.circle(40.0),
        shapes.ellipse(60.0, 30.0),
        shapes.tube(40.0, 28.0),
        shapes.tee(60.0, 60.0, 12.0, 10.0, "outer"),
        shapes.i_section(62.0, 10.0, 60.0, 12.0, 40.0, 10.0),
        shapes.polygon(HALF_POLYGON),
    ]
    assert [section.widest for section in built] == pytest.approx(largest, rel=1e-12)


def test_symmetry_is_about_mid_depth() -> None:
    symmetric = {section.shape for section in EVERY_SECTION if section.is_symmetric}
    assert symmetric == {"rectangle", "circle", "ellipse", "tube", "box"}
    assert shapes.i_section(60.0, 10.0, 50.0, 8.0, 50.0, 8.0).is_symmetric


def test_only_the_rectangle_and_its_likes_have_constant_width() -> None:
    assert {section.shape for section in EVERY_SECTION if section.has_constant_width} == {"rectangle"}
    assert shapes.trapezoid(60.0, 20.0, 20.0).has_constant_width


def test_area_up_to_a_depth_of_a_circle_is_a_segment() -> None:
    half_angle = np.array([0.3, 1.0, 2.0, math.pi])
    segment = 400.0 * (half_angle - np.sin(half_angle) * np.cos(half_angle))
    to = 20.0 * (1.0 - np.cos(half_angle))
    assert shapes.circle(40.0).integral_to(to, np.ones_like) == pytest.approx(segment, rel=1e-12)


def test_an_integral_up_to_a_depth_passes_steps_and_keeps_terms_in_one_over_r() -> None:
    section = shapes.tee(60.0, 60.0, 12.0, 10.0, "inner")
    R = section.centroid + 1.0
    x = np.array([0.0, 6.0, 12.0, 13.0, 60.0])
    log = [0.0, 60 * math.log(7), 60 * math.log(13), 60 * math.log(13) + 10 * math.log(14 / 13)]
    found = section.integral_to(x, lambda points: 1.0 / (1.0 + points), R)
    assert found == pytest.approx([*log, section.ring(R).J], rel=1e-12)


def test_an_integral_may_end_a_hair_before_a_round_face() -> None:
    section = shapes.circle(40.0)
    assert section.integral_to(np.array([40.0 * (1.0 - 1e-12)]), np.ones_like)[0] == pytest.approx(section.area)


@pytest.mark.parametrize("section", EVERY_SECTION, ids=lambda section: section.shape)
@pytest.mark.parametrize("unit", [1e-3, 1.0 / 25.4])
def test_properties_scale_with_the_unit_of_length(section: Section, unit: float) -> None:
    scaled = rescaled(section, unit)
    R = section.centroid + 0.7 * section.depth
    assert scaled.area == pytest.approx(section.area * unit**2, rel=1e-13)
    assert scaled.centroid == pytest.approx(section.centroid * unit, rel=1e-13)
    assert scaled.inertia == pytest.approx(section.inertia * unit**4, rel=1e-13)
    assert scaled.ring(R * unit).e == pytest.approx(section.ring(R).e * unit, rel=1e-12)


@pytest.mark.parametrize("section", EVERY_SECTION, ids=lambda section: section.shape)
def test_e_tends_to_inertia_over_area_and_radius(section: Section) -> None:
    R = 1e6 * section.depth
    assert section.ring(R).e == pytest.approx(section.inertia / (section.area * R), rel=2e-6)


@pytest.mark.parametrize("R", [20.0, 19.0, 0.0, -50.0, math.nan])
def test_a_face_at_the_centre_of_curvature_is_refused(R: float) -> None:
    with pytest.raises(ValueError, match="centre of curvature"):
        shapes.circle(40.0).ring(R)


TAPERS = [
    (shapes.rectangle(60.0, 30.0), shapes.rectangle(40.0, 20.0)),
    (shapes.trapezoid(60.0, 40.0, 20.0), shapes.circle(30.0)),
    (shapes.tube(50.0, 30.0), shapes.circle(50.0)),
    (shapes.tee(60.0, 60.0, 12.0, 10.0, "inner"), shapes.box(40.0, 50.0, 8.0, 6.0)),
]


@pytest.mark.parametrize(("first", "second"), TAPERS)
def test_a_taper_begins_and_ends_with_its_sections(first: Section, second: Section) -> None:
    assert blend(first, second, 0.0) is first
    assert blend(first, second, 1.0) is second
    for share, end in ((1e-9, first), (1.0 - 1e-9, second)):
        assert blend(first, second, share).ring(90.0).e == pytest.approx(end.ring(90.0).e, rel=1e-7)


@pytest.mark.parametrize(("first", "second"), TAPERS)
@pytest.mark.parametrize("share", [0.25, 0.6])
def test_a_taper_blends_widths_at_the_same_share_of_depth(first: Section, second: Section, share: float) -> None:
    middle = blend(first, second, share)
    assert middle.depth == pytest.approx((1 - share) * first.depth + share * second.depth, rel=1e-14)
    at = np.linspace(0.011, 0.989, 50)
    mean = (1 - share) * first.width(at * first.depth) + share * second.width(at * second.depth)
    assert middle.width(at * middle.depth) == pytest.approx(mean, rel=1e-12)


@given(share=st.floats(0.0, 1.0))
@settings(deadline=None, max_examples=30)
def test_area_goes_linearly_between_sections_of_one_depth(share: float) -> None:
    first, second = shapes.tube(50.0, 30.0), shapes.tee(50.0, 60.0, 12.0, 10.0, "outer")
    mean = (1 - share) * first.area + share * second.area
    assert blend(first, second, share).area == pytest.approx(mean, rel=1e-12)


IMPOSSIBLE: list[tuple[str, str, Callable[[], Section]]] = [
    ("bore", "less than the diameter 40", lambda: shapes.tube(40.0, 40.0)),
    ("flange_thickness", "less than the depth 60", lambda: shapes.tee(60.0, 60.0, 60.0, 10.0, "inner")),
    ("web_thickness", "not exceed the flange width 60", lambda: shapes.tee(60.0, 60.0, 12.0, 61.0, "inner")),
    ("depth", "exceed both flanges together, 60", lambda: shapes.i_section(60.0, 8.0, 50.0, 30.0, 50.0, 30.0)),
    ("web_thickness", "the flange width 40", lambda: shapes.i_section(60.0, 45.0, 50.0, 8.0, 40.0, 8.0)),
    ("flange_thickness", "less than half the depth 60", lambda: shapes.box(60.0, 50.0, 30.0, 6.0)),
    ("web_thickness", "less than half the width 50", lambda: shapes.box(60.0, 50.0, 8.0, 25.0)),
    ("points", "at least two rows", lambda: shapes.polygon([(0.0, 5.0)])),
    ("points", "start at the inner face", lambda: shapes.polygon([(1.0, 5.0), (9.0, 5.0)])),
    ("table", "row 3: distances must not decrease", lambda: shapes.widths([(0.0, 5.0), (9.0, 5.0), (8.0, 5.0)])),
    ("table", "no negative width", lambda: shapes.widths([(0.0, 5.0), (9.0, -5.0)])),
    (
        "table",
        "at most two rows at one distance",
        lambda: shapes.widths([(0.0, 5.0), (4.0, 5.0), (4.0, 6.0), (4.0, 7.0), (9.0, 5.0)]),
    ),
    ("table", "one row only at either face", lambda: shapes.widths([(0.0, 5.0), (0.0, 6.0), (9.0, 5.0)])),
    ("table", "one row only at either face", lambda: shapes.widths([(0.0, 5.0), (9.0, 6.0), (9.0, 5.0)])),
    ("points", "row 2: the width must not be zero", lambda: shapes.polygon([(0.0, 5.0), (4.0, 0.0), (9.0, 5.0)])),
    ("table", "a width somewhere", lambda: shapes.widths([(0.0, 0.0), (9.0, 0.0)])),
]


@pytest.mark.parametrize(("key", "text", "build"), IMPOSSIBLE)
def test_an_impossible_section_is_refused_by_name(key: str, text: str, build: Callable[[], Section]) -> None:
    with pytest.raises(SectionError, match=text) as refused:
        build()
    assert refused.value.key == key
