"""Loads as a job gives them. Forces act on the member in global axes; moments are counter-clockwise positive."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Face = Literal["inner", "outer"]
End = Literal["start", "end"]
Vector = tuple[float, float]


class LoadError(ValueError):
    """A load that cannot enter as asked; ``key`` is the entry to blame, ``text`` says why."""

    def __init__(self, key: str, text: str) -> None:
        super().__init__(f"{key}: {text}")
        self.key = key
        self.text = text


@dataclass(frozen=True)
class Patch:
    """Spread smoothly (cosine squared) over ``width`` of the face."""

    width: float


@dataclass(frozen=True)
class Bearing:
    """Cosine pressure of a pin, normal to the face."""

    pin_diameter: float


@dataclass(frozen=True)
class EndLoad:
    """A force and a moment on the face of an end, at its centroid."""

    name: str
    end: End
    force: Vector
    moment: float


@dataclass(frozen=True)
class FaceLoad:
    """A force at a place (piece from 0, share) of a face."""

    name: str
    piece: int
    share: float
    face: Face
    force: Vector
    enters: Patch | Bearing


@dataclass(frozen=True)
class BodyLoad:
    """A force and a moment at the centroid of a place, entering as a body force over ``width`` of the datum line."""

    name: str
    piece: int
    share: float
    force: Vector
    moment: float
    width: float


Load = EndLoad | FaceLoad | BodyLoad
