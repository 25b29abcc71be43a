"""How numbers are written: four significant digits, a common power of ten, and no digit that is not known."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

DIGITS = 4


@dataclass(frozen=True)
class Scale:
    """One power of ten, a multiple of three, for all values of a column or an axis; ``largest`` is unscaled."""

    power: int
    largest: float

    def unit(self, name: str) -> str:
        """The unit that goes with the scaled values, such as ``1e6 Pa``."""
        return f"1e{self.power} {name}" if self.power else name

    def decimals(self, *values: float) -> int:
        """Decimals that show the largest of these values with four significant digits.

        A value below a thousandth of the column's largest does not ask for more decimals.
        """
        size = max(1e-3 * self.largest, *(abs(value) for value in values)) / 10.0**self.power
        return max(0, DIGITS - 1 - math.floor(math.log10(size))) if size > 0 else 0

    def text(self, value: float | None, decimals: int | None = None) -> str:
        """The scaled value with its own or the given decimals; ``-`` where there is none."""
        if value is None or not math.isfinite(value):
            return "-"
        places = self.decimals(value) if decimals is None else decimals
        # Adding zero after rounding turns -0.0 into 0.0.
        rounded = round(value / 10.0**self.power, places) + 0.0
        return "0" if rounded == 0.0 and decimals is None else f"{rounded:.{places}f}"

    def quantity(self, value: float, name: str) -> str:
        """A number for running text, with its power of ten and its unit: ``148.1e6 Pa``."""
        return f"{self.text(value)}{self.exponent} {name}"

    @property
    def exponent(self) -> str:
        """What makes a scaled number a whole one in running text: ``e6``, or nothing."""
        return f"e{self.power}" if self.power else ""

    def bound(self, value: float, decimals: int) -> str:
        """The scaled value rounded up: an uncertainty is never shown smaller than it is."""
        if not math.isfinite(value):
            return "-"
        steps = value / 10.0**self.power * 10.0**decimals
        return f"{math.ceil(steps * (1.0 - 1e-9)) / 10.0**decimals:.{decimals}f}"


def common_scale(values: Iterable[float | None]) -> Scale:
    """The scale of a column: none for a largest magnitude from 0.1 to 1e5, else the nearest engineering power below."""
    sizes = [abs(value) for value in values if value is not None and math.isfinite(value)]
    largest = max(sizes, default=0.0)
    if largest == 0.0 or 0.1 <= largest < 1e5:
        return Scale(0, largest)
    return Scale(3 * math.floor(math.log10(largest) / 3), largest)


def percent(share: float | None) -> str:
    """A signed share as a number of percent with one decimal; ``-`` where there is none."""
    if share is None or not math.isfinite(share):
        return "-"
    if abs(share) >= 10.0:
        return f"{'>' if share > 0 else '<-'}999"
    return f"{round(100.0 * share, 1) + 0.0:+.1f}"
