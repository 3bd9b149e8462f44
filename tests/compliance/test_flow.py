"""Flow devices: outside the rating there is no number, and every flow names its rating."""

from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.compositing import aliquots_percent, flow_weighted_mean, manual_volumes_ml, mean_ph
from app.compliance.flow import (
    LARGE_FLUMES,
    SMALL_FLUMES,
    bucket_and_watch,
    head_error_percent,
    measure,
    parshall,
    rectangular,
    totalizer_volume,
    v_notch_90,
)
from app.errors import InputError

DEVICES = [v_notch_90(), rectangular(3), rectangular(3, contracted=False)]
DEVICES += [parshall(size) for size in [*SMALL_FLUMES, *LARGE_FLUMES]]


@pytest.mark.parametrize("device", DEVICES, ids=lambda d: d.name)
def test_outside_the_rating_there_is_no_number(device):
    """A hair outside either end: words, no flow; at both ends a flow."""
    for head in (device.low_ft - 1e-3, device.high_ft + 1e-3):
        found = measure(device, head)
        assert (found.status, found.l_s) == ("out of range", None)
        assert found.in_unit("MGD") is None and "outside the rating" in found.words
    assert measure(device, device.low_ft).status == measure(device, device.high_ft).status == "ok"
    assert measure(device, device.low_ft).rating.startswith("Q = ")


@pytest.mark.parametrize("device", DEVICES, ids=lambda d: d.name)
def test_more_head_is_more_flow(device):
    """Ratings rise strictly over their range."""
    steps = [device.low_ft + (device.high_ft - device.low_ft) * i / 50 for i in range(51)]
    flows = [measure(device, round(h, 9)).l_s for h in steps[1:-1]]
    assert all(a < b for a, b in pairwise(flows))


def test_flumes_of_neighbouring_sizes_do_not_cross():
    """At one head a wider throat passes more: guards against a throat in inches in the foot formula."""
    flows = [measure(parshall(size), 0.5).l_s for size in [*SMALL_FLUMES, *LARGE_FLUMES]]
    assert flows == sorted(flows)


@pytest.mark.parametrize(("size", "limit"), [("3 in", 0.50), ("6 in", 0.60), ("1 ft", 0.70), ("8 ft", 0.70)])
def test_a_submerged_flume_gives_no_number(size, limit):
    """Free flow up to the ratio of its size (ISO 9826, ASTM D1941; the stricter 50 % for 3 in)."""
    flume = parshall(size)
    assert measure(flume, 1.0, tail=limit).status == "ok"
    assert measure(flume, 1.0, tail=limit + 0.01).status == "submerged"
    assert "assumed" in measure(flume, 1.0).words


def test_a_suppressed_weir_is_rated_to_a_share_of_its_height():
    """H/P up to 0.4 (common practice with the 3.33 coefficient)."""
    weir = rectangular(3, contracted=False, crest_height=1.0)
    assert measure(weir, 0.4).status == "ok"
    assert measure(weir, 0.41).status == "out of range"


@given(st.floats(0.2, 1.25))
def test_the_unit_of_the_head_does_not_matter(head_ft):
    """Feet, inches, metres and centimetres give one flow."""
    flows = [
        measure(v_notch_90(), head_ft * factor, unit)
        for factor, unit in ((1, "ft"), (12, "in"), (0.3048, "m"), (30.48, "cm"), (304.8, "mm"))
    ]
    numbers = [f.l_s for f in flows if f.l_s is not None]
    assert len(numbers) >= 1
    assert numbers == pytest.approx([numbers[0]] * len(numbers), rel=1e-9)


def test_what_is_no_head_is_refused():
    """Zero, a negative head, no number, an unknown unit, an unknown flume."""
    for head in (0, -1, float("nan")):
        with pytest.raises(InputError):
            measure(v_notch_90(), head)
    with pytest.raises(InputError):
        measure(v_notch_90(), 1, "yd")
    with pytest.raises(InputError):
        parshall("10 in")
    with pytest.raises(InputError):
        bucket_and_watch(5, "pint", 12)
    with pytest.raises(InputError):
        bucket_and_watch(5, "gal", 0)


def test_an_error_that_leaves_the_rating_is_not_shown():
    """Half of the answer would mislead."""
    assert head_error_percent(v_notch_90(), 0.21, 0.02) is None


@given(st.integers(0, 999_999), st.integers(0, 999_999))
def test_a_totalizer_never_runs_backwards(start, volume):
    """Reading plus volume, through zero or not, gives the volume back."""
    assert totalizer_volume(start, (start + volume) % 10**6, digits=6) == volume


def test_a_totalizer_reading_must_fit_its_register():
    """Seven digits on a six-digit register; a smaller end where no rollover was meant."""
    with pytest.raises(InputError):
        totalizer_volume(1_000_000, 5, digits=6)
    with pytest.raises(InputError):
        totalizer_volume(100, 5, digits=6, rolled=False)


@given(st.lists(st.floats(0.01, 1e4), min_size=1, max_size=24), st.floats(100, 2e4))
def test_volumes_of_a_composite_follow_the_flow(flows, total):
    """They add up to the composite and stand in the ratio of the flows."""
    volumes = manual_volumes_ml(total, flows)
    assert sum(volumes) == pytest.approx(total)
    assert all(v * flows[0] == pytest.approx(volumes[0] * q) for v, q in zip(volumes, flows, strict=True))


def test_a_composite_needs_flow():
    """All zero is "no flow", not a division by zero."""
    with pytest.raises(InputError):
        manual_volumes_ml(2000, [0, 0])


@given(st.lists(st.floats(1, 13), min_size=1, max_size=10))
def test_a_mean_ph_lies_on_the_acid_side_of_the_arithmetic_one(values):
    """The mean of [H+] is never above the arithmetic mean of the pH (Jensen)."""
    assert mean_ph(values) <= sum(values) / len(values) + 1e-9


def test_flow_weighted_mean_of_four_grabs():
    """800, 1200, 600, 400 mg/L at 10, 30, 20, 5 m3/h are 892.308 mg/L, not 750 (arithmetic)."""
    assert flow_weighted_mean([800, 1200, 600, 400], [10, 30, 20, 5]) == pytest.approx(892.308, abs=0.0005)
    with pytest.raises(InputError):
        flow_weighted_mean([800], [])


def test_missed_aliquots():
    """46 of 51 are 90.2 % (arithmetic)."""
    assert aliquots_percent(46, 51) == pytest.approx(90.2, abs=0.05)
    with pytest.raises(InputError):
        aliquots_percent(52, 51)
    with pytest.raises(InputError):
        mean_ph([])
