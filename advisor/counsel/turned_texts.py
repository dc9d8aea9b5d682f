"""The words of the comparison turned round to the wearer: plain and short, "you may" and never "you will"."""

from advisor.counsel.phrases import mark

ROW_TITLES: dict[str, str] = {
    "price": mark("What it costs"),
    "thick": mark("How thick, how heavy"),
    "see": mark("What you and others may see"),
}

TURNED_TEXTS: dict[str, str] = {
    # what it is made of, as the shop calls it
    "design": "%(design)s",
    "material": "%(material)s",
    "coating": mark("coating on both sides: %(coating)s"),
    "coating-front": mark("coating in front: %(coating)s"),
    "coating-back": mark("coating behind: %(coating)s"),
    "coating-none": mark("no coating against reflections"),
    "tint": mark("tint: %(tint)s"),
    # our advice
    "ours": mark("We would choose this"),
    "ours-far": mark("We would choose this for far"),
    "ours-near": mark("We would choose this for near"),
    "ours-clear": mark("We would choose this as your clear pair"),
    "ours-tinted": mark("We would choose this as your tinted pair"),
    # what it must not be used for
    "not-for-driving-tint": mark("Never for driving"),
    "not-for-night-driving-tint": mark("Not for driving at dusk or at night"),
    "not-for-driving-design": mark("Not for driving, walking about or stairs"),
    "no-near": mark("Not for close print"),
    "glass-breaks": mark("Not for sport or work with tools: it can break into sharp pieces"),
    "not-tough": mark("Not made to take knocks"),
    # how thick, how heavy
    "edge": mark("up to %(thick_mm)s mm at the edge"),
    "middle": mark("up to %(thick_mm)s mm in the middle"),
    "thinnest": mark("the thinnest"),
    "as-thick": mark("as thick as %(others)s"),
    "thicker": mark("%(more_mm)s mm thicker than %(others)s"),
    "weight": mark("both lenses %(pair_g)s g"),
    "lightest": mark("both lenses %(pair_g)s g, the lightest"),
    # what you may see
    "second-not noticed": mark("At night you may never notice a second light beside a lamp."),
    "second-at the limit": mark("At night you may just see a second light %(place)s."),
    "second-only if looked for": mark("At night you may see a faint second light %(place)s, if you look for it."),
    "second-noticeable": mark("At night you may notice a second light %(place)s."),
    "second-plain": mark("At night you may plainly see a second light %(place)s."),
    "haze-seen": mark("At night you may see a soft haze round a lamp."),
    "haze-unseen": mark("At night you may never notice a haze round a lamp."),
    "spread": mark("At night you may see faint light spread over the lens."),
    "behind-seen": mark("You may see a lamp or window behind you in the lens."),
    "behind-brighter": mark("You may see a lamp or window behind you brightly in the lens."),
    "behind-fainter": mark(
        "You may see a lamp or window behind you in the lens, about %(fainter)s times fainter than in %(others)s."
    ),
    # what others may see
    "mirrored-most": mark("Others may see up to %(mirrored_percent)s %% of the light mirrored."),
    "mirrored-about": mark("Others may see about %(mirrored_percent)s %% of the light mirrored."),
    # for all
    "not-eye-protection": mark("None of these are safety glasses. For work, tools and sport, ask us for an eye guard."),
    "calculated": mark("These figures are calculated for your lenses. They are not a promise."),
}
