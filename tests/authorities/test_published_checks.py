"""Every outside check that `goniosim verify` runs. The source of each stands beside it in goniosim/verify/checks/."""

from __future__ import annotations

import pytest

from goniosim.verify.check import EQUALS, STATUSES, run_check
from goniosim.verify.checks import SUBJECTS, checks_of

ROWS = [(subject, check) for subject in SUBJECTS for check in checks_of(subject)]


@pytest.mark.parametrize(("subject", "check"), ROWS, ids=[f"{subject}: {check.name}" for subject, check in ROWS])
def test_agrees_with_its_source(subject, check):
    result = run_check(check)
    assert result.ok, (f"{check.name}: expected {check.rule} {check.expected} within {check.tolerance} {check.unit}, "
                       f"got {result.got} {result.error} [{check.source}; {check.status}]")


@pytest.mark.parametrize("subject", SUBJECTS)
def test_every_check_names_its_source_and_status(subject):
    names = [check.name for check in checks_of(subject)]
    assert len(set(names)) == len(names)
    for check in checks_of(subject):
        assert check.source.strip(), check.name
        assert check.status in STATUSES, check.name
        assert check.tolerance > 0.0 or check.rule != EQUALS, check.name


def test_checks_that_follow_rays_say_how_many():
    for subject in ("stigmatic", "planes", "pencils", "real_lenses"):
        results = [run_check(check) for check in checks_of(subject)]
        assert all(result.rays > 0 for result in results), [r.check.name for r in results if not r.rays]
