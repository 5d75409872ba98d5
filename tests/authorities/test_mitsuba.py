"""The tracer against mitsuba, a general-purpose renderer, on the same dielectric scene, ray by ray.

Mitsuba's own intersection and its own dielectric are used; it is built in single precision, so agreement
is asked to a few of its last digits: 2e-5 mm in points some 10 mm from the origin, 1e-5 in directions.
Rays within 0.5 deg of total reflection are left out of the directions, where single precision
loses digits by the square root.
"""

from __future__ import annotations

import mitsuba as mi
import numpy as np
import pytest

from goniosim.faces import Cylinder, Plane, Sphere
from goniosim.optics.fresnel import amplitudes, powers
from goniosim.verify.blocks import face, followed, scene_of

SEED, RAYS = 31, 3000
AQUEOUS, CORNEA, FLUID, LENS = 1.336, 1.376, 1.334, 1.4923
BACK, FRONT, CONTACT = (6.53, -0.545), (7.79, 0.0), (8.4, 0.05)  # radius, vertex
FACE_Z, LEAN_DEG = 5.0, 48.0
POINT_MM, DIRECTION = 2e-5, 1e-5
NEAR_CRITICAL_DEG = 0.5
STEP_MM = 1e-3
ORDER = ("back", "front", "contact", "face")


def our_scene():
    faces = [face("back", Sphere(BACK[0]), BACK[1]), face("front", Sphere(FRONT[0]), FRONT[1]),
             face("contact", Sphere(CONTACT[0]), CONTACT[1]), face("face", Plane(), FACE_Z, LEAN_DEG, 12.0),
             face("rim", Cylinder(6.4), finish="ground"), face("floor", Plane(), -4.5, finish="ground")]
    rim = ("rim", "behind")
    return scene_of(faces,
                    ("aqueous", AQUEOUS, (("back", "behind"), ("floor", "ahead"), rim)),
                    ("cornea", CORNEA, (("front", "behind"), ("back", "ahead"), rim)),
                    ("fluid", FLUID, (("contact", "behind"), ("front", "ahead"), rim)),
                    ("lens", LENS, (("face", "behind"), ("contact", "ahead"), rim)))


def dielectric(inside, outside):
    return {"type": "dielectric", "int_ior": inside, "ext_ior": outside}


@pytest.fixture(scope="module")
def renderer_scene():
    mi.set_variant("scalar_rgb")

    def ball(radius, vertex, inside, outside):
        return {"type": "sphere", "center": [0.0, 0.0, vertex - radius], "radius": radius,
                "bsdf": dielectric(inside, outside)}

    toward_12 = mi.ScalarTransform4f().translate([0.0, 0.0, FACE_Z]).rotate([1.0, 0.0, 0.0], -LEAN_DEG).scale(20.0)
    return mi.load_dict({
        "type": "scene", "back": ball(*BACK, AQUEOUS, CORNEA), "front": ball(*FRONT, CORNEA, FLUID),
        "contact": ball(*CONTACT, FLUID, LENS),
        "face": {"type": "rectangle", "to_world": toward_12, "bsdf": dielectric(LENS, 1.0)}})


def renderer_path(scene, start, direction):
    """Shape names, points and directions as the renderer finds them, to the first total reflection or the air."""
    context, passing = mi.BSDFContext(), 1
    context.component = passing
    names, points, directions = [], [], []
    ray = mi.Ray3f(mi.Point3f(start), mi.Vector3f(direction))
    for _ in ORDER:
        hit = scene.ray_intersect(ray)
        if not hit.is_valid():
            break
        names.append(hit.shape.id())
        points.append(np.array(hit.p))
        sample, weight = hit.bsdf(ray).sample(context, hit, 0.5, mi.Point2f(0.5, 0.5))
        if not max(weight) > 0.0:
            break
        onward = hit.to_world(sample.wo)
        directions.append(np.array(onward))
        # Step along the ray: the renderer's own offset is along the normal and would move the line.
        ray = mi.Ray3f(hit.p + STEP_MM * onward, onward)
    return names, points, directions


def incidence_margin_deg(directions, normals, indices):
    """How far each incidence lies below the critical angle, negative beyond it; 90 where there is none."""
    cosine = np.abs(np.sum(directions * normals, axis=1))
    angle = np.degrees(np.arccos(np.minimum(cosine, 1.0)))
    ratio = np.minimum(indices[1:] / indices[:-1], 1.0)
    return np.where(ratio < 1.0, np.degrees(np.arcsin(ratio)) - angle, 90.0)


def normals_at(points):
    """Normals of the four faces at our hit points."""
    centres = np.array([[0.0, 0.0, vertex - radius] for radius, vertex in (BACK, FRONT, CONTACT)])
    rows = [(point - centre) / np.linalg.norm(point - centre) for point, centre in zip(points, centres)]
    if len(points) == 4:
        rows.append(np.array([0.0, np.sin(np.radians(LEAN_DEG)), np.cos(np.radians(LEAN_DEG))]))
    return np.array(rows)


def test_same_points_and_directions_ray_by_ray(renderer_scene):
    random = np.random.default_rng(SEED)
    starts = np.column_stack([random.uniform(-3.0, 3.0, (RAYS, 2)), np.full(RAYS, -3.2)])
    directions = random.normal(size=(RAYS, 3))
    directions[:, 2] = np.abs(directions[:, 2])
    directions /= np.linalg.norm(directions, axis=1, keepdims=True)
    traces = followed(our_scene(), starts, directions)
    indices = np.array([AQUEOUS, CORNEA, FLUID, LENS, 1.0])
    compared = reflected = 0
    for ray in range(RAYS):
        names = [name for name, _ in traces.path_faces[ray]]
        passed = next((i for i, (_, event) in enumerate(traces.path_faces[ray]) if event != "through"), len(names))
        met = min(passed + 1, len(names), 4)
        if tuple(names[:met]) != ORDER[:met]:
            continue  # ended on the rim or the floor, which the renderer's scene does not have
        points, onward = traces.path_points_mm[ray][:met], traces.path_directions[ray][:met]
        before = np.vstack([directions[ray], onward[: met - 1]])
        margin = incidence_margin_deg(before, normals_at(points), indices[: met + 1])
        if np.abs(margin).min() < NEAR_CRITICAL_DEG:
            continue
        their_names, their_points, their_directions = renderer_path(renderer_scene, starts[ray], directions[ray])
        assert their_names[:met] == names[:met], f"seed {SEED}, ray {ray}"
        assert np.abs(np.array(their_points[:met]) - points).max() < POINT_MM, f"seed {SEED}, ray {ray}"
        assert len(their_directions) == passed, f"seed {SEED}, ray {ray}"
        if passed:
            assert np.abs(np.array(their_directions) - onward[:passed]).max() < DIRECTION, f"seed {SEED}, ray {ray}"
        compared += passed == 4
        reflected += passed < 4
    assert compared > 300  # rays that went all the way
    assert reflected > 300  # and rays that both say are reflected totally


def test_same_reflectance(renderer_scene):
    random = np.random.default_rng(SEED)
    for _ in range(300):
        n1, n2 = random.uniform(1.0, 1.8, 2)
        angle = random.uniform(0.0, 89.0)
        theirs = mi.fresnel(float(np.cos(np.radians(angle))), float(n2 / n1))[0]
        assert powers(n1, n2, angle).reflected == pytest.approx(theirs, abs=2e-5)


def test_same_polarised_amplitudes(renderer_scene):
    random = np.random.default_rng(SEED)
    for _ in range(300):
        n1, n2 = random.uniform(1.0, 1.8, 2)
        angle = random.uniform(0.0, 85.0)
        s, p = mi.fresnel_polarized(float(np.cos(np.radians(angle))), mi.Complex2f(float(n2 / n1)))[:2]
        ours = amplitudes(n1, n2, angle)
        assert abs(complex(s.real, s.imag)) == pytest.approx(abs(ours.rs), abs=3e-4)
        assert abs(complex(p.real, p.imag)) == pytest.approx(abs(ours.rp), abs=3e-4)
