"""The study file: TOML that says what to read and how to look at it, checked as a whole.

Unknown keys are refused with the nearest known one named, and all problems are told together.
Quantities are strings with units, read by the one grammar of :mod:`knought.chemistry.units`.
"""

from __future__ import annotations

import difflib
import tomllib
from typing import TYPE_CHECKING, Annotated, Any, Literal, get_args

from pydantic import (
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    ValidationError,
    model_validator,
)

from knought.chemistry.units import parse_quantity
from knought.errors import InputError, Problem
from knought.laws.open_law import DEFAULT_PRIORS, Priors
from knought.measurement.shared_errors import KINDS, SharedError
from knought.study_sections.discussion import CandidateSection, LiteratureSection

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

__all__ = ["StudyFile", "read_study_file"]

#: A study file larger than this was not written by hand.
_LARGEST = 1_000_000


def _in_unit(unit: str) -> Callable[[object], float]:
    def read(value: object) -> float:
        if not isinstance(value, str):
            raise ValueError(f'a quantity is a string with its unit, "298.15 {unit}"')
        return parse_quantity(value, unit)

    return read


Kelvin = Annotated[float, BeforeValidator(_in_unit("K"))]
MolPerLitre = Annotated[float, BeforeValidator(_in_unit("mol L^-1"))]
LitrePerMol = Annotated[float, BeforeValidator(_in_unit("L mol^-1"))]
Metre = Annotated[float, BeforeValidator(_in_unit("m"))]


class _Section(BaseModel):
    model_config = ConfigDict(extra="forbid", frozen=True)


class StudySection(_Section):
    """``[study]``: what the whole is called."""

    title: str = "Untitled study"
    reference_temperature: Kelvin | None = None
    seed: int = Field(default=20_250_101, ge=0)
    standard_concentration: MolPerLitre = 1.0


class RatesSection(_Section):
    """``[rates]``: the table of rate constants, and what its ± means."""

    file: str
    sheet: str | int | None = None
    uncertainty_means: str | None = None


class ReactionSection(_Section):
    """``[reaction]``: what is known of the rate-determining step."""

    reactants: str | None = None
    charge_product: float | None = None


class LawsSection(_Section):
    """``[laws]``: laws of the headline, where they are not ours to choose."""

    temperature: str | None = None
    salt: str | None = None
    ion_size: Metre | None = None


class PriorsSection(_Section):
    """``[priors]``: what is known of the open law's å, c and β."""

    ion_size: tuple[Metre, Metre] = DEFAULT_PRIORS.ion_size
    linear_coefficient: tuple[LitrePerMol, LitrePerMol] = DEFAULT_PRIORS.linear_coefficient
    interaction_coefficient: tuple[LitrePerMol, LitrePerMol] = (
        DEFAULT_PRIORS.interaction_coefficient
    )

    def priors(self) -> Priors:
        """Return them as the fit takes them."""
        return Priors(
            (self.ion_size[0], self.ion_size[1]),
            (self.linear_coefficient[0], self.linear_coefficient[1]),
            (self.interaction_coefficient[0], self.interaction_coefficient[1]),
        )


class SharedErrorSection(_Section):
    """``[[shared_errors]]``: an error that all runs, or those of a batch, share."""

    name: str
    kind: Literal["temperature-offset", "temperature-gain", "factor", "ionic-strength-factor"]
    u: str
    batch: str | None = None
    distribution: Literal["normal", "rectangular", "triangular", "t"] = "normal"
    degrees_of_freedom: float | None = None
    calibrated_at: Kelvin = 298.15

    @model_validator(mode="after")
    def _check(self) -> SharedErrorSection:
        self.error()
        return self

    def error(self) -> SharedError:
        """Return it as the fit takes it.

        Raises
        ------
        InputError
            If u has the wrong unit, or a number cannot be.
        """
        return SharedError(
            self.name,
            self.kind,
            parse_quantity(self.u, KINDS[self.kind]),
            self.batch,
            self.distribution,
            self.degrees_of_freedom,
            self.calibrated_at,
        )


class StudyFile(_Section):
    """A whole study file; sections that are left out keep their defaults."""

    study: StudySection = StudySection()
    rates: RatesSection
    reaction: ReactionSection = ReactionSection()
    laws: LawsSection = LawsSection()
    priors: PriorsSection = PriorsSection()
    shared_errors: tuple[SharedErrorSection, ...] = ()
    literature: LiteratureSection | None = None
    candidates: tuple[CandidateSection, ...] = ()


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
        if path.stat().st_size > _LARGEST:
            raise InputError(
                Problem("is too large for a study file", "give the .toml file", file=path.name)
            )
        text = path.read_text(encoding="utf-8")
    except OSError as error:
        raise InputError(
            Problem(f"cannot be read: {error.strerror}", "check the path", file=path.name)
        ) from error
    except UnicodeDecodeError as error:
        raise InputError(
            Problem("is not UTF-8 text", "save the study file as UTF-8", file=path.name)
        ) from error
    try:
        return StudyFile.model_validate(tomllib.loads(text))
    except tomllib.TOMLDecodeError as error:
        raise InputError(
            Problem(f"is not valid TOML: {error}", "mend that line", file=path.name)
        ) from error
    except ValidationError as error:
        raise InputError(
            [_problem(path.name, detail) for detail in error.errors()]  # type: ignore[arg-type]
        ) from error


def _problem(file: str, detail: dict[str, Any]) -> Problem:
    """Turn one finding of pydantic into one of ours."""
    where = [str(part) for part in detail["loc"]]
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
