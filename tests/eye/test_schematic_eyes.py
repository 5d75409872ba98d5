"""Shipped schematic eyes against the powers published for them, traced through the built faces."""

from __future__ import annotations

import numpy as np
import pytest

from goniosim.eye import build, complete
from goniosim.scene.compile import CompiledScene
from goniosim.scene.tracing import trace

from eyes import shipped_mapping


class Constant:
    """A medium read from a shipped file's index."""

    absorption_per_mm = 0.0

    def __init__(self, name):
        import yaml

        from goniosim.shipped import shipped_folder

        self.n = yaml.safe_load((shipped_folder("plugins") / "media" / f"{name}.yaml").read_text())["index"]

    def index(self, wavelength_nm):
        return self.n


def compiled(name):
    mapping, _, _ = complete(shipped_mapping(name), "right")
    eye = build(mapping, "right")
    media = {medium: Constant(medium) for medium in mapping["media"].values()}
    return CompiledScene(tuple(eye.faces.values()), tuple(eye.bodies), media), mapping, media


def power_d(name, face):
    """n' (-u') / h of a ray parallel to the axis, 0.01 mm from it, after a face; in dioptres."""
    scene, mapping, media = compiled(name)
    height = 0.01
    traced = trace(scene, [[height, 0.0, 5.0]], [[0.0, 0.0, -1.0]], 555.0, paths=True)
    names = [met for met, _ in traced.path_faces[0]]
    onward = traced.path_directions[0][names.index(face)]
    index = media[mapping["media"]["aqueous" if face == "cornea-back" else "vitreous"]].n
    return 1000.0 * index * (-onward[0] / -onward[2]) / height


@pytest.mark.parametrize(
    "name, published",
    [
        ("gullstrand-exact-anterior", 43.053),  # from memory
        ("le-grand-full", 42.356),  # from memory
        ("navarro-1985", 42.8818),  # computed from the prescription, paraxially
        ("liou-brennan-1997-anterior", 42.2511),  # computed from the prescription, paraxially
        ("atchison-2006-anterior", 42.4767),  # computed from the prescription, paraxially
    ],
)
def test_corneal_power(name, published):
    assert power_d(name, "cornea-back") == pytest.approx(published, abs=0.001)


@pytest.mark.parametrize(
    "name, published",
    [
        ("le-grand-full", 59.940),  # from memory
        ("navarro-1985", 60.416),  # from memory
    ],
)
def test_equivalent_power(name, published):
    assert power_d(name, "lens-back") == pytest.approx(published, abs=0.001)


@pytest.mark.parametrize("name", ["le-grand-full", "navarro-1985"])
def test_light_from_infinity_meets_on_the_retina(name):
    """Axial lengths 24.197 (Le Grand) and 24.004 mm (Navarro) are the paraxial foci, from memory."""
    scene, mapping, _ = compiled(name)
    traced = trace(scene, [[0.05, 0.0, 5.0]], [[0.0, 0.0, -1.0]], 555.0)
    assert traced.ended_on == ["retina"]
    assert np.hypot(*traced.points_mm[0, :2]) < 1e-4
    assert traced.points_mm[0, 2] == pytest.approx(-mapping["axial_length_mm"], abs=1e-6)


def test_conic_periphery_carries_the_central_conics_on():
    """Back surface at 5.85 mm: sag 3.667 mm for a 6.50 mm sphere, 3.183 for R 6.53, Q -0.275, 2.945 for R
    6.40, Q -0.60 (computed, section 9 of the figures).
    """
    for radius, q, sag in ((6.50, 0.0, 3.667), (6.53, -0.275, 3.183), (6.40, -0.60, 2.945)):
        mapping, _, _ = complete(
            {
                "cornea": {"periphery": "conic", "back": {"radius_mm": radius, "q": q}},
                "chamber": {"width_mm": 11.7},
            },
            "right",
        )
        eye = build(mapping, "right")
        assert -eye.anatomy.spur_z_mm - 0.545 == pytest.approx(sag, abs=0.001)
        assert eye.report["measured_on_model"]["lens_vault_mm"] == pytest.approx(sag - 3.0, abs=0.001)
