"""Plan one case: sightings, landings, aim, gaps, cut-offs and the clock ring, as one record."""

from __future__ import annotations

from .record import Plan

__all__ = ["Plan", "make_plan"]


def make_plan(scene, progress=None):
    """Compute the plan of a scene; see `goniosim.planning.make.make_plan`."""
    from .make import make_plan as run

    return run(scene, progress)
