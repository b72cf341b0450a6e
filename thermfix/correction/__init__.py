"""From stored numbers to surface temperatures: plan once per frame set-up, run per frame."""

from thermfix.correction.instrument import Instrument
from thermfix.correction.plan import Plan, make_plan
from thermfix.correction.results import FrameResult, Reading, RegionPixels
from thermfix.correction.run import run
from thermfix.correction.solve import solve
from thermfix.correction.unknowns import wanted

__all__ = ["FrameResult", "Instrument", "Plan", "Reading", "RegionPixels", "make_plan", "run", "solve", "wanted"]
