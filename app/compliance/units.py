"""Exact conversions of the units that meet at a discharge point.

1 ft = 0.3048 m, 1 US gallon = 3.785411784 L, 1 lb = 0.45359237 kg, all by
definition; the rest follows. One million gallons a day (MGD) carries
``1 mg/L`` as 3.785411784 kg, or 8.345404452 lb, a day; the 8.34 that most
ordinances print is 0.065 % lower and is a setting of the charges.
"""

from __future__ import annotations

FOOT_M = 0.3048
GALLON_L = 3.785411784
POUND_KG = 0.45359237
CUBIC_FOOT_L = FOOT_M**3 * 1000.0
DAY_S = 86400.0

KG_PER_DAY_PER_MG_L_MGD = GALLON_L
POUND_FACTOR_EXACT = GALLON_L / POUND_KG
POUND_FACTOR_PRINTED = 8.34

LENGTHS_M: dict[str, float] = {"m": 1.0, "cm": 0.01, "mm": 0.001, "ft": FOOT_M, "in": FOOT_M / 12.0}
VOLUMES_L: dict[str, float] = {"L": 1.0, "m3": 1000.0, "gal": GALLON_L, "ft3": CUBIC_FOOT_L}
FLOWS_L_S: dict[str, float] = {
    "L/s": 1.0,
    "m3/s": 1000.0,
    "m3/h": 1000.0 / 3600.0,
    "m3/d": 1000.0 / DAY_S,
    "gpm": GALLON_L / 60.0,
    "MGD": 1e6 * GALLON_L / DAY_S,
    "cfs": CUBIC_FOOT_L,
}
