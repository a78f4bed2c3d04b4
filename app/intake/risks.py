"""A starting risk as typed -> a share from 0 to 1, or a range of it, or what is wrong."""

from __future__ import annotations

import re

from app.appraisal.fields import risk_field
from app.appraisal.model import StartingRisk
from app.appraisal.sheet import TypedRisk
from app.errors import FieldProblem, PrintedProblem
from app.intake.problems import problem
from app.printed.number import read_number

MOST_RISKS = 6
"""Most groups of patients of one outcome."""

_RISK = re.compile(
    r"\s*(?P<low>[\d.,·]+)\s*%?\s*(?:(?:to|-|–|—)\s*(?P<high>[\d.,·]+)\s*)?"
    r"(?P<unit>%|per cent|(?:per|in|of|/)\s*(?P<per>100|1,?000|10,?000))?\s*",
    re.IGNORECASE,
)


def read_risk(outcome: int, typed: TypedRisk) -> tuple[StartingRisk | None, list[FieldProblem]]:
    """The starting risk of a group: "8", "8%", "80 per 1000", "5 to 10%"; None where it is empty or refused."""
    if not typed.risk.strip():
        return None, []
    name = risk_field(outcome, typed.key, "risk")
    found = _RISK.fullmatch(typed.risk)
    if found is None:
        return None, [problem(name, "not_a_risk")]
    per = int((found["per"] or "100").replace(",", ""))
    try:
        ends = [float(read_number(found[end], "percentage").value) / per for end in ("low", "high") if found[end]]
    except PrintedProblem:
        return None, [problem(name, "not_a_risk")]
    low, high = ends[0], ends[-1]
    if not 0 <= low <= high <= 1:
        return None, [problem(name, "risk_out_of_range")]
    return StartingRisk(typed.name.strip(), low, high, typed.source.strip()), []
