"""Where the files that ship with the program lie: in the wheel, or in a checkout beside the package."""

from __future__ import annotations

from pathlib import Path


def shipped_folder(kind: str) -> Path:
    """Folder of shipped files; kind is 'plugins', 'configs' or 'scenes'."""
    package = Path(__file__).resolve().parent
    installed = package / "shipped" / kind
    return installed if installed.is_dir() else package.parent / kind
