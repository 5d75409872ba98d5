"""Helpers for tests of files: write a text, read it, give the whole report."""

from __future__ import annotations

import pytest

from goniosim.catalogue.search import load_file
from goniosim.errors import BadInput

FLAT_LENS = """goniosim: lens
schema: 1
name: demo
title: Demo
source: made for this test
bodies:
  - name: optic
    medium: pmma
    faces:
      - {name: contact, shape: sphere, radius_mm: 8.4, side: ahead}
      - {name: front, shape: plane, vertex_mm: [0, 0, 5.0], lean_deg: 48, lean_toward_clock: 12, side: behind}
      - {name: rim, shape: cylinder, radius_mm: 6.0, side: behind, finish: ground}
"""


@pytest.fixture
def report(tmp_path, monkeypatch):
    """report(text, kind='lens') -> the whole report of a bad file demo.yaml; fails where the file is good."""
    monkeypatch.chdir(tmp_path)

    def made(text: str | bytes, kind: str = "lens") -> str:
        path = tmp_path / "demo.yaml"
        path.write_bytes(text if isinstance(text, bytes) else text.encode())
        with pytest.raises(BadInput) as caught:
            load_file(kind, path)
        return str(caught.value)

    return made


@pytest.fixture
def flat_lens() -> str:
    """A good lens file."""
    return FLAT_LENS
