"""Made-up scenes of several bodies that try every shape, finish and way for faces to be shared."""

from __future__ import annotations

from functools import partial

import numpy as np

from goniosim.faces import Cone, Conic, Cylinder, Plane, Revolution, Sphere, Toric
from goniosim.frames import lean_toward
from goniosim.optics import dispersion
from goniosim.optics.media import Medium
from goniosim.scene.bodies import Body, Face
from goniosim.scene.compile import CompiledScene

NM = 555.0


def medium(index: float, absorption_per_mm: float = 0.0) -> Medium:
    """A medium of one index."""
    return Medium(f"index {index:g}", partial(dispersion.constant, index=index), absorption_per_mm=absorption_per_mm)


MEDIA = {"water": medium(1.334), "tissue": medium(1.376), "glass": medium(1.523, 0.02), "plastic": medium(1.4923),
         "gas": medium(1.0)}


def at(x: float, y: float, z: float) -> np.ndarray:
    return np.array([x, y, z])


def scene_of(faces: list[Face], bodies: list[Body]) -> CompiledScene:
    return CompiledScene(tuple(faces), tuple(bodies), MEDIA)


def contact_lens_with_mirrors() -> CompiledScene:
    """Tissue, a fluid film of 20 um, a foot and a mirror block that share faces; a coat and a ground rim."""
    faces = [
        Face("floor", Plane(), origin_mm=at(0, 0, -3.5), finish="ground"),
        Face("back", Conic(6.53, -0.38), origin_mm=at(0, 0, -0.545)),
        Face("front", Toric(7.9, 7.6, 20.0, -0.18)),
        Face("contact", Sphere(8.6), lean_toward(2.0, 0.3), at(0.05, -0.05, 0.02)),
        Face("rim", Cylinder(5.0), finish="ground"),
        Face("seam", Plane(), lean_toward(5.0, 3.0), at(0, 0, 1.5)),
        Face("mirror", Plane(), lean_toward(12.0, 118.0), at(0, 4.5, 1.5), "mirror", 0.9),
        Face("slope", Plane(), lean_toward(6.0, 122.0), at(0, -5.0, 1.5), works_by="total_reflection"),
        Face("top", Plane(), lean_toward(12.0, 4.0), at(0, 0, 9.0), "coated", 0.1),
        Face("side-3", Plane(), lean_toward(3.0, 95.0), at(5.5, 0, 0)),
        Face("side-9", Plane(), lean_toward(9.0, 95.0), at(-5.5, 0, 0)),
    ]
    rim = ("rim", "behind")
    sides = (("side-3", "behind"), ("side-9", "behind"))
    return scene_of(faces, [
        Body("chamber", "water", (("floor", "ahead"), ("back", "behind"), rim)),
        Body("cornea", "tissue", (("back", "ahead"), ("front", "behind"), rim, ("floor", "ahead"))),
        Body("film", "water", (("front", "ahead"), ("contact", "behind"), rim)),
        Body("foot", "plastic", (("contact", "ahead"), ("seam", "behind"), rim)),
        Body("block", "plastic", (("seam", "ahead"), ("mirror", "behind"), ("slope", "behind"), ("top", "behind"), *sides)),
    ])


def open_bench() -> CompiledScene:
    """Bodies that stand apart in the air: ball, hyperbolic lens, cone, bowl, spline cap, an opaque post."""
    faces = [
        Face("ball-front", Sphere(2.0), origin_mm=at(-4, 0, 2)),
        Face("ball-back", Sphere(-2.0), origin_mm=at(-4, 0, -2)),
        Face("lens-front", Conic(3.0, -2.2), lean_toward(4.0, 15.0), at(4, 1, 2)),
        Face("lens-back", Conic(-6.0, 0.4), lean_toward(4.0, 15.0), at(4, 1, 0)),
        Face("lens-edge", Cylinder(2.2), lean_toward(4.0, 15.0), at(4, 1, 0)),
        Face("cone", Cone(2.0, -25.0), lean_toward(8.0, 30.0), at(0, -6, 0)),
        Face("cone-top", Plane(), lean_toward(8.0, 30.0), at(0, -6, 1.5)),
        Face("cone-floor", Plane(), lean_toward(8.0, 30.0), at(0, -6, -1.5), "mirror", 0.95),
        Face("cap", Revolution([0.0, 1.0, 2.0, 3.0], [0.0, 0.3, -0.4, -0.6]), lean_toward(1.0, 10.0), at(0, 6, 2)),
        Face("cap-edge", Cylinder(2.5), lean_toward(1.0, 10.0), at(0, 6, 0)),
        Face("cap-floor", Plane(), lean_toward(1.0, 10.0), at(0, 6, 0)),
        Face("bowl", Sphere(-3.0), origin_mm=at(0, 0, 4)),
        Face("bowl-top", Plane(), origin_mm=at(0, 0, 6.5)),
        Face("bowl-edge", Cylinder(2.9), origin_mm=at(0, 0, 0)),
        Face("post", Cylinder(0.7)),
        Face("post-top", Plane(), origin_mm=at(0, 0, 1.0)),
        Face("post-foot", Plane(), origin_mm=at(0, 0, -2.0)),
    ]
    return scene_of(faces, [
        Body("half-front", "glass", (("ball-front", "behind"), ("ball-back", "ahead"))),
        Body("lens", "plastic", (("lens-front", "behind"), ("lens-back", "ahead"), ("lens-edge", "behind"))),
        Body("stump", "glass", (("cone", "behind"), ("cone-top", "behind"), ("cone-floor", "ahead"))),
        Body("wavy", "water", (("cap", "behind"), ("cap-edge", "behind"), ("cap-floor", "ahead"))),
        Body("cup", "plastic", (("bowl", "ahead"), ("bowl-top", "behind"), ("bowl-edge", "behind"))),
        Body("post", "opaque", (("post", "behind"), ("post-top", "behind"), ("post-foot", "ahead"))),
    ])


SCENES = {"contact lens with mirrors": contact_lens_with_mirrors, "open bench": open_bench}
