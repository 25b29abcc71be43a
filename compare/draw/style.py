"""The house style of all figures: type, greys, line weights, the colour map of stress, and how a figure is saved.

Every distinction is carried by a dash, a weight, a marker or a hatch first and by colour second, so that figures
read in black and white; the colours are safe for the common kinds of colour blindness.
"""

from __future__ import annotations

import textwrap
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import numpy as np
from matplotlib import style as sheets
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.colors import LinearSegmentedColormap
from matplotlib.contour import ContourSet
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator
from numpy.typing import NDArray

from intrados.compare.results import CaseResult, Results

Array = NDArray[np.float64]
# Keyword arguments of a matplotlib artist.
Look = dict[str, Any]

BLACK, DARK, GREY, LIGHT, PALE = "#000000", "#404040", "#808080", "#c4c4c4", "#e6e6e6"
SMALL, NORMAL, LARGE = 7.5, 8.5, 10.5
HAND: Look = {"color": BLACK, "linestyle": (0, (5.0, 2.2)), "linewidth": 1.3}
STRAIGHT: Look = {"color": GREY, "linestyle": (0, (1.0, 1.6)), "linewidth": 1.3}
FE: Look = {"color": "#2b6cb0", "linestyle": "solid", "linewidth": 2.0}
DOTS_PER_INCH = 160
_RC: Look = {
    "font.family": "DejaVu Sans",
    "font.size": NORMAL,
    "axes.labelsize": NORMAL,
    "axes.titlesize": NORMAL,
    "axes.linewidth": 0.7,
    "axes.edgecolor": DARK,
    "xtick.labelsize": SMALL,
    "ytick.labelsize": SMALL,
    "xtick.major.width": 0.7,
    "ytick.major.width": 0.7,
    "legend.fontsize": SMALL,
    "legend.frameon": False,
    "axes.formatter.useoffset": False,
    "axes.unicode_minus": True,
    "hatch.linewidth": 0.5,
    "hatch.color": GREY,
    "svg.hashsalt": "intrados",
    "svg.fonttype": "path",
    "text.parse_math": False,
}


@contextmanager
def house_style() -> Iterator[None]:
    """The style while figures are drawn and saved; the settings of the caller are back afterwards."""
    with sheets.context(_RC, after_reset=True):
        yield


def new_figure(width: float, height: float) -> Figure:
    """An empty figure, sizes in inches, with a canvas that can measure text."""
    figure = Figure(figsize=(width, height), dpi=DOTS_PER_INCH, facecolor="white")
    FigureCanvasAgg(figure)
    return figure


def stress_colours() -> LinearSegmentedColormap:
    """Blue (compression) over near-white to orange (tension): apart for all common kinds of colour blindness."""
    stops = ["#2f5f9e", "#6f9bcb", "#b7cfe6", "#f7f7f7", "#f6cfa4", "#e69a55", "#b9621b"]
    return LinearSegmentedColormap.from_list("stress", stops, N=512)


def stress_levels(largest: float) -> Array:
    """Round stresses, symmetric about zero, that cover the range in some twelve steps."""
    return np.asarray(MaxNLocator(nbins=12, symmetric=True, steps=[1, 2, 2.5, 4, 5, 10]).tick_values(-largest, largest))


def dash(level: float) -> str:
    """The line of an isoline: solid in tension, dashed in compression, dash-dotted at zero."""
    return "dashdot" if level == 0 else "solid" if level > 0 else "dashed"


def draw_bar(figure: Figure, axes: Axes, field: ContourSet, levels: Array, label: str) -> None:
    """The colour bar of a stress field beside its axes, with the isolines of the drawing in it."""
    width, height = figure.get_size_inches()
    place = axes.get_position()
    tall = min(place.height, 4.6 / height)
    cax = figure.add_axes((place.x1 + 0.25 / width, place.y0 + (place.height - tall) / 2, 0.2 / width, tall))
    bar = figure.colorbar(field, cax=cax, ticks=levels)
    bar.set_label(label, labelpad=8)
    bar.minorticks_off()
    for level in levels[1:-1]:
        cax.axhline(level, color=BLACK, linestyle=dash(level), linewidth=1.2 if level == 0 else 0.6)


def wrapped(text: str, columns: int) -> str:
    """A name broken into lines of at most so many letters."""
    return "\n".join(textwrap.wrap(text, columns)) or text


def clipped(text: str, letters: int) -> str:
    """A name of at most so many letters, the last an ellipsis where something is left out."""
    return text if len(text) <= letters else f"{text[: letters - 1]}…"


def minus(number: str) -> str:
    """A number with a true minus sign, as the axes have it."""
    return number.replace("-", "−")


def title(results: Results, case: CaseResult, columns: int) -> str:
    """The title of the job and, where it has one, the name of the case."""
    return wrapped(f"{results.title} – case {case.name}" if case.name else results.title, columns)


def save(figure: Figure, folder: Path, name: str) -> None:
    """Write NAME.svg and NAME.png without dates or versions: the same figure gives the same bytes."""
    figure.savefig(folder / f"{name}.svg", metadata={"Date": None, "Creator": None})
    figure.savefig(folder / f"{name}.png", metadata={"Software": None})
