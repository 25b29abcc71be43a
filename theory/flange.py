"""Flanges of a curved beam: the width that carries its share, and the bending across it (Bleich 1933).

A flange of a curved beam is pulled toward or away from the centre of curvature by its own hoop stress. It gives way
between web and tip, so the hoop stress falls off toward the tip, and it bends across its width. A strip of the flange
along the beam is a beam on an elastic foundation, with x = bp^2/(r tf), bp the overhang from web face to tip, tf the
thickness, r the radius at mid-thickness, and L = (3 (1 - nu^2))^(1/4) sqrt(x):

    alpha = (sinh 2L + sin 2L)/(L (2 + cosh 2L + cos 2L))                  the effective overhang is alpha bp
    beta  = sqrt(3/(1 - nu^2)) (cosh 2L - cos 2L)/(2 + cosh 2L + cos 2L)   bending stress across over mean hoop stress

nu = 0 gives the published table. In a box bp is half the clear span between the webs, which is an approximation: the
middle of that span does not turn, as a tip may.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from intrados.theory import winkler
from intrados.theory.load import Face
from intrados.theory.section import Layer, Section, StraightChord


@dataclass(frozen=True)
class Flange:
    """A flange at the ``face`` of a section (lengths): its overhang either side, thickness, radius at mid-thickness."""

    face: Face
    overhang: float
    thickness: float
    radius: float

    @property
    def slenderness(self) -> float:
        """x = bp^2/(r tf)."""
        return self.overhang**2 / (self.radius * self.thickness)


@dataclass(frozen=True)
class SurfaceStress:
    """Stresses at a surface of a flange, over the web: along the beam (hoop) and across the flange, > 0 tension."""

    hoop: float
    across: float

    @property
    def tresca(self) -> float:
        """Tresca's equivalent stress: the two add up where their signs differ; nothing presses the surface."""
        return max(abs(self.hoop), abs(self.across), abs(self.hoop - self.across))


@dataclass(frozen=True)
class FlangeStress:
    """Stresses of one flange: ``mean`` is the hoop stress at mid-thickness; its two surfaces."""

    flange: Flange
    mean: float
    free_face: SurfaceStress
    web_side: SurfaceStress


@dataclass(frozen=True)
class EffectiveBar:
    """A section bent to the centroid radius ``R`` (length), as hand theory sees it with flanges of effective width.

    ``shift`` (length) is R less the centroid radius of the full section: the inner face stays where it is.
    """

    section: Section
    R: float
    shift: float
    nu: float
    flanges: tuple[Flange, ...]

    def moment(self, N: float, M: float) -> float:
        """The moment about the effective section's centroid of N, M at the full section's."""
        return M + N * self.shift

    def fibres(self, N: float, M: float) -> tuple[float, float]:
        """Hoop stress at the inner and the outer fibre, over the web; N, M at the full section's centroid."""
        return winkler.fibres(self.section, self.R, N, self.moment(N, M))

    def stresses(self, N: float, M: float) -> tuple[FlangeStress, ...]:
        """Stresses of every flange where it meets the web; N, M at the full section's centroid.

        On the free face of an inner flange and the web side of an outer one the stress across is -beta times the mean
        hoop stress, on the other two surfaces +beta times it.
        """
        found = []
        for flange in self.flanges:
            inner = flange.face == "inner"
            depths = np.array([0.0, 0.5, 1.0]) * flange.thickness
            free, mean, web = winkler.hoop(
                self.section, self.R, N, self.moment(N, M), depths if inner else self.section.depth - depths
            )
            across = bending_factor(flange.slenderness, self.nu) * float(mean) * (-1.0 if inner else 1.0)
            surfaces = SurfaceStress(float(free), across), SurfaceStress(float(web), -across)
            found.append(FlangeStress(flange, float(mean), *surfaces))
        return tuple(found)


def effective_share(slenderness: float, nu: float) -> float:
    """alpha: the effective share of an overhang, 1 for a stocky flange; ``slenderness`` x = bp^2/(r tf) > 0."""
    twice, decay, total = _strip(slenderness, nu)
    return (-math.expm1(-2.0 * twice) + 2.0 * decay * math.sin(twice)) / (0.5 * twice * total)


def bending_factor(slenderness: float, nu: float) -> float:
    """beta: bending stress across the flange at the web over its mean hoop stress; 0 for a stocky flange."""
    twice, decay, total = _strip(slenderness, nu)
    difference = math.expm1(-twice) ** 2 + 4.0 * decay * math.sin(0.5 * twice) ** 2
    return math.sqrt(3.0 / (1.0 - nu**2)) * difference / total


def _strip(slenderness: float, nu: float) -> tuple[float, float, float]:
    """2L, exp(-2L), and 2 (2 + cosh 2L + cos 2L) exp(-2L), in which form nothing overflows."""
    twice = 2.0 * (3.0 * (1.0 - nu**2)) ** 0.25 * math.sqrt(slenderness)
    decay = math.exp(-twice)
    return twice, decay, 1.0 + decay**2 + 2.0 * decay * (2.0 + math.cos(twice))


def flanges(section: Section, R: float) -> tuple[Flange, ...]:
    """The flanges of a section bent to the centroid radius ``R`` (length), from the inner face outward.

    A flange is a layer of constant width at a face, beside a narrower layer of constant width: of a T, an I, a box, or
    a table of widths that draws one.
    """
    pairs: list[tuple[Face, Layer, Layer]] = []
    if len(section.layers) > 1:
        pairs = [("inner", section.layers[0], section.layers[1]), ("outer", section.layers[-1], section.layers[-2])]
    found = []
    for face, layer, beside in pairs:
        width, web = _constant_width(layer), _constant_width(beside)
        if width is not None and web is not None and width > web:
            radius = R - section.centroid + 0.5 * (layer.inner + layer.outer)
            found.append(Flange(face, 0.5 * (width - web), layer.outer - layer.inner, radius))
    return tuple(found)


def effective(section: Section, R: float, nu: float) -> EffectiveBar:
    """The section with every flange at its effective width, about the same inner face; ``nu`` Poisson's ratio.

    The slenderness of a flange depends on its own radius alone, which does not move, so there is nothing to iterate.
    A section without flanges comes back as it is.
    """
    found = flanges(section, R)
    layers = list(section.layers)
    for flange in found:
        at = 0 if flange.face == "inner" else -1
        lost = 2.0 * flange.overhang * (1.0 - effective_share(flange.slenderness, nu))
        width = float(layers[at].width(np.array(layers[at].inner))) - lost
        layers[at] = replace(layers[at], chords=(StraightChord(width, 0.0),))
    narrowed = replace(section, layers=tuple(layers))
    shift = narrowed.centroid - section.centroid
    return EffectiveBar(narrowed, R + shift, shift, nu, found)


def _constant_width(layer: Layer) -> float | None:
    """The width of a layer that has the same at every depth, else None."""
    inner, middle, outer = layer.width(np.linspace(layer.inner, layer.outer, 3))
    same = max(abs(middle - inner), abs(outer - inner)) <= 1e-9 * max(inner, outer)
    return float(inner) if same else None
