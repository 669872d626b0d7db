"""Will it match, and where does it point?"""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.sheets import checks
from wavejig.sheets.model import number
from wavejig.sheets.report.markup import Element, el
from wavejig.sheets.report.matchplot import SweepShown, match_plot
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.polarplot import hung, polar_plots
from wavejig.sheets.report.reflectionchart import reflection_chart
from wavejig.sheets.report.tables import figure, table

_MOST_SWEEPS = 3  # more lines than that cannot be told apart; the worst are shown
NOT_SOLVED = "Not predicted: this pack was built without the field solver."


def sweeps_shown(r: Report) -> tuple[SweepShown, ...]:
    """The measured sweeps to lay over, worst first."""
    if r.measured is None:
        return ()
    worst = sorted(r.measured.articles, key=lambda a: (a.worst_db, a.sweep.serial))[:_MOST_SWEEPS]
    return tuple(
        SweepShown(
            name=f"serial {a.sweep.serial}, worst {a.worst_db:.1f} dB",
            frequencies_hz=a.sweep.frequencies_hz,
            reflection=a.sweep.reflection,
        )
        for a in worst
    )


def match_answer(r: Report) -> str:
    """Verdict in one sentence."""
    p = r.prediction
    if p is None:
        return NOT_SOLVED
    verdict = "Yes, as predicted" if p.meets_target else "No, as predicted"
    return (
        f"{verdict}: worst return loss in the band {p.worst.return_loss_db:.1f} dB, wanted {number(p.wanted_db)} dB; "
        f"{p.gain_dbi:.1f} dBi straight ahead."
    )


def match_section(r: Report) -> Iterator[Element]:
    """The section's inside."""
    p = r.prediction
    if p is None:
        yield el("p", NOT_SOLVED, " ", el("code", f"wavejig match {r.design.name}.toml"), " predicts it.")
        return
    yield el("p", match_answer(r))
    yield el(
        "p",
        f"Predicted, not measured; seen {p.reference_plane}, in {number(p.reference_ohm)} \u03a9, in free space. "
        "A sweep "
        "taken elsewhere along the cable turns the impedance chart, not the return loss.",
        class_="soft",
    )  # fmt: skip
    for remark in p.remarks:
        yield el("p", el("b", "The solver remarks: "), str(remark.message), class_="soft")
    sweeps = sweeps_shown(r)
    if r.measured is not None and len(r.measured.articles) > len(sweeps):
        yield el(
            "p",
            f"Of {len(r.measured.articles)} measured sweeps the {len(sweeps)} worst are drawn.",
            class_="soft",
        )
    yield el(
        "div",
        figure("Return loss over the band (a good match dips)", *match_plot(p, sweeps)),
        figure("Impedance over frequency, on the reflection chart, in ohm", *reflection_chart(p, sweeps)),
        class_="pair",
    )
    rows = [row[:-1] for row in checks.bench(r.design, p)]
    yield table("Predicted match", checks.BENCH_HEAD[:-1], rows, numbers=(1, 2, 3))
    polarisation = r.design.polarisation
    compass, height = polar_plots(p, r.design.reflector.up, polarisation)
    yield el("h3", "Where it points")
    yield el(
        "p",
        f"Hung for {polarisation} polarisation: edge {r.design.reflector.up}, marked THIS EDGE UP, uppermost. Left and "
        "right as seen by somebody behind the antenna who looks along the beam.",
    )  # fmt: skip
    yield el(
        "div",
        figure(f"Round the compass, gain at {checks.mhz(p.middle_hz)}", *compass),
        figure(f"Up and down, gain at {checks.mhz(p.middle_hz)}", *height),
        class_="pair",
    )
    yield table("Radiation at the band's middle", ("figure", "predicted"), _radiation(r), numbers=(1,))


def _radiation(r: Report) -> Iterator[tuple[str, str]]:
    p = r.prediction
    assert p is not None
    yield "gain straight ahead", f"{p.gain_dbi:.1f} dBi"
    ways = ("round the compass", "up and down")
    for way, cut in zip(ways, hung(p, r.design.reflector.up), strict=True):
        width = cut.source.beamwidth_deg
        yield f"half-power width {way}", "full circle" if width is None else f"{width:.0f}\u00b0"
    yield "front to back", f"{p.pattern.front_to_back_db:.0f} dB"
    yield "power that is radiated, not lost as heat", f"{100.0 * p.pattern.efficiency:.1f} %"
