"""Design of the built-in films: layer thicknesses that bring the reflectance of a lens face to stated targets.

``python -m advisor.optics.film_design`` designs them all and prints the layers; the range file ships them as printed.
Layers are listed from air inwards.
"""

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import stack_arrays
from advisor.optics.media import lens_index
from advisor.optics.photometry import luminous_mean
from advisor.optics.surface import film_surface
from advisor.optics.thin_film import stack_spectra

Floats = NDArray[np.float64]

DESIGN_NM: Final = np.arange(400.0, 701.0, 10.0)
LEAST_LAYER_NM: Final = 8.0  # thinner layers are hard to coat evenly; a modelling choice
GREATEST_LAYER_NM: Final = 160.0
# Each film must meet its targets when a whole run comes out thin, right or thick: 1.5 standard deviations of a run.
RUN_FACTORS: Final = np.array([0.97, 1.0, 1.03])
_SCREENED, _REFINED, _STEPS = 2000, 40, 60


@dataclass(frozen=True)
class Band:
    """A target: unpolarised reflectance from `from_nm` to `to_nm` at one angle in air, and how far off counts as 1."""

    from_nm: float
    to_nm: float
    reflectance: float
    tolerance: float
    angle_deg: float = 0.0


@dataclass(frozen=True)
class FilmSpec:
    """What to design: film materials from air inwards, the lens material (n_d, V_d), the targets and the seed."""

    key: str
    films: tuple[str, ...]
    index: float
    abbe: float
    bands: tuple[Band, ...]
    seed: int = 1


@dataclass(frozen=True)
class DesignedFilm:
    """Layer thicknesses in nm to 0.1 nm, from air inwards, and the merit they reach."""

    spec: FilmSpec
    thickness_nm: tuple[float, ...]
    merit: float


DESIGNS: Final = {
    spec.key: spec
    for spec in (
        # As little as four layers allow, and little at the ends of the spectrum
        FilmSpec(
            "broadband",
            ("SiO2", "TiO2", "SiO2", "TiO2"),
            1.598,
            41.0,
            (Band(430, 660, 0.0, 0.001), Band(400, 420, 0.01, 0.01), Band(670, 700, 0.0, 0.01)),
        ),
        # A green rest that stays green as made
        FilmSpec(
            "broadband-green",
            ("SiO2", "Ta2O5", "SiO2", "Ta2O5"),
            1.598,
            41.0,
            (Band(520, 560, 0.0075, 0.001), Band(430, 470, 0.001, 0.001), Band(620, 660, 0.001, 0.001)),
        ),
        # Straight on and at 45 degrees, on the highest organic index
        FilmSpec(
            "broadband-wide",
            ("SiO2", "TiO2", "SiO2", "TiO2"),
            1.735,
            33.0,
            (Band(430, 660, 0.0, 0.002), Band(430, 660, 0.0, 0.004, angle_deg=45.0)),
        ),
        # Mirrors the short end; a little green and no red keep the hue blue rather than purple
        FilmSpec(
            "blue-reflecting",
            ("SiO2", "TiO2", "SiO2", "TiO2", "SiO2", "TiO2"),
            1.598,
            41.0,
            (
                Band(400, 440, 0.12, 0.02),
                Band(460, 480, 0.03, 0.01),
                Band(500, 540, 0.012, 0.002),
                Band(580, 660, 0.0, 0.001),
            ),
        ),
    )
}


def merit(spec: FilmSpec, *, thickness_nm: ArrayLike) -> Floats:
    """Root mean square of (reflectance - target)/tolerance over the bands and the run factors; every band counts alike.

    Parameters
    ----------
    spec : FilmSpec
        Films, lens material and targets.
    thickness_nm : array_like, (layers,) or (stacks, layers)
        At least 0, from air inwards.

    Returns
    -------
    ndarray, scalar or (stacks,)
        0 where every target is met; about 1 where they are missed by their tolerances.

    Raises
    ------
    ValueError
        Where `thickness_nm` does not fit the films.
    """
    thickness = np.asarray(thickness_nm, dtype=np.float64)
    if thickness.ndim not in (1, 2) or thickness.shape[-1] != len(spec.films):
        raise ValueError(f"thickness_nm must have {len(spec.films)} layers on its last axis")
    off = _Residuals(spec)(np.atleast_2d(thickness))
    return np.asarray(np.sqrt(np.sum(off**2, axis=-1)).reshape(thickness.shape[:-1]), dtype=np.float64)


def design(spec: FilmSpec) -> DesignedFilm:
    """Find the layer thicknesses that come nearest to the targets.

    Many random stacks are screened, the best are refined together by damped Gauss-Newton steps on the residuals, held
    between the least and the greatest layer thickness, and the best of all is taken. The same seed gives the same film.

    Parameters
    ----------
    spec : FilmSpec
        Films, lens material, targets and seed.

    Returns
    -------
    DesignedFilm
        Thicknesses rounded to 0.1 nm and the merit after rounding.

    References
    ----------
    Levenberg, Quarterly of Applied Mathematics 2 (1944) 164; Marquardt, J. SIAM 11 (1963) 431. For thin films:
    Dobrowolski and Kemp, Applied Optics 29 (1990) 2876, damped least squares (all three known from memory).
    """
    residuals = _Residuals(spec)
    random = np.random.default_rng(spec.seed)
    stacks = random.uniform(LEAST_LAYER_NM, GREATEST_LAYER_NM, (_SCREENED, len(spec.films)))
    screened = np.sum(residuals(stacks) ** 2, axis=-1)
    stacks = _damped_gauss_newton(residuals, stacks[np.argsort(screened)[:_REFINED]])
    stacks = np.unique(np.round(stacks, 1), axis=0)
    found = merit(spec, thickness_nm=stacks)
    best = int(np.argmin(found))
    return DesignedFilm(spec, tuple(stacks[best].tolist()), float(found[best]))


class _Residuals:
    """(stacks, layers) in nm to (stacks, residuals); the sum of their squares is the square of the merit."""

    def __init__(self, spec: FilmSpec) -> None:
        self._index, _ = stack_arrays([(film, 0.0) for film in spec.films], wavelength_nm=DESIGN_NM)
        self._substrate = lens_index(DESIGN_NM, index=spec.index, abbe=spec.abbe)
        self._angles = sorted({band.angle_deg for band in spec.bands})
        angle, wavelength, target, scale = [], [], [], []
        for band in spec.bands:
            chosen = np.flatnonzero((band.from_nm <= DESIGN_NM) & (band.to_nm >= DESIGN_NM))
            angle += [self._angles.index(band.angle_deg)] * chosen.size
            wavelength += chosen.tolist()
            target += [band.reflectance] * chosen.size
            share = chosen.size * len(spec.bands) * RUN_FACTORS.size
            scale += [1.0 / (band.tolerance * np.sqrt(share))] * chosen.size
        self._angle, self._wavelength = np.array(angle), np.array(wavelength)
        self._target, self._scale = np.array(target), np.array(scale)

    def __call__(self, thickness_nm: Floats) -> Floats:
        runs = thickness_nm[:, None, :] * RUN_FACTORS[:, None]
        reflectance, _ = stack_spectra(
            DESIGN_NM,
            layer_index=self._index,
            layer_thickness_nm=runs.reshape(-1, thickness_nm.shape[1]),
            substrate_index=self._substrate,
            angle_deg=self._angles,
        )
        chosen = reflectance.mean(axis=-1)[:, self._angle, self._wavelength]
        off: Floats = ((chosen - self._target) * self._scale).reshape(len(thickness_nm), -1)
        return off


def _damped_gauss_newton(residuals: _Residuals, stacks: Floats) -> Floats:
    """Refine all stacks side by side; each has its own damping, eased by a good step and raised by a bad one."""
    layers = stacks.shape[1]
    probe_nm = 0.01
    damping = np.full(len(stacks), 0.01)
    off = residuals(stacks)
    for _ in range(_STEPS):
        probes = stacks[:, None, :] + probe_nm * np.eye(layers)
        slope = (residuals(probes.reshape(-1, layers)).reshape(len(stacks), layers, -1) - off[:, None, :]) / probe_nm
        downhill = -np.einsum("slm,sm->sl", slope, off)
        held = (stacks <= LEAST_LAYER_NM) & (downhill < 0.0) | (stacks >= GREATEST_LAYER_NM) & (downhill > 0.0)
        slope[held] = 0.0
        downhill[held] = 0.0
        normal = slope @ slope.transpose(0, 2, 1)
        diagonal = np.einsum("sll->sl", normal)  # a view: raising it raises the matrix
        diagonal += damping[:, None] * diagonal + 1e-14  # the last term for layers that are held
        step = np.linalg.solve(normal, downhill[..., None])[..., 0]
        tried = np.clip(stacks + step, LEAST_LAYER_NM, GREATEST_LAYER_NM)
        tried_off = residuals(tried)
        better = np.sum(tried_off**2, axis=-1) < np.sum(off**2, axis=-1)
        stacks = np.where(better[:, None], tried, stacks)
        off = np.where(better[:, None], tried_off, off)
        damping = np.clip(np.where(better, damping / 3.0, damping * 4.0), 1e-10, 1e10)
    return stacks


def film_reflectance(spec: FilmSpec, *, thickness_nm: ArrayLike, angle_deg: float = 0.0) -> Floats:
    """Unpolarised reflectance of a film on the lens material it was designed for, on the grid: (401,) or (stacks, 401).

    `thickness_nm` as in `merit`; `angle_deg` is the angle in air.
    """
    index, _ = stack_arrays([(film, 0.0) for film in spec.films], wavelength_nm=WAVELENGTHS_NM)
    substrate = lens_index(WAVELENGTHS_NM, index=spec.index, abbe=spec.abbe)
    return film_surface(substrate, layer_index=index, layer_thickness_nm=thickness_nm, angle_deg=angle_deg).outside


def main() -> None:
    """Design the films and print them as the range file lists them."""
    for key, spec in DESIGNS.items():
        found = design(spec)
        layers = ", ".join(f'["{film}", {nm:.1f}]' for film, nm in zip(spec.films, found.thickness_nm, strict=True))
        rho = luminous_mean(film_reflectance(spec, thickness_nm=found.thickness_nm))
        print(f"# {key}: on n_d {spec.index}, V_d {spec.abbe:g}; merit {found.merit:.4f}, rho_v {100.0 * rho:.2f} %")
        print(f"layers = [{layers}]")


if __name__ == "__main__":
    main()
