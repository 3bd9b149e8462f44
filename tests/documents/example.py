"""An invented certificate, complete, for every test of the documents."""

from __future__ import annotations

import math
from dataclasses import replace

from app.documents.data import (
    Calibration,
    CertificateData,
    Check,
    Component,
    Dilution,
    Journal,
    Mark,
    Measured,
    Method,
    Party,
    Qualifier,
    Result,
    Sample,
    Signature,
    Standard,
    Step,
    Strip,
    StripBar,
    Tube,
    Verdict,
)

BASE_URL = "http://localhost:8700"
DIGEST = "3f1b" * 16


def density(median: float, sigma: float) -> tuple[tuple[float, float], ...]:
    """Return a lognormal hill per unit of log COD."""
    steps = [i / 30 for i in range(-90, 91)]
    return tuple(
        (round(median * math.exp(sigma * z), 3), round(math.exp(-z * z / 2) / sigma, 6)) for z in steps
    )


STANDARDS = (
    Standard(0, (0.0, 0.001), "0", ("0.000", "0.001"), "0.6", ""),
    Standard(100, (0.038, 0.039), "100", ("0.038", "0.039"), "100.9", "100.9"),
    Standard(250, (0.0955, 0.0945), "250", ("0.0955", "0.0945"), "249.6", "99.8"),
    Standard(500, (0.191, 0.189), "500", ("0.191", "0.189"), "499.4", "99.9"),
    Standard(750, (0.285, 0.2865), "750", ("0.285", "0.2865"), "750.5", "100.1"),
    Standard(900, (0.342, 0.343), "900", ("0.342", "0.343"), "899.9", "100.0"),
)
CALIBRATION = Calibration(
    name="High range, 600 nm",
    made_at="2031-05-12T09:30:00-06:00",
    valid_until="2031-06-12",
    standards=STANDARDS,
    coefficients=(0.0003, 0.0003805),
    lot="D-31-014",
    instrument="Photometer 2",
    made_by="Ines Calloway",
    read=(442.0, 0.1685),
    facts=(
        Measured("slope", "0.0003805", "AU per mg/L"),
        Measured("intercept", "0.0003", "AU"),
        Measured("residual standard deviation", "0.00081", "AU"),
        Measured("degrees of freedom", "10"),
    ),
)
STRIP = Strip(
    bars=(
        StripBar("2", 40, 1800, share_percent="46"),
        StripBar("5", 100, 4500, chosen=True, share_percent="94"),
        StripBar("10", 200, 9000, share_percent="91"),
    ),
    density=density(1900, 0.5),
    limits=(Mark(1500, "daily maximum 1500"),),
    result=(2210, 2080, 2340),
    result_label="result 2210 ± 130",
)
EXAMPLE = CertificateData(
    number="2031-0047",
    programme=Party("Esker Valley Sewer Authority", "12 Weir Lane", "office@esker.example"),
    laboratory=Party("Esker Valley Laboratory", "Works Road 3, Esker Valley"),
    discharger=Party("Hollin Vale Creamery", "4 Cold Store Way, Hollin Vale"),
    permit="EV-014",
    point="Outlet B, flume chamber behind the cold store",
    zone="America/Denver",
    sample=Sample(
        id="0197b3b2-7c1e-7f60-8a51-2f6d1c0a4e11",
        bottle="K7QF3P",
        kind="composite",
        period_start="2031-05-28T08:00:00-06:00",
        collected_at="2031-05-29T08:00:00-06:00",
        collected_by="Rowan Teague",
        received_at="2031-05-29T15:40:00-06:00",
        received_by="Ines Calloway",
        hold_until="2031-06-26T08:00:00-06:00",
        preservation=("sulfuric acid to pH 1.6", "cooled"),
        field_readings=(
            Measured("conductivity", "1840", "µS/cm"),
            Measured("pH", "7.1"),
            Measured("temperature", "24.5", "°C"),
        ),
        receipt=(Measured("temperature", "6.4", "°C"), Measured("pH", "1.7"), Measured("seal", "intact")),
        condition="accepted, qualified: warmer than 6 °C on receipt",
        note="Washdown from 06:30, white foam.",
    ),
    method=Method(
        recipe="Closed reflux, colorimetric, high range, 16 mm tube",
        source="EPA Method 410.4, revision 2.0 (1993)",
        wavelength_nm="600",
        minutes=120,
        temperature_c="150",
        working_low="20",
        working_high="900",
        run="Run of 30 May, morning",
        analysed_from="2031-05-30T09:10:00-06:00",
        analysed_to="2031-05-30T13:25:00-06:00",
        analysed_by="Ines Calloway",
    ),
    dilution=Dilution("5", (Step("20", "100"),)),
    result=Result(
        status="ok",
        reported="2210",
        expanded_u="130",
        coverage_factor="2.20",
        dof="11",
        reporting_level="100",
        tubes_used=3,
    ),
    verdicts=(
        Verdict(
            verdict="above",
            why="2210 mg/L is above the daily maximum of 1500 mg/L.",
            rule="Simple acceptance: the reported value is compared with the limit; a value equal to the "
            "limit complies; the uncertainty is stated but neither added nor subtracted.",
            rule_source="ILAC-G8:09/2019, 4.2.1; common practice in United States pretreatment",
            basis="daily maximum",
            limit="1500",
            effective_from="2031-03-01",
            source="Permit EV-014, part 2, table 1",
            probability_above_percent="100.0",
        ),
    ),
    qualifiers=(
        Qualifier("T", "temperature on receipt above 6 °C", "6.4 °C; delivered the same day on ice"),
    ),
    authorised=Signature("Maren Ostby", "coordinator", "authorised", "2031-06-01T20:05:00Z"),
    issued_at="2031-06-01T20:05:00Z",
    journal=Journal(1842, DIGEST),
    software="Weirbook 0.1.0",
    calibration=CALIBRATION,
    strip=STRIP,
    components=(
        Component("bias", "44", 0.556, "55.6", "11", "relative 2.0 % of the result"),
        Component("repeatability", "39", 0.437, "43.7", "40", "three tubes, sigma at 442 mg/L in the tube"),
        Component("standards", "11", 0.035, "3.5", "", "relative 0.5 %"),
        Component("line", "4.4", 0.005, "0.5", "10", "calibration line, 12 readings"),
        Component("dilution", "2.0", 0.001, "0.1", "", "20 mL to 100 mL, class A glass"),
    ),
    checks=(
        Check("Verification 500", "90 to 110 %", "491, 98.2 %", True),
        Check("Duplicate K7QF3P", "20 % at most", "4.1 %", True),
        Check("Spike T8HB4X", "90 to 110 %", "87 %", False, "Another matrix; this sample stands (M. Ostby)"),
    ),
    tubes=(
        Tube(2, "blank", "0.011"),
        Tube(3, "blank", "0.010"),
        Tube(4, "blank", "0.012"),
        Tube(9, "verification 500", "0.198", "491", "orange"),
        Tube(11, "K7QF3P", "0.175", "431", "orange"),
        Tube(12, "K7QF3P", "0.183", "452", "orange"),
        Tube(13, "K7QF3P", "0.179", "441", "orange"),
        Tube(14, "K7QF3P", "0.121", "", "orange", "cap leaked", "Ines Calloway"),
    ),
)  # fmt: skip
BELOW = replace(
    EXAMPLE,
    number="2031-0048",
    result=replace(EXAMPLE.result, status="below", reported="< 100", expanded_u=None, coverage_factor=None),
    verdicts=(replace(EXAMPLE.verdicts[0], verdict="within", why="Below 100 mg/L is within the limit."),),
)
OVER = replace(
    EXAMPLE,
    number="2031-0049",
    result=replace(EXAMPLE.result, status="over", reported="> 4500", expanded_u=None, coverage_factor=None),
)
