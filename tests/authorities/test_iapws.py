"""Water against the `iapws` package, an independent library (IAPWS-95 densities, IAPWS R9-97 index)."""

from __future__ import annotations

import numpy as np
import pytest
from iapws import IAPWS95
from iapws._iapws import _Refractive

from goniosim.optics.air import air_index_ciddor
from goniosim.optics.media import medium_from_mapping
from goniosim.optics.water import water_density_kg_m3, water_index_iapws

TEMPERATURES_C = (0.5, 5.0, 15.0, 20.0, 25.0, 34.0, 37.0, 40.0)


@pytest.mark.parametrize("temperature_c", TEMPERATURES_C)
def test_density_at_atmospheric_pressure(temperature_c):
    theirs = IAPWS95(T=temperature_c + 273.15, P=0.101325).rho
    assert water_density_kg_m3(temperature_c) == pytest.approx(theirs, abs=0.002)  # 2 in a million


def test_index_formula():
    for temperature_c in TEMPERATURES_C:
        density = water_density_kg_m3(temperature_c)
        for um in np.linspace(0.22, 1.08, 30):
            theirs = _Refractive(density, temperature_c + 273.15, um)
            assert water_index_iapws(1000.0 * um, temperature_c + 273.15, density) == pytest.approx(theirs,
                                                                                                    abs=1e-12)


@pytest.mark.parametrize("temperature_c", TEMPERATURES_C)
def test_medium_is_the_index_against_air(temperature_c):
    water = medium_from_mapping({"name": "water", "model": "water", "temperature_c": temperature_c})
    state = IAPWS95(T=temperature_c + 273.15, P=0.101325)
    for nm in (486.1, 555.0, 589.3, 656.3):
        against_vacuum = _Refractive(state.rho, state.T, nm / 1000.0)
        assert water.index(nm) == pytest.approx(against_vacuum / air_index_ciddor(nm), abs=1e-6)
