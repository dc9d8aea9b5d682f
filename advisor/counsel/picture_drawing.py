"""What the wearer sees, drawn: a road by night, and a desk with a window behind.

Scenery is of our own making and no photograph; what the lens mirrors in it is as computed. Each returns codes of the
screen, (HEIGHT, WIDTH, 3), by the one mapping of `advisor.optics.tone`.
"""

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.picture_shapes import (
    GREY,
    HEIGHT,
    NIGHT,
    PAPER,
    WIDTH,
    WOOD,
    Canvas,
    Sheet,
    with_mirrored,
)
from advisor.counsel.picture_views import Mirrored, SeenScene
from advisor.optics.eye import veil_cie146_2002
from advisor.optics.tone import base_codes, finished

Floats = NDArray[np.float64]
Codes = NDArray[np.uint8]

EYE_HEIGHT_M, LANE_M, HORIZON_DEG = 1.2, 3.5, 0.6
LEAST_WIDE_DEG, MOST_WIDE_DEG, ROOM_ASIDE_DEG = 12.0, 40.0, 0.8
LARGEST_SHOWN_DEG = 4.0  # a larger patch may run out of the picture
DESK_WIDE_DEG = 104.0
SCREEN_M = (0.6, 0.34)
MULLION = 0.06  # of the window's width
WHITE_OVER_BACKGROUND = 1.25  # what is shown as full white by day, over what is looked at


def road_sheet(seen: SeenScene) -> Sheet:
    """Return a frame that holds what is looked at, the lamps and their mirrored images, however the lens is coated."""
    spacing = _spacing_deg(seen)
    across = [0.7, seen.source_place_deg[0] - spacing, seen.source_place_deg[0] + spacing]
    upwards = [0.0, seen.source_place_deg[1]]
    for one in seen.mirrored:
        if one.path == "ahead-inner" and not one.spread:
            half = min(max(one.size_deg), LARGEST_SHOWN_DEG) / 2.0
            x, y = (seen.source_place_deg[n] + one.place_deg[n] for n in (0, 1))
            across += [x - half - spacing / 2.0, x + half + spacing / 2.0]
            upwards += [y - half, y + half]
    wide = max(
        LEAST_WIDE_DEG,
        max(across) - min(across) + 2 * ROOM_ASIDE_DEG,
        (max(upwards) - min(upwards) + 2 * ROOM_ASIDE_DEG) * WIDTH / HEIGHT,
    )
    wide = min(wide, MOST_WIDE_DEG)
    unit = wide / WIDTH
    left = (max(across) + min(across) - wide) / 2.0
    top = (max(upwards) + min(upwards)) / 2.0 + HEIGHT * unit / 2.0
    return Sheet(left, top, unit)


def _spacing_deg(seen: SeenScene) -> float:
    scene = seen.scene
    return float(np.rad2deg((scene.spacing_m or 0.0) / (scene.distance_m or np.inf)))


def draw_road(seen: SeenScene, *, sheet: Sheet) -> Codes:
    """Draw a road by night with the lamps of the scene, their veil in the eye, and what the lens mirrors."""
    lamps = _lamp_places(seen)
    codes = _road_codes(seen, sheet, lamps)
    codes = with_mirrored(codes, [(_lamp_patch(one, sheet, lamps), one.paint) for one in seen.mirrored])
    size = (seen.source_size_deg, seen.source_size_deg)
    for lamp in lamps:
        cover = sheet.ellipse(lamp, size)[..., None]
        codes = codes + cover * (255.0 - codes)  # a lamp is far brighter than any screen: as white as there is
    return finished(codes)


def _lamp_places(seen: SeenScene) -> list[tuple[float, float]]:
    spacing, (x, y) = _spacing_deg(seen), seen.source_place_deg
    return [(x + spacing * (n - (seen.scene.lamps - 1) / 2.0), y) for n in range(seen.scene.lamps)]


def _road_codes(seen: SeenScene, sheet: Sheet, lamps: list[tuple[float, float]]) -> Floats:
    road = seen.scene.background_cd_m2
    canvas = Canvas(0.25 * road, NIGHT)
    point = (0.0, HORIZON_DEG)
    canvas.lay(sheet.soft(HORIZON_DEG - sheet.y) * np.ones((1, WIDTH)), 0.5 * road, NIGHT)
    slope = EYE_HEIGHT_M / LANE_M
    right = sheet.below(-2.0 * slope, through=point)  # the verge of the own lane, half a lane aside
    left = sheet.below(slope / 1.5, through=point)  # the far verge, a lane and a half away
    canvas.lay(right * left, road, GREY)
    for reach, wide in ((-0.5 * LANE_M, 0.1), (1.5 * LANE_M, 0.1)):
        canvas.lay(_line(sheet, point, -reach, wide), 2.5 * road, GREY)
    dashes = 0.5 + 0.5 * np.sign(np.sin(80.0 / np.maximum(HORIZON_DEG - sheet.y, 0.05)))
    canvas.lay(_line(sheet, point, -0.5 * LANE_M, 0.12) * dashes, 2.5 * road, GREY)
    veil = np.zeros((HEIGHT, WIDTH))
    for x, y in lamps:
        apart = np.hypot(sheet.x - x, sheet.y - y)
        veil += seen.eye_lx_per_lamp * veil_cie146_2002(apart, age_y=seen.age_years, pigment=seen.pigment)
    total = seen.transmittance * canvas.luminance + veil
    share = (veil / total)[..., None]  # the veil has the lamps' colour, taken as white
    paint = canvas.paint * (1.0 - share) + share
    return base_codes(total, paint=paint, adapting_cd_m2=max(seen.scene.adapting_cd_m2, 1e-3))


def _line(sheet: Sheet, point: tuple[float, float], aside_m: float, wide_m: float) -> Floats:
    """Return a line on the road at this distance to the right, running to the vanishing point."""
    down = np.maximum(point[1] - sheet.y, 0.0)
    middle = point[0] + aside_m / EYE_HEIGHT_M * down
    half = 0.5 * wide_m / EYE_HEIGHT_M * down
    return sheet.soft(half - np.abs(sheet.x - middle)) * (down > 0.0) * np.clip(half / sheet.unit * 2.0, 0.0, 1.0)


def _lamp_patch(one: Mirrored, sheet: Sheet, lamps: list[tuple[float, float]]) -> Floats:
    """Return the level of one path's light: a patch for every lamp, the computed level where they overlap most."""
    if one.spread:
        return np.full((HEIGHT, WIDTH), one.level)
    lesser = [min(pair) for pair in zip(one.source_deg, one.blur_deg, strict=True)]
    edge = min(max(lesser), 0.6 * min(one.size_deg))
    cover = np.zeros((HEIGHT, WIDTH))
    for x, y in lamps:
        place = (x + one.place_deg[0], y + one.place_deg[1])
        cover += sheet.ellipse(place, one.size_deg, turn_deg=one.turn_deg, edge=edge)
    most = float(cover.max())
    return one.level * cover / max(most, 1.0)


def draw_desk(seen: SeenScene) -> Codes:
    """Draw a desk with a screen, and the window behind as the lens mirrors it, on the temple side."""
    unit = DESK_WIDE_DEG / WIDTH
    sheet = Sheet(-DESK_WIDE_DEG / 2.0, HEIGHT * unit / 2.0, unit)
    looked_at = seen.scene.background_cd_m2
    canvas = _desk(sheet, seen)
    codes = base_codes(
        seen.transmittance * canvas.luminance,
        paint=canvas.paint,
        adapting_cd_m2=max(seen.scene.adapting_cd_m2, 1e-3),
        white_cd_m2=WHITE_OVER_BACKGROUND * looked_at,
    )
    patches = [(_window_patch(one, sheet, seen), one.paint) for one in seen.mirrored]
    return finished(with_mirrored(codes, patches))


def _desk(sheet: Sheet, seen: SeenScene) -> Canvas:
    """Return the room: wall and screen as bright as the scene says, for that is what the image is compared with."""
    looked_at = seen.scene.background_cd_m2
    distance = seen.scene.fixation_m or 0.6
    half_wide, half_high = (float(np.rad2deg(np.arctan(0.5 * size / distance))) for size in SCREEN_M)
    canvas = Canvas(looked_at, PAPER)
    desk_top = -half_high - 5.0
    canvas.lay(sheet.soft(desk_top - sheet.y) * np.ones((1, WIDTH)), 0.45 * looked_at, WOOD)
    canvas.lay(sheet.box(-3.0, 3.0, desk_top - 1.0, -half_high), 0.2 * looked_at, GREY)
    canvas.lay(sheet.box(-9.0, 9.0, desk_top - 2.4, desk_top - 1.0), 0.2 * looked_at, GREY)
    canvas.lay(sheet.box(-15.0, 15.0, desk_top - 10.5, desk_top - 5.0), 0.75 * looked_at, PAPER)
    canvas.lay(sheet.box(-half_wide - 1.2, half_wide + 1.2, -half_high - 1.2, half_high + 1.2), 0.12 * looked_at, GREY)
    canvas.lay(sheet.box(-half_wide, half_wide, -half_high, half_high), looked_at, GREY)
    for n in range(9):
        line = half_high * (0.78 - 0.19 * n)
        reach = half_wide * (0.75, 0.6, 0.7, 0.3, 0.72, 0.66, 0.74, 0.55, 0.2)[n]
        canvas.lay(sheet.box(-0.85 * half_wide, reach, line - 0.45, line + 0.45), 0.3 * looked_at, GREY)
    return canvas


def _window_patch(one: Mirrored, sheet: Sheet, seen: SeenScene) -> Floats:
    """Return the level of the mirrored window: a cross of glazing bars, as blurred as the eye's focus leaves it."""
    aside = seen.scene.incidence_deg if seen.scene.incidence_deg is not None else 35.0
    x = aside if seen.eye == 0 else -aside  # the temple is to the right of a right eye
    source, blur = (_upright(pair, turn_deg=one.turn_deg) for pair in (one.source_deg, one.blur_deg))
    strips = []
    for wide, soft, middle, upright in ((source[0], blur[0], x, True), (source[1], blur[1], 0.0, False)):
        whole = sheet.spread_strip(middle, wide=wide, blur=soft, upright=upright)
        bar = MULLION * source[0]
        share = min(bar, max(soft, sheet.unit)) / max(soft, sheet.unit)
        strips.append(whole - share * sheet.spread_strip(middle, wide=bar, blur=soft, upright=upright))
    pane = strips[0] * strips[1]
    most = float(strips[0].max() * strips[1].max())
    return one.level * np.clip(pane, 0.0, None) / max(most, np.finfo(float).tiny)


def _upright(pair: tuple[float, float], *, turn_deg: float) -> tuple[float, float]:
    """Return width and height of an ellipse whose first diameter lies along ``turn_deg``."""
    cos, sin = np.cos(np.deg2rad(turn_deg)), np.sin(np.deg2rad(turn_deg))
    wide = float(np.hypot(pair[0] * cos, pair[1] * sin))
    return wide, float(np.hypot(pair[0] * sin, pair[1] * cos))
