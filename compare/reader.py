"""A table of the job checked against its model: what is wrong goes on a list, what is right goes on."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any, TypeVar

from pydantic import ValidationError

from intrados.compare.mistake import Mistake, choices, nearest, shown
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
        known = {field.alias or name for name, field in model.model_fields.items()}
        for key in data:
            if key not in known:
                self.add((*path, key), f"unknown key; {nearest(key, known)}")
        try:
            return model.model_validate({key: value for key, value in data.items() if key in known})
        except ValidationError as error:
            self._note(error, model, path)
            return None

    def _note(self, error: ValidationError, model: type[Table], path: Path) -> None:
        said: set[Path] = set()
        for problem in error.errors(include_url=False):
            # A union reports each of its members under the member's name, which is no key of the file.
            place = tuple(part for part in problem["loc"] if isinstance(part, int) or "[" not in part)
            place = tuple(part for part in place if part not in ("str", "constrained-str"))
            where = (*path, *place)
            if where not in said:
                said.add(where)
                self.add(where, _sentence(problem))

    def each(self, data: object, path: Path, read: Callable[[object, Path], Any]) -> list[Any]:
        """What ``read`` makes of each element of an array of tables."""
        if not isinstance(data, list):
            self.add(path, f"given {shown(data)}; must be an array, written [[{path[-1]}]]")
            return []
        return [read(item, (*path, index)) for index, item in enumerate(data)]

    def unique_names(self, data: object, path: Path) -> None:
        """Note every name in an array of tables that an earlier table has already, whatever else is wrong in it."""
        taken: set[str] = set()
        for index, table in enumerate(data if isinstance(data, list) else []):
            name = table.get("name") if isinstance(table, Mapping) else None
            if isinstance(name, str):
                if name in taken:
                    self.add((*path, index, "name"), f'given "{name}", which is taken already; names must differ')
                taken.add(name)


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
        return f"given {context['actual_length']} values; must be {which} {bound}"
    if kind in ("string_too_short", "string_too_long"):
        return f"{said} a text of 1 to 60 characters"
    return f"given {shown(given)}; {problem['msg']}"
