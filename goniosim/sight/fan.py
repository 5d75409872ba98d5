"""The fan: rays from a point of the angle over a hemisphere, grouped by the faces they meet."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..scene.compile import CompiledScene
from ..scene.tracing import raw_trace

COARSE = 64  # rays along each side of the square that maps to the hemisphere
TOUCH_MM = 1e-9
FINE = 4  # a cell whose corners disagree is filled with FINE x FINE more


@dataclass(frozen=True)
class Fan:
    """Rays from one point, traced to their ends. n rays.

    origin_mm (3,), body: where they start. first (n, 3): directions at the start. points, outward (n, 3),
    status, code, power, stray, ended (n,): see `trace_ray`.
    groups : path code -> rows of rays that left into the air by that list of faces, none stray.
    """

    origin_mm: np.ndarray
    body: int
    first: np.ndarray
    points: np.ndarray
    outward: np.ndarray
    status: np.ndarray
    code: np.ndarray
    power: np.ndarray
    stray: np.ndarray
    ended: np.ndarray
    groups: dict[int, np.ndarray]


def hemisphere(side: int) -> np.ndarray:
    """Grid points of the unit square, mapped with equal area to the hemisphere about +z, (side, side, 3)."""
    line = (np.arange(side) + 0.5) / side
    return on_hemisphere(*np.meshgrid(line, line, indexing="ij"))


def on_hemisphere(u: np.ndarray, v: np.ndarray) -> np.ndarray:
    """Points of the unit square to unit vectors about +z, equal area, square rings to circles."""
    a, b = 2.0 * u - 1.0, 2.0 * v - 1.0
    wide = np.abs(a) > np.abs(b)
    major = np.where(wide, a, b)
    minor = np.where(wide, b, a)
    quarter = np.pi / 4.0 * minor / np.where(major == 0.0, 1.0, major)
    phi = np.where(wide, quarter, np.pi / 2.0 - quarter)
    z = 1.0 - major * major
    s = major * np.sqrt(2.0 - major * major)
    return np.stack([s * np.cos(phi), s * np.sin(phi), z], axis=-1)


def frame_about(normal: np.ndarray) -> np.ndarray:
    """A right-handed frame whose third row is a unit vector, (3, 3)."""
    helper = np.eye(3)[int(np.argmin(np.abs(normal)))]
    first = np.cross(normal, helper)
    first /= np.linalg.norm(first)
    return np.stack([first, np.cross(normal, first), normal])


def shoot(scene: CompiledScene, wavelength_nm: float, origin_mm: np.ndarray, normal: np.ndarray,
          coarse: int = COARSE, refined: bool = True) -> Fan:
    """Trace a fan from a point over the hemisphere about a unit vector; refined where groups meet."""
    arrays = scene.arrays(wavelength_nm)
    frame = frame_about(normal)
    line = (np.arange(coarse) + 0.5) / coarse
    u, v = np.meshgrid(line, line, indexing="ij")
    first = on_hemisphere(u, v).reshape(-1, 3) @ frame
    body = start_body(scene, wavelength_nm, origin_mm, normal)
    out = _trace(arrays, origin_mm, first, body)
    if refined:
        mixed = _mixed_cells(out["code"].reshape(coarse, coarse))
        if len(mixed):
            offset = (np.arange(FINE) + 0.5) / FINE / coarse
            cu = (line[mixed[:, 0]][:, None, None] + offset[:, None]) + np.zeros((1, 1, FINE))
            cv = (line[mixed[:, 1]][:, None, None] + offset[None, :]) + np.zeros((1, FINE, 1))
            more = on_hemisphere(cu.ravel(), cv.ravel()) @ frame
            extra = _trace(arrays, origin_mm, more, body)
            first = np.concatenate([first, more])
            out = {key: np.concatenate([out[key], extra[key]]) for key in out}
    return _as_fan(origin_mm, body, first, out)


def start_body(scene: CompiledScene, wavelength_nm: float, origin_mm: np.ndarray, direction: np.ndarray) -> int:
    """Number of the body in which light sets out from a point: the one that its first crossing leaves, -1 the air.

    In Python, for the few starts of a plan: compiling `kernels/starts.py` for them would cost seconds.
    """
    from ..kernels.bundle import face_crossing

    arrays = scene.arrays(wavelength_nm)

    def first_met(sense: float, rows) -> tuple[float, int]:
        """Distance to the nearest crossing of some sides in one sense, and the body that has the side."""
        best, found = np.inf, -1
        for face, sign, _, _, _, body in rows:
            t = float(face_crossing(arrays.faces, face, arrays.pieces, *origin_mm, *direction, sense * sign, best))
            if t < best and _holds(scene, int(body), int(face), origin_mm + t * direction):
                best, found = t, int(body)
        return best, found

    left_at, body = first_met(-1.0, arrays.sides)
    entered_at, _ = first_met(1.0, arrays.sides[arrays.air])
    # A face shared by two bodies is left and entered at once: only an entry that comes first means air.
    return -1 if entered_at < left_at - TOUCH_MM else body


def _holds(scene: CompiledScene, body: int, but_face: int, point_mm: np.ndarray) -> bool:
    """Whether a point lies on the right side of what a body checks on entry, one face left out."""
    checked = scene.bodies[body]
    sides = checked.sides if checked.entry_checks is None else checked.entry_checks
    for name, side in sides:
        number = scene.face_number[name]
        sign = 1.0 if side == "ahead" else -1.0
        if number != but_face and sign * scene.faces[number].side_value(point_mm[None])[0] < -TOUCH_MM:
            return False
    return True


def _trace(arrays, origin_mm: np.ndarray, first: np.ndarray, body: int) -> dict:
    origins = np.ascontiguousarray(np.broadcast_to(origin_mm, first.shape))
    return raw_trace(arrays, origins, np.ascontiguousarray(first), np.full(len(first), body, np.int64))


def _mixed_cells(code: np.ndarray) -> np.ndarray:
    """Grid cells (lower corner) whose four corners were not met alike, (m, 2)."""
    a, b, c, d = code[:-1, :-1], code[1:, :-1], code[:-1, 1:], code[1:, 1:]
    return np.argwhere((a != b) | (a != c) | (a != d))


def _as_fan(origin_mm: np.ndarray, body: int, first: np.ndarray, out: dict) -> Fan:
    from ..kernels.arrays import LEFT

    good = np.flatnonzero((out["status"] == LEFT) & (out["stray"] == 0))
    codes, starts = np.unique(out["code"][good], return_inverse=True)
    groups = {int(code): good[starts == i] for i, code in enumerate(codes)}
    return Fan(origin_mm, body, first, out["points"], out["outward"], out["status"], out["code"], out["power"],
               out["stray"], out["ended"], groups)
