"""The report of a plan: the answer, then compact tables that a surgeon reads in half a minute."""

from __future__ import annotations

import textwrap
from typing import Any

from ..cautions import CAUTION
from ..frames import clock_of, from_axis_deg
from ..sight.landing import Landing
from ..sight.sighting import Sighting
from .record import CutoffRow, Plan
from .ring import STEP_DEG, RingPlace, is_clear
from .tables import column_table, pairs
from .words import (
    NONE,
    Numbers,
    aim_parts,
    clock_words,
    in_a_mirror,
    listed,
    on_the_bench,
    plain,
    sentence,
    the,
)

WIDTH = 100
MOST_NAMES = 8  # of measured values, in one line
OUT_OF_REACH_DEG = 95.0
"""Beyond this angle off its axis the eye would have to be looked at from behind: the face is in the way."""
IMPORTANT = (
    "eye.definition.cornea.front.radius_mm",
    "eye.definition.cornea.front.flat_mm",
    "eye.definition.cornea.thickness_um",
    "eye.definition.chamber.depth_mm",
    "eye.definition.chamber.width_mm",
    "eye.definition.chamber.vault_mm",
    "eye.definition.angle.width_deg",
    "eye.definition.angle.meshwork_height_um",
    "eye.definition.lens.kind",
    "lens.gap_um",
)
"""Values that move the answer most; named where they were assumed."""


def report(plan: Plan) -> str:
    """The whole report of a plan, as text for a terminal of 100 columns."""
    parts = [textwrap.fill(sentence(plan), WIDTH), set_up(plan), structures_table(plan)]
    if plan.sighting.view is not None:
        parts.append(landing_words(plan))
    if plan.gap_table:
        parts.append(gap_words(plan))
    parts += [cutoff_words(plan), ring_words(plan), known_words(plan)]
    parts += [textwrap.fill(f"note: {note}", WIDTH) for note in plan.notes]
    parts.append(ending(plan))
    return "\n\n".join(part for part in parts if part)


def set_up(plan: Plan) -> str:
    """The set-up in a few lines."""
    mapping, lens = plan.scene.mapping, plan.scene.mapping["lens"]
    head, gaze, scope = mapping["head"], mapping["gaze"], mapping["scope"]
    sight = plan.scene.sight
    toward = clock_of(sight[0], sight[1])
    neutral = (
        "none: where it is seen, an undeviated tool never lands true"
        if plan.neutral_deg is None
        else f"{plan.neutral_deg:.1f} deg off the axis: there an undeviated tool lands true"
    )
    rows = [
        (
            "microscope",
            f"{scope['use']}, leaned {scope['tilt_deg']:g} deg toward the seat at "
            f"{clock_words(mapping['surgeon']['seat_clock'])}",
        ),
        ("head", _head_line(head, gaze)),
        ("lens", "none" if lens == "none" else _lens_line(lens)),
        (
            "line of sight",
            f"{from_axis_deg(sight):.1f} deg off the eye's axis"
            + (f", toward {clock_words(toward)}" if toward is not None else ""),
        ),
        ("neutral line", neutral),
    ]
    return pairs(rows)


def _head_line(head: dict[str, Any], gaze: dict[str, Any]) -> str:
    """Turn, chin and gaze, in so far as they are not zero."""
    parts = []
    if head["turn_deg"]:
        parts.append(f"turned {head['turn_deg']:g} deg to the patient's {head['turn_toward']}")
    if head["chin_up_deg"]:
        parts.append(f"chin {abs(head['chin_up_deg']):g} deg {'up' if head['chin_up_deg'] > 0.0 else 'down'}")
    if gaze["deg"]:
        parts.append(f"gaze {gaze['deg']:g} deg toward {clock_words(gaze['toward_clock'])}")
    return ", ".join(parts) or "straight, facing the ceiling"


def _lens_line(lens: dict[str, Any]) -> str:
    gap = "" if lens["gap_um"] is None else f", {lens['gap_um']:g} um of {lens['fluid']} at least"
    return f"{lens['use']}, its mark at {clock_words(lens['mark_at_clock'])}{gap}"


def structures_table(plan: Plan) -> str:
    """Every structure of the target's clock hour, from the cornea to the iris."""
    words = Numbers(plan)
    order = {name: i for i, name in enumerate(plan.scene.eye.structures)}
    rows = []
    for sighting in sorted(plan.sightings, key=lambda each: order.get(each.target.structure, -1)):
        view, split = sighting.view, sighting.split or (None, None, None)
        rows.append(
            [
                plain(sighting.target.structure),
                _seen_word(plan, sighting),
                words.number(split[1]),
                words.number(split[0]),
                words.degrees(view.middle.headroom_deg if view else None),
                words.degrees(sighting.graze_deg),
                words.whole(sighting.blur.rms_um if sighting.blur else None),
                view.middle.by if view and sighting.seen else sighting.cause or NONE,
            ]
        )
    head = ["structure", "seen", "anterior", "nearer", "headroom", "graze", "blur", "by / cause"]
    return (
        "each structure of this clock hour: how far it seems displaced in mm, angles in deg, blur in um\n"
        + column_table(head, rows, WIDTH)
    )


def _seen_word(plan: Plan, sighting: Sighting) -> str:
    """'clear' where headroom, blur and graze are within the floors, 'seen' where not, else 'no'."""
    if not sighting.seen:
        return "no"
    spread = sighting.blur and sighting.blur.rms_um
    clear = sighting.graze_deg is not None and is_clear(
        plan.scene.settings, sighting.view.middle.headroom_deg, spread, sighting.graze_deg
    )
    return "clear" if clear else "seen"


def landing_words(plan: Plan) -> str:
    """Landings and the correction, as a small table."""
    words = Numbers(plan)
    rows = [("down the line of sight", _landing_line(plan, plan.along_sight))]
    if plan.from_entry is not None:
        rows.append(("from the entry to the image", _landing_line(plan, plan.from_entry)))
    if plan.aim is not None and not in_a_mirror(plan):
        aim = plan.aim
        parts = aim_parts(words, aim)
        whole = f"{words.degrees(aim.correction_deg)} deg in all: " if len(parts) > 1 else ""
        rows.append(
            (
                "correction at the entry",
                f"{whole}{listed(parts)}; {words.mm(aim.correction_mm)} at the target, "
                f"{words.mm(aim.distance_mm)} away",
            )
        )
    return "a straight tool\n" + pairs(rows, indent=2)


def _landing_line(plan: Plan, landing: Landing) -> str:
    if landing.structure is None:
        return "never reaches the chamber"
    if landing.anterior_mm is None:
        return f"on {the(landing.structure)}"
    plus, minus = (
        ("above the mark", "below the mark")
        if on_the_bench(plan)
        else ("anterior of the target", "posterior of the target")
    )
    return f"{Numbers(plan).signed_mm(landing.anterior_mm, plus, minus)}, on {the(landing.structure)}"


def gap_words(plan: Plan) -> str:
    """Gap between tip and target as seen against as it is, on the true line."""
    words = Numbers(plan)
    rows = [
        ["gap true mm", *(words.number(row.true_mm) for row in plan.gap_table)],
        ["gap seen mm", *(words.number(row.seen_mm) for row in plan.gap_table)],
    ]
    head = ["way to the target", *(f"{100 * row.share:.0f}%" for row in plan.gap_table)]
    return "tip on the true line, seen through the same optics\n" + column_table(head, rows, WIDTH)


def cutoff_words(plan: Plan) -> str:
    """Cut-offs of the target's own structure, and in short of the bare cornea."""
    rows = [
        [
            ("the water" if on_the_bench(plan) else "bare cornea") if row.lens == "none" else row.lens,
            _spans(row),
            row.cut.causes[0][0] if row.cut.causes else row.cut.never or NONE,
            row.cut.causes[-1][1] if row.cut.causes else NONE,
        ]
        for row in plan.cutoffs
        if row.structure == plan.target.structure
    ]
    rows = [[cell or "end of the sweep" for cell in row] for row in rows]
    if not rows:
        return ""
    return "lines of sight that see it, in its meridian, deg off the axis\n" + column_table(
        ["through", "seen", "cause below", "cause above"], rows, WIDTH
    )


def _spans(row: CutoffRow) -> str:
    spans = ", ".join(f"{low:.1f} to {high:.1f}" for low, high in row.cut.seen_deg) or "never"
    behind = row.cut.seen_deg and row.cut.seen_deg[0][0] > OUT_OF_REACH_DEG
    return f"{spans} (out of reach)" if behind else spans


def ring_words(plan: Plan) -> str:
    """The clock ring as spans of hours."""
    if not plan.ring:
        return ""
    name = plain(plan.scene.eye.ring_structure)
    rows = [
        (f"{name} seen", _hours([place for place in plan.ring if place.seen])),
        (f"{name} clear", _hours([place for place in plan.ring if place.clear])),
    ]
    return "round the clock, from this set-up\n" + pairs(rows, indent=2)


def _hours(places: list[RingPlace]) -> str:
    """'12 to 3.5 o'clock (110 deg)', joined over 12."""
    if not places:
        return "nowhere"
    steps = int(360.0 / STEP_DEG)
    held = sorted(round(place.clock * 30.0 / STEP_DEG) % steps for place in places)
    if len(held) == steps:
        return "all round"
    spans = []
    for step in held:
        if spans and step == spans[-1][1] + 1:
            spans[-1][1] = step
        else:
            spans.append([step, step])
    if len(spans) > 1 and spans[0][0] == 0 and spans[-1][1] == steps - 1:
        spans[0][0] = spans.pop()[0] - steps
    hours = [f"{_hour(a)} to {_hour(b)} o'clock" if a != b else f"{_hour(a)} o'clock" for a, b in spans]
    return f"{', '.join(hours)} ({len(held) * STEP_DEG:.0f} deg)"


def _hour(step: int) -> str:
    return f"{(step * STEP_DEG / 30.0) % 12.0 or 12.0:.2f}".rstrip("0").rstrip(".")


def known_words(plan: Plan) -> str:
    """How much was measured and what was assumed, the weighty ones by name."""
    marks = {
        path: mark for path, mark in plan.scene.marks.items() if path.startswith(("eye.definition.", "lens."))
    }
    count = {
        mark: sum(1 for each in marks.values() if each == mark) for mark in ("measured", "given", "assumed")
    }
    assumed = [
        path.removeprefix("eye.definition.")
        for path in IMPORTANT
        if any(
            mark == "assumed" and (path == each or each.startswith(path + "."))
            for each, mark in marks.items()
        )
    ]
    measured = [path.removeprefix("eye.definition.") for path, mark in marks.items() if mark == "measured"]
    line = "eye and lens: {measured} values measured, {given} given, {assumed} assumed".format(**count)
    line += f"; measured: {_some(measured)}" if measured else ""
    return textwrap.fill(
        line + (f"; assumed that matter most: {', '.join(assumed)}" if assumed else ""), WIDTH
    )


def _some(names: list[str]) -> str:
    """Names, of which only the first few where there are many."""
    more = len(names) - MOST_NAMES
    return ", ".join(names[:MOST_NAMES]) + (f" and {more} more" if more > 0 else "")


def ending(plan: Plan) -> str:
    """Caution, version and fingerprint."""
    from .. import __version__

    return f"{textwrap.fill(CAUTION, WIDTH)}\ngoniosim {__version__}, inputs {plan.scene.fingerprint[:12]}"
