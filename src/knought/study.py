"""A study file, run whole: read, assess, and write one output folder."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING

from knought.beside import Beside, shown_name
from knought.errors import Caveat
from knought.files import read_bytes, refuse_existing, sha256_of, whole_folder
from knought.fitting.assess import assess
from knought.measurement.reading import read_rates
from knought.reporting.figure_files import FIGURE_FORMATS
from knought.reporting.folder import report_files
from knought.reporting.report import Report
from knought.study_file import read_study_file
from knought.study_sections.upstream import Upstream

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from knought.discussion.next_runs import Plan
    from knought.fitting.assess import Assessment
    from knought.measurement.table import RateTable
    from knought.reporting.discussed import Discussed
    from knought.study_file import StudyFile

__all__ = ["Study", "read_study", "run_study", "write_report"]


@dataclass(frozen=True)
class Study:
    """A study as its file describes it.

    Attributes
    ----------
    path
        The study file.
    settings
        What it says.
    allow_outside
        Whether it may name files outside its own folder.
    """

    path: Path
    settings: StudyFile
    allow_outside: bool = False

    def beside(self, file: str, key: str) -> Path:
        """Return where a file that the study names is; below the study file's folder.

        Parameters
        ----------
        file
            The relative path, as the study file gives it.
        key
            The key that gives it, for the message.

        Raises
        ------
        InputError
            If it points outside that folder.
        """
        return Beside(self.path, allow_outside=self.allow_outside).find(file, key)

    def report(self, progress: Callable[[str, int], None] | None = None) -> Report:
        """Read the table, assess it, and return the report.

        Parameters
        ----------
        progress
            Told of the checks what is counted (``"draws"``, ``"refits"``) and how many are done.

        Raises
        ------
        InputError
            If anything in the study is wrong, or the runs cannot carry what is asked of them.
        """
        said = self.settings
        contents = self._contents()
        reduced = None if said.rates is not None else self._upstream().reduced(self.beside)
        assessment = assess(
            self._rates() if reduced is None else reduced.rates,
            temperature_law=said.laws.temperature,
            salt_law=said.laws.salt,
            reference_temperature=said.study.reference_temperature,
            standard_concentration=said.study.standard_concentration,
            charge_product=said.reaction.charge_product,
            reactants=said.reaction.reactants,
            ion_size=said.laws.ion_size,
            priors=said.priors.priors(),
            shared_errors=[
                *(each.error() for each in said.shared_errors),
                *(() if reduced is None else reduced.shared_errors),
            ],
        )
        if reduced is not None:
            assessment = replace(assessment, caveats=(*assessment.caveats, *_once(reduced.caveats)))
        return Report(
            assessment,
            said.study.title,
            tuple((name, sha256_of(content)) for name, content in contents),
            said.study.seed,
            _discussed(self, assessment),
            said.checks.run(assessment.headline, seed=said.study.seed, progress=progress),
            reduced,
            said.predict.conditions(assessment.headline),
            contents,
        )

    def _rates(self) -> RateTable:
        """Read the table that ``[rates]`` names.

        Raises
        ------
        TypeError
            If there is none: a fault of ours, as the study file was checked before.
        """
        rates = self.settings.rates
        if rates is None:  # the study file was refused without either source
            raise TypeError("a study without [rates] has no table to read")
        return read_rates(
            self.beside(rates.file, "[rates] file"),
            sheet=rates.sheet,
            uncertainty_means=rates.uncertainty_means,
            decimal=rates.decimal,
            excess=rates.excess,
        )

    def _upstream(self) -> Upstream:
        return Upstream(self.settings.medium, self.settings.traces)

    def _contents(self) -> tuple[tuple[str, bytes], ...]:
        """Name and content of every file that the study reads, the study file first."""
        said = self.settings
        files = [*self._upstream().files(self.beside)]
        if said.rates is not None:
            files = [(said.rates.file, self.beside(said.rates.file, "[rates] file"))]
        if said.literature is not None:
            file = said.literature.file
            files.append((file, self.beside(file, "[literature] file")))
        shown = ((shown_name(name), path) for name, path in files)
        named = dict.fromkeys([(self.path.name, self.path), *shown])
        return tuple((name, read_bytes(path)) for name, path in named)


def _once(caveats: Sequence[Caveat]) -> list[Caveat]:
    """Say each kind of caveat of single traces once, with how many more there are."""
    found = []
    for code in dict.fromkeys(each.code for each in caveats):
        alike = [each for each in caveats if each.code == code]
        more = f" ({len(alike) - 1} more traces likewise)" if len(alike) > 1 else ""
        found.append(Caveat(code, alike[0].message + more))
    return found


def _discussed(study: Study, assessment: Assessment) -> Discussed | None:
    """Return the pieces of the discussion that the study asks for."""
    said = study.settings
    if said.literature is None and not said.candidates and said.plan is None:
        return None
    from knought.discussion.background import background
    from knought.discussion.compare import compare
    from knought.discussion.literature_table import read_literature
    from knought.discussion.mechanism import weigh
    from knought.reporting.discussed import Discussed

    comparison = weighing = beside = None
    if said.literature is not None:
        literature = said.literature
        comparison = compare(
            assessment,
            read_literature(
                study.beside(literature.file, "[literature] file"),
                sheet=literature.sheet,
                uncertainty_means=literature.uncertainty_means,
            ),
            method=literature.consensus,
            T=literature.temperature,
            I=literature.ionic_strength,
        )
    if said.candidates:
        weighing = weigh(assessment, [each.candidate() for each in said.candidates])
        leading = max(weighing.candidates, key=lambda each: each.weight)
        beside = background(assessment, leading.candidate)
    return Discussed(comparison, weighing, beside, _planned(study, assessment))


def _planned(study: Study, assessment: Assessment) -> Plan | None:
    """Return the next runs, in addition to those already made."""
    said = study.settings
    if said.plan is None:
        return None
    from knought.discussion.next_runs import plan

    return plan(**said.plan.arguments(), found=assessment, seed=said.study.seed)


def read_study(path: str | Path, *, allow_outside: bool = False) -> Study:
    """Read a study file.

    Parameters
    ----------
    path
        The file.
    allow_outside
        Whether it may name files outside its own folder; only for one that you trust.

    Raises
    ------
    InputError
        If the file is wrong.
    """
    path = Path(path)
    return Study(path, read_study_file(path), allow_outside)


def run_study(
    path: str | Path,
    out: str | Path,
    *,
    overwrite: bool = False,
    figure_formats: Sequence[str] = FIGURE_FORMATS,
    progress: Callable[[str, int], None] | None = None,
    allow_outside: bool = False,
) -> Report:
    """Run a study and write its output folder, whole or not at all.

    Parameters
    ----------
    path
        The study file.
    out
        The folder to make.
    overwrite
        Whether an existing folder may be replaced.
    figure_formats
        Formats of the figure files, some of ``"svg"``, ``"pdf"`` and ``"png"``.
    progress
        As for :meth:`Study.report`.
    allow_outside
        Whether the study may name files outside its own folder; only for one that you trust.

    Returns
    -------
    Report

    Raises
    ------
    InputError
        If the study is wrong, or the folder exists and may not be replaced.
    """
    refuse_existing(Path(out), overwrite=overwrite)
    report = read_study(path, allow_outside=allow_outside).report(progress)
    write_report(report, out, overwrite=overwrite, figure_formats=figure_formats)
    return report


def write_report(
    report: Report,
    out: str | Path,
    *,
    overwrite: bool = False,
    figure_formats: Sequence[str] = FIGURE_FORMATS,
) -> None:
    """Write page, record, summary, tables and figures of a report into a folder.

    Parameters
    ----------
    report
        The report.
    out
        The folder to make.
    overwrite
        Whether an existing folder may be replaced.
    figure_formats
        Formats of the figure files, some of ``"svg"``, ``"pdf"`` and ``"png"``.

    Raises
    ------
    InputError
        If the folder exists and may not be replaced, or cannot be written, or a format of figures
        is unknown.
    """
    refuse_existing(Path(out), overwrite=overwrite)
    # Everything is made before anything is written.
    files = report_files(report, figure_formats)
    with whole_folder(Path(out), overwrite=overwrite) as folder:
        for name, content in files.items():
            target = folder / name
            target.parent.mkdir(parents=True, exist_ok=True)
            target.write_bytes(content)
