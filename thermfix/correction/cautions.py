"""Reasons to distrust a reading, or to have none: one table of codes, rules, plain sentences and what to do."""

from dataclasses import dataclass
from enum import IntEnum


class Reason(IntEnum):
    """Why a pixel has no surface temperature (0 = it has one)."""

    READ = 0
    NO_VALUE = 1
    OUTSIDE_CALIBRATION = 2
    NO_EMISSION = 3
    OUTSIDE_RANGE = 4
    TOO_OBLIQUE = 5
    TOO_SMALL = 6
    TOO_UNCERTAIN = 7
    SATURATED = 8


@dataclass(frozen=True, slots=True)
class Caution:
    """A coded reason to distrust a reading: what was found and what to do about it."""

    code: str
    sentence: str
    advice: str


@dataclass(frozen=True, slots=True)
class Rule:
    """One row of the table: when the caution is raised, what it says, what to do. ``stops`` = no reading."""

    code: str
    rule: str
    sentence: str
    advice: str
    stops: bool = False


_ROWS = (
    Rule("no-value", "no pixel of the region holds a number",
         "The frame has no number here.", "Check the frame; use another one.", stops=True),
    Rule("outside-calibration", "no pixel lies within the calibration or the camera's temperatures",
         "The stored values lie outside the calibration.", "Measure again in a fitting range of the camera.",
         stops=True),
    Rule("saturated", "no pixel lies below the highest number its type can hold",
         "The signal is saturated.", "Measure again in a higher range of the camera.", stops=True),
    Rule("no-emission", "the signal left after reflection and air is not positive in every pixel",
         "Nothing is left of the signal once reflection and air are taken away.",
         "Check emissivity and reflected temperature: at least one of them is wrong.", stops=True),
    Rule("outside-range", "every surface temperature falls outside −60 to 3000 °C",
         "The surface temperature falls outside what can be carried.", "Check emissivity and reflected temperature.",
         stops=True),
    Rule("too-oblique", "view angle over 80° in every pixel",
         "The surface is seen too obliquely for a reading.", "Take the frame from nearer the surface normal.",
         stops=True),
    Rule("too-small", "no pixel holds a fifth or more of the region's own signal",
         "The region fills too little of any pixel for a reading.", "Go nearer, or use a longer lens.", stops=True),
    Rule("too-uncertain", "U is over 10 K and over the difference between the surface and what it mirrors",
         "The surface cannot be told from what it mirrors.",
         "Put a patch of known high emissivity on it, or measure by contact.", stops=True),
    Rule("missing-pixels", "some pixels of the region have no reading",
         "Some pixels have no reading.", "Look at the grid for where; make the region smaller."),
    Rule("partly-saturated", "some pixels hold the highest number their type can hold",
         "Part of the region is saturated: it is hotter than the mean says.",
         "Measure again in a higher range of the camera."),
    Rule("clipped", "part of the region lies outside the frame",
         "The region is cut off by the edge of the frame.", "Redraw it, or take it as the visible part only."),
    Rule("under-resolved", "the region is narrower than 3 pixels",
         "The region is too narrow for pixels of its own, so it is mixed with its surroundings.",
         "Go nearer; or mark it as a small target with the camera's blur, which unmixes it."),
    Rule("view-unstated", "emissivity goes with the angle and no view is given",
         "Nobody said how the surface is seen; it was taken as facing the camera.", "Give the region a view."),
    Rule("path-clear", "neither distance nor transmittance is given",
         "The air was taken as clear because no distance was given.", "Give distance_m."),
    Rule("thick-air", "in-band transmittance of the air below 0.5",
         "The air takes away more than half of the signal.", "Measure from nearer."),
    Rule("grazing-view", "mean view angle over 60°",
         "The surface is seen at a grazing angle, where emissivity falls fast.",
         "Measure from nearer the surface normal."),
    Rule("reflection-dominated", "less than half of the signal is the surface's own emission",
         "Most of the signal is not the surface's own.", "Put a patch of known high emissivity on it, or shield it."),
    Rule("low-emissivity", "emissivity below 0.5 and U over 5 K",
         "The low emissivity leaves the reading this uncertain.",
         "Put a patch of known high emissivity on it, or measure by contact."),
    Rule("window-hot", "the window's own emission makes over a fifth of the signal",
         "The window itself sends much of the signal.", "Measure its temperature, let it cool, or use a clearer one."),
    Rule("window-mirror", "what the window mirrors makes over a fifth of the signal",
         "The window mirrors much of what stands on the camera's side.", "Shade the window, or turn it a little."),
    Rule("window-material", "the window is given by its material, whose data have a limit",
         "The window's optical data are those of a clean uncoated plate.", "Measure its transmittance in place."),
    Rule("material-varies", "the material carries a warning",
         "The material's emissivity varies.", "Measure its emissivity, or put a patch of known emissivity on it."),
    Rule("curved", "the Monte Carlo interval reaches more than 10 % of U beyond y ± U",
         "The uncertainty is lopsided, so that y ± U would promise too much; a Monte Carlo interval stands instead.",
         "Read the interval, not the single number; reduce the largest row of the budget."),
    Rule("used-to-solve", "an input was solved from this region",
         "An input was found from this region, so its reading is no evidence of its own.",
         "Judge by the regions that use the input."),
    Rule("outside-material", "surface temperature outside the range the material's emissivity was stated for",
         "The material's emissivity was not stated for this temperature.", "Measure its emissivity there."),
)  # fmt: skip

CAUTIONS: dict[str, Rule] = {row.code: row for row in _ROWS}
"""All cautions by code."""

CODE_OF_REASON = {
    Reason.NO_VALUE: "no-value",
    Reason.OUTSIDE_CALIBRATION: "outside-calibration",
    Reason.NO_EMISSION: "no-emission",
    Reason.OUTSIDE_RANGE: "outside-range",
    Reason.TOO_OBLIQUE: "too-oblique",
    Reason.TOO_SMALL: "too-small",
    Reason.TOO_UNCERTAIN: "too-uncertain",
    Reason.SATURATED: "saturated",
}
"""Which caution a whole region without a reading gets."""


def caution(code: str, detail: str = "") -> Caution:
    """Return the caution of a code, its sentence followed by what was found."""
    row = CAUTIONS[code]
    sentence = f"{row.sentence.rstrip('.')}: {detail}." if detail else row.sentence
    return Caution(code, sentence, row.advice)
