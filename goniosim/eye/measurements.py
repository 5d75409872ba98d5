"""Measurements of an eye: the keys of an eye file, and the rules that check and complete them.

`EYE_KEYS` declares every key with unit, range, default and source; `eye_faults` finds what no eye can be;
`complete` fills what is left out; `with_measured` lays a patient's measurements over an eye.
"""

from __future__ import annotations

from .completing import chamber_medium, complete, media_named, with_measured
from .keys import EYE_KEYS, QUADRANTS
from .plausible import eye_faults

__all__ = [
    "EYE_KEYS",
    "QUADRANTS",
    "chamber_medium",
    "complete",
    "eye_faults",
    "media_named",
    "with_measured",
]
