"""What an outside check is, and how it is run."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any, Callable, Sequence

EQUALS, ABOVE, BELOW = "equals", "above", "below"

VERIFIED = "read in the source"
SECONDARY = "read in something that cites the source"
MEMORY = "from memory"
COMPUTED = "computed from the stated inputs, independently of this program"
EXACT = "exact theory"
PRACTICE = "common practice, no source"
STATUSES = (VERIFIED, SECONDARY, MEMORY, COMPUTED, EXACT, PRACTICE)


@dataclass(frozen=True)
class Check:
    """A number from outside, beside our way to it.

    name : one line that says what is checked. source : where the number stands, or whose theory it is.
    status : how well the number is known, one of STATUSES.
    expected : the number, or several. tolerance, unit : agreement asked for, in the unit of the number.
    measure : gives our number or numbers, or a `Measured` that also says how many rays it took.
    rule : 'equals' within the tolerance; 'above' or 'below' the expected number by at least the tolerance.
    """

    name: str
    source: str
    status: str
    expected: float | tuple[float, ...]
    tolerance: float
    unit: str
    measure: Callable[[], Any]
    rule: str = EQUALS


@dataclass(frozen=True)
class Measured:
    """Our number or numbers, and the rays that were really followed for them."""

    got: float | Sequence[float]
    rays: int = 0


@dataclass(frozen=True)
class Result:
    """A check and what became of it.

    got : our numbers, empty where measuring failed. off : greatest difference from the expected ones, None
    where measuring failed. rays : rays followed, 0 where the check is arithmetic. error : why it failed, or "".
    """

    check: Check
    ok: bool
    got: tuple[float, ...] = field(default=())
    off: float | None = None
    rays: int = 0
    error: str = ""


def numbers(value: float | Sequence[float]) -> tuple[float, ...]:
    """One number or several, as a tuple of floats."""
    return tuple(float(item) for item in value) if hasattr(value, "__iter__") else (float(value),)


def run_check(check: Check) -> Result:
    """Run one check. A failure of any kind is a result, so that the other checks still run."""
    try:
        measured = check.measure()
    except Exception as error:
        return Result(check, False, error=f"{type(error).__name__}: {error}")
    measured = measured if isinstance(measured, Measured) else Measured(measured)
    got, expected = numbers(measured.got), numbers(check.expected)
    if len(got) != len(expected):
        return Result(check, False, got, None, measured.rays, f"gave {len(got)} numbers for {len(expected)}")
    above = [ours - theirs for ours, theirs in zip(got, expected)]
    # Written so that NaN among the numbers fails.
    ok = {EQUALS: all(abs(difference) <= check.tolerance for difference in above),
          ABOVE: all(difference >= check.tolerance for difference in above),
          BELOW: all(-difference >= check.tolerance for difference in above)}[check.rule]
    return Result(check, ok, got, max(map(abs, above), key=lambda off: (off != off, off)), measured.rays)
