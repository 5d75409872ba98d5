"""Everything that a scene names: from the scene itself where it is written out, else from the catalogue."""

from __future__ import annotations

from typing import Any, Mapping

from ..errors import BadInput
from .document import Document, Finding
from .filling import filled
from .kinds import KINDS, MEASURED
from .paths import Path, leaves
from .search import Catalogue

OPAQUE = "opaque"  # stands for a medium and is none
AIR = {"goniosim": "medium", "schema": 1, "name": "air", "title": "Air, to which all indices are relative",
       "source": "by definition", "model": "constant", "index": 1.0}
WITHOUT_PLUGIN = (OPAQUE, AIR["name"])
HEADER = ("goniosim", "schema", "name", "title", "source")


class Definitions:
    """Looks up the plugins of one scene and keeps what is assumed and measured about them.

    values : block -> definition. media : name -> definition.
    assumed, measured : paths in the resolved mapping. notes : what the eye's rules said.
    """

    def __init__(self, document: Document, scene: Mapping[str, Any], catalogue: Catalogue):
        self.document, self.scene, self.catalogue = document, scene, catalogue
        self.values: dict[str, dict] = {}
        self.media: dict[str, dict] = {}
        self.assumed: set[Path] = set()
        self.measured: set[Path] = set()
        self.notes: list[str] = []
        self.findings: list[Finding] = []

    def look_up(self, blocks: Mapping[str, Any]) -> None:
        """Definitions of eye, lens, scope, tool and room; raises BadInput for every fault at once."""
        for kind in ("eye", "lens", "scope", "tool", "room"):
            if not isinstance(blocks[kind], Mapping):
                continue
            written = (self.scene.get(kind) or {}).get("definition")
            values, document = self._written_or_found(kind, written, blocks[kind]["use"], (kind, "use"))
            if values is None:
                continue
            if kind == "eye":
                self.values["eye"] = self._eye(values, document, blocks["eye"]["side"])
            else:
                self.values[kind] = self._filled(kind, values, (kind, "definition"))
        self._refuse()

    def look_up_media(self, blocks: Mapping[str, Any]) -> None:
        """Definitions of every medium that eye, lens and fluid name."""
        written = self.scene.get("media") or {}
        for name, path in self._media_named(blocks).items():
            given = AIR if name == AIR["name"] else written.get(name)
            values, _ = self._written_or_found("medium", given, name, path)
            if values is not None:
                self.media[name] = self._filled("medium", values, ("media", name))
        self._refuse()

    def _written_or_found(self, kind: str, written: Mapping | None, name: str, path: Path):
        """Checked values and their document; None and a finding where the name is unknown."""
        if written is not None:
            return written, self.document
        plugin = self.catalogue.load(kind, name)
        if plugin is None:
            self.findings.append(Finding(path, self.catalogue.unknown(kind, name)))
            return None, None
        return plugin.values, plugin.document

    def _refuse(self) -> None:
        self.document.refuse(self.findings, "More: goniosim plugins list, goniosim plugins explain scene")

    def _filled(self, kind_name: str, values: Mapping, path: Path) -> dict:
        kind = KINDS[kind_name]
        result, assumed = filled(values, kind.keys(), kind.keys_at)
        self.assumed |= {path + inner for inner in assumed}
        return result

    def _eye(self, values: Mapping, document: Document, side: str) -> dict:
        """The eye, completed by its own rules, with this patient's measurements put in."""
        from ..eye.measurements import complete, with_measured

        at = ("eye", "definition")
        over = self.scene["eye"].get("measured") or {}
        listed = [tuple(key.split(".")) for key in values.get(MEASURED.name, [])]
        own = {key: value for key, value in values.items() if key not in (*HEADER, MEASURED.name)}
        try:
            completed, assumed, notes = complete(with_measured(own, over), side)
        except BadInput as error:
            self._take_eye_faults(error, document, over)
            return {}
        self.notes = list(notes)
        self.measured = {at + path for path in (*listed, *(path for path, _ in leaves(over)))}
        self.assumed |= {at + tuple(key.split(".")) for key in assumed}
        return {**{key: values[key] for key in HEADER}, **completed}

    def _take_eye_faults(self, error: BadInput, document: Document, over: Mapping) -> None:
        """What the eye's own rules refuse, at its place: in the scene's measurements, else in the eye's own file."""
        paths = [tuple(fault.key.split(".")) for fault in error.faults]
        if over or document is self.document:
            start = ("eye", "measured") if over else ("eye", "definition")
            self.findings += [Finding(start + path, fault.message) for path, fault in zip(paths, error.faults)]
        else:
            document.refuse([Finding(path, fault.message) for path, fault in zip(paths, error.faults)], error.advice)

    def _media_named(self, blocks: Mapping[str, Any]) -> dict[str, Path]:
        """Every medium named, with the first path that names it."""
        from ..eye.measurements import is_cup, media_named

        named: dict[str, Path] = {}
        inside = ("cup", "water") if is_cup(self.values["eye"]) else ("media",)
        for name in media_named(self.values["eye"]):
            named.setdefault(name, ("eye", "definition", *inside))
        for number, body in enumerate(self.values.get("lens", {}).get("bodies", [])):
            named.setdefault(body["medium"], ("lens", "definition", "bodies", number, "medium"))
        if isinstance(blocks["lens"], Mapping) and blocks["lens"]["fluid"]:
            named.setdefault(blocks["lens"]["fluid"], ("lens", "fluid"))
        return {name: path for name, path in named.items() if name != OPAQUE}
