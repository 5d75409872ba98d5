"""Shipped media, read from their files, whatever plugins the user has put in front of them."""

from __future__ import annotations

from functools import lru_cache

from ..catalogue.search import load_file
from ..optics.media import Medium, medium_from_mapping
from ..shipped import shipped_folder


@lru_cache(maxsize=None)
def shipped_medium(name: str) -> Medium:
    """A medium of plugins/media/."""
    return medium_from_mapping(load_file("medium",
                                         shipped_folder("plugins") / "media" / f"{name}.yaml").values)


def indices(name: str, *wavelengths_nm: float) -> tuple[float, ...]:
    """Indices of a shipped medium at wavelengths in nm."""
    return tuple(shipped_medium(name).index(wavelength) for wavelength in wavelengths_nm)


def abbe_number(name: str) -> float:
    """(n_d - 1) / (n_F - n_C) of a shipped medium."""
    d, f, c = indices(name, 587.6, 486.1, 656.3)
    return (d - 1.0) / (f - c)
