"""The checks, one subject a file; `all_checks` gathers them by subject, in the order of the table."""

from __future__ import annotations

import importlib

from ..check import Check

SUBJECTS = {
    "refraction": "Snell's law, critical angles",
    "fresnel": "Fresnel and Brewster",
    "prisms": "prisms",
    "surfaces": "spherical surfaces",
    "media": "refractive indices",
    "schematic_eyes": "schematic eyes",
    "stigmatic": "surfaces without aberration",
    "planes": "layers, prisms, mirrors",
    "pencils": "narrow pencils",
    "traced_eyes": "shipped schematic eyes",
    "pupil": "the pupil seen obliquely",
    "eyes": "the built eye",
    "real_lenses": "shipped lenses on an eye",
    "trade": "facts of the trade",
}
"""Module of this folder -> what it checks."""


def checks_of(subject: str) -> list[Check]:
    """The checks of one subject."""
    return importlib.import_module(f".{subject}", __name__).CHECKS


def all_checks() -> dict[str, list[Check]]:
    """Every check, by subject."""
    return {subject: checks_of(subject) for subject in SUBJECTS}
