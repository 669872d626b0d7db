"""What do I measure, and what do I change?"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from wavejig.sheets import checks
from wavejig.sheets.model import number
from wavejig.sheets.report.markup import Element, el
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.tables import table

if TYPE_CHECKING:
    from wavejig.tuning.measured import Article, Measured

_MEASURABLE = ("side", "lobe_diameter", "standoff", "feed_gap")

# What a bench sees and what it speaks for; each follows from how a loop before a sheet works. Common
# practice, no source.
_SYMPTOMS = (
    ("the dip lies too low in frequency", "loops too long: shorten the side (or the lobes' diameter)"),
    ("the dip lies too high", "loops too short: lengthen the side"),
    ("the dip is in place but shallow", "standoff, feed gap or {feed}: compare each with its nominal"),
    ("no dip at all", "a joint that is none, a short at the pin, or the analyser's calibration"),
    ("it changes when the cable is touched", "current on the cable's outside: check the ground joint"),
)


def measure_answer(r: Report) -> str:
    """In one sentence."""
    return f"{len(_wanted(r))} things on the first article, then its return loss over the band."


def measure_section(r: Report) -> Iterator[Element]:
    """The section's inside."""
    yield el(
        "p", "Measure the first one before making the rest. The build sheet has the same list to write on: ",
        _link(r, "build-sheet.pdf"), ".",
    )  # fmt: skip
    rows = [(c.what, c.how, c.nominal, c.limits or "yes or no", "") for c in _wanted(r)]
    yield table(
        f"First article; limits from the recipe's tolerances, else ISO 2768-{r.design.tolerances.grade}",
        ("what", "how", "nominal", "limits", "measured"), rows, write_in=(4,),
    )  # fmt: skip
    plane = f", calibrated {r.prediction.reference_plane}" if r.prediction is not None else ""
    t = r.design.target
    yield el("h3", "On the bench")
    yield el(
        "p",
        f"Reflection from {checks.mhz(t.band_low_hz)} to {checks.mhz(t.band_high_hz)} and some way beyond on both "
        f"sides{plane}; antenna towards free space, nothing metal within a few wavelengths "
        f"({number(t.wavelength_mm, 0)} mm each) before it. It passes with {number(t.return_loss_db)} dB or "
        "more over the "
        "whole band. Save the sweep as a Touchstone file (.s1p).",
    )  # fmt: skip


def change_answer(r: Report) -> str:
    """In one sentence."""
    m = r.measured
    if m is None:
        return "Depends on the first article's sweep; lay it over the prediction."
    if not m.changes:
        return f"{m.passing} of {len(m.articles)} measured pass; no change of the recipe is worth making."
    moves = ", ".join(f"{_name(c.key)} {c.now:.2f} to {c.new:.2f} mm" for c in m.changes)
    return f"{m.passing} of {len(m.articles)} measured pass; in the recipe: {moves}."


def change_section(r: Report) -> Iterator[Element]:
    """The section's inside."""
    yield el("p", change_answer(r))
    if r.measured is not None:
        yield from _measured(r.measured)
    else:
        yield el(
            "p", el("code", f"wavejig measured {r.design.name}.toml first.s1p"), " finds what came out differently, "
            "says what to do to this article and what to change in the recipe; with ", el("code", "--write"),
            " it puts that in.",
        )  # fmt: skip
    feed = "legs" if r.design.feed.style == "legs" else "height of the tube"
    symptoms = tuple((seen, where.format(feed=feed)) for seen, where in _SYMPTOMS)
    yield table("What the sweep looks like, and where to look", ("on the bench", "look at"), symptoms)
    yield el("h3", "Numbers that were not given in the recipe")
    rows = [
        (
            _name(k),
            f"{number(v.value, 3)} {_unit(v.unit)}".strip(),
            v.origin + (f": {v.source}" if v.source else ""),
        )
        for k, v in r.design.values
        if v.origin != "recipe"
    ]
    if rows:
        yield table(
            "Each can be fixed by writing it into the recipe", ("number", "value", "from"), rows, numbers=(1,)
        )
    else:
        yield el("p", "None: the recipe gives them all.")


def _measured(m: Measured) -> Iterator[Element]:
    rows = []
    for a in sorted(m.articles, key=lambda a: (a.worst_db, a.sweep.serial)):
        verdict = "passes" if a.passes else f"fails by {m.wanted_db - a.worst_db:.1f} dB"
        levers = "; ".join(f"{_name(x.key)} {x.move:+z.2f} {_unit(x.unit)}" for x in a.bench.levers)
        if a.strange:
            levers = "not explained by its dimensions: look for a bad joint, or something near it"
        rows.append((f"serial {a.sweep.serial}", f"{a.worst_db:.1f} dB", verdict, levers or "nothing"))
    yield table(
        "Measured articles", ("article", "in-band worst", "verdict", "do to this one"), rows, numbers=(1,)
    )
    worst = min(m.articles, key=lambda a: (a.worst_db, a.sweep.serial))
    yield table(
        f"What came out differently on serial {worst.sweep.serial}, the predicted frequency taken as right",
        ("dimension", "most plausible", "95 % interval", "a first article may be off by"),
        _deviations(worst),
        numbers=(1, 2, 3),
    )
    for other in worst.findings.right.or_else:
        slips = " and ".join(f"{_name(key)} {value:+z.2f} mm" for key, value in other.slipped)
        yield el("p", f"Or else, {100 * other.chance:.0f} % likely: {slips or 'nothing slipped'}.")
    if m.changes:
        moves = [(_name(c.key), f"{c.now:.2f} mm", f"{c.new:.2f} mm") for c in m.changes]
        yield table(
            f"Recipe, centreline sizes: then about {m.after_db:.1f} dB",
            ("number", "now", "new"),
            moves,
            numbers=(1, 2),
        )


def _deviations(a: Article) -> Iterator[tuple[str, str, str, str]]:
    for d in a.findings.right.deviations:
        if d.key in _MEASURABLE:
            low, high = d.interval
            value = f"{d.value:+z.2f} mm" if d.told else "cannot tell: take the calliper"
            yield _name(d.key), value, f"{low:+z.2f} to {high:+z.2f} mm", f"\u00b1{d.before:.2f} mm"


def _wanted(r: Report) -> tuple[checks.Check, ...]:
    i = r.inspection
    assert i.radiator and i.tray
    return checks.first_article(r.design, i.radiator, i.tray, r.pattern)


def _link(r: Report, path: str) -> Element | str:
    """A link if the pack has the file."""
    return el("a", path, href=path) if any(e.path == path for e, _ in r.files) else path


def _name(key: str) -> str:
    return key.replace("_", " ")


def _unit(unit: str) -> str:
    return {"deg": "\u00b0"}.get(unit, unit)
