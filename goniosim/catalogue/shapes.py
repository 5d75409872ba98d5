"""Shapes of faces by name: the built-in ones, and those of installed packages (entry points `goniosim.faces`).

Names are read without importing anything; a package is imported when a file first names its shape, alone, and a
failure stays its own. A package cannot take a built-in name.
"""

from __future__ import annotations

from importlib import metadata

from ..faces import SHAPES, Shape

GROUP = "goniosim.faces"


class BrokenShape(Exception):
    """A shape that an installed package offers and that cannot be used; the text says why."""


def shape_names() -> list[str]:
    """Names of all shapes, built-in first."""
    return list(dict.fromkeys([*SHAPES, *(point.name for point in metadata.entry_points(group=GROUP))]))


def shape_named(name: str) -> type[Shape] | None:
    """The shape of a name, None where there is none; raises BrokenShape where its package fails."""
    if name in SHAPES:
        return SHAPES[name]
    point = next(iter(metadata.entry_points(group=GROUP, name=name)), None)
    if point is None:
        return None
    try:
        shape = point.load()
        if not (isinstance(shape, type) and issubclass(shape, Shape)):
            raise TypeError(f"{point.value} is no goniosim.faces.Shape")
    except Exception as error:  # whatever another package does wrong stays its own fault
        package = f"package {point.dist.metadata['Name']} {point.dist.version}" if point.dist else "an unknown package"
        raise BrokenShape(f"shape '{name}' from {package} could not be loaded: {error or type(error).__name__}. "
                          "Other plugins are unaffected") from error
    SHAPES[name] = shape
    return shape
