"""Paths into nested mappings: tuples of keys and list numbers, written bodies[0].faces[2].radius_mm."""

from __future__ import annotations

from typing import Any, Iterator, Mapping

Path = tuple


def dotted(path: Path) -> str:
    """A path as the reader sees it."""
    words = ""
    for step in path:
        if isinstance(step, int):
            words += f"[{step}]"
        else:
            words += f".{step}" if words else str(step)
    return words


def leaves(value: Any, path: Path = ()) -> Iterator[tuple[Path, Any]]:
    """Every leaf of a nested mapping in order: whatever is neither a mapping nor a list of mappings."""
    if isinstance(value, Mapping):
        for key, inner in value.items():
            yield from leaves(inner, path + (key,))
    elif isinstance(value, (list, tuple)) and value and all(isinstance(row, Mapping) for row in value):
        for number, row in enumerate(value):
            yield from leaves(row, path + (number,))
    else:
        yield path, value


def value_at(value: Any, path: Path) -> Any:
    """The value at a path; None where the way ends."""
    for step in path:
        if isinstance(value, Mapping):
            value = value.get(step)
        elif isinstance(value, (list, tuple)) and isinstance(step, int) and step < len(value):
            value = value[step]
        else:
            return None
    return value


def merged(base: Mapping, over: Mapping) -> dict:
    """The base with the values of another mapping put over it, mapping by mapping."""
    result = dict(base)
    for key, value in over.items():
        both = isinstance(value, Mapping) and isinstance(result.get(key), Mapping)
        result[key] = merged(result[key], value) if both else value
    return result
