"""Fill what an eye's measurements leave out, by stated rules, and tell what was assumed."""

from __future__ import annotations

from copy import deepcopy
from typing import Any, Mapping

from ..declare import Key
from ..errors import BadInput
from .cup_keys import complete_cup, is_cup
from .keys import EYE_KEYS, QUADRANTS
from .plausible import eye_faults

FRONT_RADIUS_MM, FRONT_Q, BACK_Q = 7.79, -0.18, -0.38
BACK_OF_FRONT = 6.53 / 7.79
SPUR_PLANE_MM = 3.35  # depth + vault; see keys.SPUR_PLANE
NATURAL_VAULT_MM = (0.0, 1.2)
MESHWORK_UM = {"nasal": 712.0, "temporal": 724.0, "superior": 793.0, "inferior": 889.0}
WIDTH_DEG, CILIARY_BAND_MM = 35.0, 0.18
BY_LENS = {
    "natural": {
        "depth": 3.0,
        "front": 10.3,
        "back": 5.66,
        "thickness": 4.0,
        "radius": 4.6,
        "medium": "lens-equivalent",
    },
    "artificial": {
        "depth": 4.2,
        "front": 15.4,
        "back": 15.4,
        "thickness": 0.7,
        "radius": 3.0,
        "medium": "pmma",
    },
    "none": {"depth": 4.2, "front": None, "back": None, "thickness": None, "radius": None, "medium": None},
}
TORIC_KEYS, ROUND_KEYS = ("flat_mm", "steep_mm", "steep_axis_deg"), ("radius_mm",)
ANGLE_TRIO = ("width_deg", "aod500_mm", "ciliary_band_mm")


def complete(mapping: Mapping[str, Any], side: str) -> tuple[dict, set[str], list[str]]:
    """A mapping with every block and key, the dotted paths of values that were assumed, and notes.

    mapping : an eye file's keys, any of them left out; keys of the header are kept as they are.
    side : 'right' or 'left'. Completing a complete mapping returns it unchanged, with nothing assumed.
    Raises BadInput with every value that no eye can have.
    """
    faults = eye_faults(mapping)
    if faults:
        raise BadInput("eye", faults, "More: goniosim plugins explain eye")
    if is_cup(mapping):
        return complete_cup(mapping)
    filler = _Filler(mapping)
    filler.corneal_surfaces()
    filler.lens_and_chamber()
    filler.angle()
    filler.remaining(EYE_KEYS, filler.eye, "")
    return filler.in_order(), filler.assumed, filler.notes


def with_measured(definition: Mapping[str, Any], measured: Mapping[str, Any] | None) -> dict:
    """An eye's definition with a patient's measurements laid over it, key by key.

    Where the measurements give a surface in the other form (round or toric), the definition's form goes;
    where they give two of angle width, AOD500 and ciliary band, the third goes.
    """
    merged = _laid_over(definition, measured or {})
    for surface in ("front", "back"):
        given = ((measured or {}).get("cornea") or {}).get(surface) or {}
        other = (
            ROUND_KEYS
            if any(key in given for key in TORIC_KEYS)
            else TORIC_KEYS
            if "radius_mm" in given
            else ()
        )
        for key in other:
            merged["cornea"][surface].pop(key, None)
    trio = [key for key in ANGLE_TRIO if ((measured or {}).get("angle") or {}).get(key) is not None]
    if len(trio) == 2:
        for key in set(ANGLE_TRIO) - set(trio):
            merged["angle"].pop(key, None)
    return merged


def media_named(complete_mapping: Mapping[str, Any]) -> list[str]:
    """Names of all media that a complete eye needs, without repeats."""
    if is_cup(complete_mapping):
        return [complete_mapping["cup"]["water"]]
    media, fill = complete_mapping["media"], complete_mapping["chamber"]["fill"]
    names = [media["cornea"], chamber_medium(complete_mapping), media["lens"], media["vitreous"]]
    if fill == "air-bubble":
        names.append("air")
    return list(dict.fromkeys(name for name in names if name))


def chamber_medium(complete_mapping: Mapping[str, Any]) -> str:
    """Name of the medium that fills the chamber (below the bubble, where there is one)."""
    fill = complete_mapping["chamber"]["fill"]
    return complete_mapping["media"]["aqueous"] if fill in ("aqueous", "air-bubble") else fill


def _laid_over(base: Mapping, over: Mapping) -> dict:
    merged = deepcopy(dict(base))
    for key, value in over.items():
        both = isinstance(value, Mapping) and isinstance(merged.get(key), Mapping)
        merged[key] = _laid_over(merged[key], value) if both else deepcopy(value)
    return merged


class _Filler:
    """An eye being completed: `put` fills a value where none is, and remembers that it was assumed."""

    def __init__(self, mapping: Mapping[str, Any]):
        self.eye: dict[str, Any] = deepcopy(dict(mapping))
        self.assumed: set[str] = set()
        self.notes: list[str] = []
        for key in EYE_KEYS:
            if key.kind == "map":
                self.eye[key.name] = dict(self.eye.get(key.name) or {})

    def put(self, block: dict, path: str, key: str, value: Any) -> None:
        if block.get(key) is None:
            block[key] = value
            if value is not None:
                self.assumed.add(f"{path}.{key}" if path else key)

    def corneal_surfaces(self) -> None:
        cornea = self.eye["cornea"]
        front, back = (dict(cornea.get(which) or {}) for which in ("front", "back"))
        cornea["front"], cornea["back"] = front, back
        if not any(front.get(key) is not None for key in ("radius_mm", *TORIC_KEYS)):
            self.put(front, "cornea.front", "radius_mm", FRONT_RADIUS_MM)
        if not any(back.get(key) is not None for key in ("radius_mm", *TORIC_KEYS)):
            for key in ("radius_mm", "flat_mm", "steep_mm"):
                if front.get(key) is not None:
                    self.put(back, "cornea.back", key, _times_back(front[key]))
        for which, surface in (("front", front), ("back", back)):
            if surface.get("flat_mm") is not None:
                axis = front.get("steep_axis_deg") if which == "back" else None
                self.put(surface, f"cornea.{which}", "steep_axis_deg", 90.0 if axis is None else axis)
        self.put(front, "cornea.front", "q", FRONT_Q)
        self.put(back, "cornea.back", "q", BACK_Q)

    def lens_and_chamber(self) -> None:
        lens, chamber, cornea = self.eye["lens"], self.eye["chamber"], self.eye["cornea"]
        self.put(lens, "lens", "kind", "natural")
        usual = BY_LENS[lens["kind"]]
        self.put(lens, "lens", "front_radius_mm", usual["front"])
        self.put(lens, "lens", "back_radius_mm", usual["back"])
        self.put(lens, "lens", "thickness_mm", usual["thickness"])
        self.put(lens, "lens", "radius_mm", usual["radius"])
        self.put(self.eye["media"], "media", "lens", usual["medium"])
        self.put(chamber, "chamber", "depth_mm", usual["depth"])
        self.put(cornea, "cornea", "periphery", "measured")
        if cornea["periphery"] == "measured":
            vault = round(SPUR_PLANE_MM - chamber["depth_mm"], 6)
            if lens["kind"] == "natural":
                vault = min(max(vault, NATURAL_VAULT_MM[0]), NATURAL_VAULT_MM[1])
            self.put(chamber, "chamber", "vault_mm", vault)

    def angle(self) -> None:
        angle = self.eye["angle"]
        given = [key for key in ANGLE_TRIO if angle.get(key) is not None]
        if len(given) < 2:
            if "aod500_mm" not in given:
                self.put(angle, "angle", "width_deg", WIDTH_DEG)
            self.put(angle, "angle", "ciliary_band_mm", CILIARY_BAND_MM)
        height = angle.get("meshwork_height_um")
        if height is None or isinstance(height, Mapping):
            by_quadrant = dict(height or {})
            for quadrant in QUADRANTS:
                self.put(by_quadrant, "angle.meshwork_height_um", quadrant, MESHWORK_UM[quadrant])
            angle["meshwork_height_um"] = {quadrant: float(by_quadrant[quadrant]) for quadrant in QUADRANTS}
        else:
            angle["meshwork_height_um"] = float(height)

    def remaining(self, keys: tuple[Key, ...], block: dict, path: str) -> None:
        """Defaults of all keys that no rule fills."""
        for key in keys:
            inner = f"{path}.{key.name}" if path else key.name
            if key.kind == "map" and isinstance(block.get(key.name), dict):
                self.remaining(key.keys, block[key.name], inner)
            else:
                self.put(block, path, key.name, key.default)

    def in_order(self) -> dict:
        """The eye with its header first and all keys in the order of their declarations."""
        known = {key.name for key in EYE_KEYS}
        header = {name: value for name, value in self.eye.items() if name not in known}
        return {**header, **_ordered(EYE_KEYS, self.eye)}


def _ordered(keys: tuple[Key, ...], block: Mapping) -> dict:
    ordered = {}
    for key in keys:
        value = block.get(key.name)
        if key.kind == "map":
            ordered[key.name] = _ordered(key.keys, value)
        else:
            ordered[key.name] = float(value) if key.kind == "number" and value is not None else value
    return ordered


def _times_back(front_radius_mm: float) -> float:
    return round(front_radius_mm * BACK_OF_FRONT, 6)
