"""The figures: nothing overlaps or leaves the page, axes have units, black and white suffices, bytes repeat."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from dataclasses import replace
from itertools import combinations
from pathlib import Path

import matplotlib as mpl
import numpy as np
import pytest
import sample
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.colors import to_rgb
from matplotlib.figure import Figure
from matplotlib.image import imread
from matplotlib.patches import FancyArrowPatch, Polygon, Rectangle
from matplotlib.text import Text
from matplotlib.transforms import Bbox

from intrados.compare.draw import save_all, style
from intrados.compare.draw.along import draw_along
from intrados.compare.draw.budget import draw_budget
from intrados.compare.draw.member import draw_member
from intrados.compare.draw.profile import choose, draw_profile
from intrados.compare.draw.section import draw_section
from intrados.compare.results import CaseResult, Results
from intrados.compare.units import Units

Draw = Callable[[Results, CaseResult], Figure]
DRAWERS: list[Draw] = [draw_member, draw_along, draw_profile, draw_budget]


def large_numbers() -> Results:
    """The hook in metres, newtons and pascals, with a moment at its load."""
    results = sample.hook()
    case = results.cases[0]
    along = case.along
    curves = [
        replace(c, hand=tuple(v * 1e6 for v in c.hand), fe=tuple(v * 1e6 for v in c.fe))
        for c in (along.inner, along.outer)
    ]
    along = replace(along, inner=curves[0], outer=curves[1])
    field = replace(case.field, hoop=tuple(tuple(v * 1e6 for v in row) for row in case.field.hoop))
    loads = tuple(replace(load, moment=-1.5e6) for load in case.loads)
    return replace(results, units=Units("m", "N", "Pa"), cases=(replace(case, along=along, field=field, loads=loads),))


def unloaded() -> Results:
    """No stress at all."""
    return sample.assemble(sample.HOOK, sample.case(sample.HOOK, (replace(sample.SLING, force=(0.0, 0.0)),)))


SAMPLES = [
    sample.hook,
    sample.hook_cases,
    sample.c_frame,
    sample.bracket,
    sample.crowded,
    large_numbers,
    unloaded,
]
every_figure = pytest.mark.parametrize("draw", DRAWERS)
every_sample = pytest.mark.parametrize("make", SAMPLES)


@pytest.fixture(autouse=True)
def in_house_style() -> Iterator[None]:
    with style.house_style():
        yield


def drawn(draw: Draw, results: Results) -> Figure:
    figure = draw(results, results.cases[0])
    figure.canvas.draw()
    return figure


def texts(figure: Figure) -> list[tuple[str, Bbox]]:
    """Everything that can be read, with its box in pixels; tick labels out of view are not drawn."""
    assert isinstance(figure.canvas, FigureCanvasAgg)
    hidden: set[int] = set()
    for axes in figure.axes:
        for axis in (axes.xaxis, axes.yaxis):
            low, high = sorted(axis.get_view_interval())
            slack = 1e-9 * (high - low)
            for tick in [*axis.get_major_ticks(), *axis.get_minor_ticks()]:
                if not low - slack <= tick.get_loc() <= high + slack:
                    hidden |= {id(tick.label1), id(tick.label2)}
    renderer = figure.canvas.get_renderer()
    found = []
    for text in figure.findobj(Text):
        assert isinstance(text, Text)
        if text.get_visible() and text.get_text().strip() and id(text) not in hidden:
            found.append((text.get_text(), Text.get_window_extent(text, renderer)))
    return found


@every_sample
@every_figure
def test_no_text_overlaps_another_or_leaves_the_figure(draw: Draw, make: Callable[[], Results]) -> None:
    figure = drawn(draw, make())
    found = texts(figure)
    assert len(found) > 8
    for (one, box), (other, second) in combinations(found, 2):
        wide = min(box.x1, second.x1) - max(box.x0, second.x0)
        tall = min(box.y1, second.y1) - max(box.y0, second.y0)
        assert min(wide, tall) <= 0.5, f"{one!r} and {other!r}"
    page = figure.bbox
    for text, box in found:
        assert box.x0 >= page.x0 and box.x1 <= page.x1 and box.y0 >= page.y0 and box.y1 <= page.y1, text


@every_sample
@every_figure
def test_every_axis_with_numbers_has_a_unit(draw: Draw, make: Callable[[], Results]) -> None:
    figure = drawn(draw, make())
    for axes in figure.axes:
        for axis in (axes.xaxis, axes.yaxis):
            numbers = [label for label in axis.get_ticklabels() if label.get_visible() and label.get_text()]
            shared = axis is axes.xaxis and any(
                other.xaxis.get_label_text() and np.allclose(other.get_xlim(), axes.get_xlim()) for other in figure.axes
            )
            assert not numbers or shared or re.search(r"\[.+\]", axis.get_label_text())


@every_sample
def test_names_of_stations_and_loads_stay_off_the_member(make: Callable[[], Results]) -> None:
    results = make()
    figure = drawn(draw_member, results)
    axes = figure.axes[0]
    outlines = [p.get_path().transformed(p.get_transform()) for p in axes.patches if isinstance(p, Polygon)]
    names = {style.wrapped(station.name, 20) for station in results.cases[0].stations}
    named = [(text, box) for text, box in texts(figure) if text in names or ("\n" in text and "N" in text)]
    assert named
    for text, box in named:
        assert not any(outline.intersects_bbox(box, filled=True) for outline in outlines), text


@every_sample
def test_governing_station_and_loads_are_always_named(make: Callable[[], Results]) -> None:
    results = make()
    case = results.cases[0]
    on_member = [text for text, _ in texts(drawn(draw_member, results))]
    on_along = [text for text, _ in texts(drawn(draw_along, results))]
    if case.governing:
        assert style.wrapped(case.governing.station, 20) in on_member
        assert style.wrapped(case.governing.station, 22) in on_along
    for load in case.loads:
        assert any(text.startswith(style.wrapped(load.name, 22)) for text in on_member)
        assert load.name in on_along


def test_stations_without_a_name_are_counted() -> None:
    results = sample.crowded()
    found = [text for text, _ in texts(drawn(draw_member, results))]
    missing = sum(style.wrapped(station.name, 20) not in found for station in results.cases[0].stations)
    assert missing > 0 and f"station ({missing} without name)" in found


def test_equal_scales_of_the_member() -> None:
    for make in SAMPLES:
        axes = drawn(draw_member, make()).axes[0]
        ends = axes.transData.transform([(0.0, 0.0), (1.0, 0.0), (0.0, 1.0)])
        assert ends[1, 0] - ends[0, 0] == pytest.approx(ends[2, 1] - ends[0, 1], rel=1e-9)


def test_a_station_is_drawn_where_it_is() -> None:
    results = sample.hook()
    axes = drawn(draw_member, results).axes[0]
    segments = [np.asarray(line.get_xydata()) for line in axes.lines if line.get_linewidth() in (0.8, 2.0)]
    for station in results.cases[0].stations:
        middles = [
            segment[0] + (segment[1] - segment[0]) * station.depth / 2 / np.hypot(*(segment[1] - segment[0]))
            for segment in segments
        ]
        assert min(np.hypot(*(middle - (station.x, station.y))) for middle in middles) < 0.05 * station.depth


def test_a_pressing_load_ends_on_the_member_and_a_pulling_one_starts_there() -> None:
    results = sample.hook_cases()
    arrows = [p for p in drawn(draw_member, results).axes[0].patches if isinstance(p, FancyArrowPatch)]
    sling, side = results.cases[0].loads
    heads = [(arrow._posA_posB[0], arrow._posA_posB[1]) for arrow in arrows]
    assert np.allclose(heads[0][1], (sling.x, sling.y)) and np.allclose(heads[1][0], (side.x, side.y))
    for (tail, head), load in zip(heads, (sling, side), strict=True):
        way = np.subtract(head, tail)
        assert np.allclose(way / np.hypot(*way), np.array(load.force) / np.hypot(*load.force), atol=1e-6)


def luminance(colour: object) -> float:
    red, green, blue = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in to_rgb(colour))
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


@pytest.mark.parametrize("draw", [draw_along, draw_profile])
def test_hand_and_fe_differ_in_dash_and_in_grey(draw: Draw) -> None:
    figure = drawn(draw, sample.hook())
    lines = [line for axes in figure.axes for line in axes.lines if line.get_gid()]
    hand = [line for line in lines if str(line.get_gid()).endswith("hand")]
    fe = [line for line in lines if str(line.get_gid()).endswith("fe")]
    assert len(hand) == len(fe) > 1
    for one, other in zip(hand, fe, strict=True):
        assert one.is_dashed() and not other.is_dashed()
        contrast = (luminance(other.get_color()) + 0.05) / (luminance(one.get_color()) + 0.05)
        assert contrast > 2.0
        assert (1.05) / (luminance(other.get_color()) + 0.05) > 3.0, "FE must stand out from the page"


def test_stress_colours_darken_away_from_zero_and_are_apart_without_red_and_green() -> None:
    colours = style.stress_colours()(np.linspace(0.0, 1.0, 65))
    grey = np.array([luminance(colour[:3]) for colour in colours])
    assert np.all(np.diff(grey[:33]) > 0) and np.all(np.diff(grey[32:]) < 0)
    # Blue against yellow is what the red-green blind see: it must tell tension from compression.
    yellow = colours[:, :2].mean(axis=1) - colours[:, 2]
    assert np.all(np.diff(yellow) > -1e-3) and yellow[0] < -0.2 and yellow[-1] > 0.2


def test_isolines_are_solid_in_tension_and_dashed_in_compression() -> None:
    axes = drawn(draw_member, sample.hook()).axes[0]
    sets = [c for c in axes.collections if hasattr(c, "allsegs") and not getattr(c, "filled", True)]
    assert len(sets) == 2
    for lines in sets:
        for level, dash in zip(lines.levels, lines.get_linestyles(), strict=True):
            assert (dash[1] is None) == (level > 0), level


def test_curves_are_the_results() -> None:
    results = sample.hook()
    along = results.cases[0].along
    figure = drawn(draw_along, results)
    for axes, curve in zip(figure.axes, (along.inner, along.outer), strict=False):
        for kind, values in (("fe", curve.fe), ("hand", curve.hand)):
            parts = [line.get_xydata() for line in axes.lines if str(line.get_gid()).endswith(kind)]
            assert np.allclose(np.concatenate([np.asarray(part) for part in parts]), np.column_stack([along.s, values]))


def test_profiles_hold_the_governing_and_the_worst_station() -> None:
    for make in SAMPLES:
        case = make().cases[0]
        chosen = choose(case)
        assert 0 < len(chosen) <= 6 or all(st.inner.verdict == "unloaded" for st in case.stations)
        reasons = " ".join(reason for _, reason in chosen)
        assert ("governing" in reasons) == (case.governing is not None)
        assert [station.s for station, _ in chosen] == sorted(station.s for station, _ in chosen)
        compared = [
            abs(fibre.difference)
            for station in case.stations
            for fibre in (station.inner, station.outer)
            if fibre.verdict in ("holds", "low", "high") and fibre.difference is not None
        ]
        if compared:
            worst = next(station for station, reason in chosen if "largest difference" in reason)
            assert max(compared) in [abs(f.difference or 0.0) for f in (worst.inner, worst.outer)]


def test_files_are_the_same_twice_and_the_settings_stay(tmp_path: Path) -> None:
    mpl.rcParams["font.size"] = 13.0
    before = dict(mpl.rcParams)
    results = sample.hook_cases()
    first, second = (save_all(results, tmp_path / name) for name in ("a", "b"))
    assert dict(mpl.rcParams) == before
    assert [path.name for path in first] == [
        f"{figure}-{case}.svg"
        for case in ("lift", "proof-125")
        for figure in ("member", "along", "profile", "budget", "section")
    ]
    for one, other in zip(first, second, strict=True):
        assert one.read_bytes() == other.read_bytes()
        assert one.with_suffix(".png").read_bytes() == other.with_suffix(".png").read_bytes()
        assert b"<dc:date>" not in one.read_bytes()
        assert imread(one.with_suffix(".png"))[..., :3].std() > 0.05


def test_names_of_files_stay_apart(tmp_path: Path) -> None:
    results = sample.bracket()
    case = results.cases[0]
    cases = tuple(replace(case, name=name) for name in ("a b", "A/B", "../", "плюс"))
    names = [path.name for path in save_all(replace(results, cases=cases), tmp_path)]
    assert len(set(names)) == len(names) and all(re.fullmatch(r"[a-z0-9-]+\.svg", name) for name in names)
    assert [path.stem for path in save_all(results, tmp_path)] == ["member", "along", "profile", "budget"]


def test_the_bars_of_a_station_end_where_its_difference_says() -> None:
    results = sample.hook()
    case = results.cases[0]
    figure = drawn(draw_budget, results)
    for axes, face in zip(figure.axes, ("inner", "outer"), strict=True):
        marks = {round(line.get_xdata()[0]): line.get_ydata()[0] for line in axes.lines if line.get_gid() == "net"}
        assert marks
        for index, net in marks.items():
            fibre = getattr(case.stations[index], face)
            assert net == pytest.approx(-100.0 * fibre.difference, abs=1e-9)
            bars = [
                bar for bar in axes.patches if isinstance(bar, Rectangle) and abs(bar.get_x() + 0.31 - index) < 1e-9
            ]
            assert sum(bar.get_height() for bar in bars) == pytest.approx(net, abs=1e-9)


def test_both_ideas_of_the_section_are_in_one_scale_with_the_inner_face_on_top() -> None:
    results = sample.hook()
    field = results.cases[0].section_field
    assert field is not None
    with style.house_style():
        figure = draw_section(results, results.cases[0], field)
        figure.canvas.draw()
    plane, solid = figure.axes[:2]
    assert plane.get_ylim() == solid.get_ylim() and plane.get_ylim()[0] > plane.get_ylim()[1]
    assert plane.get_xlim()[0] == pytest.approx(-plane.get_xlim()[1])
    for axes in (plane, solid):
        assert axes.get_aspect() == 1.0
        assert "[mm]" in axes.get_xlabel()
    assert any("over the web" in text.get_text() for text in figure.texts)
