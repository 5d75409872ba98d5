"""Eyes: measurements in, faces, bodies and anatomy out.

>>> from goniosim.eye import build, complete
>>> mapping, assumed, notes = complete({"chamber": {"depth_mm": 2.6}}, "right")
>>> eye = build(mapping, "right")
>>> round(eye.report["measured_on_model"]["chamber_depth_mm"], 6)
2.6
"""

from __future__ import annotations

from .build import BuiltEye, build
from .measurements import complete, media_named, with_measured

__all__ = ["BuiltEye", "build", "complete", "media_named", "with_measured"]
