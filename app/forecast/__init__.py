"""The expected range of a sample not yet measured, and the dilution to plan for it.

``predictive`` is the distribution every forecast is, ``posterior`` what a
point's past teaches, ``sectors`` where a point without a past starts,
``planning`` the dilutions with their chances. All pure; moments are days since
1970-01-01 UTC.
"""

from app.forecast.observations import Now, Observation
from app.forecast.planning import Plan, Planned, Range, Sample, Shelf, Split, plan
from app.forecast.posterior import Posterior, bounded_readings, expected, posterior
from app.forecast.predictive import Component, Predictive
from app.forecast.programme import Programme

__all__ = [
    "Component",
    "Now",
    "Observation",
    "Plan",
    "Planned",
    "Posterior",
    "Predictive",
    "Programme",
    "Range",
    "Sample",
    "Shelf",
    "Split",
    "bounded_readings",
    "expected",
    "plan",
    "posterior",
]
