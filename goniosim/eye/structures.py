"""Names of what an eye holds: bands of the angle, places on the iris, and where a line may land."""

from __future__ import annotations

SCHWALBE_LINE = "schwalbe-line"
CLEAR_MESHWORK = "clear-meshwork"
PIGMENTED_MESHWORK = "pigmented-meshwork"
SCLERAL_SPUR = "scleral-spur"
CILIARY_BAND = "ciliary-band"
IRIS_ROOT = "iris-root"
PUPIL_MARGIN = "pupil-margin"
IRIS_MID = "iris-mid"

ANGLE_STRUCTURES = (SCHWALBE_LINE, CLEAR_MESHWORK, PIGMENTED_MESHWORK, SCLERAL_SPUR, CILIARY_BAND, IRIS_ROOT)
"""Bands of the angle in order, from the cornea to the iris."""

STRUCTURES = (*ANGLE_STRUCTURES, PUPIL_MARGIN, IRIS_MID)
"""Structures that a target may name."""

CORNEA, IRIS, LENS, PUPIL, CILIARY_FACE = "cornea", "iris", "lens", "pupil", "ciliary-face"

LANDINGS = (*STRUCTURES, CORNEA, IRIS, LENS, PUPIL, CILIARY_FACE)
"""Everything on which a straight line into the chamber may land."""
