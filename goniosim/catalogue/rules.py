"""The rules that decide what a scene leaves open: seat, turn, lens mark, entry.

Each is common practice; what a rule decides is marked assumed.
"""

from __future__ import annotations

from typing import Any, Mapping

from ..frames import clock_of, nasal_clock
from ..scene import room_keys
from .filling import block
from .paths import Path

DEFAULT_GAP_UM = 20.0
DEFAULT_FLUID = "saline"
DEFAULT_ACROSS = 0.5
DEFAULT_SCOPE = "stereo-200"
DEFAULT_ROOM = "plain-room"


def opposite(clock: float) -> float:
    """The clock hour across the eye."""
    return clock - 6.0 if clock > 6.0 else clock + 6.0


def scene_blocks(scene: Mapping[str, Any]) -> tuple[dict, set[Path]]:
    """Every block of a checked scene, complete but for definitions; and the paths that rules or defaults filled."""
    side = scene["eye"]["side"]
    surgeon, assumed = block(scene.get("surgeon", {}), room_keys.SURGEON, ("surgeon",))
    if surgeon["seat_clock"] is None:
        surgeon["seat_clock"] = opposite(nasal_clock(side))
    head, more = block(scene.get("head", {}), room_keys.HEAD_KEYS, ("head",))
    assumed |= more
    if head["turn_toward"] is None:
        # Away from the surgeon: clock hours above 6 lie on the patient's right.
        head["turn_toward"] = "left" if surgeon["seat_clock"] > 6.0 else "right"
    gaze, more = block(scene.get("gaze", {}), room_keys.GAZE, ("gaze",))
    assumed |= more
    scope, more = _scope(scene.get("scope", {}))
    assumed |= more
    target, more = _target(scene["target"])
    assumed |= more
    lens, more = _lens(scene.get("lens"), target)
    assumed |= more
    tool, more = _tool(scene.get("tool"), surgeon["seat_clock"])
    assumed |= more
    if "wavelength_nm" not in scene:
        assumed.add(("wavelength_nm",))
    room = scene.get("room", {})
    if "use" not in room and "definition" not in room:
        assumed.add(("room", "use"))
    blocks = {
        "eye": {"use": _name(scene["eye"]), "side": side}, "lens": lens, "scope": scope, "head": head, "gaze": gaze,
        "surgeon": surgeon, "tool": tool, "target": target, "room": {"use": _name(room, DEFAULT_ROOM)},
        "wavelength_nm": scene.get("wavelength_nm", 555.0),
    }
    return blocks, assumed


def _name(part: Mapping, default: str | None = None) -> str | None:
    """Name of a plugin: as called, else as its written-out definition calls itself, else the default."""
    return part.get("use") or (part.get("definition") or {}).get("name") or default


def _scope(given: Mapping) -> tuple[dict, set[Path]]:
    values, assumed = block(given, room_keys.SCOPE_BLOCK, ("scope",))
    if "use" not in given and "definition" not in given:
        assumed.add(("scope", "use"))
    return {"use": _name(given, DEFAULT_SCOPE), **values}, assumed


def _target(given: Mapping) -> tuple[dict, set[Path]]:
    if "point_mm" in given:
        return {"point_mm": given["point_mm"]}, set()
    assumed = set() if "across" in given else {("target", "across")}
    return {"structure": given["structure"], "clock": given["clock"],
            "across": given.get("across", DEFAULT_ACROSS)}, assumed


def _lens(given: Mapping | str | None, target: Mapping) -> tuple[dict | str, set[Path]]:
    if given is None or given == "none":
        return "none", set() if given else {("lens",)}
    values, assumed = block(given, room_keys.SEATING_KEYS, ("lens",))
    if values["mark_at_clock"] is None:
        values["mark_at_clock"] = opposite(_target_clock(target))
    return {"use": _name(given), **values}, assumed


def rest_on_eye(lens: dict, pool: bool) -> None:
    """Gap and fluid of a lens in place: none under a pool, else the defaults where left open."""
    if pool:
        lens["gap_um"] = lens["fluid"] = None
        return
    if lens["gap_um"] is None:
        lens["gap_um"] = DEFAULT_GAP_UM
    if lens["fluid"] is None:
        lens["fluid"] = DEFAULT_FLUID


def _target_clock(target: Mapping) -> float:
    """Clock hour of the target; 6 for a point on the axis, so that the lens's mark is at 12."""
    if "point_mm" in target:
        return clock_of(*target["point_mm"][:2]) or 6.0
    return target["clock"]


def _tool(given: Mapping | str | None, seat_clock: float) -> tuple[dict | None, set[Path]]:
    if given is None or given == "none":
        return None, set() if given else {("tool",)}
    entry, assumed = block(given.get("entry", {}), room_keys.ENTRY_KEYS, ("tool", "entry"))
    if entry["clock"] is None:
        entry["clock"] = seat_clock
    return {"use": _name(given), "entry": entry}, assumed
