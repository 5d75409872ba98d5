"""Why a point is not seen: the face and the event that stop the ray that would have come nearest.

Where some rays of the fan do leave by a proper path, the one whose direction is nearest to the goal is
walked toward it until its path breaks: the face at which it breaks is the cause. Where none leaves,
the stopped ray that was heading nearest to the goal tells.
"""

from __future__ import annotations

import numpy as np

from ..scene.compile import CompiledScene
from ..scene.tracing import raw_trace
from .fan import Fan, frame_about
from .paths import full_path

TOTAL_REFLECTION = "total reflection at {face}"
BLOCKED = "blocked by {face}"
OUTSIDE_OPENING = "outside the opening of {face}"
TOO_DIM = "too dim: throughput {value:.3g} is below the floor of {floor:g}"
OUTSIDE_FIELD = "outside the field"
BEYOND_TILT = "beyond the scope's tilt: {tilt:g} deg asked for, {limit:g} deg possible"
NO_SIGHT = "no ray sets out toward the scope"

WALK_STEPS = 24
EDGE_STEPS = 60
LEFT = 0  # as in kernels/arrays.py, which is loaded late


def why_unseen(scene: CompiledScene, wavelength_nm: float, fan: Fan, goals_mm: list[np.ndarray]) -> str:
    """Cause, in words, why no proper path goes through all of some points (3,) mm, such as the pupils' centres.

    The points are tried in turn; the first that the walk does not reach tells.
    """
    if fan.groups:
        for goal in goals_mm:
            broken = _walk(scene, wavelength_nm, fan, goal)
            if broken is not None:
                return broken
    return _nearest_stopped(scene, wavelength_nm, fan, goals_mm[-1])


def _walk(scene: CompiledScene, wavelength_nm: float, fan: Fan, goal_mm: np.ndarray) -> str | None:
    """Walk the nearest proper ray toward the goal and name what breaks its path; None where it gets there."""
    from ..kernels.aim import FOUND, aim

    rows = np.concatenate(list(fan.groups.values()))
    toward = goal_mm - fan.points[rows]
    distance = np.linalg.norm(toward, axis=1)
    row = rows[int(np.argmax(np.einsum("ij,ij->i", toward, fan.outward[rows]) / distance))]
    group = int(fan.code[row])
    begun = fan.points[row] + np.linalg.norm(goal_mm - fan.points[row]) * fan.outward[row]
    first = np.ascontiguousarray(fan.first[row])
    found, point, out = np.empty(3), np.empty(3), np.empty(3)
    for step in range(1, WALK_STEPS + 1):
        goal = begun + (goal_mm - begun) * step / WALK_STEPS
        status = aim(scene.arrays(wavelength_nm), fan.body, fan.origin_mm, first, group, True, goal, 1e-6, found, point, out)
        if status != FOUND:
            return _break_beyond(scene, wavelength_nm, fan, group, found.copy(), goal_mm)
        first = found.copy()
    return None


def _break_beyond(scene, wavelength_nm, fan: Fan, group: int, first: np.ndarray, goal_mm: np.ndarray) -> str | None:
    """Step past the edge of a path, toward the goal, and compare the broken path with the whole one."""
    whole = full_path(scene, wavelength_nm, fan.origin_mm, fan.body, first)
    if whole.code != group:
        return None
    direction = goal_mm - whole.last_point_mm
    onward = _first_step(scene, wavelength_nm, fan, group, first, whole.outward, direction / np.linalg.norm(direction))
    for power in np.linspace(-8.0, -0.5, EDGE_STEPS):
        trial = first + 10.0**power * onward
        trial /= np.linalg.norm(trial)
        path = full_path(scene, wavelength_nm, fan.origin_mm, fan.body, trial)
        if path.code != group:
            return _compare(scene, whole.faces, path.faces)
    return None


def _first_step(scene, wavelength_nm, fan, group, first, outward, direction) -> np.ndarray:
    """Unit change of the first direction that turns the last one toward the goal (least squares)."""
    tangent = frame_about(first)[:2]
    h = 1e-7
    columns = []
    for axis in tangent:
        for sign in (1.0, -1.0):
            trial = first + sign * h * axis
            path = full_path(scene, wavelength_nm, fan.origin_mm, fan.body, trial / np.linalg.norm(trial))
            if path.code == group:
                columns.append((path.outward - outward) * sign / h)
                break
        else:
            columns.append(np.zeros(3))
    want = direction - (direction @ outward) * outward
    share, *_ = np.linalg.lstsq(np.array(columns).T, want, rcond=None)
    step = share @ tangent
    size = np.linalg.norm(step)
    return step / size if size > 0.0 else tangent[0]


def _compare(scene: CompiledScene, whole, broken) -> str | None:
    """Name the first difference between a whole path and the broken one."""
    for step, (face, event) in enumerate(whole):
        got = broken[step] if step < len(broken) else None
        if got == (face, event):
            continue
        if got is None:
            return BLOCKED.format(face=broken[-1][0]) if broken else None
        if got[0] == face:
            return TOTAL_REFLECTION.format(face=face) if got[1] == "reflected" else OUTSIDE_OPENING.format(face=face)
        if absorbs(scene, got[0]):
            return BLOCKED.format(face=got[0])
        return OUTSIDE_OPENING.format(face=face)
    return BLOCKED.format(face=broken[-1][0]) if len(broken) > len(whole) else None


def absorbs(scene: CompiledScene, name: str) -> bool:
    """Whether a face stops light whichever way it comes."""
    face = scene.faces[scene.face_number[name]]
    return face.finish in ("ground", "opaque") or face.beyond == "opaque"


def _nearest_stopped(scene: CompiledScene, wavelength_nm: float, fan: Fan, goal_mm: np.ndarray) -> str:
    """Cause by the stopped ray that was heading nearest to the goal; proper rays are not asked."""
    rows = np.flatnonzero((fan.status != LEFT) | (fan.stray > 0))
    if len(rows) == 0:
        return NO_SIGHT
    first = np.ascontiguousarray(fan.first[rows])
    origins = np.ascontiguousarray(np.broadcast_to(fan.origin_mm, first.shape))
    out = raw_trace(scene.arrays(wavelength_nm), origins, first, np.full(len(first), fan.body, np.int64), True)
    step, stray = _first_stop(scene, out)
    ray = np.arange(len(first))
    place = out["path_point"][ray, step]
    before = np.where((step == 0)[:, None], first, out["path_dir"][ray, np.maximum(step - 1, 0)])
    # At the critical angle light would graze along the face: the way it would have left.
    heading = np.where(stray[:, None], before + out["path_dir"][ray, step], before)
    toward = goal_mm - place
    near = np.einsum("ij,ij->i", heading, toward) / np.linalg.norm(heading, axis=1) / np.linalg.norm(toward, axis=1)
    best = int(np.argmax(near))
    face = scene.faces[int(out["path_face"][best, step[best]]) // 2].name
    return (TOTAL_REFLECTION if stray[best] else BLOCKED).format(face=face)


def _first_stop(scene: CompiledScene, out: dict) -> tuple[np.ndarray, np.ndarray]:
    """Step of each path at which it was first stopped, (n,), and whether by a total reflection, (n,)."""
    not_meant = np.array([face.finish != "mirror" and face.works_by is None for face in scene.faces])
    longest = int(out["met"].max())
    number = out["path_face"][:, :longest]
    met = np.arange(longest) < out["met"][:, None]
    reflected = met & (number % 2 == 1) & not_meant[np.where(met, number // 2, 0)]
    stray = reflected.any(axis=1)
    return np.where(stray, reflected.argmax(axis=1), out["met"] - 1), stray
