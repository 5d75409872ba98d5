"""A plan's folder is written whole or not at all, and nothing that a plan did not write is touched."""

from __future__ import annotations

import os

import pytest

from goniosim.cli.folder import write_plan_folder
from goniosim.errors import Misuse

PLAN = {"plan.json": '{"goniosim": "plan"}\n', "cross-section.svg": "<svg/>"}


def test_a_folder_is_written_and_renewed_as_a_whole(tmp_path):
    write_plan_folder(tmp_path / "case", PLAN)
    assert sorted(os.listdir(tmp_path / "case")) == ["cross-section.svg", "plan.json"]
    write_plan_folder(tmp_path / "case", {"plan.json": '{"goniosim": "plan", "n": 2}\n'})
    assert os.listdir(tmp_path / "case") == ["plan.json"]
    assert '"n": 2' in (tmp_path / "case" / "plan.json").read_text()
    assert os.listdir(tmp_path) == ["case"], "no temporary folder is left behind"


def test_parents_are_made(tmp_path):
    write_plan_folder(tmp_path / "a" / "b", PLAN)
    assert (tmp_path / "a" / "b" / "plan.json").exists()


def test_a_folder_with_a_file_of_the_users_is_left_alone_and_named(tmp_path):
    write_plan_folder(tmp_path / "case", PLAN)
    (tmp_path / "case" / "my-notes.txt").write_text("mine")
    with pytest.raises(Misuse) as caught:
        write_plan_folder(tmp_path / "case", PLAN)
    assert str(caught.value) == (
        "the folder case holds my-notes.txt, which no plan wrote; it is left alone; "
        "choose another folder with --into DIR"
    )
    assert (tmp_path / "case" / "my-notes.txt").read_text() == "mine"


def test_a_plan_json_of_something_else_is_left_alone(tmp_path):
    (tmp_path / "case").mkdir()
    (tmp_path / "case" / "plan.json").write_text('{"floors": 3}')
    with pytest.raises(Misuse, match="was not written by a plan"):
        write_plan_folder(tmp_path / "case", PLAN)
    assert (tmp_path / "case" / "plan.json").read_text() == '{"floors": 3}'


def test_a_file_or_a_link_in_the_way_is_left_alone(tmp_path):
    (tmp_path / "case").write_text("a file")
    with pytest.raises(Misuse, match="case is in the way and is not a folder"):
        write_plan_folder(tmp_path / "case", PLAN)
    (tmp_path / "link").symlink_to(tmp_path / "nowhere")
    with pytest.raises(Misuse, match="link is in the way and is not a folder"):
        write_plan_folder(tmp_path / "link", PLAN)
    assert (tmp_path / "case").read_text() == "a file"


def test_a_place_that_cannot_be_written_is_named_and_nothing_is_left(tmp_path):
    (tmp_path / "file").write_text("")
    with pytest.raises(
        Misuse, match="the folder case cannot be written in .*file: .*; choose another with --into DIR"
    ):
        write_plan_folder(tmp_path / "file" / "case", PLAN)
    assert os.listdir(tmp_path) == ["file"]


@pytest.mark.parametrize("at", ["write", "swap"])
def test_an_interruption_leaves_the_old_plan_whole(tmp_path, monkeypatch, at):
    write_plan_folder(tmp_path / "case", PLAN)

    def interrupted(*_, **__):
        raise KeyboardInterrupt

    if at == "write":
        monkeypatch.setattr("pathlib.Path.write_text", interrupted)
    else:
        monkeypatch.setattr("goniosim.cli.folder._swap", interrupted)
    with pytest.raises(KeyboardInterrupt):
        write_plan_folder(tmp_path / "case", {"plan.json": "new"})
    monkeypatch.undo()
    assert os.listdir(tmp_path) == ["case"]
    assert (tmp_path / "case" / "plan.json").read_text() == PLAN["plan.json"]


def test_ctrl_c_between_the_two_renames_puts_the_old_plan_back(tmp_path, monkeypatch):
    write_plan_folder(tmp_path / "case", PLAN)
    renames = []

    def rename(source, goal, real=os.rename):
        renames.append(goal)
        if len(renames) == 2:
            raise KeyboardInterrupt
        real(source, goal)

    monkeypatch.setattr("os.rename", rename)
    with pytest.raises(KeyboardInterrupt):
        write_plan_folder(tmp_path / "case", {"plan.json": "new"})
    monkeypatch.undo()
    assert os.listdir(tmp_path) == ["case"] and len(renames) == 3
    assert (tmp_path / "case" / "plan.json").read_text() == PLAN["plan.json"]


def test_a_folder_that_cannot_be_read_is_named(tmp_path, monkeypatch):
    def refused(_):
        raise PermissionError(13, "Permission denied")

    (tmp_path / "case").mkdir()
    monkeypatch.setattr("os.listdir", refused)
    with pytest.raises(Misuse, match="the folder case cannot be read: Permission denied"):
        write_plan_folder(tmp_path / "case", PLAN)
