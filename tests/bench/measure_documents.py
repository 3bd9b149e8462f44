"""Paper: what a certificate costs once the fonts are loaded, and a job of two hundred."""

from __future__ import annotations

import statistics
import time
from collections.abc import Iterator
from dataclasses import replace

from app.documents.certificate import render_certificate
from app.documents.charts import calibration_svg, strip_svg
from app.documents.data import CertificateData
from tests.bench.measure import Measure
from tests.documents.example import BASE_URL, CALIBRATION, EXAMPLE, STRIP

CERTIFICATES = 200
CHARTS = 200


def different(number: int) -> CertificateData:
    """Return a certificate unlike the others."""
    return replace(EXAMPLE, number=f"2031-{number:04d}", point=f"Outlet {number}")


def milliseconds(number: int) -> float:
    """Return the time of one certificate; refuse a file that is none."""
    data = different(number)
    began = time.perf_counter()
    pdf = render_certificate(data, BASE_URL)
    took = time.perf_counter() - began
    if not pdf.startswith(b"%PDF-") or len(pdf) < 50_000:
        raise RuntimeError("what was timed is no certificate")
    return took * 1000


def measures() -> Iterator[Measure]:
    """Time two hundred certificates one after the other, and two charts."""
    milliseconds(0)
    times = [milliseconds(number) for number in range(1, CERTIFICATES + 1)]
    yield Measure("certificate, warm, median", statistics.median(times), 150, "ms", False)
    yield Measure("certificate, warm, slowest of 200", max(times), 150, "ms", False)
    yield Measure("200 certificates, one after the other", sum(times) / 1000, 60, "s", False)
    began = time.perf_counter()
    for _ in range(CHARTS):
        strip_svg(STRIP)
        calibration_svg(CALIBRATION)
    took = (time.perf_counter() - began) * 1000 / (2 * CHARTS)
    yield Measure("chart as SVG", took, 5, "ms", False)
