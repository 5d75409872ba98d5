"""Seat a lens on an eye: slide it along the eye's z until its least clearance is the gap asked for.

Clearance is measured along z between the contact face and the cornea, over the part of the contact
face that lies inside the other faces of its body (rim, flange, edge).
"""

from __future__ import annotations

from typing import Mapping

import numpy as np

from .bodies import Face
from .lens import Pose, contact_of, placed_face

ROUND = 181  # directions round the contact face
ACROSS = 90  # steps from its vertex to its edge


def seated_pose(lens: Mapping, pose: Pose, gap_mm: float, cornea: Face) -> Pose:
    """The pose slid along z so that the least clearance equals gap_mm."""
    return pose.moved_along_z(gap_mm - least_clearance(lens, pose, cornea))


def least_clearance(lens: Mapping, pose: Pose, cornea: Face) -> float:
    """Least clearance in mm along z between contact face and cornea, at a pose.

    A grid over the contact face finds where it is least; scipy then refines inside and along the edge.
    """
    from scipy.optimize import minimize, minimize_scalar

    area = _ContactArea(lens, pose, cornea)
    angles = np.linspace(-np.pi, np.pi, ROUND)
    reach = area.edge(angles)
    shares = np.linspace(0.0, 1.0, ACROSS)
    u = (reach[:, None] * shares) * np.cos(angles)[:, None]
    v = (reach[:, None] * shares) * np.sin(angles)[:, None]
    grid = area.clearance(u.ravel(), v.ravel()).reshape(u.shape)
    best = float(grid.min())

    row, column = np.unravel_index(int(np.argmin(grid)), grid.shape)
    # Along the edge: the least there counts only if it undercuts the inside.
    turn = angles[1] - angles[0]

    def on_edge(angle: float) -> float:
        r = area.edge(np.array([angle]))
        return float(area.clearance(r * np.cos(angle), r * np.sin(angle))[0])

    edge_row = int(np.argmin(grid[:, -1]))
    found = minimize_scalar(on_edge, bounds=(angles[edge_row] - turn, angles[edge_row] + turn),
                            method="bounded", options={"xatol": 1e-9})
    best = min(best, float(found.fun))

    if column < ACROSS - 1:
        def inside(at: np.ndarray) -> float:
            if not area.holds(at[:1], at[1:])[0]:
                return np.inf
            return float(area.clearance(at[:1], at[1:])[0])

        start = np.array([u[row, column], v[row, column]])
        simplex = start + np.array([[0.0, 0.0], [0.05, 0.0], [0.0, 0.05]])
        found = minimize(inside, start, method="Nelder-Mead",
                         options={"xatol": 1e-7, "fatol": 1e-13, "initial_simplex": simplex, "maxiter": 400})
        best = min(best, float(found.fun))
    return best


class _ContactArea:
    """The contact face of a placed lens, as points over its own u, v."""

    def __init__(self, lens: Mapping, pose: Pose, cornea: Face):
        b, f = contact_of(lens)
        up = np.array([0.0, 0.0, 1.0])
        rows = lens["bodies"][b]["faces"]
        shapes = {face["name"]: face for body in lens["bodies"] for face in body["faces"] if face.get("shape")}
        self.contact = placed_face(rows[f], pose, up, cornea)
        self.cornea = cornea
        self.edges = [(placed_face(shapes[face["name"]], pose, up, cornea), 1.0 if face["side"] == "ahead" else -1.0)
                      for i, face in enumerate(rows) if i != f]

    def points(self, u: np.ndarray, v: np.ndarray) -> np.ndarray:
        """Points of the contact face in the eye frame, (n, 3) mm."""
        return self.contact.to_eye(np.stack([u, v, height(self.contact, u, v)], axis=-1))

    def holds(self, u: np.ndarray, v: np.ndarray) -> np.ndarray:
        """Whether points of the contact face lie inside the other faces of its body, (n,)."""
        inside = np.hypot(u, v) < self.contact.shape.equator_mm()
        at = self.points(u, v)
        for face, sign in self.edges:
            inside &= sign * face.side_value(at) >= 0.0
        return inside

    def edge(self, angles: np.ndarray) -> np.ndarray:
        """Greatest radius in u, v that still lies inside, in mm, by bisection; (n,)."""
        low = np.zeros_like(angles)
        high = np.full_like(angles, min(self.contact.shape.equator_mm(), 30.0) * (1.0 - 1e-12))
        for _ in range(60):
            middle = 0.5 * (low + high)
            inside = self.holds(middle * np.cos(angles), middle * np.sin(angles))
            low, high = np.where(inside, middle, low), np.where(inside, high, middle)
        return low

    def clearance(self, u: np.ndarray, v: np.ndarray) -> np.ndarray:
        """Height of the contact face above the cornea along the eye's z, (n,) mm."""
        at = self.points(u, v)
        return at[:, 2] - self.cornea.shape.sag(at[:, 0], at[:, 1])


def height(face: Face, u: np.ndarray, v: np.ndarray) -> np.ndarray:
    """Height of a face over u, v in its own frame; every cap tells it through its side value at z = 0."""
    flat = np.stack([u, v, np.zeros_like(u)], axis=-1)
    return -face.shape.side_value(flat)
