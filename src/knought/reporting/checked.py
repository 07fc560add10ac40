"""What a report shows of the checks of its ±: Monte Carlo and bootstrap of the headline."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from knought.reporting.uncertainty_tables import bootstrap_table, monte_carlo_table

if TYPE_CHECKING:
    from knought.fitting.bootstrap import Bootstrap
    from knought.fitting.found import Found
    from knought.fitting.monte_carlo import Drawn, MonteCarlo
    from knought.reporting.cells import Table

__all__ = ["Checked"]


@dataclass(frozen=True)
class Checked:
    """Checks of the headline's ± that a study asked for.

    Attributes
    ----------
    found
        The headline.
    monte_carlo
        Distributions propagated by drawing (JCGM 101); None where not asked for.
    bootstrap
        Answers from runs drawn again; None where not asked for.
    """

    found: Found
    monte_carlo: MonteCarlo | None = None
    bootstrap: Bootstrap | None = None

    @property
    def tables(self) -> tuple[Table, ...]:
        """A table of each check."""
        made = []
        if self.monte_carlo is not None:
            made.append(monte_carlo_table(self.monte_carlo))
        if self.bootstrap is not None:
            made.append(bootstrap_table(self.bootstrap, self.found))
        return tuple(made)

    def record(self) -> dict[str, Any]:
        """Return what the record keeps, by its keys."""
        drawn, again = self.monte_carlo, self.bootstrap
        made: dict[str, Any] = {}
        if drawn is not None:
            made["monte_carlo"] = {
                "seed": drawn.seed,
                "draws": drawn.draws,
                "converged": drawn.converged,
                "refitted": drawn.refitted,
                "how": drawn.how,
                "parameters": {
                    name: _drawn_record(each) for name, each in drawn.parameters.items()
                },
            }
        if again is not None:
            made["bootstrap"] = {
                "seed": again.seed,
                "kind": again.kind,
                "replicates": len(next(iter(again.values.values()))),
                "refused": again.refused,
                "parameters": {
                    name: _bootstrap_record(self.found, again, name) for name in again.values
                },
            }
        return made


def _drawn_record(drawn: Drawn) -> dict[str, Any]:
    shown = drawn.quantity.shown
    return {
        "mean": shown(drawn.mean),
        "standard_uncertainty": shown(drawn.standard_uncertainty),
        "unit": drawn.quantity.shown_unit,
        "interval": [shown(end) for end in drawn.interval()],
        "shortest_interval": [shown(end) for end in drawn.shortest_interval()],
        "coverage": 0.95,
        "ends_agree_with_closed_form": drawn.validates_linear(),
    }


def _bootstrap_record(found: Found, again: Bootstrap, name: str) -> dict[str, Any]:
    what = found.parameters[name].quantity
    return {
        "standard_uncertainty": what.shown(again.standard_uncertainty(name)),
        "unit": what.shown_unit,
        "interval": [what.shown(end) for end in again.interval(name)],
        "coverage": 0.95,
    }
