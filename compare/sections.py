"""The [section] tables of a job."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from intrados.compare import schema
from intrados.compare.mistake import nearest, shown
from intrados.compare.reader import Reader, keys
from intrados.theory import shapes
from intrados.theory.section import Section, SectionError

_BUILDERS: Mapping[str, Callable[..., Section]] = {
    "rectangle": shapes.rectangle,
    "trapezoid": shapes.trapezoid,
    "triangle": shapes.triangle,
    "circle": shapes.circle,
    "ellipse": shapes.ellipse,
    "tube": shapes.tube,
    "T": shapes.tee,
    "I": shapes.i_section,
    "box": shapes.box,
    "polygon": shapes.polygon,
    "widths": shapes.widths,
}
_KEYS = tuple(dict.fromkeys(key for model in schema.SHAPES.values() for key in keys(model)))


def read_sections(reader: Reader, data: object) -> dict[str, Section | None] | None:
    """The sections by name, None for one with mistakes; None in place of them all where there are no such tables."""
    if data is None:
        return None
    if not isinstance(data, Mapping):
        reader.add(("section",), f"given {shown(data)}; must be tables, written [section.NAME]")
        return None
    return {name: _read_section(reader, name, table) for name, table in data.items()}


def _read_section(reader: Reader, name: str, data: object) -> Section | None:
    path = ("section", name)
    if not isinstance(data, Mapping):
        reader.add(path, f"given {shown(data)}; must be a table, written [section.NAME]")
        return None
    shape = data.get("shape")
    if shape is None and "shape" in reader.unknown(data, _KEYS, path):
        return None
    if not isinstance(shape, str) or shape not in schema.SHAPES:
        said = "missing" if shape is None else f"given {shown(shape)}, which is no shape"
        reader.add((*path, "shape"), f"{said}; {nearest(str(shape), schema.SHAPES)}")
        return None
    table = reader.table(schema.SHAPES[shape], data, path)
    if table is None:
        return None
    try:
        return _BUILDERS[shape](**table.model_dump(exclude={"shape"}))
    except SectionError as error:
        reader.add((*path, error.key), f"given {shown(data[error.key])}; {error.text}")
        return None
