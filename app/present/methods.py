"""The Methods page: every registered method, as it describes itself, with its coverage and its source."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache

from latex2mathml.converter import convert
from markupsafe import Markup

from app import __version__
from app.measures.coverage import Coverage, Size, effect_coverage, risk_coverage, size_of_test
from app.measures.registry import (
    RATE_EFFECTS,
    RATE_METHODS,
    RATE_TESTS,
    RISK_METHODS,
    STRATA_METHODS,
    STRATA_TESTS,
    TESTS,
    Described,
    effect_methods,
    everything,
)
from app.present.figures.coverage import coverage_line, coverage_map, size_line
from app.present.numerals import fixed
from app.reconstruct.blind_spot import Passing, blind_spot
from app.sources import SOURCES

_USE = {
    "usual": "often printed",
    "seldom": "seldom printed",
    "never": "hardly ever printed",
}


@dataclass(frozen=True, slots=True)
class PictureView:
    """One picture of coverage or size, with what it says in words."""

    title: str
    figure: Markup
    words: str


@dataclass(frozen=True, slots=True)
class MethodView:
    """One registered method."""

    anchor: str
    key: str
    name: str
    marks: str
    formula: Markup
    assumes: str
    caveat: str
    sources: tuple[str, ...]
    pictures: tuple[PictureView, ...]


@dataclass(frozen=True, slots=True)
class GroupView:
    """The methods of one measure."""

    anchor: str
    heading: str
    intro: str
    methods: tuple[MethodView, ...]


@dataclass(frozen=True, slots=True)
class SourceView:
    """One entry of the bibliography."""

    key: str
    text: str


@dataclass(frozen=True, slots=True)
class MethodsView:
    """`methods/methods.html`."""

    groups: tuple[GroupView, ...]
    only_checking: tuple[MethodView, ...]
    sources: tuple[SourceView, ...]
    passing: tuple[str, ...]
    version: str


def _percent(value: float, decimals: int = 1) -> str:
    return f"{fixed(100 * value, decimals)}%"


def _coverage_words(found: Coverage) -> str:
    return f"least {_percent(found.least)}, mean {_percent(found.mean)}, below 93% at {_percent(found.below_93)} of points"


def _maps(found: Iterable[Coverage], name: str) -> tuple[PictureView, ...]:
    return tuple(
        PictureView(
            f"{each.people} an arm",
            coverage_map(each, f"Coverage of {name}, {each.people} people an arm: {_coverage_words(each)}"),
            _coverage_words(each),
        )
        for each in found
    )


def _lines(found: Iterable[Coverage], name: str) -> tuple[PictureView, ...]:
    return tuple(
        PictureView(
            f"{each.people} people",
            coverage_line(each, f"Coverage of {name}, {each.people} people: {_coverage_words(each)}"),
            _coverage_words(each),
        )
        for each in found
    )


def _sizes(found: Iterable[Size], name: str) -> tuple[PictureView, ...]:
    return tuple(
        PictureView(
            f"{each.people} an arm",
            size_line(each, f"Size of {name} at 5%, {each.people} people an arm: largest {_percent(each.largest, 2)}"),
            f"largest {_percent(each.largest, 2)}",
        )
        for each in found
    )


def _method(row: Described, group: str, pictures: tuple[PictureView, ...] = ()) -> MethodView:
    marks = ["the default"] if row.default else []
    marks.append(_USE[row.printed_use])
    return MethodView(
        anchor=f"{group}-{row.key}",
        key=row.key,
        name=row.name,
        marks=", ".join(marks),
        formula=Markup(convert(row.formula, display="block")),
        assumes=row.assumes,
        caveat=row.caveat,
        sources=row.sources,
        pictures=pictures,
    )


_MAP_INTRO = (
    "Pictures: exact coverage of the nominal 95% interval, by full enumeration, over the true risks of both arms from 1% to 99% "
    "(intervention left to right, comparator bottom to top). White is 93 to 97%, grey short, black far short, tinted beyond "
    "97%. A table for which a method has no interval counts as covered."
)


@cache
def _passing() -> tuple[str, ...]:
    """The blind spot in sentences."""
    found = blind_spot()
    told = [
        f"P printed {size} too large, to two decimals: {_share(passing)} pass, as some usual test gives them."
        for size, passing in found["p"].items()
    ]
    told += [
        f"One limit of a risk ratio {size} {'unit' if size == '1' else 'units'} of its last digit off: {_share(passing)} pass."
        for size, passing in found["limit"].items()
    ]
    return tuple(told)


def _share(passing: Passing) -> str:
    return f"{fixed(100 * passing.passed / passing.tried, 0)}% of {passing.tried}"


def methods_view() -> MethodsView:
    """The whole page; the registry does not change while the program runs."""
    effects = (
        ("risk_difference", "Risk difference", "Risk in the intervention arm minus risk in the comparator arm. " + _MAP_INTRO),
        (
            "risk_ratio",
            "Risk ratio",
            "Risk over risk; the relative risk reduction is 1 less the ratio, by the same methods. Pictures as above.",
        ),
        ("odds_ratio", "Odds ratio", "Odds over odds, never a risk. Pictures as above."),
    )
    groups = [
        GroupView(
            "risk",
            "One risk",
            "Pictures: exact coverage of the nominal 95% interval from 80% to 100%, over a true risk from 1% to 99%; 95% dashed.",
            tuple(_method(m, "risk", _lines(risk_coverage(m.key), m.name)) for m in RISK_METHODS),
        ),
        *(
            GroupView(
                measure,
                heading,
                intro,
                tuple(
                    _method(m, measure, _maps(effect_coverage(measure, m.key), m.name))
                    for m in effect_methods(measure)  # type: ignore[arg-type]
                ),
            )
            for measure, heading, intro in effects
        ),
        GroupView(
            "needed",
            "Number needed to treat",
            "The reciprocal of the risk difference, its interval the inverted interval of the difference: through infinity where "
            "that runs across no difference. To benefit rounds up, to harm rounds down, limits outward, one decimal below 10, by "
            "exact fractions (altman_1998, bender_2001).",
            (),
        ),
        GroupView(
            "tests",
            "P of no difference",
            "Pictures: share of tables called different at 5% where there is no difference, from 0 to 10%, over the common risk; "
            "5% dashed. Tests on request are computed when asked for through the JSON interface.",
            tuple(_method(t, "tests", _sizes(size_of_test(t.key), t.name)) for t in TESTS if t.offered),
        ),
        GroupView(
            "rate", "One rate", "Events over person-time; never a risk.", tuple(_method(m, "rate") for m in RATE_METHODS)
        ),
        GroupView(
            "rate_effects",
            "Rate ratio and rate difference",
            "Of two arms; P values by the last three.",
            tuple(_method(m, m.measure) for m in RATE_EFFECTS) + tuple(_method(t, "rate_tests") for t in RATE_TESTS),
        ),
        GroupView(
            "strata",
            "Over strata",
            "Several tables of one comparison.",
            tuple(_method(m, f"strata_{m.measure}") for m in STRATA_METHODS)
            + tuple(_method(t, "strata_tests") for t in STRATA_TESTS),
        ),
        GroupView(
            "others",
            "From what is printed, and from other designs",
            "Through the JSON interface: hazard ratio to risk at a time (altman_andersen_1999); interval to P and back "
            "(altman_bland_2011_p, altman_bland_2011_interval); interaction of two estimates (altman_bland_2003); odds ratio to risk "
            "and to risk ratio at a starting risk (higgins_2011, zhang_yu_1998); E-value (vanderweele_ding_2017); design effect of "
            "clusters (donner_klar_2000); paired counts (mcnemar_1947, fagerland_2013); probability that one risk is lower "
            "(altham_1969).",
            (),
        ),
    ]
    hidden = tuple(_method(row, f"checking-{i}") for i, row in enumerate(everything()) if not row.offered)
    return MethodsView(
        tuple(groups), hidden, tuple(SourceView(k, t) for k, t in sorted(SOURCES.items())), _passing(), __version__
    )
