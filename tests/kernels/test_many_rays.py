"""Thousands of seeded rays through made-up scenes: the compiled tracer against its slow twin."""

from __future__ import annotations

import numpy as np
import pytest
from made_up_scenes import NM, SCENES
from slow_tracer import SlowTracer

from goniosim.scene.tracing import trace

RAYS = 1000
MOST_UNFAIR = 0.02  # share of rays that run into an edge or the critical angle and are not judged


def seeded_rays(seed: int, count: int) -> tuple[np.ndarray, np.ndarray]:
    """Starts in and about the bodies and directions all round, half of them toward the middle."""
    random = np.random.default_rng(seed)
    starts = random.uniform([-7.0, -9.0, -4.0], [7.0, 9.0, 10.0], size=(count, 3))
    ways = random.normal(size=(count, 3))
    inward = np.arange(count) % 2 == 0
    ways[inward] = random.normal(scale=3.0, size=(inward.sum(), 3)) - starts[inward]
    return starts, ways / np.linalg.norm(ways, axis=1, keepdims=True)


@pytest.mark.parametrize("name, expected", [
    ("contact lens with mirrors", {("mirror", "reflected"), ("slope", "reflected"), ("seam", "through"), ("top", "through"),
                                   ("rim", "absorbed"), ("back", "through"), ("front", "through"), ("contact", "through")}),
    ("open bench", {("ball-front", "through"), ("ball-back", "through"), ("lens-front", "through"), ("lens-edge", "through"),
                    ("lens-back", "through"), ("cone", "through"), ("cone", "reflected"), ("cone-floor", "reflected"),
                    ("cap", "through"), ("cap", "reflected"), ("bowl", "through"), ("bowl-edge", "through"),
                    ("post", "absorbed"), ("post-top", "absorbed")}),
])
def test_compiled_tracer_and_slow_twin_agree(name, expected):
    seed = 11
    scene = SCENES[name]()
    slow = SlowTracer(scene, NM)
    starts, ways = seeded_rays(seed, RAYS)
    fast = trace(scene, starts, ways, NM, paths=True)
    met, unfair = set(), 0
    for i in range(RAYS):
        told = slow.trace(starts[i], ways[i])
        if not told.fair:
            unfair += 1
            continue
        which = f"seed {seed}, ray {i} from {starts[i]} along {ways[i]}"
        assert fast.path_faces[i] == told.events, which
        if told.events:
            assert np.abs(fast.path_points_mm[i] - told.points).max() < 1e-9, which
            assert np.abs(fast.points_mm[i] - told.points[-1]).max() < 1e-9, which
        assert np.abs(fast.directions[i] - told.direction).max() < 1e-9, which
        assert fast.throughput[i] == pytest.approx(told.power, abs=1e-9), which
        met |= set(told.events)
    assert unfair <= MOST_UNFAIR * RAYS
    assert expected <= met, f"the rays did not try enough; missing: {expected - met}"
