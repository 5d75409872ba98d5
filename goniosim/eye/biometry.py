"""Eyes from rows of biometry: units and conventions turned into an eye's measurements, every fault told."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from ..errors import BadInput, Fault
from ..units import radius_mm_from_keratometry_d
from .build import solve_parts
from .columns import COLUMNS, LABEL_COLUMN, LENS_COLUMN, SIDE_COLUMN, is_label, number_fault
from .completing import complete
from .table import ADVICE, Row, Table

SIDES = {"right": "right", "left": "left", "od": "right", "os": "left", "r": "right", "l": "left"}
KINDS = ("natural", "artificial", "none")
USUAL_THICKNESS_UM = 545.0
CHOICES = (
    ("k1_d", "r1_mm"),
    ("k2_d", "r2_mm"),
    ("k_mean_d", "r_mean_mm"),
    ("acd_epithelium_mm", "acd_endothelium_mm"),
    ("width_mm", "wtw_mm"),
    ("vault_mm", "vault_um"),
)


@dataclass(frozen=True)
class TableEye:
    """One eye of a table. definition : keys of an eye file. measured : dotted keys. notes : what to know."""

    name: str
    side: str
    row: int
    definition: dict[str, Any]
    measured: tuple[str, ...]
    notes: tuple[str, ...]


def eyes_of(table: Table, where: str) -> list[TableEye]:
    """All eyes of a table. Raises BadInput with every fault of every row."""
    faults, eyes, names = list(table.faults), [], {}
    for row in table.rows:
        eye, found = _eye_of(row)
        faults += found
        if eye is None:
            continue
        if eye.name in names:
            faults.append(row.fault(LABEL_COLUMN, f"'{eye.name}' is also the label of row {names[eye.name]}"))
        names.setdefault(eye.name, row.number)
        eyes.append(eye)
    if faults:
        raise BadInput(where, faults, ADVICE)
    return eyes


def _eye_of(row: Row) -> tuple[TableEye | None, list[Fault]]:
    numbers, faults = _numbers(row)
    side = SIDES.get(str(row.cells.get(SIDE_COLUMN, "")).strip().lower())
    if side is None:
        got = f"got '{row.cells[SIDE_COLUMN]}'" if SIDE_COLUMN in row.cells else "it is empty"
        faults.append(row.fault(SIDE_COLUMN, f"must be right, left, OD or OS; {got}"))
    kind = str(row.cells.get(LENS_COLUMN, "natural")).strip().lower()
    if kind not in KINDS:
        faults.append(
            row.fault(LENS_COLUMN, f"must be natural, artificial or none; got '{row.cells[LENS_COLUMN]}'")
        )
    label = str(row.cells.get(LABEL_COLUMN, f"eye-{row.number:02d}")).strip()
    if not is_label(label):
        # What stands there is not repeated: it may be a person's name.
        faults.append(
            row.fault(
                LABEL_COLUMN,
                "must be a name of small letters, digits and single hyphens, such as "
                "'case-07', and must not identify a person",
            )
        )
    faults += _contradictions(row, numbers)
    if faults:
        return None, faults
    definition, measured, notes = _definition(numbers, kind if LENS_COLUMN in row.cells else None)
    faults = _standing(row, definition, side, notes)
    return (
        (None, faults)
        if faults
        else (TableEye(label, side, row.number, definition, tuple(measured), tuple(notes)), [])
    )


def _numbers(row: Row) -> tuple[dict[str, float], list[Fault]]:
    """The numbers of a row, each within what its column can hold."""
    numbers, faults = {}, []
    for name, cell in row.cells.items():
        if name not in COLUMNS:
            continue
        value = _number(cell)
        wrong = _not_a_number(cell) if value is None else number_fault(COLUMNS[name], value)
        if wrong:
            faults.append(row.fault(name, wrong))
        else:
            numbers[name] = value
    return numbers, faults


def _number(cell: Any) -> float | None:
    if isinstance(cell, bool) or not isinstance(cell, (int, float, str)):
        return None
    if isinstance(cell, str) and "_" in cell:
        return None
    try:
        value = float(cell)
    except (ValueError, OverflowError):
        return None
    return value if abs(value) < float("inf") else None


def _not_a_number(cell: Any) -> str:
    hint = ". Write a decimal point, not a comma" if isinstance(cell, str) and "," in cell else ""
    shown = cell if isinstance(cell, str) else type(cell).__name__
    return f"must be a number; got '{str(shown)[:40]}'{hint}"


def _contradictions(row: Row, numbers: dict[str, float]) -> list[Fault]:
    """The same thing given twice, halves of a pair, and a depth that the cornea alone fills."""
    faults = [
        row.fault(b, f"says the same as {a}; give one of them")
        for a, b in CHOICES
        if a in numbers and b in numbers
    ]
    flat, steep = _front_radius(numbers, "1"), _front_radius(numbers, "2")
    mean = _front_radius(numbers, "_mean")
    has_flat, has_steep = (any(name in row.cells for name in pair) for pair in CHOICES[:2])
    if has_flat != has_steep:
        faults.append(
            row.fault(
                "k1_d" if has_steep else "k2_d",
                "is missing: flat and steep readings go together; a "
                "single one goes into k_mean_d or r_mean_mm",
            )
        )
    if mean is not None and (flat is not None or steep is not None):
        faults.append(
            row.fault(
                "k_mean_d" if "k_mean_d" in numbers else "r_mean_mm",
                "stands beside flat and steep readings; give one of them",
            )
        )
    if flat is not None and steep is not None and flat < steep:
        faults.append(
            row.fault(
                "k1_d" if "k1_d" in numbers else "r1_mm",
                "is steeper than the second reading; the first is the flat one. Change them over, with "
                "k_axis_deg the meridian of the steep one",
            )
        )
    if "acd_epithelium_mm" in numbers:
        depth = numbers["acd_epithelium_mm"] - numbers.get("cct_um", USUAL_THICKNESS_UM) / 1000.0
        if depth < COLUMNS["acd_endothelium_mm"].low:
            faults.append(
                row.fault(
                    "acd_epithelium_mm",
                    f"less the cornea leaves a chamber of {depth:.2f} mm; a depth "
                    "without the cornea goes into acd_endothelium_mm",
                )
            )
    return faults


def _front_radius(numbers: dict[str, float], which: str) -> float | None:
    if f"r{which}_mm" in numbers:
        return numbers[f"r{which}_mm"]
    power = numbers.get(f"k{which}_d")
    return None if power is None else round(radius_mm_from_keratometry_d(power), 6)


def _definition(numbers: dict[str, float], kind: str | None) -> tuple[dict, list[str], list[str]]:
    """Keys of the eye file, the dotted keys that were measured, and notes."""
    values: dict[str, Any] = {}
    notes: list[str] = []
    flat, steep, mean = (_front_radius(numbers, which) for which in ("1", "2", "_mean"))
    if flat is not None:
        values["cornea.front.flat_mm"], values["cornea.front.steep_mm"] = flat, steep
        values["cornea.front.steep_axis_deg"] = numbers.get("k_axis_deg")
    elif mean is not None:
        values["cornea.front.radius_mm"] = mean
    for name, value in numbers.items():
        for key in COLUMNS[name].keys:
            if key not in ("cornea.front", "cornea.front.steep_axis_deg"):
                values[key] = value / 1000.0 if name == "vault_um" else value
    if "acd_epithelium_mm" in numbers:
        thickness = numbers.get("cct_um", USUAL_THICKNESS_UM)
        values["chamber.depth_mm"] = round(numbers["acd_epithelium_mm"] - thickness / 1000.0, 6)
        if "cct_um" not in numbers:
            notes.append(f"depth without the cornea uses a thickness of {thickness:g} um, assumed")
    if "wtw_mm" in numbers:
        notes.append("chamber width is white to white")
    values = {key: value for key, value in values.items() if value is not None}
    if kind is not None:
        values["lens.kind"] = kind
    return _nested(values), sorted(values), notes


def _nested(values: dict[str, Any]) -> dict[str, Any]:
    nested: dict[str, Any] = {}
    for path, value in values.items():
        *blocks, key = path.split(".")
        block = nested
        for name in blocks:
            block = block.setdefault(name, {})
        block[key] = value
    return nested


def _standing(row: Row, definition: dict, side: str, notes: list[str]) -> list[Fault]:
    """Solve the eye, so that a row that makes none is told now; what gives way is noted."""
    try:
        parts, given_way = solve_parts(complete(definition, side)[0])
    except BadInput as error:
        return [
            Fault(f"row {row.number}", f"makes no eye: {fault.key} {fault.message}", row.line)
            for fault in error.faults
        ]
    notes += [*parts.cornea.notes, *given_way]
    return []
