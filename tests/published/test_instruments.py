"""The weight of water in air against printed tables.

Density: CRC Handbook and Tanaka et al. 2001, table 1. Factor Z: ISO 8655-6,
table A.1 at 101.3 kPa (values from memory, printed to four decimals there).
"""

import pytest

from app.chemistry.instruments import check_pipette, water_density, z_factor

pytestmark = pytest.mark.published


@pytest.mark.parametrize(
    ("celsius", "kg_m3"),
    [(4, 999.975), (10, 999.703), (15, 999.103), (20, 998.207), (25, 997.048), (30, 995.65)],
)
def test_density_of_water(celsius, kg_m3):
    """Tanaka et al., Metrologia 38 (2001) 301, table 1, in kg/m3."""
    assert 1000 * water_density(celsius) == pytest.approx(kg_m3, abs=0.002)


@pytest.mark.parametrize(("celsius", "z"), [(15, 1.0020), (20, 1.0029), (22, 1.0033), (25, 1.0040)])
def test_factor_z(celsius, z):
    """ISO 8655-6, table A.1, mL/mg as mL/g, from memory."""
    assert z_factor(celsius) == pytest.approx(z, abs=6e-5)


def test_a_pipette_of_five_millilitres():
    """Arithmetic: 4.986 g at 20 degrees is 5.0005 mL; a tip that drips shows in scatter or mean."""
    assert check_pipette(5.0, [4.986, 4.984, 4.988, 4.986], 20).ok
    assert not check_pipette(5.0, [4.90, 4.91, 4.90, 4.91], 20).ok
    assert not check_pipette(5.0, [4.95, 5.02, 4.93, 5.04], 20).ok
