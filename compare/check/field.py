"""The hoop-stress field over the member, as the drawing shows it."""

from __future__ import annotations

import numpy as np

from intrados.compare.check.case import SolvedCase
from intrados.compare.results import Field
from intrados.fem.cut import along, stresses
from intrados.theory.quadrature import Array

_PER_ELEMENT = 4


def hoop_field(case: SolvedCase) -> Field:
    """Hoop stress on a grid of _PER_ELEMENT steps to a column and to a row of the mesh."""
    strip, member = case.membrane.strip, case.loading.member
    q = np.linspace(0.0, 1.0, _PER_ELEMENT + 1)
    points = np.array([np.repeat(q, len(q)), np.tile(q, len(q))])
    elements = np.arange(len(case.membrane.scalars))
    tensor = stresses(case.membrane, case.solution.displacement, elements, points)
    tensor = tensor.reshape(3, len(strip.columns), len(strip.rows), len(q), len(q))
    eta = np.concatenate([[0.0], *(row.eta(q[1:]) for row in strip.rows)])
    pieces: list[int] = []
    lines: list[tuple[Array, Array, Array]] = []
    for number, column in enumerate(strip.columns):
        is_new_piece = number == 0 or strip.columns[number - 1].piece != column.piece
        outward = -1 if strip.is_turned(column.piece) else 1
        for k in range(0 if is_new_piece else 1, len(q)):
            share = np.full_like(eta, column.share(q[k]))
            x = strip.inner_share(column.piece, eta) * member.depth(column.piece, share)
            # A line between rows belongs to both: the row before it speaks.
            across = np.concatenate([tensor[:, number, 0, k, :1], *tensor[:, number, :, k, 1:].swapaxes(0, 1)], axis=1)
            hoop = along(member.tangent(column.piece, share), across)
            px, py = member.points(column.piece, share, x)
            lines.append((px[::outward], py[::outward], hoop[::outward]))
            pieces.append(column.piece + 1)
    x_grid, y_grid, hoop_grid = (tuple(tuple(line[i].tolist()) for line in lines) for i in range(3))
    return Field(_PER_ELEMENT, tuple(pieces), x_grid, y_grid, hoop_grid)
