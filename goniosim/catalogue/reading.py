"""Strict YAML: plain values with the line and column of each; reading runs no code and guesses nothing.

The parser's events are turned into values here, so that keys given twice, anchors, tags, deep nesting
and several documents are refused at their places.
"""

from __future__ import annotations

import os
import re
from pathlib import Path as FilePath
from typing import Any, Iterator

import yaml

from ..errors import BadInput, Fault
from .document import UNREADABLE, Document
from .paths import Path, dotted
from .scalars import meaning_of

MAX_BYTES = 1_000_000
MAX_DEPTH = 20
MAX_FAULTS = 200  # reading stops there
TOO_DEEP = f"is nested more than {MAX_DEPTH} deep"

UNPRINTABLE = re.compile("[^\t\n\r\x20-\x7e\x85\xa0-\ud7ff\ue000-\ufefe\uff00-\ufffd\U00010000-\U0010ffff]")

_Loader = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


def read_document(path: FilePath) -> Document:
    """Read a YAML file; raises BadInput where no values can be had from it at all."""
    where = shown(path)
    return read_text(_text_of(path, where), where)


def read_text(text: str, where: str) -> Document:
    """Read YAML text; faults that leave the rest readable are kept in the document."""
    strange = UNPRINTABLE.search(text)
    if strange:
        line, column = _line_and_column(text, strange.start())
        raise BadInput(where, [Fault("", f"holds the control character {strange.group()!r}; "
                                         "save it as plain text", line, column)])
    return _Composer(text, where).document()


def shown(path: FilePath) -> str:
    """A path as the reader would write it: relative where it lies below the current folder."""
    try:
        return str(path.resolve().relative_to(FilePath.cwd().resolve()))
    except (ValueError, OSError):
        return str(path)


def _text_of(path: FilePath, where: str) -> str:
    try:
        if path.is_dir():
            raise BadInput(where, [Fault("", "is a folder; a file is needed")])
        if os.path.getsize(path) > MAX_BYTES:
            raise BadInput(where, [Fault("", f"is larger than {MAX_BYTES // 1000} kB; files of this kind are small")])
        return path.read_bytes().decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line, column = _byte_place(error.object, error.start)
        raise BadInput(where, [Fault("", "is not UTF-8 text; save it as UTF-8", line, column)]) from None
    except (OSError, ValueError) as error:
        cause = getattr(error, "strerror", None) or str(error)
        raise BadInput(where, [Fault("", f"cannot be read: {cause}")]) from None


def _byte_place(data: bytes, at: int) -> tuple[int, int]:
    before = data[:at]
    return before.count(b"\n") + 1, at - (before.rfind(b"\n") + 1) + 1


def _line_and_column(text: str, at: int) -> tuple[int, int]:
    return text.count("\n", 0, at) + 1, at - (text.rfind("\n", 0, at) + 1) + 1


def _place(mark: Any) -> tuple[int, int]:
    return mark.line + 1, mark.column + 1


class _Composer:
    """Turns the events of one text into a document."""

    def __init__(self, text: str, where: str):
        self.text = text
        self.found = Document(where, None)
        self.events = self._events()

    def document(self) -> Document:
        """Values, places and faults of the text."""
        next(self.events)  # start of the stream
        event = next(self.events)
        if isinstance(event, yaml.StreamEndEvent):
            self._stop("is empty")
        self.found.value = self._node(next(self.events), (), 0)
        next(self.events)  # end of the document
        event = next(self.events)
        if not isinstance(event, yaml.StreamEndEvent):
            self._note("", "a second document begins here; a file holds one", event)
        return self.found

    def _events(self) -> Iterator[Any]:
        """The parser's events; what it cannot read becomes a fault."""
        try:
            yield from yaml.parse(self.text, Loader=_Loader)
        except yaml.MarkedYAMLError as error:
            self._stop(self._syntax_words(error), error.problem_mark or error.context_mark)
        except yaml.YAMLError as error:
            self._stop(f"cannot be read as YAML: {' '.join(str(error).split())}")

    def _syntax_words(self, error: yaml.MarkedYAMLError) -> str:
        mark = error.problem_mark
        if mark is not None:
            lines = self.text.splitlines()
            line = lines[mark.line] if mark.line < len(lines) else ""
            if "\t" in line[: mark.column + 1]:
                return "a tab stands here; indent with spaces"
        if "nesting depth" in (error.problem or ""):
            return TOO_DEEP
        parts = [part for part in (error.context, error.problem) if part]
        return "cannot be read as YAML: " + ", ".join(parts)

    def _node(self, event: Any, path: Path, depth: int) -> Any:
        self.found.value_places[path] = _place(event.start_mark)
        if isinstance(event, yaml.AliasEvent):
            self._no_anchors(event)
            return UNREADABLE
        if event.anchor is not None:
            self._no_anchors(event)
        if event.tag is not None:
            self._note(dotted(path), f"carries the tag {event.tag}; tags are not used in these files", event)
        if isinstance(event, yaml.ScalarEvent):
            return self._scalar(event, path)
        if depth >= MAX_DEPTH:
            self._stop(TOO_DEEP, event.start_mark, dotted(path[:1]))
        if isinstance(event, yaml.SequenceStartEvent):
            return self._sequence(path, depth)
        return self._mapping(path, depth)

    def _scalar(self, event: Any, path: Path) -> Any:
        plain = event.style in (None, "")
        value = meaning_of(event.value) if plain and event.tag is None else event.value
        if value in (float("inf"), float("-inf")):
            self._note(dotted(path), "is too large a number", event)
            return UNREADABLE
        return UNREADABLE if event.tag is not None else value

    def _sequence(self, path: Path, depth: int) -> list:
        rows: list = []
        while not isinstance(event := next(self.events), yaml.SequenceEndEvent):
            rows.append(self._node(event, path + (len(rows),), depth + 1))
        return rows

    def _mapping(self, path: Path, depth: int) -> dict:
        values: dict = {}
        while not isinstance(event := next(self.events), yaml.MappingEndEvent):
            if not isinstance(event, yaml.ScalarEvent):
                self._stop("a key must be a word", event.start_mark, dotted(path))
            key = path + (event.value,)
            if event.value in values:
                first = self.found.key_places[key][0]
                self._note(dotted(key), f"is given twice (first on line {first})", event)
                kept = self.found.value_places[key]
                self._node(next(self.events), key, depth + 1)
                self.found.value_places[key] = kept
                continue
            self.found.key_places[key] = _place(event.start_mark)
            values[event.value] = self._node(next(self.events), key, depth + 1)
        return values

    def _no_anchors(self, event: Any) -> None:
        message = "anchors (&) and aliases (*) are not used in these files; write the values out"
        if not any(fault.message == message for fault in self.found.faults):
            self._note("", message, event)

    def _note(self, key: str, message: str, event: Any) -> None:
        self.found.faults.append(Fault(key, message, *_place(event.start_mark)))
        if len(self.found.faults) >= MAX_FAULTS:
            self.found.refuse([])

    def _stop(self, message: str, mark: Any = None, key: str = "") -> None:
        """Give up on the text: nothing after this can be read."""
        self.found.faults.append(Fault(key, message, *(_place(mark) if mark is not None else (None, None))))
        self.found.refuse([])
