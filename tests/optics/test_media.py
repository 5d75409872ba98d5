"""Media from the values of their files: models, ranges, faults in words."""

from __future__ import annotations

import pickle

import pytest

from goniosim.errors import BadInput, Misuse
from goniosim.optics.air import air_index_ciddor
from goniosim.optics.media import AIR, MEDIUM_KEYS, medium_from_mapping
from goniosim.verify.shipped_media import shipped_medium

SHIPPED = ("water", "saline", "aqueous", "vitreous", "cornea", "lens-equivalent", "lens-low", "lens-high",
           "pmma",
           "silicone-like", "fused-silica", "crown", "polycarbonate", "viscoelastic")


def made(**values):
    return medium_from_mapping({"name": "demo", **values})


def refusal(**values) -> str:
    with pytest.raises(BadInput) as caught:
        made(**values)
    return str(caught.value)


def test_air_is_one_at_every_wavelength():
    assert [AIR.index(nm) for nm in (200.0, 555.0, 2000.0)] == [1.0, 1.0, 1.0]


@pytest.mark.parametrize("name", SHIPPED)
def test_shipped_media_fall_with_wavelength(name):
    medium = shipped_medium(name)
    indices = [medium.index(nm) for nm in range(440, 781, 10)]
    assert all(a > b for a, b in zip(indices, indices[1:]))  # normal dispersion in the visible
    assert 1.33 < indices[0] < 1.62


def test_shipped_media_keep_the_order_that_the_trade_knows():
    names = ("water", "saline", "aqueous", "cornea", "silicone-like", "fused-silica", "pmma", "crown",
             "polycarbonate")
    indices = [shipped_medium(name).index(555.0) for name in names]
    assert indices == sorted(indices)


def test_index_against_vacuum_is_divided_by_airs():
    against_air = made(model="cauchy", coefficients=[1.5, 3000.0])
    against_vacuum = made(model="cauchy", coefficients=[1.5, 3000.0], relative_to="vacuum")
    ratio = against_air.index(555.0) / against_vacuum.index(555.0)
    assert ratio == pytest.approx(air_index_ciddor(555.0), abs=1e-15)


def test_absorption_is_none_unless_stated():
    assert made(model="constant", index=1.4).absorption_per_mm == 0.0
    assert made(model="constant", index=1.4, absorption_per_mm=0.02).absorption_per_mm == 0.02


def test_a_solute_adds_to_water():
    plain, salted = made(model="water"), made(model="water", solute_index=0.0016)
    assert salted.index(555.0) - plain.index(555.0) == pytest.approx(0.0016, abs=1e-12)


def test_media_travel_to_other_processes():
    medium = shipped_medium("pmma")
    assert pickle.loads(pickle.dumps(medium)).index(555.0) == medium.index(555.0)


def test_outside_its_range_a_medium_refuses():
    with pytest.raises(Misuse) as caught:
        shipped_medium("pmma").index(1600.0)
    assert str(caught.value) == "medium pmma has data from 436 to 1052 nm; got 1600 nm"


def test_a_table_holds_between_its_ends_only():
    table = made(model="table", wavelengths_nm=[450.0, 550.0, 650.0], indices=[1.50, 1.49, 1.485])
    assert table.index(450.0) == 1.50
    with pytest.raises(Misuse, match="medium demo has data from 450 to 650 nm; got 700 nm"):
        table.index(700.0)


def test_coefficients_in_the_wrong_unit_are_caught():
    # Cauchy's B in um^2 where nm^2 is meant still gives an index; Sellmeier's C in nm^2 does not.
    wrong = made(model="sellmeier", b=[1.1819], c_um2=[11313.0])
    with pytest.raises(Misuse) as caught:
        wrong.index(555.0)
    assert str(caught.value) == ("medium demo gives the index 0.999984 at 555 nm; an index must be between 1 and 5. "
                                 "Check its coefficients and their units")


def test_faults_between_keys_are_told_together():
    assert refusal(model="sellmeier", b=[1.0, 0.1], c_um2=[0.01], range_nm=[900.0, 400.0]) == (
        "medium demo has 2 problems\n"
        "  c_um2     must be as long as b (2); got 1\n"
        "  range_nm  must rise; got 900, 400\n"
        "More: goniosim plugins explain medium")


def test_tables_must_rise_and_have_rows():
    assert "wavelengths_nm  must rise from row to row; got 600 before 500" in refusal(
        model="table", wavelengths_nm=[400.0, 600.0, 500.0], indices=[1.5, 1.4, 1.3])
    assert "wavelengths_nm  must have at least two rows; got one" in refusal(
        model="table", wavelengths_nm=[400.0], indices=[1.5])
    assert "coefficients  must hold at least one number; got none" in refusal(model="cauchy", coefficients=[])


def test_every_key_of_every_model_is_explained():
    for model, keys in MEDIUM_KEYS.items():
        names = [key.name for key in keys]
        assert len(names) == len(set(names)), model
        assert {"range_nm", "absorption_per_mm"} <= set(names), model
        assert all(key.meaning for key in keys), model
