"""How many times faster one point of our transfer matrix is than one of PyPI tmm; a script to be run by itself.

A point is one stack, angle, wavelength and polarisation. Ours does 64 stacks x 6 layers x 19 angles x 81 wavelengths
in one call on one thread; tmm does random points of the same job one by one, as it must. The two take turns, and the
median of five pairs of one run counts. Exits with 1 where a ratio is below its floor.
"""

import statistics
import sys
import time
from typing import Any

import numpy as np
import tmm
from numpy.typing import NDArray

from advisor.optics.thin_film import stack_spectra

STACKS, LAYERS, ANGLES, WAVELENGTHS = 64, 6, 19, 81
POINTS = STACKS * ANGLES * WAVELENGTHS * 2
TMM_POINTS, PAIRS = 1500, 5
FLOORS = {"lossless": 300.0, "absorbing": 120.0}


def job(absorbing: bool) -> dict[str, Any]:
    """Random stacks, every index different in every stack and at every wavelength."""
    random = np.random.default_rng(20260201)
    index = random.uniform(1.3, 2.4, (STACKS, LAYERS, 1)) + random.uniform(0.0, 0.1, (STACKS, LAYERS, WAVELENGTHS))
    return {
        "wavelength_nm": np.linspace(380.0, 780.0, WAVELENGTHS),
        "layer_index": index + 1e-3j if absorbing else index,
        "layer_thickness_nm": random.uniform(5.0, 200.0, (STACKS, LAYERS)),
        "substrate_index": 1.6,
        "angle_deg": np.linspace(0.0, 80.0, ANGLES),
    }


def ours(given: dict[str, Any]) -> tuple[float, NDArray[np.float64]]:
    """Nanoseconds per point and the reflectances."""
    begin = time.perf_counter()
    reflectance, _ = stack_spectra(**given)
    return (time.perf_counter() - begin) / POINTS * 1e9, reflectance


def theirs(given: dict[str, Any], chosen: NDArray[np.int64]) -> tuple[float, NDArray[np.float64]]:
    """Nanoseconds per point and the reflectances at the chosen points."""
    prepared = [
        (
            "sp"[pol],
            [1.0, *given["layer_index"][stack, :, wavelength], 1.6],
            [np.inf, *given["layer_thickness_nm"][stack], np.inf],
            np.radians(given["angle_deg"][angle]),
            given["wavelength_nm"][wavelength],
        )
        for stack, angle, wavelength, pol in chosen
    ]
    begin = time.perf_counter()
    found = [tmm.coh_tmm(*point)["R"] for point in prepared]
    return (time.perf_counter() - begin) / len(found) * 1e9, np.array(found)


def main() -> int:
    """Print the figures and return the exit status."""
    random = np.random.default_rng(20260202)
    slow = False
    for kind, floor in FLOORS.items():
        given = job(kind == "absorbing")
        chosen = random.integers(0, [STACKS, ANGLES, WAVELENGTHS, 2], (TMM_POINTS, 4))
        ours(given)  # warm up
        pairs = []
        for _ in range(PAIRS):
            their_ns, expected = theirs(given, chosen)
            our_ns, reflectance = ours(given)
            np.testing.assert_allclose(reflectance[tuple(chosen.T)], expected, rtol=0.0, atol=1e-12)
            pairs.append((their_ns / our_ns, our_ns, their_ns))
        ratio, our_ns, their_ns = (statistics.median(column) for column in zip(*pairs, strict=True))
        print(f"{kind}: {our_ns:.0f} ns a point, tmm {their_ns:.0f} ns, {ratio:.0f} times (floor {floor:.0f})")
        slow |= ratio < floor
    return int(slow)


if __name__ == "__main__":
    sys.exit(main())
