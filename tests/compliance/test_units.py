"""The exact conversions of the pure packages are those of the one table that people choose units from."""

import pytest

from app.compliance.units import FLOWS_L_S, LENGTHS_M, VOLUMES_L
from app.journal import units


@pytest.mark.parametrize(
    ("quantity", "base", "exact"),
    [("length", "m", LENGTHS_M), ("volume", "L", VOLUMES_L), ("flow", "L/s", FLOWS_L_S)],
)
def test_a_unit_means_the_same_on_a_screen_and_in_a_sum(quantity, base, exact):
    """Every unit that a person may choose and the sums know has one factor."""
    common = [u for u, row in units.table().items() if row["quantity"] == quantity and u in exact]
    assert len(common) >= 4
    for unit in common:
        assert units.convert(1.0, unit, base) == pytest.approx(exact[unit], rel=1e-14)
