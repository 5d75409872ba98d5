"""Faults between keys of scenes, tools and rooms."""

from __future__ import annotations

from typing import Mapping

from .document import Finding
from .paths import Path

FORM_KEYS = {"straight": (), "bent": ("bend_deg", "bend_from_tip_mm"), "curved": ("curve_radius_mm",)}


def no_crosschecks(values: Mapping, path: Path) -> list[Finding]:
    """For kinds whose keys do not depend on one another."""
    return []


def eye_findings(eye: Mapping, path: Path) -> list[Finding]:
    """What no eye can be, as the eye's own rules see it."""
    from ..eye.measurements import eye_faults

    return [Finding(path + tuple(fault.key.split(".")), fault.message) for fault in eye_faults(eye)]


def medium_findings(medium: Mapping, path: Path) -> list[Finding]:
    """What the model's own rules refuse, once all its keys are there."""
    from ..optics.media import MEDIUM_KEYS, medium_faults

    keys = MEDIUM_KEYS.get(medium.get("model"), ())
    if not keys or any(key.required and key.name not in medium for key in keys):
        return []
    return [Finding(path + tuple(fault.key.split(".")), fault.message) for fault in medium_faults(medium)]


def scene_findings(scene: Mapping, path: Path) -> list[Finding]:
    """Every fault between the keys of a scene, its written-out definitions included."""
    from .kinds import KINDS

    findings = _target_findings(scene.get("target"), path + ("target",))
    for block, needed in (("eye", True), ("lens", True), ("scope", False), ("tool", True), ("room", False)):
        value = scene.get(block)
        if not isinstance(value, Mapping):
            continue
        if needed and "use" not in value and "definition" not in value:
            findings.append(Finding(path + (block, "use"), f"is missing: name of the {block}"))
        if "definition" in value:
            findings += KINDS[block].crosschecks(value["definition"], path + (block, "definition"))
    for name, medium in (scene.get("media") or {}).items():
        findings += KINDS["medium"].crosschecks(medium, path + ("media", name))
    scope = scene.get("scope") or {}
    focus = scope.get("focus_on")
    if isinstance(focus, Mapping) and "point_mm" not in focus:
        findings.append(Finding(path + ("scope", "focus_on"), "must be target, or {point_mm: [x, y, z]}"))
    return findings + _lens_findings(scene.get("lens"), path + ("lens",))


def _lens_findings(lens: Mapping | str | None, path: Path) -> list[Finding]:
    if not isinstance(lens, Mapping) or not isinstance(lens.get("definition"), Mapping):
        return []
    return pool_findings(lens, lens["definition"], path)


def pool_findings(lens: Mapping, definition: Mapping, path: Path) -> list[Finding]:
    """A pool lies on the cornea itself: no gap and no fluid under it."""
    if not is_pool(definition):
        return []
    return [Finding(path + (key,), "must be left out: this lens is a pool that lies on the cornea itself", at_key=True)
            for key in ("gap_um", "fluid") if lens.get(key) is not None]


def is_pool(definition: Mapping) -> bool:
    """Whether a lens borrows the eye's front surface as a face."""
    return any(face.get("shape") == "cornea" for body in definition.get("bodies") or []
               for face in body.get("faces") or [])


def _target_findings(target: Mapping | None, path: Path) -> list[Finding]:
    if not isinstance(target, Mapping):
        return []
    if "point_mm" in target:
        return [Finding(path + (key,), "is given beside point_mm; give a structure and its clock hour, or a point",
                        at_key=True) for key in ("structure", "clock", "across") if key in target]
    if "structure" in target and "clock" in target:
        return []
    missing = " and ".join(key for key in ("structure", "clock") if key not in target)
    return [Finding(path, f"needs {missing}, or point_mm alone")]


def tool_findings(tool: Mapping, path: Path) -> list[Finding]:
    """Keys of a tool that its form needs, and those that belong to another form."""
    form = tool.get("form", "straight")
    needed = FORM_KEYS.get(form, ())
    findings = [Finding(path + (key,), f"is missing: a {form} shaft needs it") for key in needed if key not in tool]
    for other, keys in FORM_KEYS.items():
        findings += [Finding(path + (key,), f"is for a {other} shaft; this one is {form}", at_key=True)
                     for key in keys if key in tool and key not in needed]
    if tool.get("tip_diameter_mm", 0.0) > tool.get("shaft_diameter_mm", float("inf")):
        findings.append(Finding(path + ("tip_diameter_mm",), "must be at most shaft_diameter_mm"))
    return findings
