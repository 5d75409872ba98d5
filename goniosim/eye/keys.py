"""Declarations of the keys of an eye file, each default with its source.

Ranges here are only what a key can mean at all; what an eye can be is checked in `plausible.py`, where a
radius given as dioptres, or the reverse, is recognised.
"""

from __future__ import annotations

from ..declare import Key

DUBBELMAN = "Dubbelman, Sicam & Van der Heijde, Vision Res 46:993 (2006)"
ACTA_2002 = "Acta Ophthalmol Scand 80(4) (2002), doi 10.1034/j.1600-0420.2002.800406.x"
KADHIM = "Kadhim & Farhood, Clin Ophthalmol 10:2369 (2016)"
LIMBAL_SLOPE = "37 deg at 6.6 mm, mean of 118 subjects: PMC10123217"
DEPTH_2011 = "open angles 2.95 mm: Nongpiur et al., Ophthalmology 118:474 (2011), rounded"
NONGPIUR_2010 = "spur to spur 11.70 (women), 11.81 mm (men): Nongpiur et al., Ophthalmology 117:1967 (2010)"
SPUR_PLANE = ("depth + vault 3.35 mm, between 3.27 (open angles) and 3.56 mm (closure): "
              "Nongpiur et al., Ophthalmology 118:474 (2011)")
ROEMKENS = ("27 deg at 62 years: Roemkens et al., Clin Ophthalmol 12:411 (2018); 35 for a surgical adult, "
            "common practice")
TUN = "Tun et al., Graefes Arch 2013"
SNG = "Sng et al., Singapore Chinese Eye Study: iris thickness 0.46, bow 0.25 mm"
BREAZZANO = "Breazzano et al., J Ophthalmic Vis Res 8:9 (2013)"
LENS_2001 = "Dubbelman & Van der Heijde, Vision Res 41:1867 (2001), at 45 years; formula from memory"
NONGPIUR_2011 = "open angles: Nongpiur et al., Ophthalmology 118:474 (2011)"
PRACTICE = "common practice, no source"
MEMORY = "from memory"

QUADRANTS = ("nasal", "temporal", "superior", "inferior")
FILLS = ("aqueous", "saline", "viscoelastic", "air", "air-bubble")


def _surface(which: str, radius: str, q: str, source: str) -> tuple[Key, ...]:
    return (
        Key("radius_mm", "number", f"{which}: radius at the apex, for a round surface; {radius}",
            default=None, unit="mm", above=0.0, maximum=100.0, source=source),
        Key("flat_mm", "number", f"{which}: radius of the flat meridian, with steep_mm instead of radius_mm",
            default=None, unit="mm", above=0.0, maximum=100.0),
        Key("steep_mm", "number", f"{which}: radius of the steep meridian", default=None, unit="mm",
            above=0.0, maximum=100.0),
        Key("steep_axis_deg", "number", "meridian of the steep radius, anticlockwise from 3 o'clock as the "
            "observer sees it; 90 where left out beside flat_mm and steep_mm", default=None, unit="deg",
            minimum=0.0, maximum=180.0, source=PRACTICE),
        Key("q", "number", f"{which}: asphericity Q, 0 a sphere, -1 to 0 flatter outward; {q} where left out",
            default=None, minimum=-10.0, maximum=10.0, source=ACTA_2002),
    )


CORNEA_KEYS = (
    Key("front", "map", "front surface of the cornea", default=None,
        keys=_surface("front", "7.79 where left out", "-0.18", DUBBELMAN)),
    Key("back", "map", "back surface of the cornea", default=None,
        keys=_surface("back", "6.53/7.79 of the front's radii where left out", "-0.38", DUBBELMAN)),
    Key("thickness_um", "number", "central thickness", default=545.0, unit="um", above=0.0, maximum=5000.0,
        source=KADHIM + ": 543.95 um, rounded"),
    Key("periphery", "choice", "measured: own profile out to limbus and spur; conic: the central conics "
        "carried on, as schematic eyes do; the spur then lies on the back conic and the vault is a result",
        default="measured", choices=("measured", "conic")),
    Key("limbal_slope_deg", "number", "slope of the outer surface 6.6 mm from the axis", default=37.0,
        unit="deg", above=0.0, below=90.0, source=LIMBAL_SLOPE),
)

CHAMBER_KEYS = (
    Key("depth_mm", "number", "endothelium to lens, on the axis (to the artificial lens, or to the "
        "vitreous, where that is what is there); 3.0 where left out, 4.2 without a natural lens",
        default=None, unit="mm", above=0.0, maximum=100.0, source=DEPTH_2011 + "; 4.2 " + PRACTICE),
    Key("width_mm", "number", "spur to spur", default=11.8, unit="mm", above=0.0, maximum=100.0,
        source=NONGPIUR_2010),
    Key("vault_mm", "number", "lens pole ahead of the spur plane, negative behind it; where left out 3.35 "
        "less the depth, for a natural lens from 0 to 1.2", default=None, unit="mm", minimum=-10.0,
        maximum=10.0, source=SPUR_PLANE),
    Key("fill", "choice", "what fills the chamber", default="aqueous", choices=FILLS),
    Key("bubble_height_mm", "number", "with fill air-bubble: height of the bubble below the chamber's "
        "highest point as the head lies", default=1.5, unit="mm", above=0.0, maximum=20.0, source=PRACTICE),
)

ANGLE_KEYS = (
    Key("width_deg", "number", "trabecular-iris angle: between the lines from the iris root to the wall 500 "
        "um ahead of the spur and to the iris square across from it; 35 where left out", default=None,
        unit="deg", above=0.0, below=90.0, source=ROEMKENS),
    Key("aod500_mm", "number", "angle opening distance: wall to iris on the perpendicular 500 um ahead of "
        "the spur; with width_deg it fixes where the iris inserts", default=None, unit="mm", above=0.0,
        maximum=5.0),
    Key("ciliary_band_mm", "number", "width of the ciliary band, from the spur to the iris root; 0.18 where "
        "left out", default=None, unit="mm", above=0.0, maximum=5.0,
        source="gives an AOD500 of about 0.45 mm at 35 deg; " + PRACTICE),
    Key("meshwork_height_um", "any", "spur to Schwalbe's line: one number, or {nasal, temporal, superior, "
        "inferior}; 712, 724, 793, 889 where left out", default=None, unit="um", source=TUN),
    Key("spur_width_um", "number", "width of the scleral spur's band, centred on the spur", default=80.0,
        unit="um", above=0.0, maximum=300.0, source=PRACTICE),
    Key("pigmented_share", "number", "share of the meshwork's height, from the spur, that is pigmented",
        default=0.6, above=0.0, below=1.0, source=PRACTICE),
    Key("schwalbe_width_um", "number", "width of Schwalbe's line", default=79.0, unit="um", above=0.0,
        maximum=300.0, source=BREAZZANO),
    Key("canal_width_um", "number", "meridional width of Schlemm's canal, just ahead of the spur's band",
        default=300.0, unit="um", above=0.0, maximum=1000.0, source="200 to 400 um by histology, " + MEMORY),
    Key("canal_depth_um", "number", "depth of Schlemm's canal behind the inner wall; the meshwork's "
        "thickness", default=174.0, unit="um", above=0.0, maximum=500.0, source="Fernandez-Vigo et al., "
        "IOVS 56:1782 (2015): 174.16 um"),
)

IRIS_KEYS = (
    Key("thickness_um", "number", "thickness along the axis where the iris faces the wall 750 um ahead of "
        "the spur", default=460.0, unit="um", above=0.0, maximum=2000.0, source=SNG),
    Key("bow_mm", "number", "greatest height of the iris's back above the chord of its ends; negative: "
        "bowed backward", default=0.25, unit="mm", minimum=-2.0, maximum=2.0, source=SNG),
    Key("pupil_mm", "number", "diameter of the real pupil", default=3.5, unit="mm", above=0.0, maximum=20.0,
        source=PRACTICE),
)

LENS_KEYS = (
    Key("kind", "choice", "natural, artificial, or none", default="natural",
        choices=("natural", "artificial", "none")),
    Key("front_radius_mm", "number", "radius of the front; 10.3 where left out, artificial 15.4",
        default=None, unit="mm", above=0.0, maximum=100.0,
        source=LENS_2001 + "; artificial: 20 D in pmma, computed"),
    Key("front_q", "number", "asphericity of the front", default=0.0, minimum=-20.0, maximum=20.0,
        source=PRACTICE),
    Key("back_radius_mm", "number", "radius of the back; 5.66 where left out, artificial 15.4", default=None,
        unit="mm", above=0.0, maximum=100.0, source=LENS_2001),
    Key("back_q", "number", "asphericity of the back", default=0.0, minimum=-20.0, maximum=20.0,
        source=PRACTICE),
    Key("thickness_mm", "number", "thickness on the axis; 4.0 where left out, artificial 0.7", default=None,
        unit="mm", above=0.0, maximum=20.0, source=LENS_2001 + "; artificial: " + PRACTICE),
    Key("radius_mm", "number", "half the lens's diameter: where its sides end; 4.6 where left out, "
        "artificial 3.0", default=None, unit="mm", above=0.0, maximum=20.0,
        source=MEMORY + "; artificial: " + PRACTICE),
)

MEDIA_KEYS = (
    Key("cornea", "name", "medium of the cornea", default="cornea"),
    Key("aqueous", "name", "medium of the chamber where its fill is aqueous", default="aqueous"),
    Key("lens", "name", "medium of the lens; lens-equivalent where left out, artificial pmma", default=None),
    Key("vitreous", "name", "medium behind the lens", default="vitreous"),
)

EYE_KEYS: tuple[Key, ...] = (
    Key("cornea", "map", "cornea", default=None, keys=CORNEA_KEYS),
    Key("chamber", "map", "anterior chamber", default=None, keys=CHAMBER_KEYS),
    Key("angle", "map", "angle", default=None, keys=ANGLE_KEYS),
    Key("iris", "map", "iris", default=None, keys=IRIS_KEYS),
    Key("lens", "map", "the eye's own lens, or the one put in its place", default=None, keys=LENS_KEYS),
    Key("axial_length_mm", "number", "corneal front to retina", default=23.92, unit="mm", above=0.0,
        maximum=200.0, source=NONGPIUR_2011),
    Key("media", "map", "names of the eye's media", default=None, keys=MEDIA_KEYS),
)
