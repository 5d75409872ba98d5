"""`goniosim plan` as a user meets it: sentence, tables, folder, JSON, exit codes, bad input."""

from __future__ import annotations

import json
import os
import subprocess
import sys

import pytest

import goniosim
from goniosim.cautions import CAUTION
from goniosim.cli.main import run
from goniosim.shipped import shipped_folder

SCENE = "right-eye-temporal"


@pytest.fixture()
def in_empty_folder(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    return tmp_path


def test_a_shipped_scene_gives_a_sentence_tables_and_a_folder(in_empty_folder, capsys):
    assert run(["plan", SCENE]) == 0
    out = capsys.readouterr().out
    assert out.startswith(
        "Seen: the pigmented meshwork at 3 o'clock (nasal) of the right eye, through direct-face-48."
    )
    assert max(len(line) for line in out.splitlines()) <= 100
    assert " ".join(CAUTION.split()) in " ".join(out.split())
    assert sorted(os.listdir(SCENE)) == ["cross-section.svg", "plan.json", "resolved-scene.yaml"]
    for name in os.listdir(SCENE):
        assert "planning aid, not a medical device" in " ".join(
            (in_empty_folder / SCENE / name).read_text().split()
        ), name


def test_the_resolved_scene_gives_the_plan_again_byte_for_byte(in_empty_folder):
    assert run(["plan", SCENE]) == 0
    (in_empty_folder / "other").mkdir()
    resolved = in_empty_folder / SCENE / "resolved-scene.yaml"
    assert run(["plan", str(resolved), "--into", "other/again"]) == 0
    for name in ("plan.json", "resolved-scene.yaml", "cross-section.svg"):
        first, second = ((in_empty_folder / folder / name).read_bytes() for folder in (SCENE, "other/again"))
        assert first == second, name


def test_planning_again_by_name_renews_the_folder_of_that_name(in_empty_folder, capsys):
    assert run(["plan", SCENE]) == 0
    before = (in_empty_folder / SCENE / "plan.json").read_bytes()
    assert run(["plan", SCENE, "--tilt", "30"]) == 0
    assert (in_empty_folder / SCENE / "plan.json").read_bytes() != before
    assert os.listdir() == [SCENE]


def test_json_alone_on_stdout_and_no_folder(in_empty_folder, capsys):
    assert run(["plan", SCENE, "--json"]) == 0
    plan = json.loads(capsys.readouterr().out)
    assert (
        plan["goniosim"] == "plan" and plan["caution"] == CAUTION and plan["version"] == goniosim.__version__
    )
    assert len(plan["fingerprint"]) == 64
    assert os.listdir() == []


def test_overrides_move_the_line_of_sight_and_the_target(in_empty_folder, capsys):
    assert (
        run(
            [
                "plan",
                SCENE,
                "--json",
                "--tilt",
                "30",
                "--turn",
                "30",
                "--lens",
                "direct-face-56",
                "--clock",
                "3.5",
            ]
        )
        == 0
    )
    plan = json.loads(capsys.readouterr().out)
    assert plan["line_of_sight"]["from_axis_deg"] == pytest.approx(60.0, abs=1e-9)
    assert plan["target"]["clock"] == 3.5
    assert plan["scene"]["lens"]["use"] == "direct-face-56"
    assert plan["scene"]["marks"]["scope.tilt_deg"] == "given"


def test_must_see_makes_no_an_exit_code(in_empty_folder, capsys):
    assert run(["plan", "no-lens", "--must-see", "--json"]) == 1
    assert json.loads(capsys.readouterr().out)["sightings"][0]["cause"] == "total reflection at cornea-front"
    assert run(["plan", "no-lens"]) == 0
    assert capsys.readouterr().out.startswith(
        "Not seen: the pigmented meshwork at 3 o'clock (nasal) of the right eye, "
        "without a lens. Cause: total\nreflection at cornea-front."
    )


@pytest.mark.parametrize(
    "arguments, code, words",
    [
        (["plan", "no-such-scene"], 3, "no-such-scene"),
        (["plan", SCENE, "--tilt", "200"], 2, "tilt_deg"),
        (["plan", SCENE, "--tilt", "nan"], 2, "tilt_deg"),
        (["plan", SCENE, "--lens", "direct-face-49"], 2, "Did you mean"),
        (["plan", SCENE, "--clock", "13"], 2, "clock"),
        (["plan", SCENE, "--side", "both"], 2, "side"),
    ],
)
def test_a_wrong_word_is_named_without_a_traceback(in_empty_folder, capsys, arguments, code, words):
    assert run(arguments) == code
    captured = capsys.readouterr()
    assert captured.out == "" and words in captured.err and "Traceback" not in captured.err
    assert os.listdir() == []


def test_all_faults_of_a_scene_at_once(in_empty_folder, capsys):
    (in_empty_folder / "case.yaml").write_text(
        "goniosim: scene\nschema: 1\nname: case\neye: {use: adult-open, side: rigth}\n"
        "scope: {tilt_deg: -3, tilt: 4}\ntarget: {structure: pigmented-meshwork, clock: 15}\n"
    )
    assert run(["plan", "case.yaml"]) == 3
    err = capsys.readouterr().err
    assert err.startswith("case.yaml has 4 problems\n")
    for words in ("line 4, column 30", "line 5, column", "line 6, column", "tilt_deg"):
        assert words in err
    assert os.listdir() == ["case.yaml"]


def test_a_target_that_lies_nowhere_and_a_lens_that_cuts_the_cornea(in_empty_folder, capsys):
    (in_empty_folder / "lenses").mkdir()
    (in_empty_folder / "lenses" / "sharp.yaml").write_text(
        "goniosim: lens\nschema: 1\nname: sharp\ntitle: Cuts into the cornea\n"
        "source: made for this test\nbodies:\n"
        "  - name: optic\n    medium: pmma\n    faces:\n"
        "      - {name: contact, shape: plane, vertex_mm: [0, 0, 0], side: ahead}\n"
        "      - {name: front, shape: plane, vertex_mm: [0, 0, 5], side: behind}\n"
        "      - {name: rim, shape: cylinder, radius_mm: 4, side: behind, finish: ground}\n"
        "  - name: spike\n    medium: pmma\n    faces:\n"
        "      - {name: tip, shape: plane, vertex_mm: [0, 0, -3], side: ahead}\n"
        "      - {name: top, shape: plane, vertex_mm: [0, 0, 1], side: behind}\n"
        "      - {name: side-wall, shape: cylinder, radius_mm: 1, vertex_mm: [3, 0, 0], "
        "side: behind, finish: ground}\n"
    )
    assert run(["plan", SCENE, "--plugins", str(in_empty_folder), "--lens", "sharp"]) == 3
    assert "spike" in (err := capsys.readouterr().err) and "cuts into the eye's front surface" in err


def test_ctrl_c_is_one_line_and_leaves_nothing(in_empty_folder, capsys, monkeypatch):
    def stopped(*_):
        raise KeyboardInterrupt

    monkeypatch.setattr("goniosim.cli.plan.make_plan", stopped)
    assert run(["plan", SCENE]) == 130
    assert capsys.readouterr().err == "stopped\n"
    assert os.listdir() == []


def test_the_first_word_of_help_and_a_missing_command(capsys):
    assert run([]) == 2
    assert "plan" in capsys.readouterr().out


def test_import_is_light():
    code = (
        "import goniosim, sys; "
        "print([m for m in ('numba', 'scipy', 'yaml', 'vtkmodules') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_the_resolved_scene_needs_no_plugin_of_its_own(in_empty_folder, capsys):
    shipped = (shipped_folder("plugins") / "lenses" / "direct-face-48.yaml").read_text()
    (in_empty_folder / "mine" / "lenses").mkdir(parents=True)
    mine = shipped.replace("name: direct-face-48", "name: my-lens").replace("lean_deg: 48", "lean_deg: 47")
    assert mine.count("my-lens") == 1 and "lean_deg: 47" in mine
    (in_empty_folder / "mine" / "lenses" / "my-lens.yaml").write_text(mine)
    assert run(["plan", SCENE, "--plugins", "mine", "--lens", "my-lens", "--into", "first"]) == 0
    assert run(["plan", "first/resolved-scene.yaml", "--into", "second"]) == 0
    for name in os.listdir("first"):
        assert (in_empty_folder / "first" / name).read_bytes() == (
            in_empty_folder / "second" / name
        ).read_bytes(), name


def test_what_is_in_the_way_is_named_before_any_work(in_empty_folder, capsys, monkeypatch):
    monkeypatch.setattr("goniosim.cli.plan.make_plan", lambda *_: pytest.fail("planned all the same"))
    (in_empty_folder / SCENE).mkdir()
    (in_empty_folder / SCENE / "notes.txt").write_text("mine")
    assert run(["plan", SCENE]) == 2
    assert capsys.readouterr().err == (
        f"the folder {SCENE} holds notes.txt, which no plan wrote; it is left alone; "
        "choose another folder with --into DIR\n"
    )
    assert os.listdir(SCENE) == ["notes.txt"]


def test_a_place_that_cannot_be_written_is_one_line_and_exit_2(in_empty_folder, capsys):
    (in_empty_folder / "file").write_text("")
    assert run(["plan", SCENE, "--into", "file/case"]) == 2
    captured = capsys.readouterr()
    assert captured.out == "" and captured.err.startswith("the folder case cannot be written in ")
    assert captured.err.count("\n") == 1 and os.listdir() == ["file"]


@pytest.mark.parametrize(
    "step", ["goniosim.show.cross_section.cross_section", "goniosim.planning.report.report"]
)
def test_a_fault_of_ours_is_no_traceback_and_no_half_a_folder(in_empty_folder, capsys, monkeypatch, step):
    def broken(*_):
        raise RuntimeError("broken on purpose")

    assert run(["plan", SCENE]) == 0
    before = {name: (in_empty_folder / SCENE / name).read_bytes() for name in os.listdir(SCENE)}
    capsys.readouterr()
    monkeypatch.setattr(step, broken)
    assert run(["plan", SCENE, "--tilt", "30"]) == 4
    captured = capsys.readouterr()
    assert captured.out == "" and "broken on purpose" in captured.err and "Traceback" not in captured.err
    assert {name: (in_empty_folder / SCENE / name).read_bytes() for name in os.listdir(SCENE)} == before
    assert os.listdir() == [SCENE]
