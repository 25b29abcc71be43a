"""A table of the job checked against its model: what is wrong goes on a list, what is right goes on."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from typing import Any, TypeVar

from pydantic import ValidationError

from intrados.compare.mistake import Mistake, choices, meant, nearest, shown
from intrados.compare.schema import Table
from intrados.compare.toml_lines import Path

T = TypeVar("T", bound=Table)

_KINDS = {
    "float_type": "a number",
    "int_type": "a whole number",
    "int_from_float": "a whole number",
    "string_type": "a text in quotes",
    "list_type": "a list in [ ]",
    "dict_type": "a table",
    "model_type": "a table",
    "finite_number": "a finite number",
}


class Reader:
    """Collects the mistakes of one job while its tables are read."""

    def __init__(self) -> None:
        self.mistakes: list[Mistake] = []

    def add(self, path: Path, text: str) -> None:
        """Note a mistake at a path."""
        self.mistakes.append(Mistake(path, text))

    def table(self, model: type[T], data: object, path: Path) -> T | None:
        """The table as its model, or None with its mistakes noted; an unknown key is noted and passed over."""
        if not isinstance(data, Mapping):
            self.add(path, f"given {shown(data)}; must be a table")
            return None
        known = keys(model)
        misspelt = self.unknown(data, known, path)
        try:
            return model.model_validate({key: value for key, value in data.items() if key in known})
        except ValidationError as error:
            self._note(error, model, path, {(*path, key) for key in misspelt})
            return None

    def unknown(self, data: Mapping[str, object], known: Iterable[str], path: Path) -> set[str]:
        """Note every key that is not known; what is returned are the known ones that seem to be meant by them.

        A key that is missing because it is misspelt is not to be noted as missing, too.
        """
        known = list(known)
        strange = [key for key in data if key not in known]
        for key in strange:
            self.add((*path, key), f"unknown key; {nearest(key, known)}")
        return {name for key in strange if (name := meant(key, known)) is not None}

    def _note(self, error: ValidationError, model: type[Table], path: Path, misspelt: set[Path]) -> None:
        problems = error.errors(include_url=False)
        for problem in problems:
            if problem["type"] == "extra_forbidden":
                *above, key = problem["loc"]
                inside = (*path, *above)
                found = self.unknown({str(key): None}, keys(_below(model, above)), inside)
                misspelt |= {(*inside, name) for name in found}
        for problem in problems:
            where = (*path, *problem["loc"])
            if problem["type"] != "extra_forbidden" and not (problem["type"] == "missing" and where in misspelt):
                self.add(where, _sentence(problem))

    def each(self, data: object, path: Path, read: Callable[[object, Path], Any]) -> list[Any]:
        """What ``read`` makes of each element of an array of tables."""
        if not isinstance(data, list):
            self.add(path, f"given {shown(data)}; must be an array, written [[{'.'.join(map(str, path))}]]")
            return []
        return [read(item, (*path, index)) for index, item in enumerate(data)]

    def unique_names(self, data: object, path: Path) -> None:
        """Note every name in an array of tables that an earlier table has already, whatever else is wrong in it."""
        taken: set[str] = set()
        for index, table in enumerate(data if isinstance(data, list) else []):
            name = table.get("name") if isinstance(table, Mapping) else None
            if isinstance(name, str):
                if name in taken:
                    self.add((*path, index, "name"), f"given {shown(name)}, which is taken already; names must differ")
                taken.add(name)


def keys(model: type[Table]) -> list[str]:
    """The keys of a table as a file has them."""
    return [field.alias or name for name, field in model.model_fields.items()]


def _below(model: type[Table], place: Iterable[str | int]) -> type[Table]:
    """The model of the table at a place within another."""
    for part in place:
        inner = model.model_fields[str(part)].annotation
        assert isinstance(inner, type) and issubclass(inner, Table)
        model = inner
    return model


def _sentence(problem: Mapping[str, Any]) -> str:
    kind, given, context = problem["type"], problem["input"], problem.get("ctx", {})
    if kind == "missing":
        return "missing; it is required here"
    said = f"given {shown(given)}; must be"
    if kind in _KINDS:
        return f"{said} {_KINDS[kind]}"
    if kind == "literal_error":
        allowed = [word.strip(" '") for word in context["expected"].replace(" or ", ", ").split(", ")]
        return f"{said} one of {choices(allowed)}"
    bounds = {"greater_than": ("gt", "more than"), "greater_than_equal": ("ge", "at least")}
    bounds |= {"less_than": ("lt", "less than"), "less_than_equal": ("le", "at most")}
    if kind in bounds:
        name, words = bounds[kind]
        return f"{said} {words} {context[name]:g}"
    if kind in ("too_short", "too_long"):
        bound = context.get("min_length", context.get("max_length"))
        which = "at least" if kind == "too_short" else "at most"
        count = context["actual_length"]
        return f"given {count} value{'' if count == 1 else 's'}; must be {which} {bound}"
    if kind in ("string_too_short", "string_too_long", "string_pattern_mismatch"):
        return f"{said} a text of 1 to 60 characters on one line"
    return f"given {shown(given)}; {problem['msg']}"
