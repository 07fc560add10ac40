"""The fit of k itself takes the same errors as that of ln k."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
import pytest

import knought as kn
from knought.arrays import frozen
from knought.fitting.surface_fit import fit_surface
from tests.fitting.test_shared_errors import study

if TYPE_CHECKING:
    from knought.fitting.scatter import ScatterChoice


@pytest.mark.parametrize("choice", ["given", "scatter"])
def test_a_fit_of_k_takes_the_errors_that_a_fit_of_ln_k_takes(choice: ScatterChoice) -> None:
    """u(T) of 0.3 K and 5 % common to all runs: the same ± in k as in ln k, small as errors are."""
    seen = replace(study(kn.SharedError("stock", "factor", 0.05)), u_T=frozen(np.full(16, 0.3)))
    one = fit_surface(seen, salt_law="guntelberg", scatter=choice)
    other = kn.fit_in_k(seen, salt_law="guntelberg", scatter=choice)
    for name in ("rate_constant", "activation_energy", "charge_product"):
        in_ln_k, in_k = one.parameters[name], other.parameters[name]
        u = float(in_ln_k.standard_uncertainty)
        assert float(in_k.standard_uncertainty) == pytest.approx(u, rel=0.1)
        assert float(in_k.value) == pytest.approx(float(in_ln_k.value), abs=0.3 * u)
        assert in_k.interval(0.95) == pytest.approx(in_ln_k.interval(0.95), abs=0.4 * u)
    if choice == "given":
        bare = kn.fit_in_k(replace(seen, u_T=None), salt_law="guntelberg", scatter=choice)
        u_E = float(other.parameters["activation_energy"].standard_uncertainty)
        assert float(bare.parameters["activation_energy"].standard_uncertainty) < 0.9 * u_E
