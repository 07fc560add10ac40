"""The study file: TOML that says what to read and how to look at it, checked as a whole.

Unknown keys are refused with the nearest known one named, and all problems are told together.
Quantities are strings with units, read by the one grammar of :mod:`knought.chemistry.units`. The
sections themselves are in :mod:`knought.study_sections`.
"""

from __future__ import annotations

import difflib
from typing import TYPE_CHECKING, Any, get_args

from pydantic import BaseModel, ValidationError, model_validator

from knought.errors import InputError, Problem
from knought.study_sections.base import Section
from knought.study_sections.checks import ChecksSection
from knought.study_sections.core import (
    LawsSection,
    PriorsSection,
    RatesSection,
    ReactionSection,
    SharedErrorSection,
    StudySection,
)
from knought.study_sections.discussion import CandidateSection, LiteratureSection
from knought.study_sections.medium import MediumSection
from knought.study_sections.plan import PlanSection
from knought.study_sections.predict import PredictSection
from knought.study_sections.toml_text import read_toml
from knought.study_sections.upstream import TracesSection

if TYPE_CHECKING:
    from pathlib import Path

__all__ = ["StudyFile", "read_study_file"]


class StudyFile(Section):
    """A whole study file; sections that are left out keep their defaults."""

    study: StudySection = StudySection()
    rates: RatesSection | None = None
    medium: MediumSection | None = None
    traces: TracesSection | None = None
    reaction: ReactionSection = ReactionSection()
    laws: LawsSection = LawsSection()
    priors: PriorsSection = PriorsSection()
    shared_errors: tuple[SharedErrorSection, ...] = ()
    checks: ChecksSection = ChecksSection()
    literature: LiteratureSection | None = None
    candidates: tuple[CandidateSection, ...] = ()
    plan: PlanSection | None = None
    predict: PredictSection = PredictSection()

    @model_validator(mode="after")
    def _one_source(self) -> StudyFile:
        if (self.rates is None) == (self.traces is None):
            raise ValueError(
                "a study needs its rate constants from [rates], or from the traces of [traces]: "
                "name one of the two sections"
            )
        return self


def read_study_file(path: Path) -> StudyFile:
    """Read and check a study file.

    Parameters
    ----------
    path
        The file.

    Returns
    -------
    StudyFile

    Raises
    ------
    InputError
        If it cannot be read, is no TOML, or holds something unknown or wrong; every problem is
        told.
    """
    try:
        return StudyFile.model_validate(read_toml(path))
    except ValidationError as error:
        raise InputError(
            [_problem(path.name, detail) for detail in error.errors()]  # type: ignore[arg-type]
        ) from error


def _problem(file: str, detail: dict[str, Any]) -> Problem:
    """Turn one finding of pydantic into one of ours."""
    where = [str(part) for part in detail["loc"]] or ["the study"]
    place = f"[{'.'.join(where[:-1])}] {where[-1]}" if len(where) > 1 else where[0]
    kind = detail["type"]
    if kind == "extra_forbidden":
        known = _known_keys(where[:-1])
        near = difflib.get_close_matches(where[-1], known, n=1, cutoff=0.5)
        remedy = f"did you mean {near[0]!r}?" if near else f"known keys: {', '.join(known)}"
        return Problem("there is no such key", remedy, file=file, column=place)
    if kind == "missing":
        return Problem("this key is needed and missing", "add it", file=file, column=place)
    cause = detail.get("ctx", {}).get("error")
    what = str(cause) if cause is not None else str(detail["msg"])
    return Problem(what.rstrip("."), read=str(detail["input"]), file=file, column=place)


def _known_keys(where: list[str]) -> list[str]:
    model: type[BaseModel] = StudyFile
    for part in where:
        if part.isdigit():
            continue  # the number of a section that may be repeated
        annotation = model.model_fields[part].annotation
        annotation = next(iter(get_args(annotation)), annotation)
        if isinstance(annotation, type) and issubclass(annotation, BaseModel):
            model = annotation
    return list(model.model_fields)
