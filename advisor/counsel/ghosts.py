"""Ghost images of every option in every scene for this wearer, and how sure each verdict is.

Arrays with named axes (option, eye, scene, path), a last one of two over the principal meridians. The verdict's range
comes from one more call in which a leading axis holds the changes: thickness, front curve, the coating as made, pupil,
direction.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case
from advisor.counsel.form import EYE_INDEX, LensForms
from advisor.counsel.laid_out import Laid
from advisor.counsel.light import Light, estimated_ranges, made_strengths, scene_light
from advisor.counsel.reach import NEAR_DESIGNS
from advisor.counsel.spectra import tint_axes
from advisor.optics.eye import ENTRANCE_PUPIL_MM
from advisor.optics.ghost_inputs import LensOnFace, Wearer
from advisor.optics.ghost_inputs import Scene as SceneArrays
from advisor.optics.ghost_scene import Ghosts, GhostView, see_ghosts
from advisor.optics.lens_form import back_curvature, back_power, front_curvature
from advisor.optics.lens_section import LensSection
from advisor.optics.meridians import principal_meridians
from advisor.optics.vertex import vertex_change

Floats = NDArray[np.float64]

THINNEST_MM = 0.1  # a change never makes a lens thinner than this
FAR_M = 1e6  # stands for very far away where a lamp needs a distance
DEFAULT_FIELD_DEG = 60.0
DEFAULT_EXPOSURE_S = 2.0
# How far the inputs may be off, for the range of a verdict.
THICKNESS_OFF_MM = 0.3  # order tolerance on centre thickness, ANSI Z80.1
FRONT_OFF_D = 0.5  # a modelling choice
PUPIL_OFF = 0.15  # a modelling choice
DIRECTION_OFF_DEG = 2.0  # a modelling choice
CHANGES = (
    "as it is",
    "thicker",
    "thinner",
    "steeper",
    "flatter",
    "made low",
    "made high",
    "large pupil",
    "small pupil",
    "further aside",
    "nearer",
)


@dataclass(frozen=True)
class GhostFigures:
    """Ghosts as computed, and the least and greatest verdict over the changes, (option, eye, scene, path)."""

    seen: Ghosts
    least_verdict: NDArray[np.intp]
    greatest_verdict: NDArray[np.intp]


def scene_arrays(case: Case) -> SceneArrays:
    """Return the scenes as arrays (scene,); what a scene leaves out has a stated default."""
    scenes = case.scenes

    def figures(name: str, default: float) -> Floats:
        values = [getattr(scene, name) for scene in scenes]
        return np.array([default if value is None else float(value) for value in values])

    sizes = [
        scene.size_deg if isinstance(scene.size_deg, tuple) else (scene.size_deg, scene.size_deg) for scene in scenes
    ]
    return SceneArrays(
        extended=np.array([scene.kind == "extended" for scene in scenes]),
        behind=np.array([scene.where == "behind" for scene in scenes]),
        intensity_cd=figures("intensity_cd", 0.0),
        lamps=figures("lamps", 1.0),
        spacing_m=figures("spacing_m", 0.0),
        luminance_cd_m2=figures("luminance_cd_m2", 0.0),
        size_deg=np.array(sizes, dtype=np.float64).reshape(-1, 2),
        distance_m=figures("distance_m", FAR_M),
        direction_deg=figures("direction_deg", 0.0),
        azimuth_deg=np.full(len(scenes), 180.0 if case.stock.shop.region == "uk" else 0.0),  # oncoming traffic
        incidence_deg=np.array([scene_light(scene).angle_deg for scene in scenes]),
        fixation_m=figures("fixation_m", np.inf),
        background_cd_m2=figures("background_cd_m2", 0.0),
        adapting_cd_m2=figures("adapting_cd_m2", 0.0),
        adapting_field_deg=figures("adapting_field_deg", DEFAULT_FIELD_DEG),
        exposure_s=figures("exposure_s", DEFAULT_EXPOSURE_S),
    )


def lens_on_face(
    case: Case, forms: LensForms, *, front_change_d: Floats | float = 0.0, centre_change_mm: Floats | float = 0.0
) -> LensOnFace:
    """Return every lens as it sits before the eye, (..., option, eye, 1); changes may add leading axes.

    Whatever changes, the back is worked to the prescribed back vertex power.
    """
    n = forms.powers.index
    front = forms.shape.front_power_d + front_change_d
    centre = np.maximum(forms.shape.centre_mm + centre_change_mm, THINNEST_MM)
    back = back_power(
        forms.powers.power_d, front_power_d=front[..., None], centre_mm=centre[..., None], index=n[..., None]
    )
    return LensOnFace(
        section=LensSection(
            front_curvature_per_mm=np.repeat(front_curvature(front, index=n)[..., None, None], 2, axis=-1),
            back_curvature_per_mm=back_curvature(back, index=n[..., None])[..., None, :],
            index=n[..., None],
            thickness_mm=centre[..., None],
            vertex_mm=np.array(case.fitted_vertex_mm),
        ),
        eye=EYE_INDEX[:, None],
        meridian_deg=forms.powers.first_deg[..., None],
        tilt_deg=np.array(case.tilt_deg),
        wrap_deg=np.array(case.wrap_deg),
        pupil_offset_mm=np.zeros(2),
        prism_base_d=forms.powers.prism_d[:, None, :],
    )


def wearer_of(case: Case, laid: Sequence[Laid]) -> Wearer:
    """Return the eye behind the lenses; one that looks through a near lens keeps its distance correction."""
    far = None
    if any(option.design.kind in NEAR_DESIGNS for option in laid):
        distance = [case.compensated(eye) for eye in ("right", "left")]
        written = np.array([(power.sphere_d, power.cylinder_d) for power in distance])
        powers, _ = principal_meridians(written[:, 0], cylinder_d=written[:, 1])
        at_pupil = vertex_change(powers, from_mm=case.fitted_vertex_mm + ENTRANCE_PUPIL_MM, to_mm=0.0)
        far = at_pupil[:, None, :]
    return Wearer(
        age_y=np.array(case.age_years),
        pigment=np.array(case.pigment),
        both_eyes=np.array(True),
        pupil_scale=np.array(1.0),
        far_vergence_d=far,
    )


def ghosts_of(case: Case, laid: Sequence[Laid], *, forms: LensForms, light: Light) -> Ghosts:
    """Return the ghosts of every option as designed, (option, eye, scene, path)."""
    return see_ghosts(
        lens_on_face(case, forms),
        scene=scene_arrays(case),
        wearer=wearer_of(case, laid),
        strengths=light.strengths[:, None],
        transmittance=np.maximum(light.passed, np.finfo(float).tiny)[:, None],
    )


def figures_of(case: Case, laid: Sequence[Laid], *, forms: LensForms, light: Light) -> GhostFigures:
    """Return the ghosts and, by the same call over all changes, how far each verdict may move."""
    scene = scene_arrays(case)
    aside = _change({"further aside": DIRECTION_OFF_DEG, "nearer": -DIRECTION_OFF_DEG})
    direction = np.where(scene.behind, scene.direction_deg, np.clip(scene.direction_deg + aside, 0.0, 90.0))
    pupil = _change({"large pupil": PUPIL_OFF, "small pupil": -PUPIL_OFF})
    lens = lens_on_face(
        case,
        forms,
        front_change_d=_change({"steeper": FRONT_OFF_D, "flatter": -FRONT_OFF_D})[..., 0],
        centre_change_mm=_change({"thicker": THICKNESS_OFF_MM, "thinner": -THICKNESS_OFF_MM})[..., 0],
    )
    changed = see_ghosts(
        lens,
        scene=replace(scene, direction_deg=direction),
        wearer=replace(wearer_of(case, laid), pupil_scale=1.0 + pupil),
        strengths=made_range(case, laid, light)[:, :, None],
        transmittance=np.maximum(light.passed, np.finfo(float).tiny)[:, None],
    )
    verdict = changed.relaxed.verdict
    return GhostFigures(
        seen=_unchanged(changed), least_verdict=verdict.min(axis=0), greatest_verdict=verdict.max(axis=0)
    )


def _unchanged(changed: Ghosts) -> Ghosts:
    """Return the first entry of the leading axis: nothing changed."""

    def first(view: GhostView) -> GhostView:
        return GhostView(**{part: getattr(view, part)[0] for part in GhostView.__dataclass_fields__})

    return Ghosts(
        applies=changed.applies[0],
        vergence_d=changed.vergence_d[0],
        pupil_mm=changed.pupil_mm[0],
        separation_deg=changed.separation_deg[0],
        background_cd_m2=changed.background_cd_m2[0],
        spread=changed.spread[0],
        past_range=changed.past_range[0],
        relaxed=first(changed.relaxed),
        accommodated=first(changed.accommodated),
    )


def _change(amounts: dict[str, float]) -> Floats:
    """Return one amount a change, shaped to go before the axes (option, eye, scene)."""
    column = np.zeros((len(CHANGES), 1, 1, 1))
    for name, amount in amounts.items():
        column[CHANGES.index(name)] = amount
    return column


def made_range(case: Case, laid: Sequence[Laid], light: Light) -> Floats:
    """Return the strengths under every change, (change, option, scene, path).

    Only the coating moves them: as made, or over the shapes that a declared figure may have.
    """
    strengths = np.repeat(light.strengths[None], len(CHANGES), axis=0)
    low, high = CHANGES.index("made low"), CHANGES.index("made high")
    lights = [scene_light(scene) for scene in case.scenes]
    for k, option in enumerate(laid):
        front, back = option.front_face, option.back_face
        axes = {dark: tint_axes(option, dark=dark) or (1.0, 1.0) for dark in {key.dark for key in lights}}
        for s, key in enumerate(lights):
            points = made_strengths(front, back, axes[key.dark], key)
            if points is not None:
                strengths[low, k, s], strengths[high, k, s] = points
        estimated = estimated_ranges(option, case.scenes)
        if estimated is not None:
            strengths[low, k] = np.minimum(strengths[low, k], estimated[0])
            strengths[high, k] = np.maximum(strengths[high, k], estimated[1])
    return strengths
