"""A blank table with the right headers and a study file that explains itself."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.files import whole_folder

if TYPE_CHECKING:
    from pathlib import Path

__all__ = ["write_template"]

#: Header, width, and what belongs there.
_COLUMNS = (
    ("run", 8, "a label of your own"),
    ("t/°C", 10, "or T/K"),
    ("I/(mol/L)", 12, "ionic strength, every ion counted; leave the column out if unknown"),
    ("k/(L mol^-1 s^-1)", 20, "any unit of k: the order is read from it"),
    ("u(k)/(L mol^-1 s^-1)", 22, "standard uncertainty; or u_r(k)/%; leave the column out if none"),
    ("salt", 12, "what sets the ionic strength"),
    ("batch", 10, "runs that share a stock, a day, an instrument"),
    ("use", 6, "yes or no"),
    ("reason", 24, "needed where use is no"),
    ("note", 24, ""),
)

_STUDY = """\
# A study for knought. Lines that begin with # are comments; remove the # to use a line.
# Quantities are strings with their unit.

[study]
title = "My study"
# reference_temperature = "298.15 K"      # where parameters are given
# standard_concentration = "1 mol/L"      # to which ΔG‡ and ΔS‡ refer

[rates]
file = "rates.xlsx"                        # or .csv, .tsv; beside this file
# sheet = "rates"
# uncertainty_means = "standard deviation" # what ± means, where the header does not say
# decimal = ","                            # where the numbers of a text file do not show it

# Traces instead of rate constants: leave [rates] out. runs.csv: run, t/°C, V(stock name)/mL, ...;
# traces.csv: t/s and a column a run. `knought reduce` shows what comes of them.
# [medium]
# total_volume = "25 mL"
# equilibria = ["water", "phosphate"]
# [[medium.stocks]]
# name = "salt"
# contents = { NaClO4 = "1.000 mol/L" }
# u = "0.2 %"
# [traces]
# runs = "runs.csv"
# file = "traces.csv"
# kind = "initial-slope"                   # first-order, slopes
# orders = { A = 1, B = "?" }              # "?" is told, and not chosen
# dead_time = "4 s"
# [traces.optics]
# absorptivity = "21500 L mol^-1 cm^-1"
# u_absorptivity = "1 %"

[reaction]
# What enters the rate-determining step, with charges. If you know it, say it: nothing narrows
# the rate constant at zero ionic strength more.
# reactants = "A^2- + B^-"

[laws]
# temperature = "eyring"                   # arrhenius, modified-arrhenius, eyring, eyring-cp
# salt = "open"                            # left open unless you have a reason to name one

# An error that all runs share, or those of one batch; repeat the section for each.
# kinds: temperature-offset, temperature-gain, factor (on k: absorptivity, path length, a stock),
# ionic-strength-factor
# [[shared_errors]]
# name = "probe offset"
# kind = "temperature-offset"
# u = "0.2 K"                              # standard uncertainty; "2 %" for the other kinds
# distribution = "rectangular"             # normal, rectangular, triangular, t; for Monte Carlo
# batch = "A"
# each_run = true                          # each run has one of its own, instead of one for all

# Where k is told, in every combination.
# [predict]
# temperatures = "25, 37 °C"
# ionic_strengths = "0, 0.15 mol/L"

# Find the ± of the headline once more; it takes seconds to minutes.
# [checks]
# monte_carlo = "adaptive"                 # JCGM 101 until two digits of u stand, or a number
# bootstrap = 500                          # refits of runs drawn again
# bootstrap_kind = "parametric"            # or "case"

[priors]
# What is known of the open salt law before the data; narrow them only if you know better.
# ion_size = ["1 Å", "12 Å"]               # uniform between
# linear_coefficient = ["0.1 L/mol", "0.3 L/mol"]       # mean, standard uncertainty
# interaction_coefficient = ["0 L/mol", "0.3 L/mol"]    # mean, standard uncertainty
# constant_size = 0.5                      # odds that å, rather than B å, is the same at every T
"""


def write_template(out: Path) -> tuple[Path, ...]:
    """Write ``rates.xlsx`` and ``study.toml`` into a new folder.

    Parameters
    ----------
    out
        The folder to make.

    Returns
    -------
    tuple of Path
        What was written.

    Raises
    ------
    InputError
        If the folder exists or cannot be written.
    """
    with whole_folder(out, overwrite=False) as folder:
        _write_table(folder / "rates.xlsx")
        (folder / "study.toml").write_text(_STUDY, encoding="utf-8", newline="\n")
    return out / "rates.xlsx", out / "study.toml"


def _write_table(path: Path) -> None:
    from openpyxl import Workbook
    from openpyxl.comments import Comment
    from openpyxl.styles import Font
    from openpyxl.utils import get_column_letter

    book = Workbook()
    book.remove(book.worksheets[0])
    sheet = book.create_sheet("rates")
    for number, (header, width, remark) in enumerate(_COLUMNS, start=1):
        cell = sheet.cell(row=1, column=number, value=header)
        cell.font = Font(bold=True)
        if remark:
            cell.comment = Comment(remark, "knought")
        sheet.column_dimensions[get_column_letter(number)].width = width
    sheet.freeze_panes = "A2"
    book.save(path)
