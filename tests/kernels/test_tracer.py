"""The compiled tracer against a slow, obvious twin, against exact theory, and against itself in other guises."""

from __future__ import annotations

import os

import numpy as np
import pytest

import goniosim
from goniosim.errors import Misuse
from goniosim.faces import Conic, Cylinder, Plane, Sphere
from goniosim.frames import lean_toward
from goniosim.scene.bodies import Body, Face
from goniosim.scene.compile import CompiledScene
from goniosim.scene.tracing import raw_trace, trace

SEED = 7
NM = 555.0
STEP_MM = 0.01


class Medium:
    """A medium of one index, with absorption."""

    def __init__(self, index: float, absorption_per_mm: float = 0.0):
        self.value, self.absorption_per_mm = index, absorption_per_mm

    def index(self, wavelength_nm: float) -> float:
        return self.value


MEDIA = {"water": Medium(1.33, 0.01), "glass": Medium(1.5), "heavy": Medium(1.7)}


def z(height: float) -> np.ndarray:
    return np.array([0.0, 0.0, height])


def made_up_scene() -> CompiledScene:
    """Three bodies on top of each other, with a seam, a mirror, a coat, a ground rim and a slope meant to reflect."""
    faces = {
        "floor": Face("floor", Plane(), origin_mm=z(-4.0), finish="coated", reflectance=0.3),
        "rim": Face("rim", Cylinder(6.0), finish="ground"),
        "bowl": Face("bowl", Sphere(-9.0), origin_mm=z(0.0)),
        "seam": Face("seam", Plane(), origin_mm=z(3.0)),
        "mirror": Face("mirror", Plane(), lean_toward(12.0, 120.0), np.array([0.0, 2.5, 3.0]), "mirror", 0.8),
        "slope": Face("slope", Plane(), lean_toward(6.0, 60.0), np.array([0.0, -5.0, 6.0]), works_by="total_reflection"),
        "dome": Face("dome", Conic(9.0, -0.4), origin_mm=z(9.0)),
    }
    bodies = [Body("low", "water", (("floor", "ahead"), ("bowl", "behind"), ("rim", "behind"))),
              Body("middle", "glass", (("bowl", "ahead"), ("seam", "behind"), ("rim", "behind"))),
              Body("top", "heavy", (("seam", "ahead"), ("mirror", "behind"), ("slope", "behind"), ("dome", "behind"),
                                    ("rim", "behind")))]
    return CompiledScene(tuple(faces.values()), tuple(bodies), MEDIA)


class Twin:
    """The body semantics of the design, word for word, by marching and bisection on side values."""

    def __init__(self, scene: CompiledScene):
        self.faces, self.bodies = {face.name: face for face in scene.faces}, scene.bodies

    def holds(self, body: Body, point: np.ndarray, but: str = "") -> bool:
        return all((1.0 if side == "ahead" else -1.0) * self.faces[name].side_value(point[None])[0] >= -1e-7
                   for name, side in body.sides if name != but)

    def crossing(self, name: str, start: np.ndarray, way: np.ndarray, leaving_side: str) -> float:
        """First distance at which the ray leaves a side of a face."""
        sign = 1.0 if leaving_side == "ahead" else -1.0

        def value(t):
            return sign * float(self.faces[name].side_value((start + t * way)[None])[0])

        distances = np.arange(1e-6, 40.0, STEP_MM)
        values = sign * self.faces[name].side_value(start + distances[:, None] * way)
        gone = np.flatnonzero((values[:-1] > 0.0) & (values[1:] <= 0.0) & (values[:-1] - values[1:] < 0.5))
        if len(gone) == 0:
            return np.inf
        low, high = distances[gone[0]], distances[gone[0] + 1]
        for _ in range(60):
            middle = 0.5 * (low + high)
            low, high = (middle, high) if value(middle) > 0.0 else (low, middle)
        return 0.5 * (low + high)

    def trace(self, start: np.ndarray, way: np.ndarray, body: Body | None):
        """(points, faces with events, direction, power) until the ray is absorbed or in air for good."""
        points, events, power = [], [], 1.0
        for _ in range(30):
            if body is None:
                entries = [(self.crossing(name, start, way, "ahead" if side == "behind" else "behind"), name, each)
                           for each in self.bodies for name, side in each.sides]
                entries = [row for row in entries if np.isfinite(row[0]) and self.holds(row[2], start + row[0] * way, row[1])]
                if not entries:
                    return points, events, way, power
                t, name, into = min(entries, key=lambda row: row[0])
                n1 = 1.0
            else:
                t, name = min((self.crossing(name, start, way, side), name) for name, side in body.sides)
                n1 = MEDIA[body.medium].value
                power *= np.exp(-MEDIA[body.medium].absorption_per_mm * t)
                side = dict(body.sides)[name]
                point = start + t * way
                into = next((each for each in self.bodies if each is not body and dict(each.sides).get(name, side) != side
                             and self.holds(each, point, name)), None)
            face = self.faces[name]
            start = start + t * way
            points.append(start)
            if face.finish == "ground":
                return points, [*events, (name, "absorbed")], way, power
            normal = face.rotation @ face.shape.normal(face.to_local(start[None]))[0]
            cosine = abs(normal @ way)
            normal = normal * np.sign(normal @ way)
            n2 = 1.0 if into is None else MEDIA[into.medium].value
            sine = n1 / n2 * np.sqrt(1.0 - cosine**2)
            if face.finish == "mirror" or sine >= 1.0:
                power *= face.reflectance if face.finish == "mirror" else 1.0
                way = way - 2.0 * cosine * normal
                events.append((name, "reflected"))
                continue
            other = np.sqrt(1.0 - sine**2)
            rs = (n1 * cosine - n2 * other) / (n1 * cosine + n2 * other)
            rp = (n2 * cosine - n1 * other) / (n2 * cosine + n1 * other)
            power *= 1.0 - face.reflectance if face.finish == "coated" else 1.0 - (rs**2 + rp**2) / 2.0
            way = n1 / n2 * way + (other - n1 / n2 * cosine) * normal
            events.append((name, "through"))
            body = into
        return points, events, way, power


def test_the_tracer_and_its_twin_agree():
    scene, random = made_up_scene(), np.random.default_rng(SEED)
    twin = Twin(scene)
    starts = random.uniform([-3.0, -3.0, -3.5], [3.0, 3.0, -1.5], size=(60, 3))
    ways = random.normal(size=(60, 3))
    ways[:, 2] = np.abs(ways[:, 2])
    ways /= np.linalg.norm(ways, axis=1, keepdims=True)
    ours = trace(scene, starts, ways, NM, paths=True)
    met = set()
    for i in range(60):
        points, events, way, power = twin.trace(starts[i], ways[i], twin.bodies[0])
        assert ours.path_faces[i] == events, f"seed {SEED}, ray {i}"
        assert np.abs(ours.path_points_mm[i] - points).max() < 1e-8, f"seed {SEED}, ray {i}"
        assert np.abs(ours.directions[i] - way).max() < 1e-9 and ours.throughput[i] == pytest.approx(power, abs=1e-9)
        met |= set(events)
    assert {("mirror", "reflected"), ("seam", "through"), ("rim", "absorbed"), ("bowl", "through"),
            ("dome", "through")} <= met, f"the rays did not try enough: {met}"


@pytest.mark.parametrize("name", ["right-eye-temporal", "one-mirror", "dome", "total-reflection", "saline-pool", "measured-toric"])
def test_replayed_blocks_agree_with_rays_traced_one_by_one(name):
    from goniosim.kernels import bundle, replay
    from goniosim.sight.fan import shoot
    from goniosim.sight.target import target_of

    scene = goniosim.load_scene(name)
    target = target_of(scene.eye, scene.mapping["target"])
    arrays = scene.compiled.arrays(NM)
    fan = shoot(scene.compiled, NM, target.point_mm, target.normal, coarse=60, refined=False)
    # The whole fan, and the rays of its largest group by themselves: both kinds of block.
    first = np.concatenate([fan.first, *(fan.first[rows] for rows in fan.groups.values())])
    origins = np.ascontiguousarray(np.broadcast_to(target.point_mm, first.shape))
    bodies = np.full(len(first), fan.body, np.int64)
    results = []
    for blocks in (False, True):
        whole, real = (lambda: np.empty(len(first), np.int64)), (lambda *n: np.empty((len(first), *n)))
        out = [whole(), whole(), real(3), real(3), real(), real(), whole(), whole(), whole(), whole()]
        path = (np.empty((1, 64), np.int64), np.empty((1, 64, 3)), np.empty((1, 64, 3)))
        if blocks:
            replay.trace_blocks(arrays, bodies, origins, first, *out)
        else:
            bundle.trace_bundle(arrays, bodies, origins, first, *out, False, *path)
        results.append(out)
    left = results[0][1] == 0
    assert left.sum() > 100
    for one, other in zip(*results):
        if one.dtype == np.int64:
            assert np.array_equal(one, other)
        else:
            finite = np.isfinite(one)
            assert np.array_equal(finite, np.isfinite(other)) and np.abs(one[finite] - other[finite]).max() < 1e-12


def test_results_do_not_depend_on_the_number_of_threads(monkeypatch):
    scene = goniosim.load_scene("right-eye-temporal")
    random = np.random.default_rng(SEED)
    n = 60_000
    ways = random.normal(size=(n, 3)) * [0.2, 0.2, 0.2] + [-0.9, 0.0, 0.4]
    ways /= np.linalg.norm(ways, axis=1, keepdims=True)
    origins = np.tile([5.76, 0.0, -3.69], (n, 1))
    results = []
    for threads in ("1", "2"):
        monkeypatch.setenv("GONIOSIM_THREADS", threads)
        results.append(raw_trace(scene.compiled.arrays(NM), origins, ways, np.full(n, 2, np.int64)))
    assert (results[0]["status"] == 0).sum() > 1000
    for key in results[0]:
        assert np.array_equal(results[0][key], results[1][key]), key
    assert os.environ["GONIOSIM_THREADS"] == "2"


@pytest.mark.parametrize("origins, ways, words", [
    ([[0, 0, 1.0]], [[0, 0, 0.0]], "directions must not be zero; row 0 is"),
    ([[0, 0, np.nan]], [[0, 0, 1.0]], "origins_mm must be finite numbers; row 0 is not"),
    ([[0, 0]], [[0, 0, 1.0]], r"origins_mm must have the shape \(n, 3\); got \(1, 2\)"),
    (np.zeros((2, 3)), np.ones((3, 3)), "origins_mm and directions must have as many rows; got 2 and 3"),
])
def test_misuse_is_told_in_words(origins, ways, words):
    with pytest.raises(Misuse, match=words):
        trace(made_up_scene(), origins, ways, NM)


def test_a_ray_that_meets_nothing_and_one_that_is_lost_have_their_status():
    scene = made_up_scene()
    away = trace(scene, [0.0, 0.0, 30.0], [0.0, 0.0, 1.0], NM)
    assert away.status[0] == 2 and away.ended_on == [None] and np.isinf(away.headroom_deg[0])
    open_body = CompiledScene((Face("lid", Plane(), origin_mm=z(1.0)),), (Body("open", "glass", (("lid", "behind"),)),), MEDIA)
    lost = raw_trace(open_body.arrays(NM), np.zeros((1, 3)), np.array([[0.0, 0.0, -1.0]]), np.zeros(1, np.int64))
    assert lost["status"][0] == 4
