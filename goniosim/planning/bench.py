"""The bench: what to do at home with a cup, a phone and a straw, and what should come out."""

from __future__ import annotations

from typing import Any, Mapping

from ..eye.measurements import is_cup
from ..sight.landing import Landing

HOW_TO = (
    "to try it: draw the mark inside a straight-sided cup and pour water until it stands {depth:g} mm deep "
    "over the mark",
    "lean the phone {tilt:g} deg from upright (a level app shows it), looking over the near rim at the mark "
    "on the far wall; fix a straight straw to the rim so that the mark is seen through its bore, its lower "
    "end still dry",
    "push the straw straight on, without aiming again once it is wet, until it touches the wall; measure "
    "along the wall from the mark",
)


def bench_notes(eye: Mapping[str, Any], tilt_deg: float, landing: Landing) -> list[str]:
    """Notes of a plan whose eye is a cup: how to do it, then the figure to find; none for an eye."""
    if not is_cup(eye):
        return []
    depth = eye["cup"]["water_above_mark_mm"]
    return [line.format(depth=depth, tilt=tilt_deg) for line in HOW_TO] + _figure(landing)


def _figure(landing: Landing) -> list[str]:
    """How far off the straw lands, where it lands on the wall at all."""
    if landing.anterior_mm is None:
        return []
    way = "above" if landing.anterior_mm >= 0.0 else "below"
    off_mm = abs(landing.anterior_mm)
    return [f"a straight straw sent down the line of sight lands {off_mm:.1f} mm {way} the mark"]
