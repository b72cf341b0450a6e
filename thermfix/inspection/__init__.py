"""Inspection files in and out.

``InspectionDocument`` is loaded when first asked for: reading an inspection does not need the library
that keeps comments.
"""

from typing import TYPE_CHECKING, Any

from thermfix.inspection.dump import to_mapping
from thermfix.inspection.reading import load_inspection, read_inspection
from thermfix.inspection.starter import starter_text
from thermfix.inspection.tables import read_table

if TYPE_CHECKING:
    from thermfix.inspection.document import InspectionDocument

__all__ = ["InspectionDocument", "load_inspection", "read_inspection", "read_table", "starter_text", "to_mapping"]


def __getattr__(name: str) -> Any:
    """Load the editable document, and with it the library that keeps comments, only when it is asked for."""
    if name != "InspectionDocument":
        raise AttributeError(f"module 'thermfix.inspection' has no attribute {name!r}")
    from thermfix.inspection.document import InspectionDocument

    return InspectionDocument
