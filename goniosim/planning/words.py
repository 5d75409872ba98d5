"""The plan in words: one plain sentence, then compact tables that a surgeon reads in half a minute."""

from __future__ import annotations

import textwrap
from typing import Any

import numpy as np

from ..cautions import CAUTION
from ..eye.measurements import is_cup
from ..frames import clock_of, from_axis_deg, nasal_clock
from ..sight.landing import Landing
from .aim import Aim
from .record import CutoffRow, Plan
from .ring import STEP_DEG, RingPlace
from .tables import column_table, pairs

WIDTH = 100
NONE = "-"
OUT_OF_REACH_DEG = 95.0
"""Beyond this angle off its axis the eye would have to be looked at from behind: the face is in the way."""
IMPORTANT = ("eye.definition.cornea.front.radius_mm", "eye.definition.cornea.front.flat_mm",
             "eye.definition.cornea.thickness_um", "eye.definition.chamber.depth_mm",
             "eye.definition.chamber.width_mm", "eye.definition.chamber.vault_mm", "eye.definition.angle.width_deg",
             "eye.definition.angle.meshwork_height_um", "eye.definition.lens.kind", "lens.gap_um")
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


def sentence(plan: Plan) -> str:
    """The answer, in plain words, most important first."""
    words = Numbers(plan)
    name = target_name(plan)
    if not plan.sighting.seen:
        return f"Not seen: {name}, {lens_words(plan)}. Cause: {plan.sighting.cause}. {what_next(plan)}".strip()
    opening = f"Seen: {name}, {lens_words(plan)}{by_words(plan)}."
    if in_a_mirror(plan):
        away = float(np.linalg.norm(plan.sighting.view.apparent_mm - plan.target.point_mm))
        return f"{opening} Its image seems to lie {words.mm(away)} from it; steer by the tip as seen in the mirror, " \
               "not by the image's place: the picture is reversed."
    nearer, anterior, clockwise = plan.sighting.split
    shifts = [words.signed_mm(nearer, "nearer", "farther away")]
    if anterior is not None:
        shifts.append(words.signed_mm(anterior, *(("higher", "lower") if on_the_bench(plan) else
                                                  ("more anterior", "more posterior"))))
    if clockwise is not None and abs(clockwise) >= 0.05:
        shifts.append(words.signed_mm(clockwise, "clockwise", "anticlockwise"))
    middle = f"It seems {_listed(shifts)} than it is" if anterior is not None else f"It seems {shifts[0]} than it is"
    return " ".join(part for part in (opening, f"{middle}; {landing_sentence(plan)}.", aim_sentence(plan)) if part)


def target_name(plan: Plan) -> str:
    """'the pigmented meshwork at 3 o'clock (nasal) of the right eye'."""
    target, side = plan.target, plan.scene.mapping["eye"]["side"]
    if on_the_bench(plan):
        return f"the mark at {clock_words(target.clock)} of the cup"
    what = "the point asked for" if target.structure == "point" else the(target.structure)
    at = "" if target.clock is None else f" at {clock_words(target.clock)} ({quadrant(target.clock, side)})"
    return f"{what}{at} of the {side} eye"


def plain(name: str) -> str:
    """A name of the files as words."""
    return name.replace("-", " ").replace("schwalbe line", "Schwalbe's line")


def the(name: str) -> str:
    """A structure's name with its article."""
    return plain(name) if name == "schwalbe-line" else f"the {plain(name)}"


def clock_words(clock: float) -> str:
    """'3 o'clock', '2.5 o'clock'."""
    return f"{clock:.4g} o'clock"


def quadrant(clock: float, side: str) -> str:
    """Which quadrant a clock hour lies in, in words."""
    nasal = nasal_clock(side)
    names = {12.0: "superior", 6.0: "inferior", nasal: "nasal", (nasal + 6.0) % 12.0 or 12.0: "temporal"}
    return names[min(names, key=lambda hour: min((clock - hour) % 12.0, (hour - clock) % 12.0))]


def lens_words(plan: Plan) -> str:
    """'through direct-face-48' or 'without a lens'."""
    lens = plan.scene.mapping["lens"]
    if on_the_bench(plan):
        return "through the water"
    return "without a lens" if lens == "none" else f"through {lens['use']}"


def by_words(plan: Plan) -> str:
    """How the light comes, where mirrors are in its way."""
    view = plan.sighting.view
    if view.middle.by == "direct":
        return ""
    return f", by {' and '.join(view.middle.by.split('+'))}"


def in_a_mirror(plan: Plan) -> bool:
    """Whether the picture is reversed, so that the image's place is no guide to the aim."""
    magnified = plan.sighting.magnification
    return magnified is not None and magnified.handed == "reversed"


def landing_sentence(plan: Plan) -> str:
    """Where a straight tool down the undeviated line of sight arrives."""
    landed = plan.along_sight
    start = "a straight tool sent down the line of sight"
    if landed.structure is None:
        return f"{start} never reaches the chamber"
    if landed.anterior_mm is None:
        return f"{start} lands on {the(landed.structure)}"
    plus, minus = ways(plan)
    return f"{start} lands {Numbers(plan).signed_mm(landed.anterior_mm, f'too {plus}', f'too {minus}')}, " \
           f"on {the(landed.structure)}"


def aim_sentence(plan: Plan) -> str:
    """How far to correct the aim from the entry."""
    aim, words = plan.aim, Numbers(plan)
    if aim is None:
        return ""
    entry = plan.scene.mapping["tool"]["entry"]["clock"]
    return f"From the entry at {clock_words(entry)}, aim {_listed(_aim_parts(words, aim))} of where it seems " \
           f"({words.mm(aim.correction_mm)} at the target)."


def _aim_parts(words: "Numbers", aim: Aim) -> list[str]:
    """The correction toward iris or cornea, and round the clock where that is worth telling."""
    parts = [words.signed_deg(aim.toward_iris_deg, "toward the iris", "toward the cornea")]
    if abs(aim.clockwise_deg) >= 0.1:
        parts.append(words.signed_deg(aim.clockwise_deg, "clockwise", "anticlockwise"))
    return parts


def what_next(plan: Plan) -> str:
    """What to try where the target is not seen."""
    lens = plan.scene.mapping["lens"]
    if on_the_bench(plan):
        return "Lean the phone less, or fill the cup higher."
    if lens == "none":
        return "Light from the angle does not get out through a bare cornea: put a goniolens or a saline pool on."
    row = next((row for row in plan.cutoffs if row.structure == plan.target.structure), None)
    if row is None or not row.cut.seen_deg:
        return "This lens shows it from no line of sight in its meridian: try another lens, or turn the lens's mark."
    spans = _listed([f"{low:.0f} to {high:.0f} deg" for low, high in row.cut.seen_deg])
    return f"In the target's meridian this lens shows it from {spans} off the axis; " \
           f"the line of sight lies {from_axis_deg(plan.scene.sight):.0f} deg off it."


def set_up(plan: Plan) -> str:
    """The set-up in a few lines."""
    mapping, lens = plan.scene.mapping, plan.scene.mapping["lens"]
    head, gaze, scope = mapping["head"], mapping["gaze"], mapping["scope"]
    sight = plan.scene.sight
    toward = clock_of(sight[0], sight[1])
    neutral = "none: where it is seen, an undeviated tool never lands true" if plan.neutral_deg is None else \
        f"{plan.neutral_deg:.1f} deg off the axis: there an undeviated tool lands true"
    rows = [
        ("microscope", f"{scope['use']}, leaned {scope['tilt_deg']:g} deg toward the seat at "
                       f"{clock_words(mapping['surgeon']['seat_clock'])}"),
        ("head", f"turned {head['turn_deg']:g} deg to the patient's {head['turn_toward']}, "
                 f"chin {head['chin_up_deg']:g} deg up, gaze {gaze['deg']:g} deg toward {clock_words(gaze['toward_clock'])}"),
        ("lens", "none" if lens == "none" else _lens_line(lens)),
        ("line of sight", f"{from_axis_deg(sight):.1f} deg off the eye's axis"
                          + (f", toward {clock_words(toward)}" if toward is not None else "")),
        ("neutral line", neutral),
    ]
    return pairs(rows)


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
        rows.append([
            plain(sighting.target.structure), "yes" if sighting.seen else "no", words.number(split[1]),
            words.number(split[0]), words.degrees(view.middle.headroom_deg if view else None),
            words.degrees(sighting.graze_deg), words.whole(sighting.blur.rms_um if sighting.blur else None),
            view.middle.by if view and sighting.seen else sighting.cause or NONE])
    head = ["structure", "seen", "anterior", "nearer", "headroom", "graze", "blur", "by / cause"]
    return "each structure of this clock hour: how far it seems displaced in mm, angles in deg, blur in um\n" \
        + column_table(head, rows, WIDTH)


def landing_words(plan: Plan) -> str:
    """Landings and the correction, as a small table."""
    words = Numbers(plan)
    rows = [("down the line of sight", _landing_line(words, plan.along_sight, ways(plan)))]
    if plan.from_entry is not None:
        rows.append(("from the entry to the image", _landing_line(words, plan.from_entry, ways(plan))))
    if plan.aim is not None and not in_a_mirror(plan):
        aim = plan.aim
        rows.append(("correction at the entry", f"{words.degrees(aim.correction_deg)} deg: "
                     f"{_listed(_aim_parts(words, aim))}; "
                     f"{words.mm(aim.correction_mm)} at the target, {words.mm(aim.distance_mm)} away"))
    return "a straight tool\n" + pairs(rows, indent=2)


def _landing_line(words: "Numbers", landing: Landing, both_ways: tuple[str, str]) -> str:
    if landing.structure is None:
        return "never reaches the chamber"
    if landing.anterior_mm is None:
        return f"{plain(landing.structure)}"
    plus, minus = (f"too {way}" if way in ("high", "low") else way for way in both_ways)
    if plus == "too high":
        return f"{words.signed_mm(landing.anterior_mm, plus, minus)}, on {the(landing.structure)}"
    return f"{words.signed_mm(landing.anterior_mm, plus, minus)} of the target, on {the(landing.structure)}"


def gap_words(plan: Plan) -> str:
    """Gap between tip and target as seen against as it is, on the true line."""
    words = Numbers(plan)
    rows = [["gap true mm", *(words.number(row.true_mm) for row in plan.gap_table)],
            ["gap seen mm", *(words.number(row.seen_mm) for row in plan.gap_table)]]
    head = ["way to the target", *(f"{100 * row.share:.0f}%" for row in plan.gap_table)]
    return "tip on the true line, seen through the same optics\n" + column_table(head, rows, WIDTH)


def cutoff_words(plan: Plan) -> str:
    """Cut-offs of the target's own structure, and in short of the bare cornea."""
    rows = [[("the water" if on_the_bench(plan) else "bare cornea") if row.lens == "none" else row.lens, _spans(row),
             row.cut.causes[0][0] if row.cut.causes else row.cut.never or NONE,
             row.cut.causes[-1][1] if row.cut.causes else NONE]
            for row in plan.cutoffs if row.structure == plan.target.structure]
    rows = [[cell or "end of the sweep" for cell in row] for row in rows]
    if not rows:
        return ""
    return "lines of sight that see it, in its meridian, deg off the axis\n" + column_table(
        ["through", "seen", "cause below", "cause above"], rows, WIDTH)


def _spans(row: CutoffRow) -> str:
    spans = ", ".join(f"{low:.1f} to {high:.1f}" for low, high in row.cut.seen_deg) or "never"
    behind = row.cut.seen_deg and row.cut.seen_deg[0][0] > OUT_OF_REACH_DEG
    return f"{spans} (out of reach)" if behind else spans


def ring_words(plan: Plan) -> str:
    """The clock ring as spans of hours."""
    if not plan.ring:
        return ""
    name = plain(plan.scene.eye.ring_structure)
    rows = [(f"{name} seen", _hours([place for place in plan.ring if place.seen])),
            (f"{name} clear", _hours([place for place in plan.ring if place.clear]))]
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
    return f"{(step * STEP_DEG / 30.0) % 12.0 or 12.0:.3g}"


def known_words(plan: Plan) -> str:
    """How much was measured and what was assumed, the weighty ones by name."""
    marks = {path: mark for path, mark in plan.scene.marks.items() if path.startswith(("eye.definition.", "lens."))}
    count = {mark: sum(1 for each in marks.values() if each == mark) for mark in ("measured", "given", "assumed")}
    assumed = [path.removeprefix("eye.definition.") for path in IMPORTANT
               if any(mark == "assumed" and (path == each or each.startswith(path + ".")) for each, mark in marks.items())]
    line = f"eye and lens: {count['measured']} values measured, {count['given']} given, {count['assumed']} assumed"
    return textwrap.fill(line + (f"; assumed that matter most: {', '.join(assumed)}" if assumed else ""), WIDTH)


def ending(plan: Plan) -> str:
    """Caution, version and fingerprint."""
    from .. import __version__

    return f"{textwrap.fill(CAUTION, WIDTH)}\ngoniosim {__version__}, inputs {plan.scene.fingerprint[:12]}"


def on_the_bench(plan: Plan) -> bool:
    """Whether the plan is of a cup of water in place of an eye."""
    return is_cup(plan.scene.mapping["eye"]["definition"])


def ways(plan: Plan) -> tuple[str, str]:
    """Words for both ways along the wall: of the eye, or of the cup."""
    return ("high", "low") if on_the_bench(plan) else ("anterior", "posterior")


def _listed(parts: list[str]) -> str:
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"


class Numbers:
    """Figures with the decimals that the settings ask for."""

    def __init__(self, plan: Plan):
        show = plan.scene.settings["show"]
        self.mm_decimals, self.deg_decimals, self.small = show["decimals_mm"], show["decimals_deg"], show["small_lengths"]

    def number(self, value: float | None) -> str:
        """A length in mm without its unit."""
        return NONE if value is None else f"{value + 0.0:.{self.mm_decimals}f}".replace("-0.00", "0.00")

    def degrees(self, value: float | None) -> str:
        """An angle in degrees without its unit."""
        return NONE if value is None else f"{value:.{self.deg_decimals}f}"

    def whole(self, value: float | None) -> str:
        """A whole number."""
        return NONE if value is None else f"{value:.0f}"

    def mm(self, value: float) -> str:
        """A length with its unit; below a millimetre in micrometres where the settings ask for that."""
        if self.small == "um" and abs(value) < 1.0:
            return f"{1000.0 * value:.0f} um"
        return f"{self.number(value)} mm"

    def signed_mm(self, value: float, plus: str, minus: str) -> str:
        """A length and which way it goes."""
        return f"{self.mm(abs(value))} {plus if value >= 0.0 else minus}"

    def signed_deg(self, value: float, plus: str, minus: str) -> str:
        """An angle and which way it goes."""
        return f"{self.degrees(abs(value))} deg {plus if value >= 0.0 else minus}"
