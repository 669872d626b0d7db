"""What is engraved into a spacer piece: its letter, the recipe's name, the standoff, the way out."""

from __future__ import annotations

from wavejig.geometry import lettering
from wavejig.geometry.plane import Stroke
from wavejig.spacer.profile import Frame

# Common practice, no source: what a 0.4 mm nozzle shows clearly.
LINE_MM = 0.6
DEPTH_MM = 0.6
LEAST_TEXT_MM = 2.6
MOST_TEXT_MM = 5.0
EDGE_MM = 0.9  # between lettering and an edge
LEAST_BAND_MM = LEAST_TEXT_MM + LINE_MM + 2.0 * EDGE_MM


def piece_marks(
    piece_name: str,
    recipe_name: str,
    standoff_mm: float,
    band: tuple[float, float, float, float],
    frame: Frame,
) -> tuple[str, tuple[Stroke, ...]]:
    """The text and its strokes in x, y, with an arrow along the pull.

    band: u from, u to, v from, v to of the flat top. The longest of "A name 15.35 mm", "A 15.35 mm" and
    "A" that fits at a legible height is written; none where not even the letter fits.
    """
    u0, u1, v0, v1 = band
    letter = piece_name.rsplit("-", 1)[-1].upper()
    most = min(MOST_TEXT_MM, v1 - v0 - 2.0 * EDGE_MM - LINE_MM)
    room = u1 - u0 - 2.0 * EDGE_MM - LINE_MM
    size = f"{round(standoff_mm, 2):g} mm"
    for text in (f"{letter} {recipe_name} {size}", f"{letter} {size}", letter):
        wide = lettering.text_width_mm(text, 1.0) + 0.9  # an arrow's box beside it
        height = min(most, room / wide)
        if height >= LEAST_TEXT_MM - 1e-9:
            break
    else:
        return "", ()
    left = (u0 + u1) / 2.0 - wide * height / 2.0
    base = (v0 + v1) / 2.0 - height / 2.0
    chains = [s.points for s in lettering.strokes(text, height, x_mm=left, y_mm=base)]
    tip = left + (wide - 0.3) * height
    chains.append(((tip, base), (tip, base + height)))
    wing = 0.3 * height
    chains.append(
        ((tip - wing, base + height - wing), (tip, base + height), (tip + wing, base + height - wing))
    )
    return text, tuple(Stroke(points=tuple(frame.world(chain))) for chain in chains)
