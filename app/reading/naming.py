"""What an outcome is called in a sentence, and the time it refers to. None where the words do not say it plainly."""

from __future__ import annotations

import re

from app.reading.words import NUMBER_WORD

_VERB = (
    r"(?:had[ ]+)?(?:occurred|recurred|developed|happened|appeared)|(?:was|were)[ ]+(?:also[ ]+)?"
    r"(?:seen|reported|observed|noted|recorded|found|achieved|reached|met|diagnosed|present|documented|similar|lower|higher)"
)
_SUBJECT = re.compile(rf"(?P<name>[A-Za-z][^.;:()\[\]]{{2,80}}?)[ ]+(?P<verb>{_VERB})\b", re.IGNORECASE)
_DIED = re.compile(r"\b(?:died|deaths?)\b", re.IGNORECASE)
_LEAD = re.compile(
    r"^(?:(?:and|but|while|whereas|also|overall|similarly|however|moreover|in contrast),?[ ]+|"
    r"(?:at|by|within|after|during|over|through)[ ]+[^,]{2,40},[ ]*|"
    r"(?:the|a|an)[ ]+|(?:incidence|rates?|proportion|percentage|frequency|occurrence|risk)[ ]+of[ ]+|"
    r"(?:primary|secondary|main|composite)[ ]+(?:(?:efficacy|safety|composite)[ ]+)?(?:outcome|end[ -]?point)(?:[ ]+event)?[ ]*(?:of[ ]+|,[ ]*)?)",
    re.IGNORECASE,
)
_TAIL = re.compile(r"[ ,]+(?:which|that|who|and|also|events?[ ]+also)$", re.IGNORECASE)
_NOT_A_NAME = re.compile(
    r"^(?:it|this|these|they|there|events?|patients?|participants?|results?|differences?|difference.*|no .*|\W*)$|\d|%",
    re.IGNORECASE,
)

_HORIZON = re.compile(
    rf"(?:(?:at|by|within|over|after|during|through|up to|in the first|for)[ ]+(?:the[ ]+)?(?:first[ ]+)?(?P<number>\d{{1,3}}(?:\.\d)?|{NUMBER_WORD})[ -]+(?P<unit>hour|day|week|month|year)s?|"
    r"\b(?P<number2>\d{1,3})-(?P<unit2>hour|day|week|month|year)[ ]+(?!follow|old|trial|period|course|regimen|treatment)[a-z]|"
    r"\b(?P<unit3>day|week|month|year)[ ]+(?P<number3>\d{1,3})\b)",
    re.IGNORECASE,
)
_FOLLOW_UP = re.compile(r"(?:median|mean)[ ]+(?:follow[- ]?up|of)|follow[- ]?up[ ]+(?:of|was|time)", re.IGNORECASE)


def name_in(text: str, start: int, first_number: int) -> str | None:
    """The outcome's name in the clause before its first number: the subject of "occurred in", or death."""
    clause = text[start:first_number]
    clause = clause[max(clause.rfind(";") + 1, clause.rfind(". ") + 1, 0) :]
    hits = list(_SUBJECT.finditer(clause))
    if hits:
        name = hits[-1]["name"]
        recurred = hits[-1]["verb"].lower().endswith("recurred")
        while (lead := _LEAD.match(name)) and lead.end() < len(name):
            name = name[lead.end() :]
        name = _TAIL.sub("", re.sub(r"\s+", " ", name)).strip(" ,")
        if name and not _NOT_A_NAME.search(name) and len(name.split()) <= 8:
            return (
                f"{'recurrence of ' if recurred else ''}{name}"[:1].upper()
                + f"{'recurrence of ' if recurred else ''}{name}"[1:]
            )
    return "Death" if _DIED.search(text, start, min(len(text), first_number + 60)) else None


def horizon_in(text: str, start: int, end: int) -> str | None:
    """The time an outcome refers to in its sentence, as "12 months"; a length of follow-up is none."""
    for hit in _HORIZON.finditer(text, start, end):
        if _FOLLOW_UP.search(text, max(start, hit.start() - 30), hit.start() + 5):
            continue
        number = hit["number"] or hit["number2"] or hit["number3"]
        unit = (hit["unit"] or hit["unit2"] or hit["unit3"]).lower()
        return f"{number.lower()} {unit}{'' if number.lower() in ('1', 'one') else 's'}"
    return None
