"""What is put in to find how a wearer sees ghosts: lens before the eye, scenes, wearer.

Every array broadcasts to the axes (..., option, eye, scene); a lens figure that is the same in all scenes has shape
(options, eyes, 1), a scene's (scenes,). Perturbed copies go on further leading axes. Vectors (x, y) are local to the
eye: x towards the nose, y up. An axis of length 2 for x and y, width and height or principal meridians comes last.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.optics.lens_section import LensSection

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]


def _floats(owner: object, name: str, *, least: float | None, most: float = np.inf, pair: bool = False) -> None:
    value = np.asarray(getattr(owner, name), dtype=np.float64)
    if np.isnan(value).any():
        raise ValueError(f"{name} must be a number")
    if least is not None and ((value < least).any() or (value > most).any()):
        raise ValueError(f"{name} must be {least:g} or more" + (f", at most {most:g}" if most < np.inf else ""))
    if pair and value.shape[-1:] != (2,):
        raise ValueError(f"{name} must end in an axis of length 2")
    object.__setattr__(owner, name, value)


@dataclass(frozen=True)
class LensOnFace:
    """A lens as it sits before the eye.

    Parameters
    ----------
    section : LensSection
    eye : ndarray of int
        0 right, 1 left.
    meridian_deg : ndarray
        Local direction of the first principal meridian (x towards y).
    tilt_deg, wrap_deg : ndarray
        Pantoscopic tilt (lower rim towards the face) and wrap (temple side towards the face).
    pupil_offset_mm : ndarray, (..., 2)
        Pupil from the optical centre, seen straight from in front. Where the centre was lowered for the tilt, this
        is positive in y.
    prism_base_d : ndarray, (..., 2)
        Prescribed prism as the vector of its base, prism dioptres; taken as worked on the back surface. Do not also
        shift the centre for it.
    """

    section: LensSection
    eye: NDArray[np.intp]
    meridian_deg: Floats
    tilt_deg: Floats
    wrap_deg: Floats
    pupil_offset_mm: Floats
    prism_base_d: Floats

    def __post_init__(self) -> None:
        eye = np.asarray(self.eye, dtype=np.intp)
        if not ((eye == 0) | (eye == 1)).all():
            raise ValueError("eye must be 0 (right) or 1 (left)")
        object.__setattr__(self, "eye", eye)
        _floats(self, "meridian_deg", least=None)
        _floats(self, "tilt_deg", least=-45.0, most=45.0)
        _floats(self, "wrap_deg", least=-45.0, most=45.0)
        _floats(self, "pupil_offset_mm", least=None, pair=True)
        _floats(self, "prism_base_d", least=None, pair=True)


@dataclass(frozen=True)
class Scene:
    """Scenes as the wearer meets them, all luminances without the lens.

    Parameters
    ----------
    extended, behind : ndarray of bool
        A screen or window against a lamp; behind the wearer against ahead.
    intensity_cd, lamps, spacing_m : ndarray
        One lamp, their count, and the distance between neighbours of a level row; only for lamps.
    luminance_cd_m2 : ndarray
        Only for an extended source.
    size_deg : ndarray, (..., 2)
        Width and height of one lamp or of the extended source.
    distance_m : ndarray
        Source to the lens, above 0 (infinity for a distant extended source; a lamp there gives no light).
    direction_deg, azimuth_deg : ndarray
        Angle of the source from straight ahead and the TABO direction in which it lies: 0 the wearer's left, 90 up.
        Behind, the plane of incidence lies along the azimuth.
    incidence_deg : ndarray
        Angle at which light from behind meets the back surface.
    fixation_m : ndarray
        Distance of what is looked at, above 0.
    background_cd_m2 : ndarray
        Around the source ahead; what is looked at, for light from behind.
    adapting_cd_m2, adapting_field_deg : ndarray
        Luminance and diameter of the field that sets the pupil, the source ahead not counted.
    exposure_s : ndarray
        Time to look, above 0.
    """

    extended: Flags
    behind: Flags
    intensity_cd: Floats
    lamps: Floats
    spacing_m: Floats
    luminance_cd_m2: Floats
    size_deg: Floats
    distance_m: Floats
    direction_deg: Floats
    azimuth_deg: Floats
    incidence_deg: Floats
    fixation_m: Floats
    background_cd_m2: Floats
    adapting_cd_m2: Floats
    adapting_field_deg: Floats
    exposure_s: Floats

    def __post_init__(self) -> None:
        for name in ("extended", "behind"):
            object.__setattr__(self, name, np.asarray(getattr(self, name), dtype=np.bool_))
        for name in ("intensity_cd", "spacing_m", "luminance_cd_m2", "background_cd_m2", "adapting_cd_m2"):
            _floats(self, name, least=0.0)
        _floats(self, "lamps", least=1.0)
        _floats(self, "size_deg", least=0.0, most=180.0, pair=True)
        _floats(self, "direction_deg", least=0.0, most=90.0)
        _floats(self, "azimuth_deg", least=None)
        _floats(self, "incidence_deg", least=0.0, most=89.0)
        _floats(self, "adapting_field_deg", least=0.0, most=180.0)
        for name in ("distance_m", "fixation_m", "exposure_s"):
            _floats(self, name, least=0.0)
            if (getattr(self, name) == 0.0).any():
                raise ValueError(f"{name} must be above 0")


@dataclass(frozen=True)
class Wearer:
    """The eye behind the lens.

    Parameters
    ----------
    age_y : ndarray
    pigment : ndarray
        0 black, 0.5 brown, 1.0 light, 1.2 very light.
    both_eyes : ndarray of bool
        False where one eye alone is open to the light.
    pupil_scale : ndarray
        Factor on the pupil's diameter, to see how far a wearer unlike the mean changes the answer.
    far_vergence_d : ndarray, (..., 2), or None
        Vergence at the pupil that the relaxed eye focuses, along the principal meridians. None: the lens at hand
        corrects the eye for distance. Needed for a reading lens.
    """

    age_y: Floats
    pigment: Floats
    both_eyes: Flags
    pupil_scale: Floats
    far_vergence_d: Floats | None = None

    def __post_init__(self) -> None:
        _floats(self, "age_y", least=0.0, most=130.0)
        _floats(self, "pigment", least=0.0, most=1.2)
        _floats(self, "pupil_scale", least=0.1, most=10.0)
        object.__setattr__(self, "both_eyes", np.asarray(self.both_eyes, dtype=np.bool_))
        if self.far_vergence_d is not None:
            _floats(self, "far_vergence_d", least=None, pair=True)
