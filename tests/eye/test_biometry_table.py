"""Eyes from tables: units and conventions, what is refused and with which words, what is never read."""

from __future__ import annotations

import json

import pytest

from goniosim.cli.main import run
from goniosim.errors import BadInput
from goniosim.eye import complete
from goniosim.eye.biometry import eyes_of
from goniosim.eye.table import read_table

from eyes import sample


def table_of(tmp_path, text, name="table.csv", **how):
    path = tmp_path / name
    path.write_text(text, encoding="utf-8")
    return eyes_of(read_table(path, **how), name)


def faults_of(tmp_path, text, name="table.csv", **how):
    with pytest.raises(BadInput) as caught:
        table_of(tmp_path, text, name, **how)
    return [(fault.key, fault.message) for fault in caught.value.faults]


def test_dioptres_and_millimetres_give_the_same_cornea(tmp_path):
    """43.27 D is a radius of 7.80 mm by the keratometer index 1.3375 (convention)."""
    by_power, by_radius = table_of(tmp_path, "eye,k_mean_d,r_mean_mm\nOD,43.2692,\nOS,,7.8\n")
    assert by_power.definition["cornea"]["front"]["radius_mm"] == pytest.approx(7.8, abs=1e-4)
    assert by_radius.definition["cornea"]["front"]["radius_mm"] == 7.8
    assert (by_power.side, by_radius.side) == ("right", "left")


def test_depth_with_and_without_the_cornea(tmp_path):
    """Biometers start at the epithelium, OCT at the endothelium: half a millimetre apart."""
    with_cornea, without = table_of(
        tmp_path, "eye,cct_um,acd_epithelium_mm,acd_endothelium_mm\nOD,550,3.55,\nOD,550,,3.0\n"
    )
    assert with_cornea.definition["chamber"]["depth_mm"] == pytest.approx(3.0, abs=1e-9)
    assert without.definition["chamber"]["depth_mm"] == 3.0


def test_measured_keys_are_listed_and_assumed_ones_are_not(tmp_path):
    (eye,) = table_of(
        tmp_path, "eye,k1_d,k2_d,k_axis_deg,acd_endothelium_mm,vault_um\nright,42,44,80,2.9,350\n"
    )
    assert eye.measured == (
        "chamber.depth_mm",
        "chamber.vault_mm",
        "cornea.front.flat_mm",
        "cornea.front.steep_axis_deg",
        "cornea.front.steep_mm",
    )
    assert eye.definition["chamber"]["vault_mm"] == 0.35
    _, assumed, _ = complete(eye.definition, eye.side)
    assert not assumed & set(eye.measured)


def test_json_says_the_same_as_csv(tmp_path):
    row = {"eye": "left", "k_mean_d": 43.5, "acd_endothelium_mm": "2.95", "pupil_mm": None}
    from_json = table_of(tmp_path, json.dumps({"eyes": [row]}), "table.json")
    from_csv = table_of(tmp_path, "eye;k_mean_d;acd_endothelium_mm;pupil_mm\nleft;43.5;2.95;\n")
    assert from_json[0].definition == from_csv[0].definition


@pytest.mark.parametrize(
    "text, key, message",
    [
        (
            "eye,k_mean_d\nOD,7.8\n",
            "row 1, k_mean_d",
            "must be from 28 to 70 D; got 7.8. This looks like a radius: "
            "7.8 mm is 43.27 D; its column is r_mean_mm",
        ),
        (
            "eye,r1_mm,r2_mm\nOD,43,7.7\n",
            "row 1, r1_mm",
            "must be from 5 to 11.5 mm; got 43. This looks like dioptres: "
            "43 D is a radius of 7.85 mm; its column is k1_d",
        ),
        (
            "eye,cct_um\nOD,0.54\n",
            "row 1, cct_um",
            "must be from 250 to 1000 um; got 0.54. This looks like mm: 0.54 mm is 540 um",
        ),
        ("eye,pupil_mm\nOD,40\n", "row 1, pupil_mm", "must be from 0.8 to 8.5 mm; got 40"),
        ("eye,pupil_mm\nOD,big\n", "row 1, pupil_mm", "must be a number; got 'big'"),
        (
            "eye;pupil_mm\nOD;3,5\n",
            "row 1, pupil_mm",
            "must be a number; got '3,5'. Write a decimal point, not a comma",
        ),
        ("eye,pupil_mm\nOD,nan\n", "row 1, pupil_mm", "must be a number; got 'nan'"),
        ("eye,pupil_mm\nboth,3\n", "row 1, eye", "must be right, left, OD or OS; got 'both'"),
        ("pupil_mm\n3\n", "row 1, eye", "must be right, left, OD or OS; it is empty"),
        ("eye,k1\nOD,43\n", "k1", "is not a known column; did you mean 'k1_d'?"),
        ("eye,eye\nOD,OD\n", "eye", "is given twice"),
        (
            "eye,k1_d\nOD,43\n",
            "row 1, k2_d",
            "is missing: flat and steep readings go together; a single one goes into k_mean_d or r_mean_mm",
        ),
        (
            "eye,k1_d,k2_d\nOD,45,43\n",
            "row 1, k1_d",
            "is steeper than the second reading; the first is the flat one. Change them over, "
            "with k_axis_deg the meridian of "
            "the steep one",
        ),
        (
            "eye,width_mm,wtw_mm\nOD,11.8,11.9\n",
            "row 1, wtw_mm",
            "says the same as width_mm; give one of them",
        ),
        (
            "eye,cct_um,acd_epithelium_mm\nOD,550,1.4\n",
            "row 1, acd_epithelium_mm",
            "less the cornea leaves a chamber of 0.85 mm; "
            "a depth without the cornea goes into acd_endothelium_mm",
        ),
        (
            "eye,label\nOD,Some One\n",
            "row 1, label",
            "must be a name of small letters, digits and single hyphens, such as 'case-07', "
            "and must not identify a person",
        ),
        ("eye,label\nOD,a-1\nOS,a-1\n", "row 2, label", "'a-1' is also the label of row 1"),
    ],
)
def test_what_a_table_must_not_hold(tmp_path, text, key, message):
    assert faults_of(tmp_path, text) == [(key, message)]


def test_all_faults_of_all_rows_at_once_with_their_places(tmp_path):
    with pytest.raises(BadInput) as caught:
        table_of(tmp_path, "eye,k_mean_d,pupil_mm\nOD,7.8,3\nOS,43,99\n")
    assert [(f.key, f.line, f.column) for f in caught.value.faults] == [
        ("row 1, k_mean_d", 2, 2),
        ("row 2, pupil_mm", 3, 3),
    ]


def test_a_row_that_makes_no_eye_is_told(tmp_path):
    faults = faults_of(
        tmp_path, "eye,acd_endothelium_mm,vault_mm,angle_width_deg,iris_bow_mm\nOD,1.0,2.0,2,1.2\n"
    )
    assert faults[0][0] == "row 1" and faults[0][1].startswith("makes no eye: iris touches the cornea")


PERSONAL = [
    "name",
    "Surname",
    "first_name",
    "FirstName",
    "DOB",
    "date of birth",
    "patient_id",
    "Patient ID",
    "MRN",
    "address",
    "Phone",
    "E-Mail",
    "email",
    "SSN",
    "id",
]


@pytest.mark.parametrize("column", PERSONAL)
def test_personal_columns_are_never_read_nor_written(tmp_path, capsys, monkeypatch, column):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "t.csv").write_text(f"{column},eye,pupil_mm\nQuidnunc 77,OD,3.1\n")
    assert run(["eyes", "from", "t.csv"]) == 0
    said = capsys.readouterr().out
    assert f"Not read, because they may identify a person: {column}." in said
    written = (tmp_path / "eyes" / "eye-01.yaml").read_text()
    assert "Quidnunc" not in said + written and "77" not in written


def test_personal_keys_of_json_are_never_read(tmp_path):
    path = tmp_path / "t.json"
    path.write_text(json.dumps([{"eye": "OD", "surname": "Quidnunc", "pupil_mm": 3.0}]))
    table = read_table(path)
    assert table.not_read == ["surname"]
    assert "Quidnunc" not in repr(table)


def test_unknown_columns_can_be_passed_over(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("eye,colour,pupil_mm\nOD,brown,3\n")
    assert read_table(path, ignore_unknown=True).ignored == ["colour"]
    assert faults_of(tmp_path, "eye,colour\nOD,brown\n") == [("colour", "is not a known column")]


@pytest.mark.parametrize(
    "name, content, words",
    [
        ("t.csv", b"", "is empty"),
        ("t.csv", b"\xff\xfe\x00", "not UTF-8"),
        ("t.csv", b"eye,pupil_mm\n", "holds no eyes"),
        ("t.json", b"{", "cannot be read as JSON"),
        ("t.json", b"3", "must be a list of eyes"),
        ("t.json", b"[1]", "must be a mapping of columns"),
        ("t.json", b"[" * 100_000, "nested too deep"),
        ("t.csv", b"eye,pupil_mm\nOD,3,4\n", "has 3 cells"),
    ],
)
def test_broken_tables(tmp_path, capsys, name, content, words):
    (tmp_path / name).write_bytes(content)
    assert run(["eyes", "from", str(tmp_path / name), "--into", str(tmp_path / "out")]) == 3
    message = capsys.readouterr().err
    assert words in message and "Traceback" not in message
    assert not (tmp_path / "out").exists()


def test_files_are_written_all_or_none(tmp_path, capsys):
    table = tmp_path / "t.csv"
    table.write_text("label,eye,pupil_mm\none,OD,3\ntwo,OS,3\n")
    out = tmp_path / "out"
    out.mkdir()
    (out / "two.yaml").write_text("mine\n")
    assert run(["eyes", "from", str(table), "--into", str(out)]) == 2
    assert "two.yaml already; nothing was written" in capsys.readouterr().err
    assert [path.name for path in out.iterdir()] == ["two.yaml"] and (
        out / "two.yaml"
    ).read_text() == "mine\n"
    assert run(["eyes", "from", str(table), "--into", str(out), "--replace"]) == 0
    assert sorted(path.name for path in out.iterdir()) == ["one.yaml", "two.yaml"]


def test_the_sample_table_makes_good_eye_files(tmp_path, capsys):
    out = tmp_path / "eyes"
    assert run(["eyes", "from", str(sample("sample-biometry.csv")), "--into", str(out), "--json"]) == 0
    result = json.loads(capsys.readouterr().out)
    assert len(result["eyes"]) == 5 and all(eye["name"].startswith("invented-") for eye in result["eyes"])
    assert run(["plugins", "check", *(eye["file"] for eye in result["eyes"])]) == 0
    assert "5 checked, 0 with problems" in capsys.readouterr().out
