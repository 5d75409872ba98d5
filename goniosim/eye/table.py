"""Read a biometry table, CSV or JSON, into rows of text and numbers; columns that identify a person are
left out.
"""

from __future__ import annotations

import csv
import io
import json
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from ..errors import BadInput, Fault
from .columns import KNOWN, may_identify, nearest, tidy

MAX_BYTES = 20_000_000
DELIMITERS = ",;\t"
EMPTY = ("", "-", "na", "n/a", "null", "none")  # a cell that says: not measured
ADVICE = "Known columns: goniosim eyes columns"


@dataclass(frozen=True)
class Row:
    """One eye. number : from 1. cells : column -> text or number, as found. places : column -> (line,
    column).
    """

    number: int
    cells: dict[str, Any]
    places: dict[str, tuple[int | None, int | None]]
    line: int | None = None

    def fault(self, column: str, message: str) -> Fault:
        """A fault of one cell: the row, the column, and the place in the file where there is one."""
        line, at = self.places.get(column, (self.line, None))
        return Fault(f"row {self.number}, {column}", message, line, at)


@dataclass
class Table:
    """rows : eyes in the order of the table. not_read : columns that may identify a person. ignored :
    unknown columns that were passed over. faults : what is wrong with the table itself.
    """

    rows: list[Row] = field(default_factory=list)
    not_read: list[str] = field(default_factory=list)
    ignored: list[str] = field(default_factory=list)
    faults: list[Fault] = field(default_factory=list)

    def takes(self, column: str, ignore_unknown: bool, place: tuple[int | None, int | None]) -> str | None:
        """The known name of a column, or None where it is not to be read; notes why, once."""
        if tidy(column) in KNOWN:
            return tidy(column)
        if may_identify(column):
            self._once(self.not_read, column)
        elif ignore_unknown:
            self._once(self.ignored, column)
        elif not any(fault.key == column for fault in self.faults):
            self.faults.append(Fault(column, f"is not a known column{nearest(column)}", *place))
        return None

    @staticmethod
    def _once(names: list[str], column: str) -> None:
        if column not in names:
            names.append(column)


def read_table(path: Path, ignore_unknown: bool = False) -> Table:
    """Read a .json file as JSON, any other as CSV. Raises BadInput where no rows can be had from it."""
    where = str(path)
    text = _text(path, where)
    table = (
        _from_json(text, where, ignore_unknown)
        if path.suffix.lower() == ".json"
        else _from_csv(text, where, ignore_unknown)
    )
    if not table.rows and not table.faults:
        raise BadInput(where, [Fault("", "holds no eyes")], ADVICE)
    return table


def _text(path: Path, where: str) -> str:
    try:
        if path.is_dir():
            raise BadInput(where, [Fault("", "is a folder; a table is needed")])
        if path.stat().st_size > MAX_BYTES:
            raise BadInput(where, [Fault("", f"is larger than {MAX_BYTES // 1_000_000} MB")])
        return path.read_bytes().decode("utf-8-sig")
    except UnicodeDecodeError:
        raise BadInput(where, [Fault("", "is not UTF-8 text; save it as CSV in UTF-8")]) from None
    except (OSError, ValueError) as error:
        cause = getattr(error, "strerror", None) or str(error)
        raise BadInput(where, [Fault("", f"cannot be read: {cause}")]) from None


def _from_csv(text: str, where: str, ignore_unknown: bool) -> Table:
    first = text.split("\n", 1)[0]
    delimiter = max(DELIMITERS, key=first.count)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter)
    table = Table()
    try:
        header = next(reader, None)
        if not header or not any(cell.strip() for cell in header):
            raise BadInput(where, [Fault("", "is empty; the first line names the columns")], ADVICE)
        names = [
            table.takes(cell, ignore_unknown, (1, i + 1)) if cell.strip() else None
            for i, cell in enumerate(header)
        ]
        table.faults += [
            Fault(name, "is given twice", 1, i + 1)
            for i, name in enumerate(names)
            if name is not None and name in names[:i]
        ]
        for line in reader:
            if any(cell.strip() for cell in line):
                _take_line(table, names, line, reader.line_num)
    except csv.Error as error:
        raise BadInput(where, [Fault("", f"cannot be read as CSV: {error}", reader.line_num)]) from None
    return table


def _take_line(table: Table, names: list[str | None], line: list[str], line_number: int) -> None:
    number = len(table.rows) + 1
    if len(line) > len(names):
        table.faults.append(
            Fault(
                f"row {number}",
                f"has {len(line)} cells; the header names {len(names)} columns. "
                "A decimal comma splits a number: write 7.8, not 7,8",
                line_number,
            )
        )
    pairs = [
        (name, cell.strip(), i + 1) for i, (name, cell) in enumerate(zip(names, line)) if name is not None
    ]
    cells = {
        name: cell for name, cell, _ in pairs if cell.lower() not in EMPTY or name == "lens_kind" and cell
    }
    table.rows.append(Row(number, cells, {name: (line_number, i) for name, _, i in pairs}, line_number))


def _from_json(text: str, where: str, ignore_unknown: bool) -> Table:
    table = Table()

    def take(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
        # Values of personal columns are dropped here, before anything else sees them.
        kept: dict[str, Any] = {}
        for key, value in pairs:
            name = key if key == "eyes" else table.takes(key, ignore_unknown, (None, None))
            if name is not None and name in kept:
                table.faults.append(Fault(name, "is given twice in one eye"))
            elif name is not None:
                kept[name] = value
        return kept

    try:
        value = json.loads(text, object_pairs_hook=take, parse_constant=str)
    except json.JSONDecodeError as error:
        raise BadInput(
            where, [Fault("", f"cannot be read as JSON: {error.msg}", error.lineno, error.colno)]
        ) from None
    except (RecursionError, ValueError):
        raise BadInput(
            where, [Fault("", "cannot be read: it is nested too deep, or a number is too long")]
        ) from None
    rows = value.get("eyes") if isinstance(value, dict) else value
    if not isinstance(rows, list):
        raise BadInput(
            where,
            [Fault("", 'must be a list of eyes, or {"eyes": [...]}, each a mapping of columns')],
            ADVICE,
        )
    for number, row in enumerate(rows, start=1):
        if not isinstance(row, dict):
            table.faults.append(Fault(f"row {number}", "must be a mapping of columns"))
            continue
        table.rows.append(Row(number, {name: cell for name, cell in row.items() if _filled(cell)}, {}))
    return table


def _filled(cell: Any) -> bool:
    return cell is not None and not (isinstance(cell, str) and cell.strip().lower() in EMPTY[:5])
