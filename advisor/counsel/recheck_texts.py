"""Everything a return visit may say: signs, complaints, quick tests, causes, remedies, reasons. Decided elsewhere.

The quick tests and what they tell are common practice, no source. "Less" is said of a remedy, never "gone".
"""

from collections.abc import Mapping
from typing import Literal

from advisor.counsel.phrases import mark
from advisor.counsel.sheet_texts import LINES

Answer = Literal["yes", "no"]

# The signs for today are the very lines of the wearer's sheet.
TODAY: dict[str, str] = {key: text for key, text in LINES.items() if key.startswith("today-")}
SOON: dict[str, str] = {
    "soon-glare": mark("night glare that is new or slowly grows"),
    "soon-rings": mark("rings round lights without pain"),
}
SIGNS: dict[str, str] = TODAY | SOON

COMPLAINTS: dict[str, str] = {
    "second-light": mark("a second light, double headlights"),
    "behind": mark("my own eye, lashes, things behind me"),
    "rings": mark("rings round lights"),
    "glare": mark("glare at night"),
    "edge-rings": mark("rings others see in my lens edge"),
    "fringes": mark("coloured fringes"),
    "smears": mark("never clean, smears, fog, scratched"),
    "crazed": mark("crazed, peeling"),
    "colours-differ": mark("the lenses have different colours"),
    "not-right": mark("floors slope, blurred, swimmy, things bigger or smaller, headaches, the old ones were better"),
    "steps": mark("trips on steps, unsure on stairs"),
    "near": mark("trouble with reading or the screen, a jump when looking down"),
    "near-double": mark("double when reading"),
    "fit": mark("slide, pinch, hurt, a loose lens, sore skin"),
    "dark-mirror": mark("my dark glasses mirror my face"),
    "black-screens": mark("screens go black"),
    "not-dark": mark("they do not go dark in the car"),
    "yellow": mark("everything looks yellow"),
}

TESTS: dict[str, str] = {
    "cover-eye": mark("Cover each eye in turn: is the second light, or the double, gone whichever eye is covered?"),
    "new": mark("Has it begun lately?"),
    "moves": mark("Tilt or slide the glasses a little: does the second light move with them?"),
    "car-only": mark("Is it seen only through the windscreen, never on foot?"),
    "pinhole": mark("Glasses off, through a pinhole: is it still there?"),
    "old-pair": mark("In the old pair: is it still there?"),
    "shade": mark("Shade the temple side with a hand: does it go?"),
    "rings-follow-edge": mark("Look from outside: do the rings follow the edge of the lens?"),
    "side-only": mark("Is it worse to the side and absent through the centre?"),
    "washed-clear": mark("Wash and dry them at the counter: are they clear now?"),
    "fog-only": mark("Is it only breath or steam, and soon over?"),
    "fine-web": mark("Under a lamp: a fine web all over?"),
    "edge-flakes": mark("Do flakes begin at the edge?"),
    "one-face-white": mark(
        "Mirror a white tube in all four faces: is one face plain white and brighter than its fellow?"
    ),
    "marks-off": mark("Mark the fitting points on the face: do they sit where they should not?"),
    "shade-behind": mark("Shade the lens from behind: does it go?"),
    "tilt-head": mark("Tilt the head to the side: does the screen come back?"),
}

CAUSES: dict[str, str] = {
    "wrong-as-made": mark("The glasses are not what was ordered"),
    "ahead-ghost": mark("Light mirrored twice inside the lens"),
    "bare-face": mark("A face that should be coated and is not"),
    "windscreen": mark("The windscreen of the car"),
    "eyes-not-together": mark("The eyes are not working together, unless prism, centring or powers are wrong"),
    "not-measured": mark("Prism, centring or powers that are not as ordered"),
    "eye-itself": mark("The eye itself"),
    "behind-back": mark("Light from behind, mirrored by the back of the lens"),
    "behind-front": mark("Light from behind, mirrored by the front of the lens"),
    "edge-rings": mark("Light from the edge of a minus lens"),
    "chromatic": mark("Colour spread of the lens away from its centre"),
    "soap-film": mark("A film of soap, cream or softener"),
    "top-layer-worn": mark("A worn top layer, or scratches from dry wiping"),
    "breath-fog": mark("Breath or steam on a cold lens"),
    "heat-stress": mark("Heat or stress in the coating"),
    "solvent": mark("Sprays or solvents on the coating"),
    "tight-rim": mark("A rim that presses on the lens"),
    "adhesion": mark("The coating has lost its hold"),
    "different-batch": mark("Two lenses coated in different runs"),
    "one-bare-face": mark("One face bare, or coated differently from its fellow"),
    "changed-curve": mark("Another front curve than the worn pair"),
    "changed-cylinder": mark("Another cylinder or axis than the worn pair"),
    "changed-power": mark("Another power than the worn pair"),
    "changed-size": mark("Things look larger or smaller than in the worn pair"),
    "changed-index": mark("A material with more colour spread than the worn pair"),
    "how-it-sits": mark("How the frame sits: tilt, distance, height"),
    "heights": mark("Fitting heights"),
    "wrong-design": mark("A design that is not made for this task"),
    "near-pd": mark("Centres that do not meet the eyes when reading"),
    "near-part-on-steps": mark("A design whose lower part is for near, looked through on steps"),
    "near-power": mark("The near power or its distance"),
    "near-imbalance": mark("The lenses pull apart up and down when looking down"),
    "frame-fit": mark("The fit of the frame"),
    "bare-back-tint": mark("A back that mirrors behind a dark tint"),
    "polariser": mark("The polarising lens against a polarised screen"),
    "windscreen-uv": mark("The windscreen takes the ultraviolet that darkens the lens"),
    "film-or-tint": mark("The colour of film or tint"),
}

REMEDIES: dict[str, str] = {
    "remake-as-ordered": mark("Remake as ordered before anything else, then look again."),
    "coat-both": mark("Both faces coated (%(coating)s): less of it, not none."),
    "coat-back": mark("The back coated (%(coating)s): less of it, not none."),
    "other-form": mark("Another form, front curve %(front_power_d)s D: less of it, not none."),
    "other-material": mark("Another material (%(material)s): less of it, not none."),
    "check-coating": mark(
        "Mirror a white tube in every face: is each coated as ordered? A bare face is the maker's to remake."
    ),
    "turn-desk": mark(
        "Turn the desk, so that a wall as bright as the screen stands behind instead of the window: free."
    ),
    "shade-light": mark("Draw a blind that passes a tenth of the light behind, or move the lamp: free."),
    "closer-fit": mark("A closer fit, by %(by_mm)s mm."),
    "explain": mark("Explain; no lens changes this."),
    "another-pair": mark("Another pair for this use."),
    "refer-eye": mark("An eye examination before any other lens."),
    "refer-eyes": mark("To an eye doctor, today if it is new; measure these glasses as well."),
    "measure-now": mark("Measure these glasses now; it takes minutes."),
    "head-down": mark("On steps look down with the head, not with the eyes alone."),
    "walking-pair": mark("A distance pair of its own for walking outdoors."),
    "ask-prescriber": mark("Ask the prescriber before anything is remade."),
    "matt-edge": mark("A matt or tinted edge first; polish can brighten the rings."),
    "rolled-edge": mark("A rolled edge."),
    "film-on-faces": mark("A film on both faces mirrors less of the edge back and forth."),
    "smaller-frame": mark("An eye size smaller by %(by_mm)s mm."),
    "thinner-material": mark("A thinner lens (%(material)s)."),
    "higher-abbe": mark("A material that spreads less colour (%(material)s)."),
    "clean-right": mark(
        "Wash here, then as the care sheet says: rinse, a drop of mild soap, soft cloth without softener."
    ),
    "top-layer": mark("When it is replaced: a coating with a water- and oil-repellent top (%(coating)s)."),
    "replace-same": mark("Replace; it cannot be repaired. Guarantee of this coating: %(warranty_months)s months."),
    "loosen-rim": mark("Loosen the rim before another lens goes in."),
    "remake-as-pair": mark("Remake as a pair, coated in one run: a better match, not a promise."),
    "keep-curve": mark("Keep the front curve of the worn pair, %(front_power_d)s D."),
    "adjust-fit": mark("Pads, sides, tilt, distance, height, before anything is remade."),
    "adjust-heights": mark("Adjust the frame until the marks sit right; remake only if that is not enough."),
    "near-pair": mark("A pair for near of its own; beside it contact lenses or slab-off are the prescriber's to name."),
    "other-design": mark("Another design or a second pair for this task."),
}

# Figures a remedy changes: name, unit.
FIGURES: Mapping[str, tuple[str, str]] = {
    "visibility_level": (mark("visibility level"), ""),
    "verdict_step": (mark("verdict"), ""),
    "second_image_percent": (mark("strength of the second image"), "%"),
    "behind_contrast_percent": (mark("light from behind, of what is looked at"), "%"),
    "back_reflectance_percent": (mark("light mirrored by the back"), "%"),
    "edge_thickest_mm": (mark("thickest edge"), "mm"),
    "colour_fringe_prism_d": (mark("colour fringe at the side"), "Δ"),
    "match_percent": (mark("pairs that match"), "%"),
    "magnification_change_percent": (mark("change of size against the worn pair"), "%"),
    "weight_g": (mark("weight of the lens"), "g"),
    "imbalance_prism_d": (mark("difference up and down when reading"), "Δ"),
    "axis_off_deg": (mark("axis off"), "°"),
    "power_off_d": (mark("power off"), "D"),
    "cylinder_off_d": (mark("cylinder off"), "D"),
    "add_off_d": (mark("add off"), "D"),
    "prism_off_prism_d": (mark("prism off"), "Δ"),
    "place_off_mm": (mark("place off"), "mm"),
    "thickness_off_mm": (mark("centre thickness off"), "mm"),
}

WHY: dict[str, str] = {
    "told": mark("Quick test: %(question)s %(answer)s."),
    "ghost": mark("Worked out for this lens: %(ghost)s. Visibility level %(visibility_level)s in “%(scene)s”."),
    "ghost-spread": mark("Worked out for this lens: spread over the lens, no second light."),
    "no-scene": mark("The range holds no scene of this kind, so nothing could be worked out."),
    "prism": mark("Prescribed prism throws the image %(separation_deg)s degrees from the lamp, clear of its veil."),
    "face-bare": mark(
        "With one face bare it would be: %(ghost)s. Visibility level %(visibility_level)s in “%(scene)s”."
    ),
    "behind": mark(
        "Worked out: light from behind shows at %(behind_contrast_percent)s %% of what is looked at, in “%(scene)s”."
    ),
    "other-face-coated": mark("The other face is coated; that alone makes this image a little stronger, not weaker."),
    "edge": mark("Thickest edge %(edge_thickest_mm)s mm in a minus lens."),
    "not-minus": mark("Not a minus lens: its edge is thin."),
    "fringe": mark(
        "Colour fringe %(colour_fringe_prism_d)s Δ at the side; 0.1 is the customary notice level, from memory."
    ),
    "life": mark("Daily life: %(habit)s, %(answer)s."),
    "no-repellent": mark("The coating has no repellent top that is known."),
    "repellent": mark("The coating has a repellent top."),
    "no-film": mark("There is no coating on this lens to lose."),
    "match": mark(
        "By the stated spread of coatings as made, %(match_percent)s %% of pairs coated in different runs match."
    ),
    "no-layers": mark("The layers of this coating are not known, so its match could not be worked out."),
    "curve": mark("Front curve now %(front_power_d)s D, worn pair %(worn_d)s D."),
    "cylinder": mark("The cylinder changed by %(changed_by_d)s D, turn of the axis included."),
    "power": mark("Sphere with half the cylinder changed by up to %(changed_by_d)s D."),
    "size": mark("Things look %(magnification_change_percent)s %% larger or smaller than in the worn pair."),
    "abbe": mark("Abbe number now %(abbe)s, worn pair %(worn_abbe)s."),
    "worn-unknown": mark("The worn pair is not on file: measure it."),
    "sits": mark("For half of the returns the first answer is to verify and adjust."),
    "height-low": mark("Fitting height %(height_mm)s mm; this design needs %(least_height_mm)s mm."),
    "design-near": mark("This design is not made for reading and the prescription has an add."),
    "design-screen": mark("This design has no part for the screen."),
    "near-part": mark("Looking down at a step goes through the part for near, where the step is blurred."),
    "near-only": mark("This lens is for near alone: a step is blurred in it."),
    "near-pd": mark(
        "Reading, the eyes look %(off_mm)s mm further in than the centres, both together; that makes %(near_prism_d)s Δ sideways."
    ),
    "near-part-in": mark("The part for near is set in by the maker: look whether it meets this wearer's near PD."),
    "pd-unknown": mark("The PD on file is a default, not a measurement."),
    "prism-unmeasured": mark("Prism is prescribed and nothing was measured; a wrong prism alone doubles what is seen."),
    "has-add": mark("Add %(add_d)s D for %(working_distance_cm)s cm."),
    "imbalance": mark(
        "The lenses differ by %(imbalance_prism_d)s prism dioptres up and down, 10 mm below the centres."
    ),
    "weight": mark("Weight of the heavier lens %(weight_g)s g."),
    "tint": mark("The lens passes %(luminous_percent)s %% and its back mirrors %(back_percent)s %%."),
    "polarising": mark("The tint is polarising."),
    "photochromic": mark("The tint is photochromic."),
    "no-such-tint": mark("The lens on file has no such tint."),
    "hue": mark("Film: %(hue)s. Light passed: %(luminous_percent)s %%."),
    "off": mark("%(figure)s, %(eye)s: ordered %(ordered)s, measured %(measured)s, allowed %(tolerance)s either way."),
}

NOTES: dict[str, str] = {
    "ask-signs-first": mark("Ask the signs first; until every one is answered no lens is offered."),
    "do-not-drive": mark("No driving until an eye doctor has looked."),
    "no-lens-before": mark("No lens is offered before an eye examination."),
    "not-understood": mark(
        "No complaint is understood from these words: ask the signs, then say it in one of these: %(complaints)s."
    ),
    "heard-but-no": mark("Heard in the words, answered no: %(signs)s."),
    "falls": mark("Falls come first: on steps the head down and a hand on the rail until this is mended."),
    "lens-cannot-explain": mark(
        "The lens as ordered cannot explain this, unless prism, centring or powers are wrong. Refer, and offer no lens."
    ),
    "cover-eye-first": mark(
        "Cover each eye in turn now: a second light, or double, that is new and goes with either eye covered is for today."
    ),
    "measure-first": mark("Measure now: power, axis, prism, PDs and heights, of these and of the old pair."),
    "remake-first": mark("Wrong as made comes first: no other lens is offered until these are right."),
    "never-gone": mark("A remedy makes it less. Never promise that it is gone."),
    "prism-may-stay": mark(
        "With prescribed prism the image lies clear of the lamp and may stay; the prism is the prescriber's alone."
    ),
    "old-pair-same": mark("The old pair makes the same ghost, so that it is seen there too does not mean the eye."),
    "old-pair-unknown": mark(
        "The old pair is not on file; whether it makes a ghost of its own could not be worked out."
    ),
    "tolerances": mark("Tolerances %(source)s."),
}
