"""A flow as it was read at the point, turned into litres a second by the device's rating."""

from __future__ import annotations

from dataclasses import asdict

from app.compliance import flow
from app.errors import InputError
from app.journal import measured
from app.journal.units import convert
from app.records.change import Body


def _length(body: Body | None) -> float | None:
    return measured.value(body, "ft")


def device_of(body: Body) -> flow.Device:
    """Return the device that a statement names.

    Raises
    ------
    InputError
        If its size or its crest is missing.
    """
    if body["type"] == "v-notch 90":
        return flow.v_notch_90()
    if body["type"] == "parshall":
        return flow.parshall(body["size"] or "")
    crest = _length(body["crest"])
    if crest is None:
        raise InputError(
            "A rectangular weir needs the length of its crest.", {"device.crest": ["is missing"]}
        )
    contracted = body["type"] == "rectangular contracted"
    return flow.rectangular(crest, contracted=contracted, crest_height=_length(body["crest_height"]))


def _by_head(body: Body) -> Body:
    device, head = device_of(body["device"]), _length(body["head"])
    if head is None:
        raise InputError("This device needs a head.", {"head": ["is missing"]})
    found = asdict(flow.measure(device, head, tail=_length(body["tail"])))
    slip = _length(body["head_error"])
    rated = bool(slip) and found["status"] == "ok"
    error = flow.head_error_percent(device, head, slip or 0.0) if rated else None
    return found | {"error_percent": error and list(error), "volume_l": None}


def _by_bucket(body: Body) -> Body:
    volume = measured.value(body["volume"], "L")
    if volume is None or body["seconds"] is None:
        raise InputError("Bucket and watch need a volume and a time.", {"volume": ["and seconds are needed"]})
    found = asdict(flow.bucket_and_watch(volume, "L", measured.read(body["seconds"]).value))
    return found | {"error_percent": None, "volume_l": volume}


def _by_totalizer(body: Body) -> Body:
    start, end, count = body["register_start"], body["register_end"], body["count"]
    if start is None or end is None or count is None:
        raise InputError(
            "A totalizer needs both readings and what one count stands for.", {"register_end": ["is missing"]}
        )
    if len(start) != len(end):
        raise InputError(
            "Write both readings with all digits of the register.", {"register_end": ["has other digits"]}
        )
    litres = convert(measured.read(count["text"]).value, count["unit"], "L")
    total = flow.totalizer_volume(int(start), int(end), digits=len(end), multiplier=litres)
    words = "The register went through zero once." if int(end) < int(start) else ""
    found = {"status": "ok", "l_s": None, "rating": "V = (end - start) x count", "words": words}
    return found | {"error_percent": None, "volume_l": total}


def flow_of(body: Body) -> Body:
    """Return what a ``flow.measured`` amounts to.

    Returns
    -------
    dict
        ``status``, ``l_s``, ``rating``, ``words``, ``error_percent`` (of the
        head's own error), ``volume_l`` and ``meter_percent``: how far the
        installed meter is from this flow.

    Raises
    ------
    InputError
        Naming what is missing for this device.
    """
    by = {"bucket": _by_bucket, "totalizer": _by_totalizer}.get(body["device"]["type"], _by_head)
    found = by(body)
    meter = measured.value(body["meter"], "L/s")
    off = 100.0 * (meter / found["l_s"] - 1.0) if meter is not None and found["l_s"] else None
    return found | {"meter_percent": off}
