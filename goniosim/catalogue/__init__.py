"""Files of this program: strict YAML, plugins by name, resolved scenes. The only importer of yaml."""

from __future__ import annotations

from .resolve import ResolvedScene, resolve_scene
from .writing import resolved_text, write_resolved_scene

__all__ = ["ResolvedScene", "resolve_scene", "resolved_text", "write_resolved_scene"]
