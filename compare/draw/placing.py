"""Text in a drawing that covers neither the drawing nor other text: greedy, most important text first."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.path import Path
from matplotlib.text import Text
from matplotlib.transforms import Bbox
from numpy.typing import NDArray

Point = NDArray[np.float64]
_GAPS = (5.0, 11.0, 18.0, 27.0, 38.0, 52.0, 70.0, 95.0, 125.0, 160.0, 200.0)
_TURNS = (0.0, 15.0, -15.0, 32.0, -32.0, 52.0, -52.0, 75.0, -75.0, 100.0, -100.0, 140.0, -140.0, 180.0)
_CLEAR = 2.0


def pair(point: Point) -> tuple[float, float]:
    """A point as the two plain floats that artists take."""
    return float(point[0]), float(point[1])


class Placer:
    """Keeps what is drawn in one axes, in pixels, and finds room for text. Limits of the axes must be final."""

    def __init__(self, axes: Axes) -> None:
        """Start with nothing drawn."""
        figure = axes.get_figure(root=True)
        if figure is None:
            raise ValueError("the axes stand in no figure")
        self._axes = axes
        self._pixels = figure.dpi / 72.0
        self._inside = axes.get_window_extent()
        self._areas: list[Path] = []
        self._lines: list[Path] = []
        self._boxes: list[Bbox] = []

    @property
    def points(self) -> float:
        """Pixels of one typographic point."""
        return self._pixels

    def pixel(self, point: Sequence[float] | Point) -> Point:
        """A point of the data in pixels."""
        return np.asarray(self._axes.transData.transform(np.asarray(point, dtype=float)))

    def data(self, pixel: Point) -> Point:
        """A pixel in the data's coordinates."""
        return np.asarray(self._axes.transData.inverted().transform(pixel))

    def keep_off_area(self, corners: Point) -> None:
        """No text over this closed polygon (data coordinates, one row a corner)."""
        self._areas.append(Path(self._axes.transData.transform(corners), closed=False))

    def keep_off_line(self, points: Point) -> None:
        """No text over this line (data coordinates), and no leader across it."""
        self._lines.append(Path(self._axes.transData.transform(points)))

    def beside(self, text: Text, tip: Point, direction: Point, far: bool = False) -> bool:
        """Set a text near a tip (data), if possible in a direction, with a leader where it stands off. False: no room.

        ``far``: the text may stand anywhere, with a leader that may cross areas; else it stays near and ahead of the
        tip. A text for which there is no room is removed from the axes.
        """
        box = text.get_window_extent()
        half = np.array([box.width, box.height]) / 2.0
        start = self.pixel(tip)
        heading = self.pixel(np.asarray(tip) + direction) - start
        angle = float(np.arctan2(heading[1], heading[0]))
        for gap in _GAPS if far else _GAPS[:5]:
            for turn in _TURNS if far else _TURNS[:7]:
                way = np.array([np.cos(angle + np.radians(turn)), np.sin(angle + np.radians(turn))])
                reach = float(np.min(half / np.maximum(np.abs(way), 1e-9)))
                centre = start + way * (gap * self._pixels + reach)
                line = Path(np.array([start + way * self._pixels, start + way * (gap - 1.5) * self._pixels]))
                if self._free(centre, half) and (gap == _GAPS[0] or self._clear(line, far)):
                    self._set(text, centre, half)
                    if gap > _GAPS[0]:
                        self._leader(line)
                    return True
        text.remove()
        return False

    def within(self, text: Text, spots: Sequence[Point], area: Path) -> bool:
        """Set a text on the first spot where it lies wholly in an area (both data). False: there is none, removed."""
        box = text.get_window_extent()
        half = np.array([box.width, box.height]) / 2.0
        for spot in spots:
            centre = self.pixel(spot)
            grown = self._box(centre, half)
            corners = self.data(grown.corners())
            if bool(np.all(area.contains_points(corners))) and not self._covered(grown):
                self._set(text, centre, half)
                return True
        text.remove()
        return False

    def _box(self, centre: Point, half: Point) -> Bbox:
        margin = half + _CLEAR * self._pixels
        return Bbox([centre - margin, centre + margin])

    def _covered(self, box: Bbox) -> bool:
        return any(box.overlaps(other) for other in self._boxes) or any(
            line.intersects_bbox(box, filled=False) for line in self._lines
        )

    def _free(self, centre: Point, half: Point) -> bool:
        box = self._box(centre, half)
        inside = self._inside
        if box.x0 < inside.x0 or box.x1 > inside.x1 or box.y0 < inside.y0 or box.y1 > inside.y1:
            return False
        return not self._covered(box) and not any(area.intersects_bbox(box, filled=True) for area in self._areas)

    def _clear(self, line: Path, across: bool) -> bool:
        return (
            not any(line.intersects_bbox(box, filled=False) for box in self._boxes)
            and not any(line.intersects_path(other, filled=False) for other in self._lines)
            and (across or not any(area.intersects_path(line, filled=True) for area in self._areas))
        )

    def _set(self, text: Text, centre: Point, half: Point) -> None:
        text.set_position(tuple(self.data(centre)))
        self._boxes.append(Bbox([centre - half, centre + half]))

    def _leader(self, line: Path) -> None:
        ends = self.data(np.asarray(line.vertices))
        self._axes.plot(ends[:, 0], ends[:, 1], color="#606060", linewidth=0.6, zorder=4)
        self._lines.append(line)
