"""A scene file, with everything it names looked up and everything it leaves out filled: one plain mapping.

A resolved scene holds its definitions, so that it can be planned again without any plugin, to the same mapping,
marks and fingerprint.
"""

from __future__ import annotations

import copy
import hashlib
import json
import os
from dataclasses import dataclass
from pathlib import Path as FilePath
from typing import Any, Mapping, Sequence

from ..errors import BadInput, Fault
from .crosschecks import is_pool, pool_findings
from .cup_check import cup_findings
from .definitions import Definitions
from .document import Document
from .paths import Path, dotted, leaves
from .reading import read_document
from .rules import rest_on_eye, scene_blocks
from .search import ENDINGS, Catalogue, checked_document
from .settings import resolved_settings

HEADER = ("goniosim", "schema", "name", "title", "source")


@dataclass(frozen=True)
class ResolvedScene:
    """A scene with nothing left open.

    mapping : nested plain values, complete, keys in a fixed order.
    marks : dotted path of every leaf -> 'measured' | 'given' | 'assumed'.
    fingerprint : sha256 over mapping and marks, without name, title and source of the scene.
    notes : what the reader should know of what was filled in. where : the scene's file, or what it is called.
    """

    mapping: dict[str, Any]
    marks: dict[str, str]
    fingerprint: str
    notes: list[str]
    where: str


def resolve_scene(source: str | os.PathLike | Mapping[str, Any], plugin_folders: Sequence[str | os.PathLike] = (),
                  overrides: Mapping[str, Any] | None = None) -> ResolvedScene:
    """Resolve a scene file, the bare name of a scene, or a mapping.

    plugin_folders : looked in before all other places. overrides : dotted path -> value put in the place of the
    file's, such as {'scope.tilt_deg': 40.0, 'lens': 'none'}; checked like the file's.
    Raises BadInput with every fault of a file; Misuse where an override is at fault.
    """
    document, case_folder = _document_of(source, plugin_folders)
    catalogue = Catalogue(plugin_folders, case_folder)
    if overrides:
        _override(document, overrides)
    return _resolved(document, checked_document("scene", document), catalogue)


def _document_of(source: Any, plugin_folders: Sequence) -> tuple[Document, FilePath | None]:
    """The document of a scene and the folder that it lies in."""
    if isinstance(source, Mapping):
        return Document("the scene given", plain(source)), None
    path = FilePath(source)
    # A folder is no scene: a plan leaves one named after its scene, and the name still means the scene.
    folder_of_that_name = path.is_dir() and Catalogue(plugin_folders).find("scene", str(source)) is not None
    if not path.exists() or folder_of_that_name:
        path = _scene_by_name(str(source), plugin_folders)
    return read_document(path), path.parent


def _scene_by_name(name: str, plugin_folders: Sequence) -> FilePath:
    catalogue = Catalogue(plugin_folders)
    entry = catalogue.find("scene", name)
    if entry is None:
        if os.sep in name or name.endswith(ENDINGS):
            raise BadInput(name, [Fault("", "cannot be read: there is no such file")])
        raise BadInput(name, [Fault("", "is no file, and " + catalogue.unknown("scene", name))])
    return entry.path


def plain(value: Any) -> Any:
    """A value from Python as a file would give it: lists for tuples and arrays, plain numbers."""
    if isinstance(value, Mapping):
        return {str(key): plain(inner) for key, inner in value.items()}
    if isinstance(value, (list, tuple)):
        return [plain(row) for row in value]
    if hasattr(value, "tolist"):  # numpy arrays and numbers
        return plain(value.tolist())
    return value


def _override(document: Document, overrides: Mapping[str, Any]) -> None:
    """Put the command line's values into the document, and take out what followed from the old ones."""
    if not isinstance(document.value, dict):
        return
    value = copy.deepcopy(document.value)
    _drop_assumed(value)
    for key, given in overrides.items():
        path = tuple(key.split("."))
        given = plain(given)
        if path == ("lens",) and isinstance(given, str) and given != "none":
            old = value.get("lens") if isinstance(value.get("lens"), dict) else {}
            given = {**{name: kept for name, kept in old.items() if name != "definition"}, "use": given}
            path = ("lens", "use")
            value["lens"] = given
        else:
            _put(value, path, given)
        document.overridden.add(path)
    document.value = value


def _put(value: dict, path: Path, given: Any) -> None:
    for step in path[:-1]:
        if not isinstance(value.get(step), dict):
            value[step] = {}
        value = value[step]
    value[path[-1]] = given


def _drop_assumed(value: dict) -> None:
    """Leave a resolved scene's assumed values open again, so that the rules see the new ones."""
    marks = value.get("marks") if isinstance(value.get("marks"), dict) else {}
    for key, mark in marks.items():
        path = key.split(".")
        if mark != "assumed" or "definition" in path or path[0] in ("media", "settings"):
            continue
        inner = value
        for step in path[:-1]:
            inner = inner.get(step) if isinstance(inner, dict) else None
        if isinstance(inner, dict):
            inner.pop(path[-1], None)


def _resolved(document: Document, scene: dict, catalogue: Catalogue) -> ResolvedScene:
    """Look up, complete and mark a checked scene."""
    blocks, assumed = scene_blocks(scene)
    found = Definitions(document, scene, catalogue)
    found.look_up(blocks)
    document.refuse(cup_findings(blocks, found.values["eye"]), "More: goniosim plugins explain scene")
    _rest(document, blocks["lens"], found.values.get("lens"))
    found.look_up_media(blocks)
    for kind, definition in found.values.items():
        blocks[kind]["definition"] = definition
    settings, default_settings = resolved_settings(scene.get("settings"), found.values["room"].get("settings"))
    mapping = {
        "goniosim": "scene", "schema": scene["schema"], "name": scene["name"], "title": scene.get("title"),
        "source": scene.get("source"), **blocks, "media": found.media, "settings": settings,
    }
    marks = _marks(mapping, assumed | found.assumed | default_settings, found.measured)
    marks = _marks_kept(marks, scene.get("marks", {}), document)
    notes = list(scene.get("notes", [])) if "marks" in scene else found.notes
    return ResolvedScene(mapping, marks, fingerprint_of(mapping, marks), notes, document.where)


def _rest(document: Document, lens: dict | str, definition: Mapping | None) -> None:
    """Gap and fluid under the lens, once it is known whether it is a pool."""
    if definition is None or isinstance(lens, str):
        return
    if not document.is_overridden(("lens", "use")):
        document.refuse(pool_findings(lens, definition, ("lens",)), "More: goniosim plugins explain scene")
    rest_on_eye(lens, is_pool(definition))


def _marks(mapping: Mapping, assumed: set[Path], measured: set[Path]) -> dict[str, str]:
    """The mark of every leaf; what a rule filled is assumed, whatever the file said of its block."""
    marks = {}
    for path, _ in leaves(mapping):
        if path[0] in HEADER:
            continue
        starts = [path[:length] for length in range(1, len(path) + 1)]
        mark = "assumed" if any(start in assumed for start in starts) else "given"
        if mark == "given" and any(start in measured for start in starts):
            mark = "measured"
        marks[dotted(path)] = mark
    return marks


def _marks_kept(marks: dict[str, str], written: Mapping[str, str], document: Document) -> dict[str, str]:
    """The marks that a resolved scene file brings along, but for what the command line or new measurements changed."""
    changed = [dotted(path) for path in document.overridden]
    new_lens = ("lens", "use") in document.overridden

    def stays(key: str) -> bool:
        if new_lens and key.startswith("lens.definition"):
            return False
        return not any(key == over or key.startswith(over + ".") for over in changed)

    return {key: written[key] if key in written and mark != "measured" and stays(key) else mark
            for key, mark in marks.items()}


def fingerprint_of(mapping: Mapping[str, Any], marks: Mapping[str, str]) -> str:
    """sha256, as hex digits, over the canonical JSON of everything that the figures depend on."""
    inputs = {key: value for key, value in mapping.items() if key not in ("name", "title", "source")}
    text = json.dumps({"mapping": inputs, "marks": dict(marks)}, sort_keys=True, allow_nan=False,
                      separators=(",", ":"), ensure_ascii=True)
    return hashlib.sha256(text.encode()).hexdigest()
