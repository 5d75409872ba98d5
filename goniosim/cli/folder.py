"""A plan's folder: written whole beside its place, then put there in one step."""

from __future__ import annotations

import json
import os
import shutil
import tempfile
from pathlib import Path
from typing import Mapping

from ..errors import Misuse

PLAN_FILE = "plan.json"
PLAN_FILES = (PLAN_FILE, "resolved-scene.yaml", "cross-section.svg")
"""Names of all files that a plan writes; a folder that holds anything else is not renewed."""


def write_plan_folder(folder: Path, files: Mapping[str, str]) -> None:
    """Write files (name -> text) as a folder; a folder that a plan wrote before is renewed as a whole.

    Raises Misuse, with nothing left behind, where something else is in the way or the place cannot be
    written.
    """
    folder = Path(os.path.abspath(folder))
    refuse_what_is_in_the_way(folder)
    temporary = None
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        temporary = Path(tempfile.mkdtemp(dir=folder.parent, prefix=f".{folder.name}."))
        os.chmod(temporary, 0o755)
        for name, text in files.items():
            (temporary / name).write_text(text, encoding="utf-8", newline="\n")
        _swap(temporary, folder)
    except OSError as error:
        raise Misuse(
            f"the folder {folder.name} cannot be written in {folder.parent}: {error.strerror or error}; "
            "choose another with --into DIR"
        ) from None
    finally:
        if temporary is not None:
            shutil.rmtree(temporary, ignore_errors=True)


def refuse_what_is_in_the_way(folder: Path) -> None:
    """Raise Misuse where a folder's place holds something that no plan wrote."""
    if not os.path.lexists(folder):
        return
    advice = "it is left alone; choose another folder with --into DIR"
    if folder.is_symlink() or not folder.is_dir():
        raise Misuse(f"{folder.name} is in the way and is not a folder; {advice}")
    try:
        names = sorted(os.listdir(folder))
    except OSError as error:
        raise Misuse(
            f"the folder {folder.name} cannot be read: {error.strerror or error}; {advice}"
        ) from None
    strangers = [name for name in names if name not in PLAN_FILES]
    if strangers:
        raise Misuse(f"the folder {folder.name} holds {strangers[0]}, which no plan wrote; {advice}")
    if names and not _is_plan(folder / PLAN_FILE):
        raise Misuse(
            f"the folder {folder.name} was not written by a plan: it holds no {PLAN_FILE} of one; {advice}"
        )


def _is_plan(path: Path) -> bool:
    try:
        with open(path, encoding="utf-8") as file:
            return json.load(file).get("goniosim") == "plan"
    except (OSError, ValueError, AttributeError):
        return False


def _swap(new: Path, place: Path) -> None:
    """Put a folder in its place; an older one is moved aside first, and back if that fails."""
    if not place.exists():
        os.rename(new, place)
        return
    aside = Path(tempfile.mkdtemp(dir=place.parent, prefix=f".{place.name}.old."))
    try:
        os.rename(place, aside / place.name)
        try:
            os.rename(new, place)
        except BaseException:  # Ctrl-C too
            if not place.exists():
                os.rename(aside / place.name, place)
            raise
    finally:
        shutil.rmtree(aside, ignore_errors=True)
