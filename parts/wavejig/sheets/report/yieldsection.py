"""How many will pass?"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from wavejig.sheets.model import number
from wavejig.sheets.report.axes import line, picture, ticks, word
from wavejig.sheets.report.markup import Element, el, short
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.tables import figure, table

if TYPE_CHECKING:
    from wavejig.tuning.yields import Fraction, Yield

_WIDE, _HIGH, _LEFT, _FOOT = 420.0, 260.0, 46.0, 46.0
MODEL = "model_frequency"  # the key of `tuning.yields.FREQUENCY`, which loads the solver


def yield_answer(r: Report) -> str:
    """Verdict in one sentence."""
    y = r.yields
    if y is None:
        return f"Not worked out yet for this batch of {r.design.quantity}."
    return (
        f"About {y.expected:.1f} of {y.quantity} ({y.batch_low} to {y.batch_high} in nine batches of ten); "
        f"each passes with a chance of {_share(y.passing)}."
    )


def yield_section(r: Report) -> Iterator[Element]:
    """The section's inside."""
    y = r.yields
    yield el("p", yield_answer(r))
    if y is None:
        yield el(
            "p", el("code", f"wavejig yield {r.design.name}.toml"), " works it out with your shop's tolerances: the "
            "share that passes, the dimension that decides it, and the tolerance that would bring 95 %.",
        )  # fmt: skip
        return
    yield el(
        "p",
        f"As drawn the in-band worst is {y.nominal_db:.1f} dB, {number(y.wanted_db)} dB are wanted. If the predicted "
        f"frequency were right, {_share(y.shop)} would pass: the rest is the model's own uncertainty, which a measured "
        "first article takes away.",
    )  # fmt: skip
    yield figure("In-band worst return loss of the virtual articles (striped: fail)", _histogram(y))
    rows = [
        (d.title, f"{d.nominal:.2f} {d.unit}".strip(), f"\u00b1{d.plus_minus:.3f} {d.unit}".strip(),
         f"{100 * y.shares[d.key].total:.0f} %", f"{100 * y.shop_shares[d.key].total:.0f} %", d.source)
        for d in y.explored.spread.dimensions
    ]  # fmt: skip
    spread = y.explored.spread
    if spread.frequency_sigma > 0.0:
        share = f"{100 * y.shares[MODEL].total:.0f} %"
        error = f"{100 * spread.frequency_sigma:.2g} % standard error"
        rows.append(("model's frequency", "", error, share, "", spread.frequency_source))
    yield table(
        "Which dimension decides it: share of the spread, with all it acts together with",
        ("dimension", "nominal", "tolerance", "share", "shop only", "tolerance from"), rows, numbers=(1, 2, 3, 4),
    )  # fmt: skip
    yield table(
        "Tolerance that would bring 95 %", ("dimension", "now", "needed"), _remedies(y), numbers=(1, 2)
    )


def _remedies(y: Yield) -> Iterator[tuple[str, str, str]]:
    dimensions = {d.key: d for d in y.explored.spread.dimensions}
    for remedy in y.remedies:
        if remedy.key == "all":
            needed = "cannot be had so" if remedy.needed is None else f"{remedy.needed:.2f} of what they are"
            yield "all together", "as they are", needed
            continue
        d = dimensions[remedy.key]
        needed = (
            "not by this alone" if remedy.needed is None else f"\u00b1{remedy.needed:.2g} {d.unit}".strip()
        )
        yield d.title, f"\u00b1{remedy.now:.3g} {d.unit}".strip(), needed


def _histogram(y: Yield) -> Element:
    low, high = float(y.edges[0]), float(y.edges[-1])
    low, high = min(low, y.wanted_db - 0.5), max(high, y.wanted_db + 0.5)
    most = 100.0 * float(y.counts.max()) / max(float(y.counts.sum()), 1.0)

    def x(db: float) -> float:
        return _LEFT + (_WIDE - _LEFT - 10.0) * (db - low) / (high - low)

    def up(percent: float) -> float:
        return 10.0 + (_HIGH - 10.0 - _FOOT) * (1.0 - percent / (1.08 * most))

    floor = up(0.0)
    stripes = el(
        "defs",
        el("pattern", line((0.0, 0.0), (0.0, 6.0), "wanted"), id="yield-fails", width=6, height=6,
           patternUnits="userSpaceOnUse", patternTransform="rotate(45)"),
    )  # fmt: skip
    parts = [stripes]
    for percent in ticks(0.0, 1.08 * most, 4):
        parts += [line((_LEFT, up(percent)), (_WIDE - 10.0, up(percent)), "grid"),
                  word((_LEFT - 6.0, up(percent) + 4.0), f"{short(percent)} %", anchor="end")]  # fmt: skip
    for a, b, count in zip(y.edges[:-1], y.edges[1:], y.counts, strict=True):
        top = up(100.0 * float(count) / float(y.counts.sum()))
        fails = float(a + b) / 2.0 < y.wanted_db
        parts.append(
            el("rect", x=x(float(a)), y=top, width=x(float(b)) - x(float(a)), height=floor - top,
               class_="barfail" if fails else "bar")
        )  # fmt: skip
    for db in ticks(low, high, 6):
        parts.append(word((x(db), floor + 16.0), short(db), anchor="middle"))
    parts += [
        line((x(y.wanted_db), 10.0), (x(y.wanted_db), floor), "wanted"),
        line((_LEFT, floor), (_WIDE - 10.0, floor), "frame"),
        word((x(y.wanted_db) + 4.0, 22.0), f"wanted {number(y.wanted_db)} dB", class_="t halo"),
        word(((_LEFT + _WIDE) / 2.0, _HIGH - 8.0), "in-band worst return loss, dB", anchor="middle"),
    ]
    described = (
        f"Of {len(y.worst_db)} virtual articles {100 * y.passing.value:.1f} % reach {number(y.wanted_db)} dB; "
        "nine of ten lie "
        f"between {y.percentiles_db[0]:.1f} and {y.percentiles_db[2]:.1f} dB."
    )
    return picture(_WIDE, _HIGH, "yield-plot", "Virtual articles by return loss", described, parts)


def _share(f: Fraction) -> str:
    return f"{100 * f.value:.0f} % ({100 * f.low:.0f} to {100 * f.high:.0f} %)"
