"""The contract of a face's shape. Read this file alone to write a new one.

A shape stands at its own origin, in mm. Its frame: +z is forward, out of the eye. It has a
forward unit normal everywhere; points on the side of that normal lie *ahead*, all others
*behind*. Placement (vertex, lean) is a rigid transform outside the shape.

A shape does three things:

- declares its keys (`keys`), from which files are checked and `goniosim plugins explain` is made;
- tells, in plain numpy, which side a point is on (`side_value`) and the normal (`normal`);
- lowers itself (`lower`) to one of the compiled kinds of `goniosim.kernels.shapes`: the kind's
  number, 16 parameters, and for surfaces of revolution rows of cubic pieces
  (r0, r1, a, b, c, d: z = a + b u + c u^2 + d u^3 with u = r - r0).

`goniosim.testing.check_shape(shape)` holds a shape to the contract: hit points lie on the
surface, the normal equals the finite-difference normal, a ray that leaves does not hit again, misses
are infinite, rigid motion commutes, compiled and plain code agree.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import ClassVar, Mapping

import numpy as np

from ..declare import Key

PLANE, CONIC, CYLINDER, CONE, PROFILE, RING_ARC, ROUND_CORNEA, TORIC = range(8)
"""Kinds of surface that the kernels know."""

NO_PIECES = np.zeros((0, 9))


@dataclass(frozen=True)
class Lowered:
    """A shape as the kernels take it: kind, 16 parameters, cubic pieces (n, 9), radial extent in mm."""

    kind: int
    parameters: np.ndarray
    pieces: np.ndarray = field(default_factory=lambda: NO_PIECES)
    r_min_mm: float = 0.0
    r_max_mm: float = np.inf
    z_min_mm: float = -np.inf
    z_max_mm: float = np.inf


class Shape:
    """A surface at its own origin; see the module's text for the contract."""

    name: ClassVar[str] = ""
    keys: ClassVar[tuple[Key, ...]] = ()

    @classmethod
    def from_mapping(cls, values: Mapping) -> "Shape":
        """Build from checked values of a file: one keyword for each declared key."""
        return cls(**{key.name: values.get(key.name, key.default) for key in cls.keys})

    def lower(self) -> Lowered:
        """The shape as the kernels take it."""
        raise TypeError(f"{type(self).__name__} does not lower itself")

    def side_value(self, points_mm: np.ndarray) -> np.ndarray:
        """(n, 3) mm in the shape's frame -> (n,): positive ahead, not positive behind."""
        raise TypeError(f"{type(self).__name__} does not tell sides")

    def normal(self, points_mm: np.ndarray) -> np.ndarray:
        """(n, 3) mm on the surface -> (n, 3) forward unit normals."""
        raise TypeError(f"{type(self).__name__} does not tell its normal")

    def equator_mm(self) -> float:
        """Radius at which a cap ends, in mm; infinite where the surface does not end."""
        return np.inf


def unit(vectors: np.ndarray) -> np.ndarray:
    """Vectors of length one, (n, 3)."""
    return vectors / np.linalg.norm(vectors, axis=-1, keepdims=True)


def packed(*values: float) -> np.ndarray:
    """Parameters in the 16 places that the kernels read."""
    parameters = np.zeros(16)
    parameters[: len(values)] = values
    return parameters
