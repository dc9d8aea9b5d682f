"""Pictures judged by their pixels: what is not noticed cannot be seen in them, what is plain can."""

import datetime as dt
import re
from dataclasses import replace
from functools import cache

import numpy as np
import pytest
from numpy.typing import NDArray

from advisor.counsel.answer import FACE_CD_M2, WINDOW_CD_M2
from advisor.counsel.compare import Computed, compute
from advisor.counsel.picture_drawing import draw_desk, draw_road, road_sheet
from advisor.counsel.picture_face import draw_face, face_view
from advisor.counsel.picture_shapes import HEIGHT, WIDTH
from advisor.counsel.picture_views import Mirrored, SeenScene, desk_scene, road_scene, scene_seen, seen_through
from advisor.counsel.pictures import NAMES, NoSuchPicture, draw, has_film, names_of, words
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.optics.ghost_strength import PATHS
from advisor.resources import resource_dir
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(path.stem for path in resource_dir("demo_patients").glob("*.json"))
Codes = NDArray[np.int64]


@cache
def computed_for(name: str) -> Computed:
    return compute(read_visit(resource_dir("demo_patients") / f"{name}.json"), builtin_range(), today=TODAY)


def pixels(codes: NDArray[np.uint8]) -> Codes:
    assert codes.shape == (HEIGHT, WIDTH, 3)
    return codes.astype(np.int64)


def road(name: str = "weak-minus-night-driver", k: int = 0, *, film: bool = True) -> SeenScene:
    computed = computed_for(name)
    place = road_scene(computed, k)
    assert place is not None
    return scene_seen(computed, seen_through(computed, film=film), k, scene_index=place[0], eye=place[1])


def desk(name: str = "office-window-behind", k: int = 0) -> SeenScene:
    computed = computed_for(name)
    place = desk_scene(computed, k)
    assert place is not None
    return scene_seen(computed, seen_through(computed, film=True), k, scene_index=place[0], eye=place[1])


def alone(seen: SeenScene, path: str, level: float) -> SeenScene:
    """The scene with one image of a level, and nothing else mirrored."""
    one = next(image for image in seen.mirrored if image.path == path)
    return replace(seen, mirrored=(replace(one, level=level),))


def nothing(seen: SeenScene) -> SeenScene:
    return replace(seen, mirrored=())


def greatest_step(seen: SeenScene, path: str, level: float) -> int:
    """Greatest change of any channel of any pixel that one image makes."""
    if seen.scene.where == "behind":
        return int(np.abs(pixels(draw_desk(alone(seen, path, level))) - pixels(draw_desk(nothing(seen)))).max())
    sheet = road_sheet(seen)
    shown = [pixels(draw_road(one, sheet=sheet)) for one in (alone(seen, path, level), nothing(seen))]
    return int(np.abs(shown[0] - shown[1]).max())


def every_scene() -> list[tuple[str, int, str]]:
    found: list[tuple[str, int, str]] = []
    for name in DEMO:
        for k in (0, 1):  # a coating moves the level, which the tests set; lenses differ little within a wearer
            found += [(name, k, picture) for picture in ("road", "desk") if picture in names_of(computed_for(name), k)]
    return found


@pytest.mark.parametrize(("name", "k", "kind"), every_scene())
def test_an_image_below_notice_changes_no_pixel_by_more_than_one_step(name: str, k: int, kind: str) -> None:
    seen = road(name, k) if kind == "road" else desk(name, k)
    paths = [one.path for one in seen.mirrored]
    assert paths
    for path in paths:
        assert greatest_step(seen, path, 0.399) <= 1  # 0.4 is where the verdict "not noticed" ends
        assert greatest_step(seen, path, 0.0) == 0


@pytest.mark.parametrize("name", ["weak-minus-night-driver", "prescribed-prism", "one-good-eye-drilled"])
def test_a_plain_image_is_clear_to_see_on_the_road(name: str) -> None:
    seen = road(name, 0, film=False)
    assert greatest_step(seen, "ahead-inner", 10.01) >= 20  # steps of 255; one is the least a screen can make
    sheet = road_sheet(seen)
    changed = pixels(draw_road(alone(seen, "ahead-inner", 10.01), sheet=sheet)) - pixels(
        draw_road(nothing(seen), sheet=sheet)
    )
    size_px = np.prod(np.array(alone(seen, "ahead-inner", 1.0).mirrored[0].size_deg) / sheet.unit) * np.pi / 4.0
    assert (changed.max(axis=-1) >= 10).sum() >= 0.5 * size_px  # not a speck: half of one lamp's patch at least
    assert changed.min() >= 0  # light only adds


def test_a_plain_image_is_clear_to_see_on_the_desk() -> None:
    for path in ("behind-back", "behind-front"):
        assert greatest_step(desk(), path, 10.01) >= 20


@pytest.mark.parametrize("kind", ["road", "desk"])
def test_in_between_a_stronger_image_shows_more(kind: str) -> None:
    seen, path = (road(film=False), "ahead-inner") if kind == "road" else (desk(), "behind-back")
    steps = [greatest_step(seen, path, level) for level in (0.0, 0.4, 1.0, 2.0, 3.0, 5.0, 7.0, 10.0, 20.0, 40.0)]
    assert steps == sorted(steps)
    assert len(set(steps[1:8])) == 7  # every one of them, up to plain, is told apart


def test_what_the_comparison_computed_is_what_is_drawn() -> None:
    """The visibility level, size and distance of the drawn image, measured on the picture, are the comparison's."""
    computed = computed_for("weak-minus-night-driver")
    seen = road()
    place = road_scene(computed, 0)
    assert place is not None
    at = (0, place[1], place[0], PATHS.index("ahead-inner"))
    ghosts = computed.ghosts.seen
    one = next(image for image in seen.mirrored if image.path == "ahead-inner")
    assert one.level == pytest.approx(float(ghosts.relaxed.visibility_level[at]))
    assert np.hypot(*one.place_deg) == pytest.approx(float(ghosts.separation_deg[at]), rel=1e-9)
    sheet = road_sheet(seen)
    lamp_alone = seen.scene.model_copy(update={"lamps": 1})
    single = replace(alone(seen, "ahead-inner", 3.0), scene=lamp_alone)
    shown = pixels(draw_road(single, sheet=sheet)) - pixels(draw_road(nothing(single), sheet=sheet))
    cover = shown.max(axis=-1) >= 4  # half of the 7.5 steps that level 3 makes
    middle = [float((np.broadcast_to(axis, cover.shape)[cover]).mean()) for axis in (sheet.x, sheet.y)]
    moved = np.subtract(middle, seen.source_place_deg)
    assert moved == pytest.approx(one.place_deg, abs=2 * sheet.unit)  # two pixels
    area_deg2 = cover.sum() * sheet.unit**2
    assert area_deg2 == pytest.approx(np.pi / 4.0 * np.prod(ghosts.relaxed.size_deg[at]), rel=0.15)


def test_the_right_eye_has_its_nose_to_the_left() -> None:
    """Prism base in throws the image towards the apex, to the temple: right of the lamps for the right eye."""
    content = {
        "prescription": {eye: {"sphere": -1.0, "prism": [{"amount": 2.0, "base": "in"}]} for eye in ("right", "left")},
        "options": [{"material": "hard-resin-150", "coating": "bare"}],
        "scenes": ["oncoming-headlamps-dark-road"],
    }
    computed = compute(check_visit(content), builtin_range(), today=TODAY)
    seen = seen_through(computed, film=True)
    for eye, sign in ((0, 1.0), (1, -1.0)):
        shown = scene_seen(computed, seen, 0, scene_index=0, eye=eye)
        assert shown.source_place_deg[0] == pytest.approx(-4.0)  # oncoming traffic is on the wearer's left
        one = next(image for image in shown.mirrored if image.path == "ahead-inner")
        assert sign * one.place_deg[0] > 2.0


def test_a_film_on_both_faces_weakens_what_is_drawn() -> None:
    """Broadband films on both faces, as laid out second for each of these wearers, mirror far less than bare faces."""
    for name, k, paths in (
        ("weak-minus-night-driver", 1, ("ahead-inner",)),
        ("hairdresser-price-limit", 1, ("ahead-inner",)),
    ):
        with_film, without = (road(name, k, film=film) for film in (True, False))
        for filmed, bare in zip(with_film.mirrored, without.mirrored, strict=True):
            if filmed.path in paths:
                assert filmed.level < 0.1 * bare.level


def test_the_face_shows_the_window_by_its_contrast() -> None:
    """Luminances from the closed form R L_window against T^2 L_face, 3000 and 60 cd/m2."""
    computed = computed_for("weak-minus-night-driver")
    view = face_view(computed, 0, film=False)
    reflectance = float(computed.uncoated.whole_lens[0])
    through = float(computed.uncoated.transmittance[0])
    assert view.contrast == pytest.approx(reflectance * WINDOW_CD_M2 / (through**2 * FACE_CD_M2), rel=1e-6)
    dim = draw_face(replace(view, level=0.399))
    none = draw_face(replace(view, level=0.0))
    assert int(np.abs(pixels(dim) - pixels(none)).max()) <= 1
    plain = pixels(draw_face(replace(view, level=10.01))) - pixels(none)
    assert plain.max() >= 20
    rows, columns = np.nonzero(plain.max(axis=-1) >= 10)
    millimetre = WIDTH / 210.0
    wide = (columns[columns < WIDTH / 2].max() - columns[columns < WIDTH / 2].min() + 1) / millimetre
    assert wide == pytest.approx(view.window_mm[0][0], abs=1.5)  # pixels are 0.44 mm
    assert rows.size > 0


def test_a_window_in_a_convex_front_is_as_small_as_the_mirror_equation_says() -> None:
    """1/v = 1/f - 1/u with f half the radius: 1.0 m at 2 m in a front of 83.0 mm radius is 20.3 mm wide."""
    computed = computed_for("weak-minus-night-driver")
    radius_mm = 1.0 / float(computed.forms.shape.front_curvature_per_mm[0, 0])
    image_mm = 1.0 / (2.0 / radius_mm + 1.0 / 2000.0)
    assert face_view(computed, 0, film=True).window_mm[0][0] == pytest.approx(1000.0 * image_mm / 2000.0, rel=1e-6)


def test_a_tint_darkens_the_eye_behind_it_and_not_the_face() -> None:
    computed = computed_for("tinted-pair")
    dark = next(k for k, option in enumerate(computed.laid) if option.tint is not None and option.goes_dark)
    view = replace(face_view(computed, dark, film=True), level=0.0)
    shown, clear = pixels(draw_face(view)), pixels(draw_face(replace(view, transmittance=1.0)))
    assert (shown <= clear).all()
    assert (shown[HEIGHT - 5] == clear[HEIGHT - 5]).all()
    assert shown.sum() < 0.95 * clear.sum()


@pytest.mark.parametrize("name", ["office-window-behind", "high-plus-child", "one-good-eye-drilled"])
def test_every_picture_is_drawn_alike_each_time(name: str) -> None:
    computed = computed_for(name)
    for picture in names_of(computed, 0):
        first, again = (draw(computed, picture, option=0, film=True) for _ in range(2))
        assert first == again
        assert len(first) == WIDTH * HEIGHT * 3


@pytest.mark.parametrize("name", DEMO)
def test_every_picture_is_told_and_promises_nothing(name: str) -> None:
    computed = computed_for(name)
    for k in range(len(computed.laid)):
        for picture in names_of(computed, k):
            for film in (True, False):
                text = words(computed, picture, option=k, film=film, translator=language("en"))
                assert "%(" not in text
                assert not re.search(r"\b(invisible|anti-glare|no reflections)\b", text)


def test_both_road_pictures_of_an_option_share_one_frame() -> None:
    computed = computed_for("weak-minus-night-driver")
    filmed, bare = (np.frombuffer(draw(computed, "road", option=1, film=film), np.uint8) for film in (True, False))
    white = [set(np.flatnonzero((one.reshape(-1, 3) == 255).all(axis=-1))) for one in (filmed, bare)]
    assert white[0] <= white[1]  # the lamps stand where they stood


def test_words_say_what_the_counter_says() -> None:
    computed = computed_for("weak-minus-night-driver")
    said = [words(computed, "road", option=1, film=film, translator=language("en")) for film in (True, False)]
    assert "no second light to be noticed" in said[0]
    assert "a plain second light" in said[1]
    assert has_film(computed, 1)
    assert not has_film(computed, 0)


def test_scenes_decide_which_pictures_there_are() -> None:
    base = {"prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}}
    options = {"options": [{"material": "hard-resin-150"}, {"material": "hard-resin-150", "front_power_d": 30.0}]}
    for scenes, wanted in (
        ([], ("face",)),
        (["stage-lights"], ("face",)),
        (["oncoming-headlamps-lit-road"], ("road", "face")),
        (["window-behind-desk"], ("desk", "face")),
        (None, NAMES),
    ):
        visit = check_visit(base | options | ({} if scenes is None else {"scenes": scenes}))
        computed = compute(visit, builtin_range(), today=TODAY)
        assert names_of(computed, 0) == wanted
        assert names_of(computed, 1) == ()  # an option that cannot be made has none
        assert names_of(computed, 7) == ()
    with pytest.raises(NoSuchPicture):
        draw(computed, "road", option=1, film=True)
    with pytest.raises(NoSuchPicture):
        words(computed, "face", option=1, film=True, translator=language("en"))


def test_an_image_with_no_place_is_spread_over_the_whole_picture() -> None:
    seen = road()
    one: Mirrored = replace(
        next(image for image in seen.mirrored if image.path == "ahead-inner"), spread=True, level=2.0
    )
    sheet = road_sheet(seen)
    shown = pixels(draw_road(replace(seen, mirrored=(one,)), sheet=sheet)) - pixels(
        draw_road(nothing(seen), sheet=sheet)
    )
    edge = np.concatenate([shown[0], shown[-1]]).max(axis=-1)
    assert set(np.unique(edge)) <= {4, 5, 6}  # level 2 is 5 steps, and each of the two pictures is rounded
