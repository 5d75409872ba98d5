"""Paraxial sums: system matrices, power, principal points, pupils.

Light enters along the axis; distances are mm, positive the way the light goes; a radius is positive
where the centre lies farther along (figures of schematic eyes are printed so). A ray is (height,
index times angle); matrices act on it from the left (Gauss; any textbook of optics).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Sequence

import numpy as np


@dataclass(frozen=True)
class Surface:
    """One refracting surface: radius (infinite: a plane), index behind it, distance to the next surface."""

    radius_mm: float
    index_after: float
    next_mm: float = 0.0


@dataclass(frozen=True)
class System:
    """Surfaces in the order that the light meets them, and the index before the first."""

    surfaces: tuple[Surface, ...]
    index_before: float = 1.0

    @property
    def index_after(self) -> float:
        """Index behind the last surface."""
        return self.surfaces[-1].index_after

    @property
    def length_mm(self) -> float:
        """Distance from the first surface to the last."""
        return sum(surface.next_mm for surface in self.surfaces[:-1])

    def matrix(self) -> np.ndarray:
        """From just before the first surface to just behind the last, (2, 2)."""
        total, index = np.eye(2), self.index_before
        for i, surface in enumerate(self.surfaces):
            total = refraction_matrix(index, surface.index_after, surface.radius_mm) @ total
            index = surface.index_after
            if i < len(self.surfaces) - 1:
                total = transfer_matrix(surface.next_mm, index) @ total
        return total

    def power_d(self) -> float:
        """Equivalent power in dioptres."""
        return -1000.0 * float(self.matrix()[1, 0])

    def principal_points_mm(self) -> tuple[float, float]:
        """First and second principal points, both counted from the first surface."""
        (a, _), (c, d) = self.matrix().tolist()
        return self.index_before * (d - 1.0) / c, self.length_mm + self.index_after * (1.0 - a) / c

    def back_focus_mm(self) -> float:
        """Distance from the first surface to the focus of parallel light."""
        (a, _), (c, _) = self.matrix().tolist()
        return self.length_mm - self.index_after * a / c

    def reversed(self) -> "System":
        """The same surfaces met by light that comes from behind."""
        indices = [self.index_before, *(surface.index_after for surface in self.surfaces)]
        gaps = [surface.next_mm for surface in self.surfaces[:-1]]
        return System(tuple(
            Surface(-surface.radius_mm, indices[i], gaps[i - 1] if i > 0 else 0.0)
            for i, surface in reversed(list(enumerate(self.surfaces)))), self.index_after)


def refraction_matrix(n1: float, n2: float, radius_mm: float) -> np.ndarray:
    """Of one surface: the height stays, n times angle falls by height times (n2 - n1) / r."""
    return np.array([[1.0, 0.0], [-(n2 - n1) / radius_mm, 1.0]])


def transfer_matrix(distance_mm: float, index: float) -> np.ndarray:
    """Of a gap."""
    return np.array([[1.0, distance_mm / index], [0.0, 1.0]])


def surface_power_d(n1: float, n2: float, radius_mm: float) -> float:
    """Power of one surface in dioptres: 1000 (n2 - n1) / r."""
    return 1000.0 * (n2 - n1) / radius_mm


def image_mm(n1: float, n2: float, radius_mm: float, object_mm: float) -> float:
    """Image distance after one surface: n2 / s' = n1 / s + (n2 - n1) / r; infinite where light leaves parallel.

    object_mm : negative for an object ahead of the surface, -inf for parallel light.
    """
    vergence = n1 / object_mm + (n2 - n1) / radius_mm
    return math.inf if vergence == 0.0 else n2 / vergence


def image_after(system: System, object_mm: float) -> tuple[float, float]:
    """Image by a whole system: distance behind its last surface, and magnification.

    object_mm : distance from the first surface, negative ahead of it, finite.
    """
    (a, b), (c, d) = system.matrix().tolist()
    reduced = -object_mm / system.index_before
    divisor = c * reduced + d
    return -system.index_after * (a * reduced + b) / divisor, 1.0 / divisor


def entrance_pupil(before_stop: Sequence[Surface], stop_mm: float, index_before: float = 1.0) -> tuple[float, float]:
    """Where the stop seems to be from ahead, in mm behind the first surface, and its magnification.

    before_stop : the surfaces ahead of the stop. stop_mm : the stop's distance behind the first surface.
    """
    system = System(tuple(before_stop), index_before)
    image, magnification = image_after(system.reversed(), -(stop_mm - system.length_mm))
    return -image, magnification


def exit_pupil(after_stop: Sequence[Surface], stop_to_first_mm: float, index_at_stop: float) -> tuple[float, float]:
    """Where the stop seems to be from behind, in mm behind the first of these surfaces, and its magnification.

    after_stop : the surfaces behind the stop. stop_to_first_mm : from the stop to the first of them.
    """
    system = System(tuple(after_stop), index_at_stop)
    image, magnification = image_after(system, -stop_to_first_mm)
    return system.length_mm + image, magnification
