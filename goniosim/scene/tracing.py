"""Trace bundles of rays through a compiled scene: the façade of the kernels.

Bundles are cut into equal runs for threads; every ray is independent, so results do not depend on
the number of threads.
"""

from __future__ import annotations

import os
import sys
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ..errors import Misuse
from .compile import CompiledScene

FIND_START = -9  # body number that asks the kernel to find where a ray starts
OPAQUE_BODY = -2  # as in kernels/arrays.py
BLOCK = 256  # rays that are traced together, as in kernels/replay.py
BLOCKS_FROM = 50_000  # rays; a fan goes too many ways to gain by blocks, and a plan need not compile them
SPLIT_FROM = 4000  # rays; below this one thread is quicker


@dataclass(frozen=True)
class Traces:
    """What became of n rays.

    points_mm : (n, 3), where each ray left the last face or was absorbed (its origin where it met nothing).
    directions : (n, 3), unit vectors there, leaving or arriving.
    ended_on : list of face names, None where nothing was met.
    status : (n,) codes; `goniosim.kernels.arrays.STATUS_WORDS` names them.
    throughput : (n,), share of the power kept, one way, unpolarised.
    headroom_deg : (n,), least (critical angle - angle of incidence) where light went to a lower index;
                   infinite where it never did.
    headroom_at : list of face names, None where there is none.
    stray : (n,) bool, a total reflection happened on a face not meant for it.
    path_faces, path_points_mm, path_directions : with paths=True, per ray the faces met
        (name, 'through' | 'reflected' | 'absorbed'), the points there (m, 3), the directions onward (m, 3).
    """

    points_mm: np.ndarray
    directions: np.ndarray
    ended_on: list
    status: np.ndarray
    throughput: np.ndarray
    headroom_deg: np.ndarray
    headroom_at: list
    stray: np.ndarray
    code: np.ndarray
    last_face: np.ndarray
    path_faces: list | None = None
    path_points_mm: list | None = None
    path_directions: list | None = None


@lru_cache(maxsize=1)
def _pool() -> ThreadPoolExecutor:
    return ThreadPoolExecutor(max_workers=thread_count())


def thread_count() -> int:
    """Threads used for bundles: GONIOSIM_THREADS, else the number of processors."""
    asked = os.environ.get("GONIOSIM_THREADS", "")
    return max(1, int(asked)) if asked.isdigit() else max(1, os.cpu_count() or 1)


@lru_cache(maxsize=1)
def kernels():
    """The compiled kernels; says once that they are being compiled where that will take a while."""
    from .. import kernels as package

    if not package.compiled_before():
        print("compiling kernels, once per version: about half a minute", file=sys.stderr, flush=True)
    return package


def raw_trace(arrays, origins: np.ndarray, directions: np.ndarray, bodies: np.ndarray, paths: bool = False) -> dict:
    """Arrays in, arrays out: run the bundle kernel over threads; see `trace_bundle`."""
    n = len(origins)
    package = kernels()
    kept = n if paths else 1
    out = {
        "ended": np.empty(n, np.int64), "status": np.empty(n, np.int64), "points": np.empty((n, 3)),
        "outward": np.empty((n, 3)), "power": np.empty(n), "headroom": np.empty(n),
        "room_face": np.empty(n, np.int64), "code": np.empty(n, np.int64), "met": np.empty(n, np.int64),
        "stray": np.empty(n, np.int64),
    }
    path = (np.empty((kept, 64), np.int64), np.empty((kept, 64, 3)), np.empty((kept, 64, 3)))
    find = bool(n) and bodies.min() < OPAQUE_BODY
    bodies = bodies.copy()

    def part(rows: slice):
        if find:
            package.starts.locate_bundle(arrays, bodies[rows], origins[rows], directions[rows])
        given = (arrays, bodies[rows], origins[rows], directions[rows], *(array[rows] for array in out.values()))
        if n < BLOCKS_FROM or paths:
            package.bundle.trace_bundle(*given, paths, *(path if not paths else (array[rows] for array in path)))
        else:
            package.replay.trace_blocks(*given)

    threads = thread_count()
    if n < SPLIT_FROM or threads == 1:
        part(slice(0, n))
    else:
        # Cut between blocks, so that blocks, and with them the last digits, do not depend on the threads.
        edges = [n * i // threads // BLOCK * BLOCK for i in range(threads)] + [n]
        list(_pool().map(part, [slice(a, b) for a, b in zip(edges[:-1], edges[1:])]))
    if paths:
        out["path_face"], out["path_point"], out["path_dir"] = path
    return out


def unit_rows(vectors, name: str) -> np.ndarray:
    """Rows of three as float64 unit vectors; faults in words."""
    rows = point_rows(vectors, name)
    length = np.linalg.norm(rows, axis=1)
    if np.any(length == 0.0):
        raise Misuse(f"{name} must not be zero; row {int(np.argmin(length))} is")
    return np.ascontiguousarray(rows / length[:, None])


def point_rows(points, name: str) -> np.ndarray:
    """Rows of three as contiguous float64; faults in words."""
    rows = np.atleast_2d(np.asarray(points, dtype=float))
    if rows.ndim != 2 or rows.shape[1] != 3:
        raise Misuse(f"{name} must have the shape (n, 3); got {np.shape(points)}")
    if not np.all(np.isfinite(rows)):
        raise Misuse(f"{name} must be finite numbers; row {int(np.argmin(np.isfinite(rows).all(axis=1)))} is not")
    return np.ascontiguousarray(rows)


def trace(scene: CompiledScene, origins_mm, directions, wavelength_nm: float, paths: bool = False) -> Traces:
    """Trace rays through a compiled scene.

    origins_mm, directions : (n, 3) or (3,), eye frame; one may have a single row for all.
    wavelength_nm : float. paths : keep every point and face.
    Raises Misuse for wrong shapes, zero directions and numbers that are not finite.
    """
    origins, towards = point_rows(origins_mm, "origins_mm"), unit_rows(directions, "directions")
    n = max(len(origins), len(towards))
    if len(origins) not in (1, n) or len(towards) not in (1, n):
        raise Misuse(f"origins_mm and directions must have as many rows; got {len(origins)} and {len(towards)}")
    origins = np.ascontiguousarray(np.broadcast_to(origins, (n, 3)))
    towards = np.ascontiguousarray(np.broadcast_to(towards, (n, 3)))
    out = raw_trace(scene.arrays(wavelength_nm), origins, towards, np.full(n, FIND_START, np.int64), paths)
    return as_traces(scene, out, paths)


def as_traces(scene: CompiledScene, out: dict, paths: bool) -> Traces:
    """Raw arrays of the kernel as a `Traces`, with names for numbers."""
    names = [face.name for face in scene.faces] + [None]
    kept = {}
    if paths:
        ends = out["met"]
        kept = {
            "path_faces": [[_event(names, out, i, j) for j in range(ends[i])] for i in range(len(ends))],
            "path_points_mm": [out["path_point"][i, : ends[i]].copy() for i in range(len(ends))],
            "path_directions": [out["path_dir"][i, : ends[i]].copy() for i in range(len(ends))],
        }
    return Traces(
        points_mm=out["points"], directions=out["outward"], ended_on=[names[i] for i in out["ended"]],
        status=out["status"], throughput=out["power"], headroom_deg=np.degrees(out["headroom"]),
        headroom_at=[names[i] for i in out["room_face"]], stray=out["stray"] > 0, code=out["code"],
        last_face=out["ended"], **kept)


def _event(names: list, out: dict, ray: int, step: int) -> tuple[str, str]:
    """Name of a face of a path and what happened there."""
    from ..kernels.arrays import ABSORBED

    number = int(out["path_face"][ray, step])
    if out["status"][ray] == ABSORBED and step == out["met"][ray] - 1:
        return names[number // 2], "absorbed"
    return names[number // 2], "reflected" if number % 2 else "through"
