"""What both front ends drive."""

from thermfix.session.batch import Grids, Outputs, PageReadings, Summary, correct_inspection

__all__ = ["Grids", "Outputs", "PageReadings", "Summary", "correct_inspection"]
