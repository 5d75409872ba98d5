"""What `goniosim plugins explain` says: every key with unit, range, default and meaning, from the declarations."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Sequence

from ..declare import Key
from .kinds import KINDS
from .search import Plugin
from .settings import default_settings
from .shapes import BrokenShape, shape_named, shape_names

KIND_WORDS = {
    "number": "number", "integer": "whole number", "text": "text", "texts": "list of texts", "name": "name",
    "names": "list of names", "flag": "true or false", "choice": "one of", "numbers": "list of numbers",
    "map": "mapping", "maps": "list of mappings", "clock": "clock hour", "any": "any value",
}


@dataclass(frozen=True)
class Block:
    """Keys that stand together: what the block is called, and its keys."""

    title: str
    keys: tuple[Key, ...]


def blocks_of(kind_name: str) -> list[Block]:
    """Every block of keys that a file of a kind may hold."""
    kind = KINDS[kind_name]
    blocks = [Block(f"a {kind_name} file", kind.keys())]
    for key in kind.own_keys():
        blocks += _inner(key, key.name)
    if kind_name == "lens":
        blocks += [Block(f"a face of shape {name}, beside the common keys", shape.keys)
                   for name, shape in _shapes().items()]
        blocks.append(Block("a face of shape cornea: name, shape and side only", ()))
    if kind_name == "medium":
        blocks += [Block(f"a medium of model {model}", tuple(key for key in keys if key.name != "model"))
                   for model, keys in _models().items()]
    return blocks


def _shapes() -> dict:
    """Every shape that can be used; a broken one is told by the file that names it."""
    shapes = {}
    for name in shape_names():
        try:
            shapes[name] = shape_named(name)
        except BrokenShape:
            continue
    return shapes


def _models() -> dict:
    from ..optics.media import MEDIUM_KEYS

    return MEDIUM_KEYS


def _inner(key: Key, path: str) -> list[Block]:
    """Blocks inside a key that holds mappings."""
    if not key.keys:
        return []
    called = {"map": path, "maps": f"each of {path}"}[key.kind]
    blocks = [Block(called, key.keys)]
    for inner in key.keys:
        blocks += _inner(inner, f"{path}.{inner.name}" if key.kind == "map" else f"{path}[].{inner.name}")
    return blocks


def key_row(key: Key) -> dict[str, Any]:
    """One key as plain data: name, kind, unit, range, default, meaning, source."""
    return {
        "name": key.name, "kind": KIND_WORDS[key.kind], "unit": key.unit or None,
        "length": key.length, "range": key.range_in_words() or None, "required": key.required,
        "default": None if key.required else (list(key.default) if isinstance(key.default, tuple) else key.default),
        "meaning": key.meaning, "source": key.source or None,
    }


def explained(kind_name: str) -> dict[str, Any]:
    """A kind as plain data, for --json."""
    kind = KINDS[kind_name]
    result = {
        "kind": kind_name, "meaning": kind.meaning,
        "blocks": [{"title": block.title, "keys": [key_row(key) for key in block.keys]}
                   for block in blocks_of(kind_name)],
    }
    if kind_name == "settings":
        result["in_force"] = default_settings()
    return result


def explained_text(kind_name: str) -> str:
    """A kind for the reader."""
    kind = KINDS[kind_name]
    folder = f"; plugins of this kind lie in {kind.folder}/" if kind.folder else ""
    lines = [f"{kind_name}: {kind.meaning}{folder}"]
    for block in blocks_of(kind_name):
        lines += ["", block.title, *(_key_line(key) for key in block.keys)]
    if kind_name == "settings":
        lines += ["", "in force unless a room or a scene says otherwise", *_value_lines(default_settings(), "  ")]
    return "\n".join(lines)


def _key_line(key: Key) -> str:
    """'  radius_mm  number greater than 0 mm; required: radius of the cylinder'."""
    rule = " ".join(word for word in (KIND_WORDS[key.kind], _range_words(key)) if word)
    if key.kind == "clock":
        rule = key.range_in_words()
    source = f" [{key.source}]" if key.source else ""
    return f"  {key.name:<20} {rule}; {_default_words(key)}: {key.meaning}{source}"


def _range_words(key: Key) -> str:
    words = key.range_in_words()
    if key.kind == "map" and key.choices:
        return f"or {words}"
    if key.unit and key.unit not in words.split():
        words = f"{words} in {key.unit}".strip()
    return f"({key.length}) {words}".strip() if key.length else words


def _default_words(key: Key) -> str:
    if key.required:
        return "required"
    if key.default is None:
        return "may be left out"
    default = list(key.default) if isinstance(key.default, tuple) else key.default
    if isinstance(default, float):
        default = f"{default:g}"
    return f"default {default}{' ' + key.unit if key.unit else ''}"


def plugin_text(plugin: Plugin) -> str:
    """A plugin for the reader: its title, its source, and its values."""
    values = plugin.values
    lines = [f"{plugin.kind} {plugin.name}: {values.get('title')}", f"source: {values.get('source')}",
             f"file: {plugin.document.where}"]
    rest = {key: value for key, value in values.items()
            if key not in ("goniosim", "schema", "name", "title", "source")}
    if plugin.kind == "lens":
        return "\n".join(lines + geometry_lines(rest["bodies"]))
    return "\n".join(lines + _value_lines(rest, ""))


def geometry_lines(bodies: Sequence[dict]) -> list[str]:
    """Bodies and faces of a lens, one face a line."""
    lines = []
    for body in bodies:
        lines.append(f"body {body['name']}, {body['medium']}")
        for face in body["faces"]:
            shape = face.get("shape", "shared with its neighbour")
            rest = ", ".join(f"{key} {_plain(value)}" for key, value in face.items()
                             if key not in ("name", "shape", "side"))
            lines.append(f"  {face['name']:<14} {shape}, body {face['side']}{'; ' + rest if rest else ''}")
    return lines


def _value_lines(values: dict, indent: str) -> list[str]:
    lines = []
    for key, value in values.items():
        if isinstance(value, dict):
            lines += [f"{indent}{key}", *_value_lines(value, indent + "  ")]
        elif value is not None:
            lines.append(f"{indent}{key} {_plain(value)}")
    return lines


def _plain(value: Any) -> str:
    if isinstance(value, float):
        return f"{value:g}"
    if isinstance(value, list):
        return "[" + ", ".join(_plain(row) for row in value) + "]"
    return str(value).lower() if isinstance(value, bool) else str(value)
