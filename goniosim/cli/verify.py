"""`goniosim verify`: the outside checks, run on this machine."""

from __future__ import annotations

import argparse
import sys
import textwrap

from ..cautions import CAUTION
from ..errors import ExitCode
from ..verify.check import EQUALS, Check, Result
from ..verify.checks import SUBJECTS
from ..verify.running import result_record, run_all, warm
from .options import print_caution, print_json

WIDTH = 110
SHOWN = 3  # numbers of a list that are printed; --json has them all


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Arguments of the command."""
    parser.add_argument("subjects", nargs="*", metavar="SUBJECT",
                        help=f"only these of: {', '.join(SUBJECTS)}")
    parser.add_argument("--warm", action="store_true",
                        help="only compile the kernels, so that later runs start at once")
    parser.add_argument("--json", action="store_true", help="print the result as JSON alone")
    parser.add_argument("--debug", action="store_true", help="show the traceback of an error")


def run(args: argparse.Namespace) -> int:
    """Run the command; returns the exit code, 1 where a check fails."""
    if args.warm:
        return _warm(args.json)
    subjects = _chosen(args.subjects)
    results = []
    for subject, result in run_all(subjects, _tell if sys.stderr.isatty() else None):
        if not args.json:
            if not results or results[-1][0] != subject:
                print(f"\n{SUBJECTS[subject]}")
            print(_row(result))
        results.append((subject, result))
    failed = sum(not result.ok for _, result in results)
    if args.json:
        print_json(_report(results))
    else:
        _print_summary(results, failed)
    return ExitCode.NO if failed else ExitCode.DONE


def _chosen(words: list[str]) -> tuple[str, ...]:
    """The subjects asked for, all where none is."""
    from ..catalogue.checking import did_you_mean
    from ..errors import Misuse

    for word in words:
        if word not in SUBJECTS:
            near = did_you_mean(word, list(SUBJECTS))
            raise Misuse(f"no checks named '{word}'. Subjects: {', '.join(SUBJECTS)}. {near}".rstrip())
    return tuple(words) or tuple(SUBJECTS)


def _warm(as_json: bool) -> int:
    seconds, folder = warm()
    if as_json:
        print_json({"goniosim": "warm", "seconds": seconds, "kept_in": folder})
    else:
        print(f"kernels ready after {seconds:.1f} s; " + (
            f"compiled code is kept in {folder}" if folder else "no folder can be written, so each run compiles again"))
    return ExitCode.DONE


def _tell(done: int, in_all: int, check: Check) -> None:
    """One line of progress, written over and over."""
    print(f"\r{done}/{in_all} {check.name}"[:WIDTH].ljust(WIDTH) + "\r", end="", file=sys.stderr, flush=True)


def _row(result: Result) -> str:
    """Two lines: verdict, name; then expected, got, agreement and source."""
    check = result.check
    unit = f" {check.unit}" if check.unit else ""
    if result.error:
        told = f"could not be measured: {result.error}"
    elif check.rule == EQUALS:
        told = (f"expected {_numbers(check.expected)}{unit}, got {_numbers(result.got)}; "
                f"agrees to {result.off:.2g} (asked {check.tolerance:.2g})")
    else:
        told = f"expected {check.rule} {_numbers(check.expected)}{unit}, got {_numbers(result.got)}"
    rays = f"; {result.rays} rays" if result.rays else ""
    lines = [f"{'ok  ' if result.ok else 'FAIL'} {check.name}", f"{told}{rays}",
    f"[{check.source}; {check.status}]"]
    return "\n".join(textwrap.fill(line, WIDTH, initial_indent="     " * (i > 0), subsequent_indent="     ")
                     for i, line in enumerate(lines))


def _numbers(value) -> str:
    values = value if isinstance(value, tuple) else (value,)
    words = ", ".join(f"{number:.9g}" for number in values[:SHOWN])
    return words + (f", ... ({len(values)} numbers)" if len(values) > SHOWN else "")


def _report(results: list[tuple[str, Result]]) -> dict:
    from .. import __version__

    return {"goniosim": "verify", "version": __version__, "caution": CAUTION,
            "ok": all(result.ok for _, result in results),
            "checks": [result_record(subject, result) for subject, result in results]}


def _print_summary(results: list[tuple[str, Result]], failed: int) -> None:
    rays = sum(result.rays for _, result in results)
    verdict = f"{failed} FAILED" if failed else "all agree"
    print(f"\n{len(results)} checks against the outside world, {rays} rays followed: {verdict}")
    print_caution()
