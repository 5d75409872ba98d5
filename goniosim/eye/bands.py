"""Where the bands of the angle lie, as arc lengths along the lining from the spur, anterior positive."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Mapping

from ..frames import nasal_clock
from .structures import (
    CILIARY_BAND,
    CLEAR_MESHWORK,
    IRIS_MID,
    IRIS_ROOT,
    PIGMENTED_MESHWORK,
    PUPIL_MARGIN,
    SCHWALBE_LINE,
    SCLERAL_SPUR,
)

ROOT_BAND_MM = 0.05  # width given to the iris root, half of it on the iris
MID_SHARE = (0.45, 0.55)  # of the iris's front from root to margin, counted as its middle


def heights_by_clock(
    meshwork_um: float | Mapping[str, float], side: str
) -> tuple[float, float, float, float]:
    """Meshwork height in mm at 12, 3, 6 and 9 o'clock; nasal is 3 for a right eye, 9 for a left one."""
    if not isinstance(meshwork_um, Mapping):
        return (meshwork_um / 1000.0,) * 4
    at_3, at_9 = ("nasal", "temporal") if nasal_clock(side) == 3.0 else ("temporal", "nasal")
    return tuple(meshwork_um[name] / 1000.0 for name in ("superior", at_3, "inferior", at_9))


@dataclass(frozen=True)
class Bands:
    """Bands of one eye. heights_mm : meshwork height at 12, 3, 6, 9 o'clock; lengths in mm along the lining.

    root_mm, margin_mm : arc of the iris root and of the pupil margin, negative.
    """

    heights_mm: tuple[float, float, float, float]
    spur_width_mm: float
    pigmented_share: float
    schwalbe_width_mm: float
    root_mm: float
    margin_mm: float

    def height_mm(self, clock: float) -> float:
        """Meshwork height, spur to Schwalbe's line: exact at 12, 3, 6 and 9, cos^2 weights between
        neighbours.

        The weights' slope is zero at the quadrants, so the height is smooth all round.
        """
        quarter = (clock % 12.0) / 3.0
        first = int(quarter) % 4
        share = math.sin(0.5 * math.pi * (quarter - int(quarter))) ** 2
        return self.heights_mm[first] * (1.0 - share) + self.heights_mm[(first + 1) % 4] * share

    def of(self, structure: str, clock: float) -> tuple[float, float]:
        """Posterior and anterior edge of a structure's band at a clock hour."""
        height, spur = self.height_mm(clock), 0.5 * self.spur_width_mm
        line, border = 0.5 * self.schwalbe_width_mm, self.pigmented_share * height
        iris = self.root_mm - self.margin_mm
        return {
            SCHWALBE_LINE: (height - line, height + line),
            CLEAR_MESHWORK: (border, height - line),
            PIGMENTED_MESHWORK: (spur, border),
            SCLERAL_SPUR: (-spur, spur),
            CILIARY_BAND: (self.root_mm, -spur),
            IRIS_ROOT: (self.root_mm - 0.5 * ROOT_BAND_MM, self.root_mm + 0.5 * ROOT_BAND_MM),
            PUPIL_MARGIN: (self.margin_mm, self.margin_mm),
            IRIS_MID: (self.root_mm - MID_SHARE[1] * iris, self.root_mm - MID_SHARE[0] * iris),
        }[structure]

    def holding(self, arc: float, clock: float) -> str | None:
        """The band of the angle that holds an arc; None outside them all. The iris root wins over its
        neighbour.
        """
        for structure in (
            IRIS_ROOT,
            SCHWALBE_LINE,
            CLEAR_MESHWORK,
            PIGMENTED_MESHWORK,
            SCLERAL_SPUR,
            CILIARY_BAND,
        ):
            low, high = self.of(structure, clock)
            if low <= arc <= high:
                return structure
        return None
