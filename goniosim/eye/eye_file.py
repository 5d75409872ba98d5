"""Write eye files: all of them, or none."""

from __future__ import annotations

import os
import tempfile
from pathlib import Path
from typing import Any, Sequence

from ..errors import Misuse
from .biometry import TableEye
from .keys import EYE_KEYS


def eye_text(eye: TableEye) -> str:
    """An eye file's text: what was measured; everything else is left to the rules that complete an eye."""
    lines = [
        f"goniosim: eye\nschema: 1\nname: {eye.name}",
        f"title: {eye.side.capitalize()} eye, row {eye.row} of a biometry table",
        "source: measured, from a biometry table; what is left out is filled by rules",
    ]
    lines += [
        f"{key.name}: {_flow(eye.definition[key.name])}" for key in EYE_KEYS if key.name in eye.definition
    ]
    if eye.measured:
        lines.append(f"measured: [{', '.join(eye.measured)}]")
    return "\n".join(lines) + "\n"


def _flow(value: Any) -> str:
    """A value in YAML's one-line form. Keys and words here are plain names, numbers finite."""
    if isinstance(value, dict):
        return "{" + ", ".join(f"{key}: {_flow(inner)}" for key, inner in value.items()) + "}"
    return repr(value) if isinstance(value, float) else str(value)


def write_eyes(eyes: Sequence[TableEye], folder: Path, replace: bool = False) -> list[Path]:
    """Write one file an eye into a folder; returns their paths.

    Everything is first written to temporary names, so that a failure leaves the folder as it was. Raises
    Misuse where a file is in the way (unless replace) or the folder cannot be written.
    """
    targets = [folder / f"{eye.name}.yaml" for eye in eyes]
    in_the_way = [target.name for target in targets if target.exists() and not (replace and target.is_file())]
    if in_the_way:
        others = " and others" if len(in_the_way) > 5 else ""
        raise Misuse(
            f"{folder} holds {', '.join(in_the_way[:5])}{others} already; nothing was written. "
            "Name another folder with --into, or use --replace"
        )
    made = not folder.exists()
    written: list[Path] = []
    try:
        folder.mkdir(parents=True, exist_ok=True)
        for eye in eyes:
            written.append(_written_aside(folder, eye_text(eye)))
        for temporary, target in zip(written, targets):
            os.replace(temporary, target)
    except BaseException as error:
        for temporary in written:
            temporary.unlink(missing_ok=True)
        if made and folder.is_dir() and not any(folder.iterdir()):
            folder.rmdir()
        if isinstance(error, OSError):
            raise Misuse(f"{folder} cannot be written: {error.strerror or error}") from None
        raise
    return targets


def _written_aside(folder: Path, text: str) -> Path:
    handle, name = tempfile.mkstemp(dir=folder, prefix=".eye-", suffix=".tmp")
    with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
        file.write(text)
    os.chmod(name, 0o644)
    return Path(name)
