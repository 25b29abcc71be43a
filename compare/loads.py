"""The [[load]] tables of a job."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from intrados.compare import schema
from intrados.compare.location import read_place
from intrados.compare.mistake import choices, shown
from intrados.compare.reader import Reader, keys
from intrados.compare.toml_lines import Path
from intrados.theory.load import Bearing, BodyLoad, EndLoad, FaceLoad, Load, LoadError, Patch
from intrados.theory.member import Member
from intrados.theory.spread import enter
from intrados.theory.statics import Support

_ENDS = ("start", "end")
_FACES = ("inner", "outer", "centroid")
_ENTERS = ("patch", "bearing")
_PLACED_KEYS = tuple(
    dict.fromkeys(key for model in (schema.PatchLoad, schema.BearingLoad, schema.BodyLoad) for key in keys(model))
)


def read_loads(
    reader: Reader, data: object, member: Member | None, ends: tuple[Support, Support] | None
) -> list[tuple[Path, Load]] | None:
    """The loads with their paths; None where there are none or some have mistakes, which are noted.

    Where ``member`` or ``ends`` is None, what hangs on it is not looked at.
    """
    if data is None:
        return None
    if data == []:
        reader.add(("load",), "missing; a job needs at least one [[load]]")
        return None
    tables = reader.each(data, ("load",), lambda item, path: _read_table(reader, item, path))
    reader.unique_names(data, ("load",))
    loads = [
        None if table is None else _read_load(reader, table, ("load", index), member, ends)
        for index, table in enumerate(tables)
    ]
    if not loads or any(load is None for load in loads):
        return None
    return [(("load", index), load) for index, load in enumerate(loads) if load is not None]


def scaled(load: Load, factor: float) -> Load:
    """The load times a factor."""
    force = (factor * load.force[0], factor * load.force[1])
    if isinstance(load, FaceLoad):
        return replace(load, force=force)
    return replace(load, force=force, moment=factor * load.moment)


AnyTable = schema.EndLoad | schema.PatchLoad | schema.BearingLoad | schema.BodyLoad


def _read_table(reader: Reader, data: object, path: Path) -> AnyTable | None:
    """The table by the model that its ``at``, ``face`` and ``enters`` ask for."""
    if not isinstance(data, Mapping):
        reader.add(path, f"given {shown(data)}; must be a table, written [[load]]")
        return None
    at = data.get("at")
    if isinstance(at, str):
        if at not in _ENDS:
            reader.add((*path, "at"), f"given {shown(at)}; must be {choices(_ENDS)} or a table of piece and place")
            return None
        refused = [key for key in ("face", "enters", "width", "pin_diameter") if key in data]
        for key in refused:
            reader.add((*path, key), "does not go with a load on an end, which enters as the exact distribution there")
        return reader.table(schema.EndLoad, {key: data[key] for key in data if key not in refused}, path)
    face, enters = data.get("face"), data.get("enters")
    asked = (("face", face, _FACES), ("enters", enters, _ENTERS))
    wrong = [(key, value, allowed) for key, value, allowed in asked if value not in allowed]
    if wrong:
        misspelt = reader.unknown(data, _PLACED_KEYS, path)
        for key, value, allowed in wrong:
            said = "missing" if value is None else f"given {shown(value)}"
            if value is not None or key not in misspelt:
                reader.add((*path, key), f"{said}; a load at a piece needs one of {choices(allowed)}")
        # What goes with every load at a piece can be looked at all the same.
        common = ("name", "at", "force")
        if not misspelt.intersection(common):
            reader.table(schema.PlacedLoad, {key: data[key] for key in common if key in data}, path)
        return None
    if face == "centroid":
        return reader.table(schema.BodyLoad, data, path)
    if "moment" in data:
        reader.add((*path, "moment"), 'goes only with face = "centroid" or a load on an end')
        data = {key: value for key, value in data.items() if key != "moment"}
    if enters == "patch":
        return reader.table(schema.PatchLoad, data, path)
    return reader.table(schema.BearingLoad, data, path)


def _read_load(
    reader: Reader, table: AnyTable, path: Path, member: Member | None, ends: tuple[Support, Support] | None
) -> Load | None:
    force = (table.force[0], table.force[1])
    moment = 0.0 if isinstance(table, schema.PatchLoad | schema.BearingLoad) else table.moment
    if force == (0.0, 0.0) and moment == 0.0:
        reader.add((*path, "force"), "the load is zero; give it a force or, on an end or the centroid, a moment")
        return None
    if isinstance(table, schema.EndLoad):
        if ends is not None and ends[_ENDS.index(table.at)] == "clamped":
            reader.add(
                (*path, "at"), f'given "{table.at}", which is clamped: the clamp takes this load; give it a free end'
            )
            return None
        return EndLoad(table.name, table.at, force, moment)
    if member is None:
        return None
    place = read_place(reader, table.at, member, (*path, "at"))
    if place is None:
        return None
    piece, share = place[0], min(place[1] / member.extent(place[0]), 1.0)
    load: FaceLoad | BodyLoad
    if isinstance(table, schema.BodyLoad):
        load = BodyLoad(table.name, piece, share, force, moment, table.width)
    else:
        enters = Patch(table.width) if isinstance(table, schema.PatchLoad) else Bearing(table.pin_diameter)
        load = FaceLoad(table.name, piece, share, table.face, force, enters)
    try:
        enter(member, load)
    except LoadError as error:
        given = {"force": table.force}.get(error.key, getattr(table, error.key, None))
        reader.add((*path, error.key), f"given {shown(given)}; {error.text}")
        return None
    return load
