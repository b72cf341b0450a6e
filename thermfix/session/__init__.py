"""What both front ends drive."""

from thermfix.session.batch import Grids, Outputs, PageReadings, Summary, correct_inspection
from thermfix.session.library import correct

__all__ = ["Grids", "Outputs", "PageReadings", "Summary", "correct", "correct_inspection"]
