"""The one wavelength grid on which every surface spectrum lives."""

import numpy as np
from numpy.typing import NDArray


def _read_only(values: NDArray[np.float64]) -> NDArray[np.float64]:
    values.flags.writeable = False
    return values


WAVELENGTHS_NM: NDArray[np.float64] = _read_only(np.arange(380.0, 781.0))
"""380 to 780 nm in steps of 1 nm, 401 samples, read-only: fine enough for the fringes of a hard coat."""
