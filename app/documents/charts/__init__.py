"""Every chart of Weirbook that the server draws: one module each, SVG text out.

The same picture serves a page (inline) and a PDF. Each has a title and a
description that says in words what is to be seen.
"""

from app.documents.charts.budget import budget_svg
from app.documents.charts.calibration import calibration_svg
from app.documents.charts.control import Control, ControlPoint, control_svg
from app.documents.charts.history import History, HistoryPoint, LimitLine, history_svg
from app.documents.charts.rack import RackTube, rack_svg
from app.documents.charts.strip import strip_svg
from app.documents.charts.tube import tube_svg

__all__ = [
    "Control",
    "ControlPoint",
    "History",
    "HistoryPoint",
    "LimitLine",
    "RackTube",
    "budget_svg",
    "calibration_svg",
    "control_svg",
    "history_svg",
    "rack_svg",
    "strip_svg",
    "tube_svg",
]
