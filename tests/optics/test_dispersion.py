"""The formulas against scipy, hand sums and their own limits."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.interpolate import PchipInterpolator

from goniosim.optics import dispersion

SEED = 3


def test_table_is_scipys_monotone_cubic():
    random = np.random.default_rng(SEED)
    for _ in range(60):
        count = random.integers(2, 9)
        wavelengths = np.sort(random.uniform(400.0, 900.0, count))
        if np.diff(wavelengths).min() < 1.0:
            continue
        indices = random.uniform(1.3, 1.5, count)
        theirs = PchipInterpolator(wavelengths, indices)
        for nm in random.uniform(wavelengths[0], wavelengths[-1], 20):
            ours = dispersion.table(nm, tuple(wavelengths), tuple(indices))
            assert ours == pytest.approx(float(theirs(nm)), abs=1e-12), f"seed {SEED}, {count} rows, {nm} nm"


def test_table_passes_through_its_rows_and_adds_no_turn():
    wavelengths, indices = (400.0, 500.0, 600.0, 700.0), (1.50, 1.49, 1.489, 1.46)
    for nm, index in zip(wavelengths, indices):
        assert dispersion.table(nm, wavelengths, indices) == pytest.approx(index, abs=1e-15)
    between = [dispersion.table(nm, wavelengths, indices) for nm in np.linspace(400.0, 700.0, 400)]
    assert np.all(np.diff(between) < 0.0)


def test_cauchy_by_hand():
    # 1.3 + 4000 / 500^2 + 1e8 / 500^4 = 1.3 + 0.016 + 0.0016
    assert dispersion.cauchy(500.0, (1.3, 4000.0, 1.0e8)) == pytest.approx(1.3176, abs=1e-15)


def test_sellmeier_by_hand():
    # w = 1 um: n^2 = 1 + 1.2 / (1 - 0.04) = 2.25
    assert dispersion.sellmeier(1000.0, (1.2,), (0.04,)) == pytest.approx(1.5, abs=1e-15)


def test_sellmeier_has_no_index_at_or_inside_its_pole():
    assert math.isnan(dispersion.sellmeier(500.0, (1.2,), (0.25,)))
    assert math.isnan(dispersion.sellmeier(490.0, (1.2,), (0.25,)))


def test_conrady_by_hand():
    # w = 0.25 um: 1.4 + 0.01 / 0.25 + 0.001 * 2^7 = 1.4 + 0.04 + 0.128
    assert dispersion.conrady(250.0, (1.4, 0.01, 0.001)) == pytest.approx(1.568, abs=1e-14)
