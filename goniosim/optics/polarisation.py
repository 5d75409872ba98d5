"""Polarisation carried exactly along a path, as 3 x 3 complex matrices.

Each face turns the field's s and p parts by Fresnel's complex amplitudes:
P = O_out diag(a_s, a_p, 1) O_in^T with O = [s, p, k], s across the plane of incidence, p = s x k.
Yun, Crabtree & Chipman, Appl Opt 50(18):2855-2865 (2011), "Three-dimensional polarization ray-tracing
calculus I" (from memory). Amplitudes are scaled to power, so that |E|^2 is the share of power kept.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Sequence

import numpy as np

from ..errors import Misuse
from .fresnel import amplitudes

EVENTS = ("through", "reflected", "coated", "mirror")


@dataclass(frozen=True)
class Event:
    """What happens at one face of a path.

    kind : 'through' (a clear face), 'reflected' (at a clear face, totally or not), 'coated' (through a
    coated face) or 'mirror'; the last two have a reflectance that is the same for s and p.
    normal : (3,) unit normal, either side. n1, n2 : indices before and behind the face.
    after : (3,) direction in which the light goes on.
    """

    kind: str
    normal: np.ndarray
    n1: float
    n2: float
    after: np.ndarray
    reflectance: float = 0.0


def path_matrix(first: np.ndarray, events: Sequence[Event]) -> np.ndarray:
    """Matrix that takes the field at the start to the field at the end, (3, 3) complex."""
    total, direction = np.eye(3, dtype=complex), np.asarray(first, dtype=float)
    for event in events:
        total = _event_matrix(direction, event) @ total
        direction = np.asarray(event.after, dtype=float)
    return total


def unpolarised_throughput(first: np.ndarray, events: Sequence[Event]) -> float:
    """Share of the power of unpolarised light that a path keeps, each polarisation followed by itself.

    The mean over two fields at right angles; a product of unpolarised transmittances differs from it,
    because light is polarised a little at every tilted face.
    """
    across = _any_across(np.asarray(first, dtype=float))
    fields = path_matrix(first, events) @ np.stack([across, np.cross(first, across)], axis=1)
    return float(0.5 * np.sum(np.abs(fields) ** 2))


def _event_matrix(before: np.ndarray, event: Event) -> np.ndarray:
    """Matrix of one face."""
    normal = event.normal if np.dot(event.normal, before) >= 0.0 else -np.asarray(event.normal)
    s = np.cross(before, normal)
    sine = np.linalg.norm(s)
    # Squarely on a face every s does.
    s = s / sine if sine > 1e-12 else _any_across(before)
    incidence_deg = math.degrees(math.atan2(sine, float(np.dot(before, normal))))
    amplitude_s, amplitude_p = _event_amplitudes(event, incidence_deg)
    enters = np.stack([s, np.cross(s, before), before])
    leaves = np.stack([s, np.cross(s, event.after), event.after], axis=1)
    return leaves @ np.diag([amplitude_s, amplitude_p, 1.0]).astype(complex) @ enters


def _event_amplitudes(event: Event, incidence_deg: float) -> tuple[complex, complex]:
    """Amplitudes of s and p, scaled to power."""
    if event.kind == "coated":
        kept = math.sqrt(1.0 - event.reflectance)
        return kept, kept
    if event.kind == "mirror":
        kept = math.sqrt(event.reflectance)
        return -kept, kept
    a = amplitudes(event.n1, event.n2, incidence_deg)
    if event.kind == "reflected":
        return a.rs, a.rp
    if event.kind == "through":
        scale = math.sqrt(a.power_factor)
        return scale * a.ts, scale * a.tp
    raise Misuse(f"event must be one of {', '.join(EVENTS)}; got {event.kind!r}")


def _any_across(direction: np.ndarray) -> np.ndarray:
    """A unit vector at right angles to a direction."""
    axis = np.eye(3)[int(np.argmin(np.abs(direction)))]
    across = np.cross(direction, axis)
    return across / np.linalg.norm(across)
