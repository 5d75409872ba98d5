"""`goniosim eyes from TABLE`: eye files from a table of biometry, one row an eye."""

from __future__ import annotations

import argparse
from pathlib import Path

from ..cautions import CAUTION
from ..errors import ExitCode
from ..eye.biometry import TableEye, eyes_of
from ..eye.columns import COLUMNS, TEXT_COLUMNS
from ..eye.eye_file import write_eyes
from ..eye.table import Table, read_table
from .options import add_common_options, print_caution, print_json


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Arguments of the command."""
    actions = parser.add_subparsers(dest="action", required=True, metavar="from|columns")
    making = actions.add_parser("from", help="write one eye file for every row of a table")
    making.add_argument(
        "table", metavar="TABLE", type=Path, help="CSV or JSON; one row an eye, columns by name"
    )
    making.add_argument(
        "--into", metavar="DIR", type=Path, default=Path("eyes"), help="folder to write to (eyes)"
    )
    making.add_argument("--replace", action="store_true", help="write over eye files of the same names")
    making.add_argument("--ignore-unknown", action="store_true", help="pass over columns that are not known")
    showing = actions.add_parser("columns", help="every column that a table may have")
    for action in (making, showing):
        add_common_options(action)


def run(args: argparse.Namespace) -> int:
    """Run the command; returns the exit code."""
    return _columns(args) if args.action == "columns" else _from(args)


def _from(args: argparse.Namespace) -> int:
    table = read_table(args.table, args.ignore_unknown)
    eyes = eyes_of(table, str(args.table))
    files = write_eyes(eyes, args.into, args.replace)
    if args.json:
        print_json(
            {
                "caution": CAUTION,
                "not_read": table.not_read,
                "ignored": table.ignored,
                "eyes": [
                    {
                        "file": str(file),
                        "name": eye.name,
                        "side": eye.side,
                        "row": eye.row,
                        "measured": list(eye.measured),
                        "notes": list(eye.notes),
                    }
                    for eye, file in zip(eyes, files)
                ],
            }
        )
        return ExitCode.DONE
    _print_eyes(eyes, files, args.into)
    _print_columns_left(table)
    print_caution()
    return ExitCode.DONE


def _print_eyes(eyes: list[TableEye], files: list[Path], folder: Path) -> None:
    count = len(eyes)
    print(f"{count} eye{'' if count == 1 else 's'} written to {folder}")
    width = max(len(eye.name) for eye in eyes)
    for eye in eyes:
        print(f"  {eye.name:<{width}}  {eye.side:<5}  {len(eye.measured)} values measured, the rest by rules")
        for note in eye.notes:
            print(f"  {'':<{width}}  note: {note}")
    print(f"Use one in a scene: eye: {{use: {eyes[0].name}, side: {eyes[0].side}}}")


def _print_columns_left(table: Table) -> None:
    if table.not_read:
        print(
            f"Not read, because they may identify a person: {', '.join(table.not_read)}. "
            "They are in no file written here."
        )
    if table.ignored:
        print(f"Not known and passed over: {', '.join(table.ignored)}")


def _columns(args: argparse.Namespace) -> int:
    if args.json:
        numbers = [
            {"name": c.name, "unit": c.unit, "from": c.low, "to": c.high, "meaning": c.meaning}
            for c in COLUMNS.values()
        ]
        print_json(
            {
                "caution": CAUTION,
                "columns": [{"name": name, "meaning": meaning} for name, meaning in TEXT_COLUMNS.items()]
                + numbers,
            }
        )
        return ExitCode.DONE
    for name, meaning in TEXT_COLUMNS.items():
        print(f"{name:<19} {meaning}")
    for column in COLUMNS.values():
        unit = f" {column.unit}" if column.unit else ""
        print(f"{column.name:<19} {column.meaning}; {column.low:g} to {column.high:g}{unit}")
    print("Columns that may identify a person (names, dates of birth, numbers, addresses) are never read.")
    print_caution()
    return ExitCode.DONE
