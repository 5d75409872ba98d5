"""Floors and habits: configs/default.yaml, replaced key by key by the room's and then by the scene's."""

from __future__ import annotations

from functools import lru_cache
from typing import Any, Mapping, Sequence

from ..declare import Key
from ..scene.room_keys import SETTINGS_KEYS
from ..shipped import shipped_folder
from .paths import Path, leaves, merged, value_at
from .search import load_file

DEFAULT_FILE = "default.yaml"


@lru_cache(maxsize=1)
def default_settings() -> dict[str, Any]:
    """The shipped settings, every key of them (null where the file says nothing)."""
    values = load_file("settings", shipped_folder("configs") / DEFAULT_FILE).values
    return _every_key(values, SETTINGS_KEYS)


def _every_key(values: Mapping, keys: Sequence[Key]) -> dict[str, Any]:
    return {key.name: _every_key(values.get(key.name) or {}, key.keys) if key.keys else values.get(key.name)
            for key in keys}


def resolved_settings(scene: Mapping | None, room: Mapping | None) -> tuple[dict[str, Any], set[Path]]:
    """Settings in force, and the paths that neither scene nor room gave."""
    given = merged(room or {}, scene or {})
    settings = merged(default_settings(), given)
    assumed = {("settings", *path) for path, _ in leaves(settings) if value_at(given, path) is None}
    return settings, assumed
