"""What is engraved into a spacer piece: its letter, the recipe's name and version, the standoff, the way out."""

from __future__ import annotations

from wavejig.geometry import lettering
from wavejig.geometry.plane import Stroke
from wavejig.spacer.profile import Frame

# Common practice, no source: what a 0.4 mm nozzle shows clearly.
NOZZLE_MM = 0.4
READ_TEXT_MM = 2.0
LINE_MM = 0.6
DEPTH_MM = 0.6
LEAST_TEXT_MM = 2.5
MOST_TEXT_MM = 5.0
EDGE_MM = 0.7  # between lettering and an edge
LEAST_WALL_MM = 0.4  # between a letter's sharp corner and an edge
LEADING_MM = 0.9  # between two lines, groove to groove
LEAST_BAND_MM = LEAST_TEXT_MM + LINE_MM + 2.0 * EDGE_MM
_ARROW = 0.9  # width of the arrow's box beside the first line, in text heights


def line_mm(nozzle_mm: float) -> float:
    """Width of a groove: finer with a finer nozzle, never below what it can leave open."""
    return max(1.25 * nozzle_mm, LINE_MM * min(1.0, nozzle_mm / NOZZLE_MM))


def edge_mm(nozzle_mm: float) -> float:
    """Room between a groove's side and an edge: a sharp corner of a letter reaches beyond it by half its width."""
    return max(EDGE_MM, line_mm(nozzle_mm) / 2.0 + LEAST_WALL_MM)


def least_text_mm(nozzle_mm: float) -> float:
    """Least height of a capital: smaller with a finer nozzle, but still read without a glass."""
    return max(READ_TEXT_MM, LEAST_TEXT_MM * min(1.0, nozzle_mm / NOZZLE_MM))


def piece_marks(
    piece_name: str,
    recipe_name: str,
    version: str,
    standoff_mm: float,
    band: tuple[float, float, float, float],
    frame: Frame,
    nozzle_mm: float,
) -> tuple[str, tuple[Stroke, ...]]:
    """The text (lines apart by " / ") and its strokes in x, y, with an arrow along the pull.

    band: u from, u to, v from, v to of the flat top. Of letter, name, version and standoff as much is
    written as fits at a legible height, in one line or two; nothing where not even the letter fits.
    """
    groove, least, edge = line_mm(nozzle_mm), least_text_mm(nozzle_mm), edge_mm(nozzle_mm)
    u0, u1, v0, v1 = band
    letter = piece_name.rsplit("-", 1)[-1].upper()
    size = f"{round(standoff_mm, 2):g} mm"
    tall = v1 - v0 - 2.0 * edge - groove
    room = u1 - u0 - 2.0 * edge - groove
    state = f"V{version}"
    for lines in (
        (f"{letter} {recipe_name} {state} {size}",),
        (f"{letter} {size} {state}", recipe_name),
        (f"{letter} {size}", f"{recipe_name} {state}"),
        (f"{letter} {recipe_name} {state}",),
        (f"{letter} {state}", recipe_name),
        (f"{letter} {size}", state),
        (f"{letter} {size} {state}",),
        (f"{letter} {state}",),
        (letter, state),
        (letter,),
    ):
        gaps = (len(lines) - 1) * (LEADING_MM + groove)
        widths = [lettering.text_width_mm(line, 1.0) for line in lines]
        widths[0] += _ARROW
        height = min(MOST_TEXT_MM, (tall - gaps) / len(lines), room / max(widths))
        if height >= least - 1e-9:
            break
    else:
        return "", ()
    pitch = height + LEADING_MM + groove
    chains: list[tuple[tuple[float, float], ...]] = []
    top = (v0 + v1) / 2.0 + (height + (len(lines) - 1) * pitch) / 2.0
    for number, (line, wide) in enumerate(zip(lines, widths, strict=True)):
        left = (u0 + u1 - wide * height) / 2.0
        base = top - height - number * pitch
        chains += [s.points for s in lettering.strokes(line, height, x_mm=left, y_mm=base)]
        if number == 0:
            tip = (left + (wide - 0.3) * height, base + height)
            wing = 0.3 * height
            chains.append(((tip[0], base), tip))
            chains.append(((tip[0] - wing, tip[1] - wing), tip, (tip[0] + wing, tip[1] - wing)))
    return " / ".join(lines), tuple(Stroke(points=tuple(frame.world(chain))) for chain in chains)
