"""Invented papers as PDF, set in two columns with a table, for the tests of the pages."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory

import typst

ABSTRACT = "Recurrence was seen in 46 of 418 (11·0%) with review and 67 of 409 (16·4%) with usual care (relative risk 0·67, 95% CI 0·47 to 0·95; P=0·024)."
RECURRENCE = (
    "Ulcers recurred in 46 of 418 participants (11.0%) with compression review and in 67 of 409 (16.4%) with usual care "
    "(relative risk 0.76, 95% CI 0.47 to 0.95; P=0.024)."
)
IRRITATION = (
    "Skin irritation occurred in 31 (7.4%) of 418 and 12 (2.9%) of 409, respectively (RR 2.53, 95% CI 1.32 to 4.85; P=0.004)."
)
ADMISSION = (
    "At 24 months, admission had occurred in 9 (2.2%) of 418 with compression review and 14 (3.4%) of 409 with usual care "
    "(RR 0.63, 95% CI 0.28 to 1.44)."
)
ROWS = (
    ("Outcome", "Review (n=418)", "Usual care (n=409)", "RR (95% CI)", "P"),
    ("Recurrence", "46 (11.0)", "67 (16.4)", "0.67 (0.47 to 0.95)", "0.024"),
    ("Skin irritation", "31 (7.4)", "12 (2.9)", "2.53 (1.32 to 4.85)", "0.004"),
)
_CELLS = "".join(f"[{cell}]," for row in ROWS for cell in row)
TWO_COLUMNS = f"""
#set page(paper: "a4", margin: 2cm)
#set text(size: 10pt)
#align(center)[#text(size: 16pt)[*Nurse-led compression review after a healed leg ulcer*]]
*Abstract*

{ABSTRACT} We enrolled people from one clinic.

#columns(2)[
= Introduction
#lorem(120)
= Results
{RECURRENCE} #lorem(60)

{IRRITATION} #lorem(90)
#colbreak()
#lorem(100)
{ADMISSION}
= References
1. #lorem(20) Relapse was seen in 5 of 50 (10%) and 9 of 51 (18%).
]
#pagebreak()
#table(columns: 5, stroke: none, {_CELLS})
"""


@lru_cache
def pdf(source: str = TWO_COLUMNS) -> bytes:
    """A PDF of typst source."""
    with TemporaryDirectory() as folder:
        path = Path(folder) / "paper.typ"
        path.write_text(source, encoding="utf-8")
        made = typst.compile(str(path))
    assert isinstance(made, bytes)
    return made
