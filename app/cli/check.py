"""`armslength check`: a passage in, its numbers judged, as text or JSON; the exit status says how it went."""

from __future__ import annotations

import json
import sys
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import typer

from app.api.checks import check_answer
from app.errors import InputProblems
from app.intake.claims import claims_input
from app.present.asked import UNREAD_TEXT
from app.present.verdicts import QUANTITY_TEXT, VERDICT_MARK, VERDICT_TEXT

ALL_AGREE, SOMETHING_DOES_NOT, NOTHING_READABLE, NOT_ALL_CHECKED, REFUSED = 0, 1, 2, 3, 4


def _text_of(source: str) -> str:
    raw = sys.stdin.buffer.read() if source == "-" else Path(source).read_bytes()
    return raw.decode("utf-8", "replace")


def _printed(claim: dict[str, Any]) -> str:
    sign = "" if claim["operator"] == "=" else f"{claim['operator']} "
    interval = claim["interval"]
    limits = f" ({interval['low'] or '–'} to {interval['high'] or '–'})" if interval else ""
    return f"{sign}{claim['printed'] or ''}{limits}".strip()


def _lines(answer: dict[str, Any]) -> Iterator[str]:
    for k, outcome in enumerate(answer["outcomes"]):
        count = outcome["tables"]["count"]
        fits = {0: "no table fits all of it", 1: "one table fits"}.get(count, f"{count:,} tables fit")
        fits = fits if outcome["tables"]["complete"] else "more tables fit than are counted"
        yield f"{outcome['name'] or f'Outcome {k + 1}'}: {fits}"
        for claim in outcome["claims"]:
            arm = f"{claim['arm']}, " if claim["arm"] else ""
            yield (
                f"  {VERDICT_MARK[claim['verdict']]} {_printed(claim)}  {arm}{QUANTITY_TEXT[claim['quantity']]}: "
                f"{VERDICT_TEXT[claim['verdict']]}. {claim['because']}"
            ).rstrip()
    if answer["unread"]:
        yield "Not read: " + "; ".join(f"{u['text']} ({UNREAD_TEXT[u['why']]})" for u in answer["unread"])
    for said in (*answer["repairs"], *answer["questions"]):
        yield said["text"]


def _status(answer: dict[str, Any]) -> int:
    verdicts = {claim["verdict"] for outcome in answer["outcomes"] for claim in outcome["claims"]}
    if not verdicts:
        return NOTHING_READABLE
    if verdicts & {"does_not_agree", "agrees_under_another_reading"}:
        return SOMETHING_DOES_NOT
    return NOT_ALL_CHECKED if "cannot_be_checked" in verdicts else ALL_AGREE


def check(source: str, *, as_json: bool) -> None:
    """Check every number of a passage against the others.

    Exit status: 0 every number checked and agreeing, 1 one does not agree or only under another reading, 2 nothing
    readable, 3 nothing contradicts but some could not be checked, 4 the text could not be taken.
    """
    try:
        answer = check_answer(claims_input({"passage": _text_of(source)}))
    except OSError as refused:
        typer.echo(f"{source} could not be read: {refused.strerror}.", err=True)
        raise typer.Exit(REFUSED) from refused
    except InputProblems as refused:
        typer.echo("\n".join(f"{p.message} {p.hint}" for p in refused.problems), err=True)
        raise typer.Exit(REFUSED) from refused
    status = _status(answer)
    if as_json:
        typer.echo(json.dumps(answer, ensure_ascii=False, indent=2, allow_nan=False))
    else:
        for line in _lines(answer):
            typer.echo(line)
        if status == NOTHING_READABLE:
            typer.echo("No printed result was found in this passage.")
    raise typer.Exit(status)
