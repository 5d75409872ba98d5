"""The loader meets arbitrary text and arbitrarily damaged files: it answers BadInput or succeeds, nothing else."""

from __future__ import annotations

import random

from hypothesis import HealthCheck, given, settings, strategies as st

from goniosim.catalogue.document import Document
from goniosim.catalogue.kinds import KINDS
from goniosim.catalogue.reading import read_text
from goniosim.catalogue.search import checked_document
from goniosim.errors import BadInput
from goniosim.shipped import shipped_folder

QUICK = settings(max_examples=300, deadline=None, database=None, suppress_health_check=[HealthCheck.too_slow])

SAMPLES = [path.read_text(encoding="utf-8")
           for folder in (shipped_folder("plugins") / "lenses", shipped_folder("scenes"))
           for path in sorted(folder.glob("*.yaml"))[:6]]

WORDS = ["&a ", "*a", "<<: ", "!!float ", "- ", "? ", "{", "}", "[", "]", "\t", "\n", "---\n", ": ", "1e999", ".nan",
         "null", "goniosim: scene\n", "\x00", "\u2028", "\U0001f600",
         "bodies", "shape: cornea", "-1", "'", '"', "#", "%TAG ! x\n", "@", "\\", "0x", "definition: {}"]

VALUES = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=8)
    | st.sampled_from(["none", "target", "plane", "cornea", "lens", "direct-face-48"]),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(
        st.sampled_from(["goniosim", "schema", "name", "eye", "lens", "scope", "use", "bodies", "faces", "shape",
                         "definition", "target", "media", "marks", "notes", "focus_on", "point_mm", "measured",
                         "settings", "r_mm", "z_mm", "vertex_mm", "finish", "radius_mm", "model", "tool", "entry"])
        | st.text(max_size=5), inner, max_size=6),
    max_leaves=25)


def survives(kind: str, text: str) -> None:
    try:
        checked_document(kind, read_text(text, "fuzz.yaml"))
    except BadInput as error:
        assert error.faults and "problem" in str(error)


@QUICK
@given(st.text(max_size=300))
def test_arbitrary_text(text):
    survives("lens", text)


@QUICK
@given(st.integers(0, 10**9), st.integers(1, 6))
def test_damaged_files(seed, cuts):
    chance = random.Random(seed)
    text = chance.choice(SAMPLES)
    for _ in range(cuts):
        at, to = sorted((chance.randrange(len(text)), chance.randrange(len(text))))
        to = min(to, at + chance.randrange(30))
        text = text[:at] + chance.choice(["", *WORDS, text[at:to] * 2]) + text[to:]
    survives("scene" if "goniosim: scene" in text else "lens", text)


@QUICK
@given(st.sampled_from([kind for kind in KINDS]), VALUES)
def test_arbitrary_values(kind, value):
    inner = value if isinstance(value, dict) else {"target": value, "bodies": value, "lens": value}
    whole = {**inner, "goniosim": kind, "schema": 1, "name": "fuzz"}
    try:
        checked_document(kind, Document("fuzz", whole))
    except BadInput as error:
        assert error.faults
