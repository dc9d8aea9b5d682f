"""The words of the advice: reasons, what is given up, what would change it, remedies that cost nothing."""

from advisor.counsel.phrases import mark
from advisor.counsel.words import WORD_TEXTS

WORN = mark("the lens worn now, made in this frame")
CHEAPEST = mark("the cheapest that meets every must")
RECOMMENDED = mark("the recommended pair")
NEXT_BEST = mark("the next best")
EASIER, HARDER = mark("easier"), mark("harder")
FAINTER, STRONGER = mark("fainter"), mark("stronger")

# One figure of this pair beside that of another: a reason where it is better, what is given up where it is worse.
FIGURE_TEXTS: dict[str, str] = {
    "figure-second-image": mark("Second light at night: %(this_verdict)s, against %(other_verdict)s with %(against)s."),
    "figure-second-image-alike": mark(
        "Second light at night: %(this_verdict)s with both, %(how)s than with %(against)s."
    ),
    "figure-from-behind": mark(
        "Light from behind (%(scene)s): it shows at up to %(this_percent)s %% of what is looked at, against "
        "%(other_percent)s %% with %(against)s."
    ),
    "figure-from-behind-brighter": mark(
        "Light from behind (%(scene)s): up to %(this_times)s times as bright as what is looked at, against "
        "%(other_times)s times with %(against)s."
    ),
    "figure-seen-by-others": mark(
        "A window mirrored over the eye, for others: %(this_times)s times as bright as the eye, against %(other_times)s times with %(against)s."
    ),
    "figure-thickness": mark("Thickest place: %(this_mm)s mm, against %(other_mm)s mm with %(against)s."),
    "figure-weight": mark("Both lenses together: %(this_g)s g, against %(other_g)s g with %(against)s."),
    "figure-fringe": mark(
        "Colour fringe at the side: %(this_prism_d)s prism dioptres, against %(other_prism_d)s with %(against)s; noticed from about 0.1."
    ),
    "figure-transmitted": mark(
        "Light passed at night: %(this_percent)s %%, against %(other_percent)s %% with %(against)s."
    ),
    "figure-not-mirrored": mark(
        "Light not lost to mirroring: %(this_percent)s %%, against %(other_percent)s %% with %(against)s."
    ),
    "figure-care": mark("Care in this life (%(harm_names)s): %(how)s than with %(against)s."),
    "figure-in-between": mark(
        "Between far and near up to %(this_blur_d)s D stay out of focus, against %(other_blur_d)s D with %(against)s."
    ),
    "figure-in-between-none": mark(
        "Nothing between far and near stays out of focus, against up to %(other_blur_d)s D with %(against)s."
    ),
    "figure-in-between-other-none": mark(
        "Between far and near up to %(this_blur_d)s D stay out of focus, against nothing with %(against)s."
    ),
    "figure-sun": mark("At its darkest it passes %(this_percent)s %%, against %(other_percent)s %% with %(against)s."),
    "figure-price": mark("It costs %(this_price)s %(currency)s, against %(other_price)s %(currency)s for %(against)s."),
}
REASON_TEXTS: dict[str, str] = {
    "is-tough": mark("An impact material, %(centre_mm)s mm in the middle; this wearer needs one, of 2.0 mm or more."),
    "reaches-all": mark("One lens for far, near and what lies between, over the add of %(add_d)s D."),
    "reaches-both": mark("Far above, near below; between them up to %(this_blur_d)s D stay out of focus."),
    "reaches-both-clear": mark("Far above, near below; the eye's own focusing reaches what lies between."),
    "passes-enough": mark(
        "The finished lens passes %(this_percent)s %% of the light, over the %(limit_percent)s %% for night driving."
    ),
    "not-noticed": mark("Second light at night: not noticed in the scenes that were worked out."),
    "is-cheapest": mark("Nothing that meets every must is cheaper."),
    "level-cheaper": mark(
        "Level with %(label)s within what the figures are sure of, and cheaper: %(this_price)s against %(other_price)s %(currency)s."
    ),
    "no-single-option": mark("No single option does every job: two pairs are proposed."),
    "nothing-meets-every-must": mark("Nothing that is laid out or sold meets every must."),
}
CHANGE_TEXTS: dict[str, str] = {
    "if-first": mark("If %(criterion)s came before everything else: %(label)s."),
    "if-limit-raised": mark("The least that meets every other must costs %(price)s %(currency)s."),
    "if-asked-impact": mark("Knocks were not asked: where they are frequent, an impact material comes first."),
    "if-asked-one-eye": mark("One good eye was not asked: with one, an impact material comes first."),
    "if-asked-child": mark("The age is not known: for a child an impact material comes first."),
    "if-asked-night": mark("Night driving was not asked: it decides how much the second light counts."),
    "if-asked-price": mark("What to spend was not asked: %(label)s costs %(price)s %(currency)s and meets every must."),
    "if-frame-taller": mark(
        "A frame with a fitting height of %(least_height_mm)s mm or more would allow one pair for all distances."
    ),
    "if-prescriber-agrees": mark("Ask the prescriber about slab-off or contact lenses: then one pair may do."),
    "if-height-measured": mark("The fitting height was not measured: this design needs %(least_height_mm)s mm."),
    "if-two-pairs": mark(
        "Steps below look blurred through a near part: for one who may fall, a distance pair for walking and a reading pair "
        "instead; of these lenses %(price)s %(currency)s together."
    ),
    "if-two-pairs-unpriced": mark(
        "Steps below look blurred through a near part: for one who may fall, a distance pair for walking and a reading pair "
        "instead."
    ),
    "compare-aspheric": mark(
        "Compare an aspheric form from about +5.00 D: flatter, thinner and lighter; what it saves is not worked out here."
    ),
    "if-polarising": mark(
        "Glare off water or a wet road was not weighed: a polarising tint takes most of it. Try it with the wearer's own "
        "dashboard and displays."
    ),
}
FREE_TEXTS: dict[str, str] = {
    "examination-first": mark("Glare at night is new: an eye examination before money is spent on a lens."),
    "operation-planned": mark(
        "An operation on the eye is planned and changes the power: ask whether new lenses can wait; until then the price counts most."
    ),
    "turn-desk": mark(
        "Turn the desk first, it is free: even with the recommended pair light from behind (%(scene)s) shows at up to "
        "%(this_percent)s %% of what is looked at."
    ),
    "move-lamp": mark(
        "Move the lamp first, it is free: even with the recommended pair light from behind (%(scene)s) shows at up to "
        "%(this_percent)s %% of what is looked at."
    ),
    "smaller-frame": mark(
        "A frame %(by_mm)s mm smaller takes the thickest edge from %(edge_mm)s to %(smaller_edge_mm)s mm and costs nothing."
    ),
    "smaller-frame-or-material": mark(
        "A frame %(by_mm)s mm smaller takes the thickest edge from %(edge_mm)s to %(smaller_edge_mm)s mm and costs nothing; "
        "%(label)s takes it to %(other_mm)s mm for %(more_price)s %(currency)s more."
    ),
    "clean-right": mark(
        "Right cleaning first, it is free: water, a drop of mild soap, a clean soft cloth; no %(cleaning)s."
    ),
}
PAIR_TEXTS: dict[str, str] = {
    "pair-far": mark("One pair for far, driving and walking."),
    "pair-near": mark("One pair for near; not for driving, walking about or stairs."),
    "pair-clear": mark("One clear pair, also for dusk and night."),
    "pair-tinted": mark("One tinted pair for the day; not for dusk or night."),
}
ROBUST_TEXTS: dict[str, str] = {
    "holds": mark("holds whichever you care about most"),
    "mostly": mark("holds for most priorities, turns on %(criterion)s"),
    "turns": mark("turns on %(criterion)s"),
}
CLEANING_TEXTS: dict[str, str] = {
    "paper": mark("paper"),
    "shirt": mark("shirt"),
    "dry-cloth": mark("dry wiping"),
    "hot-water": mark("hot water"),
    "alcohol-wipe": mark("alcohol wipes"),
    "window-cleaner": mark("window cleaner"),
}
ADVICE_TEXTS: dict[str, str] = (
    WORD_TEXTS | FIGURE_TEXTS | REASON_TEXTS | CHANGE_TEXTS | FREE_TEXTS | PAIR_TEXTS | ROBUST_TEXTS
)
