"""The half section of a tube as sectors between bore and outline."""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from functools import partial

import numpy as np

from intrados.fem.toroid.cells import Cell, FaceCells, HalfSection
from intrados.theory.quadrature import Array
from intrados.theory.section import Chord, EllipticChord, Section, SectionError

_SECTORS = 6
# Ratio of the radii between which one ring of a thick tube may reach.
_RING_RATIO = 2.0


def tubular(section: Section) -> HalfSection:
    """The cells of a tube; SectionError where outline or bore is not one ellipse, as on a taper of unlike tubes."""
    hollow = [layer for layer in section.layers if layer.void]
    outline = _ellipse(section.layers[0].chords)
    bore = _ellipse(hollow[0].void)
    if len(hollow) != 1 or outline is None or bore is None:
        raise SectionError("shape", f"{section.shape}: a hollow that is neither round nor between flat walls")
    ratio = max(outline.semi_depth / bore.semi_depth, outline.semi_width / bore.semi_width)
    rings = math.ceil(math.log(ratio) / math.log(_RING_RATIO) - 1e-9)
    shares = [(ratio ** (ring / rings) - 1.0) / (ratio - 1.0) for ring in range(rings + 1)]
    angles = [math.pi * sector / _SECTORS for sector in range(_SECTORS + 1)]
    cells = [
        Cell(partial(_arc, bore, first, last), partial(_arc, outline, first, last), c0, c1)
        for first, last in itertools.pairwise(angles)
        for c0, c1 in itertools.pairwise(shares)
    ]
    last_cell = len(cells) - 1
    return HalfSection(
        section, tuple(cells), FaceCells(False, (rings - 1,), None), FaceCells(False, (last_cell,), None), ()
    )


def _arc(ellipse: EllipticChord, first: float, last: float, q: Array) -> Array:
    angle = first + (last - first) * q
    return np.array([ellipse.centre - ellipse.semi_depth * np.cos(angle), ellipse.semi_width * np.sin(angle)])


def _ellipse(chords: Sequence[Chord]) -> EllipticChord | None:
    """The one ellipse that elliptic chords add up to, if they do."""
    total: EllipticChord | None = None
    for chord in chords:
        if not isinstance(chord, EllipticChord):
            return None
        if total is None:
            total = chord
        elif math.isclose(total.centre, chord.centre) and math.isclose(total.semi_depth, chord.semi_depth):
            total = EllipticChord(total.centre, total.semi_depth, total.semi_width + chord.semi_width)
        else:
            return None
    return total
