"""What a lens file must hold beyond single keys: faces by shape, names, mirrors, shared faces."""

from __future__ import annotations

from dataclasses import replace
from typing import Mapping, Sequence

from ..declare import Key
from ..scene.lens_keys import BORROWED_SHAPE, FACE_KEYS, REFLECTING_FINISHES
from .checking import did_you_mean
from .document import Finding
from .paths import Path
from .shapes import BrokenShape, shape_named, shape_names

EYE_BODIES = ("cornea", "sclera", "chamber", "lens", "vitreous", "fluid", "air")
CURVATURES = ("radius_mm", "flat_mm", "steep_mm")
BORROWED_KEYS = ("name", "shape", "side")
BORROWED_FACE_KEYS = tuple(key if key.name in BORROWED_KEYS else replace(key, default=None) for key in FACE_KEYS)
"""Keys of a face that is described elsewhere: known, so that they can be refused with the reason; never filled."""


def face_keys(face: Mapping) -> Sequence[Key]:
    """Keys that a face accepts: the common ones and those of its shape."""
    shape = face.get("shape")
    if shape is None or shape == BORROWED_SHAPE:
        return BORROWED_FACE_KEYS
    try:
        known = shape_named(shape) if isinstance(shape, str) else None
    except BrokenShape:
        known = None  # told by lens_findings
    return (*FACE_KEYS, *(known.keys if known else ()))


def lens_findings(lens: Mapping, path: Path) -> list[Finding]:
    """Every fault between the keys of a lens."""
    bodies = [(path + ("bodies", number), body) for number, body in enumerate(lens.get("bodies") or [])]
    faces = [(at + ("faces", number), body, face) for at, body in bodies
             for number, face in enumerate(body.get("faces") or [])]
    findings = _body_findings(bodies) + _shared_findings(faces)
    for at, _, face in faces:
        findings += _face_findings(face, at)
    if faces and not _has_contact([face for _, _, face in faces]):
        findings.append(Finding(path + ("bodies",), "no face touches the eye: name one contact, or give the face at "
                                                    "vertex_mm [0, 0, 0] side: ahead"))
    return findings


def _has_contact(faces: list[Mapping]) -> bool:
    described = [face for face in faces if face.get("shape")]
    return any(face.get("name") == "contact" or face["shape"] == BORROWED_SHAPE
               or (face.get("side") == "ahead" and not any(face.get("vertex_mm") or ())) for face in described)


def _body_findings(bodies: list) -> list[Finding]:
    findings, seen = [], set()
    for at, body in bodies:
        name = body.get("name")
        if name in EYE_BODIES:
            findings.append(Finding(at + ("name",), f"'{name}' is the name of a body of the eye; choose another"))
        elif name in seen:
            findings.append(Finding(at + ("name",), f"another body is named '{name}'; every body needs its own name"))
        seen.add(name)
    return findings


def _shared_findings(faces: list) -> list[Finding]:
    """Names of faces: once in a body, described in exactly one body of the lens."""
    described: dict = {}
    findings, in_body = [], set()
    for at, body, face in faces:
        name = face.get("name")
        if (at[:-2], name) in in_body:
            findings.append(Finding(at + ("name",), f"another face of this body is named '{name}'"))
        elif face.get("shape") and name in described:
            findings.append(Finding(at + ("name",), f"face '{name}' is described twice, also in body "
                                                    f"'{described[name]}'; here give only name and side"))
        in_body.add((at[:-2], name))
        if face.get("shape"):
            described.setdefault(name, body.get("name"))
    for at, _, face in faces:
        name = face.get("name")
        if name and "shape" not in face and name not in described:
            near = did_you_mean(name, list(described))
            findings.append(Finding(at + ("shape",), f"face '{name}' has no shape, and no other body describes it; "
                                                     f"add a shape{'. ' + near if near else ''}"))
    return findings


def _face_findings(face: Mapping, at: Path) -> list[Finding]:
    shape = face.get("shape")
    if shape is None or shape == BORROWED_SHAPE:
        why = "a face without a shape is the neighbour's" if shape is None else "this face is the eye's own front"
        allowed = BORROWED_KEYS
        return [Finding(at + (name,), f"must be left out: {why}; give only name and side", at_key=True)
                for name in face if name not in allowed]
    unknown = _unknown_shape(shape)
    if unknown:
        return [Finding(at + ("shape",), unknown)]
    findings = [Finding(at + (name,), "must not be 0") for name in CURVATURES if face.get(name) == 0.0]
    return findings + _plane_findings(face, at) + _finish_findings(face, at) + _profile_findings(face, at)


def _unknown_shape(shape: str) -> str:
    """Why a shape cannot be used; empty where it can."""
    try:
        if shape_named(shape) is not None:
            return ""
    except BrokenShape as error:
        return str(error)
    names = [*shape_names(), BORROWED_SHAPE]
    return f"no shape named '{shape}'. Installed: {', '.join(names)}. {did_you_mean(shape, names)}".rstrip()


def _plane_findings(face: Mapping, at: Path) -> list[Finding]:
    findings = []
    plane_only = [name for name in ("mirror_angle_deg", "level") if name in face]
    if face["shape"] != "plane":
        return [Finding(at + (name,), f"is for planes; this face is a {face['shape']}", at_key=True)
                for name in plane_only]
    if "mirror_angle_deg" in face and "lean_deg" in face:
        findings.append(Finding(at + ("mirror_angle_deg",), "is given beside lean_deg; give one of the two "
                                                            "(lean = 180 - mirror angle)", at_key=True))
    if face.get("level"):
        findings += [Finding(at + (name,), "must be left out: a level face follows the room", at_key=True)
                     for name in ("lean_deg", "lean_toward_clock", "mirror_angle_deg") if name in face]
    return findings


def _finish_findings(face: Mapping, at: Path) -> list[Finding]:
    finish = face.get("finish", "clear")
    findings = []
    if finish in REFLECTING_FINISHES and "reflectance" not in face:
        findings.append(Finding(at + ("reflectance",), f"is missing: a {finish} face needs its reflectance, "
                                                       "from 0 to 1"))
    if finish not in REFLECTING_FINISHES and "reflectance" in face:
        findings.append(Finding(at + ("reflectance",), f"is for mirror and coated faces; this face is {finish}",
                                at_key=True))
    if "works_by" in face and finish != "clear":
        findings.append(Finding(at + ("works_by",), f"is for clear faces; this face is {finish}", at_key=True))
    return findings


def _profile_findings(face: Mapping, at: Path) -> list[Finding]:
    """Faults of a surface of revolution given by points."""
    r, z = face.get("r_mm"), face.get("z_mm")
    if r is None or z is None:
        return []
    findings = []
    if len(r) != len(z):
        findings.append(Finding(at + ("z_mm",), f"must have as many numbers as r_mm; got {len(z)} for {len(r)}"))
    if len(r) < 3 or r[0] != 0.0 or any(b <= a for a, b in zip(r, r[1:])):
        findings.append(Finding(at + ("r_mm",), "must hold at least 3 radii, the first 0, each greater than the last"))
    return findings
