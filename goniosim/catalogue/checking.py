"""Check nested values against declared keys; every fault, none raised."""

from __future__ import annotations

import difflib
import math
import re
from typing import Any, Callable, Mapping, Sequence

from ..declare import Key
from .document import UNREADABLE, Finding
from .paths import Path
from .scalars import why_no_number

NAME = re.compile(r"[a-z0-9]+(?:-[a-z0-9]+)*")

KeysAt = Callable[[Path, Mapping, Sequence[Key]], Sequence[Key]]
"""Keys of the mapping at a path, where they depend on what it holds (a face's shape, a medium's model)."""


def checked(value: Any, keys: Sequence[Key], path: Path = (),
            keys_at: KeysAt | None = None) -> tuple[dict, list[Finding]]:
    """Values with the declared kinds, and every fault.

    Numbers become floats; keys that are left out stay out; None counts as left out where None is the default.
    """
    checker = _Checker(keys_at or (lambda path, value, keys: keys))
    return checker.mapping(value, keys, path), checker.findings


def did_you_mean(word: str, words: Sequence[str]) -> str:
    """'Did you mean ...?' for the nearest word; empty where none is near."""
    near = difflib.get_close_matches(word, list(words), n=1, cutoff=0.6)
    return f"Did you mean '{near[0]}'?" if near else ""


def found(value: Any) -> str:
    """A wrong value as the reader wrote it."""
    if value is None:
        return "nothing"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, Mapping):
        return "a mapping"
    if isinstance(value, (list, tuple)):
        return f"a list of {len(value)}"
    words = repr(value)
    return words if len(words) <= 60 else words[:56] + "...'"


def is_number(value: Any) -> bool:
    """Whether a value is a finite number (true and false are none)."""
    return isinstance(value, (int, float)) and not isinstance(value, bool) and math.isfinite(value)


class _Checker:
    """Walks values and keys together and gathers findings."""

    def __init__(self, keys_at: KeysAt):
        self.keys_at = keys_at
        self.findings: list[Finding] = []

    def say(self, path: Path, message: str, at_key: bool = False) -> None:
        self.findings.append(Finding(path, message, at_key))

    def mapping(self, value: Any, keys: Sequence[Key], path: Path) -> dict:
        if not isinstance(value, Mapping):
            self.say(path, f"must be a mapping of keys; got {found(value)}")
            return {}
        keys = self.keys_at(path, value, keys)
        known = {key.name: key for key in keys}
        for name in value:
            if name not in known:
                self._unknown(path, str(name), list(known))
        clean = {}
        for key in keys:
            given = value.get(key.name)
            if key.name not in value:
                if key.required:
                    self.say(path + (key.name,), f"is missing: {key.meaning}")
            elif given is UNREADABLE or (given is None and key.default is None):
                continue
            else:
                before = len(self.findings)
                result = self.value(given, key, path + (key.name,))
                if result is not None or len(self.findings) == before:
                    clean[key.name] = result
        return clean

    def _unknown(self, path: Path, name: str, known: list[str]) -> None:
        near = difflib.get_close_matches(name, known, n=1, cutoff=0.6)
        hint = f"; did you mean '{near[0]}'?" if near else ""
        self.say(path + (name,), f"is not a known key{hint}", at_key=True)

    def value(self, value: Any, key: Key, path: Path) -> Any:
        """The value of one key in its declared kind; None where it is wrong."""
        return getattr(self, "_" + key.kind)(value, key, path)

    def _any(self, value: Any, key: Key, path: Path) -> Any:
        return value

    def _number(self, value: Any, key: Key, path: Path) -> float | None:
        rule = " ".join(word for word in ("must be a number", key.range_in_words()) if word)
        if not is_number(value):
            reason = why_no_number(value) if isinstance(value, str) else ""
            if isinstance(value, float):
                reason = " (numbers must be finite)"
            self.say(path, f"{rule}; got {found(value)}{reason}")
            return None
        if not _in_range(value, key):
            self.say(path, f"{rule}; got {value}")
            return None
        return float(value)

    def _integer(self, value: Any, key: Key, path: Path) -> int | None:
        if not isinstance(value, int) or isinstance(value, bool) or not _in_range(value, key):
            rule = " ".join(word for word in ("must be a whole number", key.range_in_words()) if word)
            self.say(path, f"{rule}; got {found(value)}")
            return None
        return value

    def _clock(self, value: Any, key: Key, path: Path) -> float | None:
        if not is_number(value) or not 0.0 < value <= 12.0:
            reason = why_no_number(value) if isinstance(value, str) else ""
            self.say(path, f"must be {key.range_in_words()}; got {found(value)}{reason}")
            return None
        return float(value)

    def _text(self, value: Any, key: Key, path: Path) -> str | None:
        if not isinstance(value, str) or not value.strip():
            got = "empty text" if isinstance(value, str) else found(value)
            self.say(path, f"must be text; got {got}")
            return None
        return value

    def _name(self, value: Any, key: Key, path: Path) -> str | None:
        if not isinstance(value, str) or not NAME.fullmatch(value):
            self.say(path, "must be a name of small letters, digits and single hyphens, such as "
                           f"'direct-face-48'; got {found(value)}")
            return None
        return value

    def _names(self, value: Any, key: Key, path: Path) -> list | None:
        return self._list(value, key, path, self._name, "names")

    def _texts(self, value: Any, key: Key, path: Path) -> list | None:
        return self._list(value, key, path, self._text, "texts")

    def _flag(self, value: Any, key: Key, path: Path) -> bool | None:
        if not isinstance(value, bool):
            self.say(path, f"must be true or false; got {found(value)}")
            return None
        return value

    def _choice(self, value: Any, key: Key, path: Path) -> str | None:
        if value not in key.choices:
            near = did_you_mean(value, key.choices) if isinstance(value, str) else ""
            self.say(path, f"must be {key.range_in_words()}; got {found(value)}{'. ' + near if near else ''}")
            return None
        return value

    def _numbers(self, value: Any, key: Key, path: Path) -> list | None:
        return self._list(value, key, path, self._number, "numbers")

    def _list(self, value: Any, key: Key, path: Path, one: Callable, what: str) -> list | None:
        """A list of one kind; `length` fixes how many."""
        wrong_length = key.length is not None and isinstance(value, (list, tuple)) and len(value) != key.length
        if not isinstance(value, (list, tuple)) or not value or wrong_length:
            count = f"{key.length} {what}" if key.length is not None else what
            unit = f", in {key.unit}" if key.unit else ""
            self.say(path, f"must be a list of {count}{unit}; got {found(value)}")
            return None
        rows = [one(row, key, path + (number,)) for number, row in enumerate(value) if row is not UNREADABLE]
        return rows if all(row is not None for row in rows) else None

    def _map(self, value: Any, key: Key, path: Path) -> dict | str | None:
        if isinstance(value, str) and value in key.choices:
            return value
        if key.choices and not isinstance(value, Mapping):
            self.say(path, f"must be {key.range_in_words()}, or a mapping of keys; got {found(value)}")
            return None
        return self.mapping(value, key.keys, path)

    def _maps(self, value: Any, key: Key, path: Path) -> list | None:
        if not isinstance(value, (list, tuple)) or not value:
            self.say(path, f"must be a list of mappings, at least one; got {found(value)}")
            return None
        return [self.mapping(row, key.keys, path + (number,)) for number, row in enumerate(value)
                if row is not UNREADABLE]


def _in_range(value: float, key: Key) -> bool:
    return not ((key.minimum is not None and value < key.minimum) or (key.maximum is not None and value > key.maximum)
                or (key.above is not None and value <= key.above) or (key.below is not None and value >= key.below))
