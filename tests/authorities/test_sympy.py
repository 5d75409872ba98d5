"""Our optics against sympy.physics.optics, an independent library, on seeded random rays and systems."""

from __future__ import annotations

import numpy as np
import pytest
from sympy import Matrix
from sympy.physics.optics import CurvedRefraction, FreeSpace, critical_angle, fresnel_coefficients, refraction_angle

from goniosim.optics.fresnel import amplitudes
from goniosim.optics.paraxial import Surface, System
from goniosim.optics.refraction import critical_angle_deg, refract

SEED = 11


def random_unit(random, count):
    vectors = random.normal(size=(count, 3))
    return vectors / np.linalg.norm(vectors, axis=1, keepdims=True)


def test_vector_refraction():
    random = np.random.default_rng(SEED)
    directions, normals = random_unit(random, 150), random_unit(random, 150)
    indices = random.uniform(1.0, 1.8, (150, 2))
    through = 0
    for d, g, (n1, n2) in zip(directions, normals, indices):
        ours, passed = refract(d[None], g[None], n1, n2)
        against = -g if d @ g > 0.0 else g  # sympy wants the normal that faces the light
        theirs = refraction_angle(Matrix(list(d)), n1, n2, normal=Matrix(list(against)))
        assert bool(passed[0]) == (theirs != 0), f"seed {SEED}, {d}, {g}, {n1}, {n2}"
        if passed[0]:
            through += 1
            assert np.abs(np.array(theirs, dtype=float).ravel() - ours[0]).max() < 1e-12
    assert 80 < through < 150  # both passages and total reflections were compared


def test_critical_angle():
    for n1, n2 in ((1.376, 1.0), (1.4906, 1.336), (1.336, 1.0)):
        assert critical_angle_deg(n1, n2) == pytest.approx(float(np.degrees(float(critical_angle(n1, n2)))), abs=1e-12)


def test_fresnel_amplitudes():
    random = np.random.default_rng(SEED)
    for _ in range(60):
        n1, n2 = random.uniform(1.0, 1.8, 2)
        limit = critical_angle_deg(n1, n2) or 90.0
        angle = random.uniform(0.01, 0.999) * limit
        rp, rs, tp, ts = (complex(c) for c in fresnel_coefficients(float(np.radians(angle)), n1, n2))
        ours = amplitudes(n1, n2, angle)
        assert abs(rs - ours.rs) < 1e-10
        assert abs(rp - ours.rp) < 1e-10
        assert abs(ts - ours.ts) < 1e-10
        assert abs(tp - ours.tp) < 1e-10


def test_fresnel_total_reflection():
    random = np.random.default_rng(SEED)
    for _ in range(40):
        n1, n2 = random.uniform(1.3, 1.8), random.uniform(1.0, 1.25)
        critical = critical_angle_deg(n1, n2)
        angle = critical + random.uniform(0.01, 0.99) * (90.0 - critical)
        rp, rs = (complex(c) for c in fresnel_coefficients(float(np.radians(angle)), n1, n2)[:2])
        ours = amplitudes(n1, n2, angle)
        # The sign of the time factor is a convention: theirs may be the conjugate of ours, for both alike.
        assert min(abs(rs - ours.rs), abs(rs - ours.rs.conjugate())) < 1e-10
        assert min(abs(rp / rs - ours.rp / ours.rs), abs(rp / rs - (ours.rp / ours.rs).conjugate())) < 1e-10


def test_ray_transfer_matrices():
    random = np.random.default_rng(SEED)
    for _ in range(25):
        count = random.integers(1, 6)
        indices = random.uniform(1.0, 1.8, count + 1)
        radii = random.uniform(3.0, 20.0, count) * random.choice([-1.0, 1.0], count)
        gaps = random.uniform(0.1, 5.0, count)
        theirs = Matrix([[1, 0], [0, 1]])
        for i in range(count):
            theirs = CurvedRefraction(radii[i], indices[i], indices[i + 1]) * theirs
            if i < count - 1:
                theirs = FreeSpace(gaps[i]) * theirs
        ours = System(tuple(map(Surface, radii, indices[1:], gaps)), indices[0]).matrix()
        # Theirs acts on (height, angle), ours on (height, index times angle).
        scaled = np.diag([1.0, indices[-1]]) @ np.array(theirs, dtype=float) @ np.diag([1.0, 1.0 / indices[0]])
        assert np.abs(scaled - ours).max() < 1e-10
