"""What an eye can be: impossible values, values in the wrong unit, and values that contradict each other."""

from __future__ import annotations

from typing import Any, Mapping

from ..errors import Fault
from ..units import radius_mm_from_keratometry_d
from .cup_keys import cup_faults, is_cup
from .keys import QUADRANTS

RANGES: dict[str, tuple[float, float, str]] = {
    "cornea.front.radius_mm": (5.0, 11.5, "mm"),
    "cornea.front.flat_mm": (5.0, 11.5, "mm"),
    "cornea.front.steep_mm": (5.0, 11.5, "mm"),
    "cornea.back.radius_mm": (4.0, 10.5, "mm"),
    "cornea.back.flat_mm": (4.0, 10.5, "mm"),
    "cornea.back.steep_mm": (4.0, 10.5, "mm"),
    "cornea.front.q": (-2.0, 2.0, ""),
    "cornea.back.q": (-2.0, 2.0, ""),
    "cornea.thickness_um": (250.0, 1000.0, "um"),
    "cornea.limbal_slope_deg": (15.0, 60.0, "deg"),
    "chamber.depth_mm": (1.0, 6.5, "mm"),
    "chamber.width_mm": (9.0, 15.0, "mm"),
    "chamber.vault_mm": (-3.0, 2.0, "mm"),
    "angle.width_deg": (1.0, 80.0, "deg"),
    "angle.aod500_mm": (0.01, 1.5, "mm"),
    "angle.ciliary_band_mm": (0.05, 1.5, "mm"),
    "iris.thickness_um": (100.0, 1000.0, "um"),
    "iris.bow_mm": (-0.8, 1.2, "mm"),
    "iris.pupil_mm": (0.8, 8.5, "mm"),
    "lens.front_radius_mm": (4.0, 60.0, "mm"),
    "lens.back_radius_mm": (3.0, 60.0, "mm"),
    "lens.thickness_mm": (0.2, 7.0, "mm"),
    "lens.radius_mm": (2.0, 5.5, "mm"),
    "axial_length_mm": (15.0, 40.0, "mm"),
}
"""Values outside are a slip of the pen, not an eye (common practice, no source)."""

MESHWORK_RANGE_UM = (200.0, 1400.0)
CORNEAL_RADII = tuple(path for path in RANGES if path.startswith("cornea.") and path.endswith("_mm"))
DIOPTRES = (28.0, 70.0)


def eye_faults(mapping: Mapping[str, Any]) -> list[Fault]:
    """Every value of an eye mapping (complete or not) that no eye can have; empty where all is well."""
    if is_cup(mapping):
        return cup_faults(mapping)
    faults = []
    for path, (low, high, unit) in RANGES.items():
        value = at(mapping, path)
        if is_number(value) and not low <= value <= high:
            faults.append(Fault(path, range_message(path, value, low, high, unit)))
        elif value is not None and not is_number(value):
            faults.append(Fault(path, f"must be a number; got {value!r}"))
    return faults + _meshwork_faults(mapping) + _form_faults(mapping) + _clashes(mapping)


def at(mapping: Mapping[str, Any], path: str) -> Any:
    """The value at a dotted path, None where there is none."""
    value: Any = mapping
    for step in path.split("."):
        value = value.get(step) if isinstance(value, Mapping) else None
    return value


def is_number(value: Any) -> bool:
    """Whether a value is a finite number."""
    return isinstance(value, (int, float)) and not isinstance(value, bool) and abs(value) < float("inf")


def range_message(path: str, value: float, low: float, high: float, unit: str) -> str:
    """The rule that a value breaks, and the unit it was probably given in."""
    words = f"must be from {low:g} to {high:g}{' ' + unit if unit else ''}; got {value:g}"
    return words + unit_hint(path, value, low, high)


def unit_hint(path: str, value: float, low: float, high: float) -> str:
    """What a wrong value would mean in the unit that is confused with its own; empty where nothing fits."""
    if path in CORNEAL_RADII and DIOPTRES[0] <= value <= DIOPTRES[1]:
        radius = radius_mm_from_keratometry_d(value)
        return f". This looks like dioptres: {value:g} D is a radius of {radius:.2f} mm"
    if path.endswith("_um") and low <= 1000.0 * value <= high:
        return f". This looks like mm: {value:g} mm is {1000.0 * value:g} um"
    if path.endswith("_mm") and low <= value / 1000.0 <= high:
        return f". This looks like um: {value:g} um is {value / 1000.0:g} mm"
    return ""


def _meshwork_faults(mapping: Mapping[str, Any]) -> list[Fault]:
    path = "angle.meshwork_height_um"
    height = at(mapping, path)
    if height is None:
        return []
    if isinstance(height, Mapping):
        unknown = [
            Fault(f"{path}.{name}", f"is not a quadrant; quadrants are {', '.join(QUADRANTS)}")
            for name in height
            if name not in QUADRANTS
        ]
        given = {f"{path}.{name}": height[name] for name in QUADRANTS if height.get(name) is not None}
    else:
        unknown, given = [], {path: height}
    low, high = MESHWORK_RANGE_UM
    return unknown + [
        Fault(
            key,
            range_message("angle.meshwork_height_um", value, low, high, "um")
            if is_number(value)
            else "must be a number of um, or {nasal, temporal, superior, inferior}; got " + repr(value),
        )
        for key, value in given.items()
        if not is_number(value) or not low <= value <= high
    ]


def _form_faults(mapping: Mapping[str, Any]) -> list[Fault]:
    """A corneal surface is round (radius_mm) or toric (flat_mm and steep_mm), flat not steeper than steep."""
    faults = []
    for which in ("front", "back"):
        path = f"cornea.{which}"
        surface = at(mapping, path) or {}
        has = {
            key: surface.get(key) is not None
            for key in ("radius_mm", "flat_mm", "steep_mm", "steep_axis_deg")
        }
        toric = has["flat_mm"] or has["steep_mm"] or has["steep_axis_deg"]
        if has["radius_mm"] and toric:
            faults.append(
                Fault(path, "must have radius_mm, or flat_mm and steep_mm with steep_axis_deg; not both")
            )
        elif toric and not (has["flat_mm"] and has["steep_mm"]):
            missing = "flat_mm" if not has["flat_mm"] else "steep_mm"
            faults.append(
                Fault(f"{path}.{missing}", "is missing: a toric surface needs flat_mm and steep_mm")
            )
        elif (
            toric
            and is_number(surface["flat_mm"])
            and is_number(surface["steep_mm"])
            and surface["flat_mm"] < surface["steep_mm"]
        ):
            faults.append(
                Fault(
                    f"{path}.flat_mm",
                    f"must be at least steep_mm, {surface['steep_mm']:g}; got "
                    f"{surface['flat_mm']:g}. The flat meridian has the larger radius",
                )
            )
    return faults


def _clashes(mapping: Mapping[str, Any]) -> list[Fault]:
    """Values that cannot stand beside each other."""
    faults = []
    if at(mapping, "cornea.periphery") == "conic":
        if at(mapping, "chamber.vault_mm") is not None:
            faults.append(
                Fault("chamber.vault_mm", "must be left out with periphery: conic: the vault is a result")
            )
        faults += [
            Fault(f"cornea.{which}", "must be round with periphery: conic, so that the spur is a level ring")
            for which in ("front", "back")
            if at(mapping, f"cornea.{which}.flat_mm") is not None
        ]
    trio = [
        key
        for key in ("width_deg", "aod500_mm", "ciliary_band_mm")
        if at(mapping, f"angle.{key}") is not None
    ]
    if len(trio) == 3:
        faults.append(
            Fault("angle", "width_deg, aod500_mm and ciliary_band_mm are all given; any two fix the third")
        )
    pupil, radius = at(mapping, "iris.pupil_mm"), at(mapping, "lens.radius_mm")
    if (
        is_number(pupil)
        and is_number(radius)
        and at(mapping, "lens.kind") == "natural"
        and pupil / 2 >= radius
    ):
        faults.append(
            Fault("iris.pupil_mm", f"must be less than the lens's diameter, {2 * radius:g}; got {pupil:g}")
        )
    return faults
