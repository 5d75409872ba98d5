"""Run all checks, and compile the kernels on purpose."""

from __future__ import annotations

import math
import time
from typing import Any, Callable, Iterator

from .check import Check, Result, run_check
from .checks import SUBJECTS, checks_of


def run_all(subjects: tuple[str, ...] = tuple(SUBJECTS),
            tell: Callable[[int, int, Check], None] | None = None) -> Iterator[tuple[str, Result]]:
    """Run the checks of some subjects, in order: (subject, result) for each.

    tell : called before each check with (checks done, checks in all, the check).
    """
    rows = [(subject, check) for subject in subjects for check in checks_of(subject)]
    for done, (subject, check) in enumerate(rows):
        if tell is not None:
            tell(done, len(rows), check)
        yield subject, run_check(check)


def result_record(subject: str, result: Result) -> dict[str, Any]:
    """A result as plain data; what is not finite is null."""
    check = result.check
    return {
        "subject": subject, "name": check.name, "source": check.source, "status": check.status,
        "rule": check.rule,
        "expected": _plain(check.expected), "tolerance": check.tolerance, "unit": check.unit or None,
        "got": [_finite(value) for value in result.got], "off": _finite(result.off), "rays": result.rays,
        "ok": result.ok, "error": result.error or None,
    }


def _plain(expected: float | tuple[float, ...]) -> list[float]:
    return list(expected) if isinstance(expected, tuple) else [expected]


def _finite(value: float | None) -> float | None:
    return value if value is not None and math.isfinite(value) else None


def warm() -> tuple[float, str | None]:
    """Compile every kernel by planning one shipped case; seconds taken, and where the compiled code is kept."""
    from .. import kernels, plan
    from .real_rays import shipped_scene

    start = time.perf_counter()
    plan(shipped_scene("right-eye-temporal"))
    folder = kernels.CACHE_FOLDER
    return time.perf_counter() - start, None if folder is None else str(folder)
