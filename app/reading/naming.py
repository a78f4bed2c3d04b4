"""What an outcome is called in a sentence, and the time it refers to. None where the words do not say it plainly."""

from __future__ import annotations

import re

from app.reading.arms import words_of_arms
from app.reading.words import NUMBER_WORD

_VERB = (
    r"(?:had[ ]+)?(?:occurred|recurred|developed|happened|appeared)|(?:was|were)[ ]+(?:also[ ]+)?"
    r"(?:seen|reported|observed|noted|recorded|found|achieved|reached|met|diagnosed|present|documented|similar|"
    r"(?:significantly[ ]+|about[ ]+|equally[ ]+|much[ ]+|slightly[ ]+)*(?:lower|higher|commoner|rarer|common|(?:more|less)[ ]+(?:common|frequent)))|numbered"
)
_SUBJECT = re.compile(rf"(?P<name>[A-Za-z][^.;:()\[\]]{{2,80}}?)[ ]+(?P<verb>{_VERB})\b", re.IGNORECASE)
_OBJECT = re.compile(
    r"\b(?:had|experienced|developed|suffered|achieved|reported|with)[ ]+(?:an?[ ]+|the[ ]+|at least (?:one|1)[ ]+|any[ ]+)?"
    r"(?P<name>(?!been|no\b|not\b|active|placebo|control|usual|standard|each|both|either)[a-z][a-z'’/ -]{3,60}?)(?=[ ]+(?:compared|at|by|within|in|on|over|versus|vs|against|during|after|and)\b|[.,;:(])",
    re.IGNORECASE,
)
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

_ARM_NAME = re.compile(
    r"[ %)\]]*(?:(?:participants|patients|people|women|men|children|infants|adults|subjects|residents)[ ]+)?"
    r"(?:\(?\d[\d.]*[ ]*%?\)?[ ]*)?(?:with|on|in[ ]+the|of[ ]+the|given|receiving|assigned[ ]+(?:to[ ]+)?|treated[ ]+with|under|after)[ ]+(?:the[ ]+)?"
    r"(?P<name>[A-Za-z][A-Za-z0-9 +/-]{2,40}?)(?:[ ]+(?:group|arm|therapy group))?(?=[ ]+(?:and|versus|vs|compared|against|had|than|but|or|while|at|by|within)\b|[ ]*[,.;:()\[]|$)",
    re.IGNORECASE,
)
_NOT_AN_ARM = re.compile(
    r"^(?:each|both|either|same|first|second|other|total|group|arm|all)\b|years?|months?|weeks?|days?|outcome|event",
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
    if _DIED.match(clause.strip()):
        return "Death"
    hits = list(_SUBJECT.finditer(clause))
    if hits:
        name = hits[-1]["name"]
        recurred = hits[-1]["verb"].lower().endswith("recurred")
        while (lead := _LEAD.match(name)) and lead.end() < len(name):
            name = name[lead.end() :]
        recurred = recurred and not name.lower().startswith("recurr")
        name = _TAIL.sub("", re.sub(r"\s+", " ", name)).strip(" ,")
        if name and not _NOT_A_NAME.search(name) and len(name.split()) <= 8:
            name = f"recurrence of {name[:1].lower()}{name[1:]}" if recurred else name
            return name[:1].upper() + name[1:]
    found = _OBJECT.search(text, start, min(len(text), first_number + 120))
    if found is not None:
        name = found["name"].strip()
        if not _NOT_A_NAME.search(name) and not words_of_arms(name) and len(name.split()) <= 6:
            return name[:1].upper() + name[1:]
    return "Death" if _DIED.search(text, start, min(len(text), first_number + 60)) else None


_FULL_STOP = re.compile(r"(?<!vs)(?<!al)\.(?=\s+[A-Z]|\s*$)")


def horizon_in(text: str, start: int, place: int) -> str | None:
    """The time an outcome refers to in the sentence about a place, as "12 months"; a length of follow-up is none."""
    stop = _FULL_STOP.search(text, place, min(len(text), place + 600))
    end = stop.start() if stop else min(len(text), place + 600)
    for hit in _HORIZON.finditer(text, start, end):
        if _FOLLOW_UP.search(text, max(start, hit.start() - 30), hit.start() + 5):
            continue
        number = hit["number"] or hit["number2"] or hit["number3"]
        unit = (hit["unit"] or hit["unit2"] or hit["unit3"]).lower()
        return f"{number.lower()} {unit}{'' if number.lower() in ('1', 'one') else 's'}"
    return None


def arm_name_after(text: str, place: int) -> str | None:
    """The name of an arm in the words right after its numbers: "46 of 418 (11.0%) with compression review"."""
    hit = _ARM_NAME.match(text, place)
    if hit is None or _NOT_AN_ARM.search(hit["name"]):
        return None
    return re.sub(r"\s+", " ", hit["name"]).strip().removesuffix(" group")
