"""The tracer on planes: layers, slabs, prisms, mirrors, power."""

from __future__ import annotations

from functools import partial

import numpy as np

from ...faces import Cylinder, Plane
from ...frames import rotation_about
from ...optics.fresnel import powers
from ...optics.refraction import angle_deg
from ..blocks import disc, face, followed, layers, passed_all, scene_of
from ..check import ABOVE, COMPUTED, EXACT, MEMORY, PRACTICE, VERIFIED, Check, Measured

UP = np.array([0.0, 0.0, 1.0])
SEED = 20


def tilted(angle: float) -> np.ndarray:
    """Unit vector in the x-z plane at an angle (degrees) from z."""
    return np.array([np.sin(np.radians(angle)), 0.0, np.cos(np.radians(angle))])


def textbook_layers() -> Measured:
    """Last angle out of layers 1.60/1.40/1.20 into air, from 30 deg in the first."""
    traces = followed(layers((1.6, 1.4, 1.2)), [[0.0, 0.0, 0.5]], tilted(30.0))
    return Measured(angle_deg(traces.directions, UP)[0], 1)


def random_layers() -> Measured:
    """Greatest change of n sin a through 200 stacks of two to six random layers, from the first into air."""
    random, worst, rays = np.random.default_rng(SEED), 0.0, 0
    for _ in range(200):
        indices = random.uniform(1.3, 1.8, random.integers(2, 7))
        limit = np.degrees(np.arcsin(1.0 / indices[0]))
        direction = rotation_about(UP, random.uniform(0, 360)) @ tilted(random.uniform(0.0, 0.98) * limit)
        traces = followed(layers(indices), [[0.0, 0.0, 0.5]], direction)
        if not passed_all(traces, len(indices)).all():
            return Measured(np.inf, rays)
        rays += 1
        worst = np.max([worst, np.abs(traces.directions[0, :2] - indices[0] * direction[:2]).max()])
    return Measured(worst, rays)


def widest_escape_deg(indices: tuple[float, ...]) -> Measured:
    """Greatest angle in the first layer from which light gets through all layers into air, by halving."""
    scene, low, high = layers(indices), 0.0, 89.0
    for _ in range(50):
        middle = 0.5 * (low + high)
        out = passed_all(followed(scene, [[0.0, 0.0, 0.5]], tilted(middle)), len(indices))[0]
        low, high = (middle, high) if out else (low, middle)
    return Measured(low, 50)


def slab_shift_error() -> Measured:
    """Greatest departure from d sin(a - b) / cos b, the sideways shift by a slab in air, over angles to 85 deg."""
    thickness, index, worst = 3.0, 1.4906, 0.0
    angles = np.arange(0.0, 86.0, 5.0)
    for angle in angles:
        direction = tilted(angle)
        traces = followed(layers((index,), thickness), [-5.0 * direction], direction)
        a, b = np.radians(angle), np.arcsin(np.sin(np.radians(angle)) / index)
        sideways = np.linalg.norm(np.cross(traces.points_mm[0], direction))
        turned = np.abs(traces.directions[0] - direction).max()
        worst = np.max([worst, abs(sideways - thickness * np.sin(a - b) / np.cos(b)), turned])
    return Measured(worst, len(angles))


def prism(apex_deg: float, index: float):
    """A prism about z: faces leaned apart, base away from +y."""
    return scene_of([face("first", Plane(), 0.0, 180.0 - apex_deg / 2.0, 12.0),
                     face("second", Plane(), 0.0, apex_deg / 2.0, 12.0), face("rim", Cylinder(60.0),
                                                                              finish="ground")],
                    ("glass", index, (("first", "behind"), ("second", "behind"), ("rim", "behind"))))


def traced_deviations(index: float) -> np.ndarray:
    """Deviations (degrees) by a 60 deg prism over angles of incidence in steps of 0.05 deg, those that pass."""
    scene = prism(60.0, index)
    # At the least deviation light runs along z inside; sweep the direction outside about that one.
    angles = np.radians(np.arange(-20.0, 60.0, 0.05))
    directions = np.column_stack([np.zeros_like(angles), np.sin(angles), np.cos(angles)])
    aim = np.array([0.0, -10.0, 0.0])
    traces = followed(scene, aim - 40.0 * directions, directions)
    through = passed_all(traces, 2)
    return angle_deg(traces.directions[through], directions[through])


def least_traced_rad(index: float) -> Measured:
    """Least of the traced deviations, in radians."""
    deviations = traced_deviations(index)
    return Measured(np.radians(deviations.min()), len(deviations))


def bent_toward_base() -> Measured:
    """Least part toward the base of the change of direction by a 60 deg prism in air."""
    directions = np.array([[0.0, np.sin(a), np.cos(a)] for a in np.radians(np.arange(0.0, 40.0))])
    traces = followed(prism(60.0, 1.525), np.array([0.0, -10.0, 0.0]) - 40.0 * directions, directions)
    turned = (directions - traces.directions)[passed_all(traces, 2), 1]  # the base lies toward -y
    return Measured(turned.min(), len(turned))


def mirror_turned(turn_deg: float) -> Measured:
    """How far a reflected ray turns when its mirror turns."""
    directions = []
    for lean in (0.0, turn_deg):
        scene = scene_of([face("mirror", Plane(), 0.0, lean, 3.0, finish="mirror", reflectance=0.9),
                          face("back", Plane(), -5.0), face("rim", Cylinder(50.0), finish="ground")],
                         ("glass", 1.5, (("mirror", "behind"), ("back", "ahead"), ("rim", "behind"))))
        directions.append(followed(scene, [[0.0, 0.0, 10.0]], -UP).directions)
    return Measured(angle_deg(*directions)[0], 2)


def two_mirrors(between_deg: float) -> Measured:
    """Deviation after two mirrors at an angle, in their principal section, over ten directions: all must agree."""
    scene = scene_of([face("first", Plane(), 0.0, 90.0, 3.0, finish="mirror", reflectance=0.9),
                      face("second", Plane(), 0.0, 90.0 + between_deg, 9.0, finish="mirror", reflectance=0.9),
                      face("rim", Cylinder(80.0), 0.0)],
                     ("wedge", 1.0, (("first", "behind"), ("second", "behind"), ("rim", "behind"))))
    # The wedge opens toward +z between the plane x = 0 and one that leans; light comes down into it.
    directions = np.array([tilted(angle) for angle in np.arange(170.0, 180.0)])
    traces = followed(scene, np.array([-4.0, 0.0, 20.0]), directions)
    twice = [[event for _, event in path[:2]] == ["reflected", "reflected"] for path in traces.path_faces]
    after = np.array([onward[1] for onward, good in zip(traces.path_directions, twice) if good])
    deviations = angle_deg(after, directions[np.array(twice)])
    return Measured((deviations.min(), deviations.max()), len(deviations))


def power_off_fresnel() -> Measured:
    """Greatest difference between traced throughput and the product of Fresnel transmittances, 0 to 45 deg."""
    indices = (1.336, 1.376, 1.4906)
    scene, worst = layers(indices), 0.0
    angles = np.arange(0.0, 46.0, 1.0)
    for angle in angles:
        traces = followed(scene, [[0.0, 0.0, 0.5]], tilted(angle))
        expected, inside = 1.0, angle
        for before, after in zip(indices, (*indices[1:], 1.0)):
            expected *= powers(before, after, inside).transmitted
            inside = np.degrees(np.arcsin(before * np.sin(np.radians(inside)) / after))
        worst = np.max([worst, abs(traces.throughput[0] - expected)])
    return Measured(worst, len(angles))


def index_one_changes_nothing() -> Measured:
    """Greatest change of direction by a prism whose medium is air."""
    directions = np.column_stack([disc((0.1, 0.3), 12), np.ones(24)])
    directions /= np.linalg.norm(directions, axis=1, keepdims=True)
    traces = followed(prism(60.0, 1.0), np.array([0.0, -10.0, -20.0]), directions)
    through = passed_all(traces, 2)
    return Measured(np.abs(traces.directions - directions)[through].max(), int(through.sum()))


LAYERS = "textbook solution, chapter 22 problem 47"
INVARIANT = "n sin a is constant through plane-parallel layers"

CHECKS = [
    Check("traced: layers 1.60/1.40/1.20/air, 30.0 deg in the first", LAYERS, VERIFIED, 53.1, 0.05, "deg",
          textbook_layers),
    Check("traced: 200 random stacks keep n sin a", INVARIANT, EXACT, 0.0, 1e-14, "", random_layers),
    Check("traced: aqueous under cornea and PMMA with a parallel air face lets out no more than without them",
          INVARIANT, COMPUTED, 48.46, 0.005, "deg", partial(widest_escape_deg, (1.336, 1.376, 1.4906))),
    Check("traced: the same under any lens index", INVARIANT, COMPUTED, 48.46, 0.005, "deg",
          partial(widest_escape_deg, (1.336, 1.376, 1.7))),
    Check("traced: a slab in air shifts a ray by d sin(a - b) / cos b and turns it by nothing",
          "textbook standard", EXACT, 0.0, 1e-12, "mm", slab_shift_error),
    Check("traced: least deviation of a 60 deg prism of 1.525", "textbook solution, prism of 60 deg",
          VERIFIED, 0.6872, 1e-4, "rad", partial(least_traced_rad, 1.525)),
    Check("traced: least deviation of a 60 deg prism of 1.535", "2 asin(n/2) - 60 deg", COMPUTED, 0.70267,
          6e-6, "rad", partial(least_traced_rad, 1.535)),
    Check("traced: light bends toward a prism's base", "common practice", PRACTICE, 0.0, 0.1, "",
          bent_toward_base, ABOVE),
    Check("traced: a prism with air on both sides of its faces turns nothing", "Snell's law", EXACT, 0.0,
          1e-15, "", index_one_changes_nothing),
    Check("traced: turning a mirror by 7 deg turns the ray by 14", "textbook standard", MEMORY, 14.0, 1e-12,
          "deg", partial(mirror_turned, 7.0)),
    Check("traced: two mirrors at 25 deg deviate by 50, whatever the direction", "textbook standard", MEMORY,
          (50.0, 50.0), 1e-11, "deg", partial(two_mirrors, 25.0)),
    Check("traced: throughput is the product of Fresnel transmittances", "Fresnel", EXACT, 0.0, 1e-14, "",
          power_off_fresnel),
]
