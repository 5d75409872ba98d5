"""`goniosim begin FILE`: a commented starter scene from a few plain options."""

from __future__ import annotations

import argparse
import os
import tempfile
from pathlib import Path

from ..catalogue import resolve_scene
from ..cautions import CAUTION
from ..errors import BadInput, ExitCode, Misuse
from ..frames import nasal_clock
from .options import add_common_options, print_caution, print_json

COMMENT_COLUMN = 42
SCENE = """\
# A starter scene; change what differs in your case, then: goniosim plan {file}
# Every key with its unit, range and default: goniosim plugins explain scene
# {caution}
goniosim: scene
schema: 1
name: {name}                      # also the name of the folder that the plan writes
title: {title}

eye:
  use: {eye}                      # goniosim plugins list eyes; or an eye file of your own beside this scene
  side: {side}                    # right or left
  measured: {{}}                    # what you measured, for example {{chamber: {{depth_mm: 2.9}}, angle: {{width_deg: 30}}}}

{lens}

scope:
  use: stereo-200                 # goniosim plugins list scopes
  tilt_deg: {tilt:g}                 # lean of the oculars toward the surgeon, 0 to 90
  focus_on: target

head:
  turn_deg: {turn:g}                 # 0: facing the ceiling
  turn_toward: {turn_toward}      # the patient's own left or right
  chin_up_deg: 0

surgeon: {{seat_clock: {seat:g}}}       # clock hour of the room at which you sit, 9 is the patient's right

tool:
  use: straight-23g               # goniosim plugins list tools
  entry: {{clock: {seat:g}, inside_limbus_mm: 1.0}}

target:
  structure: pigmented-meshwork   # schwalbe-line, clear-meshwork, scleral-spur, ciliary-band, iris-root ...
  clock: {target:g}                  # clock hour as you see it facing the patient, 12 is superior

room: {{use: plain-room}}           # goniosim plugins list rooms
wavelength_nm: 555
"""
LENS = """\
lens:
  use: {lens}                     # goniosim plugins list lenses; or: lens: none
  mark_at_clock: {mark:g}              # where the lens's own 12 o'clock lies on the eye
  # gap_um and fluid, where left out: 20 um of saline under a lens, nothing under a pool"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Arguments of the command."""
    parser.add_argument("file", metavar="FILE", type=Path, help="scene file to write")
    parser.add_argument("--eye", default="adult-open", metavar="NAME", help="eye (adult-open)")
    parser.add_argument("--lens", default="direct-face-48", metavar="NAME", help="lens, or none (direct-face-48)")
    parser.add_argument("--side", choices=("right", "left"), default="right", help="which eye (right)")
    parser.add_argument("--target-clock", type=float, metavar="H", help="clock hour of the target (nasal)")
    parser.add_argument("--tilt", type=float, default=35.0, metavar="DEG", help="lean of the microscope (35)")
    parser.add_argument("--turn", type=float, default=35.0, metavar="DEG", help="turn of the head, away from you (35)")
    parser.add_argument("--seat", type=float, metavar="H", help="clock hour at which you sit (temporal)")
    parser.add_argument("--replace", action="store_true", help="write over a file that is there")
    add_common_options(parser)


def run(args: argparse.Namespace) -> int:
    """Run the command; returns the exit code."""
    path = args.file if args.file.suffix else args.file.with_suffix(".yaml")
    if path.exists() and not args.replace:
        raise Misuse(f"{path} is there already; give another name, or --replace to write over it")
    _write_checked(path, scene_text(args, path), args.plugin_folders)
    if args.json:
        print_json({"caution": CAUTION, "written": str(path)})
        return ExitCode.DONE
    print(f"written: {path}\nplan it with: goniosim plan {path}")
    print_caution()
    return ExitCode.DONE


def scene_text(args: argparse.Namespace, path: Path) -> str:
    """The starter scene; what is not asked for follows from the side of the eye."""
    nasal = nasal_clock(args.side)
    seat = args.seat if args.seat is not None else (nasal + 6.0) % 12.0 or 12.0
    target = args.target_clock if args.target_clock is not None else nasal
    lens = "lens: none                        # bare cornea in air"
    if args.lens != "none":
        lens = LENS.format(lens=args.lens, mark=(target + 6.0) % 12.0 or 12.0)
    name = "".join(letter if letter.isalnum() else "-" for letter in path.stem.lower()).strip("-") or "case"
    text = SCENE.format(file=path.name, caution=CAUTION, name=name, eye=args.eye, side=args.side, lens=lens,
                        title=f"{args.side.capitalize()} eye", tilt=args.tilt, turn=args.turn, seat=seat, target=target,
                        turn_toward="left" if 6.0 < seat < 12.0 else "right")
    return "".join(f"{_aligned(line)}\n" for line in text.splitlines())


def _aligned(line: str) -> str:
    """A line with its comment, where it has one behind a value, at the common column."""
    value, mark, comment = line.partition(" # ")
    return f"{value.rstrip():<{COMMENT_COLUMN}} # {comment}" if mark and value.strip() else line


def _write_checked(path: Path, text: str, plugin_folders: list[str]) -> None:
    """Write beside its place, check it as the plan would, then put it there; nothing is left where that fails."""
    temporary = None
    try:
        handle, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.stem}.", suffix=".yaml")
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
        try:
            resolve_scene(temporary, plugin_folders=plugin_folders)
        except BadInput as error:
            raise BadInput(path.name, error.faults, error.advice) from None
        os.chmod(temporary, 0o644)
        os.replace(temporary, path)
        temporary = None
    except OSError as error:
        raise Misuse(f"{path} cannot be written: {error.strerror or error}") from None
    finally:
        if temporary is not None:
            Path(temporary).unlink(missing_ok=True)
