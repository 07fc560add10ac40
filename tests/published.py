"""Published rate constants that several tests hold the package against."""

from __future__ import annotations

import numpy as np

#: H+ + dithionate: Lente, Fábián and Poë, New J. Chem. 29 (2005) 759, supplementary information
#: (read). T = t + 273.15; the table prints 323.2 etc., rounded.
DITHIONATE_T = np.array([50, 55, 60, 65, 70, 75, 80, 85, 90]) + 273.15
DITHIONATE_K = np.array(
    [
        9.54e-7,
        1.91e-6,
        3.76e-6,
        7.33e-6,
        1.38e-5,
        2.56e-5,
        4.71e-5,
        8.43e-5,
        1.47e-4,
    ]
)

#: Decomposition of N2O5: Daniels and Johnston, J. Am. Chem. Soc. 43 (1921) 53 (from memory); s^-1.
NITROGEN_PENTOXIDE_T = np.array([0, 25, 35, 45, 55, 65]) + 273.15
NITROGEN_PENTOXIDE_K = np.array([7.87e-7, 3.46e-5, 1.35e-4, 4.98e-4, 1.50e-3, 4.87e-3])

#: Peroxodisulfate and iodide at 25 °C: King and Jacobs, J. Am. Chem. Soc. 53 (1931) 1704, as
#: textbooks reprint it (from memory): only ratios of k are trusted.
PEROXODISULFATE_I = np.array([0.00245, 0.00365, 0.00445, 0.00645, 0.00845, 0.01245])
PEROXODISULFATE_K = np.array([1.05, 1.12, 1.16, 1.18, 1.26, 1.39])
