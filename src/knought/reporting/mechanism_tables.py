"""Tables on the mechanism: candidates, distances under every law, encounter, charges, shifts."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.standing import law_words, signed
from knought.reporting.cells import Cell, Table, number, number_column, text_column, words
from knought.rounding import Rounded, rounded

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.discussion.activation_shift import Shift
    from knought.discussion.background import Background
    from knought.discussion.electrostatics import ElectrostaticPart
    from knought.discussion.encounter_check import EncounterCheck
    from knought.discussion.entropy_sign import EntropySign
    from knought.discussion.mechanism import Weighing
    from knought.rounding import Layout

__all__ = [
    "background_tables",
    "candidates_table",
    "distances_table",
    "electrostatic_table",
    "encounter_table",
    "entropy_sign_table",
    "shift_table",
]

_LAYOUTS: tuple[Layout, ...] = ("text", "ascii", "html", "latex")


#: Weights below this are shown as a bound.
_LEAST_WEIGHT = 0.001


def candidates_table(weighing: Weighing) -> Table:
    """Return every candidate with its charges, its distance under the open law and its weight."""
    rows = []
    for each in weighing.candidates:
        first = each.distances[0] if each.distances else None
        rows.append(
            (
                words(each.candidate.name),
                Cell(
                    each.candidate.text,
                    tuple((layout, each.candidate.written(layout)) for layout in _LAYOUTS),
                ),
                _signed_number(each.candidate.charge_change),
                _signed_number(each.candidate.charge_product),
                words("–") if first is None else number(first.standard_uncertainties, decimals=1),
                number(each.prior, digits=2),
                _weight(each.weight),
            )
        )
    notes = [
        "Weights compare the candidates given and no others: prior times the evidence of the open "
        "law at each charge product, normalised.",
    ]
    if weighing.fit is None:
        notes.append(
            "The runs alone say nothing of the charges; weights are those before the data."
        )
    else:
        notes.append(f"Laws: {law_words(weighing.fit)}.")
    notes += [
        f"{each.candidate.name} is left out: {each.excluded}."
        for each in weighing.candidates
        if each.excluded
    ]
    return Table(
        "candidates",
        "Candidate mechanisms and the salt effect",
        (
            text_column("candidate"),
            text_column("enters the transition state"),
            number_column("Δz²"),
            number_column("z_A z_B"),
            number_column("distance / u"),
            number_column("prior"),
            number_column("weight"),
        ),
        tuple(rows),
        tuple(notes),
    )


def distances_table(weighing: Weighing) -> Table | None:
    """Return each candidate's distance under every law; None where no law finds the charges."""
    first = weighing.candidates[0].distances
    if not first:
        return None
    rows = []
    for i, law in enumerate(first):
        cells = [words(law.temperature_law), words(law.salt_law)]
        cells.append(_pair(law.found, law.standard_uncertainty))
        cells += [
            number(each.distances[i].standard_uncertainties, decimals=1)
            for each in weighing.candidates
        ]
        cells.append(words("yes" if law.describes else "no"))
        rows.append(tuple(cells))
    return Table(
        "candidate-distances",
        "Charge product of each candidate less the one found, over its standard uncertainty",
        (
            text_column("temperature law"),
            text_column("salt law"),
            number_column("z_A z_B found"),
            *(number_column(each.candidate.name) for each in weighing.candidates),
            text_column("describes the runs"),
        ),
        tuple(rows),
        (
            "A named law claims a smaller u than the open law because it takes its own form for "
            "certain.",
        ),
    )


def background_tables(found: Background) -> list[Table]:
    """Return the tables of what charges, diffusion and ionic strength bring for one candidate."""
    tables = [
        shift_table(found.shifts, found.laws),
        None if found.sign is None else entropy_sign_table(found.sign),
        None if found.electrostatic is None else electrostatic_table(found.electrostatic),
        None if found.encounter is None else encounter_table(found.encounter),
    ]
    return [table for table in tables if table is not None]


def encounter_table(check: EncounterCheck) -> Table:
    """Return k beside the diffusion limit at each temperature."""
    limit = check.limit
    rows = []
    for i, T in enumerate(limit.T):
        cells = [
            number(float(T), decimals=2),
            _pair(float(check.rate_constant[i]), float(check.standard_uncertainty[i])),
            number(float(limit.rate_constant[i]), digits=3),
            number(float(limit.debye_factor[i]), digits=3),
            number(float(check.share[i]), digits=2),
            number(float(limit.activation_energy[i]) / 1e3, decimals=1),
        ]
        if check.activated is not None and check.activated_uncertainty is not None:
            cells.append(_pair(float(check.activated[i]), float(check.activated_uncertainty[i])))
        else:
            cells.append(words("–"))
        rows.append(tuple(cells))
    where = "in the runs' own medium" if check.in_medium else "at I → 0"
    return Table(
        "encounter",
        f"Rate constant {where} beside the diffusion limit",
        (
            number_column("T / K"),
            number_column("k / (L/(mol s))"),
            number_column("k_D / (L/(mol s))"),
            number_column("Debye factor"),
            number_column("k/k_D"),
            number_column("Eₐ of k_D / (kJ/mol)"),
            number_column("k corrected / (L/(mol s))"),
        ),
        tuple(rows),
        (
            f"z_A z_B = {signed(limit.charge_product)}, R = {limit.contact_distance * 1e10:.3g} Å; "
            f"{limit.source}. The correction, 1/k = 1/k_D + 1/k_act, is made within a factor of 10 "
            "of the limit; its ± is that of k alone.",
        ),
    )


def electrostatic_table(part: ElectrostaticPart) -> Table:
    """Return the electrostatic part of ΔG‡, ΔH‡ and ΔS‡ at each temperature."""
    T = np.atleast_1d(part.T)
    share = part.relative_uncertainty
    rows = []
    for i, temperature in enumerate(T):
        energies = [
            float(np.atleast_1d(values)[i]) * factor
            for values, factor in (
                (part.gibbs_energy, 1e-3),
                (part.enthalpy, 1e-3),
                (part.entropy, 1.0),
            )
        ]
        rows.append(
            (
                number(float(temperature), decimals=2),
                *(_pair(value, abs(value) * share) for value in energies),
            )
        )
    return Table(
        "electrostatic-part",
        "What the charges alone bring to the activation parameters",
        (
            number_column("T / K"),
            number_column("ΔG_el / (kJ/mol)"),
            number_column("ΔH_el / (kJ/mol)"),
            number_column("ΔS_el / (J/(K mol))"),
        ),
        tuple(rows),
        (
            f"Double-sphere model in water, z_A z_B = {signed(part.charge_product)}, r = "
            f"{part.contact_distance * 1e10:.3g} Å"
            + (
                f" ± {part.contact_distance_uncertainty * 1e10:.2g} Å"
                if part.contact_distance_uncertainty
                else ""
            )
            + ", zero ionic strength: an order of magnitude, not a prediction.",
        ),
    )


def shift_table(shifts: Sequence[Shift], laws: str) -> Table | None:
    """Return what each ionic strength changes, against I → 0; None for no shift.

    Parameters
    ----------
    shifts
        What :func:`~knought.discussion.activation_shift.activation_shifts` found.
    laws
        The laws that they rest on, in words.
    """
    if not shifts:
        return None
    rows = []
    for each in shifts:
        ln_k, u = each.ln_rate_constant
        rows.append(
            (
                number(each.I, digits=3),
                _pair(math.exp(ln_k), math.exp(ln_k) * u),
                _maybe(each.activation_energy, 1e-3),
                _maybe(each.activation_entropy, 1.0),
            )
        )
    return Table(
        "shifts",
        f"What the ionic strength changes at {shifts[0].T:.2f} K, against I → 0",
        (
            number_column("I / (mol/L)"),
            number_column("k/k°"),
            number_column("change of Eₐ / (kJ/mol)"),
            number_column("change of ΔS‡ / (J/(K mol))"),
        ),
        tuple(rows),
        (f"Laws: {laws}.",),
    )


def entropy_sign_table(sign: EntropySign) -> Table:
    """Return ΔS‡ and the probability that it is negative under every law tried."""
    return Table(
        "entropy-sign",
        "Sign of the entropy of activation under every law tried",
        (
            text_column("laws"),
            number_column("ΔS‡ / (J/(K mol))"),
            number_column("P(ΔS‡ < 0)"),
            text_column("describes the runs"),
        ),
        tuple(
            (
                words(each.laws),
                _pair(each.value, each.standard_uncertainty),
                number(each.negative, decimals=3),
                words("yes" if each.describes else "no"),
            )
            for each in sign.laws
        ),
        ("At I → 0 where the law describes the salt effect, else in the runs' own medium.",),
    )


def _weight(weight: float) -> Cell:
    """Return a weight; one too small to be told from none is shown as a bound."""
    if 0 < weight < _LEAST_WEIGHT:
        return Cell(weight, (("text", f"< {_LEAST_WEIGHT:g}"),))
    return number(weight, decimals=3)


def _maybe(pair: tuple[float, float] | None, factor: float) -> Cell:
    return words("–") if pair is None else _pair(pair[0] * factor, pair[1] * factor)


def _pair(value: float, u: float) -> Cell:
    digits = rounded(value, u) if u else rounded(value, digits=3)
    return Cell(value, tuple((layout, digits.pair(layout)) for layout in _LAYOUTS))


def _signed_number(value: float) -> Cell:
    digits = Rounded(f"{value:g}", "", 0)
    return Cell(value, tuple((layout, digits.number(layout)) for layout in _LAYOUTS))
