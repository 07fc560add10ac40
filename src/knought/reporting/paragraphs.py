"""Methods and results as paragraphs to paste: whole sentences, each with its numbers."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.fitting.verdicts import NOT_DESCRIBED
from knought.reporting.cells import join_words
from knought.reporting.methods import methods_sentences
from knought.reporting.sentences import charge_sentences, runs_sentence, written_reactants

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.fitting.assess import Assessment
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found
    from knought.fitting.surface_fit import SurfaceFit
    from knought.reporting.report import Report

__all__ = ["paragraphs_markdown", "paragraphs_of", "paragraphs_text"]

_ACTIVATION = (
    "activation_energy",
    "activation_enthalpy",
    "activation_entropy",
    "activation_gibbs_energy",
    "activation_heat_capacity",
)


def paragraphs_of(report: Report) -> tuple[tuple[str, str], ...]:
    """Return heading and text of every paragraph that the report supports.

    Parameters
    ----------
    report
        The report: methods and results always; limits where something must be said with the
        numbers; the discussion where the study asked for one.
    """
    assessment = report.assessment
    made = [
        ("Methods", [*report.upstream, *methods_sentences(assessment)]),
        ("Results", _results(assessment)),
        ("Limits of these results", [each.message for each in assessment.caveats]),
        ("Discussion", list(report.discussion)),
    ]
    return tuple((title, _joined(sentences)) for title, sentences in made if sentences)


def paragraphs_text(report: Report) -> str:
    """Return the paragraphs as plain text, each on one line."""
    return "\n\n".join(f"{title}\n{text}" for title, text in paragraphs_of(report)) + "\n"


def paragraphs_markdown(report: Report) -> str:
    """Return the paragraphs as Markdown; nothing of a label is markup."""
    from knought.reporting.written_tables import markdown_text

    return (
        "\n\n".join(f"## {title}\n\n{markdown_text(text)}" for title, text in paragraphs_of(report))
        + "\n"
    )


def _joined(sentences: Sequence[str]) -> str:
    closed = (text if text.endswith((".", "?", "!")) else f"{text}." for text in sentences)
    return " ".join(" ".join(text.split()) for text in closed)


def _results(assessment: Assessment) -> list[str]:
    found = assessment.headline
    return [
        _basis_sentence(assessment),
        _headline_sentence(found),
        *_working_sentence(found),
        *_charge_product_sentences(assessment),
        *_other_laws_sentence(assessment),
    ]


def _basis_sentence(assessment: Assessment) -> str:
    source = assessment.rates.source
    name = "table" if source is None else source.name
    return f"The results rest on {runs_sentence(assessment).removeprefix(f'{name}: ')}"


def _headline_sentence(found: Found) -> str:
    parameters = found.parameters
    where = "I → 0" if found.describes_salt else "the ionic strength of the runs"
    said = [_written(parameters["rate_constant"])]
    said += [_written(parameters[name]) for name in _ACTIVATION if name in parameters]
    text = f"At {found.reference_temperature:.2f} K and {where}, {join_words(said)}"
    low, high = (parameters["rate_constant"].interval(0.95)[i] for i in (0, 1))
    what = parameters["rate_constant"].quantity
    u = float(parameters["rate_constant"].standard_uncertainty)
    ends = " to ".join(what.rounded(float(end), u).number() for end in (low, high))
    text += f" (± one standard uncertainty); the 95 % interval of {what.symbol.text} is {ends}."
    if "activation_energy" not in parameters:
        text += (
            " As all runs are at one temperature, they say nothing of the energy, enthalpy and "
            "entropy of activation."
        )
    return text


def _written(estimate: Estimate) -> str:
    what = estimate.quantity
    u = None if estimate.given else float(estimate.standard_uncertainty)
    return f"{what.symbol.text} = {what.written(float(estimate.value), u)}"


def _working_sentence(found: Found) -> list[str]:
    """Return the same at the highest ionic strength of the runs, where they vary it."""
    levels = found.observations.ionic_strength_levels
    if not found.describes_salt or len(levels) < 2:
        return []
    there = found.at(I=float(levels[-1]))
    names = [name for name in ("rate_constant", *_ACTIVATION[1:4]) if name in there]
    said = join_words([_written(there[name]).replace("k° =", "k =", 1) for name in names])
    return [f"At I = {levels[-1]:.3g} mol/L, {said}."]


def _charge_product_sentences(assessment: Assessment) -> list[str]:
    choices, alone = assessment.choices, assessment.data_alone
    found = assessment.headline if alone is None else alone
    estimate = found.parameters.get("charge_product")
    sentences = []
    if choices.charge_product is not None:
        number = f"{choices.charge_product:g}".replace("-", "−")
        source = f" of {written_reactants(choices.reactants)}" if choices.reactants else ""
        sentences.append(f"The charge product z_A z_B = {number}{source} was taken as known.")
    if estimate is not None and not estimate.given:
        u = float(estimate.standard_uncertainty)
        ends = [
            estimate.quantity.rounded(float(end), u).number() for end in estimate.interval(0.95)
        ]
        opening = "Left open, it comes out as" if sentences else "The charge product is"
        sentences.append(
            f"{opening} {estimate.quantity.written(float(estimate.value), u)} "
            f"(95 % interval {ends[0]} to {ends[1]})."
        )
        sentences += charge_sentences(found)[:1]
    return sentences


def _other_laws_sentence(assessment: Assessment) -> list[str]:
    """Return over what k° would range if another law that describes the data were the true one."""
    fitting = [law for law in assessment.laws if _describes(law)]
    if len(fitting) < 2 or not assessment.headline.describes_salt:
        return []
    estimates = sorted(
        (law.parameters["rate_constant"] for law in fitting), key=lambda each: float(each.value)
    )
    ends = [
        each.quantity.rounded(float(each.value), float(each.standard_uncertainty)).number()
        for each in (estimates[0], estimates[-1])
    ]
    names = join_words([law.surface.salt_law.words for law in fitting])
    return [
        f"Of the named salt laws, {len(fitting)} describe the runs ({names}); under them "
        f"{estimates[0].quantity.symbol.text} runs from {ends[0]} to {ends[1]}, in the same unit."
    ]


def _describes(law: SurfaceFit) -> bool:
    if not law.describes_salt:
        return False
    return law.scatter.kind != "enlarged" or law.scatter.probability >= NOT_DESCRIBED
