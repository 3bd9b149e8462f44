"""Flow devices against the ratings of the USBR Water Measurement Manual, ISO 9826 and ASTM D1941.

The formulas are the manual's; the flows below were computed from them apart
from this code and rounded as printed. The foot rating of the 3 in Parshall
flume is from memory.
"""

import pytest

from app.compliance.compositing import manual_volumes_ml, mean_ph, pacing
from app.compliance.flow import (
    bucket_and_watch,
    head_error_percent,
    measure,
    parshall,
    rectangular,
    totalizer_volume,
    v_notch_90,
)

pytestmark = pytest.mark.published

V90 = v_notch_90()


@pytest.mark.parametrize(
    ("device", "head_ft", "cfs", "mgd"),
    [
        (V90, 0.20, 0.04600, 0.02973),
        (V90, 0.50, 0.44632, 0.28846),
        (V90, 1.00, 2.49000, 1.60933),
        (rectangular(2), 0.5, 2.23693, 1.44577),
        (rectangular(2, contracted=False), 0.5, 2.35467, 1.52186),
        (rectangular(1), 0.3, 0.51434, 0.33243),
        (rectangular(1, contracted=False), 0.3, 0.54717, None),
        (parshall("3 in"), 0.50, 0.33948, 0.21941),
        (parshall("6 in"), 0.50, 0.68903, 0.44533),
        (parshall("9 in"), 0.50, 1.06307, 0.68708),
        (parshall("1 ft"), 0.50, 1.39281, 0.90020),
        (parshall("2 ft"), 0.50, 2.73269, 1.76618),
        (parshall("4 ft"), 1.00, 16.000, 10.34107),
    ],
)
def test_a_head_gives_the_manuals_flow(device, head_ft, cfs, mgd):
    """USBR Water Measurement Manual ch. 7 (weirs) and ch. 8 (Parshall)."""
    flow = measure(device, head_ft)
    assert flow.status == "ok"
    assert flow.in_unit("cfs") == pytest.approx(cfs, abs=6e-6)
    if mgd is not None:
        assert flow.in_unit("MGD") == pytest.approx(mgd, abs=6e-6)


def test_units_of_the_v_notch_agree():
    """90 degree V-notch, USBR ch. 7, in gallons a minute, cubic metres a day and from a head in metres."""
    half, one = measure(V90, 0.5), measure(V90, 1.0)
    assert half.in_unit("gpm") == pytest.approx(200.32, abs=0.005)
    assert half.in_unit("m3/d") == pytest.approx(1091.95, abs=0.005)
    assert measure(V90, 0.2).in_unit("m3/d") == pytest.approx(112.54, abs=0.005)
    assert one.in_unit("m3/d") == pytest.approx(6091.97, abs=0.005)
    assert measure(V90, 0.20, "m").in_unit("L/s") == pytest.approx(24.80, abs=0.005)
    assert measure(V90, 20, "cm").l_s == pytest.approx(measure(V90, 0.20, "m").l_s)


def test_small_flumes_in_gallons_a_minute():
    """Parshall flumes at 0.50 ft: USBR ch. 8; the 3 in foot pair from memory."""
    found = [measure(parshall(size), 0.5).in_unit("gpm") for size in ("3 in", "6 in", "9 in")]
    assert found == pytest.approx([152.37, 309.26, 477.14], abs=0.006)


def test_an_error_of_the_head_is_an_error_of_the_flow():
    """dQ/Q is about n dH/H: 0.50 +/- 0.02 ft on a 90 degree V-notch is +10.2 / -9.6 % (arithmetic)."""
    low, high = head_error_percent(V90, 0.50, 0.02)
    assert (round(low, 1), round(high, 1)) == (-9.6, 10.2)


def test_bucket_totalizer_and_compositing():
    """Arithmetic of common practice: 5.00 gal in 12.4 s; a register through zero; volumes by flow."""
    flow = bucket_and_watch(5.00, "gal", 12.4)
    assert flow.in_unit("gpm") == pytest.approx(24.194, abs=0.0005)
    assert flow.in_unit("MGD") == pytest.approx(0.034839, abs=5e-7)
    assert totalizer_volume(998_750, 1_320, digits=6, multiplier=10) == 25_700
    assert manual_volumes_ml(2000, [10, 30, 20, 5]) == pytest.approx([307.7, 923.1, 615.4, 153.8], abs=0.05)
    planned = pacing(25_700, 500, 150, 10)
    assert (planned.aliquots, planned.fits) == (51, True)
    assert planned.collected_l == pytest.approx(7.65)
    assert not pacing(25_700, 500, 150, 7.65).fits
    assert mean_ph([6.0, 8.0]) == pytest.approx(6.297, abs=0.0005)
