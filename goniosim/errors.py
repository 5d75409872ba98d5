"""Errors that a user can act on, and the exit codes that go with them.

A fault says where, what, the rule, what was found and what next. All faults of
a file are gathered and raised once, as one `BadInput`. Results that say "no"
(total reflection, a blocked view) are results, never errors.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum


class ExitCode(IntEnum):
    """Exit codes of the command line."""

    DONE = 0  # the work was done
    NO = 1  # the answer is no: a check failed, or the target is not seen and --must-see was asked
    MISUSE = 2  # the command was used wrongly
    BAD_INPUT = 3  # a file cannot be used
    BUG = 4  # our fault
    STOPPED = 130  # Ctrl-C


class GoniosimError(Exception):
    """Base of every error this program raises on purpose."""

    exit_code = ExitCode.BUG


class Misuse(GoniosimError):
    """A command or a function was used wrongly: a value out of range, a folder in the way."""

    exit_code = ExitCode.MISUSE


@dataclass(frozen=True)
class Fault:
    """One fault of an input: the dotted key, the message, and its place where it has one.

    line, column : int or None, counted from 1; None for input that is not a file.
    """

    key: str
    message: str
    line: int | None = None
    column: int | None = None


class BadInput(GoniosimError):
    """An input cannot be used; carries every fault found in it.

    where : str, the file (or what the input is called when it is not a file).
    faults : all faults, in the order of the file.
    advice : str, what to do next; may be empty.
    """

    exit_code = ExitCode.BAD_INPUT

    def __init__(self, where: str, faults: list[Fault] | tuple[Fault, ...], advice: str = ""):
        self.where = where
        self.faults = tuple(faults)
        self.advice = advice
        super().__init__(self.report())

    def report(self) -> str:
        """The block that the user reads: one line a fault, then what to do next."""
        count = len(self.faults)
        lines = [f"{self.where} has {count} problem{'' if count == 1 else 's'}"]
        places = [
            f"line {f.line}, column {f.column}" if f.line is not None else "" for f in self.faults
        ]
        place_width = max((len(place) for place in places), default=0)
        key_width = min(max((len(f.key) for f in self.faults), default=0), 48)
        for place, fault in zip(places, self.faults):
            cells = [place.ljust(place_width)] if place_width else []
            cells += [fault.key.ljust(key_width)] if key_width else []
            lines.append("  " + "  ".join([*cells, fault.message]))
        if self.advice:
            lines.append(self.advice)
        return "\n".join(lines)
