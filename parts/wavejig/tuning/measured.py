"""Measured articles against their prediction: verdicts, causes, what to change, and the batch as a whole."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np

from wavejig.recipe.models import Recipe
from wavejig.tuning.advice import BENCH_LEVERS, RECIPE_LEVERS, Proposal, new_value, propose
from wavejig.tuning.asbuilt import Nominal
from wavejig.tuning.explore import Explored
from wavejig.tuning.found import Findings, Fit, find
from wavejig.tuning.keptsurface import explored as explored_article
from wavejig.tuning.solving import Job, solve_all
from wavejig.tuning.spread import NORMAL_SIGMAS, spread
from wavejig.tuning.surface import reflection, worst_return_loss_db
from wavejig.tuning.sweepfile import BESIDE, MeasuredSweep
from wavejig.tuning.yields import FREQUENCY, Yield, find_yield

_CHECKED = 5  # frequencies of the solve that checks the surface at what was found
STRANGE = 2.0  # misfit above which something else than the dimensions is different


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Article:
    """One measured article. Return losses in dB, in-band worst.

    predicted_db: as drawn; as_found_db: predicted for the deviations found (the model taken as right);
    bench: what to do to this very article.
    """

    sweep: MeasuredSweep
    worst_db: float
    worst_hz: float
    passes: bool
    findings: Findings
    predicted_db: float
    as_read_db: float | None
    as_found_db: float
    bench: Proposal

    @property
    def strange(self) -> bool:
        """Whether the sweep is not explained by any plausible dimensions."""
        return self.findings.right.misfit > STRANGE or bool(self.findings.right.at_limit)


@dataclass(frozen=True, slots=True, kw_only=True)
class Change:
    """A recipe dimension to write: centreline value now and new."""

    key: str
    now: float
    new: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Measured:
    """All articles of one recipe, and what follows for it.

    proposal, changes: for the recipe, from the articles' mean deviations; after_db: its in-band worst,
    solved anew; check_db: the surface's error at what was found, by a solve of its own; frequency,
    frequency_error: the correction that replaces the model's own error.
    """

    explored: Explored
    wanted_db: float
    articles: tuple[Article, ...]
    proposal: Proposal
    changes: tuple[Change, ...]
    after_db: float
    check_db: float
    frequency: float
    frequency_error: float
    predicted: Yield | None

    @property
    def passing(self) -> int:
        """How many pass."""
        return sum(a.passes for a in self.articles)


def measure(
    recipe: Recipe,
    article: Nominal,
    sweeps: Sequence[MeasuredSweep],
    readings: Mapping[str, float],
    executor: Executor,
    *,
    posts: float = 0.0,
    told: Callable[[str], None] = lambda what: None,
) -> Measured:
    """Judge and explain every sweep. readings: of the one article that was swept, centreline mm; posts: as spread.

    Raises ArticleError when the articles about the design cannot be drawn.
    """
    known = spread(recipe, article, posts)
    explored = explored_article(
        article,
        known,
        executor,
        wide=True,
        least_margin=BESIDE,
        told=lambda done, of: told(f"solved {done} of {of}"),
    )
    told("fitting")
    sigma = recipe.measured.reading_error / NORMAL_SIGMAS
    target = article.design.target
    found = [find(explored, s, readings, sigma) for s in sweeps]
    judged = tuple(
        _judge(explored, s, f, readings, target.return_loss_db) for s, f in zip(sweeps, found, strict=True)
    )
    mean = {name: float(np.mean([f.open.get(name).value for f in found])) for name in explored.spread.names}
    share, share_sigma = _frequency(explored, [f.open for f in found])
    failing = any(not a.passes for a in judged)
    levers = RECIPE_LEVERS if failing or _typical_db(explored, mean, share) < target.return_loss_db else ()
    proposal = propose(explored, mean, share, levers, target.return_loss_db)
    changes, moved = _changes(explored, proposal)
    told("solving what was found and what is proposed")
    check_db, after_db = _solve_again(explored, executor, found[0], mean, moved, share)
    return Measured(
        explored=explored,
        wanted_db=target.return_loss_db,
        articles=judged,
        proposal=proposal,
        changes=changes,
        after_db=after_db,
        check_db=check_db,
        frequency=explored.spread.frequency * (1.0 + share),
        frequency_error=share_sigma,
        predicted=find_yield(explored, len(sweeps), target.return_loss_db) if len(sweeps) > 1 else None,
    )


def _judge(
    explored: Explored, sweep: MeasuredSweep, found: Findings, readings: Mapping[str, float], wanted_db: float
) -> Article:
    target = explored.article.design.target
    worst, at = sweep.worst_return_loss_db(target.band_low_hz, target.band_high_hz)
    deviations = _deviations(explored, found.right)
    bench = propose(explored, deviations, 0.0, BENCH_LEVERS if worst < wanted_db else (), wanted_db)
    nominal = {d.key: d.nominal for d in explored.spread.dimensions}
    read = {k: v - nominal[k] for k, v in readings.items() if k in nominal}
    return Article(
        sweep=sweep,
        worst_db=worst,
        worst_hz=at,
        passes=worst >= wanted_db,
        findings=found,
        predicted_db=_typical_db(explored, {}, 0.0),
        as_read_db=_typical_db(explored, read, 0.0) if read else None,
        as_found_db=_typical_db(explored, deviations, 0.0),
        bench=bench,
    )


def _deviations(explored: Explored, fit: Fit) -> dict[str, float]:
    return {name: fit.get(name).value for name in explored.spread.names}


def _typical_db(explored: Explored, deviations: Mapping[str, float], share: float) -> float:
    axes = explored.surface.axes
    values = axes.centre + np.array([deviations.get(n, 0.0) for n in axes.names])
    factor = np.array([explored.spread.frequency * (1.0 + share)])
    s = explored.surface.reflection(values[None, :], explored.band_hz, factor)
    return float(worst_return_loss_db(s)[0])


def _frequency(explored: Explored, fits: Sequence[Fit]) -> tuple[float, float]:
    """The model's error as all sweeps together see it: each article's is the same, its dimensions its own."""
    if not fits[0].has(FREQUENCY):
        return 0.0, 0.0
    prior = explored.spread.frequency_sigma
    precision, pull = 1.0 / prior**2, 0.0
    for fit in fits:
        d = fit.get(FREQUENCY)
        gained = max(1.0 / d.sigma**2 - 1.0 / prior**2, 0.0)  # what this sweep adds to the prior
        precision += gained
        pull += d.value / d.sigma**2
    return pull / precision, precision**-0.5


def _changes(explored: Explored, proposal: Proposal) -> tuple[tuple[Change, ...], dict[str, float]]:
    nominal = {d.key: d for d in explored.spread.dimensions}
    changes, moved = [], {}
    for lever in proposal.levers:
        d = nominal[lever.key]
        new = new_value(d.nominal, lever.move, d.unit)
        changes.append(Change(key=lever.key, now=d.nominal, new=new))
        moved[lever.key] = new - d.nominal
    return tuple(changes), moved


def _solve_again(
    explored: Explored,
    executor: Executor,
    first: Findings,
    mean: Mapping[str, float],
    moved: Mapping[str, float],
    share: float,
) -> tuple[float, float]:
    """The surface's error where the first article was found, and the proposed recipe's in-band worst."""
    axes, target = explored.surface.axes, explored.article.design.target
    few = np.linspace(target.band_low_hz, target.band_high_hz, _CHECKED)
    found = axes.centre + np.array([first.right.get(n).value for n in axes.names])
    after = axes.centre + np.array([mean.get(n, 0.0) + moved.get(n, 0.0) for n in axes.names])
    factors = explored.spread.frequency * np.array([1.0, 1.0 + share])
    article = explored.article
    if article.plan is None:  # the surface was kept, so nothing has been meshed yet
        article = article.meshed()
    jobs = [
        Job(
            nominal=article,
            values={n: float(v) for n, v in zip(axes.names, values, strict=True)},
            frequencies_hz=tuple(float(f) for f in few / factor),
        )
        for values, factor in zip((found, after), factors, strict=True)
    ]
    solved = worst_return_loss_db(reflection(np.array(solve_all(executor, jobs)), target.reference_ohm))
    guess = worst_return_loss_db(explored.surface.reflection(found[None, :], few, factors[:1]))
    return float(guess[0] - solved[0]), float(solved[1])
