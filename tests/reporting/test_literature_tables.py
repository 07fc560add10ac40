"""Tables and figures of literature and mechanism, as they are read."""

from __future__ import annotations

import matplotlib as mpl
import numpy as np
import pytest

from knought.discussion.compare import EXTRAPOLATED_K, Comparison, compare
from knought.discussion.compensation import compensation
from knought.discussion.literature import LiteratureValue
from knought.discussion.literature_spread import Spread
from knought.fitting.fit import fit
from knought.reporting.cells import plain_lines
from knought.reporting.literature_figures import compensation_plot, forest, gibbs_plot
from knought.reporting.literature_tables import (
    consensus_table,
    explanations_table,
    literature_table,
)
from knought.reporting.style import STYLE, blank_figure
from tests.discussion.studies import study

FOUND = fit(
    study(), temperature_law="arrhenius", salt_law="guntelberg", charge_product=2.0, scatter="given"
)


def papers() -> list[LiteratureValue]:
    k = {T: float(FOUND.rate_constant(T, 0.05).value) for T in (298.15, 308.15, 343.15)}
    three = Spread("2 s", 0.06, relative=True)
    return [
        LiteratureValue("King", "rate_constant", 1.02 * k[298.15], three, 298.15, 0.05, year=1931),
        LiteratureValue("Olson", "rate_constant", 0.98 * k[308.15], three, 308.15, 0.05),
        LiteratureValue("Indelli", "rate_constant", k[298.15] / 60, three, 298.15, 0.05),
        LiteratureValue("Perlmutter", "rate_constant", 1.1 * k[343.15], Spread(), 343.15, 0.05),
        LiteratureValue("Stein", "activation_energy", 61e3, Spread("1 s", 1e3), 298.15),
    ]


@pytest.fixture(scope="module")
def comparison() -> Comparison:
    return compare(FOUND, papers())


def test_the_table_of_papers_reads_as_a_chemist_would_write_it(comparison: Comparison) -> None:
    lines = plain_lines(literature_table(comparison))
    king = next(line for line in lines if line.startswith("King"))
    assert king.split()[:2] == ["King", "(1931)"]
    assert "k / (L mol⁻¹ s⁻¹)" in king
    assert "298.15" in king
    assert "agrees within 0.7 combined standard uncertainties" in king
    assert "differs, ours is larger by a factor 60" in next(x for x in lines if "Indelli" in x)
    assert "cannot judge: no uncertainty given" in next(x for x in lines if "Perlmutter" in x)
    text = " ".join(lines)
    assert "Arrhenius, Güntelberg" in text
    assert "states no ionic strength" in text
    assert EXTRAPOLATED_K in text


def test_numbers_stay_whole_behind_what_is_shown(comparison: Comparison) -> None:
    table = literature_table(comparison)
    assert all(len(row) == len(table.columns) for row in table.rows)
    energy = table.rows[4]
    assert energy[4].raw == 61.0
    assert energy[4].written("ascii") == "61.0 +/- 1.0"
    assert table.rows[0][7].raw == pytest.approx(comparison.matches[0].z)


def test_confusions_stand_in_a_table_of_their_own(comparison: Comparison) -> None:
    table = explanations_table(comparison)
    assert table is not None
    assert [row[0].raw for row in table.rows] == ["Indelli"]
    assert "s⁻¹ given as min⁻¹" in table.rows[0][2].written()
    assert any("none is applied" in note for note in table.notes)
    assert explanations_table(compare(FOUND, papers()[:1])) is None


def test_papers_together_stand_in_one_row_a_quantity(comparison: Comparison) -> None:
    table = consensus_table(comparison)
    assert table is not None
    (row,) = table.rows
    assert row[3].written() == "3"
    assert row[8].written() == "< 1e-6"
    assert row[11].written() == "DerSimonian-Laird"
    assert "Hartung and Knapp" in " ".join(plain_lines(table))
    assert consensus_table(compare(FOUND, papers()[:1])) is None
    energies = [
        LiteratureValue(name, "activation_energy", value, Spread("1 s", 1e3), 298.15, 0.05)
        for name, value in (("A", 60e3), ("B", 62e3))
    ]
    plain = consensus_table(compare(FOUND, energies))
    assert plain is not None
    assert plain.rows[0][4].written() == "61.0 ± 1.0"


def test_the_forest_shows_every_paper_the_consensus_and_ours(comparison: Comparison) -> None:
    carried = comparison.consensuses["rate_constant"]
    with mpl.rc_context(STYLE):
        figure = blank_figure()
        axes = figure.subplots()
        assert forest(carried, axes) is axes
        figure.canvas.draw()
        labels = [each.get_text() for each in axes.get_yticklabels()]
    assert labels == ["King (1931)", "Olson", "Indelli", "Perlmutter", "consensus"]
    assert axes.get_xscale() == "log"
    # A paper with an interval: its line spans 1.96 u to both sides.
    first = carried.carried[0]
    line = next(each for each in axes.lines if np.ptp(np.asarray(each.get_ydata())) == 0.0)
    low, high = np.asarray(line.get_xdata(), dtype=float)
    half = 1.959963984540054 * first.standard_uncertainty
    assert np.log(high / low) == pytest.approx(2 * half, rel=1e-9)


def test_a_forest_of_energies_has_a_plain_axis() -> None:
    values = [
        LiteratureValue(name, "activation_energy", 60e3, Spread("1 s", 1e3), 298.15, 0.05)
        for name in "AB"
    ]
    with mpl.rc_context(STYLE):
        axes = forest(
            compare(FOUND, values).consensuses["activation_energy"], blank_figure().subplots()
        )
    assert axes.get_xscale() == "linear"
    assert "kJ" in axes.get_xlabel()


def test_the_ellipses_are_drawn_in_shown_units() -> None:
    found = compensation(
        {name: fit(study(noise=1.0, seed=i)) for i, name in enumerate(("a", "b", "c"))}
    )
    with mpl.rc_context(STYLE):
        axes = compensation_plot(found, blank_figure().subplots())
        beside = gibbs_plot(found, blank_figure().subplots())
    assert "303" in beside.get_xlabel()
    ring = axes.lines[0]
    assert np.mean(np.asarray(ring.get_ydata())) == pytest.approx(
        found.points[0].enthalpy / 1e3, rel=0.01
    )
    legend = axes.get_legend()
    assert legend is not None
    assert [each.get_text() for each in legend.get_texts()] == ["a", "b", "c"]
