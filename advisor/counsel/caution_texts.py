"""Every caution: its key, its words for the optician and for the wearer's sheet, its rule and its source.

A caution always defers to local rules and licensed practice. The wearer's words are plain and short; where they are
empty the caution is for the optician alone. When each applies is decided in ``cautions.py``.
"""

import re
from collections.abc import Collection
from dataclasses import dataclass

from advisor.counsel.phrases import mark

PLACEHOLDER = re.compile(r"%\((\w+)\)s")
PRACTICE = mark("common practice, no source")


@dataclass(frozen=True)
class CautionText:
    """The words of one caution."""

    text: str
    sheet: str
    rule: str
    source: str
    other_texts: tuple[str, ...] = ()

    def text_for(self, figures: Collection[str]) -> str:
        """Return the wording whose figures these are: the text, or one of the others where some of them are not told."""
        return next((t for t in self.other_texts if set(PLACEHOLDER.findall(t)) == set(figures)), self.text)


CAUTION_TEXTS: dict[str, CautionText] = {
    "not-eye-protection": CautionText(
        mark(
            "An ordinary spectacle lens, coated or not, is not eye protection. For work, education and do-it-yourself use "
            "protectors, for sport sports protectors; elsewhere ask the local rules."
        ),
        mark("These are not safety glasses. For work, tools and sport, ask us for the right eye guard."),
        mark(
            "ANSI Z87.1 or the ISO 16321 series (EN 166 still in use); sport: ASTM F803, ISO 18527; US: 21 CFR 801.410"
        ),
        "21 CFR 801.410; ISO 16321-1:2022; ANSI Z87.1; ISO 18527",
    ),
    "coating-adds-no-strength": CautionText(
        mark("A coating adds no strength: the energy to break coated hard resin was 63 %% lower in a published test."),
        mark("The coating does not make the lens stronger."),
        mark("Never sell a coating as a safety feature."),
        "Corzine et al. 1996, Optometry and Vision Science 73:8",
    ),
    "child": CautionText(
        mark(
            "Child: an impact material first, with a centre of 2.0 mm or more. If it is declined, record who declined it."
        ),
        mark("A child's glasses take knocks. A tough lens comes first."),
        mark("Tough material, centre 2.0 mm or more; a refusal is recorded."),
        PRACTICE,
    ),
    "one-eye": CautionText(
        mark(
            "One good eye (the weaker corrected to worse than 6/12, 20/40): an impact material first, with a centre of "
            "2.0 mm or more. If it is declined, record who declined it."
        ),
        mark("You rely on one eye. A tough lens comes first. Wear an eye guard for work with tools and for sport."),
        mark("Tough material, centre 2.0 mm or more; a refusal is recorded."),
        PRACTICE,
    ),
    "impact": CautionText(
        mark("Knocks are frequent in this life: an impact material first, with a centre of 2.0 mm or more."),
        mark("Things may hit your glasses. A tough lens comes first. Wear an eye guard for risky work."),
        mark("Tough material, centre 2.0 mm or more; a refusal is recorded."),
        PRACTICE,
    ),
    "glass-breaks": CautionText(
        mark(
            "Glass breaks into sharp pieces: not for children, one good eye, sport or work, and never drilled. In the US only "
            "if the finished lens passes the drop-ball test."
        ),
        mark("Glass lenses can break into sharp pieces. Do not wear them for sport or work with tools."),
        mark("No glass where a blow is likely."),
        "21 CFR 801.410",
    ),
    "not-for-night-driving-tint": CautionText(
        mark(
            "The finished lens passes %(luminous_percent)s %% of the light, below 75 %%: not for driving at twilight or at night."
        ),
        mark("These lenses take away some light. Do not drive in them at dusk or at night."),
        mark(
            "Finished lens below 75 %: not for driving at twilight or at night; judge the finished lens, local rules decide."
        ),
        "ISO 12312-1 as quoted in public guidance",
    ),
    "not-for-driving-tint": CautionText(
        mark(
            "At its darkest the finished lens passes %(luminous_percent)s %% of the light, below 8 %%: never for driving."
        ),
        mark("These lenses are very dark. Never drive in them."),
        mark("Finished lens below 8 %: not for driving at any time."),
        "ISO 12312-1 as quoted in public guidance",
    ),
    "tint-colour-unknown": CautionText(
        mark(
            "If the tint is a strong pink, blue, red, yellow or orange, the supplier must confirm that it may be used on the road."
        ),
        "",
        mark("The supplier confirms road use; the program gives no verdict on signal colours."),
        PRACTICE,
    ),
    "uv-not-darkness": CautionText(
        mark("Dark is not UV cover: this material (cut-off %(uv_cut_nm)s nm) needs a stated UV filter in the tint."),
        mark("A dark lens is not always a UV filter. Ask us what yours stops."),
        mark("State a UV filter for hard resin and glass."),
        PRACTICE,
    ),
    "night-tint-no-benefit": CautionText(
        mark("A tint worn at night, yellow ones too, only takes light away."),
        mark("A tint does not help you see at night. It takes light away."),
        mark("Advise no tint for night driving."),
        PRACTICE,
    ),
    "photochromic-windscreen": CautionText(
        mark(
            "Light-reacting lenses hardly darken behind most windscreens, clear slowly, go darker in cold and weaker in heat, "
            "and are replaced as a pair. Judge the clear state for the night."
        ),
        mark("These lenses hardly darken inside a car. They clear slowly, and heat makes them weaker."),
        mark("Say so before the order."),
        PRACTICE,
    ),
    "polarising": CautionText(
        mark(
            "A polarising lens may black out dashboards and phones, shows stress marks in windscreens and can hide ice: try it "
            "with the wearer's own dashboard."
        ),
        mark("Some screens and dashboards may look black. Ice can be hard to see."),
        mark("Try it with the wearer's own dashboard and phone."),
        PRACTICE,
    ),
    "not-for-driving-design": CautionText(
        mark("Made for near or for the screen alone: not for driving, walking about or stairs."),
        mark("These are near glasses. Do not drive, walk about or use stairs in them."),
        mark("No driving, walking about or stairs."),
        PRACTICE,
    ),
    "no-near": CautionText(
        mark("The prescription has an add and this lens has none: it will not be clear close up."),
        mark("These glasses are for far away. Close print will not be clear in them."),
        mark("Say so, and propose a second pair where near work matters."),
        PRACTICE,
    ),
    "near-vertical-imbalance": CautionText(
        mark(
            "The lenses differ by %(imbalance_prism_d)s prism dioptres up and down at the reading point: near pair, contact "
            "lenses or slab-off; ask the prescriber."
        ),
        "",
        mark("From 1.0 prism dioptre 10 mm below centre for readers, first multifocals and one-eye changes."),
        PRACTICE,
    ),
    "fitting-height-too-low": CautionText(
        mark("The fitting height of %(height_mm)s mm is below the %(least_height_mm)s mm this design needs."),
        "",
        mark("The design's least fitting height."),
        PRACTICE,
    ),
    "decentred-outwards": CautionText(
        mark(
            "The PD is wider than the frame's centres: the lens is moved outwards by %(outward_mm)s mm. Choose a larger frame."
        ),
        "",
        mark("Optical centres are not moved outwards without need."),
        PRACTICE,
    ),
    "drilled-caution": CautionText(
        mark("Drilled rim: thick edges strain the mounts, and a full rim holds better. Never in the ultrasonic bath."),
        mark("Rimless glasses bend easily. Use two hands, and have the screws checked."),
        mark("Advise a full rim where knocks are likely."),
        PRACTICE,
    ),
    "heat-soft-material": CautionText(
        mark("This material softens with heat: no frame warmer with the lenses in, not for drilling."),
        mark("This lens does not like heat. Keep it out of hot cars and saunas."),
        mark("No heat above what the supplier states."),
        PRACTICE,
    ),
    "solvent-soft-material": CautionText(
        mark(
            "Polycarbonate crazes where solvents touch it: no acetone, no nail varnish remover, no sprays on the lens."
        ),
        mark("Keep solvents and sprays off these lenses. They can cause fine cracks."),
        mark("Where solvents are about, a tough material that bears them first; acetone never on polycarbonate."),
        PRACTICE,
    ),
    "no-power": CautionText(
        mark("No power is written for either eye: ask whether a prescription was left out."),
        "",
        mark("Lenses without power are ordered only where that is meant."),
        PRACTICE,
    ),
    "vertex-missing": CautionText(
        mark("A power of 5.00 or more without a tested vertex distance: ask the prescriber."),
        "",
        mark("From 5.00 D the vertex distance is part of the prescription."),
        PRACTICE,
    ),
    "vertex-differs": CautionText(
        mark("Fitted at %(fitted_mm)s mm, tested at %(tested_mm)s mm: the compensated power is shown on the order."),
        "",
        mark("Move the power to the fitted vertex distance."),
        PRACTICE,
    ),
    "rx-old": CautionText(
        mark("The prescription was written over two years ago: ask for a new examination."),
        mark("Your eye test is over two years old. A new one is wise."),
        mark("Over two years: ask; local rules may be stricter."),
        PRACTICE,
    ),
    "unequal-add": CautionText(
        mark("The adds of the two eyes differ: ask the prescriber."),
        "",
        mark("Adds are alike unless the prescriber says otherwise."),
        PRACTICE,
    ),
    "add-for-age": CautionText(
        mark("An add under 35, or none over 45: ask whether it is meant."),
        "",
        mark("Ask the wearer and the prescriber."),
        PRACTICE,
    ),
    "large-change": CautionText(
        mark(
            "The power changes by up to %(changed_by_d)s D and the axis by up to %(turn_deg)s degrees against the worn pair."
        ),
        mark("Your new lenses are quite different from the old ones. Floors and steps may look odd at first."),
        mark("Over 1.00 D or 10 degrees of axis; over 0.75 D for older or unsteady wearers."),
        PRACTICE,
        other_texts=(
            mark("The power changes by up to %(changed_by_d)s D against the worn pair."),
            mark("The axis turns by up to %(turn_deg)s degrees against the worn pair."),
        ),
    ),
    "restricted-supply": CautionText(
        mark("Supply to a person under 16 or registered sight-impaired is restricted to registered staff in the UK."),
        "",
        mark("Local law decides who may supply."),
        "Opticians Act 1989 (from memory)",
    ),
    "steps": CautionText(
        mark(
            "%(why)s: on steps look down with the head, not with the eyes alone; a distance pair for those who walk outdoors a lot."
        ),
        mark("On steps, move your head down to look. Take extra care outdoors."),
        mark("A single-vision distance pair helps those who walk outdoors a lot."),
        "BMJ 2010;340:c2265",
    ),
    "not-promise-none": CautionText(
        mark("A coating takes away most reflections, not all; glare made inside the eye stays."),
        mark("The coating takes away most reflections, not all. A faint colour stays."),
        mark("Never promise a lens without reflections."),
        PRACTICE,
    ),
    "new-glare-exam": CautionText(
        mark("New or worse glare at night: an eye examination before money is spent on a coating."),
        mark("Your night glare is new. Please have your eyes tested soon."),
        mark("Examination first."),
        PRACTICE,
    ),
    "blue-film-no-relief": CautionText(
        mark(
            "This film turns away %(blue_percent)s %% of the light from 400 to 440 nm; trials found no relief of eye strain."
        ),
        mark("The coating reflects some blue light. Trials found no relief for tired eyes."),
        mark("Claim no relief."),
        "Singh et al. 2023, Cochrane Database of Systematic Reviews",
    ),
}
