"""What is wrong with a brief, in words: line, key, value, allowed range, nearest known key."""

from __future__ import annotations

from collections.abc import Iterator
from difflib import get_close_matches
from typing import Any, get_args

from pydantic import BaseModel, ValidationError

from ingest.brief_lines import KeyPath, nearest_line

Problem = tuple[str, str, str]

_WANTED = {
    "string_type": "a text in quotes",
    "bool_type": "true or false",
    "tuple_type": "a list in square brackets",
    "model_type": "a table",
    "dict_type": "a table",
}


def place_of(lines: dict[KeyPath, int], path: KeyPath) -> str:
    """Word a key path with its line; tables of an array are counted from 1: "line 12, walls[1].toe"."""
    words = ""
    for part in path:
        words += f"[{part + 1}]" if isinstance(part, int) else f".{part}" if words else part
    line = nearest_line(lines, path)
    return f"line {line}, {words}" if line else words


def problems_of(
    error: ValidationError, data: dict[str, Any], lines: dict[KeyPath, int], root: type[BaseModel]
) -> list[Problem]:
    """Turn a validation error into problems in the order of the file's lines."""
    found: dict[KeyPath, tuple[int, Problem]] = {}
    for item in error.errors(include_url=False):
        path = _real_path(item["loc"], data)
        line = nearest_line(lines, path) or 0
        problem, remedy = _words(dict(item), path, root)
        found.setdefault(path, (line, (place_of(lines, path), problem, remedy)))
    return [problem for _, problem in sorted(found.values(), key=lambda pair: pair[0])]


def _words(item: dict[str, Any], path: KeyPath, root: type[BaseModel]) -> tuple[str, str]:
    kind, message = str(item["type"]), str(item["msg"])
    key = path[-1] if path else ""
    if kind == "extra_forbidden":
        return _unknown_key(str(key), path, root)
    if kind == "missing":
        return f'"{key}" is missing', f"add {key}"
    if kind == "literal_error":
        wanted = str(item["ctx"]["expected"])
        near = get_close_matches(str(item["input"]), wanted.replace("'", "").replace(" or ", ", ").split(", "), 1)
        return f'"{item["input"]}" is not known here', f'did you mean "{near[0]}"?' if near else f"use one of {wanted}"
    if kind in _WANTED:
        return f"{_shown(item['input'])} is not {_WANTED[kind]}", f"write {_WANTED[kind]}"
    if kind in ("too_short", "too_long", "missing_argument"):
        return f"{_shown(item['input'])} has the wrong number of values", "a point is [x, y], a line [[x, y], [x, y]]"
    message = message.removeprefix("Value error, ")
    return f"{key}: {message}" if kind == "value" else message, "correct the value, or leave the key out"


def _unknown_key(key: str, path: KeyPath, root: type[BaseModel]) -> tuple[str, str]:
    here = [name for name, _ in _keys_of(_model_at(root, path[:-1]))]
    elsewhere = [table for table, names in _tables(root) if key in names]
    if elsewhere:
        return f'unknown key "{key}"', f"{key} stands in {elsewhere[0]}"
    near = get_close_matches(key.lower(), here, 1, 0.6)
    if near:
        return f'unknown key "{key}"', f'did you mean "{near[0]}"?'
    near = get_close_matches(key.lower(), here, 1, 0.0)
    nearest = f'the nearest known key is "{near[0]}"; ' if near else ""
    return f'unknown key "{key}"', f"{nearest}known here: {', '.join(here)}"


def _tables(root: type[BaseModel]) -> Iterator[tuple[str, list[str]]]:
    for name, annotation in _keys_of(root):
        model = _model_in(annotation)
        if model is not None:
            yield f"[{name}]", [key for key, _ in _keys_of(model)]


def _model_at(root: type[BaseModel], path: KeyPath) -> type[BaseModel]:
    model = root
    for part in path:
        inner = _model_in(dict(_keys_of(model)).get(str(part)))
        model = inner or model
    return model


def _keys_of(model: type[BaseModel]) -> list[tuple[str, Any]]:
    return [(field.alias or name, field.annotation) for name, field in model.model_fields.items()]


def _model_in(annotation: Any) -> type[BaseModel] | None:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return annotation
    return next((model for part in get_args(annotation) if (model := _model_in(part)) is not None), None)


def _real_path(loc: tuple[int | str, ...], data: Any) -> KeyPath:
    """Drop what the validator adds to a path, such as the name of the branch it tried."""
    path: KeyPath = ()
    for number, part in enumerate(loc):
        known = isinstance(data, dict) and part in data or isinstance(data, list) and isinstance(part, int)
        if known and (isinstance(data, dict) or int(part) < len(data)):
            data = data[part]
        elif number < len(loc) - 1:
            continue
        path = (*path, part)
    return path


def _shown(value: object) -> str:
    value = list(value) if isinstance(value, tuple) else value
    text = f'"{value}"' if isinstance(value, str) else str(value).lower() if isinstance(value, bool) else str(value)
    return text if len(text) <= 60 else text[:57] + "..."
