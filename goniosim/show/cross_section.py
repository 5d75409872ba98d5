"""The cross-section: eye, lens, light, true and apparent place, in the meridian of the target, as SVG."""

from __future__ import annotations

import textwrap

import numpy as np

from ..cautions import CAUTION
from ..frames import clock_of
from ..planning.record import Plan
from ..planning.words import clock_words, in_a_mirror, on_the_bench, plain, quadrant, sentence, the
from .outline import Meridian, body_outline
from .palette import BANDS, BLACK, BLUE, GREY, MIDDLE, ORANGE, PALE, SKY_BLUE, VERMILION
from .svg import Drawing

SCALE = 26.0  # page units per mm
MARGINS = (60.0, 146.0, 250.0, 96.0)
LABEL_MM = 6.5  # room for a label beside the light
TEXT, SMALL = 15.0, 12.5


def cross_section(plan: Plan) -> str:
    """The cross-section of a plan as SVG text; the same plan gives the same bytes."""
    plane = Meridian.of(plan.target.clock or 3.0)
    outlines = _lens_outlines(plan, plane)
    drawing = _sheet(plan, plane, outlines)
    if not on_the_bench(plan):
        _eye(drawing, plan, plane)
    else:
        _cup(drawing, plan)
    _lens(drawing, plan, plane, outlines)
    _lines(drawing, plan, plane)
    _frame(drawing, plan, plane)
    _legend(drawing, plan)
    return drawing.written(f"Cross-section: {sentence(plan)}")


def _lens_outlines(plan: Plan, plane: Meridian) -> list[tuple]:
    """Bodies of the lens with their outlines in the plane."""
    eye = set(body.name for body in plan.scene.eye.bodies)
    faces = {face.name: face for face in plan.scene.compiled.faces}
    rows = []
    for body in plan.scene.compiled.bodies[len(eye):]:
        if body.name != "fluid":
            outline = body_outline(body, faces, plane)
            if outline is not None:
                rows.append((body, outline))
    return rows


def _sheet(plan: Plan, plane: Meridian, outlines: list[tuple]) -> Drawing:
    """A drawing wide enough for eye, lens, light and image."""
    points = [_reach(plan)]
    points += [outline for _, outline in outlines]
    points.append(plane.flat(plan.target.point_mm))
    view = plan.sighting.view
    if view is not None:
        points.append(plane.flat([view.apparent_mm, view.middle.last_point_mm + beyond_mm(plan) * view.middle.outward]))
    if plan.entry_mm is not None:
        points.append(plane.flat(plan.entry_mm))
    gathered = np.concatenate(points)
    return Drawing(gathered.min(axis=0) - 0.8, gathered.max(axis=0) + 1.0, _scale(plan), MARGINS)


def beyond_mm(plan: Plan) -> float:
    """How far the light is drawn beyond the last face."""
    return 3.5 if not on_the_bench(plan) else 20.0


def _scale(plan: Plan) -> float:
    return SCALE if not on_the_bench(plan) else 7.0


def _reach(plan: Plan) -> np.ndarray:
    """Corners of the eye, or of the cup, (2, 2) mm."""
    if not on_the_bench(plan):
        return np.array([[-8.2, -5.3], [8.2, 1.0]])
    cup = plan.scene.mapping["eye"]["definition"]["cup"]
    r, low = cup["inside_radius_mm"] + 3.0, -cup["water_above_mark_mm"] - cup["water_below_mark_mm"] - 3.0
    return np.array([[-r, low], [r, cup["wall_above_water_mm"] + 20.0]])


def _eye(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """Cornea, sclera, angle bands, iris and lens in the plane."""
    eye = plan.scene.eye
    front, back = eye.faces["cornea-front"], eye.faces["cornea-back"]
    anatomy = eye.anatomy
    hours = [clock_of(*(sign * plane.across[:2])) for sign in (1.0, -1.0)]
    u = np.linspace(-8.0, 8.0, 401)
    outside = np.stack([u, front.shape.sag(u * plane.across[0], u * plane.across[1])], axis=-1)
    r = anatomy.spur_r_mm
    v = np.linspace(-r, r, 301)
    inside = np.stack([v, back.origin_mm[2] + back.shape.sag(v * plane.across[0], v * plane.across[1])], axis=-1)
    limbus = np.abs(u) <= anatomy.limbus_radius_mm
    drawing.line([*outside[limbus], *inside[::-1]], "none", 0, fill=SKY_BLUE, closed=True, opacity=0.16)
    drawing.line(outside[u <= -anatomy.limbus_radius_mm], GREY, 3.0)
    drawing.line(outside[u >= anatomy.limbus_radius_mm], GREY, 3.0)
    drawing.line(outside[limbus], BLACK, 1.6)
    drawing.line(inside, BLACK, 1.4)
    _crystalline_lens(drawing, plan, plane)
    for hour in hours:
        _iris(drawing, plan, plane, hour)
        _bands(drawing, plan, plane, hour)


def _crystalline_lens(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """The natural or artificial lens, where there is one."""
    faces = plan.scene.eye.faces
    if "lens-front" not in faces:
        return
    face = faces["lens-front"]
    edge = min(4.6, 0.999 * face.shape.equator_mm())
    if "lens-equator" in faces:
        edge = min(edge, faces["lens-equator"].shape.radius_mm)
    u = np.linspace(-edge, edge, 121)
    flat = np.stack([u * plane.across[0], u * plane.across[1], np.zeros_like(u)], axis=-1)
    z = face.origin_mm[2] - face.shape.side_value(flat)
    drawing.line(np.stack([u, z], axis=-1), GREY, 1.4)
    drawing.label((0.0, z.max()), "lens", SMALL, dy=16.0, anchor="middle", fill=GREY)


def _iris(drawing: Drawing, plan: Plan, plane: Meridian, hour: float) -> None:
    """Iris and ciliary face on one side."""
    anatomy = plan.scene.eye.anatomy
    lining = anatomy.lining(hour)
    arcs = np.linspace(lining.margin_mm + 1e-6, lining.root_mm - 1e-6, 60)
    front = plane.flat([anatomy.wall_point(arc, hour) for arc in arcs])
    back = plan.scene.eye.faces["iris-back"].shape.lower().pieces
    r = np.abs(front[:, 0])
    at = np.clip(np.searchsorted(back[:, 0], r, side="right") - 1, 0, len(back) - 1)
    w = r - back[at, 0]
    z = back[at, 2] + w * (back[at, 3] + w * (back[at, 4] + w * back[at, 5])) + plan.scene.eye.faces["iris-back"].origin_mm[2]
    under = np.stack([front[:, 0], z], axis=-1)
    drawing.line([*front, *under[::-1]], BLACK, 1.2, fill=MIDDLE, closed=True)
    face = [anatomy.wall_point(arc, hour) for arc in np.linspace(lining.root_mm + 1e-9, 0.0, 20)]
    drawing.line(plane.flat(face), BLACK, 1.4)


def _bands(drawing: Drawing, plan: Plan, plane: Meridian, hour: float) -> None:
    """Angle bands on the wall of one side."""
    anatomy = plan.scene.eye.anatomy
    for name in plan.scene.eye.structures:
        if name == "iris-root":
            continue
        low, high = anatomy.band(name, hour)
        points = plane.flat([anatomy.wall_point(arc, hour) for arc in np.linspace(low, high, 12)])
        drawing.line(points, BANDS[name], 5.0)


def _cup(drawing: Drawing, plan: Plan) -> None:
    """Water, wall, floor and mark of a cup."""
    cup = plan.scene.mapping["eye"]["definition"]["cup"]
    r, low, high = cup["inside_radius_mm"], -cup["water_above_mark_mm"] - cup["water_below_mark_mm"], cup["wall_above_water_mm"]
    drawing.line([(-r, 0), (-r, low), (r, low), (r, 0)], "none", 0, fill=SKY_BLUE, closed=True, opacity=0.2)
    drawing.line([(-r, 0), (r, 0)], BLUE, 1.6)
    drawing.line([(-r, high), (-r, low), (r, low), (r, high)], BLACK, 4.0)


def _lens(drawing: Drawing, plan: Plan, plane: Meridian, outlines: list[tuple]) -> None:
    """Lens bodies, lightly filled; mirrors and blocking rims heavier."""
    faces = {face.name: face for face in plan.scene.compiled.faces}
    for body, outline in outlines:
        drawing.line(outline, BLACK, 1.4, fill=PALE, closed=True, opacity=0.55)
        for name, _ in body.sides:
            face = faces[name]
            if face.finish == "mirror" or face.works_by:
                solid = plane.solid(outline[:, 0], outline[:, 1])
                on = np.abs(face.side_value(solid)) < 0.02
                if on.sum() > 1:
                    drawing.line(outline[on], BLACK, 4.0)


def _lines(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """Light, the undeviated line, the tool's lines, true and apparent points."""
    target = plane.flat(plan.target.point_mm)[0]
    view = plan.sighting.view
    if view is not None:
        path = view.middle
        end = path.last_point_mm + beyond_mm(plan) * path.outward
        light = plane.flat([plan.target.point_mm, *path.points_mm, end])
        _undeviated(drawing, plan, plane)
        if shows_tool(plan):
            _tool(drawing, plan, plane)
        drawing.line(light, ORANGE, 2.6, ident="light")
        drawing.arrow(light[-1], light[-1] - light[-2], ORANGE, 13.0)
        # Beside the tip, on the side that has room: the legend stands at the right.
        beside = light[-1][0] < drawing.high[0] - LABEL_MM
        drawing.label(light[-1], "to the phone" if on_the_bench(plan) else "to the microscope", TEXT,
                      dx=12.0 if beside else -12.0, dy=-10.0, anchor="start" if beside else "end")
        image = plane.flat(view.apparent_mm)[0]
        drawing.line([target, image], GREY, 1.2, dash="2 4")
        drawing.dot(image, 7.0, VERMILION, "#ffffff", 2.6, ident="apparent")
    drawing.dot(target, 5.0, BLACK, VERMILION, 1.4, ident="true")


def shows_tool(plan: Plan) -> bool:
    """Whether lines from the entry say something: not where the picture is reversed."""
    return plan.aim is not None and not in_a_mirror(plan)


def _undeviated(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """The line of sight produced straight on, to where it lands or to the image."""
    path = plan.sighting.view.middle
    landed = plan.along_sight.point_mm
    end = landed if landed is not None else plan.sighting.view.apparent_mm
    drawing.line(plane.flat([path.last_point_mm, end]), BLACK, 1.5, dash="9 5", ident="undeviated")
    if landed is not None:
        x, y = drawing.at(plane.flat(landed)[0])
        for sign in (1.0, -1.0):
            drawing.parts.append(f'<line x1="{x - 5:.2f}" y1="{y - 5 * sign:.2f}" x2="{x + 5:.2f}" y2="{y + 5 * sign:.2f}" '
                                 f'stroke="{BLACK}" stroke-width="2"/>')


def _tool(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """The straight tool from the entry: toward the image, and corrected toward the target."""
    entry, target, image = (plane.flat(point)[0] for point in
                            (plan.entry_mm, plan.target.point_mm, plan.sighting.view.apparent_mm))
    drawing.line([entry, image], BLUE, 1.5, dash="3 4", ident="aimed-at-image")
    drawing.line([entry, target], BLUE, 2.2, ident="corrected")
    drawing.dot(entry, 4.0, BLUE, "#ffffff", 2.0)
    outward = -1.0 if entry[0] < 0.0 else 1.0
    drawing.label(entry, "entry", SMALL, dx=8.0 * outward, dy=14.0, anchor="end" if outward < 0 else "start", fill=BLUE)


def _frame(drawing: Drawing, plan: Plan, plane: Meridian) -> None:
    """Title, side of the eye, the answer, clock hours, scale and caution."""
    side = plan.scene.mapping["eye"]["side"]
    on_bench = on_the_bench(plan)
    width = drawing.width
    drawing.text(24, 40, "BENCH" if on_bench else f"{side.upper()} EYE", 27, weight="bold")
    clock = plan.target.clock or 3.0
    drawing.text(24 + (108 if on_bench else 168), 40, f"meridian of {clock_words(clock)}, {plain(plan.target.structure)}"
                 f", seen facing the patient" if not on_bench else "a cup of water from the side", TEXT)
    for i, line in enumerate(textwrap.wrap(sentence(plan), int(width / 8.6), break_on_hyphens=False)):
        drawing.text(24, 64 + 18 * i, line, TEXT)
    foot = drawing.height - MARGINS[3]
    for sign, x, anchor in ((-1.0, 24.0, "start"), (1.0, width - MARGINS[2] + 20.0, "end")):
        hour = clock_of(*(sign * plane.across[:2])) or 3.0
        name = "" if on_bench else f"{quadrant(hour, side)}, "
        drawing.text(x, foot + 22, f"{name}{clock_words(hour)}", TEXT, anchor, "bold")
    middle = MARGINS[0] + 0.5 * (width - MARGINS[0] - MARGINS[2])
    length = 5.0 if not on_bench else 20.0
    x0, x1, y = middle - 0.5 * length * drawing.scale, middle + 0.5 * length * drawing.scale, foot + 16
    drawing.parts.append(f'<path d="M{x0:.2f},{y - 5:.2f} v10 m0,-5 H{x1:.2f} m0,-5 v10" stroke="{BLACK}" fill="none" '
                         'stroke-width="1.6"/>')
    drawing.text(middle, foot + 34, f"{length:g} mm", SMALL, "middle")
    for i, line in enumerate(textwrap.wrap(f"{CAUTION} Inputs {plan.scene.fingerprint[:12]}.", int(width / 7.4))):
        drawing.text(24, foot + 58 + 16 * i, line, SMALL, fill=GREY)


def _legend(drawing: Drawing, plan: Plan) -> None:
    """What the lines and marks are, at the right."""
    x, y = drawing.width - MARGINS[2] + 34.0, MARGINS[1] + 20.0
    rows = [("dot", VERMILION, "true place")]
    if plan.sighting.view is not None:
        rows += [("ring", VERMILION, "apparent place"), ("line", ORANGE, "light, as it runs"),
                 ("dash", BLACK, "line of sight, undeviated")]
        if plan.along_sight.structure is not None:
            rows.append(("cross", BLACK, f"lands on {the(plan.along_sight.structure)}"))
        if shows_tool(plan):
            rows += [("thin", BLUE, "tool aimed at the image"), ("line", BLUE, f"corrected by {plan.aim.correction_deg:.1f} deg")]
    rows += [("band", BANDS[name], plain(name)) for name in plan.scene.eye.structures if name != "iris-root"]
    for kind, colour, words in rows:
        _key(drawing, x, y, kind, colour)
        drawing.text(x + 40, y + 4.5, words, SMALL + 0.5)
        y += 24.0


def _key(drawing: Drawing, x: float, y: float, kind: str, colour: str) -> None:
    """One sign of the legend."""
    dash = {"dash": "9 5", "thin": "3 4"}.get(kind, "")
    width = {"band": 6.0, "line": 2.6}.get(kind, 1.6)
    if kind in ("dot", "ring"):
        fill, ring = (colour, BLACK) if kind == "dot" else ("#ffffff", colour)
        drawing.parts.append(f'<circle cx="{x + 16:.2f}" cy="{y:.2f}" r="6" fill="{fill}" stroke="{ring}" stroke-width="2"/>')
    elif kind == "cross":
        drawing.parts.append(f'<path d="M{x + 11:.2f},{y - 5:.2f} l10,10 m0,-10 l-10,10" stroke="{colour}" stroke-width="2"/>')
    else:
        more = f' stroke-dasharray="{dash}"' if dash else ""
        drawing.parts.append(f'<path d="M{x:.2f},{y:.2f} h32" stroke="{colour}" stroke-width="{width:g}"{more}/>')
