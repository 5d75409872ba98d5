"""The kinds of file: their header, their keys, and where keys depend on what a mapping holds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Callable, Mapping, Sequence

from ..declare import Key
from ..scene import lens_keys, room_keys
from .checking import checked, did_you_mean, found
from .crosschecks import eye_findings, medium_findings, no_crosschecks, scene_findings, tool_findings
from .document import Finding
from .lens_check import face_keys, lens_findings
from .paths import Path

SCHEMA = 1
"""Newest version of the file format that this program reads."""


@dataclass(frozen=True)
class Kind:
    """One kind of file.

    folder : where plugins of the kind lie; empty where they are none. source_needed : title and source are required.
    own_keys : the keys after the header. keys_at : see `checking.KeysAt`. crosschecks : faults between keys.
    """

    name: str
    folder: str
    meaning: str
    own_keys: Callable[[], Sequence[Key]]
    keys_at: Callable[[Path, Mapping, Sequence[Key]], Sequence[Key]]
    crosschecks: Callable[[Mapping, Path], list[Finding]]
    source_needed: bool = True

    def header(self) -> tuple[Key, ...]:
        """Keys that open every file of the kind."""
        default = {} if self.source_needed else {"default": None}
        return (
            Key("goniosim", "choice", "kind of the file; the first key", choices=(self.name,)),
            Key("schema", "integer", "version of the file format", minimum=1, maximum=SCHEMA),
            Key("name", "name", "name by which other files call it"),
            Key("title", "text", "one line for the reader", **default),
            Key("source", "text", "where the values were published or measured", **default),
        )

    def keys(self) -> tuple[Key, ...]:
        """Header and own keys."""
        return (*self.header(), *self.own_keys())


def _eye_keys() -> tuple[Key, ...]:
    from ..eye.measurements import CUP, EYE_KEYS

    return (*EYE_KEYS, CUP, MEASURED)


def _medium_keys() -> tuple[Key, ...]:
    from ..optics.media import MEDIUM_KEYS

    return (Key("model", "choice", "how the index follows from the wavelength", choices=tuple(MEDIUM_KEYS)),)


def _medium_keys_at(path: Path, value: Mapping, keys: Sequence[Key]) -> Sequence[Key]:
    from ..optics.media import MEDIUM_KEYS

    if path:
        return keys
    model = value.get("model")
    more = MEDIUM_KEYS.get(model, ()) if isinstance(model, str) else ()
    return (*keys, *(key for key in more if key.name != "model"))


def _lens_keys_at(path: Path, value: Mapping, keys: Sequence[Key]) -> Sequence[Key]:
    return face_keys(value) if len(path) == 4 and path[2] == "faces" else keys


def _same_keys(path: Path, value: Mapping, keys: Sequence[Key]) -> Sequence[Key]:
    return keys


def _room_keys_at(path: Path, value: Mapping, keys: Sequence[Key]) -> Sequence[Key]:
    return room_keys.SETTINGS_KEYS if path == ("settings",) else keys


def _scene_keys_at(path: Path, value: Mapping, keys: Sequence[Key]) -> Sequence[Key]:
    if len(path) >= 2 and path[1] == "definition" and path[0] in KINDS:
        kind = KINDS[path[0]]
        return kind.keys_at(path[2:], value, kind.keys() if len(path) == 2 else keys)
    if path == ("eye", "measured"):
        return tuple(key for key in _eye_keys() if key is not MEASURED)
    if path[:1] == ("media",) and len(path) >= 2:
        return KINDS["medium"].keys_at(path[2:], value, KINDS["medium"].keys() if len(path) == 2 else keys)
    if path == ("media",):
        return [Key(name, "map", "a medium", default=None) for name in value]
    if path == ("marks",):
        return [Key(name, "choice", "how the value is known", default=None, choices=room_keys.MARKS) for name in value]
    if path == ("settings",):
        return room_keys.SETTINGS_KEYS
    return keys


MEASURED = Key("measured", "texts", "dotted keys of this file that were measured on this eye, such as chamber.depth_mm",
               default=None)

KINDS: dict[str, Kind] = {
    kind.name: kind for kind in (
        Kind("scene", "scenes", "a case: eye, lens, microscope, head, tool and target", lambda: room_keys.SCENE_KEYS,
             _scene_keys_at, scene_findings, source_needed=False),
        Kind("eye", "eyes", "an eye's measurements", _eye_keys, _same_keys, eye_findings),
        Kind("lens", "lenses", "a goniolens: bodies of one medium each, bounded by faces",
             lambda: lens_keys.LENS_KEYS, _lens_keys_at, lens_findings),
        Kind("medium", "media", "a medium's refractive index", _medium_keys, _medium_keys_at,
             medium_findings),
        Kind("scope", "scopes", "a microscope", lambda: room_keys.SCOPE_KEYS, _same_keys, no_crosschecks),
        Kind("tool", "tools", "an instrument", lambda: room_keys.TOOL_KEYS, _same_keys, tool_findings),
        Kind("room", "rooms", "an operating room and its habits", lambda: room_keys.ROOM_KEYS, _room_keys_at,
             no_crosschecks),
        Kind("settings", "", "floors and habits (configs/)", lambda: room_keys.SETTINGS_KEYS, _same_keys,
             no_crosschecks),
    )
}

PLUGIN_KINDS = tuple(kind for kind in KINDS if kind not in ("scene", "settings"))


def check_kind(kind: Kind, value: Any, in_file: bool = True) -> tuple[dict, list[Finding]]:
    """Checked values of a file of a kind, and every fault; a wrong kind or a newer schema is told alone."""
    if not isinstance(value, Mapping):
        return {}, [Finding((), f"must be a mapping that begins with goniosim: {kind.name}; got {found(value)}")]
    wrong = _wrong_file(kind, value, in_file)
    if wrong:
        return {}, wrong
    clean, findings = checked(value, kind.keys(), (), kind.keys_at)
    return clean, findings + _not_yet_told(kind.crosschecks(clean, ()), findings)


def _not_yet_told(later: list[Finding], told: list[Finding]) -> list[Finding]:
    """Faults between keys, without those that only follow from a fault already told at or below their place."""
    return [finding for finding in later
            if not any(other.path[: len(finding.path)] == finding.path for other in told)]


def _wrong_file(kind: Kind, value: Mapping, in_file: bool) -> list[Finding]:
    """The fault of a file that is of another kind, or newer than this program."""
    if "goniosim" not in value:
        return [Finding((), f"must begin with goniosim: {kind.name}, which names the kind of file")]
    said = value["goniosim"]
    if said != kind.name:
        if isinstance(said, str) and said in KINDS:
            return [Finding(("goniosim",), f"is a {said} file; a {kind.name} file is needed here")]
        near = did_you_mean(said, list(KINDS)) if isinstance(said, str) else ""
        return [Finding(("goniosim",), f"must be {kind.name}; got {found(said)}{'. ' + near if near else ''}")]
    if in_file and next(iter(value)) != "goniosim":
        return [Finding(("goniosim",), f"must be the first key: goniosim: {kind.name}", at_key=True)]
    schema = value.get("schema")
    if isinstance(schema, int) and not isinstance(schema, bool) and schema > SCHEMA:
        return [Finding(("schema",), f"is {schema}; this program reads schema {SCHEMA}. Update goniosim, or ask for "
                                     "the file in the older form")]
    return []


def advice_for(kind: Kind, findings: Sequence[Finding], value: Any) -> str:
    """The last line of a report: the keys accepted where an unknown one stands, and where to read more."""
    more = f"goniosim plugins explain {kind.name}"
    for finding in findings:
        if finding.at_key and finding.message.startswith("is not a known key"):
            keys = _keys_of(kind, finding.path[:-1], value)
            if keys:
                place = _block_words(kind, finding.path[:-1])
                return f"Keys {place} accepts: {', '.join(key.name for key in keys)}. More: {more}"
    return f"More: {more}"


def _keys_of(kind: Kind, path: Path, value: Any) -> Sequence[Key]:
    """Keys accepted by the mapping at a path."""
    keys: Sequence[Key] = kind.keys()
    keys = kind.keys_at((), value, keys)
    walked: Path = ()
    for step in path:
        value = value[step] if not isinstance(value, Mapping) else value.get(step)
        walked += (step,)
        if not isinstance(step, int):
            keys = next((key.keys for key in keys if key.name == step), ())
        if isinstance(value, Mapping):
            keys = kind.keys_at(walked, value, keys)
    return keys


def _block_words(kind: Kind, path: Path) -> str:
    names = [step for step in path if not isinstance(step, int)]
    singular = {"bodies": "a body", "faces": "a face"}
    return singular.get(names[-1], names[-1]) if names else f"a {kind.name} file"
