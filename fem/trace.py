"""Where faces and cuts run through the reference square: which row, and which of its edges."""

from __future__ import annotations

import numpy as np

from intrados.fem.strip import Strip
from intrados.theory.load import Face
from intrados.theory.quadrature import Array


def along_face(strip: Strip, piece: int, face: Face, q: Array) -> tuple[int, Array]:
    """The row that carries a face on a piece, and the reference points (2, n) along it at q, 0 to 1."""
    low = (face == "inner") != strip.is_turned(piece)
    return (0 if low else len(strip.rows) - 1), np.array([q, np.full_like(q, 0.0 if low else 1.0)])


def across_cut(end: float, q: Array) -> Array:
    """Reference points (2, n) across the depth at the first (``end`` 0) or last (1) cut of a column."""
    return np.array([np.full_like(q, end), q])
