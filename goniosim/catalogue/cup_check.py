"""Faults between a cup and the rest of its scene: what is of an eye has no place on a cup, or the reverse."""

from __future__ import annotations

from typing import Any, Mapping

from .document import Finding

MARK = "mark"
LEVEL = ((("head", "turn_deg"), "turned"), (("head", "chin_up_deg"), "tipped"), (("gaze", "deg"), "turned"))


def cup_findings(blocks: Mapping[str, Any], eye: Mapping[str, Any]) -> list[Finding]:
    """Every such fault of a scene's blocks. eye : the eye's, or the cup's, complete definition."""
    from ..eye.measurements import is_cup

    structure = blocks["target"].get("structure")
    if not is_cup(eye):
        if structure != MARK:
            return []
        return [Finding(("target", "structure"), "must be a structure of the eye; mark is on the wall of a "
                                                 f"cup, and {eye['name']} is an eye")]
    findings = []
    if structure not in (None, MARK):
        findings.append(Finding(("target", "structure"), "must be mark, the only structure of a cup; got "
                                                         f"'{structure}', and {eye['name']} is a cup"))
    if blocks["lens"] != "none":
        findings.append(Finding(("lens", "use"), "must be left out (lens: none): no goniolens stands on a "
                                                 "cup"))
    if blocks["tool"] is not None:
        findings.append(Finding(("tool", "use"), "must be left out (tool: none): a cup has no entry; the "
                                                 "straw goes down the line of sight"))
    findings += [Finding(path, f"must be 0: a cup of water cannot be {done}; got {value:g}")
                 for path, done in LEVEL if (value := blocks[path[0]][path[1]]) != 0.0]
    return findings
