"""Frame files in."""

from thermfix.frames.frame_file import FrameFile
from thermfix.frames.opening import FRAME_ENDINGS, is_frame_name, load_frame, open_frame
from thermfix.frames.values import describe_values, unit_hints

__all__ = ["FRAME_ENDINGS", "FrameFile", "describe_values", "is_frame_name", "load_frame", "open_frame", "unit_hints"]
