"""results.json: the results of a check as the plain dictionary that is written to disk, and back again.

The first load case stands at the top level, the others under ``cases``. Numbers are rounded to 12 significant
digits, so that the same job gives the same file byte for byte; what is not finite becomes null.
"""

from __future__ import annotations

import json
import math
import re
from collections.abc import Mapping
from dataclasses import fields, is_dataclass
from typing import Any

from intrados.compare.results import CaseResult, Results

SCHEMA = 1
PROGRAM = "intrados"
_EQUILIBRIUM = ("force_residual", "moment_residual")


class RecordError(ValueError):
    """A dictionary that is not the record of a check. The message has one line for every mistake."""


def write(results: Results) -> dict[str, Any]:
    """The results.json dictionary: plain dicts, lists, strings, finite numbers and None, in the order of the file."""
    first, *others = [_write_case(case) for case in results.cases]
    name = first.pop("name")
    record: dict[str, Any] = {
        "schema": SCHEMA,
        "program": {"name": PROGRAM, "version": results.version},
        "job": {
            "title": results.title,
            "sha256": results.sha256,
            "units": results.unit_set,
            "unit_names": _plain(results.units),
        },
        "notes": _plain(results.notes),
        "agreement": {"band": _plain(results.band), "numerical": _plain(results.numerical)},
        "yield_stress": _plain(results.yield_stress),
        "ends": dict(zip(("start", "end"), results.ends, strict=True)),
        "sections": _plain(results.sections),
        "mesh": _plain(results.mesh),
        "missed": _plain(results.missed),
    }
    if name:
        record["case"] = name
    return record | first | {"cases": others}


def read(record: Mapping[str, Any]) -> Results:
    """The Results that ``write`` made a record of, to 12 digits; keys it does not know are passed over.

    Raises RecordError, with a line for every mistake, for a record of another schema or with missing or wrong values.
    """
    from pydantic import TypeAdapter, ValidationError

    if not isinstance(record, Mapping) or record.get("schema") != SCHEMA:
        given = record.get("schema") if isinstance(record, Mapping) else record
        raise RecordError(f"schema: {given!r} given, {SCHEMA} is the one that can be read")
    try:
        return TypeAdapter(Results).validate_python(_arrange(record))
    except ValidationError as error:
        lines = (f"{_key(item['loc'])}: {item['msg']}" for item in error.errors())
        raise RecordError("\n".join(lines)) from None


def to_json(results: Results) -> str:
    """The text of results.json: indented, but with every list of numbers on one line."""
    text = json.dumps(write(results), indent=1, ensure_ascii=False, allow_nan=False)
    # A line break inside a JSON string is written \n, so a real one is always layout.
    return re.sub(r"\[\n[^\[\]{}]*\]", lambda found: re.sub(r"\n *", "", found[0]), text) + "\n"


def _write_case(case: CaseResult) -> dict[str, Any]:
    plain: dict[str, Any] = _plain(case)
    for station in plain["stations"]:
        _drop_other_measure(station)
    if plain["peak"]:
        _drop_other_measure(plain["peak"])
    equilibrium = {key: plain.pop(key) for key in _EQUILIBRIUM}
    head = {key: plain.pop(key) for key in ("name", "governing", "peak")}
    return head | {"equilibrium": equilibrium} | plain


def _drop_other_measure(place: dict[str, Any]) -> None:
    """A place is told by its angle on an arc, by its distance on a straight; the record carries that one."""
    del place["distance" if place["distance"] is None else "angle"]


def _plain(value: Any) -> Any:
    if isinstance(value, float):
        # Adding zero turns -0.0 into 0.0.
        return float(f"{value:.12g}") + 0.0 if math.isfinite(value) else None
    if isinstance(value, tuple):
        return [_plain(item) for item in value]
    if isinstance(value, dict):
        return {key: _plain(item) for key, item in value.items()}
    if is_dataclass(value):
        return {field.name: _plain(getattr(value, field.name)) for field in fields(value)}
    return value


def _arrange(record: Mapping[str, Any]) -> dict[str, Any]:
    """The record in the shape of Results; what is missing stays missing, for the validation to find."""
    job = _mapping(record.get("job"))
    ends = _mapping(record.get("ends"))
    others = record.get("cases", [])
    arranged: dict[str, Any] = {
        **_pick(_mapping(record.get("program")), {"version": "version"}),
        **_pick(job, {"title": "title", "sha256": "sha256", "units": "unit_set", "unit_names": "units"}),
        **_pick(_mapping(record.get("agreement")), {"band": "band", "numerical": "numerical"}),
        **{key: record[key] for key in ("notes", "yield_stress", "sections", "mesh", "missed") if key in record},
        "ends": [ends.get("start"), ends.get("end")],
        "cases": [
            _arrange_case({**record, "name": record.get("case", "")}),
            *[_arrange_case(_mapping(case)) for case in (others if isinstance(others, list) else [None])],
        ],
    }
    return arranged


def _arrange_case(case: Mapping[str, Any]) -> dict[str, Any]:
    keys = [field.name for field in fields(CaseResult) if field.name in case]
    arranged = {key: _numbers(case[key]) for key in keys} | dict(_mapping(case.get("equilibrium")))
    stations = arranged.get("stations")
    places = [*(stations if isinstance(stations, list) else []), arranged.get("peak")]
    for place in places:
        if isinstance(place, dict):
            place.setdefault("angle", None)
            place.setdefault("distance", None)
    return arranged


def _numbers(value: Any) -> Any:
    """A copy in which null within a list of numbers is NaN again."""
    if isinstance(value, list):
        return [math.nan if item is None else _numbers(item) for item in value]
    if isinstance(value, dict):
        return {key: _numbers(item) for key, item in value.items()}
    return value


def _mapping(value: Any) -> Mapping[str, Any]:
    return value if isinstance(value, Mapping) else {}


def _pick(source: Mapping[str, Any], names: dict[str, str]) -> dict[str, Any]:
    return {name: source[key] for key, name in names.items() if key in source}


_HOME = {
    "version": "program.version",
    "title": "job.title",
    "sha256": "job.sha256",
    "unit_set": "job.units",
    "units": "job.unit_names",
    "band": "agreement.band",
    "numerical": "agreement.numerical",
    "force_residual": "equilibrium.force_residual",
    "moment_residual": "equilibrium.moment_residual",
}


def _key(place: tuple[int | str, ...]) -> str:
    """The key as the file has it, for a place in Results."""
    parts = list(place)
    prefix: list[int | str] = []
    if len(parts) > 1 and parts[0] == "cases":
        index = int(parts[1])
        prefix = [] if index == 0 else ["cases", index - 1]
        parts = parts[2:]
    if parts and parts[0] == "ends":
        parts[1:] = ["end" if 1 in parts[1:] else "start"]
    home = _HOME.get(str(parts[0]), parts[0]) if parts else ""
    return ".".join(str(part) for part in [*prefix, home, *parts[1:]])
