"""Where plugins are looked for, and how one is found by its name.

Order: --plugins folders, $GONIOSIM_PLUGINS, the case's own folder, the shipped ones, installed
packages. The first place that holds the name wins.
"""

from __future__ import annotations

import os
import re
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path as FilePath
from typing import Iterator, Sequence

from ..errors import Misuse
from ..shipped import shipped_folder
from .checking import did_you_mean, found
from .document import Document, Finding
from .kinds import KINDS, advice_for, check_kind
from .packages import Package, installed_packages
from .reading import read_document, shown

VARIABLE = "GONIOSIM_PLUGINS"
ENDINGS = (".yaml", ".yml")
NAME_LINE = re.compile(rb"^name:[ \t]*[\"']?([A-Za-z0-9_-]+)", re.MULTILINE)
FOLDER_NAMES = tuple(kind.folder for kind in KINDS.values() if kind.folder)


@dataclass(frozen=True)
class Place:
    """A folder of plugins and what the reader calls it."""

    folder: FilePath
    called: str


@dataclass(frozen=True)
class Entry:
    """One plugin file: its kind, the name it gives itself, the file, and where it was found."""

    kind: str
    name: str
    path: FilePath
    place: Place


@dataclass(frozen=True)
class Plugin:
    """A checked plugin: its values as written in its file, and the document with their places."""

    kind: str
    name: str
    values: dict
    document: Document


class Catalogue:
    """Plugins in all places, looked up lazily.

    folders : the --plugins folders, in order. case_folder : the folder of the scene file, if any.
    Raises Misuse for a folder that does not exist.
    """

    def __init__(self, folders: Sequence[str | os.PathLike] = (), case_folder: FilePath | None = None):
        self.folders = tuple(folders)
        self.near = _near_places(folders, case_folder)
        self.shipped = Place(shipped_folder("plugins"), "shipped")

    @cached_property
    def packages(self) -> list[Package]:
        """Installed packages that offer plugins, broken ones included."""
        return installed_packages(FOLDER_NAMES)

    def places(self) -> Iterator[Place]:
        """All places in search order; packages are looked at last, and only when asked for."""
        if os.environ.get("GONIOSIM_STRICT_PLUGINS") == "1":
            self.packages  # a broken package stops the run whoever asks
        yield from self.near
        yield self.shipped
        for package in self.packages:
            if package.folder is not None:
                yield Place(package.folder, f"package {package.package} {package.version}")

    def entries(self, kind: str) -> Iterator[Entry]:
        """Every plugin file of a kind, in search order."""
        for place in self.places():
            for path in _files(place.folder / KINDS[kind].folder):
                yield Entry(kind, _name_in(path), path, place)
            if kind == "scene" and place is self.shipped:
                for path in _files(shipped_folder("scenes")):
                    yield Entry(kind, _name_in(path), path, place)

    def find(self, kind: str, name: str) -> Entry | None:
        """The first plugin of a name; None where there is none."""
        return next((entry for entry in self.entries(kind) if entry.name == name), None)

    def load(self, kind: str, name: str) -> Plugin | None:
        """The checked plugin of a name; None where there is none.

        Raises BadInput with every fault where its file is wrong.
        """
        entry = self.find(kind, name)
        return load_file(kind, entry.path) if entry else None

    def unknown(self, kind: str, name: str) -> str:
        """What to say of a name that is nowhere: the installed ones, the nearest, and broken packages."""
        names = list(dict.fromkeys(entry.name for entry in self.entries(kind)))
        words = [f"no {kind} named '{name}'. Installed: {', '.join(names) or 'none'}.", did_you_mean(name, names)]
        words += [f"({package.words()})" for package in self.packages if package.cause]
        return " ".join(word for word in words if word)


def load_file(kind: str, path: FilePath) -> Plugin:
    """Read and check one file of a kind; raises BadInput with every fault."""
    document = read_document(path)
    values = checked_document(kind, document)
    return Plugin(kind, values["name"], values, document)


def checked_document(kind: str, document: Document) -> dict:
    """Checked values of a document of a kind; raises BadInput with every fault."""
    values, findings = check_kind(KINDS[kind], document.value, in_file=bool(document.value_places))
    document.refuse(findings, advice_for(KINDS[kind], findings, document.value))
    return values


def kind_of(document: Document) -> str:
    """The kind that a document names; raises BadInput where it names none."""
    kind = document.value.get("goniosim") if isinstance(document.value, dict) else None
    if isinstance(kind, str) and kind in KINDS:
        return kind
    near = did_you_mean(kind, list(KINDS)) if isinstance(kind, str) else ""
    message = f"must be the first key and name the kind of file: {', '.join(KINDS)}; got {found(kind)}"
    document.refuse([Finding(("goniosim",), f"{message}{'. ' + near if near else ''}")])
    return ""


def _near_places(folders: Sequence[str | os.PathLike], case_folder: FilePath | None) -> list[Place]:
    places = []
    for folder in folders:
        if not FilePath(folder).is_dir():
            raise Misuse(f"--plugins {folder}: there is no such folder")
        places.append(Place(FilePath(folder), shown(FilePath(folder))))
    for folder in os.environ.get(VARIABLE, "").split(os.pathsep):
        if folder and not FilePath(folder).is_dir():
            raise Misuse(f"${VARIABLE} names {folder}: there is no such folder")
        if folder:
            places.append(Place(FilePath(folder), f"${VARIABLE}: {shown(FilePath(folder))}"))
    if case_folder is not None:
        places.append(Place(case_folder, "the case's own folder"))
    return places


def _files(folder: FilePath) -> list[FilePath]:
    try:
        return sorted(path for path in folder.iterdir() if path.suffix in ENDINGS and path.is_file())
    except OSError:
        return []


def _name_in(path: FilePath) -> str:
    """The name that a file gives itself, read without parsing; the file's own name where it gives none."""
    try:
        with path.open("rb") as file:
            found = NAME_LINE.search(file.read(4096))
    except OSError:
        found = None
    return found.group(1).decode() if found else path.stem
