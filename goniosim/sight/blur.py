"""How sharply a place on the wall is seen: pupil rays aimed at the apparent point, traced into the eye."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..scene.compile import CompiledScene
from ..scene.tracing import raw_trace
from .paths import Scoped

RINGS = 8  # rings of equal area over the pupil disc; ring k holds 6 k + 3 rays
BLUE_NM, RED_NM = 486.1, 656.3  # hydrogen F and C lines
AIR = -1


@dataclass(frozen=True)
class Blur:
    """rms_um : RMS distance of the landings from their mean. share : part of the pupil that gets there.

    chromatic_um : distance between the landings of the middle ray at 486.1 and 656.3 nm. None: not there.
    """

    rms_um: float | None
    share: float
    chromatic_um: float | None


def pupil_disc(rings: int = RINGS) -> np.ndarray:
    """Points of the unit disc, each standing for the same area, (n, 2)."""
    points = []
    for k in range(rings):
        count = 6 * k + 3
        inner, outer = np.sqrt(np.array([_held(k), _held(k + 1)]) / _held(rings))
        radius = np.sqrt(0.5 * (inner * inner + outer * outer))
        angles = 2.0 * np.pi * (np.arange(count) + 0.5 * (k % 2)) / count
        points.append(np.stack([radius * np.cos(angles), radius * np.sin(angles)], axis=-1))
    return np.concatenate(points)


def _held(rings: int) -> int:
    """Rays inside the first rings: sum of 6 k + 3."""
    return 3 * rings * rings


def blur(scene: CompiledScene, wavelength_nm: float, scope: Scoped, apparent_mm: np.ndarray, target_face: str) -> Blur:
    """Blur on the target's face for the pupil in the middle, focused on the apparent point."""
    disc = 0.5 * scope.pupil_diameter_mm * pupil_disc()
    pupils = scope.pupil(0.0) + disc[:, :1] * scope.right + disc[:, 1:] * scope.up
    pupils = np.concatenate([scope.pupil(0.0)[None], pupils])
    out = _into_the_eye(scene, wavelength_nm, pupils, apparent_mm)
    face = scene.face_number[target_face]
    # The middle ray says which way the light runs; rays that go another way are not this image.
    there = (out["code"] == out["code"][0]) & (out["ended"] == face)
    landings = out["points"][1:][there[1:]]
    if not there[0] or len(landings) < 3:
        return Blur(None, float(there[1:].mean()), None)
    spread = landings - landings.mean(axis=0)
    rms = 1000.0 * float(np.sqrt(np.mean(np.sum(spread * spread, axis=1))))
    return Blur(rms, float(there[1:].mean()), _chromatic(scene, pupils[:1], apparent_mm, face))


def _into_the_eye(scene: CompiledScene, wavelength_nm: float, pupils: np.ndarray, apparent_mm: np.ndarray) -> dict:
    """Trace from points of the pupil toward the apparent point, which may lie beyond the eye or before it."""
    toward = apparent_mm - pupils
    toward /= np.linalg.norm(toward, axis=1, keepdims=True)
    return raw_trace(scene.arrays(wavelength_nm), np.ascontiguousarray(pupils), np.ascontiguousarray(toward),
                     np.full(len(pupils), AIR, np.int64))


def _chromatic(scene: CompiledScene, pupil: np.ndarray, apparent_mm: np.ndarray, face: int) -> float | None:
    ends = [_into_the_eye(scene, nm, pupil, apparent_mm) for nm in (BLUE_NM, RED_NM)]
    if any(end["ended"][0] != face for end in ends):
        return None
    return 1000.0 * float(np.linalg.norm(ends[0]["points"][0] - ends[1]["points"][0]))
