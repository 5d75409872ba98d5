"""A read file: plain values, the place of every one of them, and the faults found so far."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any, Iterable

from ..errors import BadInput, Fault, Misuse
from .paths import Path, dotted

SHOWN_FAULTS = 40  # a file with more is told the first ones and how many more


class _Unreadable:
    """Stands for a value that could not be read; its fault is already told."""

    def __repr__(self) -> str:
        return "unreadable"


UNREADABLE = _Unreadable()


@dataclass(frozen=True)
class Finding:
    """A fault at a path, not yet at a place: `at_key` points at the key and not at its value."""

    path: Path
    message: str
    at_key: bool = False


@dataclass
class Document:
    """A file or a mapping given from Python.

    where : what the reader calls it. value : plain Python values.
    value_places, key_places : path -> (line, column), counted from 1; empty for no file.
    faults : what reading alone found.
    overridden : paths whose values came from the command line instead.
    """

    where: str
    value: Any
    value_places: dict[Path, tuple[int, int]] = field(default_factory=dict)
    key_places: dict[Path, tuple[int, int]] = field(default_factory=dict)
    faults: list[Fault] = field(default_factory=list)
    overridden: set[Path] = field(default_factory=set)

    def is_overridden(self, path: Path) -> bool:
        """Whether the value at a path came from the command line."""
        return any(path[: len(over)] == over for over in self.overridden)

    def fault(self, finding: Finding) -> Fault:
        """A finding at its line and column; where the path is not in the file, at the nearest that is."""
        places = (self.key_places, self.value_places) if finding.at_key else (self.value_places, self.key_places)
        path = finding.path
        if self.is_overridden(path):
            return Fault(dotted(path), f"{finding.message} (given on the command line)")
        while True:
            for known in places:
                if path in known:
                    return Fault(dotted(finding.path), finding.message, *known[path])
            if not path:
                return Fault(dotted(finding.path), finding.message)
            path = path[:-1]

    def refuse(self, findings: Iterable[Finding], advice: str = "") -> None:
        """Raise BadInput with every fault, in the order of the file, if there is any.

        Raises Misuse instead where the command line alone is at fault.
        """
        findings = list(findings)
        if findings and not self.faults and all(self.is_overridden(finding.path) for finding in findings):
            raise Misuse("\n".join(f"{dotted(finding.path)} {finding.message}" for finding in findings))
        faults = [*self.faults, *(self.fault(finding) for finding in findings)]
        if not faults:
            return
        faults.sort(key=lambda fault: (fault.line or 0, fault.column or 0))
        if len(faults) > SHOWN_FAULTS:
            more = len(faults) - SHOWN_FAULTS
            faults = faults[:SHOWN_FAULTS] + [Fault("", f"and {more} more")]
        raise BadInput(self.where, faults, advice)
