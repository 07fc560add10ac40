"""Paragraphs to paste: every state has its sentences, and none says more than the runs do."""

from __future__ import annotations

import pytest

from knought.reporting.paragraphs import paragraphs_markdown, paragraphs_of
from tests.reporting.test_golden import STATES

SAYS = {
    "good": ("Results", "z_A z_B = 2 of A²⁻ + B⁻ was taken as known. Left open, it comes out as"),
    "cannot-tell": ("Limits of these results", "cannot tell"),
    "nothing-fits": ("Limits of these results", "No law describes these data"),
    "one-temperature": ("Results", "they say nothing of the energy, enthalpy and entropy"),
    "warnings": ("Results", "3 runs used of 4"),
    "long-names": ("Methods", "errors that runs share (calibration of a run whose name"),
}


@pytest.mark.parametrize("state", SAYS)
def test_every_state_has_its_sentences(state: str) -> None:
    report = STATES[state]()
    paragraphs = dict(paragraphs_of(report))
    title, words = SAYS[state]
    assert words in paragraphs[title]
    k = report.assessment.parameters["rate_constant"]
    written = k.quantity.written(float(k.value), float(k.standard_uncertainty))
    assert written in paragraphs["Results"]
    together = " ".join(paragraphs.values())
    assert "prove" not in together.lower()
    assert "nan" not in together.split()
    assert ".." not in together


def test_labels_are_no_markup_in_paragraphs() -> None:
    written = paragraphs_markdown(STATES["hostile"]())
    assert "<script>" not in written
    assert r"\<script\>" in written
