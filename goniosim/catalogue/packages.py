"""Plugin folders in installed Python packages, found through entry points without importing the packages.

An entry point of the group `goniosim.plugins` names a package or a folder in one:
`acme = "acme_lenses"`, `acme = "acme_lenses.data"`. The folder holds lenses/, eyes/, media/ and so on.
"""

from __future__ import annotations

import importlib.util
import os
from dataclasses import dataclass
from importlib import metadata
from pathlib import Path as FilePath

from ..errors import BadInput, Fault

GROUP = "goniosim.plugins"
STRICT = "GONIOSIM_STRICT_PLUGINS"


@dataclass(frozen=True)
class Package:
    """An installed package that offers plugins: its folder, or the cause why there is none."""

    entry_point: str
    package: str
    version: str
    folder: FilePath | None
    cause: str = ""

    def words(self) -> str:
        """What is broken about it, for the reader."""
        return (f"plugins '{self.entry_point}' from package {self.package} {self.version} could not be loaded: "
                f"{self.cause}")


def installed_packages(folder_names: tuple[str, ...]) -> list[Package]:
    """Every package that offers plugins, each looked at alone; broken ones carry their cause.

    Raises BadInput for a broken one where GONIOSIM_STRICT_PLUGINS=1.
    """
    packages = [_package(point, folder_names) for point in metadata.entry_points(group=GROUP)]
    broken = [package for package in packages if package.cause]
    if broken and os.environ.get(STRICT) == "1":
        raise BadInput("the set of installed plugins", [Fault("", package.words()) for package in broken],
                       f"{STRICT}=1 makes every broken plugin an error.")
    return packages


def _package(point: metadata.EntryPoint, folder_names: tuple[str, ...]) -> Package:
    name, version = "unknown", "unknown"
    try:
        if point.dist is not None:
            name, version = point.dist.metadata["Name"], point.dist.version
        folder = _folder_of(point.value)
        if not any((folder / inner).is_dir() for inner in folder_names):
            wanted = ", ".join(f"{inner}/" for inner in folder_names)
            return Package(point.name, name, version, None, f"{point.value} holds none of {wanted}")
        return Package(point.name, name, version, folder)
    except Exception as error:  # whatever another package does wrong stays its own fault
        return Package(point.name, name, version, None, str(error) or type(error).__name__)


def _folder_of(value: str) -> FilePath:
    """Folder that an entry point's value names; only the top package is looked up, nothing is imported."""
    top, *inner = value.replace(":", ".").split(".")
    spec = importlib.util.find_spec(top)
    if spec is None or not spec.submodule_search_locations:
        raise ModuleNotFoundError(f"No package named '{top}'")
    for place in spec.submodule_search_locations:
        folder = FilePath(place).joinpath(*inner)
        if folder.is_dir():
            return folder
    raise FileNotFoundError(f"package '{top}' holds no folder '{'/'.join(inner)}'")
