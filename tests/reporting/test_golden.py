"""Every printed state of page and summary as it is read, held against golden files.

``pytest tests/reporting/test_golden.py --renew-golden`` writes them anew, and skips; nothing else
does. Look at ``git diff`` before you believe them.
"""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
import pytest

import knought as kn
from knought.reporting.page import written_page
from knought.reporting.paragraphs import paragraphs_text
from knought.reporting.written_tables import latex_table, markdown_table
from knought.version import __version__
from tests.fitting.test_assess import table
from tests.reporting.page_text import page_text
from tests.simulation import davies

if TYPE_CHECKING:
    from collections.abc import Callable

GOLDEN = Path(__file__).parent / "golden"

HOSTILE = "<script>alert('x')</script>"

#: A table as small as a study can be, so that a state costs little.
SMALL = {"T": [288.15, 298.15, 308.15], "k": [1.1e-3, 2.4e-3, 5.0e-3]}


def small(**changes: object) -> kn.RateTable:
    return kn.RateTable.from_arrays(**(SMALL | changes))  # type: ignore[arg-type]


def good() -> kn.Report:
    return kn.Report(kn.assess(table(), reactants="A^2- + B^-"), "Two anions")


def cannot_tell() -> kn.Report:
    return kn.Report(kn.assess(table(u=0.08)), "Two anions, measured roughly")


def nothing_fits() -> kn.Report:
    rates = table()
    k = np.where(np.arange(len(rates)) % 2, 1.25, 0.8) * rates.k
    bent = kn.RateTable.from_arrays(rates.T, k, rates.I, 0.005 * k, unit="L mol^-1 s^-1")
    return kn.Report(kn.assess(bent), "Two anions, scattered")


def one_temperature() -> kn.Report:
    I = np.array([0.005, 0.01, 0.02, 0.05, 0.1])
    T = np.full(len(I), 298.15)
    k = 6.3 * 10 ** davies(0.3)(T, I, 2.0)
    rates = kn.RateTable.from_arrays(T, k, I, u_k=0.02 * k, unit="L mol^-1 s^-1")
    return kn.Report(kn.assess(rates), "One temperature")


def warnings() -> kn.Report:
    rates = small(
        T=[288.15, 288.15, 298.15, 298.15],
        k=[1.1e-3, 1.2e-3, 2.4e-3, 9.0e-3],
        u_k=[3e-4, 3e-4, 6e-4, 1e-3],
    )
    used = np.array([True, True, True, False])
    rates = replace(rates, used=used, reason=("", "", "", "stirrer stood still"))
    return kn.Report(kn.assess(rates), "Two temperatures, one run left out")


def long_names() -> kn.Report:
    name = "a run whose name its maker could not bring himself to shorten in any way whatever " * 2
    error = kn.SharedError(f"calibration of {name}".strip(), kind="factor", u=0.02)
    rates = small(run=[f"{name}{i}" for i in range(3)], u_k=[2e-5, 5e-5, 1e-4])
    return kn.Report(kn.assess(rates, shared_errors=[error]), f"A study of {name}".strip())


def hostile() -> kn.Report:
    rates = small(run=[HOSTILE, "=cmd()", '"&\t$x$'], u_k=[2e-5, 5e-5, 1e-4])
    error = kn.SharedError(f"{HOSTILE}=cmd()", kind="factor", u=0.02)
    return kn.Report(kn.assess(rates, shared_errors=[error]), f"{HOSTILE}=cmd()")


STATES: dict[str, Callable[[], kn.Report]] = {
    "good": good,
    "cannot-tell": cannot_tell,
    "nothing-fits": nothing_fits,
    "one-temperature": one_temperature,
    "warnings": warnings,
    "long-names": long_names,
    "hostile": hostile,
}

#: What each state must say for its golden file to be of that state.
SAYS = {
    "good": "survive another",
    "cannot-tell": "cannot tell",
    "nothing-fits": "No law describes these data",
    "one-temperature": "All runs are at 298.15 K",
    "warnings": "left out",
    "long-names": "could not bring himself",
    "hostile": HOSTILE,
}


#: Numbers in full differ in their last digits from machine to machine.
_LONG = re.compile(r"-?\d+\.\d{5,}(?:e-?\d+)?")


def written_tables(report: kn.Report) -> dict[str, str]:
    full = "\n".join(table.csv() for table in report.plain_tables)
    return {
        "tables-md": "\n".join(map(markdown_table, report.tables)),
        "tables-tex": "\n".join(map(latex_table, report.tables)),
        "tables-csv": _LONG.sub(lambda found: f"{float(found[0]):.3g}", full),
    }


@pytest.mark.parametrize("state", STATES)
def test_page_and_summary_read_as_they_did(state: str, request: pytest.FixtureRequest) -> None:
    report = STATES[state]()
    drawn = dict.fromkeys((each.name for each in report.pictures), "<svg></svg>")
    html = written_page(report, drawn)
    assert html.count("<script>") == 1  # ours
    texts = {
        "page": page_text(html).replace(__version__, "VERSION"),
        "summary": report.summary(),
        "summary-ascii": report.summary("ascii"),
        "paragraphs": paragraphs_text(report).replace(__version__, "VERSION"),
        **written_tables(report),
    }
    assert SAYS[state] in texts["page"]
    renew = request.config.getoption("--renew-golden")
    for kind, text in texts.items():
        golden = GOLDEN / f"{state}.{kind}.txt"
        if renew:
            golden.parent.mkdir(exist_ok=True)
            golden.write_text(text, encoding="utf-8", newline="\n")
        else:
            assert text == golden.read_text(encoding="utf-8"), f"{golden.name} reads differently"
    if renew:
        pytest.skip("golden files written anew: look at git diff")
