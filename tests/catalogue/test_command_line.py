"""`goniosim plugins` and the frame of the command line: exit codes, one block, no traceback."""

from __future__ import annotations

import json
import subprocess
import sys

import pytest

from goniosim.cautions import CAUTION
from goniosim.catalogue.kinds import KINDS
from goniosim.cli import main
from goniosim.cli import plugins as plugins_command


def test_list_names_every_kind_and_ends_with_the_caution(capsys):
    assert main.run(["plugins", "list"]) == 0
    out = capsys.readouterr().out
    assert "direct-face-48" in out and "stereo-200" in out and "plain-room" in out
    assert " ".join(out.split()).endswith(CAUTION)


def test_list_as_json(capsys):
    assert main.run(["plugins", "list", "lens", "--json"]) == 0
    rows = json.loads(capsys.readouterr().out)["plugins"]
    assert {row["kind"] for row in rows} == {"lens"} and not any(row["broken"] for row in rows)


def test_check_good_and_bad(tmp_path, capsys, flat_lens):
    good, bad = tmp_path / "good.yaml", tmp_path / "bad.yaml"
    good.write_text(flat_lens)
    bad.write_text(flat_lens.replace("radius_mm: 8.4", "radius_mm: tall"))
    assert main.run(["plugins", "check", str(good)]) == 0
    assert "lens ok" in capsys.readouterr().out
    assert main.run(["plugins", "check", str(tmp_path), "direct-face-48", "no-such-thing", "--json"]) == 3
    rows = json.loads(capsys.readouterr().out)["checked"]
    assert [row["ok"] for row in rows] == [False, True, True, False]
    assert rows[0]["faults"][0]["key"] == "bodies[0].faces[0].radius_mm"


@pytest.mark.parametrize("kind", list(KINDS))
def test_explain_tells_every_key(kind, capsys):
    assert main.run(["plugins", "explain", kind]) == 0
    out = capsys.readouterr().out
    for key in KINDS[kind].keys():
        assert key.name in out and key.meaning in out


def test_explain_gives_unit_range_default_and_meaning(capsys):
    main.run(["plugins", "explain", "lens"])
    out = capsys.readouterr().out
    assert "radius_mm            number greater than 0 and at most 1000 mm; required: radius of the cylinder" in out
    main.run(["plugins", "explain", "scene"])
    assert "tip_deg              number from 0 to 45 deg; default 0 deg: lean of the lens about its contact vertex" in \
        capsys.readouterr().out


def test_explain_a_plugin(capsys):
    assert main.run(["plugins", "explain", "direct-face-48"]) == 0
    out = capsys.readouterr().out
    assert "source: made for this project" in out and "rim            cylinder, body behind; " in out


def test_explain_unknown_is_misuse(capsys):
    assert main.run(["plugins", "explain", "lense"]) == 2
    assert "Did you mean 'lens'?" in capsys.readouterr().err


@pytest.mark.parametrize("arguments", [[], ["nonsense"], ["plugins"], ["plugins", "list", "--nonsense"]])
def test_misuse_exits_with_2(arguments, capsys):
    try:
        code = main.run(arguments)
    except SystemExit as stop:
        code = stop.code
    assert code == 2


@pytest.mark.parametrize("error, code, words", [
    (KeyboardInterrupt(), 130, "stopped\n"),
    (ZeroDivisionError("oops"), 4, "goniosim failed: ZeroDivisionError: oops\n"),
])
def test_how_a_command_can_end(monkeypatch, capsys, error, code, words):
    def fails(args):
        raise error

    monkeypatch.setattr(plugins_command, "run", fails)
    assert main.run(["plugins", "list"]) == code
    err = capsys.readouterr().err
    assert err.startswith(words) and "Traceback" not in err
    main.run(["plugins", "list", "--debug"])
    assert ("Traceback" in capsys.readouterr().err) == (code == 4)


def test_reader_that_goes_away_is_quiet():
    line = f"{sys.executable} -m goniosim.cli.main plugins explain scene | head -n 1"
    done = subprocess.run(["bash", "-c", f"set -o pipefail; {line}"], capture_output=True, text=True, timeout=60)
    assert done.returncode == 0 and done.stderr == "" and done.stdout.startswith("scene: ")


def test_lens_that_its_faces_do_not_close_is_told(tmp_path, capsys, flat_lens):
    path = tmp_path / "wide.yaml"
    path.write_text(flat_lens.replace("radius_mm: 6.0", "radius_mm: 9.0"))
    assert main.run(["plugins", "check", str(path)]) == 3
    assert "the cap ends, 8.400 mm from its axis, inside the body" in capsys.readouterr().out
