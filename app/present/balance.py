"""Benefit beside harm: the outcomes of one sheet in the same form, each with its own risk, on one denominator."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from markupsafe import Markup

from app.appraisal.model import Appraisal, OutcomeAppraisal
from app.appraisal.sheet import Sheet
from app.present.effects import hull
from app.present.figures.strip import Marks, strip
from app.present.numerals import fixed, per_1000_decimals, sizes
from app.present.wording import FEWER_MORE, NAIVE, signed_spread


@dataclass(frozen=True, slots=True)
class BalanceRow:
    """One outcome: how many per 1000 without and with the intervention, and the change with its limits."""

    name: str
    horizon: str
    without: str
    with_it: str
    change: str
    interval: str
    strip: Markup
    part: bool
    naive: str


@dataclass(frozen=True, slots=True)
class BalanceView:
    """The rows, what they are per, and what keeps them apart."""

    rows: tuple[BalanceRow, ...]
    per: str
    level: str
    cautions: tuple[str, ...]


HORIZONS = "The outcomes refer to different times, or a time is not stated: they do not stand on one line."
COMPONENTS = "Components stand under their composite and are not added: one person can have several."
LEFT_OUT = "Left out, for more than one table fits or none: {names}."


def balance_view(sheet: Sheet, appraisal: Appraisal, level: str) -> BalanceView | None:
    """Two outcomes or more that one table fits; None where there are fewer."""
    rows: list[tuple[int, OutcomeAppraisal]] = [
        (i, found)
        for i, found in enumerate(appraisal.outcomes)
        if found.both is not None and found.both.fits.count == 1 and found.input.design != "case_control"
    ]
    if len(rows) < 2:
        return None
    names = [outcome.name.strip() or f"Outcome {i + 1}" for i, outcome in enumerate(sheet.outcomes)]
    reach = [end for _, found in rows if found.both for end in (*hull(found.both.measures["risk_difference"].default), 0.0)]
    shown = tuple(_row(names[i], found, (min(reach), max(reach))) for i, found in rows)
    cautions = []
    horizons = {found.input.horizon for _, found in rows}
    if len(horizons) > 1 or "" in horizons:
        cautions.append(HORIZONS)
    if any(row.part for row in shown):
        cautions.append(COMPONENTS)
    kept = {i for i, _ in rows}
    left = [name for i, name in enumerate(names) if i not in kept and appraisal.outcomes[i].input.claims]
    if left:
        cautions.append(LEFT_OUT.format(names=", ".join(left)))
    against = sheet.arms[1].strip() or "the comparator"
    horizon = f", {next(iter(horizons))}" if len(horizons) == 1 and "" not in horizons else ""
    return BalanceView(shown, f"per 1000 people{horizon}, against {against}; at the trial’s own risks", level, tuple(cautions))


def _row(name: str, found: OutcomeAppraisal, reach: Sequence[float]) -> BalanceRow:
    both = found.both
    if both is None:
        raise ValueError("an outcome without a table has no row")
    measure = both.measures["risk_difference"]
    low, high = hull(measure.default)
    estimate = measure.estimate.low
    decimals = per_1000_decimals([estimate], [low, high])
    change = signed_spread((estimate, estimate), sizes((estimate, estimate), 1000.0, decimals), FEWER_MORE)
    interval = signed_spread((low, high), sizes((low, high), 1000.0, decimals), FEWER_MORE)
    without, with_it = (fixed(1000.0 * arm.estimate.low, decimals) for arm in (both.comparator, both.intervention))
    drawn = strip(
        Marks(
            measure.estimate,
            low,
            high,
            0.0,
            False,
            lambda v, _step: fixed(1000 * v, 0),
            f"{name}: {change} per 1000, {interval}",
            tuple(reach),
        )
    )
    naive = NAIVE[found.input.follow_up]
    part = found.input.part_of == "component"
    return BalanceRow(name, found.input.horizon, without, with_it, change, interval, drawn, part, naive)
