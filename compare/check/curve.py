"""Fibre stress along the member, hand theory and FE."""

from __future__ import annotations

import numpy as np

from intrados.compare.check.case import SolvedCase
from intrados.compare.results import Along, FibreCurve
from intrados.compare.zone import place
from intrados.fem.accuracy import FACES

_SAMPLES = np.linspace(0.0, 1.0, 5)


def along_member(case: SolvedCase) -> Along:
    """Both fibres at a few places in every column of the mesh; a cut is taken once, a joint on both its sides."""
    member, columns = case.loading.member, case.membrane.strip.columns
    places = [
        (number, k)
        for number, column in enumerate(columns)
        for k in range(len(_SAMPLES))
        if k > 0 or number == 0 or columns[number - 1].piece != column.piece
    ]
    pieces = [columns[number].piece for number, _ in places]
    shares = [float(columns[number].share(_SAMPLES[k])) for number, k in places]
    hand = np.empty((len(places), len(FACES)))
    for index, (piece, share) in enumerate(zip(pieces, shares, strict=True)):
        N, _, M = case.loading.resultants(piece, share)
        hand[index] = case.job.hand.fibres(member.section(piece, share), member.radius(piece, share), N, M)
    curves = []
    for index, face in enumerate(FACES):
        fe = case.solution.face(face).sampled(_SAMPLES)
        uncertainty = case.pair.in_columns(case.index, face)
        curves.append(
            FibreCurve(
                hand=tuple(hand[:, index].tolist()),
                fe=tuple(float(fe[number, k]) for number, k in places),
                uncertainty=tuple(float(uncertainty[number]) for number, _ in places),
            )
        )
    return Along(
        s=tuple(member.s(piece, share) for piece, share in zip(pieces, shares, strict=True)),
        piece=tuple(piece + 1 for piece in pieces),
        share=tuple(shares),
        comparable=tuple(
            place(case.loading, piece, share).comparable for piece, share in zip(pieces, shares, strict=True)
        ),
        inner=curves[0],
        outer=curves[1],
    )
