"""Print what is in a solution: composition after mixing and equilibria, I, and counter-ions.

RECIPE is a TOML file with a section [medium] (a study file is one), or substances with their final
concentrations: ``knought medium NaClO4=0.1 HClO4=0.001`` in mol/L.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, add_overwrite, layout_of, new_file, say
from knought.errors import InputError

if TYPE_CHECKING:
    import argparse

    from knought.chemistry.medium_series import MediumSeries
    from knought.study_sections.medium import MediumSection

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "medium"
HELP = "ionic strength and composition of a recipe"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument(
        "recipe", nargs="+", metavar="RECIPE", help="TOML with [medium], or SUBSTANCE=mol/L ..."
    )
    parser.add_argument("--temperature", type=float, metavar="K", help="temperature in K")
    parser.add_argument(
        "--equilibria", default="", metavar="NAMES", help='by name: "water, phosphate"'
    )
    parser.add_argument("--reach", type=float, metavar="I", help="ionic strength to reach, mol/L")
    parser.add_argument("--salt", metavar="SALT", help="the salt that is added to reach it")
    parser.add_argument("--csv", metavar="FILE", help="write the columns for a rate table")
    add_overwrite(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Prepare the media and say what is in them.

    Raises
    ------
    InputError
        If the recipe or the options cannot be read.
    """
    from knought.files import atomic_write_text

    target = new_file(options.csv, options)
    section, labels = _section(options)
    if (options.reach is None) != (options.salt is None):
        raise InputError("--reach and --salt belong together", "give both")
    series = section.series()
    lines = [*_lines(series, labels), *_sources(section)]
    if (series.standard_uncertainty > 0).any():
        lines.append("± is a standard uncertainty: stocks, volumes and constants as stated")
    if options.reach is not None:
        lines += _salt(section, options.reach, options.salt, labels)
    say("\n".join(lines), layout_of(options))
    if target is not None:
        atomic_write_text(target, _csv(series, labels))
        say(f"\ncolumns: {options.csv}", layout_of(options))


def _section(options: argparse.Namespace) -> tuple[MediumSection, tuple[str, ...]]:
    """Return the section and the labels of its runs.

    Raises
    ------
    InputError
        If the recipe cannot be read.
    """
    from knought.study_sections.medium import MediumSection, RecipeSection
    from knought.study_sections.upstream import read_upstream

    first = options.recipe[0]
    names = tuple(name.strip() for name in options.equilibria.split(",") if name.strip())
    if "=" in first:
        final = dict(_substance(each) for each in options.recipe)
        section = MediumSection(recipes=(RecipeSection(run="1"),))
        section = section.model_copy(update={"final": final})
    else:
        found = read_upstream(Path(first)).medium
        if found is None:
            raise InputError("the file has no section [medium]", "add stocks and recipes to it")
        section = found
    update: dict[str, object] = {"equilibria": (*section.equilibria, *names)}
    if options.temperature is not None:
        update["temperature"] = options.temperature
    return section.model_copy(update=update), tuple(each.run for each in section.recipes)


def _substance(text: str) -> tuple[str, float]:
    name, _, amount = text.partition("=")
    try:
        return name.strip(), float(amount)
    except ValueError as error:
        raise InputError(
            f"{text!r} is no substance with its concentration", "write NaClO4=0.1 (mol/L)"
        ) from error


def _lines(series: MediumSeries, labels: tuple[str, ...]) -> list[str]:
    lines = []
    for label, medium, u in zip(labels, series.media, series.standard_uncertainty, strict=True):
        said = f" ± {u:.2g}" if u > 0 else ""
        lines += [
            f"run {label} at {medium.temperature:.2f} K",
            f"  I = {medium.ionic_strength:.5g}{said} mol/L "
            f"({medium.molal_ionic_strength:.5g} mol/kg; "
            f"{medium.stoichiometric_ionic_strength:.5g} mol/L if nothing associated)",
        ]
        if medium.ph is not None:
            lines.append(f"  pH = {medium.ph:.2f}")
        ordered = sorted(medium.concentrations.items(), key=lambda pair: -pair[1])
        lines += [f"  {species.text:<14} {c:.5g} mol/L" for species, c in ordered if c > 0]
        lines += [f"  warning ({each.code}): {each.message}" for each in medium.caveats]
    return lines


def _sources(section: MediumSection) -> list[str]:
    """Say which constants were used, and where each is from."""
    found = section.all_equilibria()
    if not found:
        return []
    head = f"constants at I → 0 unless said, carried by {section.form().words}"
    return [
        head,
        *(
            f"  {each.reaction}: lg K = {each.lg_K:g} at {each.reference_temperature:.2f} K"
            + (f" and I = {each.ionic_strength:g} mol/L" if each.ionic_strength else "")
            + f" ({each.source or 'given'})"
            for each in found
        ),
    ]


def _salt(section: MediumSection, goal: float, salt: str, labels: tuple[str, ...]) -> list[str]:
    from knought.chemistry.medium_series import salt_series

    recipes = section.made()
    amounts = salt_series(
        [goal] * len(recipes),
        salt,
        recipes,
        section.temperature,
        section.all_equilibria(),
        section.form(),
    )
    return [
        f"run {label}: {amount:.5g} mol/L of {salt} bring I to {goal:g} mol/L"
        for label, amount in zip(labels, amounts, strict=True)
    ]


def _csv(series: MediumSeries, labels: tuple[str, ...]) -> str:
    """Return run, T, I and u(I), and every ion, as columns of a rate table."""
    from knought.measurement.labels import guarded

    ions = list(dict.fromkeys(s.ascii for medium in series.media for s in medium.concentrations))
    with_u = bool((series.standard_uncertainty > 0).all())
    head = ["run", "T/K", "I/(mol/L)", *(["u(I)/(mol/L)"] if with_u else [])]
    rows = [",".join([*head, *(f"c({ion})/(mol/L)" for ion in ions)])]
    for label, medium, u in zip(labels, series.media, series.standard_uncertainty, strict=True):
        numbers = [medium.temperature, medium.ionic_strength, *([float(u)] if with_u else [])]
        numbers += [medium[ion] for ion in ions]
        rows.append(",".join([guarded(label), *(repr(number) for number in numbers)]))
    return "\n".join(rows) + "\n"
