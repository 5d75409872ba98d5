"""`goniosim begin`: the starter scene loads, and follows from the side of the eye."""

from __future__ import annotations

import pytest

import goniosim
from goniosim.cli.main import run


@pytest.mark.parametrize(
    "side, seat, turn, target", [("right", 9.0, "left", 3.0), ("left", 3.0, "right", 9.0)]
)
def test_a_starter_scene_loads_and_sees(tmp_path, monkeypatch, side, seat, turn, target):
    monkeypatch.chdir(tmp_path)
    assert run(["begin", "my case.yaml", "--side", side]) == 0
    scene = goniosim.load_scene("my case.yaml")
    mapping = scene.mapping
    assert mapping["name"] == "my-case" and mapping["surgeon"]["seat_clock"] == seat
    assert mapping["head"]["turn_toward"] == turn and mapping["target"]["clock"] == target
    assert goniosim.plan(scene).sighting.seen


def test_a_pool_and_no_lens_need_no_fluid(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert run(["begin", "pool", "--lens", "saline-pool", "--tilt", "25", "--turn", "30"]) == 0
    assert goniosim.load_scene("pool.yaml").mapping["lens"]["fluid"] is None
    assert run(["begin", "bare", "--lens", "none"]) == 0
    assert goniosim.load_scene("bare.yaml").mapping["lens"] == "none"


def test_a_file_that_is_there_is_kept_and_a_wrong_name_writes_nothing(tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "case.yaml").write_text("mine")
    assert run(["begin", "case.yaml"]) == 2
    assert (
        capsys.readouterr().err
        == "case.yaml is there already; give another name, or --replace to write over it\n"
    )
    assert run(["begin", "new.yaml", "--lens", "no-such"]) == 3
    assert capsys.readouterr().err.startswith("new.yaml has 1 problem\n")
    assert [path.name for path in tmp_path.iterdir()] == ["case.yaml"]
    assert (tmp_path / "case.yaml").read_text() == "mine"


def test_every_value_has_a_comment_with_its_range(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert run(["begin", "case"]) == 0
    text = (tmp_path / "case.yaml").read_text()
    assert "# lean of the oculars toward the surgeon, from 0 to 90 deg" in text
    plain = [
        line
        for line in text.splitlines()
        if line.strip() and not line.lstrip().startswith("#") and not line.endswith(":")
    ]
    bare = [line for line in plain if " # " not in line]
    assert bare == ["goniosim: scene", "schema: 1", "title: Right eye"]
    assert max(map(len, text.splitlines())) <= 130


@pytest.mark.parametrize("file, name", [("Été 3.yaml", "t-3"), ("_.yaml", "case"), ("OD-2.yaml", "od-2")])
def test_any_file_name_gives_a_name_that_the_plan_takes(tmp_path, monkeypatch, file, name):
    monkeypatch.chdir(tmp_path)
    assert run(["begin", file]) == 0
    assert goniosim.load_scene(file).mapping["name"] == name
