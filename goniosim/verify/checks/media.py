"""Refractive indices against published values."""

from __future__ import annotations

from functools import partial

from ...optics.air import air_index_ciddor
from ...optics.dispersion import sellmeier
from ...optics.water import water_density_kg_m3, water_index, water_index_iapws
from ..check import COMPUTED, MEMORY, SECONDARY, VERIFIED, Check
from ..shipped_media import abbe_number, indices

OCULAR = "Atchison & Smith, J Opt Soc Am A 22(1):29-37 (2005)"
SULTANOVA = "fit to Sultanova, Kasarova & Nikolov, Acta Phys Pol A 116:585 (2009), evaluated by hand"
MALITSON = "Malitson, J Opt Soc Am 55:1205 (1965), evaluated by hand"
CROWN = "glass data, code 517/642, evaluated by hand"
R9_97 = "IAPWS R9-97, the release's check values"
DAIMON = "Daimon & Masumura, Appl Opt 46:3811 (2007), water at 20.0 deg C"
CIDDOR = "Ciddor, Appl Opt 35(9):1566 (1996)"
GULLSTRAND = "Gullstrand's indices, to which the ocular dispersion is normalised at 555 nm"
TEXTBOOK_LINES = (486.1, 546.1, 587.6, 589.3, 632.8, 656.3)

DAIMON_B = (5.684027565e-1, 1.726177391e-1, 2.086189578e-2, 1.130748688e-1)
DAIMON_C = (5.101829712e-3, 1.821153936e-2, 2.620722293e-2, 10.69792721)


def water_off_daimon() -> float:
    """Greatest difference between the IAPWS water and Daimon & Masumura's at 20 deg C, 400 to 800 nm."""
    return max(abs(water_index(w, 20.0) - sellmeier(w, DAIMON_B, DAIMON_C)) for w in range(400, 801, 10))


def _lines(name: str, source: str, status: str, expected: tuple[float, ...], abbe: float) -> list[Check]:
    """Checks of a lens material at the usual spectral lines."""
    return [
        Check(f"{name} at F, e, d, D, 632.8 nm, C", source, status, expected, 6e-6, "",
              partial(indices, name, *TEXTBOOK_LINES)),
        Check(f"{name}: Abbe number", source, status, abbe, 0.06, "", partial(abbe_number, name)),
    ]


CHECKS = [
    Check("cornea, aqueous, lens core, lens shell, vitreous at 555 nm", GULLSTRAND, SECONDARY,
          (1.376, 1.336, 1.406, 1.386, 1.336), 6e-6, "",
          lambda: [indices(name, 555.0)[0] for name in ("cornea", "aqueous", "lens-high", "lens-low",
                                                        "vitreous")]),
    Check("the same at 589.3 nm", OCULAR + ", evaluated by hand", COMPUTED,
          (1.37470, 1.33472, 1.40437, 1.38439, 1.33475), 6e-6, "",
          lambda: [indices(name, 589.3)[0] for name in ("cornea", "aqueous", "lens-high", "lens-low",
                                                        "vitreous")]),
    Check("cornea at 400, 486.1, 656.3, 780 nm", OCULAR + ", evaluated by hand", COMPUTED,
          (1.38717, 1.37940, 1.37264, 1.36991), 6e-6, "", partial(indices, "cornea", 400.0, 486.1, 656.3,
          780.0)),
    Check("aqueous at 400, 486.1, 656.3, 780 nm", OCULAR + ", evaluated by hand", COMPUTED,
          (1.34700, 1.33933, 1.33269, 1.32997), 6e-6, "", partial(indices, "aqueous", 400.0, 486.1, 656.3,
          780.0)),
    Check("cornea and aqueous: Abbe numbers", OCULAR + ", evaluated by hand", COMPUTED, (55.5, 50.4), 0.06,
          "", lambda: (abbe_number("cornea"), abbe_number("aqueous"))),
    Check("the whole cornea lies between stroma's back 1.373 and front 1.380",
          "Patel, Marshall & Fitzke, J Refract Surg 11(2):100 (1995)", VERIFIED, 1.3765, 0.0035, "",
          lambda: indices("cornea", 589.3)[0]),
    Check("lens as one medium at 555 nm", "Le Grand's equivalent index", MEMORY, 1.42, 1e-5, "",
          partial(indices, "lens-equivalent", 555.0)),
    *_lines("pmma", SULTANOVA, COMPUTED, (1.49711, 1.49282, 1.49062, 1.49054, 1.48871, 1.48788), 53.2),
    *_lines("polycarbonate", SULTANOVA, COMPUTED, (1.59960, 1.58975, 1.58476, 1.58458, 1.58047, 1.57861),
          27.9),
    *_lines("fused-silica", MALITSON, COMPUTED, (1.46313, 1.46008, 1.45846, 1.45840, 1.45702, 1.45637), 67.8),
    *_lines("crown", CROWN, COMPUTED, (1.52238, 1.51872, 1.51680, 1.51673, 1.51509, 1.51432), 64.1),
    Check("silicone-like at 589.3 nm, close to the cornea as direct domes are",
          "Duane's Clinical Ophthalmology v3 ch44 Fig. 2b: about 1.4", VERIFIED, 1.4, 0.05, "",
          partial(indices, "silicone-like", 589.3)),
    Check("saline at 589.3 nm, as balanced salt solution", "common figure 1.334 to 1.335, low confidence",
          MEMORY, 1.3345, 5e-4, "", partial(indices, "saline", 589.3)),
    Check("viscoelastic at 589.3 nm", "common figure 1.335 to 1.338, low confidence", MEMORY, 1.3365, 1.5e-3,
          "", partial(indices, "viscoelastic", 589.3)),
    Check("distilled water, measured, against air",
          "Ophthalmic Res 26:32, Abbe refractometer, room temperature",
          VERIFIED, 1.3326, 6e-4, "", partial(indices, "water", 589.3)),
    Check("water by IAPWS, 226.5 nm, 298.15 K, 997.047435 kg/m3", R9_97, SECONDARY, 1.39277824, 5e-9, "",
          partial(water_index_iapws, 226.5, 298.15, 997.047435)),
    Check("steam by IAPWS, 589.3 nm, 773.15 K, 30.4758534 kg/m3", R9_97, SECONDARY, 1.00949307, 5e-9, "",
          partial(water_index_iapws, 589.3, 773.15, 30.4758534)),
    Check("water against vacuum at 20, 25, 35, 37 deg C, 589.3 nm", "IAPWS R9-97 with IAPWS-95 densities",
          COMPUTED, (1.333349, 1.332858, 1.331650, 1.331377), 1e-6, "",
          lambda: [water_index(589.3, t) for t in (20.0, 25.0, 35.0, 37.0)]),
    Check("water against vacuum at 35 deg C, 546.1 and 632.8 nm", "IAPWS R9-97 with IAPWS-95 densities",
          COMPUTED,
          (1.333118, 1.330419), 1e-6, "", lambda: (water_index(546.1, 35.0), water_index(632.8, 35.0))),
    Check("density of water at 20, 25, 35, 37 deg C", "IAPWS-95", SECONDARY,
          (998.2071, 997.0470, 994.0326, 993.3305), 0.002, "kg/m3",
          lambda: [water_density_kg_m3(t) for t in (20.0, 25.0, 35.0, 37.0)]),
    Check("water at F, e, d, D, 632.8 nm, C, against vacuum", DAIMON, VERIFIED,
          (1.33749, 1.33483, 1.33340, 1.33335, 1.33211, 1.33151), 2e-5, "",
          lambda: [water_index(w, 20.0) for w in TEXTBOOK_LINES]),
    Check("water, 400 to 800 nm, greatest difference", DAIMON, VERIFIED, 0.0, 5e-6, "", water_off_daimon),
    Check("air at 589.3 and 632.8 nm", CIDDOR, MEMORY, (1.00027715, 1.00027653), 6e-9, "",
          lambda: (air_index_ciddor(589.3), air_index_ciddor(632.8))),
]
