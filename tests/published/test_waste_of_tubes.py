"""Waste of COD tubes: stoichiometry of the recipe and the thresholds of 40 CFR 261, 262 and 268.

The recipe (10.216 g potassium dichromate, 33.3 g mercury sulfate and 167 mL
concentrated acid in a litre of digestion solution; 5.5 g silver sulfate a
kilogram of acid; 2.5 + 1.5 + 3.5 mL) is that of Standard Methods 5220 D, from
memory; densities 1.84 and 1.20 g/mL and 96 % acid are assumed. Masses follow
from the IUPAC atomic masses: Cr 51.996, Hg 200.592, Ag 107.868, K 39.098,
O 15.999, S 32.06.
"""

import pytest

from app.chemistry.recipe import Recipe
from app.safety.accumulation import month_total
from app.safety.waste import PerTube, mercury_mg_per_kg, per_tube, totals, waste_codes, whole_tubes_within

pytestmark = pytest.mark.published


def tube(dichromate_g_per_l: float = 10.216) -> PerTube:
    """Return the tube of the recipe named above; 5.5 g/kg of acid are 10.12 g/L."""
    return per_tube(Recipe(2.5, 1.5, 3.5, dichromate_g_per_l, 33.3, 5.5 * 1.84, 600))


def test_one_tube():
    """5220 D, 16 x 100 mm tube: Cr 5.4170, Hg 33.7760, Ag 24.5079 mg; 6.6249 g acid; 10.775 g."""
    one = totals(tube(), 1)
    assert one.chromium_mg == pytest.approx(5.4170, abs=2e-4)
    assert one.mercury_mg == pytest.approx(33.7760, abs=2e-3)
    assert one.silver_mg == pytest.approx(24.5079, abs=1e-3)
    assert one.concentrated_acid_ml == pytest.approx(3.7505)
    assert one.sulfuric_acid_g == pytest.approx(6.6249, abs=5e-5)
    assert one.volume_ml == 7.5
    assert one.mass_g == pytest.approx(10.775, abs=1e-3)


def test_runs_and_a_thousand_tubes():
    """25 tubes and 1000 tubes of the same recipe, and the low range's chromium (1.022 g/L)."""
    run, many = totals(tube(), 25), totals(tube(), 1000)
    assert (run.chromium_mg, run.mercury_mg, run.silver_mg) == pytest.approx(
        (135.42, 844.40, 612.70), abs=0.05
    )
    assert (run.sulfuric_acid_g, run.volume_ml, run.mass_g) == pytest.approx((165.62, 187.5, 269.4), abs=0.05)
    assert many.mercury_mg / 1000 == pytest.approx(33.776, abs=1e-3)
    assert many.mass_g / 1000 == pytest.approx(10.775, abs=1e-3)
    low = totals(tube(1.022), 1)
    assert low.chromium_mg == pytest.approx(0.5419, abs=1e-4)
    assert 1000 * low.chromium_mg / low.volume_ml == pytest.approx(72.25, abs=0.02)


def test_codes_and_how_far_beyond_their_thresholds():
    """40 CFR 261.22 (pH 2) and 261.24 (Cr 5.0, Hg 0.2, Ag 5.0 mg/L): all four, by 100 to 20 000 times."""
    found = {c.code: c for c in waste_codes(totals(tube(), 25))}
    assert set(found) == {"D002", "D007", "D009", "D011"}
    assert found["D007"].found == pytest.approx(722, abs=0.5)
    assert found["D009"].found == pytest.approx(4503, abs=0.6)
    assert found["D011"].found == pytest.approx(3268, abs=0.5)
    assert found["D002"].found == pytest.approx(9.0, abs=0.01)
    assert mercury_mg_per_kg(totals(tube(), 1)) == pytest.approx(3135, abs=1)


def test_tubes_to_a_small_generators_threshold_and_to_a_drum():
    """100 kg (40 CFR 260.10, very small generator) are 9280 whole tubes; 55 gal hold 27 759."""
    assert whole_tubes_within(tube(), mass_kg=100) == 9280
    assert whole_tubes_within(tube(), volume_l=55 * 3.785411784) == 27_759


@pytest.mark.parametrize(
    ("kg", "acute", "category"),
    [
        (100, 0, "very small"),
        (100.01, 0, "small"),
        (999.9, 0, "small"),
        (1000, 0, "large"),
        (5, 1.01, "large"),
    ],
)
def test_generator_categories(kg, acute, category):
    """40 CFR 260.10: up to 100 kg, between, 1000 kg and more; more than 1 kg of acute waste."""
    assert month_total({"COD digest": kg}, acute_kg=acute).category == category
