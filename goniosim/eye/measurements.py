"""Measurements of an eye: the keys of an eye file, and the rules that check and complete them.

`EYE_KEYS` declares every key with unit, range, default and source (`CUP`: of a cup in place of an eye); `eye_faults` finds what no eye can be;
`complete` fills what is left out; `with_measured` lays a patient's measurements over an eye.
"""

from __future__ import annotations

from .completing import chamber_medium, complete, media_named, with_measured
from .cup_keys import CUP, is_cup
from .keys import EYE_KEYS, QUADRANTS
from .plausible import eye_faults

__all__ = [
    "CUP",
    "EYE_KEYS",
    "QUADRANTS",
    "chamber_medium",
    "complete",
    "eye_faults",
    "is_cup",
    "media_named",
    "with_measured",
]
