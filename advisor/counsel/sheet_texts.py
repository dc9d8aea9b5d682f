"""Every line a wearer's sheet may hold: plain words, short sentences, "you may" and never "you will"."""

from advisor.counsel.phrases import mark

TITLE = mark("Your new glasses")
CARE_TITLE = mark("How to care for your glasses")

# What the bars of the drawing stand for.
BAR_BARE = mark("Mirrored away by bare lenses")
BAR_HARD_COAT = mark("Mirrored away with a hard coat only")
BAR_WITH = mark("Mirrored away by yours, at most")
BAR_THROUGH = mark("Let through by your lenses")
BAR_MIRRORED = mark("Mirrored away by your lenses")

OWN_ITEM = mark("as agreed")

# In the order of the page.
HEADINGS: dict[str, str] = {
    "for": mark("What these glasses are for"),
    "not-for": mark("What they are not for"),
    "notes": mark("Please note"),
    "chosen": mark("What you chose"),
    "why": mark("What that means for you"),
    "coating": mark("The coating, and what stays"),
    "first-days": mark("The first days"),
    "do": mark("How to clean and keep them"),
    "dont": mark("What harms them"),
    "come-back": mark("When to come back to us"),
    "today": mark("See an eye doctor today for any of these"),
}

LINES: dict[str, str] = {
    # what they are for
    "for-all": mark("They are made for all distances."),
    "for-far": mark("They are made for looking far away."),
    "for-near": mark("They are made for reading and near work."),
    "for-desk": mark("They are made for the desk and the screen."),
    "for-far-and-near-line": mark(
        "They are made for far and near. Look ahead for far. Look down through the lower part to read."
    ),
    "for-far-to-near": mark(
        "They are made for far, screen and near. Look ahead for far. Lower your eyes, not your head, to read."
    ),
    # when to wear them
    "wear-all-day": mark("You can wear them all day."),
    "wear-far": mark("Wear them when you want to see far away."),
    "wear-near": mark("Put them on to read. Take them off before you get up."),
    "wear-desk": mark("Put them on at the desk. Take them off before you get up."),
    "wear-bright": mark("Wear them in bright light. Use another pair indoors and after dark."),
    # what was chosen
    "chosen-design": mark("Kind of lens: %(design)s"),
    "chosen-lens": mark("Material: %(material)s"),
    "chosen-coating": mark("Coating on both sides: %(coating)s"),
    "chosen-coating-front": mark("Front side: %(coating)s"),
    "chosen-coating-back": mark("Side next to the eye: %(coating)s"),
    "chosen-tint": mark("Tint: %(tint)s"),
    "chosen-price": mark("Price of the pair of lenses: %(price)s"),
    "chosen-warranty": mark("Warranty on the coating, in months: %(warranty_months)s"),
    "chosen-by": mark("These glasses were supplied by: %(supplied_by)s"),
    # why: computed figures
    "mirrors-against-bare": mark(
        "Your lenses mirror away %(low_percent)s to %(high_percent)s %% of the light. Bare lenses mirror away %(bare_percent)s %%."
    ),
    "mirrors-against-hard-coat": mark(
        "Your lenses mirror away %(low_percent)s to %(high_percent)s %% of the light. With a hard coat only it is %(bare_percent)s %%."
    ),
    "mirrors-stated": mark(
        "Your lenses mirror away about %(mirrored_percent)s %% of the light, by the maker's figure. Without the coating it is %(bare_percent)s %%."
    ),
    "mirrors-uncoated": mark("These lenses mirror away about %(mirrored_percent)s %% of the light."),
    "passes": mark("The tinted lens lets about %(luminous_percent)s %% of the light through."),
    "second-image": mark(
        "Light mirrored twice inside a lens makes a second image: here about 1 part in %(parts)s of the light."
    ),
    "second-image-faint": mark(
        "Light mirrored twice inside a lens makes a second image. Here it has less than 1 part in 10,000 of the light."
    ),
    "second-image-coated": mark(
        "Light mirrored twice inside a lens makes a second image. Yours has at most 1 part in %(parts)s of the light, not 1 in %(bare_parts)s."
    ),
    "second-image-coated-faint": mark(
        "Light mirrored twice inside a lens makes a second image. Yours has less than 1 part in 10,000 of the light, not 1 in %(bare_parts)s."
    ),
    # ghosts: two sentences at most
    "may-see-second": mark(
        "At night you may see a second, fainter light beside a lamp. It moves when you move your glasses."
    ),
    "may-see-haze": mark("At night you may see a soft haze round a lamp."),
    "may-not-see-second": mark("You may never notice the second image of a lamp in these lenses."),
    "may-see-behind": mark("You may see lamps or windows behind you in the lens. Turn your seat or shade the lamp."),
    # what a coating does, and what stays
    "coating-does": mark("It lets more light through. Others see your eyes better."),
    "coating-does-tinted": mark("It takes away most light mirrored off the back. Others see less glare on the front."),
    "coating-does-not": mark("It does not stop all reflections. It does not make the lens stronger."),
    "coating-glare": mark("Glare that starts inside the eye stays."),
    "coating-smears": mark(
        "Smears show more on a coated lens. It is no dirtier than another lens. No reflection hides the smears."
    ),
    "coating-none": mark("These lenses have no coating against reflections. You may see yourself or a window in them."),
    "coating-colour": mark("A faint %(hue)s colour stays on the lens. That is normal."),
    "coating-colour-varies": mark("A faint colour stays on the lens. It differs from pair to pair."),
    # first days
    "first-wear": mark("Wear them for a few hours on the first day, then longer."),
    "first-size": mark("Things may look a little bigger, smaller or bent at first."),
    "first-power": mark(
        "The power is not the same as before. Floors and steps may look odd at first. Take care on stairs."
    ),
    "first-axis": mark("The lenses are set at a new angle. Floors and walls may seem to slope at first."),
    "first-bigger": mark("Things may look about %(size_percent)s %% bigger than in your old pair."),
    "first-smaller": mark("Things may look about %(size_percent)s %% smaller than in your old pair."),
    "first-same": mark("They are much like your old pair. Things may look a little different at first."),
    "first-of-kind": mark("This is your first pair for far and near. Start with short spells."),
    "first-multifocal": mark("Turn your head to look at the side. Practise with them while you sit."),
    "first-drive": mark("Do not drive or cycle until you see clearly and feel steady in them."),
    "first-keep-old": mark("Keep your old pair as a spare."),
    # coming back
    "back-date": mark("Please come back around %(day)s. We check how they sit, and we adjust them for free."),
    "back-date-child": mark(
        "Please have the fit checked around %(day)s, and then every 3 months. We adjust them for free."
    ),
    "back-fit": mark("They slide, pinch or hurt. We adjust them for free at any time."),
    "back-unclear": mark("You do not see clearly in them. Come back at once."),
    "back-sick": mark("You still feel sick or get headaches after some days."),
    "back-second": mark("You see a second light beside a lamp, or a reflection that bothers you."),
    "back-damage": mark("The lens is loose, scratched, peeling or full of fine cracks."),
    "back-soon": mark(
        "Night glare slowly grows, or you see rings round lights without pain. Have your eyes tested soon."
    ),
    # today
    "today-loss": mark("sudden loss of sight, or a curtain or shadow"),
    "today-flashes": mark("new flashes or new floating spots"),
    "today-double": mark("sudden double sight (do not drive)"),
    "today-red": mark("a red eye that hurts"),
    "today-rings": mark("rings round lights with pain or sickness"),
    "today-headache": mark("a new headache with a sore scalp or jaw, if you are over 50"),
    "today-splash": mark("a splash of a chemical (rinse with water at once) or a blow to the eye"),
    "today-bent": mark("straight lines that suddenly look bent"),
}
