"""How strong each of the five ghost images is: reflectances and transmittances along its path.

- ahead-inner: from in front, mirrored inside the back, then inside the front; relative to direct light.
- behind-back: from behind, mirrored off the back; relative to the source.
- behind-front: from behind, through the back, mirrored inside the front, out by the back; relative to the source.
- cornea-back: from in front, off the cornea, then off the back; relative to direct light.
- cornea-front: from in front, off the cornea, through the back, inside the front, out by the back; relative to direct
  light.

V(lambda) understates the ghosts of films that reflect blue when the eye is adapted to the night.
"""

from typing import Final, Literal, get_args

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.photometry import IlluminantName, luminous_mean, on_grid
from advisor.optics.surface import SurfaceSpectra, whole_lens

GhostPath = Literal["ahead-inner", "behind-back", "behind-front", "cornea-back", "cornea-front"]
PATHS: tuple[GhostPath, ...] = get_args(GhostPath)
FROM_BEHIND: frozenset[GhostPath] = frozenset({"behind-back", "behind-front"})

CORNEA_REFLECTANCE: Final = 0.025
"""Of the cornea's front, tear film included; 2.1 to 3.1 % across published indices."""


def path_strengths(
    front: SurfaceSpectra,
    back: SurfaceSpectra,
    *,
    internal_transmittance: ArrayLike,
    dark_axis_transmittance: ArrayLike | None = None,
    cornea_reflectance: float = CORNEA_REFLECTANCE,
) -> NDArray[np.float64]:
    """Strength of each ghost path at each wavelength.

    With tau the internal transmittance and 1, 2 the front and back face (i from inside):
    ahead-inner R2i R1i tau^2; behind-back R2; behind-front T2^2 R1i tau^2; cornea-back Rc R2;
    cornea-front Rc T2^2 R1i tau^2. Higher bounces are left out: they are weaker by a further R1i R2i.

    A polarising lens (bright axis Tp, dark axis Ts) takes another mean in place of tau^2, as the light it meets again
    has been through it before: (Tp^3 + Ts^3)/(Tp + Ts) for ahead-inner and cornea-front, whose light came in through
    the lens, and (Tp^2 + Ts^2)/2 for behind-front, whose light did not. The cornea mirrors without turning the plane.

    Parameters
    ----------
    front, back
        The two faces, (..., 401); at the angle at which the scene's light meets the lens.
    internal_transmittance
        tau, 0 to 1, a number or (..., 401); of the bright axis when `dark_axis_transmittance` is given. Also used at an
        angle, where the path through the lens is a little longer.
    dark_axis_transmittance
        Of the dark axis of a polarising lens, in the same form.
    cornea_reflectance
        Rc, 0 to 1, the same at every wavelength.

    Returns
    -------
    (..., 5, 401), in the order of `PATHS`.

    Raises
    ------
    ValueError
        When a transmittance or `cornea_reflectance` is outside 0 to 1.

    References
    ----------
    Products along the path, incoherent; the polarising means follow from Malus's law on each axis.
    """
    if not 0.0 <= cornea_reflectance <= 1.0:
        raise ValueError("cornea_reflectance must lie between 0 and 1.")
    bright = _fraction(internal_transmittance, name="internal_transmittance")
    if dark_axis_transmittance is None:
        again = fresh = bright**2
    else:
        dark = _fraction(dark_axis_transmittance, name="dark_axis_transmittance")
        both = bright + dark
        again = np.where(both > 0.0, (bright**3 + dark**3) / np.where(both > 0.0, both, 1.0), 0.0)
        fresh = (bright**2 + dark**2) / 2.0
    off_front = back.transmittance**2 * front.inside
    parts = (
        back.inside * front.inside * again,
        back.outside,
        off_front * fresh,
        cornea_reflectance * back.outside,
        cornea_reflectance * off_front * again,
    )
    return np.stack(np.broadcast_arrays(*parts), axis=-2)


def lens_transmittance(
    front: SurfaceSpectra,
    back: SurfaceSpectra,
    *,
    internal_transmittance: ArrayLike,
    dark_axis_transmittance: ArrayLike | None = None,
) -> NDArray[np.float64]:
    """Transmittance of the lens for unpolarised light, all bounces; the mean of both axes when it polarises.

    Parameters
    ----------
    front, back, internal_transmittance, dark_axis_transmittance
        As in :func:`path_strengths`.

    Returns
    -------
    (..., 401).
    """
    _, bright = whole_lens(front, back, internal_transmittance=internal_transmittance)
    if dark_axis_transmittance is None:
        return bright
    _, dark = whole_lens(front, back, internal_transmittance=dark_axis_transmittance)
    return (bright + dark) / 2.0


def weighted_strengths(
    strengths: ArrayLike, *, transmittance: ArrayLike, illuminant: IlluminantName
) -> NDArray[np.float64]:
    """Strength of each path as the eye sees it in the scene's light.

    Paths from ahead and off the cornea are shares of the direct light, so the lens's own transmittance T weighs them:
    sum(strength T V S)/sum(T V S). Paths from behind are shares of the source: sum(strength V S)/sum(V S). The product
    of the luminous reflectances is not the answer, as two like films reflect at the same wavelengths.

    Parameters
    ----------
    strengths
        (..., 5, 401) of :func:`path_strengths`.
    transmittance
        T of the lens, (..., 401), of :func:`lens_transmittance`.
    illuminant
        The scene's light.

    Returns
    -------
    (..., 5), in the order of `PATHS`. From ahead 0 when the lens passes nothing.

    Raises
    ------
    ValueError
        When there are not five paths.
    """
    values = on_grid(strengths, name="strengths")
    if values.ndim < 2 or values.shape[-2] != len(PATHS):
        raise ValueError(f"strengths must have {len(PATHS)} paths on the axis before the wavelength.")
    weight = on_grid(transmittance, name="transmittance")[..., None, :]
    through = luminous_mean(values, illuminant=illuminant, weight=weight)
    plain = np.broadcast_to(luminous_mean(values, illuminant=illuminant), through.shape)
    behind = np.array([path in FROM_BEHIND for path in PATHS])
    return np.where(behind, plain, through)


def _fraction(value: ArrayLike, *, name: str) -> NDArray[np.float64]:
    """Return a transmittance as an array after checking that it is one."""
    values = np.asarray(value, dtype=np.float64)
    if not np.all((values >= 0.0) & (values <= 1.0)):
        raise ValueError(f"{name} must lie between 0 and 1.")
    return values
