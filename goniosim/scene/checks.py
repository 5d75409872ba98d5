"""Checks that a lens stands up: its faces close its bodies, and it does not cut into the cornea."""

from __future__ import annotations

import numpy as np

from ..errors import BadInput, Fault
from .bodies import Body, Face
from .compile import CompiledScene
from .seating import height
from .tracing import raw_trace

BOX_MM = np.array([[-20.0, -20.0, -8.0], [20.0, 20.0, 30.0]])  # room in which a lens is looked for
INSIDE_POINTS = 40  # starts per body for the search for a gap
DIRECTIONS = 60
CORNEA_PITCH_MM = 0.1
TOUCH_MM = 1e-6


class _AnyMedium:
    """A medium whose optics do not matter, for the search for gaps."""

    absorption_per_mm = 0.0

    @staticmethod
    def index(wavelength_nm: float) -> float:
        return 1.0


def check_lens(where: str, faces: dict[str, Face], bodies: list[Body], cornea: Face) -> None:
    """Raise BadInput with every fault: a body without inside, not closed, a cap that ends inside, a cut."""
    known = {**faces, cornea.name: cornea}
    faults = []
    for body in bodies:
        if body.name == "fluid":
            continue  # closed by construction between contact face and cornea
        points = inside_points(body, known)
        if len(points) == 0:
            faults.append(Fault(body.name, "its faces leave no room: no point lies on the right side of all of them; "
                                           "check each face's side"))
            continue
        caps = _caps_that_end_inside(body, known)
        faults += caps or _gap(body, known, points)
        faults += _cut(body, known, cornea)
    if faults:
        raise BadInput(where, faults, "A body is the set of points on the right side of every face: "
                                      "goniosim plugins explain lens")


def on_right_side(body: Body, faces: dict[str, Face], points: np.ndarray, but: str = "", margin: float = 0.0) -> np.ndarray:
    """Whether points lie on the right side of a body's faces, one face left out, (n,)."""
    held = np.ones(len(points), dtype=bool)
    for name, side in body.sides:
        if name != but:
            sign = 1.0 if side == "ahead" else -1.0
            held[held] = sign * faces[name].side_value(points[held]) > margin
    return held


def inside_points(body: Body, faces: dict[str, Face]) -> np.ndarray:
    """Some points inside a body, (n, 3) mm; a second, denser search where the first finds none."""
    rng = np.random.default_rng(20)
    for count, low, high in ((40_000, *BOX_MM), (400_000, *(0.4 * BOX_MM))):
        points = rng.uniform(low, high, size=(count, 3))
        found = points[on_right_side(body, faces, points)]
        if len(found):
            return found[:INSIDE_POINTS]
    return np.zeros((0, 3))


def _gap(body: Body, faces: dict[str, Face], points: np.ndarray) -> list[Fault]:
    """A fault where a straight line from inside meets no face of the body."""
    alone = Body(body.name, "any", body.sides)
    scene = CompiledScene(tuple(faces[name] for name, _ in body.sides), (alone,), {"any": _AnyMedium})
    rng = np.random.default_rng(21)
    # Along a cylinder's own axis it has no end: those directions are tried on purpose.
    axes = np.array([sign * faces[name].rotation[:, 2] for name, _ in body.sides for sign in (1.0, -1.0)])
    around = rng.normal(size=(DIRECTIONS, 3))
    ways = np.concatenate([around / np.linalg.norm(around, axis=1, keepdims=True), axes])
    directions = np.ascontiguousarray(np.tile(ways, (len(points), 1)))
    origins = np.repeat(points, len(ways), axis=0)
    out = raw_trace(scene.arrays(555.0), origins, directions, np.zeros(len(origins), np.int64))
    from ..kernels.arrays import LOST

    escaped = out["status"] == LOST
    if not escaped.any():
        return []
    row = int(np.argmax(escaped))
    return [Fault(body.name, f"its faces do not close it: from ({_words(origins[row])}) mm a straight line toward "
                             f"({_words(directions[row])}) meets none of them")]


def _caps_that_end_inside(body: Body, faces: dict[str, Face]) -> list[Fault]:
    """A fault for every cap whose equator lies inside the body."""
    faults = []
    for name, _ in body.sides:
        face = faces[name]
        radius = face.shape.equator_mm()
        if not np.isfinite(radius):
            continue
        angles = np.linspace(0.0, 2.0 * np.pi, 72, endpoint=False)
        u, v = radius * (1.0 - 1e-12) * np.cos(angles), radius * (1.0 - 1e-12) * np.sin(angles)
        rim = face.to_eye(np.stack([u, v, height(face, u, v)], axis=-1))
        if on_right_side(body, faces, rim, but=name, margin=TOUCH_MM).any():
            faults.append(Fault(f"{body.name}.{name}", f"the cap ends, {radius:.3f} mm from its axis, inside the body; "
                                                       "another face must cut it off before that"))
    return faults


def _cut(body: Body, faces: dict[str, Face], cornea: Face) -> list[Fault]:
    """A fault where a body holds points of the eye's front surface."""
    if any(name == cornea.name for name, _ in body.sides):
        return []
    line = np.arange(-9.0, 9.0 + CORNEA_PITCH_MM, CORNEA_PITCH_MM)
    x, y = (grid.ravel() for grid in np.meshgrid(line, line))
    kept = np.hypot(x, y) < min(9.0, cornea.shape.equator_mm())
    x, y = x[kept], y[kept]
    points = np.stack([x, y, cornea.shape.sag(x, y)], axis=-1)
    held = on_right_side(body, faces, points, margin=TOUCH_MM)
    if not held.any():
        return []
    first = points[np.argmax(held)]
    return [Fault(body.name, f"cuts into the eye's front surface, for example at ({_words(first)}) mm; "
                             "flatten the contact face, or cut the body off ahead of the eye")]


def _words(vector: np.ndarray) -> str:
    return ", ".join(f"{value:.2f}" for value in vector)
