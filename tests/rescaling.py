"""The same section in another unit of length."""

from __future__ import annotations

from intrados.theory.section import Layer, Section


def rescaled(section: Section, unit: float) -> Section:
    """Every length of the section times ``unit``."""

    def layer(old: Layer) -> Layer:
        return Layer(old.inner * unit, old.outer * unit, tuple(chord.scaled(unit, unit) for chord in old.chords))

    return Section(section.shape, tuple(map(layer, section.layers)))
