"""The reader's rules, each on its examples; and any text at all."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.printed.claims import Claim
from app.reading import grammar
from app.reading.grammar import Rule, found
from app.reading.read import MOST_OUTCOMES, read
from app.reading.text import even
from app.reading.words import value_of

RULES = [value for value in vars(grammar).values() if isinstance(value, Rule)] + list(grammar.COUNTS)


@pytest.mark.parametrize(("rule", "example"), [(rule, example) for rule in RULES for example in rule.examples])
def test_a_rule_takes_its_examples(rule: Rule, example: str) -> None:
    text = even(example).text
    assert [mark.rule for mark in found(rule, text, bytearray(len(text)))][:1] == [rule.name]


@pytest.mark.parametrize(
    ("text", "value"),
    [("nine", 9), ("none", 0), ("Seventy-five", 75), ("Two-hundred-fifty", 250), ("one hundred and six", 106), ("ward", None)],
)
def test_number_words(text: str, value: int | None) -> None:
    assert value_of(text) == value


def said(passage: str) -> list[list[tuple[str, str | None, str]]]:
    """Quantity, arm and printed text of every claim, an outcome a list."""

    def told(claim: Claim) -> tuple[str, str | None, str]:
        interval = claim.interval
        ends = f" ({interval.low.text} to {interval.high.text})" if interval and interval.low and interval.high else ""
        return claim.quantity, claim.arm, f"{claim.said.text}{ends}"

    return [[told(claim) for claim in outcome.claims] for outcome in read(passage).outcomes]


# Invented sentences in the styles of papers.
SENTENCES = [
    (
        "Ulcers recurred in 46 of 418 participants (11·0%) with compression review and 67 of 409 (16·4%) with usual care "
        "(relative risk 0·67, 95% CI 0·47–0·95; P=0·024).",
        [
            [
                ("events", "intervention", "46"),
                ("total", "intervention", "418"),
                ("risk", "intervention", "11·0"),
                ("events", "comparator", "67"),
                ("total", "comparator", "409"),
                ("risk", "comparator", "16·4"),
                ("risk_ratio", None, "0·67 (0·47 to 0·95)"),
                ("p_value", None, "0·024"),
            ]
        ],
    ),
    (
        "Falls occurred in 21.5% of the control group and 15.2% of the intervention group (adjusted odds ratio, 0.66; 95% "
        "confidence interval [CI], 0.48 to 0.91; P = .01).",
        [
            [
                ("risk", "comparator", "21.5"),
                ("risk", "intervention", "15.2"),
                ("odds_ratio", None, "0.66 (0.48 to 0.91)"),
                ("p_value", None, ".01"),
            ]
        ],
    ),
    (
        "Bei 34 von 210 Patienten (16,2 %) der Interventionsgruppe und 52 von 205 (25,4 %) der Kontrollgruppe (OR 0,57; "
        "95 %-KI 0,35–0,92; p = 0,02).",
        [
            [
                ("events", "intervention", "34"),
                ("total", "intervention", "210"),
                ("risk", "intervention", "16,2"),
                ("events", "comparator", "52"),
                ("total", "comparator", "205"),
                ("risk", "comparator", "25,4"),
                ("odds_ratio", None, "0,57 (0,35 to 0,92)"),
                ("p_value", None, "0,02"),
            ]
        ],
    ),
    (
        "Outcome\tNew dressing (N = 210)\tStandard dressing (N = 205)\tRR (95% CI)\tP\n"
        "Healed\t160 (76)\t139 (68)\t1.12 (0.99 to 1.27)\t0.06\n"
        "Infected\t12 (6)\t21 (10)\t0.56 (0.28 to 1.10)\t0.09",
        [
            [
                ("events", "intervention", "160"),
                ("risk", "intervention", "76"),
                ("events", "comparator", "139"),
                ("risk", "comparator", "68"),
                ("total", "intervention", "210"),
                ("total", "comparator", "205"),
                ("risk_ratio", None, "1.12 (0.99 to 1.27)"),
                ("p_value", None, "0.06"),
            ],
            [
                ("events", "intervention", "12"),
                ("risk", "intervention", "6"),
                ("events", "comparator", "21"),
                ("risk", "comparator", "10"),
                ("total", "intervention", "210"),
                ("total", "comparator", "205"),
                ("risk_ratio", None, "0.56 (0.28 to 1.10)"),
                ("p_value", None, "0.09"),
            ],
        ],
    ),
]


@pytest.mark.parametrize(("passage", "claims"), SENTENCES, ids=["sentence", "percentages", "german", "table"])
def test_invented_passages(passage: str, claims: list[list[tuple[str, str | None, str]]]) -> None:
    assert said(passage) == claims


MORE = [
    (
        "The number needed to treat was 19 (95% CI 10 to 144).",
        [("number_needed_to_treat", None, "19 (10 to 144)")],
    ),
    (
        "Risk difference -0.05 (95% CI -0.10 to -0.01).",
        [("risk_difference", None, "-0.05 (-0.10 to -0.01)")],
    ),
    (
        "There were 54 fewer per 1000; absolute difference, 54 per 1000 (95% CI, 7 to 101).",
        [("risk_difference", None, "54 (7 to 101)")],
    ),
    (
        "Relative risk 0.68 (95% credible interval 0.52 to 0.88).",
        [("risk_ratio", None, "0.68 (0.52 to 0.88)")],
    ),
    (
        "Efficacy was 33% (95% CI 53 to 5).",
        [("relative_risk_reduction", None, "33 (5 to 53)")],
    ),
    (
        "Clusters given the active programme reported it less often (ARR 0.83, 95% CI 0.66 to 1.06).",
        [("risk_ratio", None, "0.83 (0.66 to 1.06)")],
    ),
    (
        "Rates were 11.4 per 100 person-years with active and 18.1 per 100 person-years with placebo (rate ratio 0.63, 95% CI "
        "0.44 to 0.92; P for interaction = 0.4).",
        [
            ("rate", "intervention", "11.4"),
            ("rate", "comparator", "18.1"),
            ("rate_ratio", None, "0.63 (0.44 to 0.92)"),
            ("p_value", None, "0.4"),
        ],
    ),
    (
        "Seven of eight active but none of 32 controls responded (P≤.05).",
        [
            ("events", "intervention", "Seven"),
            ("total", "intervention", "eight"),
            ("events", "comparator", "none"),
            ("total", "comparator", "32"),
            ("p_value", None, ".05"),
        ],
    ),
]


@pytest.mark.parametrize(("passage", "claims"), MORE, ids=[str(i) for i in range(len(MORE))])
def test_invented_sentences_of_one_measure(passage: str, claims: list[tuple[str, str | None, str]]) -> None:
    assert said(passage)[0] == claims


def test_bases_levels_and_tests_are_read_from_the_words() -> None:
    (outcome,) = read(
        "After the active drug 30 of 200 (15%) and after placebo 40 of 200 (20%) had it (adjusted odds ratio 0.70, 90% CI 0.45 to "
        "1.08; P=0.003 for noninferiority)."
    ).outcomes
    odds, p = outcome.claims[-2:]
    assert odds.basis == "adjusted"
    assert odds.interval is not None
    assert odds.interval.confidence_level == 0.9
    assert (p.test, p.basis) == ("noninferiority", "adjusted")


def test_numbers_not_understood_are_listed_and_the_rest_left_alone() -> None:
    passage = (
        "In 2019 the 24 mg dose was given for 12 weeks; 17 others withdrew. Deaths: 4/120 active v 9/118 placebo (P=0.15)."
    )
    assert [u.text for u in read(passage).unread] == ["17"]


def test_the_comparator_is_asked_for_where_nothing_names_it() -> None:
    found_ = read("Events were seen in 12/80 (15%) and 20/82 (24%) (RR 0.62, 95% CI 0.32 to 1.17).")
    assert found_.questions == ("which_is_comparator",)


@given(st.text(max_size=300))
def test_any_text_is_answered(text: str) -> None:
    for outcome in read(text).outcomes:
        for claim in outcome.claims:
            assert claim.span is not None
            assert 0 <= claim.span[0] < claim.span[1] <= len(text)


@given(st.text(alphabet="0123456789.,%()[]/–−- ofvsPRCIO=<>\n", max_size=200))
def test_any_digits_and_marks_are_answered(text: str) -> None:
    read(text)


@pytest.mark.parametrize(
    "piece", ["1 ", "(", "1% ", "1/", "one ", "1,", "p=0.", "95% CI 1 to ", "RR ", "a", "two-", "1 2 3\n", "12 vs "]
)
def test_long_repeats_are_answered(piece: str) -> None:
    assert len(read((piece * 200_000)[:60_000]).outcomes) <= MOST_OUTCOMES
