"""Invented devices and a whole story, told entry by entry as a tablet would."""

from __future__ import annotations

import hashlib
import json
import uuid
from dataclasses import dataclass, field
from datetime import UTC, datetime, timedelta
from typing import Any

from app.compliance.codes import codes
from app.journal.identity import uuid7

Body = dict[str, Any]
NOON = datetime(2031, 6, 1, 12, 0, tzinfo=UTC)
CODES = list(codes(1000, 40))


@dataclass
class Device:
    """A tablet: numbers its entries and chains them."""

    by: str
    id: str = field(default_factory=lambda: str(uuid.uuid4()))
    incarnation: str = field(default_factory=lambda: str(uuid.uuid4()))
    n: int = 0
    prev: str | None = None
    now: datetime = NOON

    def make(self, kind: str, about: str, body: Body, **changed: Any) -> str:
        """Return the text of the next entry."""
        self.n += 1
        self.now += timedelta(seconds=1)
        entry = {
            "id": uuid7(int(self.now.timestamp() * 1000)),
            "device": self.id,
            "incarnation": self.incarnation,
            "n": self.n,
            "prev": self.prev,
            "kind": kind,
            "version": 1,
            "about": about,
            "at": self.now.isoformat(timespec="milliseconds"),
            "zone": "America/Denver",
            "skew_ms": 0,
            "by": self.by,
            "base": 0,
            "body": body,
            "blobs": [],
        } | changed
        text = json.dumps(entry, ensure_ascii=False)
        self.prev = hashlib.sha256(text.encode("utf-8", "surrogatepass")).hexdigest()
        return text


def measured(text: str, unit: str) -> Body:
    """Return a measured value as it is typed."""
    return {"text": text, "unit": unit}


STANDARDS = (
    ("0", ["0,000", "0.001"]),
    ("100", ["0.038", "0.039"]),
    ("250", ["0.0955", "0.0945"]),
    ("500", ["0.191", "0.189"]),
    ("750", ["0.285", "0.2865"]),
    ("900", ["0.342", "0.343"]),
)
RECIPE: Body = {
    "name": "High range, 16 mm tube",
    "source": "EPA Method 410.4, revision 2.0 (1993)",
    "sample_ml": "2.5",
    "digestion_solution_ml": "1,5",
    "acid_reagent_ml": "3.5",
    "dichromate_g_per_l": "10.216",
    "mercury_sulfate_g_per_l": "33.3",
    "silver_sulfate_g_per_l": "10.12",
    "wavelength_nm": "600",
    "working_low": "20",
    "working_high": "900",
    "temperature_c": "150",
    "minutes": "120",
    "order": ["sample", "digestion solution", "acid reagent"],
}


def setting_up(office: Device) -> list[str]:
    """Return what makes a programme ready: discharger, point, limit, recipe, stores, curve."""
    return [
        office.make(
            "discharger.registered",
            "hollin",
            {"name": "Hollin Vale Creamery", "sector": "dairy", "address": "4 Cold Store Way"},
        ),
        office.make(
            "point.registered",
            "outlet-b",
            {
                "discharger": "hollin",
                "name": "Outlet B",
                "access": "flume chamber behind the cold store",
                "hazards": ["traffic"],
                "sample_kind": "grab",
                "flow_device": None,
            },
        ),
        office.make(
            "limit.set",
            "outlet-b",
            {
                "basis": "daily_maximum",
                "value": measured("1500", "mg/L"),
                "from": "2031-03-01",
                "source": "Permit EV-014, part 2",
            },
        ),
        office.make("recipe.adopted", "high", RECIPE),
        office.make(
            "lot.made",
            "lot-1",
            {"recipe": "high", "name": "D-31-014", "made_on": "2031-05-01", "expires_on": "2032-05-01"},
        ),
        office.make("instrument.added", "photometer", {"name": "Photometer 2", "what": "photometer"}),
        office.make("instrument.added", "block", {"name": "Block 1", "what": "block", "positions": 25}),
        office.make("container.opened", "waste", {"name": "Container 12", "capacity_ml": "5000"}),
        office.make(
            "calibration.made",
            "curve",
            {
                "recipe": "high",
                "lot": "lot-1",
                "instrument": "photometer",
                "wavelength_nm": "600",
                "model": "linear",
                "valid_until": "2031-09-01",
                "standards": [{"cod": cod, "absorbance": read} for cod, read in STANDARDS],
            },
        ),
    ]


def sample(tablet: Device, id_: str, code: str, **changed: Any) -> str:
    """Return the entry of a grab sample."""
    body: Body = {
        "point": "outlet-b",
        "bottle": code,
        "sample_kind": "grab",
        "collected_at": "2031-05-29T08:00:00-06:00",
        "field": {"conductivity_us_cm": measured("1,84", "mS/cm"), "ph": measured("7.1", "pH")},
        "activity": "production",
        "appearance": "white foam",
        "preservation": {"acid": True, "ph": measured("1.6", "pH"), "cooled": True},
        "plan": None,
        "note": "",
    }
    return tablet.make("sample.taken", id_, body | changed)


def received(bench: Device, code: str, **changed: Any) -> str:
    """Return the entry of a receipt."""
    body: Body = {
        "bottle": code,
        "temperature": measured("3.8", "Cel"),
        "ph": measured("1.7", "pH"),
        "seal": "intact",
        "container": "sound",
        "label_agrees": True,
        "decision": "accepted",
        "reasons": [],
        "note": "",
    }
    return bench.make("bottle.received", code, body | changed)


def planned(bench: Device, run: str, code: str, factor: float = 5, **changed: Any) -> str:
    """Return the entry of a run: three blanks, a verification, one sample in triplicate."""
    dilution = {
        "factor": factor,
        "steps": [{"pipette_ml": 20, "flask_ml": 20 * factor}],
        "relative_u": 0.0012,
        "reason": "most likely in range",
    }
    tubes: list[Body] = [{"position": p, "role": "blank"} for p in (1, 2, 3)]
    tubes += [{"position": 4, "role": "verification", "expected": "500"}]
    tubes += [{"position": p, "role": "sample", "bottle": code, "dilution": dilution} for p in (5, 6, 7)]
    body: Body = {
        "name": "Run of 30 May, morning",
        "recipe": "high",
        "lot": "lot-1",
        "instrument": "photometer",
        "block": "block",
        "calibration": "curve",
        "container": "waste",
        "tubes": tubes,
    }
    return bench.make("run.planned", run, body | changed)


GATES = ("hood_on", "chloride_within_limit", "order_of_addition", "caps_tight", "block_at_temperature")


def heated(bench: Device, run: str) -> list[str]:
    """Return the entries from the first gate to the cooled rack."""
    texts = [
        bench.make(
            "gate.confirmed",
            run,
            {"gate": gate} | ({"value": measured("150.4", "Cel")} if gate == "block_at_temperature" else {}),
        )
        for gate in GATES
    ]
    texts.append(
        bench.make(
            "heating.started",
            run,
            {"started_at": bench.now.isoformat(), "minutes": 120, "temperature": measured("150", "Cel")},
        )
    )
    bench.now += timedelta(minutes=120)
    texts.append(
        bench.make("heating.ended", run, {"ended_at": bench.now.isoformat(), "complete": True, "reason": ""})
    )
    bench.now += timedelta(minutes=25)
    texts.append(bench.make("gate.confirmed", run, {"gate": "cooling_done"}))
    return texts


READINGS = ("0.011", "0.010", "0,012", "0.2015", "0.179", "0.181", "0.180")


def reading(bench: Device, run: str, position: int, text: str, **changed: Any) -> str:
    """Return the entry of one reading."""
    body: Body = {"position": position, "absorbance": measured(text, "AU"), "colour": "orange"}
    return bench.make("tube.read", run, body | changed)


def read(bench: Device, run: str, readings: tuple[str, ...] = READINGS) -> list[str]:
    """Return the readings of a run and their end."""
    texts = [reading(bench, run, position, text) for position, text in enumerate(readings, start=1)]
    return [*texts, bench.make("readings.finished", run, {})]


def closed(bench: Device, run: str, decisions: list[Body] | None = None) -> list[str]:
    """Return the last gate and the closing of a run."""
    return [
        bench.make("gate.confirmed", run, {"gate": "waste_container"}),
        bench.make("run.closed", run, {"decisions": decisions or []}),
    ]


def study(bench: Device, id_: str = "study-1") -> list[str]:
    """Return the entries of a finished detection limit study of the days before :data:`NOON`."""
    days = ["2031-05-20", "2031-05-21", "2031-05-27"]
    plan: Body = {"name": "High range, first study", "recipe": "high", "instruments": ["photometer"]}
    plan |= {"estimate": measured("4", "mg/L"), "level": measured("10", "mg/L"), "days": days, "note": ""}
    texts = [bench.make("study.planned", id_, plan)]
    for i, typed in enumerate(("9.2", "10.8", "8.7", "11,1", "9.9", "10.4", "8.5")):
        for tube, result in (
            ("spike", measured(typed, "mg/L")),
            ("blank", None if i else measured("1", "mg/L")),
        ):
            row: Body = {"row": f"{tube}-{i}", "tube": tube, "on": days[i % 3], "batch": f"Run {i % 3 + 1}"}
            row |= {"instrument": "photometer", "result": result, "run": None, "position": None}
            texts.append(bench.make("study.result", id_, row | {"left_out": "", "reason": ""}))
    return [*texts, bench.make("study.finished", id_, {"keep": False, "note": ""})]


def beside(bench: Device, code: str, **species: str) -> str:
    """Return the entry of what was measured beside the COD of a bottle, in mg/L."""
    given = {name: measured(text, "mg/L") for name, text in species.items()}
    body = {"bottle": code, "species": given, "how": "strip; photometer", "note": ""}
    return bench.make("bottle.measured", code, body)


def whole_path(person: str, code: str = CODES[0], run: str = "run-1") -> list[str]:
    """Return every entry from the programme's points to the accepted result."""
    device = Device(person)
    return [
        *setting_up(device),
        sample(device, "sample-1", code),
        device.make(
            "custody.handed_over",
            "hand-1",
            {"bottles": [code], "to": "laboratory refrigerator", "temperature": None, "note": ""},
        ),
        received(device, code),
        planned(device, run, code),
        *heated(device, run),
        *read(device, run),
        *closed(device, run),
        device.make("result.reviewed", f"{run}:{code}", {"decision": "accepted", "reason": ""}),
    ]


def visiting(person: str) -> list[str]:
    """Return a round with one stop, its visit going on after a gas alarm that was confirmed, and a flow."""
    d = Device(person)
    at = "2031-05-29T08:00:00-06:00"
    stop = {"id": "stop-1", "point": "outlet-b", "sample_kind": "grab", "bottles": 1, "note": ""}
    begun = {"round": "round-1", "stop": "stop-1", "point": "outlet-b", "arrived_at": at, "introduced": True}
    present = {"present": [{"name": "L. Marsden", "title": "shift lead", "phone": ""}], "activity": None}
    gas = {"at": at, "meter": "", "oxygen_percent": "20.9", "lel_percent": "0", "co_ppm": "0"}
    flow: Body = dict.fromkeys(("head_error", "tail", "volume", "seconds", "register_start", "register_end"))
    flow |= {
        "at": at,
        "head": measured("0.5", "ft"),
        "count": None,
        "meter": measured("230", "gpm"),
        "note": "",
    }
    flow["device"] = {"type": "v-notch 90", "size": None, "crest": None, "crest_height": None}
    check: Body = {"what": "check", "quantity": "pH", "at": at, "slope_percent": None, "passed": None}
    check |= {"points": [{"reference": "7", "read": "7.2", "lot": ""}], "note": ""}
    plan = {"name": "North round", "day": "2031-05-29", "inspector": None, "stops": [stop]}
    return [
        d.make("instrument.added", "field-meter", {"name": "Field meter 3", "what": "meter"}),
        d.make("meter.checked", "field-meter", check),
        d.make("round.planned", "round-1", plan),
        d.make("visit.begun", "visit-1", begun | present | {"production": "", "weather": "dry"}),
        d.make("gas.tested", "visit-1", gas | {"h2s_ppm": "12"}),
        d.make("gas.tested", "visit-1", gas | {"h2s_ppm": "1"}),
        d.make("gas.confirmed", "visit-1", {"note": "aired for five minutes"}),
        d.make("flow.measured", "visit-1", flow),
    ]
