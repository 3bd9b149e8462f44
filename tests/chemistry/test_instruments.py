"""Checks of instruments: a limit is met or not, and what cannot be judged is named whole."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.instruments import check_near, check_pipette, z_factor
from app.errors import InputError


@pytest.mark.parametrize(("found", "ok"), [(148, True), (152, True), (152.01, False), (147.9, False)])
def test_the_limit_itself_is_met(found, ok):
    """150 within 2: both ends belong to it."""
    checked = check_near(found, 150, 2, "°C")
    assert checked.ok is ok
    assert "at most 2 °C" in checked.words


def test_every_wrong_field_at_once():
    """Three deliveries, one of nothing, boiling water, no volume."""
    with pytest.raises(InputError) as caught:
        check_pipette(0, [1.0, 0.0, 1.0], 99)
    assert set(caught.value.fields) == {"nominal_ml", "celsius", "weighed_g.1", "weighed_g"}


@given(st.floats(0.1, 50), st.floats(5, 40), st.floats(-3, 3))
def test_equal_deliveries_pass_exactly_within_the_systematic_limit(nominal, celsius, percent):
    """Without scatter only the mean decides."""
    mass = nominal * (1 + percent / 100) / z_factor(celsius)
    if abs(abs(percent) - 1.0) > 1e-6:
        assert check_pipette(nominal, [mass] * 5, celsius).ok is (abs(percent) < 1.0)
