"""goniosim: gonioscopy and surgical-angle optics, traced exactly through real surfaces.

A planning aid, not a medical device.

>>> import goniosim
>>> scene = goniosim.load_scene("right-eye-temporal")
>>> plan = goniosim.plan(scene)
>>> plan.sighting.seen
True
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Callable, Mapping

from .cautions import CAUTION
from .errors import BadInput, ExitCode, Fault, GoniosimError, Misuse

if TYPE_CHECKING:
    from .planning.record import Plan
    from .sight.scene import Scene

__version__ = "0.1.0"
__all__ = ["BadInput", "CAUTION", "ExitCode", "Fault", "GoniosimError", "Misuse", "load_scene", "plan"]


def load_scene(scene, plugin_folders=(), overrides: Mapping[str, Any] | None = None) -> Scene:
    """Read, check, resolve and build a scene.

    scene : path of a scene file, name of a shipped scene, or a mapping of the same form.
    plugin_folders : folders searched first for lenses, eyes, media, scopes, tools and rooms.
    overrides : dotted key -> value, for example {"scope.tilt_deg": 40}.
    Raises BadInput with every fault found; see `goniosim plugins explain scene` for the keys.
    """
    from .catalogue import resolve_scene
    from .sight.scene import assemble

    resolved = resolve_scene(scene, plugin_folders=plugin_folders, overrides=overrides or {})
    return assemble(resolved.mapping, resolved.marks, resolved.fingerprint, resolved.notes, resolved.where)


def plan(scene: Scene, progress: Callable[[str, int, int], None] | None = None) -> Plan:
    """Plan a scene: what is seen and why not, where it seems to be, where a tool lands, how to correct.

    progress : called with (step in words, steps done, steps in all), or None.
    `Plan.to_dict()` is what plan.json holds.
    """
    from .planning import make_plan

    return make_plan(scene, progress)
