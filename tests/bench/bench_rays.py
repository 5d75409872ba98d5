"""Rays per second through cornea, fluid and lens, beside a general-purpose renderer on the same geometry.

    python tests/bench/bench_rays.py [--rays N]

Both follow the same rays in one run, from a point of the angle through back and front of the cornea,
fluid and a lens's flat face leaned 48 deg into the air: four faces. Ours is double precision and also
tells sides, total reflection, headroom and throughput. The renderer is mitsuba, single precision, in
its fastest CPU variant found: llvm_ad_mono where an LLVM library is (Debian: libllvm19; named through
DRJIT_LIBLLVM_PATH or found in the usual places), else scalar_rgb. It is timed twice: with its own
dielectric, which finds out by itself which side of a face light is on, and hand-fed with the index ratio of
each face in turn, which is faster and knows beforehand what ours has to find.
"""

from __future__ import annotations

import argparse
import glob
import os
import time
from typing import Callable

import numpy as np

from goniosim.faces import Cylinder, Plane, Sphere
from goniosim.scene.tracing import FIND_START, raw_trace
from goniosim.verify.blocks import NM, face, scene_of

AQUEOUS, CORNEA, FLUID, LENS = 1.336, 1.376, 1.334, 1.4923
BACK, FRONT, CONTACT = (6.53, -0.545), (7.79, 0.0), (8.4, 0.05)  # radius, vertex
FACE_Z, LEAN_DEG = 5.0, 48.0
LEAST_RUNS, LEAST_SECONDS = 5, 4.0
LLVM_PLACES = ("/usr/lib/x86_64-linux-gnu/libLLVM.so.19*", "/usr/lib/llvm-*/lib/libLLVM.so*",
               "/usr/lib/*/libLLVM-*.so*", "/opt/homebrew/opt/llvm/lib/libLLVM.dylib")


def rays_from_the_angle(count: int) -> tuple[np.ndarray, np.ndarray]:
    """One start in the angle and seeded directions in a cone toward the lens, (n, 3) each."""
    random = np.random.default_rng(1)
    axis = np.array([0.0, 0.85, 0.53]) / np.hypot(0.85, 0.53)
    x = np.array([1.0, 0.0, 0.0])
    spread = np.tan(np.radians(12.0)) * np.sqrt(random.uniform(size=count))
    turn = random.uniform(0.0, 2.0 * np.pi, count)
    directions = axis + (spread * np.cos(turn))[:, None] * x + (spread * np.sin(turn))[:,
                                                                                       None] * np.cross(axis,
                                                                                       x)
    directions /= np.linalg.norm(directions, axis=1, keepdims=True)
    return np.tile([0.0, -5.3, -3.35], (count, 1)), directions


def our_scene():
    """The geometry with the rim and floor that close its bodies."""
    faces = [face("back", Sphere(BACK[0]), BACK[1]), face("front", Sphere(FRONT[0]), FRONT[1]),
             face("contact", Sphere(CONTACT[0]), CONTACT[1]), face("face", Plane(), FACE_Z, LEAN_DEG, 12.0),
             face("rim", Cylinder(6.4), finish="ground"), face("floor", Plane(), -4.5, finish="ground")]
    rim = ("rim", "behind")
    return scene_of(faces, ("aqueous", AQUEOUS, (("back", "behind"), ("floor", "ahead"), rim)),
                    ("cornea", CORNEA, (("front", "behind"), ("back", "ahead"), rim)),
                    ("fluid", FLUID, (("contact", "behind"), ("front", "ahead"), rim)),
                    ("lens", LENS, (("face", "behind"), ("contact", "ahead"), rim)))


def best_seconds(run: Callable[[], None]) -> float:
    """Least time of several runs, after one that warms up; long enough for threads to find their processors."""
    run()
    times: list[float] = []
    while len(times) < LEAST_RUNS or sum(times) < LEAST_SECONDS:
        start = time.perf_counter()
        run()
        times.append(time.perf_counter() - start)
    return min(times)


def ours(origins: np.ndarray, directions: np.ndarray, threads: int, start_known: bool) -> tuple[float, dict]:
    """Rays per second, and the traced rays."""
    os.environ["GONIOSIM_THREADS"] = str(threads)
    arrays = our_scene().arrays(NM)
    bodies = np.full(len(origins), 0 if start_known else FIND_START, dtype=np.int64)
    kept = {}

    def run() -> None:
        kept["out"] = raw_trace(arrays, origins, directions, bodies)

    return len(origins) / best_seconds(run), kept["out"]


def through(out: dict) -> np.ndarray:
    """Rays that went through all four faces, (n,) bool."""
    return (out["status"] == 0) & (out["met"] == 4) & (out["stray"] == 0)


def find_llvm() -> str | None:
    """An LLVM library for the renderer's vectorised variant."""
    named = os.environ.get("DRJIT_LIBLLVM_PATH")
    found = [named] if named else [path for place in LLVM_PLACES for path in sorted(glob.glob(place))]
    return found[0] if found else None


def renderer():
    """The renderer with its fastest variant set, and the variant's name."""
    library = find_llvm()
    if library:
        os.environ["DRJIT_LIBLLVM_PATH"] = library
    import mitsuba as mi

    mi.set_variant("llvm_ad_mono" if library else "scalar_rgb")
    return mi, mi.variant()


def their_scene(mi):
    """The geometry as three balls and a rectangle."""
    def ball(radius: float, vertex: float, inside: float, outside: float) -> dict:
        return {"type": "sphere", "center": [0.0, 0.0, vertex - radius], "radius": radius,
                "bsdf": {"type": "dielectric", "int_ior": inside, "ext_ior": outside}}

    leaned = mi.ScalarTransform4f().translate([0.0, 0.0, FACE_Z]).rotate([1.0, 0.0, 0.0],
                                                                         -LEAN_DEG).scale(20.0)
    return mi.load_dict({"type": "scene", "back": ball(*BACK, AQUEOUS, CORNEA), "front": ball(*FRONT, CORNEA,
                                                                                              FLUID),
                         "contact": ball(*CONTACT, FLUID, LENS),
                         "face": {"type": "rectangle", "to_world": leaned,
                                  "bsdf": {"type": "dielectric", "int_ior": LENS, "ext_ior": 1.0}}})


RATIOS = (CORNEA / AQUEOUS, FLUID / CORNEA, LENS / FLUID, 1.0 / LENS)
"""Index behind over index before, at the faces in the order that light meets them on its way out."""


def hand_fed(mi):
    """Step of a ray at a face whose index ratio is known: direction after it, and whether light passes."""
    def step(hit, ray, ratio: float):
        along = mi.dr.dot(hit.n, ray.d)
        normal, cosine = mi.dr.select(along < 0.0, -hit.n, hit.n), mi.dr.abs(along)
        reflected, cosine_after, _, inverse = mi.fresnel(cosine, ratio)
        return inverse * ray.d + (mi.dr.abs(cosine_after) - inverse * cosine) * normal, reflected < 1.0

    return step, mi.RayFlags.Minimal


def dielectric(mi):
    """Step of a ray by the renderer's own dielectric, passage asked for."""
    context = mi.BSDFContext()
    context.component = 1

    def step(hit, ray, ratio: float):
        sample, _ = hit.bsdf(ray).sample(context, hit, 0.5, mi.Point2f(0.5, 0.5), hit.is_valid())
        return hit.to_world(sample.wo), sample.pdf > 0.0

    return step, mi.RayFlags.All


def theirs_vectorised(mi, way, origins: np.ndarray, directions: np.ndarray, threads: int) -> tuple[float, np.ndarray]:
    """Rays per second of a vectorised variant; last directions (n, 3), NaN where a ray did not pass all faces."""
    dr = mi.dr
    dr.set_thread_count(threads)
    scene, (step, flags) = their_scene(mi), way(mi)
    start, toward = mi.Point3f(origins.T.astype(np.float32)), mi.Vector3f(directions.T.astype(np.float32))
    dr.eval(start, toward)
    kept = {}

    def run() -> None:
        ray, alive = mi.Ray3f(start, toward), mi.Bool(True)
        for ratio in RATIOS:
            hit = scene.ray_intersect(ray, flags, True, alive)
            direction, passes = step(hit, ray, ratio)
            alive = alive & hit.is_valid() & passes
            ray = mi.Ray3f(hit.p + 1e-3 * direction, direction)
        dr.eval(ray.o, ray.d, alive)
        dr.sync_thread()
        kept["alive"], kept["direction"] = alive, ray.d

    seconds = best_seconds(run)
    last = np.array(kept["direction"]).T
    return len(origins) / seconds, np.where(np.array(kept["alive"], dtype=bool)[:, None], last, np.nan)


def theirs_scalar(mi, way, origins: np.ndarray, directions: np.ndarray, threads: int) -> tuple[float, np.ndarray]:
    """The same ray by ray with the scalar variant, one thread, on at most 20 000 rays."""
    scene, (step, _) = their_scene(mi), way(mi)
    last = np.full((min(len(origins), 20000), 3), np.nan)
    begun = time.perf_counter()
    for i in range(len(last)):
        ray, passes = mi.Ray3f(mi.Point3f(origins[i]), mi.Vector3f(directions[i])), True
        for ratio in RATIOS:
            hit = scene.ray_intersect(ray)
            passes = hit.is_valid()
            if passes:
                direction, passes = step(hit, ray, ratio)
            if not passes:
                break
            ray = mi.Ray3f(hit.p + 1e-3 * direction, direction)
        if passes:
            last[i] = ray.d
    return len(last) / (time.perf_counter() - begun), last


def show(name: str, threads: int, rate: float, passed: int, count: int) -> None:
    """One line of the table."""
    print(f"  {name:<52} {threads} thread{'s' * (threads > 1):<1}  {rate / 1e6:7.2f}   {passed} of {count}",
          flush=True)


def main() -> None:
    """Run both and print the comparison."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--rays", type=int, default=1_000_000)
    count = parser.parse_args().rays
    origins, directions = rays_from_the_angle(count)
    mi, variant = renderer()
    import drjit

    mi.dr = drjit
    print(f"{count} rays through four faces, million rays per second, best of {LEAST_RUNS} or more runs, "
          f"{os.cpu_count()} processors; "
          "last column: rays that went all the way")
    rates = {}
    for known, words in ((True, "body at the start known"), (False, "body at the start to be found")):
        for threads in (1, 2):
            rates[known, threads], out = ours(origins, directions, threads, known)
            show(f"goniosim, float64, {words}", threads, rates[known, threads], through(out).sum(), count)
    run = theirs_vectorised if variant.startswith("llvm") else theirs_scalar
    for way, words in ((dielectric, "its dielectric"), (hand_fed, "hand-fed")):
        for threads in (1, 2):
            rates[way, threads], last = run(mi, way, origins, directions, threads)
            show(f"mitsuba {mi.__version__} {variant}, float32, {words}", threads, rates[way, threads],
                 np.isfinite(last[:, 0]).sum(), len(last))
    both = np.isfinite(last[:, 0]) & through(out)[: len(last)]
    apart = np.abs(last - out["outward"][: len(last)])[both].max()
    print(f"directions of the {both.sum()} rays that went all the way in both agree to {apart:.1e}")
    for way, words in ((dielectric, "with its dielectric"), (hand_fed, "hand-fed")):
        print(f"goniosim over mitsuba {words}: {rates[True, 1] / rates[way, 1]:.2f} on one thread, "
              f"{rates[True, 2] / rates[way, 2]:.2f} on two")


if __name__ == "__main__":
    main()
