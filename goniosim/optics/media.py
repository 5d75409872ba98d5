"""Media: an index for every wavelength, from the models that a medium file may name.

Indices are relative to air, which is 1 exactly. Catalogues of glasses and plastics print indices
against air, and so do the schematic eyes; a formula that gives the index against vacuum says
`relative_to: vacuum` (the water model always is one) and is divided by air's index.

example: {goniosim: medium, schema: 1, name: pmma, title: ..., source: ..., model: sellmeier, b: [1.1819], c_um2: [0.011313]}
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial
from typing import Any, Callable, Mapping

from ..declare import Key
from ..errors import BadInput, Fault, Misuse
from . import dispersion
from .air import air_index_ciddor
from .water import DENSITY_RANGE_C, WATER_RANGE_NM, water_index

LEAST_INDEX, GREATEST_INDEX = 1.0, 5.0
"""An index outside these is a mistake in the coefficients, not a medium."""

_COMMON = (
    Key("range_nm", "numbers", "wavelengths between which the data hold; outside them the medium refuses",
        default=None, unit="nm", length=2, above=0.0),
    Key("absorption_per_mm", "number", "a: light falls to exp(-a d) over d mm", default=0.0, unit="1/mm", minimum=0.0),
)
_RELATIVE_TO = Key("relative_to", "choice", "what the formula's index is relative to; vacuum is turned into air",
                   default="air", choices=("air", "vacuum"))

MEDIUM_KEYS: dict[str, tuple[Key, ...]] = {
    "constant": (
        Key("index", "number", "refractive index, the same at every wavelength",
            minimum=LEAST_INDEX, maximum=GREATEST_INDEX),
        *_COMMON),
    "cauchy": (
        Key("coefficients", "numbers", "A, B, C, ... of n = A + B/w^2 + C/w^4 + ..., w in nm"),
        _RELATIVE_TO, *_COMMON),
    "sellmeier": (
        Key("b", "numbers", "strengths B of n^2 = 1 + sum B w^2/(w^2 - C), w in um"),
        Key("c_um2", "numbers", "poles C, already squared, one for each B", unit="um^2"),
        _RELATIVE_TO, *_COMMON),
    "conrady": (
        Key("coefficients", "numbers", "N, A, B of n = N + A/w + B/w^3.5, w in um", length=3),
        _RELATIVE_TO, *_COMMON),
    "table": (
        Key("wavelengths_nm", "numbers", "wavelengths of the rows, rising; a monotone cubic (PCHIP) joins them",
            unit="nm", above=0.0),
        Key("indices", "numbers", "index at each wavelength", minimum=LEAST_INDEX, maximum=GREATEST_INDEX),
        _RELATIVE_TO, *_COMMON),
    "water": (
        Key("temperature_c", "number", "temperature; the density at atmospheric pressure follows from it",
            default=20.0, unit="degC", minimum=DENSITY_RANGE_C[0], maximum=DENSITY_RANGE_C[1],
            source="room temperature, common practice"),
        Key("solute_index", "number", "index added at every wavelength by what is dissolved in the water",
            default=0.0, minimum=0.0, maximum=0.2),
        *_COMMON),
}
"""Model name -> the keys of a medium file of that model, beside the header and `model`."""


@dataclass(frozen=True)
class Medium:
    """A medium.

    name : str. formula : wavelength in nm -> index, before `relative_to`.
    range_nm : wavelengths for which the data hold, or None. absorption_per_mm : float.
    relative_to : 'air' or 'vacuum'. added : index added after the change to air.
    """

    name: str
    formula: Callable[[float], float]
    range_nm: tuple[float, float] | None = None
    absorption_per_mm: float = 0.0
    relative_to: str = "air"
    added: float = 0.0

    def index(self, wavelength_nm: float) -> float:
        """Index relative to air at a wavelength in nm.

        Raises Misuse outside `range_nm` and where the formula gives no index between 1 and 5.
        """
        wavelength_nm = float(wavelength_nm)
        if self.range_nm and not self.range_nm[0] <= wavelength_nm <= self.range_nm[1]:
            raise Misuse(f"medium {self.name} has data from {self.range_nm[0]:g} to {self.range_nm[1]:g} nm; "
                         f"got {wavelength_nm:g} nm")
        index = self.formula(wavelength_nm)
        if self.relative_to == "vacuum":
            index /= air_index_ciddor(wavelength_nm)
        index += self.added
        if not LEAST_INDEX <= index <= GREATEST_INDEX:
            raise Misuse(f"medium {self.name} gives the index {index:g} at {wavelength_nm:g} nm; an index must be "
                         f"between {LEAST_INDEX:g} and {GREATEST_INDEX:g}. Check its coefficients and their units")
        return index


AIR = Medium("air", partial(dispersion.constant, index=1.0))
"""Air: index 1 exactly, by definition of all other indices."""


def medium_faults(values: Mapping[str, Any]) -> list[Fault]:
    """Faults between the keys of a medium, each key being right by itself."""
    faults = []
    model = values["model"]
    for lists in (("b", "c_um2"), ("wavelengths_nm", "indices"), ("coefficients",)):
        held = [name for name in lists if name in values]
        if any(len(values[name]) == 0 for name in held):
            faults.append(Fault(held[0], "must hold at least one number; got none"))
        elif len(held) == 2 and len(values[held[0]]) != len(values[held[1]]):
            faults.append(Fault(held[1], f"must be as long as {held[0]} ({len(values[held[0]])}); "
                                         f"got {len(values[held[1]])}"))
    if model == "table":
        faults += _row_faults(values["wavelengths_nm"])
    low_high = values.get("range_nm")
    if low_high and low_high[0] >= low_high[1]:
        faults.append(Fault("range_nm", f"must rise; got {low_high[0]:g}, {low_high[1]:g}"))
    return faults


def _row_faults(wavelengths_nm: list[float]) -> list[Fault]:
    """Faults in the wavelengths of a table."""
    if len(wavelengths_nm) == 1:
        return [Fault("wavelengths_nm", "must have at least two rows; got one")]
    for before, after in zip(wavelengths_nm, wavelengths_nm[1:]):
        if after <= before:
            return [Fault("wavelengths_nm", f"must rise from row to row; got {before:g} before {after:g}")]
    return []


def medium_from_mapping(values: Mapping[str, Any]) -> Medium:
    """A medium from the checked values of a medium file (defaults may be left out).

    Raises BadInput where the keys contradict each other.
    """
    name = values.get("name", "medium")
    faults = medium_faults(values)
    if faults:
        raise BadInput(f"medium {name}", faults, "More: goniosim plugins explain medium")
    return Medium(
        name=name,
        formula=_formula(values),
        range_nm=_range_nm(values),
        absorption_per_mm=float(values.get("absorption_per_mm") or 0.0),
        relative_to="vacuum" if values["model"] == "water" else values.get("relative_to", "air"),
        added=float(values.get("solute_index", 0.0)),
    )


def _formula(values: Mapping[str, Any]) -> Callable[[float], float]:
    """The model's formula with its numbers filled in."""
    model = values["model"]
    if model == "water":
        return partial(water_index, temperature_c=float(values.get("temperature_c", 20.0)))
    if model == "constant":
        return partial(dispersion.constant, index=float(values["index"]))
    names = {"cauchy": ("coefficients",), "conrady": ("coefficients",), "sellmeier": ("b", "c_um2"),
             "table": ("wavelengths_nm", "indices")}[model]
    return partial(getattr(dispersion, model), **{name: tuple(map(float, values[name])) for name in names})


def _range_nm(values: Mapping[str, Any]) -> tuple[float, float] | None:
    """Where the data hold: as stated; else the ends of a table, or the scope of the water formula."""
    if values.get("range_nm"):
        return tuple(map(float, values["range_nm"]))
    if values["model"] == "table":
        return float(values["wavelengths_nm"][0]), float(values["wavelengths_nm"][-1])
    return WATER_RANGE_NM if values["model"] == "water" else None
