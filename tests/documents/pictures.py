"""The README's two pictures, drawn by the same renderers as the certificate's appendix.

``python -m tests.documents.pictures`` writes them; a test holds the committed
files to what the renderers draw now.
"""

from __future__ import annotations

from pathlib import Path

from app.documents.charts import rack_svg, strip_svg
from app.documents.charts.rack import RackTube
from app.documents.data import Mark, Strip, StripBar
from tests.documents.example import density

FOLDER = Path(__file__).resolve().parents[2] / "static" / "pictures"

STRIP = Strip(
    bars=(
        StripBar("2", 40, 1800, share_percent="46"),
        StripBar("5", 100, 4500, chosen=True, share_percent="94"),
        StripBar("10", 200, 9000, share_percent="91"),
    ),
    density=density(1900, 0.5),
    limits=(Mark(1500, "limit 1500"),),
)


def _tubes() -> tuple[RackTube, ...]:
    told: list[tuple[str, float | None, str, str, bool]] = [("blank", 0.0, "0", "", False)] * 3
    told += [("500", 0.49, "491", "", False), ("500", 0.49, "490", "", False)]
    told += [
        ("K7QF3P", share, number, "", False)
        for share, number in ((0.43, "431"), (0.45, "451"), (0.44, "441"))
    ]
    told += [
        ("M2XA9T", share, number, "", False) for share, number in ((0.2, "196"), (0.21, "206"), (0.2, "196"))
    ]
    told += [("P9TD4C", 0.65, "647", "", False), ("P9TD4C", 0.63, "627", "", False)]
    told += [("R4CW7K", 1.0, "", "over", True)] * 2
    return tuple(RackTube(i, *one) for i, one in enumerate(told, start=1))


def pictures() -> dict[str, str]:
    """Return each picture's file name and its text."""
    return {"strip.svg": strip_svg(STRIP), "rack.svg": rack_svg(_tubes())}


if __name__ == "__main__":
    for name, text in pictures().items():
        (FOLDER / name).write_text(text, encoding="utf-8")
