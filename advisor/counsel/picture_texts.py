"""Words of the pictures: what each shows, its title, and what no screen can show."""

from collections.abc import Mapping

from advisor.counsel.phrases import mark

EYE_WORDS: Mapping[str, str] = {"right": mark("right"), "left": mark("left")}

# What a picture shows, in words: its alternative text.
PICTURE_TEXTS: dict[str, str] = {
    "road": mark(
        "A road by night with oncoming lamps and the light they scatter in the eye, as the %(eye)s eye sees it: %(seen)s."
    ),
    "desk": mark("A desk with a screen, as the %(eye)s eye sees it with a window behind the shoulder: %(seen)s."),
    "face-seen": mark(
        "A face across the counter: the window mirrored over the eye has %(contrast_percent)s %% of the light of the eye behind it, its colour %(hue)s."
    ),
    "face-brighter": mark(
        "A face across the counter: the window mirrored over the eye is brighter than the eye behind it, its colour %(hue)s."
    ),
    "face-unseen": mark(
        "A face across the counter: the window mirrored over the eye has less than 2 %% of the light of the eye behind it."
    ),
}
TITLES: Mapping[str, str] = {
    "road": mark("What the wearer sees: a road by night"),
    "desk": mark("What the wearer sees: a desk, a window behind"),
    "face": mark("What others see: the face across the counter"),
}
CALCULATED = mark("Calculated, not a promise.")
# What a screen cannot show of each picture, and what is left out.
LIMITS: Mapping[str, str] = {
    "road": mark(
        "A screen is thousands of times dimmer than a lamp and cannot dazzle; the grey round the lamps stands for the light they scatter inside the eye. The eye's own blur and rays round lamps are left out."
    ),
    "desk": mark(
        "A screen shows neither how bright the window is nor how the eye shifts between near and far. The mirrored window lies far aside and is seen when the eye turns to it."
    ),
    "face": mark(
        "A window is far brighter than a screen. The mirror images of front and back are drawn as one, which is the most they come to; from the side the colour differs."
    ),
}
SAME_SCALE = mark(
    "All pictures use one scale of light: what is not noticed changes a picture by the least step a screen has, what is plain by 25 steps or more of 255. A deep colour is shown paler."
)
MISSING: Mapping[str, str] = {
    "road": mark("No road by night: this visit lays out no scene with lamps ahead."),
    "desk": mark("No desk: this visit lays out no scene with a window behind."),
}
HOW: tuple[str, ...] = (
    mark(
        "Light: what the scene holds, what the lens passes and mirrors, the veil inside this wearer's eye (CIE 146) and the size, place and threshold of every mirrored image, as in the comparison."
    ),
    mark(
        "Screen: the scene by the photographic curve of Reinhard and others (2002) with the key of Krawczyk and others (2005), up to 190 of 255; what the lens mirrors by Ward's rule (1994), a difference just seen is shown as one just seen: level 0.4 is one step, level 10 is 25, and above that by the logarithm. In daylight a difference below two parts in a hundred counts as less than one."
    ),
    mark(
        "Left out: the eye's own blur, colour seen at night, tints' colours, aberrations of the lens, and dirt on it."
    ),
)
