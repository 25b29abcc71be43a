"""The tables of a job file as pydantic models: names, types and ranges of keys. What keys mean together is job.py's.

A key that belongs to something the program cannot do yet is not here, and so is refused like any unknown key.
"""

from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import BaseModel, ConfigDict, Field, PlainValidator
from pydantic_core import PydanticCustomError

# Beyond these bounds a number is a slip of the keyboard, whatever the unit set.
_SMALLEST, _LARGEST = 1e-6, 1e7
_MOST_FORCE = 1e15

Length = Annotated[float, Field(ge=_SMALLEST, le=_LARGEST, allow_inf_nan=False)]
Distance = Annotated[float, Field(ge=0.0, le=_LARGEST, allow_inf_nan=False)]
Coordinate = Annotated[float, Field(ge=-_LARGEST, le=_LARGEST, allow_inf_nan=False)]
Force = Annotated[float, Field(ge=-_MOST_FORCE, le=_MOST_FORCE, allow_inf_nan=False)]
Stress = Annotated[float, Field(ge=1e-6, le=1e15, allow_inf_nan=False)]
Side = Literal["inner", "outer"]
# On one line, not blank, and nothing in it that a terminal would obey.
Name = Annotated[str, Field(min_length=1, max_length=60, pattern=r"^[^\x00-\x1f\x7f-\x9f]*\S[^\x00-\x1f\x7f-\x9f]*$")]
Vector = Annotated[list[Force], Field(min_length=2, max_length=2)]


class Table(BaseModel):
    """A table of the job: no unknown key, no number written as text or as a truth value."""

    model_config = ConfigDict(strict=True, extra="forbid", frozen=True, defer_build=True)


class Material(Table):
    """[material]"""

    E: Stress
    nu: Annotated[float, Field(ge=0.0, lt=0.5, allow_inf_nan=False)]
    yield_stress: Annotated[Stress | None, Field(alias="yield")] = None


class Rectangle(Table):
    """shape = "rectangle" """

    shape: Literal["rectangle"]
    depth: Length
    width: Length


class Trapezoid(Table):
    """shape = "trapezoid" """

    shape: Literal["trapezoid"]
    depth: Length
    inner_width: Length
    outer_width: Length


class Triangle(Table):
    """shape = "triangle" """

    shape: Literal["triangle"]
    depth: Length
    width: Length
    base: Side


class Circle(Table):
    """shape = "circle" """

    shape: Literal["circle"]
    diameter: Length


class Ellipse(Table):
    """shape = "ellipse" """

    shape: Literal["ellipse"]
    depth: Length
    width: Length


class Tube(Table):
    """shape = "tube" """

    shape: Literal["tube"]
    diameter: Length
    bore: Length


class Tee(Table):
    """shape = "T" """

    shape: Literal["T"]
    depth: Length
    flange_width: Length
    flange_thickness: Length
    web_thickness: Length
    flange: Side


class ISection(Table):
    """shape = "I" """

    shape: Literal["I"]
    depth: Length
    web_thickness: Length
    inner_flange_width: Length
    inner_flange_thickness: Length
    outer_flange_width: Length
    outer_flange_thickness: Length


class Box(Table):
    """shape = "box" """

    shape: Literal["box"]
    depth: Length
    width: Length
    flange_thickness: Length
    web_thickness: Length


Row = Annotated[list[Distance], Field(min_length=2, max_length=2)]
Rows = Annotated[list[Row], Field(min_length=2, max_length=200)]


class Polygon(Table):
    """shape = "polygon" """

    shape: Literal["polygon"]
    points: Rows


class Widths(Table):
    """shape = "widths" """

    shape: Literal["widths"]
    table: Rows


SHAPES: dict[str, type[Table]] = {
    "rectangle": Rectangle,
    "trapezoid": Trapezoid,
    "triangle": Triangle,
    "circle": Circle,
    "ellipse": Ellipse,
    "tube": Tube,
    "T": Tee,
    "I": ISection,
    "box": Box,
    "polygon": Polygon,
    "widths": Widths,
}


class Member(Table):
    """[member] without its pieces, which are read one by one."""

    datum: Literal["inner", "centroid", "outer"]
    start: Annotated[list[Coordinate], Field(min_length=2, max_length=2)] = [0.0, 0.0]
    heading: Annotated[float, Field(ge=-3600.0, le=3600.0, allow_inf_nan=False)] = 0.0
    pieces: Annotated[list[Any], Field(min_length=1, max_length=200)]


def _section_names(value: object) -> str | list[str]:
    if isinstance(value, str):
        return value
    if isinstance(value, list) and len(value) == 2 and all(isinstance(name, str) for name in value):
        return value
    raise PydanticCustomError("section_names", "must be the name of a section, or a list of two to taper between")


# A piece names one section, or two that it tapers between.
SectionNames = Annotated[str | list[str], PlainValidator(_section_names)]


class StraightPiece(Table):
    """A piece with ``straight``."""

    straight: Length
    section: SectionNames


class ArcPiece(Table):
    """A piece with ``arc``."""

    arc: Length
    sweep: Annotated[float, Field(gt=-360.0, lt=360.0, allow_inf_nan=False)]
    section: SectionNames


class Ends(Table):
    """[ends]"""

    start: Literal["clamped", "free"]
    end: Literal["clamped", "free"]


class At(Table):
    """A place of the member: a piece, counted from 1, and an angle on an arc or a distance on a straight."""

    piece: Annotated[int, Field(ge=1)]
    angle: Distance | None = None
    distance: Distance | None = None


class EndLoad(Table):
    """A load with at = "start" or "end"."""

    name: Name
    at: Literal["start", "end"]
    force: Vector = [0.0, 0.0]
    moment: Force = 0.0


class PlacedLoad(Table):
    """What every load at a piece has."""

    name: Name
    at: At
    force: Vector = [0.0, 0.0]


class PatchLoad(Table):
    """A load on a face with enters = "patch"."""

    name: Name
    at: At
    face: Side
    force: Vector
    enters: Literal["patch"]
    width: Length


class BearingLoad(Table):
    """A load on a face with enters = "bearing"."""

    name: Name
    at: At
    face: Side
    force: Vector
    enters: Literal["bearing"]
    pin_diameter: Length


class BodyLoad(Table):
    """A load with face = "centroid"."""

    name: Name
    at: At
    face: Literal["centroid"]
    force: Vector = [0.0, 0.0]
    moment: Force = 0.0
    enters: Literal["patch"]
    width: Length


class Case(Table):
    """[[case]]"""

    name: Name
    factors: dict[str, Annotated[float, Field(ge=-1e6, le=1e6, allow_inf_nan=False)]]


class Stations(Table):
    """[stations] without the named ones, which are read one by one."""

    every: Annotated[float, Field(ge=0.5, le=180.0, allow_inf_nan=False)] = 15.0
    named: Annotated[list[Any], Field(max_length=200)] = []


class NamedStation(At):
    """One of stations.named."""

    name: Name


class Theory(Table):
    """[theory]"""

    flanges: Literal["full", "effective"] = "full"


class Agreement(Table):
    """[agreement]"""

    band: Annotated[float, Field(gt=0.0, le=1.0, allow_inf_nan=False)] = 0.05
    numerical: Annotated[float, Field(ge=1e-6, le=0.1, allow_inf_nan=False)] = 0.002
