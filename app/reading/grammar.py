"""The rules: what papers print, as named patterns over even text. Each says what it takes, with examples.

Rules find marks one kind after the other, the most telling first; what one has taken the next leaves alone.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, field

from app.printed.claims import Quantity
from app.reading.words import NUMBER_WORD

INTEGER = r"(?:\d{1,3}(?:[,\u2009']\d{3})+|\d{2,3}[ ]\d{3}(?![\d.])|\d+)(?![\d])"
DECIMAL = r"(?:\d{1,3}(?:,\d{3})+(?:\.\d+)?|\d+(?:\.\d+)?|\.\d+)(?![\d])"
SIGNED = rf"[-\u2212\u2013+]?[ ]?{DECIMAL}"
COUNT = rf"(?:{INTEGER}|{NUMBER_WORD})"
_TO = r"[ ]*(?:%|percentage points|points)?[ ]*(?:to|and|à|bis|a|tot|[-\u2013\u2212,;])[ ]*"
_OPEN, _CLOSE = r"[\(\[]", r"[\)\]]"


@dataclass(frozen=True, slots=True)
class Mark:
    """Something a rule found: its kind, place in the even text, and named parts with their places."""

    rule: str
    start: int
    end: int
    parts: dict[str, tuple[int, int]] = field(default_factory=dict)
    quantity: Quantity | None = None

    def text(self, of: str, part: str) -> str:
        """The even text of a part."""
        start, end = self.parts[part]
        return of[start:end]


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule: its name, its pattern with named groups, and examples of what it takes."""

    name: str
    pattern: re.Pattern[str]
    examples: tuple[str, ...]


def _rule(name: str, pattern: str, *examples: str) -> Rule:
    return Rule(name, re.compile(pattern, re.IGNORECASE), examples)


_LEVEL = r"(?P<level>\d{2}(?:\.\d+)?)[ ]*%[ ]*-?[ ]*"
_CI = (
    r"(?:confidence[ ]+(?:interval|limits)s?|credible[ ]+interval|Bayesian credible interval|C\.?I\.?|CrI|BCI|CL|IC|KI|BI|"
    r"intervalle de confiance|intervalo de confianza|Konfidenzintervall|betrouwbaarheidsinterval)"
)
_LEAD = rf"(?:one-sided[ ]+)?(?:{_LEVEL})?(?:Bayesian[ ]+)?{_CI}(?:[ ]*{_OPEN}(?:\d\d[ ]*%[ ]*)?[A-Z]{{2,3}}{_CLOSE})?(?:[ ]*(?:à|a|al|del|des|de|von|van)?[ ]*(?P<after>\d{{2}}(?:\.\d+)?)[ ]*%)?"

INTERVAL = _rule(
    "interval",
    rf"{_LEAD}{_CLOSE}?[ ]*[:=,;]?[ ]*{_OPEN}?[ ]*(?P<low>{SIGNED}){_TO}(?P<high>{SIGNED})[ ]*(?P<unit>%|percentage points|points)?",
    "95% CI 0.66–0.92",
    "95% confidence interval [CI], 1.01 to 1.36",
    "IC à 95 % 1.03-2.08",
    "95%CI −11.3, 2.13",
    "CI, 0.54 to 1.23",
)
P_VALUE = _rule(
    "p_value",
    rf"(?<![A-Za-z])(?:2)?P(?:[- ]?values?)?(?P<kind>[ ]+(?:for|value for)[ ]+(?:the[ ]+)?[a-z\- ]{{3,40}}?)?[ ]*(?:(?P<operator><|>|=|≤|≥|< or =|> or =)[ ]*)(?:[=<>][ ]*)?(?P<value>{DECIMAL})(?P<tail>[ ]+for[ ]+(?:the[ ]+)?[a-z\- ]{{3,50}})?",
    "p=0.045",
    "P < .001",
    "P for interaction = 0.03",
    "P<0.001 for superiority",
)
BOUND = _rule(
    "bound",
    rf"(?P<side>upper|lower)[ ]+(?:confidence[ ]+)?(?:bound|limit)(?:[ ]+of(?:[ ]+the|[ ]+a)?)?(?:[ ]+(?:one|two|1|2)-sided)?[ ]*(?:{_LEVEL})?(?:{_CI})?[ ]*(?:[,:=]|was|is|of)?[ ]*(?P<value>{SIGNED})[ ]*(?P<unit>%|percentage points|points)?",
    "upper bound of the one-sided 97.5% CI, 3.8",
    "lower limit of the 95% confidence interval, -1.2",
)
MARGIN = _rule(
    "margin",
    rf"(?:non-?inferiority|equivalence)[ ]+margin(?:[ ]+(?:of|was|is))?[ ]*[,:=]?[ ]*(?P<value>{SIGNED})[ ]*(?P<unit>%|percentage points)?",
    "noninferiority margin, 2.0",
)

LABELS: tuple[tuple[str, Quantity], ...] = (
    (r"(?:adjusted[ ]+)?hazards?[ -]?ratio|aHR|HR", "hazard_ratio"),
    (r"(?:adjusted[ ]+)?odds[ -]?ratio|aOR|OR|rapport de cotes|razón de (?:momios|posibilidades|odds)", "odds_ratio"),
    (r"(?:incidence[ ]+)?(?:incidence|rate)[ -]?ratio|IRR", "rate_ratio"),
    (
        r"(?:adjusted[ ]+)?(?:relative[ ]+risk|risk[ ]+ratio)(?![ ]+(?:reduction|increase))|aRR|RR(?!R)|risque relatif|riesgo relativo|relatives?[ ]+Risiko|relatief risico",
        "risk_ratio",
    ),
    (r"relative[ ]+(?:risk[ ]+)?reduction|RRR|vaccine efficacy|efficacy", "relative_risk_reduction"),
    (r"relative[ ]+(?:risk[ ]+)?increase|RRI", "relative_risk_increase"),
    (
        r"(?:absolute[ ]+)?(?:risk[ ]+)?difference(?:s)?(?:[ ]+in[ ]+(?:the[ ]+)?(?:risk|rates?|proportions?|percentages?))?|absolute[ ]+(?:risk[ ]+)?(?:reduction|increase)|ARR|RD|ARD|diferencia de riesgos?|différence de risques?|Risikodifferenz|risicoverschil",
        "risk_difference",
    ),
    (r"numbers?[ ]+needed[ ]+to[ ]+(?:treat|harm)(?:[ ]+to[ ]+(?:benefit|harm))?|NNTB?|NNH", "number_needed_to_treat"),
)
_GAP = r"(?:,?[ ]+(?:after adjustment|adjusted)[ ]+for[^.;:()\[\]]{1,80}?,)?(?:[ ]*\([^()]{1,40}\)|[ ]*\[[^\[\]]{1,80}\])?(?:[ ]+(?:in|for|with|of|among|against|between|this|after)(?:[ ]+[A-Za-z\-]+){0,9}?)?[ ]*(?:[,:;=]|of|was|is|were|op|de|von)?[ ]*(?:of[ ]+)?"
MEASURES: tuple[tuple[Rule, Quantity], ...] = tuple(
    (
        _rule(
            f"measure_{quantity}",
            rf"(?<![A-Za-z])(?P<label>{label})(?![A-Za-z]){_GAP}(?P<value>{SIGNED})(?![ ]*[/]|[ ]*of[ ]+\d)[ ]*(?P<unit>%|per cent|percentage points|points|puntos porcentuales|Prozentpunkte|procentpunt(?:en)?|points de pourcentage|per 1,?000)?",
        ),
        quantity,
    )
    for label, quantity in LABELS
)
CHANGE = _rule(
    "change",
    rf"(?P<value>{DECIMAL})[ ]*(?:%|per cent)[ ]+(?:relative[ ]+)?(?P<word>reduction|increase|lower|higher|fewer|decrease)|"
    rf"(?P<word2>fell|fall|reduced|reduction|lowered|rose|increased|increase|decreased)[ ]+(?:[a-z]+[ ]+){{0,3}}?(?:by|of)[ ]+(?P<value2>{DECIMAL})[ ]*(?:%|per cent)(?![ ]*[\(\[]?[ ]*\d+[ ]*/)",
    "a 26% reduction",
    "fell by 81%",
)
RATE = _rule(
    "rate",
    rf"(?P<value>{DECIMAL})[ ]*(?:events?|cases|deaths)?[ ]*(?:per|/)[ ]*(?P<per>1|100|1,?000|10,?000|100,?000)[ ]*(?P<what>(?:person|patient|woman|child|participant)[- ](?:years?|months?|days?)|pyrs|live[ ]?births|births|people|persons|patients|participants)",
    "2.9 per 10,000 person-years",
)
COUNTS: tuple[Rule, ...] = (
    _rule(
        "n_of_N_percent",
        rf"(?P<events>{COUNT})(?:[ ]+(?:patients|participants|people|subjects|women|men|children|infants|adults|Patienten|pacientes|deelnemers|patiënten))?[ ]*(?:/|of(?: the)?|out of(?: the)?|des|de los|sur|von|van(?: de)?)[ ]*(?:the[ ]+)?(?P<total>{COUNT})(?P<people>[ ]+[A-Za-zéèàü\- ]{{2,40}}?)?[ ]*[,;]?[ ]*{_OPEN}?(?P<percent>{DECIMAL})[ ]*(?P<sign>%|per cent|percent)",
        "46 of 418 patients (11.0%)",
        "14/1,140 (1.2%)",
    ),
    _rule(
        "n_percent_of_N",
        rf"(?P<events>{COUNT})[ ]*{_OPEN}[ ]*(?P<percent>{DECIMAL})[ ]*(?P<sign>%)[ ]*{_CLOSE}[ ]*of(?: the)?[ ]*(?P<total>{COUNT})",
        "116 (46%) of 254",
    ),
    _rule(
        "percent_n_of_N",
        rf"(?P<percent>{DECIMAL})[ ]*(?P<sign>%|per cent)[ ]*(?:{_OPEN}|,)[ ]*(?P<events>{COUNT})[ ]*(?:/|of(?: the)?|out of)[ ]*(?P<total>{COUNT})",
        "63% (57/90)",
        "31%, 10 of 32",
    ),
    _rule(
        "percent_n",
        rf"(?P<percent>{DECIMAL})[ ]*(?P<sign>%)(?:[ ]+of[ ]+[a-z]+)?[ ]*{_OPEN}[ ]*(?:n[ ]*=[ ]*)?(?P<events>{INTEGER})[ ]*{_CLOSE}",
        "9.2% (n = 17)",
    ),
    _rule(
        "n_of_N_bare_percent",
        rf"(?P<events>{INTEGER})[ ]*/[ ]*(?P<total>{INTEGER})[ ]*{_OPEN}[ ]*(?P<percent>{DECIMAL})[ ]*{_CLOSE}",
        "8/20 (40)",
    ),
    _rule(
        "n_of_N",
        rf"(?<![\d/.])(?P<events>{COUNT})(?:[ ]+(?:patients|participants|people|subjects|women|men|children|infants|adults|Patienten|pacientes|deelnemers|patiënten))?[ ]*(?:/|(?:of|out of|sur)(?: the)?[ ]+)[ ]*(?P<total>(?!0){COUNT})(?![ ]*/)",
        "15/268",
        "none of 32",
    ),
    _rule(
        "n_percent",
        rf"(?P<events>{COUNT})(?:[ ]+(?!of\b)[A-Za-z\-]+){{0,7}}?[ ]*{_OPEN}[ ]*(?P<percent>{DECIMAL})[ ]*(?P<sign>%)[ ]*{_CLOSE}",
        "46 (30%)",
        "50 events in the active group (2.1%)",
    ),
    _rule(
        "events_in_brackets",
        rf"{_OPEN}(?P<events>{INTEGER})[ ]+(?:deaths?|events?|cases|patients|participants|people|women|men|children){_CLOSE}",
        "(252 deaths)",
    ),
    _rule(
        "percent",
        rf"(?P<percent>{DECIMAL})[ ]*(?P<sign>%|per cent|percent)(?![ ]*-?[ ]*(?:{_CI}|power|confidence)(?![A-Za-z]))",
        "86%",
    ),
)
TOTAL = _rule(
    "total",
    rf"(?P<total>{COUNT})(?:[ ]+(?!of\b|and\b|or\b)[A-Za-z\-]+){{0,4}}?[ ]+(?P<to>(?:randomly )?(?:assigned|allocated|randomi[sz]ed)?(?: to)?[ ]*(?:the )?[A-Za-z\- ]*?)(?=[,.;]| and |$)",
    "152 people on active treatment",
)


def found(rule: Rule, text: str, taken: bytearray) -> Iterator[Mark]:
    """What a rule finds that no earlier rule has taken."""
    place = 0
    while (hit := rule.pattern.search(text, place)) is not None:
        place = max(hit.end(), place + 1)
        if any(taken[hit.start() : hit.end()]):
            place = hit.start() + 1
            continue
        parts = {name: hit.span(name) for name, value in hit.groupdict().items() if value is not None}
        yield Mark(rule.name, hit.start(), hit.end(), parts)


def take(mark: Mark, taken: bytearray) -> None:
    """Keep a mark's place from later rules."""
    taken[mark.start : mark.end] = b"\x01" * (mark.end - mark.start)
