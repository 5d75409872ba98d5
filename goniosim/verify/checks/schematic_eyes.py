"""Schematic eyes: powers, principal points and pupils, by paraxial sums on their printed prescriptions."""

from __future__ import annotations

from dataclasses import dataclass

from ...optics.paraxial import Surface, System, entrance_pupil, exit_pupil
from ..check import COMPUTED, MEMORY, SECONDARY, Check


@dataclass(frozen=True)
class SchematicEye:
    """Surfaces ahead of the stop, surfaces from the lens on, and the stop's distance behind the cornea."""

    cornea: tuple[Surface, ...]
    lens: tuple[Surface, ...]
    stop_mm: float

    @property
    def whole(self) -> System:
        """All surfaces."""
        return System((*self.cornea, *self.lens))

    @property
    def corneal_power_d(self) -> float:
        """Power of the cornea."""
        return System(self.cornea).power_d()

    def entrance(self) -> tuple[float, float]:
        """Entrance pupil behind the vertex in mm, and its magnification."""
        return entrance_pupil(self.cornea, self.stop_mm)

    def exit(self) -> tuple[float, float]:
        """Exit pupil behind the vertex in mm, and its magnification."""
        behind, magnification = exit_pupil(self.lens, 0.0, self.cornea[-1].index_after)
        return self.stop_mm + behind, magnification


GULLSTRAND = SchematicEye(
    (Surface(7.7, 1.376, 0.5), Surface(6.8, 1.336, 3.1)),
    (Surface(10.0, 1.386, 0.546), Surface(7.911, 1.406, 2.419), Surface(-5.76, 1.386, 0.635), Surface(-6.0,
    1.336)), 3.6)
EMSLEY = SchematicEye((Surface(7.8, 4.0 / 3.0, 3.6),), (Surface(10.0, 1.416, 3.6), Surface(-6.0, 4.0 / 3.0)),
                      3.6)
BENNETT_RABBETTS = SchematicEye((Surface(7.8, 1.336, 3.6),), (Surface(11.0, 1.422, 3.7), Surface(-6.475,
                                                                                                 1.336)), 3.6)
LE_GRAND = SchematicEye(
    (Surface(7.8, 1.3771, 0.55), Surface(6.5, 1.3374, 3.05)), (Surface(10.2, 1.42, 4.0), Surface(-6.0,
    1.336)), 3.6)
NAVARRO = SchematicEye(
    (Surface(7.72, 1.376, 0.55), Surface(6.5, 1.3374, 3.05)), (Surface(10.2, 1.42, 4.0), Surface(-6.0,
    1.336)), 3.6)
LIOU_BRENNAN = SchematicEye((Surface(7.77, 1.376, 0.5), Surface(6.4, 1.336, 3.16)), (), 3.66)
ATCHISON = SchematicEye((Surface(7.77, 1.376, 0.55), Surface(6.4, 1.3374, 3.15)), (), 3.7)

PRINTED = "as tabulated in Atchison & Smith, Optics of the Human Eye (2000)"
SUMS = "paraxial sums on the printed prescription"


def _eye_checks(name: str, eye: SchematicEye, corneal_d: float, pupil: tuple[float, float], status: str, source: str,
                tolerance: float = 6e-4) -> list[Check]:
    """Corneal power and entrance pupil of one eye."""
    return [
        Check(f"{name}: corneal power", source, status, corneal_d, tolerance, "D",
              lambda: eye.corneal_power_d),
        Check(f"{name}: entrance pupil (mm) and magnification", source, status, pupil, tolerance, "mm",
              eye.entrance),
    ]


CHECKS = [
    *_eye_checks("Gullstrand exact", GULLSTRAND, 43.053, (3.047, 1.133), MEMORY, PRINTED),
    Check("Gullstrand exact: equivalent power", "study notes", SECONDARY, 58.64, 0.005, "D",
          lambda: GULLSTRAND.whole.power_d()),
    Check("Gullstrand exact: equivalent power, to the last digit", PRINTED, MEMORY, 58.636, 6e-4, "D",
          lambda: GULLSTRAND.whole.power_d()),
    Check("Gullstrand exact: exit pupil (mm) and magnification", PRINTED, MEMORY, (3.665, 1.031), 6e-4, "mm",
          GULLSTRAND.exit),
    Check("Gullstrand exact: principal points", PRINTED, MEMORY, (1.348, 1.602), 0.002, "mm",
          lambda: GULLSTRAND.whole.principal_points_mm()),
    Check("Gullstrand exact: focus behind the vertex", PRINTED, MEMORY, 24.385, 6e-4, "mm",
          lambda: GULLSTRAND.whole.back_focus_mm()),
    *_eye_checks("Le Grand full", LE_GRAND, 42.356, (3.038, 1.131), MEMORY, PRINTED),
    Check("Le Grand full: equivalent power", PRINTED, MEMORY, 59.940, 6e-4, "D",
          lambda: LE_GRAND.whole.power_d()),
    Check("Le Grand full: exit pupil (mm) and magnification", PRINTED, MEMORY, (3.682, 1.041), 6e-4, "mm",
          LE_GRAND.exit),
    Check("Le Grand full: principal points", PRINTED, MEMORY, (1.595, 1.908), 6e-4, "mm",
          lambda: LE_GRAND.whole.principal_points_mm()),
    Check("Le Grand full: axial length (focus of parallel light)", PRINTED, MEMORY, 24.197, 6e-4, "mm",
          lambda: LE_GRAND.whole.back_focus_mm()),
    *_eye_checks("Gullstrand-Emsley", EMSLEY, 42.735, (3.052, 1.130), MEMORY, PRINTED),
    Check("Gullstrand-Emsley: equivalent power", PRINTED, MEMORY, 60.48, 0.005, "D",
          lambda: EMSLEY.whole.power_d()),
    Check("Gullstrand-Emsley: exit pupil", PRINTED, MEMORY, 3.687, 6e-4, "mm", lambda: EMSLEY.exit()[0]),
    Check("Bennett-Rabbetts: entrance pupil (mm) and magnification", SUMS, COMPUTED, (3.0485, 1.13132), 6e-5,
          "mm", BENNETT_RABBETTS.entrance),
    Check("Navarro: equivalent power", "Navarro, Santamaria & Bescos, J Opt Soc Am A 2:1273 (1985)", MEMORY,
          60.416, 6e-4, "D", lambda: NAVARRO.whole.power_d()),
    Check("Navarro: axial length (focus of parallel light)", "Navarro, Santamaria & Bescos (1985)", MEMORY,
          24.004, 6e-4, "mm", lambda: NAVARRO.whole.back_focus_mm()),
    *_eye_checks("Navarro", NAVARRO, 42.8818, (3.0424, 1.13284), COMPUTED, SUMS, 6e-5),
    *_eye_checks("Liou-Brennan", LIOU_BRENNAN, 42.2511, (3.0981, 1.13317), COMPUTED, SUMS, 6e-5),
    *_eye_checks("Atchison 2006", ATCHISON, 42.4767, (3.1350, 1.13557), COMPUTED, SUMS, 6e-5),
]
