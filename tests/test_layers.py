"""Imports point one way, and only the catalogue reads YAML."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

import goniosim

PACKAGE = Path(goniosim.__file__).parent
BASE = {"errors", "units", "frames", "declare", "cautions", "shipped"}
MAY_IMPORT = {
    **{name: BASE for name in BASE},
    "optics": BASE, "faces": BASE, "kernels": BASE,
    "scene": BASE | {"faces", "kernels", "optics"},
    "eye": BASE | {"faces", "kernels", "optics", "scene"},
    "catalogue": BASE | {"faces", "optics", "scene", "eye"},
    "sight": BASE | {"faces", "kernels", "optics", "scene", "eye"},
    "planning": BASE | {"faces", "kernels", "optics", "scene", "eye", "sight"},
    "show": BASE | {"faces", "kernels", "optics", "scene", "eye", "sight", "planning"},
    "testing": BASE | {"faces", "kernels", "optics", "scene"},
}
"""What each package may import from the program itself, its own files apart. cli and verify sit on top of all."""
ON_TOP = {"cli", "verify", "__init__"}
LIBRARY_HOMES = {"yaml": {"catalogue"}, "vtkmodules": {"show"}, "vtk": {"show"}, "numba": {"kernels"}}

FILES = sorted(PACKAGE.rglob("*.py"))


def imported(path: Path):
    """Names of modules that a file imports, relative ones resolved to dotted names of the package."""
    inside = path.relative_to(PACKAGE.parent).with_suffix("").parts
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.level:
            above = inside[: len(inside) - node.level]
            stem = ".".join([*above, *([node.module] if node.module else [])])
            yield from ([stem] if node.module else [f"{stem}.{alias.name}" for alias in node.names])
        elif isinstance(node, ast.ImportFrom):
            yield node.module


@pytest.mark.parametrize("path", FILES, ids=lambda path: str(path.relative_to(PACKAGE)))
def test_imports_point_one_way(path):
    home = path.relative_to(PACKAGE).parts[0].removesuffix(".py")
    for name in imported(path):
        parts = name.split(".")
        if parts[0] in LIBRARY_HOMES:
            assert home in LIBRARY_HOMES[parts[0]], f"{name} may be imported in {LIBRARY_HOMES[parts[0]]} only"
        if parts[0] != "goniosim" or len(parts) < 2 or home in ON_TOP or parts[1] in (home, "__version__"):
            continue
        assert parts[1] in MAY_IMPORT[home], f"{home} may not import {name}"


def test_the_table_knows_every_package():
    homes = {path.relative_to(PACKAGE).parts[0].removesuffix(".py") for path in FILES}
    assert homes == set(MAY_IMPORT) | ON_TOP
