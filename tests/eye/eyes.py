"""Eyes that the tests share."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path

import numpy as np
import yaml

from goniosim.eye import BuiltEye, build, complete
from goniosim.shipped import shipped_folder

SHIPPED = sorted(path.stem for path in (shipped_folder("plugins") / "eyes").glob("*.yaml"))

VARIED = {
    "usual": {},
    "narrow": {
        "chamber": {"depth_mm": 2.4, "vault_mm": 0.9, "width_mm": 11.5},
        "angle": {"width_deg": 12},
        "iris": {"bow_mm": 0.6},
    },
    "toric": {"cornea": {"front": {"flat_mm": 8.1, "steep_mm": 7.5, "steep_axis_deg": 75}}},
    "small-pupil": {"iris": {"pupil_mm": 1.5, "bow_mm": 0.3}},
    "wide-chamber": {
        "chamber": {"width_mm": 12.6, "depth_mm": 3.2},
        "angle": {"width_deg": 40},
        "iris": {"bow_mm": 0.35},
    },
    "one-height": {"angle": {"meshwork_height_um": 620, "width_deg": 28}, "iris": {"bow_mm": 0.4}},
    "aod-alone": {"angle": {"aod500_mm": 0.35}, "iris": {"bow_mm": 0.35}},
    "aod-and-width": {"angle": {"aod500_mm": 0.47, "width_deg": 35}, "iris": {"bow_mm": 0.3}},
    "artificial": {"lens": {"kind": "artificial"}, "iris": {"bow_mm": 0.3}},
    "no-lens": {"lens": {"kind": "none"}, "iris": {"bow_mm": 0.3}},
    "conic": {"cornea": {"periphery": "conic"}, "iris": {"bow_mm": 0.3}},
}


def shipped_mapping(name: str) -> dict:
    """A shipped eye file's keys."""
    return yaml.safe_load((shipped_folder("plugins") / "eyes" / f"{name}.yaml").read_text())


@lru_cache(maxsize=None)
def built(name: str, side: str = "right") -> BuiltEye:
    """A shipped or varied eye, completed and built."""
    mapping = VARIED[name] if name in VARIED else shipped_mapping(name)
    return build(complete(mapping, side)[0], side)


def section_height(eye: BuiltEye, face: str, r, clock: float = 3.0) -> np.ndarray:
    """Height of a face above r in one meridian, from its side value alone."""
    r = np.atleast_1d(np.asarray(r, dtype=float))
    t = np.radians(30.0 * clock)
    placed = eye.faces[face]
    points = np.stack([r * np.sin(t), r * np.cos(t), np.full(r.shape, placed.origin_mm[2])], axis=-1)
    return placed.origin_mm[2] - placed.side_value(points)


def sample(path_name: str) -> Path:
    """A file among the shipped scenes."""
    return shipped_folder("scenes") / path_name
