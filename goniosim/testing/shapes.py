"""The contract of a face's shape (`goniosim/faces/base.py`), as checks that run.

    from goniosim.testing import check_shape
    check_shape(MyShape(radius_mm=7.8))

Every check raises AssertionError with a sentence that says what is wrong and for which ray.
"""

from __future__ import annotations

import numpy as np

from ..faces import Shape
from ..frames import rotation_about
from ..scene.bodies import Face
from ..scene.compile import face_table

RAYS = 400
LEAST_HITS = 20
ON_SURFACE_MM = 1e-9
NORMAL = 1e-6
STEPS = 4000  # samples along a ray in the search for an earlier crossing
REACH_MM = 30.0


def check_shape(shape: Shape, seed: int = 0) -> None:
    """Hold a shape to its contract; raises AssertionError where it fails."""
    rays = seeded_rays(seed)
    hits = crossings(shape, *rays)
    assert len(hits) >= LEAST_HITS, f"only {len(hits)} of {2 * RAYS} crossings were found: is the surface where it says?"
    check_hits_lie_on_the_surface(shape, hits)
    check_normals(shape, hits)
    check_sense(shape, hits)
    check_no_second_hit_on_leaving(shape, hits)
    check_no_earlier_crossing(shape, *rays)
    check_sides_agree(shape, seed)
    check_rigid_motion(shape, *rays, seed)


def seeded_rays(seed: int) -> tuple[np.ndarray, np.ndarray]:
    """Starts within some millimetres of the origin and directions all round, two (n, 3)."""
    random = np.random.default_rng(seed)
    starts = random.normal(scale=5.0, size=(RAYS, 3))
    ways = random.normal(size=(RAYS, 3))
    return starts, ways / np.linalg.norm(ways, axis=1, keepdims=True)


def crossings(shape: Shape, starts: np.ndarray, ways: np.ndarray, face: Face | None = None) -> list[tuple]:
    """(start, way, sense, distance) of every crossing that the compiled code finds."""
    from ..kernels.bundle import face_crossing

    table, pieces = face_table((face or Face("checked", shape),))
    found = []
    for start, way in zip(starts, ways):
        for sense in (1.0, -1.0):
            t = float(face_crossing(table, 0, pieces, *start, *way, sense, np.inf))
            if np.isfinite(t):
                found.append((start, way, sense, t))
            else:
                assert t == np.inf, f"a miss must be infinite; got {t} for start {start}, direction {way}"
    return found


def check_hits_lie_on_the_surface(shape: Shape, hits: list[tuple]) -> None:
    """The side value vanishes at every hit."""
    points = np.array([start + t * way for start, way, _, t in hits])
    slope = np.maximum(_slope(shape, points), 1.0)
    off = np.abs(shape.side_value(points)) / slope
    worst = int(np.argmax(off))
    assert off[worst] < ON_SURFACE_MM, f"the hit {points[worst]} lies {off[worst]:.2e} mm off the surface"


def _slope(shape: Shape, points: np.ndarray, step: float = 1e-6) -> np.ndarray:
    """Length of the side value's gradient, by differences, (n,)."""
    return np.linalg.norm(_gradient(shape, points, step), axis=1)


def _gradient(shape: Shape, points: np.ndarray, step: float = 1e-6) -> np.ndarray:
    shifts = step * np.eye(3)
    return np.stack([(shape.side_value(points + s) - shape.side_value(points - s)) / (2.0 * step) for s in shifts], axis=-1)


def check_normals(shape: Shape, hits: list[tuple]) -> None:
    """Normals have length one, point ahead, and agree between plain code, compiled code and differences."""
    from ..kernels.bundle import face_normal

    points = np.array([start + t * way for start, way, _, t in hits])
    normals = shape.normal(points)
    assert np.allclose(np.linalg.norm(normals, axis=1), 1.0, atol=1e-12), "normals must have length one"
    table, pieces = face_table((Face("checked", shape),))
    compiled = np.array([face_normal(table, 0, pieces, *point) for point in points])
    assert np.abs(compiled - normals).max() < 1e-9, "compiled and plain normals differ"
    # Away from ends, where the side value jumps, its gradient is the normal.
    gradient = _gradient(shape, points)
    size = np.linalg.norm(gradient, axis=1)
    whole = size < 1e3
    apart = np.abs(gradient[whole] / size[whole, None] - normals[whole]).max(axis=1)
    assert (apart < NORMAL).mean() > 0.97, f"normals are not the side value's gradient: apart by {apart.max():.2e}"


def check_sense(shape: Shape, hits: list[tuple]) -> None:
    """A crossing of sense +1 runs along the forward normal, of -1 against it; both occur."""
    for start, way, sense, t in hits:
        normal = shape.normal((start + t * way)[None])[0]
        assert sense * (normal @ way) > 0.0, f"the crossing from {start} along {way} runs the wrong way"
    assert {sense for _, _, sense, _ in hits} == {1.0, -1.0}, "crossings of both senses must be found"


def check_no_second_hit_on_leaving(shape: Shape, hits: list[tuple]) -> None:
    """A ray that starts on the surface and goes on does not cross it at once in the other sense's place."""
    starts = np.array([start + t * way for start, way, _, t in hits])
    ways = np.array([way for _, way, _, _ in hits])
    for (_, way, sense, _), start in zip(hits, starts):
        for _, _, again, t in crossings(shape, start[None], way[None]):
            assert again == sense or t > 1e-7, f"leaving {start} along {way} hits the surface again after {t:.1e} mm"
    assert len(ways) == len(starts)


def check_no_earlier_crossing(shape: Shape, starts: np.ndarray, ways: np.ndarray) -> None:
    """Dense sampling finds no change of side before the crossing that the compiled code tells."""
    low = shape.lower()
    table = {(tuple(start), sense): t for start, _, sense, t in crossings(shape, starts[:80], ways[:80])}
    distances = np.linspace(0.0, REACH_MM, STEPS)
    for start, way in zip(starts[:80], ways[:80]):
        points = start + distances[:, None] * way
        rho = np.hypot(points[:, 0], points[:, 1])
        within = ((rho > low.r_min_mm) & (rho < min(low.r_max_mm, shape.equator_mm()) * 0.999)
                  & (points[:, 2] > low.z_min_mm) & (points[:, 2] < low.z_max_mm))
        value = shape.side_value(points)
        for sense in (1.0, -1.0):
            change = (sense * value[:-1] < 0.0) & (sense * value[1:] > 0.0) & within[:-1] & within[1:]
            change &= np.abs(value[1:] - value[:-1]) < 0.5  # a jump at an end is no crossing
            if change.any():
                first = distances[1:][np.argmax(change)]
                told = table.get((tuple(start), sense), np.inf)
                assert told <= first + 1e-9, f"a crossing before {first:.3f} mm was missed from {start} along {way}; told {told}"


def check_sides_agree(shape: Shape, seed: int) -> None:
    """Compiled and plain code put points on the same side, near and far."""
    from ..kernels.bundle import local_point
    from ..kernels.shapes import side_of

    random = np.random.default_rng(seed + 1)
    points = random.normal(size=(RAYS, 3)) * 10.0 ** random.uniform(-3.0, 1.5, size=(RAYS, 1))
    table, pieces = face_table((Face("checked", shape),))
    plain = shape.side_value(points)
    compiled = np.array([side_of(table, 0, pieces, *local_point(table, 0, *point)) for point in points])
    wrong = (plain > 0.0) != (compiled > 0.0)
    wrong &= np.abs(plain) > 1e-9
    assert not wrong.any(), f"compiled and plain code put {points[np.argmax(wrong)]} on different sides"


def check_rigid_motion(shape: Shape, starts: np.ndarray, ways: np.ndarray, seed: int) -> None:
    """Moving face and rays together changes no distance."""
    random = np.random.default_rng(seed + 2)
    axis = random.normal(size=3)
    turn = rotation_about(axis / np.linalg.norm(axis), float(random.uniform(10.0, 170.0)))
    shift = random.normal(scale=3.0, size=3)
    moved = Face("moved", shape, turn, shift)
    here = crossings(shape, starts, ways)
    there = crossings(shape, starts @ turn.T + shift, ways @ turn.T, moved)
    assert len(here) == len(there), "a moved face is crossed by other rays"
    apart = max(abs(a[3] - b[3]) for a, b in zip(here, there))
    assert apart < 1e-7, f"moving face and rays together changes a distance by {apart:.1e} mm"
