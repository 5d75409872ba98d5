"""Declarations of the keys of scenes, scopes, tools, rooms and settings.

A default of None is left to the rule that the meaning states (`goniosim.catalogue.rules`).
"""

from __future__ import annotations

from ..declare import Key

STRUCTURES = ("schwalbe-line", "clear-meshwork", "pigmented-meshwork", "scleral-spur", "ciliary-band", "iris-root",
              "pupil-margin", "iris-mid", "mark")
"""Structures that a target may name; mark is on the wall of a cup, the others are of the eye."""

MARKS = ("measured", "given", "assumed")

COMMON_PRACTICE = "common practice, no source"

POINT = Key("point_mm", "numbers", "a point in the eye frame: origin at the corneal vertex, +z out of the eye, "
            "+y the patient's superior, +x the right-hand side of an observer who faces the patient",
            default=None, unit="mm", length=3, minimum=-100.0, maximum=100.0)


def uses(what: str, default=None) -> tuple[Key, Key]:
    """The two ways to name a plugin: by name, or with its whole definition written out."""
    rule = "; needed unless it is written out as definition" if default is None else f"; {default} where left out"
    return (
        Key("use", "name", f"name of the {what}{rule}", default=None),
        Key("definition", "map", f"the {what} written out in full, with the keys of its own file; "
            "nothing is then looked up", default=None),
    )


EYE_BLOCK: tuple[Key, ...] = (
    *uses("eye"),
    Key("side", "choice", "which eye of the patient", choices=("right", "left")),
    Key("measured", "map", "measurements of this patient that replace the eye's own; keys of an eye file",
        default=None),
)

SEATING_KEYS: tuple[Key, ...] = (
    *uses("lens"),
    Key("mark_at_clock", "clock", "clock hour of the eye where the lens's own 12 o'clock lies; opposite the target "
        "where left out", default=None),
    Key("decentre_mm", "numbers", "shift of the contact vertex in the eye's x and y", default=(0.0, 0.0), unit="mm",
        length=2, minimum=-10.0, maximum=10.0),
    Key("tip_deg", "number", "lean of the lens about its contact vertex", default=0.0, unit="deg",
        minimum=0.0, maximum=45.0),
    Key("tip_toward_clock", "clock", "clock hour of the eye toward which the lens leans", default=12.0),
    Key("gap_um", "number", "least clearance between lens and cornea; 20 where left out, none for a pool",
        default=None, unit="um", minimum=0.0, maximum=5000.0, source=COMMON_PRACTICE),
    Key("fluid", "name", "medium between lens and cornea; saline where left out, none for a pool", default=None),
)

SCOPE_BLOCK: tuple[Key, ...] = (
    *uses("scope", "stereo-200"),
    Key("tilt_deg", "number", "lean of the oculars toward the surgeon, from the vertical", default=0.0, unit="deg",
        minimum=0.0, maximum=90.0),
    Key("focus_on", "map", "what the scope is centred on: the target's image, or a point", default="target",
        choices=("target",), keys=(POINT,)),
    Key("through", "text", "which sighting the plan follows where there are several: direct, or a mirror's name; "
        "the brightest where left out", default=None),
)

HEAD_KEYS: tuple[Key, ...] = (
    Key("turn_deg", "number", "turn of the head from facing the ceiling", default=0.0, unit="deg",
        minimum=0.0, maximum=90.0),
    Key("turn_toward", "choice", "the patient's own side to which the head turns; away from the surgeon "
        "where left out", default=None, choices=("left", "right"), source=COMMON_PRACTICE),
    Key("chin_up_deg", "number", "tilt of the head backwards; less than 0: chin down", default=0.0, unit="deg",
        minimum=-45.0, maximum=45.0),
)

GAZE: tuple[Key, ...] = (
    Key("deg", "number", "turn of the eye in the head; 45 to 50 is the usual limit of gaze", default=0.0, unit="deg",
        minimum=0.0, maximum=60.0, source="from memory"),
    Key("toward_clock", "clock", "clock hour toward which the eye turns", default=12.0),
)

SURGEON: tuple[Key, ...] = (
    Key("seat_clock", "clock", "clock hour of the room at which the surgeon sits, head straight; temporal "
        "where left out: 9 for a right eye, 3 for a left eye", default=None, source=COMMON_PRACTICE),
)

ENTRY_KEYS: tuple[Key, ...] = (
    Key("clock", "clock", "clock hour of the eye where the tool enters; the surgeon's seat where left out",
        default=None, source=COMMON_PRACTICE),
    Key("inside_limbus_mm", "number", "distance of the entry inside the limbus", default=1.0, unit="mm",
        minimum=-2.0, maximum=5.0, source=COMMON_PRACTICE),
    Key("tunnel_length_mm", "number", "length of the corneal tunnel", default=1.75, unit="mm", above=0.0,
        maximum=5.0, source="a tunnel of 1.75 mm seals itself: Mohan, 'Wound construction'"),
    Key("tunnel_width_mm", "number", "width of the corneal tunnel", default=2.2, unit="mm", above=0.0, maximum=10.0,
        source="Dewey et al., J Cataract Refract Surg 40:1549 (2014)"),
)

TOOL_BLOCK: tuple[Key, ...] = (
    *uses("tool"),
    Key("entry", "map", "where the tool enters the eye", default=None, keys=ENTRY_KEYS),
)

TARGET: tuple[Key, ...] = (
    Key("structure", "choice", "what is aimed at; or give point_mm", default=None, choices=STRUCTURES),
    Key("clock", "clock", "clock hour of the structure", default=None),
    Key("across", "number", "place on the band, from its posterior edge 0 to its anterior edge 1; "
        "the middle where left out", default=None, minimum=0.0, maximum=1.0),
    POINT,
)

ROOM_BLOCK: tuple[Key, ...] = uses("room", "plain-room")

SCENE_KEYS: tuple[Key, ...] = (
    Key("eye", "map", "the eye", keys=EYE_BLOCK),
    Key("lens", "map", "the goniolens and how it sits; none is the bare cornea in air", default="none",
        choices=("none",), keys=SEATING_KEYS),
    Key("scope", "map", "the microscope and its lean", default=None, keys=SCOPE_BLOCK),
    Key("head", "map", "how the head lies", default=None, keys=HEAD_KEYS),
    Key("gaze", "map", "how the eye is turned in the head", default=None, keys=GAZE),
    Key("surgeon", "map", "where the surgeon sits", default=None, keys=SURGEON),
    Key("tool", "map", "the instrument and its entry; figures from the entry need it", default=None,
        choices=("none",), keys=TOOL_BLOCK),
    Key("target", "map", "what is to be seen and reached", keys=TARGET),
    Key("room", "map", "the room", default=None, keys=ROOM_BLOCK),
    Key("wavelength_nm", "number", "wavelength of the plan; 555 is the peak of daylight vision", default=555.0,
        unit="nm", minimum=380.0, maximum=1400.0),
    Key("media", "map", "media written out in full by name, with the keys of a medium file; the others are looked "
        "up", default=None),
    Key("settings", "map", "floors and habits that replace the room's", default=None),
    Key("marks", "map", "which values were measured, given or assumed; written by the plan", default=None),
    Key("notes", "texts", "what was said while resolving; written by the plan", default=None),
)

SCOPE_KEYS: tuple[Key, ...] = (
    Key("working_distance_mm", "number", "distance from the centre of the view to the pupils", unit="mm",
        minimum=20.0, maximum=2000.0),
    Key("stereo_base_mm", "number", "distance between the two pupils; for one camera, between its two shots",
        unit="mm", above=0.0, maximum=200.0),
    Key("pupil_diameter_mm", "number", "diameter of each pupil", unit="mm", above=0.0, maximum=200.0),
    Key("field_diameter_mm", "number", "diameter of the field of view, square to the line of sight", unit="mm",
        above=0.0, maximum=500.0),
    Key("max_tilt_deg", "number", "greatest lean that the stand allows", unit="deg", minimum=0.0, maximum=90.0),
)

TOOL_KEYS: tuple[Key, ...] = (
    Key("shaft_diameter_mm", "number", "outer diameter of the shaft", unit="mm", above=0.0, maximum=5.0),
    Key("shaft_length_mm", "number", "length of the shaft from the handle to the tip", default=30.0, unit="mm",
        above=0.0, maximum=200.0, source=COMMON_PRACTICE),
    Key("form", "choice", "form of the shaft", default="straight", choices=("straight", "bent", "curved")),
    Key("bend_deg", "number", "angle of a bent shaft", default=None, unit="deg", above=0.0, maximum=120.0),
    Key("bend_from_tip_mm", "number", "distance of the bend from the tip", default=None, unit="mm", above=0.0,
        maximum=50.0),
    Key("curve_radius_mm", "number", "radius of a curved shaft's centre line", default=None, unit="mm", above=0.0,
        maximum=500.0),
    Key("tip", "choice", "form of the tip", default="blunt", choices=("blunt", "bevelled", "pointed", "hooked")),
    Key("tip_length_mm", "number", "length of the tip beyond the shaft's full diameter", default=0.0, unit="mm",
        minimum=0.0, maximum=10.0),
    Key("tip_diameter_mm", "number", "diameter at the very end; the shaft's where left out", default=None,
        unit="mm", above=0.0, maximum=5.0),
)

SETTINGS_KEYS: tuple[Key, ...] = (
    Key("seen", "map", "when a target counts as seen", default=None, keys=(
        Key("throughput_floor", "number", "least throughput, one way", default=None, minimum=0.0, maximum=1.0),
    )),
    Key("clear", "map", "when a seen target counts as clear", default=None, keys=(
        Key("headroom_floor_deg", "number", "least headroom before total reflection", default=None, unit="deg",
            minimum=0.0, maximum=90.0),
        Key("blur_ceiling_um", "number", "greatest blur on the target, RMS", default=None, unit="um", above=0.0),
        Key("graze_floor_deg", "number", "least angle between the light and the wall at the target", default=None,
            unit="deg", minimum=0.0, maximum=90.0),
    )),
    Key("show", "map", "how figures are printed", default=None, keys=(
        Key("small_lengths", "choice", "unit of shifts and corrections at the target", default=None,
            choices=("mm", "um")),
        Key("decimals_mm", "integer", "decimals of lengths in mm", default=None, minimum=0, maximum=6),
        Key("decimals_deg", "integer", "decimals of angles", default=None, minimum=0, maximum=6),
    )),
    Key("page", "map", "the printed page", default=None, keys=(
        Key("size", "choice", "size of the paper", default=None, choices=("a4", "letter")),
    )),
    Key("cautions", "text", "local cautions, one a line, printed under the program's own", default=None),
)

ROOM_KEYS: tuple[Key, ...] = (
    Key("max_head_turn_deg", "number", "greatest turn of the head that patients here manage", default=45.0,
        unit="deg", minimum=0.0, maximum=90.0, source="30 to 45 is usual: eyesoneyecare.com teaching article (2021)"),
    Key("max_scope_tilt_deg", "number", "greatest lean of the microscope that this room allows", default=45.0,
        unit="deg", minimum=0.0, maximum=90.0, source="30 to 45 is usual: eyesoneyecare.com teaching article (2021)"),
    Key("max_chin_up_deg", "number", "greatest tilt of the head backwards", default=15.0, unit="deg",
        minimum=0.0, maximum=45.0, source=COMMON_PRACTICE),
    Key("max_gaze_deg", "number", "greatest turn of the eye that can be asked for", default=20.0, unit="deg",
        minimum=0.0, maximum=60.0, source=COMMON_PRACTICE),
    Key("seat_clocks", "numbers", "clock hours at which a surgeon can sit", default=(9.0, 12.0, 3.0), above=0.0,
        maximum=12.0, source=COMMON_PRACTICE),
    Key("settings", "map", "floors and habits of this room; they replace those of configs/default.yaml",
        default=None),
)
