"""Declarations of the keys that files and plugins may hold.

A key is declared once, beside the code that uses it: name, unit, range, default
and meaning. The loader checks with it, `goniosim plugins explain` prints it.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

REQUIRED = object()  # default of a key that must be given


@dataclass(frozen=True)
class Key:
    """One key of a mapping.

    name : the key as written in the file, with its unit as a suffix where it has one.
    kind : 'number' | 'integer' | 'text' | 'name' | 'flag' | 'choice' | 'numbers' | 'names'
           | 'texts' | 'map' | 'maps' | 'clock' | 'any'.
           'numbers' is a list of numbers (`length` fixes how many), 'texts' a list of texts, 'maps' a list of mappings,
           'clock' a clock hour h with 0 < h <= 12, 'name' a kebab-case name.
    meaning : one sentence for the reader of `explain`.
    default : REQUIRED, or the value used when the key is left out (None: left to a rule,
              which `meaning` states).
    unit : the unit as printed, for example 'mm'; empty for none.
    minimum, maximum : inclusive bounds; `above`, `below` : exclusive bounds.
    choices : the permitted words of a 'choice'.
    keys : the keys of a 'map', or of every mapping of a 'maps'.
    source : where the default comes from.
    """

    name: str
    kind: str
    meaning: str
    default: Any = REQUIRED
    unit: str = ""
    minimum: float | None = None
    maximum: float | None = None
    above: float | None = None
    below: float | None = None
    choices: tuple[str, ...] = ()
    length: int | None = None
    keys: tuple["Key", ...] = field(default=())
    source: str = ""

    @property
    def required(self) -> bool:
        """Whether the key must be given."""
        return self.default is REQUIRED

    def range_in_words(self) -> str:
        """The permitted values, in words: 'from 0 to 90 deg', 'greater than 0 mm', 'a or b'."""
        unit = f" {self.unit}" if self.unit else ""
        if self.choices:
            return " or ".join([", ".join(self.choices[:-1]), self.choices[-1]]) \
                if len(self.choices) > 1 else self.choices[0]
        if self.kind == "clock":
            return "a clock hour, greater than 0 and at most 12"
        low = high = ""
        if self.minimum is not None:
            low = f"at least {self.minimum:g}"
        if self.above is not None:
            low = f"greater than {self.above:g}"
        if self.maximum is not None:
            high = f"at most {self.maximum:g}"
        if self.below is not None:
            high = f"less than {self.below:g}"
        if self.minimum is not None and self.maximum is not None:
            return f"from {self.minimum:g} to {self.maximum:g}{unit}"
        words = " and ".join(part for part in (low, high) if part)
        return words + unit if words else ""
