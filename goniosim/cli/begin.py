"""`goniosim begin FILE`: a commented starter scene from a few plain options."""

from __future__ import annotations

import argparse
import os
import re
import tempfile
import textwrap
from pathlib import Path

from ..catalogue import resolve_scene
from ..cautions import CAUTION
from ..errors import BadInput, ExitCode, Misuse
from ..frames import nasal_clock
from ..scene.room_keys import ENTRY_KEYS, HEAD_KEYS, SCENE_KEYS, SCOPE_BLOCK
from .options import add_common_options, print_caution, print_json

COMMENT_COLUMN = 42
SCENE = """\
# A starter scene; change what differs in your case, then: goniosim plan {file}
# Every key with its unit, range and default: goniosim plugins explain scene
{caution}
goniosim: scene
schema: 1
name: {name}                      # also the name of the folder that the plan writes
title: {title}

eye:
  use: {eye}                      # goniosim plugins list eyes; or an eye file of your own beside this scene
  side: {side}                    # right or left
  measured: {{}}                    # what you measured, such as {{chamber: {{depth_mm: 2.9}}}}

{lens}

scope:
  use: stereo-200                 # goniosim plugins list scopes
  tilt_deg: {tilt:g}                 # lean of the oculars toward the surgeon, {tilt_range}
  focus_on: target                # centred on the target's image

head:
  turn_deg: {turn:g}                 # {turn_range}; 0: facing the ceiling
  turn_toward: {turn_toward}      # the patient's own left or right
  chin_up_deg: 0                  # {chin_range}; less than 0: chin down

surgeon: {{seat_clock: {seat:g}}}       # clock hour of the room at which you sit, 9 is the patient's right

tool:
  use: straight-23g               # goniosim plugins list tools
  entry: {{clock: {seat:g}, inside_limbus_mm: 1.0}}   # distance inside the limbus, {inside_range}

target:
  structure: pigmented-meshwork   # schwalbe-line, clear-meshwork, scleral-spur, ciliary-band, iris-root ...
  clock: {target:g}                  # 0 to 12, as you see it facing the patient; 12 is superior

room: {{use: plain-room}}           # goniosim plugins list rooms
wavelength_nm: 555                # of the light, {wavelength_range}
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
    parser.add_argument(
        "--lens", default="direct-face-48", metavar="NAME", help="lens, or none (direct-face-48)"
    )
    parser.add_argument("--side", choices=("right", "left"), default="right", help="which eye (right)")
    parser.add_argument("--target-clock", type=float, metavar="H", help="clock hour of the target (nasal)")
    parser.add_argument("--tilt", type=float, default=35.0, metavar="DEG", help="lean of the microscope (35)")
    parser.add_argument(
        "--turn", type=float, default=35.0, metavar="DEG", help="turn of the head, away from you (35)"
    )
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
    name = "-".join(re.findall("[a-z0-9]+", path.stem.lower())) or "case"
    caution = textwrap.fill(CAUTION, 98, initial_indent="# ", subsequent_indent="# ")
    text = SCENE.format(
        **_ranges(),
        file=path.name,
        caution=caution,
        name=name,
        eye=args.eye,
        side=args.side,
        lens=lens,
        title=f"{args.side.capitalize()} eye",
        tilt=args.tilt,
        turn=args.turn,
        seat=seat,
        target=target,
        turn_toward="left" if 6.0 < seat < 12.0 else "right",
    )
    return "".join(f"{_aligned(line)}\n" for line in text.splitlines())


def _ranges() -> dict[str, str]:
    """What the comments say of the ranges, from the declarations that check them."""
    keys = {key.name: key for block in (SCOPE_BLOCK, HEAD_KEYS, ENTRY_KEYS, SCENE_KEYS) for key in block}
    names = {
        "tilt": "tilt_deg",
        "turn": "turn_deg",
        "chin": "chin_up_deg",
        "inside": "inside_limbus_mm",
        "wavelength": "wavelength_nm",
    }
    return {f"{short}_range": keys[name].range_in_words() for short, name in names.items()}


def _aligned(line: str) -> str:
    """A line with its comment, where it has one behind a value, at the common column."""
    value, mark, comment = line.partition(" # ")
    return f"{value.rstrip():<{COMMENT_COLUMN}} # {comment}" if mark and value.strip() else line


def _write_checked(path: Path, text: str, plugin_folders: list[str]) -> None:
    """Write beside its place, check it as the plan would, put it there; nothing is left where that fails."""
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
