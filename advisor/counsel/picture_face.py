"""What others see, drawn: a face across the counter, and the window mirrored in both lenses over the eyes."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.answer import FACE_CD_M2, WINDOW_CD_M2
from advisor.counsel.compare import Computed
from advisor.counsel.form import rims_of
from advisor.counsel.laid_out import Laid, without_film
from advisor.counsel.picture_shapes import GREY, HEIGHT, IRIS, LIPS, PAPER, SKIN, WIDTH, Canvas, Sheet, with_mirrored
from advisor.counsel.picture_views import notice_level
from advisor.counsel.spectra import lens_spectra
from advisor.optics.colour import hue_word, xyz
from advisor.optics.observer import observer_contrast
from advisor.optics.photometry import luminous_mean
from advisor.optics.tone import base_codes, finished, light_paint
from advisor.optics.visibility import LARGEST_TARGET_ARCMIN, threshold_adrian_1989

Floats = NDArray[np.float64]

WIDE_MM = 210.0
ONLOOKER_AGE = 25.0  # the onlooker is nobody in particular: a young eye, which sees most
# The window as in the desk scene: its size and how far it is; modelling choices.
WINDOW_M = (1.0, 1.2)
WINDOW_AWAY_M = 2.0
ASIDE_MM = (5.0, 3.0)  # of the mirrored window from the eye, so that both are seen
FLATTEST_PER_MM = 1e-4
WHITE_OVER_FACE = 1.5  # what is shown as full white, over the face


@dataclass(frozen=True)
class FaceView:
    """A face as others see it. Pairs run right, left; outlines (2, points, 2) about the box centres, x to the nose.

    ``level`` is the mirrored window in thresholds over the eye behind the lens, ``contrast`` over that eye's luminance.
    """

    outlines_mm: Floats
    box_aside_mm: float
    pd_mm: tuple[float, float]
    eye_up_mm: tuple[float, float]
    rim: str
    pigment: float
    transmittance: float
    window_mm: tuple[tuple[float, float], tuple[float, float]]
    level: float
    contrast: float
    hue: str
    paint: Floats


def face_view(computed: Computed, k: int, *, film: bool) -> FaceView:
    """Return what others see of one option, as coated or without a film."""
    case = computed.case
    option = computed.laid[k] if film else without_film(computed.laid[k], case.stock)
    mirrored, transmittance = _lens(option)
    reflectance = float(luminous_mean(mirrored))
    behind = transmittance**2 * FACE_CD_M2
    luminance = reflectance * WINDOW_CD_M2
    threshold = threshold_adrian_1989(behind, size_arcmin=LARGEST_TARGET_ARCMIN, age_y=ONLOOKER_AGE)
    sizes = [_window_mm(float(computed.forms.shape.front_curvature_per_mm[k, e])) for e in (0, 1)]
    up = [float(height) - case.b_mm / 2.0 for height in case.height_mm]
    return FaceView(
        outlines_mm=rims_of(case),
        box_aside_mm=(case.a_mm + case.dbl_mm) / 2.0,
        pd_mm=(float(case.pd_mm[0]), float(case.pd_mm[1])),
        eye_up_mm=(up[0], up[1]),
        rim=case.rim,
        pigment=case.pigment,
        transmittance=transmittance,
        window_mm=(sizes[0], sizes[1]),
        level=notice_level(luminance, threshold=float(threshold), background=behind),
        contrast=float(
            observer_contrast(
                reflectance,
                transmittance=transmittance,
                window_luminance_cd_m2=WINDOW_CD_M2,
                face_luminance_cd_m2=FACE_CD_M2,
            )
        ),
        hue=hue_word(xyz(mirrored)),
        paint=light_paint(xyz(mirrored)),
    )


def _lens(option: Laid) -> tuple[Floats, float]:
    """Return what the whole lens mirrors from in front, (401,), and its luminous transmittance."""
    spectra = lens_spectra([option])
    passed = float(luminous_mean(spectra.transmittance())[0])
    return spectra.reflectance()[0], max(passed, 1e-9)


def _window_mm(front_curvature_per_mm: float) -> tuple[float, float]:
    """Return the size of the window's image in a convex front: object size f/(f + distance), f half the radius."""
    focal_mm = 0.5 / max(front_curvature_per_mm, FLATTEST_PER_MM)
    share = focal_mm / (focal_mm + WINDOW_AWAY_M * 1000.0)
    return WINDOW_M[0] * 1000.0 * share, WINDOW_M[1] * 1000.0 * share


def draw_face(view: FaceView) -> NDArray[np.uint8]:
    """Draw a face with the glasses on, and the window mirrored over both eyes."""
    unit = WIDE_MM / WIDTH
    sheet = Sheet(-WIDE_MM / 2.0, 0.42 * HEIGHT * unit, unit)
    depths = [_depth(view, e, sheet) for e in (0, 1)]
    lenses = [sheet.soft(depth) for depth in depths]
    canvas = _face(view, sheet)
    canvas.luminance *= 1.0 - np.maximum(*lenses) * (1.0 - view.transmittance**2)
    _rims(view, sheet, canvas, depths)
    codes = base_codes(
        canvas.luminance, paint=canvas.paint, adapting_cd_m2=FACE_CD_M2, white_cd_m2=WHITE_OVER_FACE * FACE_CD_M2
    )
    inside = [sheet.soft(depth - _rim_mm(view)) for depth in depths]
    patches = [(view.level * _panes(view, e, sheet) * inside[e], view.paint) for e in (0, 1)]
    return finished(with_mirrored(codes, patches))


def _eye_place(view: FaceView, e: int) -> tuple[float, float]:
    return (-view.pd_mm[0] if e == 0 else view.pd_mm[1]), view.eye_up_mm[e]


def _depth(view: FaceView, e: int, sheet: Sheet) -> Floats:
    """Return how far every place lies inside the rim, along the line to the box centre, mm; negative outside."""
    nosewards = (sheet.x + view.box_aside_mm) if e == 0 else (view.box_aside_mm - sheet.x)
    angle, radius = np.arctan2(sheet.y, nosewards), np.hypot(nosewards, sheet.y)
    points = view.outlines_mm[e]
    at = np.arctan2(points[:, 1], points[:, 0])
    return np.asarray(np.interp(angle, at, np.hypot(points[:, 0], points[:, 1]), period=2.0 * np.pi) - radius)


def _rim_mm(view: FaceView) -> float:
    return 1.8 if view.rim == "full" else 0.3


def _face(view: FaceView, sheet: Sheet) -> Canvas:
    """Return a plain face: oval, brows, eyes, nose, mouth."""
    skin = FACE_CD_M2
    canvas = Canvas(1.25 * skin, PAPER)
    canvas.lay(sheet.box(-32.0, 32.0, -200.0, -60.0), 0.82 * skin, SKIN)
    canvas.lay(sheet.ellipse((0.0, 12.0), (158.0, 205.0)), 0.16 * skin, IRIS[0.5])  # hair
    canvas.lay(sheet.ellipse((0.0, -14.0), (143.0, 192.0)), skin, SKIN)
    for e in (0, 1):
        x, y = _eye_place(view, e)
        canvas.lay(sheet.ellipse((x, y + 17.0), (31.0, 4.5)), 0.3 * skin, IRIS[0.0])
        canvas.lay(sheet.ellipse((x, y + 0.8), (31.0, 14.0)), 0.5 * skin, SKIN)
        white = sheet.ellipse((x, y), (28.5, 11.5))
        canvas.lay(white, 1.3 * skin, GREY)
        canvas.lay(
            white * sheet.ellipse((x, y), (11.8, 11.8)),
            (0.35 if view.pigment < 1.0 else 0.6) * skin,
            IRIS[view.pigment],
        )
        canvas.lay(white * sheet.ellipse((x, y), (4.0, 4.0)), 0.03 * skin, GREY)
    canvas.lay(sheet.ellipse((0.0, -36.0), (24.0, 5.0)), 0.72 * skin, SKIN)
    canvas.lay(sheet.ellipse((0.0, -33.5), (24.0, 6.0)), skin, SKIN)
    canvas.lay(sheet.ellipse((0.0, -61.0), (46.0, 7.0)), 0.55 * skin, LIPS)
    return canvas


def _rims(view: FaceView, sheet: Sheet, canvas: Canvas, depths: list[Floats]) -> None:
    """Lay the frame over the face: rims by kind, a bridge, and the ends of the sides."""
    dark, thick = 0.1 * FACE_CD_M2, _rim_mm(view)
    for depth in depths:
        ring = sheet.soft(depth + 0.6) * (1.0 - sheet.soft(depth - thick))
        if view.rim != "full":
            ring = ring * 0.6  # a bare edge of the lens
        canvas.lay(ring, dark, GREY)
        if view.rim == "grooved":
            brow = sheet.soft(depth + 1.6) * (1.0 - sheet.soft(depth - 0.6)) * sheet.soft(sheet.y - 1.0)
            canvas.lay(brow, dark, GREY)
    half = float(view.outlines_mm[0][:, 0].max())
    inner = view.box_aside_mm - half
    bridge = sheet.box(-inner - 1.0, inner + 1.0, 3.0, 5.5)
    canvas.lay(bridge, dark, GREY)
    outer = view.box_aside_mm + half
    for side in (-1.0, 1.0):
        ends = sorted((side * (outer - 1.0), side * 74.0)) if outer < 74.0 else [side * outer, side * outer]
        canvas.lay(sheet.box(ends[0], ends[1], 5.0, 8.5), dark, GREY)


def _panes(view: FaceView, e: int, sheet: Sheet) -> Floats:
    """Return the coverage of the mirrored window: four panes, up and to the onlooker's right of the eye."""
    x, y = _eye_place(view, e)
    x, y = x + ASIDE_MM[0], y + ASIDE_MM[1]
    wide, high = view.window_mm[e]
    bar = 0.04 * wide
    whole = sheet.box(x - wide / 2.0, x + wide / 2.0, y - high / 2.0, y + high / 2.0)
    cross = np.maximum(sheet.box(x - bar, x + bar, y - high, y + high), sheet.box(x - wide, x + wide, y - bar, y + bar))
    return whole * (1.0 - cross)
