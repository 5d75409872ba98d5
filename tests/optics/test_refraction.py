"""The numpy twin of the tracer: Snell's law in vectors, and the two against each other."""

from __future__ import annotations

import numpy as np
import pytest

from goniosim.faces import Cylinder, Plane, Sphere
from goniosim.optics.refraction import angle_deg, critical_angle_deg, reflect, refract, refracted_deg
from goniosim.verify.blocks import face, followed, scene_of

SEED = 23


def unit_rows(random, count):
    rows = random.normal(size=(count, 3))
    return rows / np.linalg.norm(rows, axis=1, keepdims=True)


def test_tangential_part_times_index_is_kept():
    random = np.random.default_rng(SEED)
    d, g = unit_rows(random, 5000), unit_rows(random, 5000)
    onward, passed = refract(d, g, 1.376, 1.0)
    before = 1.376 * (d - np.sum(d * g, axis=1, keepdims=True) * g)
    after = onward - np.sum(onward * g, axis=1, keepdims=True) * g
    assert np.abs(before - after)[passed].max() < 1e-15 * 20
    assert 0.2 < passed.mean() < 0.9
    assert np.allclose(np.linalg.norm(onward, axis=1), 1.0, atol=1e-15, rtol=0.0)


def test_refracted_light_stays_on_the_far_side_and_reflected_on_the_near():
    random = np.random.default_rng(SEED)
    d, g = unit_rows(random, 5000), unit_rows(random, 5000)
    onward, passed = refract(d, g, 1.5, 1.2)
    same_side = np.sum(d * g, axis=1) * np.sum(onward * g, axis=1) > 0.0
    assert np.array_equal(same_side, passed)


def test_where_light_cannot_pass_it_is_reflected():
    d = np.array([[np.sin(1.0), 0.0, np.cos(1.0)]])
    onward, passed = refract(d, np.array([[0.0, 0.0, 1.0]]), 1.5, 1.0)
    assert not passed[0]
    assert np.allclose(onward, reflect(d, np.array([[0.0, 0.0, 1.0]])), atol=1e-15)
    assert refracted_deg(np.degrees(1.0), 1.5, 1.0) is None
    assert critical_angle_deg(1.0, 1.5) is None


def test_squarely_nothing_turns():
    onward, _ = refract(np.array([[0.0, 0.0, -1.0]]), np.array([[0.0, 0.0, 1.0]]), 1.376, 1.0)
    assert onward.tolist() == [[0.0, 0.0, -1.0]]


def test_small_angles_are_exact():
    tiny = np.array([[1e-12, 0.0, 1.0]])
    assert angle_deg(tiny, np.array([[0.0, 0.0, 1.0]]))[0] == pytest.approx(np.degrees(1e-12), rel=1e-12)


def test_compiled_tracer_agrees_with_the_twin():
    random = np.random.default_rng(SEED)
    scene = scene_of([face("front", Sphere(7.8)), face("back", Plane(), -20.0), face("rim", Cylinder(7.7),
                                                                                     finish="ground")],
                     ("glass", 1.376, (("front", "behind"), ("back", "ahead"), ("rim", "behind"))))
    directions = np.column_stack([random.uniform(-0.9, 0.9, (4000, 2)), np.ones(4000)])
    directions /= np.linalg.norm(directions, axis=1, keepdims=True)
    traces = followed(scene, np.array([0.0, 0.0, -6.0]), directions)
    first = [i for i, path in enumerate(traces.path_faces) if path and path[0][0] == "front"]
    points = np.array([traces.path_points_mm[i][0] for i in first])
    kernel = np.array([traces.path_directions[i][0] for i in first])
    normals = (points - [0.0, 0.0, -7.8]) / 7.8
    onward, passed = refract(directions[first], normals, 1.376, 1.0)
    assert np.abs(onward - kernel).max() < 1e-13
    assert passed.tolist() == [traces.path_faces[i][0][1] == "through" for i in first]
    assert len(first) > 2000
    assert 100 < passed.sum()
