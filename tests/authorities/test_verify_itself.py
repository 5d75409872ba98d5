"""The checks must be able to fail: what a check says of wrong, missing and broken numbers, and the command."""

from __future__ import annotations

import json

import pytest

from goniosim.cautions import CAUTION
from goniosim.cli import main
from goniosim.verify import checks
from goniosim.verify.check import ABOVE, BELOW, EXACT, Check, Measured, run_check


def check(measure, expected=1.0, tolerance=0.1, rule="equals"):
    return Check("made for this test", "made for this test", EXACT, expected, tolerance, "mm", measure, rule)


def test_agreement_within_the_tolerance():
    result = run_check(check(lambda: Measured(1.05, rays=7)))
    assert result.ok and result.rays == 7
    assert result.off == pytest.approx(0.05)


@pytest.mark.parametrize("got", [1.2, float("nan"), float("inf")])
def test_wrong_and_missing_numbers_fail(got):
    assert not run_check(check(lambda: got)).ok


def test_the_worst_of_several_counts():
    assert not run_check(check(lambda: (1.0, 1.3), (1.0, 1.0))).ok


def test_nan_among_several_fails():
    assert not run_check(check(lambda: (1.0, float("nan")), (1.0, 1.0))).ok
    assert not run_check(check(lambda: (float("nan"), 1.0), (1.0, 1.0))).ok


def test_too_few_numbers_fail():
    result = run_check(check(lambda: (1.0,), (1.0, 1.0)))
    assert not result.ok and result.error == "gave 1 numbers for 2"


def test_a_check_that_breaks_is_a_failure_in_words():
    result = run_check(check(lambda: 1.0 / 0.0))
    assert not result.ok and result.error == "ZeroDivisionError: float division by zero"


def test_above_and_below_need_the_margin():
    assert run_check(check(lambda: 1.2, rule=ABOVE)).ok
    assert not run_check(check(lambda: 1.05, rule=ABOVE)).ok
    assert run_check(check(lambda: 0.8, rule=BELOW)).ok
    assert not run_check(check(lambda: 1.2, rule=BELOW)).ok


def test_command_prints_every_check_with_source_and_agreement(capsys):
    assert main.run(["verify", "prisms"]) == 0
    text = capsys.readouterr().out
    for row in checks.checks_of("prisms"):
        assert row.name in " ".join(text.split())
    assert "expected 0.6872 rad, got 0.687139297; agrees to 6.1e-05 (asked 0.0001)" in text
    assert "textbook solution, prism of 60 deg; read in the source" in text
    assert CAUTION.split(".")[0] in text


def test_command_gives_json(capsys):
    assert main.run(["verify", "fresnel", "--json"]) == 0
    report = json.loads(capsys.readouterr().out)
    assert report["ok"] is True and report["caution"] == CAUTION
    assert {row["name"] for row in report["checks"]} == {row.name for row in checks.checks_of("fresnel")}
    assert all(row["ok"] and row["source"] for row in report["checks"])


def test_command_says_no_when_a_check_fails(capsys, monkeypatch):
    monkeypatch.setattr("goniosim.verify.running.checks_of", lambda subject: [check(lambda: float("nan"))])
    assert main.run(["verify", "prisms"]) == 1
    assert "FAIL made for this test" in capsys.readouterr().out
    assert main.run(["verify", "prisms", "--json"]) == 1
    row = json.loads(capsys.readouterr().out)["checks"][0]
    assert row["ok"] is False and row["got"] == [None] and row["off"] is None


def test_command_refuses_a_subject_that_is_none(capsys):
    assert main.run(["verify", "prism"]) == 2
    assert "no checks named 'prism'" in capsys.readouterr().err


def test_warm_says_where_compiled_code_is_kept(capsys):
    assert main.run(["verify", "--warm"]) == 0
    assert "kernels ready after" in capsys.readouterr().out
