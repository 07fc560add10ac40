"""Messages: where, what was read, and what to do."""

from __future__ import annotations

from knought.errors import InputError, Problem, quoted


def test_a_problem_names_place_reading_and_remedy() -> None:
    problem = Problem(
        "this is no number",
        "write a number such as 2.41e-3",
        read="n.d.",
        file="rates.csv",
        sheet="day 1",
        row=7,
        column="k/s^-1",
    )
    assert str(problem) == (
        'rates.csv, sheet day 1, row 7, column k/s^-1: this is no number (read: "n.d."). '
        "Write a number such as 2.41e-3."
    )


def test_several_problems_are_told_together_up_to_a_limit() -> None:
    error = InputError([Problem(f"problem {i}") for i in range(30)])
    lines = str(error).splitlines()
    assert lines[0] == "30 problems:"
    assert lines[-1].strip() == "... and 10 more."
    assert len(error.problems) == 30


def test_a_sentence_is_one_problem() -> None:
    error = InputError("no law is called 'x'", "choose one of a, b")
    assert str(error) == "no law is called 'x'. Choose one of a, b."
    assert str(InputError("what is this?")) == "what is this?"


def test_quotations_stay_on_one_line_and_are_cut() -> None:
    assert quoted("a\nb") == '"a\\nb"'
    assert len(quoted("x" * 500)) < 70
