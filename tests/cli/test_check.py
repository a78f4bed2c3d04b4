"""`armslength check`: the notes as text and JSON, and the exit status."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from typer.testing import CliRunner

from app.cli.main import application

SOUND = "Relapse occurred in 46 of 418 (11.0%) with active care and 67 of 409 (16.4%) with usual care (RR 0.67, 95% CI 0.47 to 0.95)."
OFF = SOUND.replace("11.0%", "12.0%")
ADJUSTED = SOUND.replace("RR 0.67", "adjusted RR 0.66")


@pytest.mark.parametrize(
    ("passage", "status"), [(SOUND, 0), (OFF, 1), ("The weather was fine.", 2), (ADJUSTED, 3), ("x" * 200_001, 4)]
)
def test_exit_status(passage: str, status: int) -> None:
    assert CliRunner().invoke(application, ["check", "-"], input=passage).exit_code == status


def test_notes_as_text(tmp_path: Path) -> None:
    (tmp_path / "passage.txt").write_text(OFF + " In all 827 were analysed.", encoding="utf-8")
    printed = CliRunner().invoke(application, ["check", str(tmp_path / "passage.txt")]).output
    assert printed == (
        "Relapse: one table fits\n"
        "  ✓ 46  intervention, with the event: agrees.\n"
        "  ✓ 418  intervention, people: agrees.\n"
        "  ≠ 12.0  intervention, percentage: does not agree. The percentage does not fit the count and the other numbers. "
        "The other 6 agree with each other; 11.0% would fit. Check what was typed first.\n"
        "  ✓ 67  comparator, with the event: agrees.\n"
        "  ✓ 409  comparator, people: agrees.\n"
        "  ✓ 16.4  comparator, percentage: agrees. Recomputed: 16.38%.\n"
        "  ✓ 0.67 (0.47 to 0.95)  risk ratio: agrees. 0.672 (0.474 to 0.953) by log (Katz); the same by Miettinen–Nurminen score and others.\n"
        "Not read: 827 (not understood)\n"
    )


def test_json_is_that_of_the_interface() -> None:
    answer = json.loads(CliRunner().invoke(application, ["check", "--json"], input=SOUND).output)
    assert {claim["verdict"] for claim in answer["outcomes"][0]["claims"]} == {"agrees"}
    assert answer["outcomes"][0]["name"] == "Relapse"


def test_error_in_file() -> None:
    done = CliRunner().invoke(application, ["check", "nowhere.txt"])
    assert (done.exit_code, done.stderr) == (4, "nowhere.txt could not be read: No such file or directory.\n")
