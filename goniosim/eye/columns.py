"""Columns of a biometry table: what each means, in which unit, and what it must not be mistaken for."""

from __future__ import annotations

import difflib
import re
from dataclasses import dataclass

from ..units import KERATOMETER_INDEX, radius_mm_from_keratometry_d


@dataclass(frozen=True)
class Column:
    """One column of numbers. low, high : what it can hold, inclusive. twin : the column of the other unit,
    whose values are often put here by mistake. keys : dotted keys of the eye file that it measures.
    """

    name: str
    unit: str
    low: float
    high: float
    meaning: str
    keys: tuple[str, ...] = ()
    twin: str = ""


SIDE_COLUMN, LABEL_COLUMN, LENS_COLUMN = "eye", "label", "lens_kind"
POWER, RADIUS = (28.0, 70.0), (5.0, 11.5)

_COLUMNS = (
    Column("k1_d", "D", *POWER, "flat keratometry reading", ("cornea.front",), "r1_mm"),
    Column("k2_d", "D", *POWER, "steep keratometry reading", ("cornea.front",), "r2_mm"),
    Column(
        "k_mean_d",
        "D",
        *POWER,
        "mean keratometry reading, for a round cornea",
        ("cornea.front",),
        "r_mean_mm",
    ),
    Column(
        "k_axis_deg", "deg", 0.0, 180.0, "meridian of the steep reading", ("cornea.front.steep_axis_deg",)
    ),
    Column("r1_mm", "mm", *RADIUS, "flat front radius", ("cornea.front",), "k1_d"),
    Column("r2_mm", "mm", *RADIUS, "steep front radius", ("cornea.front",), "k2_d"),
    Column(
        "r_mean_mm", "mm", *RADIUS, "mean front radius, for a round cornea", ("cornea.front",), "k_mean_d"
    ),
    Column("front_q", "", -2.0, 2.0, "asphericity of the front", ("cornea.front.q",)),
    Column("back_radius_mm", "mm", 4.0, 10.5, "back radius", ("cornea.back.radius_mm",)),
    Column("back_q", "", -2.0, 2.0, "asphericity of the back", ("cornea.back.q",)),
    Column("cct_um", "um", 250.0, 1000.0, "central corneal thickness", ("cornea.thickness_um",)),
    Column(
        "limbal_slope_deg",
        "deg",
        15.0,
        60.0,
        "slope of the outer surface 6.6 mm from the axis",
        ("cornea.limbal_slope_deg",),
    ),
    Column(
        "acd_epithelium_mm",
        "mm",
        1.3,
        7.5,
        "chamber depth with the cornea: epithelium to lens",
        ("chamber.depth_mm",),
    ),
    Column(
        "acd_endothelium_mm",
        "mm",
        1.0,
        6.5,
        "chamber depth without the cornea: endothelium to lens",
        ("chamber.depth_mm",),
    ),
    Column("width_mm", "mm", 9.0, 15.0, "chamber width, spur to spur", ("chamber.width_mm",)),
    Column("wtw_mm", "mm", 9.0, 15.0, "white to white, taken as the chamber width", ("chamber.width_mm",)),
    Column(
        "vault_mm", "mm", -3.0, 2.0, "lens vault: lens pole ahead of the spur plane", ("chamber.vault_mm",)
    ),
    Column("vault_um", "um", -3000.0, 2000.0, "lens vault", ("chamber.vault_mm",)),
    Column("angle_width_deg", "deg", 1.0, 80.0, "trabecular-iris angle at 500 um", ("angle.width_deg",)),
    Column("aod500_mm", "mm", 0.01, 1.5, "angle opening distance at 500 um", ("angle.aod500_mm",)),
    Column(
        "meshwork_height_um",
        "um",
        200.0,
        1400.0,
        "spur to Schwalbe's line, all round",
        ("angle.meshwork_height_um",),
    ),
    Column(
        "iris_thickness_um",
        "um",
        100.0,
        1000.0,
        "iris thickness 750 um from the spur",
        ("iris.thickness_um",),
    ),
    Column("iris_bow_mm", "mm", -0.8, 1.2, "iris bow", ("iris.bow_mm",)),
    Column("pupil_mm", "mm", 0.8, 8.5, "pupil", ("iris.pupil_mm",)),
    Column("lens_thickness_mm", "mm", 0.2, 7.0, "lens thickness", ("lens.thickness_mm",)),
    Column("axial_length_mm", "mm", 15.0, 40.0, "axial length", ("axial_length_mm",)),
)
COLUMNS = {column.name: column for column in _COLUMNS}
TEXT_COLUMNS = {
    SIDE_COLUMN: "right, left, OD or OS",
    LABEL_COLUMN: "name of the eye file: small letters, digits and hyphens; eye-01 ... where left out",
    LENS_COLUMN: "natural, artificial or none; natural where left out",
}
KNOWN = (*TEXT_COLUMNS, *COLUMNS)

PERSONAL = frozenset(
    """name names surname forename firstname lastname givenname familyname fullname initials dob birth
    birthday birthdate dateofbirth born patient patientid patientname person id mrn chart ssn
    nhs insurance passport address street city town zip postcode postal phone telephone tel
    mobile fax email mail social security hospital record""".split()
)
"""A column with one of these words in its name may identify a person."""

_NAME = re.compile(r"[a-z0-9]+(?:-[a-z0-9]+)*")


def may_identify(column: str) -> bool:
    """Whether a column's name says that it may identify a person; such a column is never read."""
    words = re.sub(r"([a-z])([A-Z])", r"\1 \2", column)
    tokens = re.findall(r"[a-z0-9]+", words.lower())
    return any(token in PERSONAL for token in tokens) or "".join(tokens) in PERSONAL


def tidy(column: str) -> str:
    """A column's name as it is compared: small letters, single underscores."""
    return re.sub(r"[\s\-]+", "_", column.strip()).lower()


def nearest(column: str) -> str:
    """'; did you mean ...?' for the nearest known column, or nothing."""
    near = difflib.get_close_matches(tidy(column), KNOWN, n=1, cutoff=0.5)
    return f"; did you mean '{near[0]}'?" if near else ""


def is_label(text: str) -> bool:
    """Whether a label can be the name of an eye file."""
    return bool(_NAME.fullmatch(text)) and len(text) <= 60


def number_fault(column: Column, value: float) -> str | None:
    """What is wrong with a number of a column, or None."""
    if column.low <= value <= column.high:
        return None
    unit = f" {column.unit}" if column.unit else ""
    return f"must be from {column.low:g} to {column.high:g}{unit}; got {value:g}{_mistaken(column, value)}"


def _mistaken(column: Column, value: float) -> str:
    """What the value would be in the unit it is often mistaken for."""
    if column.unit == "D" and RADIUS[0] <= value <= RADIUS[1]:
        power = 1000.0 * (KERATOMETER_INDEX - 1.0) / value
        return f". This looks like a radius: {value:g} mm is {power:.2f} D; its column is {column.twin}"
    if column.twin and column.unit == "mm" and POWER[0] <= value <= POWER[1]:
        radius = radius_mm_from_keratometry_d(value)
        seems = f"{value:g} D is a radius of {radius:.2f} mm"
        return f". This looks like dioptres: {seems}; its column is {column.twin}"
    if column.unit == "um" and column.low <= 1000.0 * value <= column.high:
        return f". This looks like mm: {value:g} mm is {1000.0 * value:g} um"
    if column.unit == "mm" and column.low <= value / 1000.0 <= column.high:
        return f". This looks like um: {value:g} um is {value / 1000.0:g} mm"
    return ""
