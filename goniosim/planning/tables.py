"""Plain text tables."""

from __future__ import annotations

import textwrap

GAP = "  "


def column_table(head: list[str], rows: list[list[str]], width: int) -> str:
    """A table with a rule under its head; the first column left, figures right, the last column wrapped to fit."""
    columns = list(zip(head, *rows))
    widths = [max(len(str(cell)) for cell in column) for column in columns]
    figures = [_is_figures(column[1:]) for column in columns]
    left = sum(widths[:-1]) + len(GAP) * (len(widths) - 1)
    widths[-1] = min(widths[-1], max(12, width - left))
    lines = _row(head, widths, figures)
    lines.append(GAP.join("-" * each for each in widths))
    for row in rows:
        lines += _row(row, widths, figures)
    return "\n".join(lines)


def _is_figures(cells: tuple) -> bool:
    return all(str(cell) == "-" or str(cell).replace(".", "").replace("-", "").replace("%", "").isdigit() for cell in cells)


def _row(cells: list[str], widths: list[int], figures: list[bool]) -> list[str]:
    last = textwrap.wrap(str(cells[-1]), widths[-1], break_on_hyphens=False) or [""]
    shown = [str(cell).rjust(w) if right else str(cell).ljust(w)
             for cell, w, right in zip([*cells[:-1], last[0]], widths, figures)]
    lines = [GAP.join(shown).rstrip()]
    indent = " " * (sum(widths[:-1]) + len(GAP) * (len(widths) - 1))
    return lines + [indent + line for line in last[1:]]


def pairs(rows: list[tuple[str, str]], indent: int = 0, width: int = 100) -> str:
    """Name and value, one below the other, values wrapped."""
    widest = max(len(name) for name, _ in rows)
    lines = []
    for name, value in rows:
        start = " " * indent + name.ljust(widest) + GAP
        lines.append(textwrap.fill(value, width, initial_indent=start, subsequent_indent=" " * len(start),
                                   break_on_hyphens=False))
    return "\n".join(lines)
