"""Writes the reference page of the library, so that the page cannot drift from the data."""

from itertools import groupby

from thermfix.materials.catalogue import library
from thermfix.materials.window_glass import window_material, window_materials
from thermfix.model import Estimate, Material

_LWIR_UM, _MWIR_UM = (7.0, 14.0), (3.0, 5.0)

_INTRODUCTION = """\
# Materials

The materials that come with thermfix, with their emissivity along the surface normal. This page is
written from the library's data.

- **LWIR** is the in-band emissivity for cameras within 7–14 µm, **MWIR** for 3–5 µm, each with its
  standard uncertainty. Where a column is empty no value is known well enough; none is copied from
  the other band.
- **n, k** stands for a table of optical constants: the emissivity then follows from Fresnel's
  equations, for any band inside the table's range (given beside it) and at every angle, as for an
  opaque and smooth piece. The uncertainty goes with the result.
- **Angle** says how the emissivity goes with the view angle: *diffuse* (no change), *dielectric* or
  *metal* (the Fresnel curve through the normal value).
- **m** marks values written down from memory of the source named, not copied from the page of a book.
- Handbook totals (over all wavelengths, often over the hemisphere) are not what a camera sees. Values
  that rest on them are indicative, and their uncertainty is wider. A measurement on site with tape,
  paint or a contact probe is better than any entry here.
"""


def materials_page() -> str:
    """Return the reference page of the library: markdown, one table a group, then warnings and sources."""
    parts = [_INTRODUCTION]
    for group, members in groupby(library().values(), key=lambda material: material.group):
        parts.append(_group(group, list(members)))
    parts.append(_windows())
    return "\n".join(parts)


def _group(group: str, materials: list[Material]) -> str:
    lines = [
        f"## {group.capitalize()}",
        "",
        "| material | LWIR | MWIR | angle | valid °C | source |",
        "|---|---|---|---|---|---|",
    ]
    sources: dict[str, int] = {}
    for material in materials:
        number = sources.setdefault(material.source, len(sources) + 1)
        mark = f"{number} m" if material.from_memory else f"{number}"
        cells = (*_values(material), material.angular.value, _range(material.valid_c), mark)
        lines.append(f"| {material.name} | {' | '.join(cells)} |")
    lines += ["", *(f"{number}. {source}" for source, number in sources.items())]
    remarks = [f"- **{m.name}**: {_remark(m)}" for m in materials if _remark(m)]
    if remarks:
        lines += ["", *remarks]
    return "\n".join([*lines, ""])


def _values(material: Material) -> tuple[str, str]:
    if material.nk is None:
        return _estimate(material.lwir), _estimate(material.mwir)
    wavelengths_um = material.nk.columns["wavelength_um"]
    first, last = wavelengths_um[0], wavelengths_um[-1]
    cell = f"n, k ± {material.u:g} ({first:.3g}–{last:.3g} µm)"
    lwir, mwir = (cell if first <= low and last >= high else "" for low, high in (_LWIR_UM, _MWIR_UM))
    return lwir, mwir


def _estimate(estimate: Estimate | None) -> str:
    return "" if estimate is None else f"{estimate.value:g} ± {estimate.u:g}"


def _range(valid_c: tuple[float, float] | None) -> str:
    return "" if valid_c is None else f"{valid_c[0]:g} to {valid_c[1]:g}"


def _remark(material: Material) -> str:
    return " ".join(text for text in (material.warning, material.note) if text)


def _windows() -> str:
    lines = [
        "## Windows",
        "",
        "Uncoated window materials with a published dispersion formula. A coated window has no entry: its",
        "transmittance and reflectance are measured or taken from its certificate.",
        "",
        "| material | range µm | source | beware |",
        "|---|---|---|---|",
    ]
    for name in window_materials():
        window = window_material(name)
        low, high = window.range_um
        lines.append(f"| {name} | {low:g}–{high:g} | {window.source} | {window.warning} |")
    return "\n".join([*lines, ""])
