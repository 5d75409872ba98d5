"""The command line: hands a command to its file, and turns errors into one block and an exit code."""

from __future__ import annotations

import argparse
import importlib
import os
import sys
import traceback
from typing import Sequence

from .. import __version__
from ..errors import ExitCode, GoniosimError

COMMANDS = {
    "plan": "what can be seen, where it is, where a tool lands, how to correct the aim",
    "begin": "write a commented starter scene",
    "eyes": "eye files from a table of biometry",
    "plugins": "list, check and explain lenses, eyes, media, scopes, tools and rooms",
    "verify": "check the engine against the outside world",
}
"""Command -> what it does. Each lives in the module of its name, with add_arguments(parser) and run(args)."""

EXIT_CODES = """exit codes: 0 done; 1 the answer is no (a check failed, the target is not seen when --must-see was
asked); 2 the command was misused; 3 a bad input file; 4 our bug; 130 stopped with Ctrl-C"""


def run(arguments: Sequence[str] | None = None) -> int:
    """Run the command line; returns the exit code. The entry point of the `goniosim` program."""
    arguments = list(sys.argv[1:] if arguments is None else arguments)
    _print_any_letter()
    debug = "--debug" in arguments
    try:
        code = int(_run_command(arguments))
        sys.stdout.flush()
        return code
    except KeyboardInterrupt:
        print("stopped", file=sys.stderr)
        return int(ExitCode.STOPPED)
    except BrokenPipeError:
        # The reader of our output went away, as `head` does: nothing is wrong.
        os.dup2(os.open(os.devnull, os.O_WRONLY), 1)
        return int(ExitCode.DONE)
    except GoniosimError as error:
        if debug:
            traceback.print_exc()
        print(error, file=sys.stderr)
        return int(error.exit_code)
    except Exception as error:
        if debug:
            traceback.print_exc()
        print(_bug_words(error), file=sys.stderr)
        return int(ExitCode.BUG)


def _run_command(arguments: list[str]) -> int:
    parser = argparse.ArgumentParser(
        prog="goniosim", epilog=EXIT_CODES,
        description="Gonioscopy and angle surgery: where the angle seems to be, where it is, how to aim.")
    parser.add_argument("--version", action="version", version=f"goniosim {__version__}")
    subparsers = parser.add_subparsers(dest="command", metavar="COMMAND")
    asked = next((word for word in arguments if not word.startswith("-")), None)
    modules = {}
    for name, summary in COMMANDS.items():
        command = subparsers.add_parser(name, help=summary, description=summary[:1].upper() + summary[1:] + ".")
        if name == asked:  # the others are not even imported
            modules[name] = importlib.import_module(f".{name}", __package__)
            modules[name].add_arguments(command)
    args = parser.parse_args(arguments)
    if args.command is None:
        parser.print_help()
        return ExitCode.MISUSE
    return modules[args.command].run(args)


def _print_any_letter() -> None:
    """Let output go to terminals that lack a letter, with a question mark in its place."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")


def _bug_words(error: Exception) -> str:
    return (f"goniosim failed: {type(error).__name__}: {error}\n"
            "This is a fault of the program, not of your input. Run again with --debug and report what it prints.")


if __name__ == "__main__":
    sys.exit(run())
