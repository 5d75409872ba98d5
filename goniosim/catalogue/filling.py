"""Fill what a file left out with the declared defaults, and say what was filled."""

from __future__ import annotations

from typing import Any, Mapping, Sequence

from ..declare import Key
from .checking import KeysAt
from .paths import Path

ONLY_IN_FILES = ("use", "definition", "measured")


def filled(values: Mapping, keys: Sequence[Key], keys_at: KeysAt, path: Path = ()) -> tuple[dict, set[Path]]:
    """Checked values in the order of their keys, defaults put in; and the paths that were filled.

    Keys whose default is None stay out.
    """
    result: dict = {}
    assumed: set[Path] = set()
    for key in keys_at(path, values, keys):
        at = path + (key.name,)
        if key.name in values:
            result[key.name], inner = _inside(values[key.name], key, keys_at, at)
            assumed |= inner
        elif not key.required and key.default is not None:
            result[key.name] = plain_default(key)
            assumed.add(at)
    return result, assumed


def _inside(value: Any, key: Key, keys_at: KeysAt, at: Path) -> tuple[Any, set[Path]]:
    if key.kind == "map" and isinstance(value, Mapping):
        return filled(value, key.keys, keys_at, at)
    if key.kind == "maps":
        rows = [filled(row, key.keys, keys_at, at + (number,)) for number, row in enumerate(value)]
        return [row for row, _ in rows], set().union(*(inner for _, inner in rows))
    return value, set()


def block(values: Mapping, keys: Sequence[Key], path: Path) -> tuple[dict, set[Path]]:
    """A block of a scene with every key: defaults put in, null where a rule will decide; and what was filled."""
    result, assumed = {}, set()
    for key in keys:
        if key.name in ONLY_IN_FILES:
            continue
        result[key.name] = values.get(key.name, plain_default(key))
        if key.name not in values:
            assumed.add(path + (key.name,))
    return result, assumed


def plain_default(key: Key) -> Any:
    """The default as plain data of a file: lists for tuples."""
    return list(key.default) if isinstance(key.default, tuple) else key.default
