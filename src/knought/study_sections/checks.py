"""The section ``[checks]``: the ± of the headline found once more, by drawing and by refitting."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, Literal

from pydantic import Field

from knought.study_sections.base import Section

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.fitting.found import Found
    from knought.reporting.checked import Checked

__all__ = ["ChecksSection"]


class ChecksSection(Section):
    """``[checks]``: Monte Carlo and bootstrap of the headline; the seed is that of ``[study]``."""

    monte_carlo: Literal["adaptive"] | Annotated[int, Field(ge=1000, le=5_000_000)] | None = None
    bootstrap: Annotated[int, Field(ge=100, le=100_000)] | None = None
    bootstrap_kind: Literal["parametric", "case"] = "parametric"

    def run(
        self, found: Found, *, seed: int, progress: Callable[[str, int], None] | None = None
    ) -> Checked | None:
        """Run what is asked for; None where nothing is.

        Parameters
        ----------
        found
            The headline.
        seed
            Of the study.
        progress
            Told what is counted (``"draws"``, ``"refits"``) and how many of them are done.

        Returns
        -------
        Checked or None

        Raises
        ------
        InputError
            If the runs cannot carry a bootstrap.
        """
        if self.monte_carlo is None and self.bootstrap is None:
            return None
        from knought.fitting.bootstrap import bootstrap
        from knought.fitting.monte_carlo import monte_carlo
        from knought.reporting.checked import Checked

        def told(what: str) -> Callable[[int], None] | None:
            return None if progress is None else lambda done: progress(what, done)

        drawn = again = None
        if self.monte_carlo is not None:
            draws = None if self.monte_carlo == "adaptive" else self.monte_carlo
            drawn = monte_carlo(found, draws, seed=seed, progress=told("draws"))
        if self.bootstrap is not None:
            again = bootstrap(
                found,
                self.bootstrap,
                kind=self.bootstrap_kind,
                seed=seed,
                progress=told("refits"),
            )
        return Checked(found, drawn, again)
