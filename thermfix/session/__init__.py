"""What both front ends drive."""

from thermfix.session.batch import Grids, Outputs, PageReadings, Summary, correct_inspection, plan_of
from thermfix.session.explaining import Explanation, explain_region
from thermfix.session.library import correct

__all__ = [
    "Explanation",
    "Grids",
    "Outputs",
    "PageReadings",
    "Summary",
    "correct",
    "correct_inspection",
    "explain_region",
    "plan_of",
]
