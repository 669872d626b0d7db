"""Round ticks, and the plain pieces that every plot of the page is drawn with (SVG, y down)."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any

from wavejig.sheets.report.markup import Element, el, short

Pt = tuple[float, float]


def ticks(low: float, high: float, about: int = 6) -> tuple[float, ...]:
    """Round numbers from low to high, near `about` of them, in steps of 1, 2 or 5 times a power of ten."""
    raw = (high - low) / max(about, 1)
    power = 10.0 ** math.floor(math.log10(raw))
    step = next(s * power for s in (1.0, 2.0, 5.0, 10.0) if s * power >= raw * (1.0 - 1e-9))
    first = math.ceil(low / step - 1e-9)
    return tuple(k * step for k in range(first, math.floor(high / step + 1e-9) + 1))


def chain(points: Iterable[Pt], *, closed: bool = False) -> str:
    """Path data through points."""
    steps = [f"{short(x, 1)},{short(y, 1)}" for x, y in points]
    return f"M{steps[0]}L" + " ".join(steps[1:]) + ("Z" if closed else "") if len(steps) > 1 else ""


def line(a: Pt, b: Pt, class_: str) -> Element:
    """A straight."""
    return el("line", x1=a[0], y1=a[1], x2=b[0], y2=b[1], class_=class_)


def word(at: Pt, text: str, class_: str = "t", anchor: str = "start", **more: Any) -> Element:
    """One line of lettering on its base line."""
    return el("text", text, x=at[0], y=at[1], class_=class_, text_anchor=anchor, **more)


def mark(at: Pt, kind: str) -> Element:
    """A marker that is told by its shape: "low" points down, "high" points up, "middle" is round, "worst" a cross."""
    x, y = at
    if kind == "middle":
        return el("circle", cx=x, cy=y, r=5.0, class_="mark")
    if kind == "worst":
        cross = f"M{short(x - 5)},{short(y - 5)}l10,10m0,-10l-10,10"
        return el("path", d=cross, class_="cross")
    sign = 1.0 if kind == "low" else -1.0
    corners = ((x - 6.0, y - 5.0 * sign), (x + 6.0, y - 5.0 * sign), (x, y + 6.0 * sign))
    return el("path", d=chain(corners, closed=True), class_="mark")


def picture(
    wide: float, high: float, name: str, title: str, description: str, parts: Iterable[Element], **more: Any
) -> Element:
    """An SVG told to readers who do not see it; name: of its own, for the ids."""
    return el(
        "svg",
        el("title", title, id=f"{name}-title"),
        el("desc", description, id=f"{name}-desc"),
        parts,
        viewBox=f"0 0 {short(wide)} {short(high)}",
        id=name,
        role="img",
        aria_labelledby=f"{name}-title {name}-desc",
        **more,
    )


def key(rows: Iterable[tuple[str, str]], name: str) -> Element:
    """Line styles in words under a plot: (class of the line, what it is)."""
    return el(
        "ul",
        [
            el(
                "li",
                el("svg", _sample(class_), viewBox="0 0 34 12", aria_hidden="true"),
                el("span", text),
            )
            for class_, text in rows
        ],
        class_="key",
        aria_label=f"lines of the picture: {name}",
    )


def _sample(class_: str) -> Element:
    """A short stretch of a line, or the marker itself."""
    if class_ == "cross":
        return mark((17.0, 6.0), "worst")
    return line((0.0, 6.0), (34.0, 6.0), class_)
