"""Eye frame, room frame, clock hours, head, line of sight and picture axes.

Eye frame: right-handed, origin at the anterior corneal vertex, +z out of the eye along its axis,
+y the patient's superior, +x the right-hand side of an observer who faces the patient.
Room frame: patient supine; equal to the eye frame when turn, chin and gaze are zero.
All vectors are (3,) float arrays, all angles degrees.
"""

from __future__ import annotations

import math

import numpy as np


def clock_direction(clock: float) -> np.ndarray:
    """Unit vector in x, y toward a clock hour, as the observer sees it: (sin 30h, cos 30h, 0)."""
    angle = math.radians(30.0 * clock)
    return np.array([math.sin(angle), math.cos(angle), 0.0])


def clock_of(x: float, y: float) -> float | None:
    """Clock hour (0 < h <= 12) of a direction in x, y; None where it has no direction."""
    if math.hypot(x, y) < 1e-12:
        return None
    hour = (math.degrees(math.atan2(x, y)) / 30.0) % 12.0
    return hour if hour > 0.0 else 12.0


def clockwise_direction(clock: float) -> np.ndarray:
    """Unit vector round the clock, in the sense of growing hours, at a clock hour."""
    angle = math.radians(30.0 * clock)
    return np.array([math.cos(angle), -math.sin(angle), 0.0])


def nasal_clock(side: str) -> float:
    """Clock hour of the nose: 3 for a right eye, 9 for a left eye."""
    return 3.0 if side == "right" else 9.0


def rotation_about(axis: np.ndarray, angle_deg: float) -> np.ndarray:
    """Rotation matrix about a unit axis (Rodrigues' formula), right-handed, (3, 3)."""
    x, y, z = axis
    s, c = math.sin(math.radians(angle_deg)), math.cos(math.radians(angle_deg))
    k = np.array([[0.0, -z, y], [z, 0.0, -x], [-y, x, 0.0]])
    return np.eye(3) + s * k + (1.0 - c) * (k @ k)


def lean_toward(clock: float, lean_deg: float) -> np.ndarray:
    """Rotation that leans +z by an angle straight toward a clock hour, (3, 3)."""
    toward = clock_direction(clock)
    axis = np.array([-toward[1], toward[0], 0.0])  # z cross toward
    return rotation_about(axis, lean_deg)


def head_matrix(
    turn_deg: float = 0.0,
    turn_toward: str = "left",
    chin_up_deg: float = 0.0,
    gaze_deg: float = 0.0,
    gaze_toward_clock: float = 12.0,
) -> np.ndarray:
    """Matrix M = Ry(turn) . Rx(-chin) . G that takes eye-frame vectors to the room, (3, 3).

    Turning toward the patient's left takes Z to (+sin turn, 0, cos turn); chin up takes Z to
    (0, sin chin, cos chin); G leans z by the gaze angle toward its clock hour.
    """
    sign = 1.0 if turn_toward == "left" else -1.0
    turn = rotation_about(np.array([0.0, 1.0, 0.0]), sign * turn_deg)
    chin = rotation_about(np.array([1.0, 0.0, 0.0]), -chin_up_deg)
    return turn @ chin @ lean_toward(gaze_toward_clock, gaze_deg)


def scope_direction_room(tilt_deg: float, seat_clock: float) -> np.ndarray:
    """Unit vector from eye to scope in the room: cos(tilt) Z + sin(tilt) seat."""
    tilt = math.radians(tilt_deg)
    return math.cos(tilt) * np.array([0.0, 0.0, 1.0]) + math.sin(tilt) * clock_direction(seat_clock)


def line_of_sight(head: np.ndarray, tilt_deg: float, seat_clock: float) -> np.ndarray:
    """Unit vector from the eye to the scope in the eye frame: M transposed times the room's."""
    return head.T @ scope_direction_room(tilt_deg, seat_clock)


def from_axis_deg(direction: np.ndarray) -> float:
    """Angle in degrees between a unit vector and the eye's axis +z."""
    return math.degrees(math.atan2(math.hypot(direction[0], direction[1]), direction[2]))


def direction_from_axis(from_axis: float, toward_clock: float) -> np.ndarray:
    """Unit vector at an angle (degrees) from the eye's axis, toward a clock hour."""
    angle = math.radians(from_axis)
    return math.sin(angle) * clock_direction(toward_clock) + math.cos(angle) * np.array([0.0, 0.0, 1.0])


def picture_axes(sight: np.ndarray, seat_in_eye: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Right and up of the picture seen along a line of sight.

    sight : unit vector from the eye to the scope. seat_in_eye : unit vector to the surgeon.
    Up is the part of minus seat square to the line of sight, right is (-sight) x up.
    Where the line of sight runs straight to the seat, up is taken from the eye's axis instead.
    """
    up = -seat_in_eye + np.dot(seat_in_eye, sight) * sight
    if np.linalg.norm(up) < 1e-9:
        axis = np.array([0.0, 0.0, 1.0])
        up = axis - np.dot(axis, sight) * sight
    up = up / np.linalg.norm(up)
    return cross(up, sight), up


def cross(a: np.ndarray, b: np.ndarray) -> np.ndarray:
    """Vector product of two (3,) arrays; numpy's own takes many times as long for single vectors."""
    return np.array([a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]])
