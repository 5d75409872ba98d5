"""List and check plugins for the reader: each alone, so that a broken one hides no other."""

from __future__ import annotations

from pathlib import Path as FilePath
from typing import Any, Sequence

from ..errors import BadInput, Fault
from .definitions import WITHOUT_PLUGIN
from .document import Finding
from .kinds import PLUGIN_KINDS
from .paths import Path
from .reading import read_document, shown
from .resolve import resolve_scene
from .search import ENDINGS, FOLDER_NAMES, Catalogue, checked_document, kind_of, load_file


def listed(catalogue: Catalogue, kinds: Sequence[str]) -> tuple[list[dict[str, Any]], list[str]]:
    """Every plugin of some kinds as plain rows, and what is broken about installed packages."""
    rows = []
    for kind in kinds:
        seen: set[str] = set()
        for entry in catalogue.entries(kind):
            row = {"kind": kind, "name": entry.name, "title": None, "file": shown(entry.path),
                   "from": entry.place.called, "hidden": entry.name in seen, "broken": False, "cause": None}
            try:
                row["title"] = load_file(kind, entry.path).values["title"]
            except BadInput as error:
                row.update(broken=True, cause=_cause(error))
            seen.add(entry.name)
            rows.append(row)
    return rows, [package.words() for package in catalogue.packages if package.cause]


def _cause(error: BadInput) -> str:
    first = error.faults[0]
    place = f"line {first.line}, " if first.line is not None else ""
    return f"{place}{first.key} {first.message}.".replace("  ", " ")


def check_all(names: Sequence[str], catalogue: Catalogue) -> list[dict[str, Any]]:
    """Check files, every file of folders, plugins by name and installed packages; one plain row each."""
    results = []
    for name in names:
        files = _files_of(name, catalogue)
        results += [_checked(path, catalogue) for path in files]
        results += [_row(name, None, package.words()) for package in catalogue.packages
                    if package.cause and name in (package.package, package.entry_point)]
        if not results or (not files and results[-1]["file"] != name):
            results.append(_row(name, None, _unknown_words(name, catalogue)))
    return results


def _files_of(name: str, catalogue: Catalogue) -> list[FilePath]:
    """Files that a word on the command line means."""
    path = FilePath(name)
    if path.is_dir():
        return [file for file in sorted(path.rglob("*")) if file.suffix in ENDINGS and file.is_file()
                and (file.parent == path or file.parent.name in (*FOLDER_NAMES, "scenes", "configs"))]
    if path.exists():
        return [path]
    files = [entry.path for kind in (*PLUGIN_KINDS, "scene") if (entry := catalogue.find(kind, name))]
    for package in catalogue.packages:
        if package.folder is not None and name in (package.package, package.entry_point):
            files += _files_of(str(package.folder), catalogue)
    return files


def _checked(path: FilePath, catalogue: Catalogue) -> dict[str, Any]:
    """The outcome of checking one file; a scene is resolved, so that all it names is checked with it."""
    kind = None
    try:
        document = read_document(path)
        kind = kind_of(document)
        values = checked_document(kind, document)
        document.refuse(_unknown_media(kind, values, catalogue), "More: goniosim plugins list medium")
        if kind == "scene":
            resolve_scene(path, catalogue.folders)
    except BadInput as error:
        return _row(shown(path), kind, error.report(), error.faults)
    return _row(shown(path), kind)


def _unknown_media(kind: str, values: dict[str, Any], catalogue: Catalogue) -> list[Finding]:
    """Media that a lens or an eye names and that are nowhere to be found."""
    named: list[tuple[Path, str]] = []
    if kind == "lens":
        named = [(("bodies", number, "medium"), body["medium"]) for number, body in enumerate(values["bodies"])]
    elif kind == "eye":
        named = [(("media", tissue), name) for tissue, name in values.get("media", {}).items()]
    return [Finding(path, catalogue.unknown("medium", name)) for path, name in named
            if name not in WITHOUT_PLUGIN and catalogue.find("medium", name) is None]


def _row(file: str, kind: str | None, report: str | None = None, faults: Sequence[Fault] = ()) -> dict[str, Any]:
    return {"file": file, "kind": kind, "ok": report is None, "report": report,
            "faults": [{"key": fault.key, "message": fault.message, "line": fault.line, "column": fault.column}
                       for fault in faults]}


def _unknown_words(name: str, catalogue: Catalogue) -> str:
    if FilePath(name).is_dir():
        return f"{name} holds no YAML file of this program"
    return f"{name} is no file, no folder and no plugin's name; goniosim plugins list shows the names"
