"""Reflectance and transmittance of thin-film stacks by the characteristic matrix.

Conventions: layers are listed from the incident side inwards; the angle is the one in air, whatever the incident
medium is (n sin theta is the same in all of them); an absorbing index is n + ik with k >= 0.
"""

from typing import Any, Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]
Numbers = NDArray[Any]  # float64, or complex128 where something absorbs or a wave is evanescent

_BLOCK_POINTS: Final = 4096  # stack-angle-wavelength points worked on at once, so that all buffers stay in cache


def stack_spectra(
    wavelength_nm: ArrayLike,
    *,
    layer_index: ArrayLike,
    layer_thickness_nm: ArrayLike,
    substrate_index: ArrayLike,
    incident_index: ArrayLike = 1.0,
    angle_deg: ArrayLike = 0.0,
) -> tuple[Floats, Floats]:
    """Reflectance and transmittance of many stacks at once, s and p polarised.

    Only the field vector (B, C) is carried from the substrate outwards (Macleod, equations for the optical
    admittance of an assembly). Without absorption its even and odd parts stay real, and real arithmetic is used;
    otherwise, and where a wave is evanescent in a layer or in the substrate, complex arithmetic is.

    Parameters
    ----------
    wavelength_nm : array_like, (W,)
        Vacuum wavelength, above 0.
    layer_index : array_like, scalar, or (L, W) or (S, L, W) with 1 for any axis that does not vary
        Index of each layer, real or n + ik, n above 0 and k at least 0.
    layer_thickness_nm : array_like, (S, L) or (L,)
        At least 0; an empty list is a bare face. Shorter stacks are padded with layers of zero thickness, of any
        allowed index.
    substrate_index : array_like, scalar, (W,) or (S, W)
        Real or n + ik.
    incident_index : array_like, scalar, (W,) or (S, W)
        Real, above 0: the medium the light comes from.
    angle_deg : array_like, scalar or (A,)
        Angle in air, 0 (normal) to below 90.

    Returns
    -------
    reflectance, transmittance : ndarray, each (S, A, W, 2)
        Fractions of the incident power; the last axis is s, p.

    Raises
    ------
    ValueError
        Naming the parameter that is out of range or has the wrong shape.

    References
    ----------
    Abeles, Ann. Phys. (Paris) 12 (1950) 596; Macleod, Thin-Film Optical Filters, chapter 2.
    """
    wavelength = np.atleast_1d(_finite("wavelength_nm", wavelength_nm).astype(np.float64))
    if wavelength.ndim != 1 or np.any(wavelength <= 0.0):
        raise ValueError("wavelength_nm must be above 0, one number or one row")
    angle = np.atleast_1d(_finite("angle_deg", angle_deg).astype(np.float64))
    if angle.ndim != 1 or np.any((angle < 0.0) | (angle >= 90.0)):
        raise ValueError("angle_deg must be at least 0 and below 90, one number or one row")
    thickness = np.atleast_2d(_finite("layer_thickness_nm", layer_thickness_nm).astype(np.float64))
    if thickness.ndim != 2 or np.any(thickness < 0.0):
        raise ValueError("layer_thickness_nm must be at least 0, shaped (stacks, layers)")
    layers = _index("layer_index", layer_index, shape=(thickness.shape[1], wavelength.size))
    substrate = _index("substrate_index", substrate_index, shape=(wavelength.size,))[:, None, :]
    incident = _index("incident_index", incident_index, shape=(wavelength.size,))[:, None, :]
    if np.iscomplexobj(incident):
        raise ValueError("incident_index must be real")
    stacks = max(part.shape[0] for part in (layers, thickness, substrate, incident))
    named = {"layer_index": layers, "layer_thickness_nm": thickness, "substrate_index": substrate}
    for name, part in {**named, "incident_index": incident}.items():
        if part.shape[0] not in (1, stacks):
            raise ValueError(f"{name} holds {part.shape[0]} stacks where others hold {stacks}")

    tangential = np.sin(np.radians(angle))[:, None] ** 2
    if np.any(incident**2 <= tangential.max()):
        raise ValueError("incident_index is too low for angle_deg: no wave of that angle in air travels in it")
    real = not np.iscomplexobj(layers) and not np.iscomplexobj(substrate)
    if real:
        real = min(np.min(layers, initial=np.inf), np.min(substrate)) ** 2 > tangential.max()
    kernel = _lossless if real else _absorbing

    result = np.empty((2, 2, stacks, angle.size, wavelength.size))  # (R, T), (s, p): each polarisation in one piece
    wavenumber = 2.0 * np.pi / wavelength
    angles_at_once = max(1, _BLOCK_POINTS // wavelength.size)
    stacks_at_once = max(1, angles_at_once // angle.size)
    for first in range(0, stacks, stacks_at_once):
        rows = slice(first, first + stacks_at_once)
        for start in range(0, angle.size, angles_at_once):
            columns = slice(start, start + angles_at_once)
            kernel(
                result[:, :, rows, columns],
                wavenumber,
                _rows(layers, rows),
                _rows(thickness, rows),
                _rows(substrate, rows),
                _rows(incident, rows),
                tangential[columns],
            )
    reflectance, transmittance = np.moveaxis(result, 1, -1)
    return reflectance, transmittance


def _finite(name: str, values: ArrayLike) -> Numbers:
    array = np.asarray(values)
    if array.dtype.kind not in "iufc":
        raise ValueError(f"{name} must hold numbers")
    if not np.all(np.isfinite(array)):
        raise ValueError(f"{name} must be finite")
    if array.dtype.kind == "c" and not name.endswith("_index"):
        raise ValueError(f"{name} must be real")
    return array


def _index(name: str, values: ArrayLike, *, shape: tuple[int, ...]) -> Numbers:
    """Check an index and give it the shape (stacks or 1, *shape), real where nothing absorbs."""
    array = _finite(name, values)
    if np.any(array.real <= 0.0):
        raise ValueError(f"{name} must be above 0")
    if np.any(array.imag < 0.0):
        raise ValueError(f"{name} must be n + ik with k at least 0")
    array = array.astype(np.complex128) if np.any(array.imag) else array.real.astype(np.float64)
    if array.size == 0 and 0 in shape:  # no layers: any empty list will do
        array = np.empty((1, *shape))
    if array.ndim == 1 and len(shape) == 2:
        raise ValueError(f"{name} must be one number or shaped (stacks, layers, wavelengths) or (layers, wavelengths)")
    array = array.reshape((1,) * (len(shape) + 1 - array.ndim) + array.shape)
    try:
        return np.broadcast_to(array, array.shape[:1] + shape)
    except ValueError:
        wanted = ", ".join(str(size) for size in shape)
        raise ValueError(f"{name} of shape {np.shape(values)} does not fit (stacks, {wanted})") from None


def _rows(part: Numbers, rows: slice) -> Numbers:
    return part if part.shape[0] == 1 else part[rows]


def _advance(first: Numbers, second: Numbers, diagonal: Numbers, right: Numbers, left: Numbers) -> None:
    """Multiply the column (first, second) by [[diagonal, right], [left, diagonal]] in place."""
    crossed = left * first
    first *= diagonal
    first += right * second
    second *= diagonal
    second += crossed


def _lossless(
    out: Floats, k: Floats, layers: Floats, thickness: Floats, substrate: Floats, incident: Floats, tangential: Floats
) -> None:
    # With real admittances (Re B, Im C) and (-Im B, Re C) obey one real recurrence and never mix. Axes of both
    # arrays: the two pairs, s and p, stacks, angles, wavelengths.
    first = np.zeros((2, *out.shape[1:]))
    second = np.zeros_like(first)
    last_admittance = np.empty(out.shape[1:])
    np.sqrt(substrate**2 - tangential, out=last_admittance[0])
    np.divide(substrate**2, last_admittance[0], out=last_admittance[1])
    first[0] = 1.0
    second[1] = last_admittance
    right, left = np.empty(out.shape[1:]), np.empty(out.shape[1:])
    for layer in reversed(range(thickness.shape[1])):
        square = layers[:, layer, None, :] ** 2
        normal = np.sqrt(square - tangential)
        phase = normal * (thickness[:, layer, None, None] * k)
        sine = np.sin(phase)
        np.divide(sine, normal, out=right[0])  # sin / admittance; s: normal, p: square / normal
        np.multiply(sine, normal, out=right[1])
        np.multiply(right[1], -1.0, out=left[0])  # -admittance sin
        np.multiply(right[0], -square, out=left[1])
        right[1] /= square
        _advance(first, second, np.cos(phase, out=phase), right, left)
    admittance = np.empty((2, *np.broadcast_shapes(incident.shape, tangential.shape)))
    np.sqrt(incident**2 - tangential, out=admittance[0])
    np.divide(incident**2, admittance[0], out=admittance[1])
    first *= admittance
    total = (first[0] + second[1]) ** 2 + (first[1] - second[0]) ** 2
    np.divide((first[0] - second[1]) ** 2 + (first[1] + second[0]) ** 2, total, out=out[0])
    np.divide(4.0 * admittance * last_admittance, total, out=out[1])


def _absorbing(
    out: Floats, k: Floats, layers: Numbers, thickness: Floats, substrate: Numbers, incident: Floats, tangential: Floats
) -> None:
    # B and C are carried divided by exp(Im phase) of the layers passed, which keeps opaque layers finite; R does not
    # see the factor and T gets it back at the end.
    field = np.ones(out.shape[1:], dtype=np.complex128)
    last_admittance = np.empty_like(field)
    last_admittance[0] = _normal_part(substrate**2, tangential)
    np.divide(substrate**2, last_admittance[0], out=last_admittance[1])
    other = last_admittance.copy()
    right, left = np.empty_like(field), np.empty_like(field)
    depth = np.zeros(out.shape[2:])
    for layer in reversed(range(thickness.shape[1])):
        square = layers[:, layer, None, :].astype(np.complex128) ** 2
        normal = _normal_part(square, tangential)
        path = thickness[:, layer, None, None] * k
        phase, decay = normal.real * path, normal.imag * path
        depth += decay
        odd = -0.5 * np.expm1(-2.0 * decay)  # sinh and, next, cosh of decay over exp(decay)
        even = 1.0 - odd
        cosine, sine = np.cos(phase), np.sin(phase)
        diagonal, turned = np.empty(phase.shape, np.complex128), np.empty(phase.shape, np.complex128)
        diagonal.real, diagonal.imag = cosine * even, -sine * odd
        turned.real, turned.imag = cosine * odd, -sine * even  # -i sin(phase + i decay)
        np.divide(turned, normal, out=right[0])
        np.multiply(turned, normal, out=left[0])
        np.multiply(right[0], square, out=left[1])
        np.divide(left[0], square, out=right[1])
        _advance(field, other, diagonal, right, left)
    normal_incident = np.sqrt(incident**2 - tangential)
    admittance = np.stack([normal_incident, incident**2 / normal_incident])
    field *= admittance
    total = np.abs(field + other) ** 2
    np.divide(np.abs(field - other) ** 2, total, out=out[0])
    np.divide(4.0 * admittance * last_admittance.real * np.exp(-2.0 * depth), total, out=out[1])


def _normal_part(square: Numbers, tangential: Floats) -> Numbers:
    """Index times cosine in a medium, on the branch that decays; never exactly 0, so that it can be divided by."""
    normal = np.sqrt(square.astype(np.complex128) - tangential)
    return np.where(normal == 0.0, 1e-30, normal)
