"""`goniosim plan SCENE`: the answer in one sentence, tables, and a folder with the plan."""

from __future__ import annotations

import argparse
import json
from pathlib import Path
from typing import Any

from ..catalogue import resolve_scene, resolved_text
from ..errors import ExitCode
from ..planning import make_plan
from ..planning.record import Plan
from ..sight.scene import assemble
from .folder import refuse_what_is_in_the_way, write_plan_folder
from .options import add_common_options
from .progress import Progress

OVERRIDES = {
    "tilt": ("scope.tilt_deg", float, "DEG", "lean of the microscope toward the surgeon"),
    "turn": ("head.turn_deg", float, "DEG", "turn of the head"),
    "lens": ("lens", str, "NAME", "lens, or none"),
    "clock": ("target.clock", float, "H", "clock hour of the target"),
    "side": ("eye.side", str, "SIDE", "right or left eye"),
}
"""Option -> key of the scene, type, what stands for its value, meaning."""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Arguments of the command."""
    parser.add_argument("scene", metavar="SCENE", help="a scene file, or the name of a shipped scene")
    for option, (_, kind, stands, meaning) in OVERRIDES.items():
        parser.add_argument(
            f"--{option}", type=kind, metavar=stands, help=f"{meaning}, in place of the scene's"
        )
    parser.add_argument("--into", metavar="DIR", type=Path, help="folder to write to (named after the scene)")
    parser.add_argument("--must-see", action="store_true", help="exit with 1 where the target is not seen")
    add_common_options(parser)


def run(args: argparse.Namespace) -> int:
    """Run the command; returns the exit code."""
    resolved = resolve_scene(args.scene, plugin_folders=args.plugin_folders, overrides=overrides_of(args))
    folder = args.into or Path(resolved.mapping["name"])
    if not args.json:
        refuse_what_is_in_the_way(folder)  # before the work, not after it
    scene = assemble(resolved.mapping, resolved.marks, resolved.fingerprint, resolved.notes, resolved.where)
    progress = Progress()
    try:
        plan = make_plan(scene, progress)
    finally:
        progress.close()
    if args.json:
        print(plan_text(plan), end="")
    else:
        show(plan, resolved, folder)
    return ExitCode.NO if args.must_see and not plan.sighting.seen else ExitCode.DONE


def overrides_of(args: argparse.Namespace) -> dict[str, Any]:
    """Dotted key -> value for the options that were given."""
    return {
        key: getattr(args, option)
        for option, (key, *_) in OVERRIDES.items()
        if getattr(args, option) is not None
    }


def plan_text(plan: Plan) -> str:
    """plan.json as text: every digit, missing as null."""
    return json.dumps(plan.to_dict(), indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def show(plan: Plan, resolved, folder: Path) -> None:
    """Print the report, and write the folder."""
    from ..planning.report import report
    from ..show.cross_section import cross_section

    words = report(plan)
    write_plan_folder(
        folder,
        {
            "plan.json": plan_text(plan),
            "resolved-scene.yaml": resolved_text(resolved),
            "cross-section.svg": cross_section(plan),
        },
    )
    print(words)
    print(f"written: {folder}/ with plan.json, resolved-scene.yaml, cross-section.svg")
