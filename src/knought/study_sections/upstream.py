"""``[traces]`` of a study file, and with ``[medium]`` the road from photometer to rate table."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

from pydantic import BeforeValidator, ConfigDict, Field, ValidationError

from knought.chemistry.order_text import parse_order
from knought.errors import InputError, Problem
from knought.measurement.absorbance import Optics
from knought.measurement.complexed_product import ComplexedProduct
from knought.measurement.reduction import Reduction, reduce_traces
from knought.measurement.reduction_method import Kind, Method
from knought.measurement.runs_reading import read_runs
from knought.measurement.traces import Trace
from knought.measurement.traces_reading import read_traces
from knought.study_sections.base import (
    Relative,
    Section,
    in_unit,
)
from knought.study_sections.medium import EquilibriumSection, MediumSection
from knought.study_sections.toml_text import read_toml

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = ["TracesSection", "Upstream", "read_upstream"]

Absorptivity = Annotated[float, BeforeValidator(in_unit("L mol^-1 cm^-1"))]
Centimetre = Annotated[float, BeforeValidator(in_unit("cm"))]
Second = Annotated[float, BeforeValidator(in_unit("s"))]
PerSecond = Annotated[float, BeforeValidator(in_unit("s^-1"))]

#: No rate law has a higher partial order.
_HIGHEST_ORDER = 10


class OpticsSection(Section):
    """``[traces.optics]``: what makes absorbance a concentration."""

    absorptivity: Absorptivity | None = None
    path_length: Centimetre = 1.0
    stoichiometric_number: float = 1.0
    u_absorptivity: Relative = 0.0
    u_path_length: Relative = 0.0


class ProductSection(Section):
    """``[traces.product]``: a product that is held in complexes or other forms, too."""

    formula: str
    absorptivities: dict[str, Absorptivity]
    equilibria: tuple[EquilibriumSection, ...]


class TracesSection(Section):
    """``[traces]``: traces or slopes, and how they become rate constants."""

    runs: str
    file: str | None = None
    sheet: str | int | None = None
    kind: Kind = "first-order"
    orders: dict[str, int | float | str] = Field(default_factory=dict)
    initial: float | None = None
    final: float | None = None
    total_change: float | None = None
    blank_slope: PerSecond | None = None
    u_blank_slope: PerSecond = 0.0
    dead_time: Second = 0.0
    window: Second | None = None
    polynomial: int | None = Field(default=None, ge=1, le=5)
    drift: bool = False
    repeatability: Relative = 0.0
    stocks: dict[str, Relative] = Field(default_factory=dict)
    optics: OpticsSection | None = None
    product: ProductSection | None = None

    def method(self) -> Method:
        """Return how traces become rate constants.

        Raises
        ------
        InputError
            If an order is no number, or optics or product are wrong.
        """
        try:
            orders = {
                name: parse_order(str(order)) for name, order in self.orders.items() if order != "?"
            }
        except InputError as error:
            raise InputError(
                Problem(
                    "is no order of reaction",
                    'write 1, 2 or "1/2", or "?" to be told what the runs say',
                    read=str(self.orders),
                )
            ) from error
        if any(abs(order) > _HIGHEST_ORDER for order in orders.values()):
            raise InputError(
                Problem(
                    f"is no order of reaction: beyond {_HIGHEST_ORDER}",
                    "check the orders",
                    read=str(self.orders),
                )
            )
        return Method(
            self.kind,
            orders,
            self.initial,
            self.final,
            self.total_change,
            None if self.blank_slope is None else (self.blank_slope, self.u_blank_slope),
            self.dead_time,
            self.window,
            self.polynomial,
            self.drift,
            self.repeatability,
            self._optics(),
            dict(self.stocks),
            tuple(name for name, order in self.orders.items() if order == "?"),
        )

    def _optics(self) -> Optics | None:
        if self.optics is None and self.product is None:
            return None
        said = self.optics or OpticsSection()
        product = None
        if self.product is not None:
            product = ComplexedProduct(
                self.product.formula,
                tuple(each.equilibrium() for each in self.product.equilibria),
                self.product.absorptivities,
            )
        return Optics(
            said.absorptivity,
            said.path_length,
            said.stoichiometric_number,
            said.u_absorptivity,
            said.u_path_length,
            product,
        )


@dataclass(frozen=True)
class Upstream:
    """The upstream part of a study.

    Attributes
    ----------
    medium, traces
        Its sections; None where they are not there.
    """

    medium: MediumSection | None
    traces: TracesSection | None

    def files(self, beside: Callable[[str, str], Path]) -> tuple[tuple[str, Path], ...]:
        """Return names and paths of every file that is read, for the record.

        Parameters
        ----------
        beside
            Finds a file beside the study file: (name, key) -> path.
        """
        if self.traces is None:
            return ()
        named = [(self.traces.runs, "[traces] runs")]
        if self.traces.file is not None:
            named.append((self.traces.file, "[traces] file"))
        runs = read_runs(beside(*named[0]))
        own = [(name, "column trace") for name in runs.words.get("trace", ()) if name]
        return tuple((name, beside(name, key)) for name, key in [*named, *own])

    def reduced(self, beside: Callable[[str, str], Path]) -> Reduction:
        """Read runs and traces, and make the table of rate constants.

        Parameters
        ----------
        beside
            Finds a file beside the study file: (name, key) -> path.

        Raises
        ------
        InputError
            If there is no ``[traces]``, or anything in it cannot be read or reduced.
        """
        if self.traces is None:
            raise InputError("the study has no [traces]", "say where runs and traces are")
        runs = read_runs(beside(self.traces.runs, "[traces] runs"))
        traces: dict[str, Trace] = {}
        if self.traces.file is not None:
            path = beside(self.traces.file, "[traces] file")
            traces |= {each.run: each for each in read_traces(path, self.traces.sheet)}
        for run, name in zip(runs.run, runs.words.get("trace", ()), strict=False):
            if name:
                traces[run] = _only(read_traces(beside(name, "column trace")), name)
        media = None if self.medium is None else self.medium.series(runs)
        return reduce_traces(runs, traces, self.traces.method(), media)


def _only(traces: tuple[Trace, ...], name: str) -> Trace:
    """Return the one trace of a run's own file.

    Raises
    ------
    InputError
        If there are several.
    """
    if len(traces) > 1:
        raise InputError(
            Problem(
                f"holds {len(traces)} traces",
                "a run's own file holds one; name a wide table as [traces] file",
                file=name,
            )
        )
    return traces[0]


class _UpstreamFile(Section):
    """A study file of which only these sections are looked at."""

    model_config = ConfigDict(extra="ignore", frozen=True)

    medium: MediumSection | None = None
    traces: TracesSection | None = None


def read_upstream(path: Path) -> Upstream:
    """Read ``[medium]`` and ``[traces]`` of a study file, or of a file that holds nothing else.

    Raises
    ------
    InputError
        If it cannot be read, or one of these sections is wrong; every problem is told.
    """
    try:
        found = _UpstreamFile.model_validate(read_toml(path))
    except ValidationError as error:
        raise InputError(
            [
                Problem(
                    str(each.get("ctx", {}).get("error", each["msg"])).rstrip("."),
                    read=str(each["input"]),
                    file=path.name,
                    column=".".join(map(str, each["loc"])),
                )
                for each in error.errors()
            ]
        ) from error
    return Upstream(found.medium, found.traces)
