"""The eye's own lens, or the one in its place: where its surfaces stand, and where the iris rests."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Mapping

from ..errors import BadInput, Fault
from .cornea import Cornea

LEAST_EDGE_MM = 0.05
FREE_MARGIN_MM = 0.25
"""Without a natural lens to rest on, the pupil margin's front hangs this far ahead of the spur plane (common
practice, no source), unless a lens lies farther forward."""


@dataclass(frozen=True)
class EyeLens:
    """A lens of two conics with a cylindrical edge, or none. Heights are z in the eye frame, mm.

    radius_mm : of its edge; it is less than asked for where front and back would cross before.
    """

    present: bool
    front_z_mm: float
    front_radius_mm: float = math.inf
    front_q: float = 0.0
    back_radius_mm: float = math.inf
    back_q: float = 0.0
    thickness_mm: float = 0.0
    radius_mm: float = 0.0

    @property
    def back_z_mm(self) -> float:
        """Height of the back's pole."""
        return self.front_z_mm - self.thickness_mm

    @property
    def front_edge_z_mm(self) -> float:
        """Height of the front's edge."""
        return self.front_z_mm - conic_drop(self.front_radius_mm, self.front_q, self.radius_mm)

    @property
    def back_edge_z_mm(self) -> float:
        """Height of the back's edge."""
        return self.back_z_mm + conic_drop(self.back_radius_mm, self.back_q, self.radius_mm)

    @property
    def zonule_z_mm(self) -> float:
        """Height of the plane that closes the chamber round the lens."""
        return 0.5 * (self.front_edge_z_mm + self.back_edge_z_mm) if self.present else self.front_z_mm


def lens_of(eye: Mapping, cornea: Cornea) -> EyeLens:
    """The lens of a complete eye mapping."""
    lens = eye["lens"]
    front_z = -(cornea.thickness_mm + eye["chamber"]["depth_mm"])
    if lens["kind"] == "none":
        return EyeLens(False, front_z)
    surfaces = (lens["front_radius_mm"], lens["front_q"], lens["back_radius_mm"], lens["back_q"])
    radius = _edge_radius(lens["radius_mm"], lens["thickness_mm"], surfaces)
    return EyeLens(True, front_z, *surfaces, lens["thickness_mm"], radius)


def margin_back_z(eye: Mapping, cornea: Cornea, lens: EyeLens) -> float:
    """Height of the back of the pupil margin: on a natural lens; else free, near the spur plane."""
    pupil_r, half_thickness = eye["iris"]["pupil_mm"] / 2.0, 0.5 * eye["iris"]["thickness_um"] / 1000.0
    on_lens = lens.front_z_mm
    if lens.present:
        if pupil_r >= lens.radius_mm and eye["lens"]["kind"] == "natural":
            raise BadInput(
                "eye",
                [
                    Fault(
                        "iris.pupil_mm",
                        f"must be less than the lens's diameter, "
                        f"{2 * lens.radius_mm:.2f}; got {2 * pupil_r:g}",
                    )
                ],
            )
        on_lens -= conic_drop(lens.front_radius_mm, lens.front_q, min(pupil_r, lens.radius_mm))
    if eye["lens"]["kind"] == "natural":
        return on_lens
    return max(on_lens, cornea.spur_z_mm + FREE_MARGIN_MM - half_thickness)


def conic_drop(radius_mm: float, q: float, r: float) -> float:
    """Sag of a conic at a distance from its axis, in mm; infinite beyond its equator."""
    under = 1.0 - (1.0 + q) * (r / radius_mm) ** 2
    return r * r / radius_mm / (1.0 + math.sqrt(under)) if under > 0.0 else math.inf


def _edge_radius(asked_mm: float, thickness_mm: float, surfaces: tuple[float, float, float, float]) -> float:
    """The radius asked for, or the greatest at which the lens still has an edge."""
    front_radius, front_q, back_radius, back_q = surfaces

    def edge(r: float) -> float:
        return thickness_mm - conic_drop(front_radius, front_q, r) - conic_drop(back_radius, back_q, r)

    if edge(asked_mm) >= LEAST_EDGE_MM:
        return asked_mm
    low, high = 0.0, asked_mm
    for _ in range(80):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if edge(middle) >= LEAST_EDGE_MM else (low, middle)
    return low
