"""One effect on every scale that may be held constant, and the risk with the intervention that follows at a starting risk."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

from app.measures.hazard import risk_with
from app.measures.translate import risk_from_odds_ratio

Floats = NDArray[np.float64]
Scale = Literal["risk_ratio", "odds_ratio", "hazard_ratio", "risk_difference"]
SCALES: tuple[Scale, ...] = ("risk_ratio", "odds_ratio", "hazard_ratio", "risk_difference")
Face = Literal["event", "complement"]
FACES: tuple[Face, ...] = ("event", "complement")


class Effect(NamedTuple):
    """An estimate with its limits; nan where there is none."""

    estimate: float
    low: float
    high: float


@dataclass(frozen=True, slots=True)
class Held:
    """An effect on one scale, taken to stay the same.

    `face` is what a risk ratio is of: the event, or being free of it. `converted` says that it was worked out from
    an effect on another scale at the trial's own comparator risk.
    """

    scale: Scale
    effect: Effect
    face: Face = "event"
    converted: bool = False


@dataclass(frozen=True, slots=True)
class Carried:
    """What follows at starting risks: arrays of one shape; nan where the risk would leave 0 to 1."""

    risk_with: Floats
    difference: Floats
    low: Floats
    high: Floats

    @property
    def possible(self) -> NDArray[np.bool_]:
        """Where the estimate is a risk."""
        return ~np.isnan(self.risk_with)


def risk_by(scale: Scale, value: Floats | float, starting_risk: Floats | float, face: Face = "event") -> Floats:
    """Risk with the intervention if an effect of this size holds at a starting risk.

    Parameters
    ----------
    scale : Scale
        What is held constant.
    value, starting_risk : array of float
        The effect, and the risk without the intervention [0 to 1]; they broadcast.
    face : Face
        For a risk ratio: of the event, or of being free of it.

    Returns
    -------
    array of float
        Risk [0 to 1]; nan where the assumption would take it out of that, or the effect is nan.

    References
    ----------
    higgins_2011 (risk and odds ratio), altman_andersen_1999 (hazard ratio).
    """
    size, risk = np.broadcast_arrays(np.asarray(value, dtype=np.float64), np.asarray(starting_risk, dtype=np.float64))
    with np.errstate(invalid="ignore"):
        if scale == "risk_difference":
            found = risk + size
        elif scale == "odds_ratio":
            found = risk_from_odds_ratio(size, risk)
        elif scale == "hazard_ratio":
            found = risk_with(size, risk)
        elif face == "complement":
            found = 1.0 - size * (1.0 - risk)
        else:
            found = size * risk
    slack = 1e-12
    outside = ~((found >= -slack) & (found <= 1.0 + slack)) | np.isnan(size)
    return np.where(outside, np.nan, np.clip(found, 0.0, 1.0))


def size_of(scale: Scale, risk: float, starting_risk: float) -> float:
    """The effect of the event that two risks make on a scale; nan where it cannot be stated."""
    with np.errstate(divide="ignore", invalid="ignore"):
        first, second = np.float64(risk), np.float64(starting_risk)
        if scale == "risk_difference":
            found = first - second
        elif scale == "risk_ratio":
            found = first / second
        elif scale == "odds_ratio":
            found = first / (1.0 - first) / (second / (1.0 - second))
        else:
            found = np.log1p(-first) / np.log1p(-second)
    return float(found) if np.isfinite(found) else float("nan")


def of_event(measure: Scale, effect: Effect, face: Face) -> Held:
    """An effect as given, turned to the event where that loses nothing: all but a risk ratio of being free of it."""
    if face == "event" or measure == "risk_ratio":
        return Held(measure, effect, face)
    estimate, low, high = effect
    if measure == "risk_difference":
        return Held(measure, Effect(-estimate, -high, -low))
    with np.errstate(divide="ignore"):
        turned = [float(np.float64(1.0) / np.float64(end)) for end in (estimate, high, low)]
    return Held(measure, Effect(*turned))


def on_every_scale(given: Held, comparator_risk: float | None) -> tuple[Held, ...]:
    """The effect on the four scales: as given on its own, worked out at the trial's comparator risk on the others."""
    found = []
    for scale in SCALES:
        if scale == given.scale:
            found.append(given)
            continue
        ends = [float("nan")] * 3
        if comparator_risk is not None:
            risks = [float(risk_by(given.scale, end, comparator_risk, given.face)) for end in given.effect]
            ends = [size_of(scale, risk, comparator_risk) for risk in risks]
            if given.scale == "risk_ratio" and given.face == "complement":
                ends = [ends[0], ends[2], ends[1]]
        found.append(Held(scale, Effect(*ends), converted=True))
    return tuple(found)


def carried(held: Held, starting_risks: Floats | float) -> Carried:
    """Risk with the intervention, and the difference with its limits, at each starting risk taken as known."""
    start = np.asarray(starting_risks, dtype=np.float64)
    risk, one, other = (risk_by(held.scale, end, start, held.face) for end in held.effect)
    ends = one - start, other - start
    if held.face == "complement" and held.scale == "risk_ratio":
        ends = ends[1], ends[0]
    return Carried(risk, risk - start, ends[0], ends[1])


def at_horizon(risk: Floats | float, of: float, to: float) -> Floats:
    """A risk over one time as the risk over another, if the hazard is constant: 1 - (1 - risk)^(to / of).

    Parameters
    ----------
    risk : array of float
        Risk [0 to 1] over the time `of`.
    of, to : float
        Times in one unit, above 0.

    References
    ----------
    altman_andersen_1999.
    """
    return risk_with(to / of, risk)
