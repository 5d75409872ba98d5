"""Plans of all shipped scenes, made once."""

from __future__ import annotations

import pytest

import goniosim

class Plans(dict):
    """Plans by scene name, made when first asked for."""

    def __missing__(self, name: str):
        self[name] = goniosim.plan(goniosim.load_scene(name))
        return self[name]


@pytest.fixture(scope="session")
def plans() -> Plans:
    return Plans()
