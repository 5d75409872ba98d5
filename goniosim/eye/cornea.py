"""Corneal surfaces and wall from measurements, with the rule for measurements that contradict each other.

Central biconics out to 4 mm from the axis; beyond, each meridian is a cubic in r with the value, slope and
curvature of the conic at 4 mm. The back one passes through the spur, the front one reaches the limbal slope.
With `periphery: conic` the conics run on and the spur lies on the back one.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Mapping

import numpy as np

from ..errors import BadInput, Fault
from ..faces import CornealSurface
from .curves import find_root
from .meridian import Meridian, mean_meridian

JOIN_MM = 4.0  # central conics hold to about here (figures of section 4: extending them overstates the slope)
SLOPE_RADIUS_MM = 6.6  # where the limbal slope is stated (PMC10123217, mean of 118 subjects)
EYEBALL_MM = 12.0  # outer surface ends here; half of an adult eye's length
SPUR_SLOPE_DEG = (30.0, 70.0)
SPUR_DEPTH_MM = (2.2, 4.9)
"""Spur plane behind the endothelium. Depth + vault is 3.19 (Roemkens 2018), 3.27 and 3.56 (Nongpiur 2011) mm
in the mean; the limits lie about 3 SD outside (common practice, no source)."""
WIDTH_MM = (9.0, 15.0)
LEAST_THICKNESS_MM = 0.2


@dataclass(frozen=True)
class Cornea:
    """The corneal surfaces in place.

    front, back : shapes; their vertices at z = 0 and z = -thickness. spur_r_mm, spur_depth_mm : the spur,
    depth behind the endothelium. notes : what had to give way.
    """

    front: CornealSurface
    back: CornealSurface
    thickness_mm: float
    spur_r_mm: float
    spur_depth_mm: float
    notes: tuple[str, ...]

    @property
    def spur_z_mm(self) -> float:
        """Height of the spur plane in the eye frame."""
        return -(self.thickness_mm + self.spur_depth_mm)

    def mean_back(self) -> Meridian:
        """The back surface's meridian halfway between steep and flat."""
        return mean_meridian(self.back, -self.thickness_mm, self.spur_r_mm)


def cornea_of(eye: Mapping) -> Cornea:
    """The cornea of a complete eye mapping. Raises BadInput where the surfaces cannot stand so."""
    cornea, chamber = eye["cornea"], eye["chamber"]
    thickness, width = cornea["thickness_um"] / 1000.0, chamber["width_mm"]
    if cornea["periphery"] == "conic":
        front = CornealSurface(**principal(cornea["front"]), r_max_mm=EYEBALL_MM)
        back = CornealSurface(**principal(cornea["back"]), r_max_mm=width / 2)
        _check_reaches(back, width / 2)
        depth = -float(mean_meridian(back, 0.0, width / 2).height(width / 2))
        built = Cornea(front, back, thickness, width / 2, depth, ())
    else:
        depth, width, notes = agreed_spur(principal(cornea["back"]), chamber)
        front = CornealSurface(
            **principal(cornea["front"]),
            join_mm=JOIN_MM,
            r_max_mm=EYEBALL_MM,
            slope_deg_at=(cornea["limbal_slope_deg"], SLOPE_RADIUS_MM),
            straight_beyond_mm=SLOPE_RADIUS_MM,
        )
        back = CornealSurface(
            **principal(cornea["back"]), join_mm=JOIN_MM, through=(width / 2, depth), r_max_mm=width / 2
        )
        built = Cornea(front, back, thickness, width / 2, depth, notes)
    _check_thickness(built)
    return built


def principal(surface: Mapping) -> dict:
    """Principal radii, axis and asphericity of a corneal surface given in either form."""
    if surface.get("radius_mm") is not None:
        return {
            "flat_mm": surface["radius_mm"],
            "steep_mm": surface["radius_mm"],
            "steep_axis_deg": 90.0,
            "q": surface["q"],
        }
    return {key: surface[key] for key in ("flat_mm", "steep_mm", "steep_axis_deg", "q")}


def agreed_spur(back: Mapping, chamber: Mapping) -> tuple[float, float, tuple[str, ...]]:
    """Depth of the spur behind the endothelium and chamber width that go together, and what gave way.

    The spur's slope must lie between 30 and 70 deg. Else the vault gives way, as far as the spur's depth
    stays believable, then the width.
    """
    width, depth = chamber["width_mm"], chamber["depth_mm"] + chamber["vault_mm"]
    slope = spur_slope_deg(back, width, depth)
    if _believable(slope):
        return depth, width, ()
    wanted = SPUR_SLOPE_DEG[0] if slope < SPUR_SLOPE_DEG[0] else SPUR_SLOPE_DEG[1]
    used = min(max(depth_for_slope(back, width, wanted), SPUR_DEPTH_MM[0]), SPUR_DEPTH_MM[1])
    note = (
        f"depth, vault and width contradict each other (the wall at the spur would slope {slope:.0f} deg): "
        f"a vault of "
        f"{used - chamber['depth_mm']:.3f} mm is used instead of {chamber['vault_mm']:g} mm"
    )
    if not _believable(spur_slope_deg(back, width, used)):
        width = _width_for(back, used, wanted)
        note += f", and a width of {width:.2f} mm instead of {chamber['width_mm']:g} mm"
    return used, width, (note,)


def _believable(slope_deg: float) -> bool:
    return SPUR_SLOPE_DEG[0] - 1e-9 <= slope_deg <= SPUR_SLOPE_DEG[1] + 1e-9


def _cubic_base(back: Mapping) -> tuple[float, float, float]:
    """Value, slope and half curvature of the mean meridian at the join."""
    surface = CornealSurface(**back, join_mm=JOIN_MM, through=(6.0, 3.0))
    value, slope, half, _ = mean_meridian(surface, 0.0, 6.0).cubic
    return value, slope, half


def spur_slope_deg(back: Mapping, width_mm: float, depth_mm: float) -> float:
    """Slope of the mean meridian's wall at the spur, in degrees; greater is steeper."""
    value, slope, half = _cubic_base(back)
    u = width_mm / 2 - JOIN_MM
    third = (-depth_mm - value - slope * u - half * u * u) / u**3
    return -math.degrees(math.atan(slope + 2.0 * half * u + 3.0 * third * u * u))


def depth_for_slope(back: Mapping, width_mm: float, slope_deg: float) -> float:
    """Depth of the spur that gives the mean meridian's wall a slope there."""
    value, slope, half = _cubic_base(back)
    u = width_mm / 2 - JOIN_MM
    third = (-math.tan(math.radians(slope_deg)) - slope - 2.0 * half * u) / (3.0 * u * u)
    return -(value + u * (slope + u * (half + u * third)))


def _width_for(back: Mapping, depth_mm: float, slope_deg: float) -> float:
    """Width at which the spur's slope is as wanted for a depth; the end of the range where none is."""

    def miss(width: float) -> float:
        return spur_slope_deg(back, width, depth_mm) - slope_deg

    low, high = WIDTH_MM
    if miss(low) * miss(high) > 0.0:
        return low if abs(miss(low)) < abs(miss(high)) else high
    return find_root(miss, low, high)


def _check_reaches(back: CornealSurface, spur_r: float) -> None:
    if spur_r >= 0.999 * back.equator_mm():
        raise BadInput(
            "eye",
            [
                Fault(
                    "chamber.width_mm",
                    f"is wider than the back of the cornea: with periphery: conic "
                    f"it ends {2 * back.equator_mm():.2f} mm across",
                )
            ],
        )


def _check_thickness(cornea: Cornea) -> None:
    """The back surface must stay behind the front one out to the spur."""
    r = np.linspace(0.0, cornea.spur_r_mm, 60)
    angles = np.radians(np.arange(0.0, 180.0, 15.0))
    x, y = np.outer(np.cos(angles), r), np.outer(np.sin(angles), r)
    along_axis = cornea.front.sag(x, y) - cornea.back.sag(x, y) + cornea.thickness_mm
    if along_axis.min() < LEAST_THICKNESS_MM:
        raise BadInput(
            "eye",
            [
                Fault(
                    "cornea",
                    f"front and back come within {1000 * along_axis.min():.0f} um of each "
                    f"other; the back must lie at least {1000 * LEAST_THICKNESS_MM:.0f} um behind",
                )
            ],
            "Check radii, asphericities, chamber depth, vault and width.",
        )
