"""Invented examples. No such trial was done; every example says so on its sheet."""

from __future__ import annotations

from app.appraisal.sheet import Sheet, TypedArm, TypedFigure, TypedOutcome

LEG_ULCER = Sheet(
    title="Nurse-led compression review after a healed leg ulcer",
    reference="Parallel trial, 854 randomised, one clinic network",
    arms=("Compression review", "Usual care"),
    outcomes=(
        TypedOutcome(
            name="Recurrence",
            counted="a recurrence",
            event_is="unwanted",
            horizon="12 months",
            follow_up="fixed",
            arms=(TypedArm(events="46", total="418"), TypedArm(total="409", percentage="16·4%")),
            figures=(
                TypedFigure("1", "risk_ratio", "0·67", "0·47", "0·95"),
                TypedFigure("2", "relative_risk_reduction", "67", place="abstract"),
                TypedFigure("3", "p_value", "0·024"),
            ),
        ),
        TypedOutcome(
            name="Skin irritation",
            counted="skin irritation",
            event_is="unwanted",
            horizon="12 months",
            follow_up="fixed",
            arms=(TypedArm(events="51", total="418"), TypedArm(events="23", total="409")),
        ),
    ),
    invented=True,
)
