"""The plan in words: one plain answer, and the words and figures that tables and drawings share with it."""

from __future__ import annotations

import numpy as np

from ..eye.measurements import is_cup
from ..frames import from_axis_deg, nasal_clock
from .aim import Aim
from .record import Plan

NONE = "-"


def sentence(plan: Plan) -> str:
    """The answer, in plain words, most important first."""
    words = Numbers(plan)
    name = target_name(plan)
    if not plan.sighting.seen:
        return (
            f"Not seen: {name}, {lens_words(plan)}. Cause: {plan.sighting.cause}. {what_next(plan)}".strip()
        )
    opening = f"Seen: {name}, {lens_words(plan)}{by_words(plan)}."
    if in_a_mirror(plan):
        away = float(np.linalg.norm(plan.sighting.view.apparent_mm - plan.target.point_mm))
        return (
            f"{opening} Its image seems to lie {words.mm(away)} from it; steer by the tip "
            "as seen in the mirror, not by the image's place: the picture is reversed."
        )
    return " ".join(
        part
        for part in (opening, f"{seems_words(plan)}; {landing_sentence(plan)}.", aim_sentence(plan))
        if part
    )


def seems_words(plan: Plan) -> str:
    """'It seems 3.94 mm nearer and 0.34 mm more anterior than it is'."""
    words = Numbers(plan)
    if on_the_bench(plan):
        up = float((plan.sighting.view.apparent_mm - plan.target.point_mm)[2])
        return f"It seems {words.signed_mm(up, 'higher', 'lower')} than it is"
    nearer, anterior, clockwise = plan.sighting.split
    shifts = [words.signed_mm(nearer, "nearer", "farther away")]
    if anterior is not None:
        shifts.append(words.signed_mm(anterior, "more anterior", "more posterior"))
    if clockwise is not None and abs(clockwise) >= 0.05:
        shifts.append(words.signed_mm(clockwise, "clockwise", "anticlockwise"))
    return f"It seems {listed(shifts)} than it is"


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
    return (
        f"{start} lands {Numbers(plan).signed_mm(landed.anterior_mm, f'too {plus}', f'too {minus}')}, "
        f"on {the(landed.structure)}"
    )


def aim_sentence(plan: Plan) -> str:
    """How far to correct the aim from the entry."""
    aim, words = plan.aim, Numbers(plan)
    if aim is None:
        return ""
    entry = plan.scene.mapping["tool"]["entry"]["clock"]
    return (
        f"From the entry at {clock_words(entry)}, aim {listed(aim_parts(words, aim))} of where it seems "
        f"({words.mm(aim.correction_mm)} at the target)."
    )


def aim_parts(words: Numbers, aim: Aim) -> list[str]:
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
        return (
            "Light from the angle does not get out through a bare cornea: "
            "put a goniolens or a saline pool on."
        )
    row = next((row for row in plan.cutoffs if row.structure == plan.target.structure), None)
    if row is None or not row.cut.seen_deg:
        return (
            "This lens shows it from no line of sight in its meridian: try another lens, or turn the lens's "
            "mark."
        )
    spans = listed([f"{low:.0f} to {high:.0f} deg" for low, high in row.cut.seen_deg])
    return (
        f"In the target's meridian this lens shows it from {spans} off the axis; "
        f"the line of sight lies {from_axis_deg(plan.scene.sight):.0f} deg off it."
    )


def on_the_bench(plan: Plan) -> bool:
    """Whether the plan is of a cup of water in place of an eye."""
    return is_cup(plan.scene.mapping["eye"]["definition"])


def ways(plan: Plan) -> tuple[str, str]:
    """Words for both ways along the wall: of the eye, or of the cup."""
    return ("high", "low") if on_the_bench(plan) else ("anterior", "posterior")


def listed(parts: list[str]) -> str:
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"


class Numbers:
    """Figures with the decimals that the settings ask for."""

    def __init__(self, plan: Plan):
        show = plan.scene.settings["show"]
        self.mm_decimals, self.deg_decimals, self.small = (
            show["decimals_mm"],
            show["decimals_deg"],
            show["small_lengths"],
        )

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
