"""Keys of a cup, which an eye file may describe in place of an eye: the bench on which to try it at home."""

from __future__ import annotations

from typing import Any, Mapping

from ..declare import Key
from ..errors import Fault
from .keys import EYE_KEYS, PRACTICE

CUP_KEYS: tuple[Key, ...] = (
    Key("inside_radius_mm", "number", "half the inner width of the cup", default=40.0, unit="mm", minimum=5.0,
        maximum=200.0, source=PRACTICE),
    Key("water_above_mark_mm", "number", "depth of the mark's middle below the water's surface", default=50.0,
        unit="mm", above=0.0, maximum=500.0, source=PRACTICE),
    Key("water_below_mark_mm", "number", "height of the mark's middle above the cup's floor", default=20.0,
        unit="mm", above=0.0, maximum=500.0, source=PRACTICE),
    Key("wall_above_water_mm", "number", "height of the rim above the water's surface", default=15.0,
        unit="mm", minimum=0.0, maximum=500.0, source=PRACTICE),
    Key("water", "name", "medium in the cup", default="water"),
    Key("mark_height_mm", "number", "height of the mark itself", default=2.0, unit="mm", above=0.0,
        maximum=50.0, source=PRACTICE),
)

CUP = Key("cup", "map", "a straight-sided cup with a mark on its inner wall, in place of an eye; all other "
          "blocks are then left out", default=None, keys=CUP_KEYS)


def is_cup(mapping: Mapping[str, Any]) -> bool:
    """Whether an eye mapping describes a cup."""
    return mapping.get(CUP.name) is not None


def cup_faults(mapping: Mapping[str, Any]) -> list[Fault]:
    """What no cup can be: blocks of an eye beside it, and a mark that does not lie under the water."""
    faults = [Fault(key.name, "must be left out: cup is given, and a cup holds no eye")
              for key in EYE_KEYS if mapping.get(key.name) is not None]
    cup = _with_defaults(mapping[CUP.name])
    height = cup["mark_height_mm"]
    for key, end in (("water_above_mark_mm", "above the water"), ("water_below_mark_mm", "below the floor")):
        if cup[key] < 0.5 * height:
            faults.append(Fault(f"cup.{key}", f"must be at least half of mark_height_mm, {height:g}, or the "
                                              f"mark reaches {end}; got {cup[key]:g}"))
    return faults


def complete_cup(mapping: Mapping[str, Any]) -> tuple[dict, set[str], list[str]]:
    """A cup with every key, the dotted paths of what was assumed, and no notes; see `complete`."""
    cup = mapping[CUP.name]
    assumed = {f"cup.{key.name}" for key in CUP_KEYS if cup.get(key.name) is None}
    names = {key.name for key in EYE_KEYS}
    header = {name: value for name, value in mapping.items() if name not in names and name != CUP.name}
    return {**header, CUP.name: _with_defaults(cup)}, assumed, []


def _with_defaults(cup: Mapping[str, Any]) -> dict[str, Any]:
    values = {key.name: key.default if cup.get(key.name) is None else cup[key.name] for key in CUP_KEYS}
    return {name: value if isinstance(value, str) else float(value) for name, value in values.items()}
