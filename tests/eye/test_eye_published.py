"""The usual eye against published figures, each with its source."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.optimize import brentq

from goniosim.eye import build, complete
from goniosim.eye.cornea import SPUR_SLOPE_DEG

from eyes import built, section_height


def thickness(eye, x):
    """Thickness of the cornea from the front at a chord distance x, along the front's normal."""
    h = 1e-6
    before, at, after = section_height(eye, "cornea-front", [x - h, x, x + h])
    inward = np.array([(after - before) / (2 * h), -1.0])
    inward /= np.linalg.norm(inward)

    def above(t):
        return at + t * inward[1] - section_height(eye, "cornea-back", x + t * inward[0])[0]

    return brentq(above, 0.0, 1.5)


def test_radial_thickness_law():
    """T(x) = Tm (1 + TV x^2), TV 0.0088 +- 0.0020 mm^-2, 80 eyes; +0.9 % (0.4 to 1.3) at 1 mm, +22 % (12 to
    32) at 5 mm.
    """
    eye = built("usual")
    centre = thickness(eye, 0.0)
    for x in (2.0, 3.0, 4.0):
        variation = (thickness(eye, x) / centre - 1.0) / x**2
        assert abs(variation - 0.0088) < 2 * 0.0020, x
    assert 1.004 <= thickness(eye, 1.0) / centre <= 1.013
    assert 1.12 <= thickness(eye, 5.0) / centre <= 1.32


def test_peripheral_thickness():
    """633 +- 50 to 673 +- 49 um in the periphery, ultrasound, 303 corneas: Insight 18(4):16 (1993)."""
    assert 0.583 < thickness(built("usual"), 4.5) < 0.722


@pytest.mark.parametrize("r, slope_deg", [(5.9, 58.2), (5.706, 55.8), (5.495, 53.2)])
def test_wall_slopes_of_the_rehearsal(r, slope_deg):
    """A rehearsal of the same construction by other code gave these slopes at spur, mid-meshwork and
    Schwalbe's line.
    """
    step = 1e-5
    inner, outer = section_height(built("usual"), "cornea-back", [r - 2 * step, r - 0.0])
    assert math.degrees(math.atan((inner - outer) / (2 * step))) == pytest.approx(slope_deg, abs=0.1)


def test_schwalbe_line_of_the_rehearsal():
    """r 5.495, z -3.300 mm in the rehearsal by other code."""
    x, _, z = built("usual").anatomy.point("schwalbe-line", 3.0)
    assert x == pytest.approx(5.495, abs=0.01) and z == pytest.approx(-3.300, abs=0.01)


def test_outer_limbal_slope():
    """Tangent 37 deg at 6.6 mm from the corneal apex, mean of 118 subjects: PMC10123217; straight beyond."""
    eye = built("usual")
    z = section_height(eye, "cornea-front", [6.6, 6.7, 8.0])
    assert math.degrees(math.atan((z[0] - z[1]) / 0.1)) == pytest.approx(37.0, abs=1e-6)
    assert math.degrees(math.atan((z[1] - z[2]) / 1.3)) == pytest.approx(37.0, abs=1e-6)


@pytest.mark.parametrize("face", ["cornea-front", "cornea-back"])
def test_central_conic_runs_on_smoothly(face):
    """Value, slope and curvature do not jump 4 mm from the axis (finite differences on both sides)."""
    eye, h = built("usual"), 1e-3
    z = section_height(eye, face, 4.0 + h * np.arange(-3, 4))
    inside = (z[3] - 2 * z[2] + z[1]) / h**2
    outside = (z[5] - 2 * z[4] + z[3]) / h**2
    assert outside == pytest.approx(inside, abs=1e-3)


def test_narrow_angle_is_of_the_small_class():
    """AOD750 0.174 +- 0.060 mm and TISA750 0.075 +- 0.035 mm^2 where gonioscopy says small: Eye and Vision
    2020, s40662-020-00196-1.
    """
    measured = built("adult-narrow").report["measured_on_model"]
    assert abs(measured["aod750_mm"] - 0.174) < 0.060
    assert abs(measured["tisa750_mm2"] - 0.075) < 0.035


def test_open_angle_aod500():
    """A ciliary band of 0.15 to 0.2 mm gave an AOD500 of 0.43 to 0.46 mm at 35 deg in the rehearsal by
    other code.
    """
    assert 0.43 <= built("usual").report["measured_on_model"]["aod500_mm"] <= 0.46


def test_eyes_drawn_from_published_means_can_be_built():
    """Means and SDs of figures published separately, drawn independently: front 7.79 +- 0.27, back/front
    0.838 +- 0.02, Q -0.18 +- 0.18 and -0.38 +- 0.27, thickness 544 +- 33 um, depth 3.03 +- 0.37, width
    11.75 +- 0.42, vault 0.32 +- 0.27 mm (Dubbelman 2006; Acta Ophthalmol Scand 2002; Kadhim 2016;
    Nongpiur 2011; Ruefer 2005).
    """
    rng = np.random.default_rng(20)
    contradicted = 0
    for _ in range(120):
        front = rng.normal(7.79, 0.27)
        mapping, _, _ = complete(
            {
                "cornea": {
                    "front": {"radius_mm": front, "q": rng.normal(-0.18, 0.18)},
                    "back": {"radius_mm": front * rng.normal(0.838, 0.02), "q": rng.normal(-0.38, 0.27)},
                    "thickness_um": rng.normal(544.0, 33.0),
                },
                "chamber": {
                    "depth_mm": rng.normal(3.03, 0.37),
                    "width_mm": rng.normal(11.75, 0.42),
                    "vault_mm": rng.normal(0.32, 0.27),
                },
                "angle": {"width_deg": rng.uniform(15.0, 42.0)},
                "iris": {"bow_mm": rng.uniform(0.2, 0.6)},
            },
            "right",
        )
        eye = build(mapping, "right")
        slope = math.degrees(math.atan(-float(eye.anatomy.mean.wall.slope(eye.anatomy.spur_r_mm))))
        assert SPUR_SLOPE_DEG[0] - 1e-9 <= slope <= SPUR_SLOPE_DEG[1] + 1e-9
        assert eye.report["measured_on_model"]["angle_width_deg"] == pytest.approx(
            mapping["angle"]["width_deg"], abs=1e-6
        )
        contradicted += any("contradict" in note for note in eye.notes)
    assert contradicted < 30
