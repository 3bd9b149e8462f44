"""Extra-strength charges: the worked examples a city prints on its web page (formula and rates public).

Volume in million gallons a month, 8.34, thresholds 200 / 200 / 450 for BOD, SS
and COD, the COD term in place of the BOD term when COD/BOD is over 2.25.
"""

from __future__ import annotations

from decimal import Decimal

import pytest

from app.compliance.charges import charge, excess

pytestmark = pytest.mark.published

CITY = (
    "volume * 8.34 * (if(cod / bod > 2.25, rate_cod * max(0, cod - 450), rate_bod * max(0, bod - 200))"
    " + rate_ss * max(0, ss - 200))"
)
RATES = {"rate_bod": "0.5043", "rate_ss": "0.1087", "rate_cod": "0.2242"}


def bill(formula: str = CITY, **quantities: str) -> Decimal:
    """Work out a charge from decimals written as text."""
    return charge(formula, {k: Decimal(v) for k, v in {**RATES, **quantities}.items()}).amount


def test_the_bod_term_below_the_ratio() -> None:
    """BOD 614, SS 111, COD 1200, 0.0116: $20.20; at the later rate of 0.6622 $26.52 (city web page)."""
    sample = {"bod": "614", "ss": "111", "cod": "1200", "volume": "0.0116"}
    assert bill(**sample) == Decimal("20.20")
    assert bill(**{**sample, "rate_bod": "0.6622"}) == Decimal("26.52")


def test_the_cod_term_above_the_ratio() -> None:
    """BOD 614, SS 799, COD 1860, 0.0934: ratio 3.03, COD 246.25 and SS 50.72 make $296.96."""
    quantities = {k: Decimal(v) for k, v in {**RATES, "bod": "614", "ss": "799", "cod": "1860"}.items()}
    found = charge(CITY, {**quantities, "volume": Decimal("0.0934")})
    assert found.amount == Decimal("296.96")
    assert [round(line.amount, 2) for line in found.lines] == [Decimal("246.25"), Decimal("50.72")]


def test_a_generic_charge() -> None:
    """0.25 MG, COD 1450 over 600 at 0.12; SS 210 under 250: no credit, $212.67 (arithmetic, half up)."""
    formula = "volume * 8.34 * (0.12 * max(0, cod - 600) + 0.2 * max(0, ss - 250))"
    assert bill(formula, volume="0.25", cod="1450", ss="210") == Decimal("212.67")
    assert charge("0.25 * 8.34 * 0.12 * 850", {}).unrounded == Decimal("212.67")


def test_the_order_of_averaging_and_thresholding() -> None:
    """300 and 900 over 500: excess of the mean 100, mean of the excesses 200; by flow 2 to 1 nothing."""
    values, threshold = [Decimal(300), Decimal(900)], Decimal(500)
    assert excess(values, threshold, "excess of the mean") == 100
    assert excess(values, threshold, "mean of the excesses") == 200
    assert excess(values, threshold, "excess of the mean", [Decimal(2), Decimal(1)]) == 0
