"""Shapes of faces, one file each; `base.py` is the contract."""

from __future__ import annotations

from .base import Lowered, Shape
from .conic import Conic, Sphere
from .cornea import CornealSurface, Toric
from .cylinder import Cone, Cylinder
from .plane import AnnularPlane, Plane
from .revolution import Profile, Revolution, RingArc

SHAPES: dict[str, type[Shape]] = {
    shape.name: shape for shape in (Plane, Sphere, Conic, Toric, Cylinder, Cone, Revolution)
}
"""Shapes that a file may name. `cornea` is no shape of its own: it borrows the eye's front surface."""

__all__ = ["AnnularPlane", "Cone", "Conic", "CornealSurface", "Cylinder", "Lowered", "Plane", "Profile",
           "Revolution", "RingArc", "SHAPES", "Shape", "Sphere", "Toric"]
