"""Declarations of the keys of a lens file: bodies, and what every face may say whatever its shape.

The keys of each shape are declared with the shape (`goniosim.faces`).
"""

from __future__ import annotations

from ..declare import Key

BORROWED_SHAPE = "cornea"
"""Shape word of a face that is the eye's own front surface."""

LENS_FINISHES = ("clear", "coated", "mirror", "ground")
REFLECTING_FINISHES = ("coated", "mirror")

FACE_KEYS: tuple[Key, ...] = (
    Key("name", "name", "name of the face, unique in the lens; a name given again without a shape is the "
        "neighbour's face, seen from its other side"),
    Key("shape", "name", "shape of the surface; left out on a face that another body of the lens describes; "
        "cornea borrows the eye's front surface", default=None),
    Key("side", "choice", "side of the face on which the body lies; ahead is the way its forward normal points",
        choices=("behind", "ahead")),
    Key("vertex_mm", "numbers", "where the shape's origin stands in the lens frame: origin at the contact vertex, "
        "+z away from the eye, +y toward the lens's own 12 o'clock", default=(0.0, 0.0, 0.0), unit="mm", length=3,
        minimum=-1000.0, maximum=1000.0),
    Key("lean_deg", "number", "lean of the face about its vertex; 0 where left out", default=None, unit="deg",
        minimum=0.0, maximum=180.0),
    Key("lean_toward_clock", "clock", "clock hour of the lens toward which the forward normal leans; "
        "12 where left out", default=None),
    Key("mirror_angle_deg", "number", "of a plane: angle between mirror and the lens's base plane, instead of "
        "lean_deg (lean = 180 - mirror angle)", default=None, unit="deg", minimum=0.0, maximum=180.0),
    Key("level", "flag", "of a plane: its normal is the room's vertical, however the head lies", default=None),
    Key("finish", "choice", "what the face does to light: refracts, refracts with a stated reflectance, "
        "reflects, or absorbs", default="clear", choices=LENS_FINISHES),
    Key("reflectance", "number", "share of the power reflected by a mirror or coated face", default=None,
        minimum=0.0, maximum=1.0),
    Key("works_by", "choice", "says that a clear face is meant to reflect totally", default=None,
        choices=("total_reflection",)),
)

BODY_KEYS: tuple[Key, ...] = (
    Key("name", "name", "name of the body, unique in the lens"),
    Key("medium", "name", "medium that fills the body: a medium plugin's name, or opaque"),
    Key("faces", "maps", "faces that bound the body: the points on the right side of every one of them",
        keys=FACE_KEYS),
)

LENS_KEYS: tuple[Key, ...] = (
    Key("bodies", "maps", "bodies of the lens, each one medium; bodies that touch share a face", keys=BODY_KEYS),
)
