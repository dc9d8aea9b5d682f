"""From arrays to the answer's plain content, which the one model of ``comparison.py`` then checks."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.cautions import Applied
from advisor.counsel.faces import residual_colour
from advisor.counsel.form import SMALLER_BY_MM, LensForms
from advisor.counsel.ghosts import GhostFigures
from advisor.counsel.laid_out import NOTE_TEXTS, REFUSAL_TEXTS, Laid
from advisor.counsel.light import DAYLIGHT, Light, as_made_spreads, as_made_whole, estimated_ranges, made_strengths
from advisor.counsel.names import called, coating_name, material_name, tint_name
from advisor.counsel.phrases import Figure, Phrase, Translator, mark, say
from advisor.counsel.prescription import EYES
from advisor.counsel.spectra import tint_axes
from advisor.counsel.stock_items import Scene
from advisor.optics.ghost_scene import Ghosts, GhostView
from advisor.optics.ghost_strength import PATHS
from advisor.optics.observer import observer_contrast
from advisor.optics.visibility import VERDICTS

Content = dict[str, Any]

# What others see: a window mirrored in the front against the face behind it; modelling choices for a room by day.
WINDOW_CD_M2 = 3000.0
FACE_CD_M2 = 60.0


def number(value: float) -> float | None:
    """Return a plain number, or None for one that is not finite; the answer never holds NaN or Infinity."""
    return float(value) if math.isfinite(value) else None


def notice(phrase: Phrase, texts: Mapping[str, str], translator: Translator) -> Content:
    """Return a phrase as the answer writes it: code, text and figures."""
    return {"code": phrase.code, "text": say(phrase, texts, translator), "figures": dict(phrase.figures)}


def caution(applied: Applied, translator: Translator) -> Content:
    """Return a caution as the answer writes it, without the options it applies to."""
    words = CAUTION_TEXTS[applied.key]
    return {
        "key": applied.key,
        "text": say(Phrase(applied.key, applied.figures), {applied.key: words.text_for(applied.figures)}, translator),
        "rule": translator.gettext(words.rule),
        "source": translator.gettext(words.source),
        "figures": dict(applied.figures),
    }


def label_of(option: Laid, translator: Translator) -> str:
    """Return a short name of an option: material, coatings and tint, as the shop calls them."""
    front, back = (coating_name(coating, translator) for coating in (option.front, option.back))
    words = [material_name(option.material, translator)]
    words.append(
        front
        if front == back
        else translator.gettext(mark("%(front)s in front, %(back)s behind")) % {"front": front, "back": back}
    )
    if option.tint is not None:
        words.append(tint_name(option.tint, translator))
    if option.design.kind != "single-vision":
        words.insert(0, called(option.design, translator))
    return ", ".join(words)


@dataclass(frozen=True)
class Figures:
    """The arrays that an answer is read from, all over the same options."""

    light: Light
    uncoated: Light
    forms: LensForms
    ghosts: GhostFigures
    scenes: Sequence[Scene]
    size_change_percent: NDArray[np.float64]


def option_answer(option: Laid, *, figures: Figures, translator: Translator) -> Content:
    """Return one option; a refused one keeps its place and has no eyes."""
    refused = [
        {
            "code": reason.phrase.code,
            "text": say(reason.phrase, REFUSAL_TEXTS, translator),
            "nearest": None if reason.nearest is None else dict(reason.nearest),
        }
        for reason in option.refused
    ]
    tint: Figure = None if option.tint is None else option.tint.key
    if tint == "in-place" and option.tint is not None:
        tint = option.tint.luminous_transmittance
    content: Content = {
        "index": option.index,
        "label": label_of(option, translator),
        "design": option.design.key,
        "material": option.material.key,
        "coating": {"front": option.front.key, "back": option.back.key},
        "tint": tint,
        "price": option.price,
        "refused": refused,
        "notes": [notice(phrase, NOTE_TEXTS, translator) for phrase in option.notes],
    }
    return content if refused else content | eyes_answer(option, figures=figures)


def eyes_answer(option: Laid, *, figures: Figures, with_light: bool = True) -> Content:
    """Return the figures of both lenses; of form alone where nothing is known of what the faces mirror."""
    forms: Content = {eye: _form(option, e, figures=figures) for e, eye in enumerate(EYES)}
    if not with_light:
        return forms
    both_eyes = _light(option, figures=figures)
    ghosts = {eye: {"ghosts": _ghosts(option, e, figures=figures)} for e, eye in enumerate(EYES)}
    return {eye: forms[eye] | both_eyes | ghosts[eye] for eye in EYES}


def _second_image(option: Laid, *, light: Light) -> Content:
    """Return the strength of the twice-mirrored image under D65, as designed and as made."""
    axes = tint_axes(option, dark=False) or (1.0, 1.0)
    points = made_strengths(option.front_face, option.back_face, axes, DAYLIGHT)
    return {
        "strength": float(light.second_image[option.index]),
        "as_made": None if points is None else points[:, PATHS.index("ahead-inner")].tolist(),
    }


def _uncoated(option: Laid, *, uncoated: Light) -> Content:
    """Return what the same lens would mirror without a film."""
    k = option.index
    return {
        "hard_coat_only": option.material.hard_coat == "always",
        "first_pass_loss": float(uncoated.first_pass_loss[k]),
        "whole_lens": float(uncoated.whole_lens[k]),
        "second_image": float(uncoated.second_image[k]),
    }


def _form(option: Laid, e: int, *, figures: Figures) -> Content:
    """Return the figures of form and weight of one lens."""
    k, forms, shape = option.index, figures.forms, figures.forms.shape
    fits = bool(forms.smaller_fits[k, e])
    change = number(figures.size_change_percent[k, e])
    known = {} if change is None else {"magnification_change_percent": change}
    return known | {
        "front_power_d": number(shape.front_power_d[k, e]),
        "back_power_d": [number(power) for power in shape.back_power_d[k, e]],
        "centre_mm": number(shape.centre_mm[k, e]),
        "edge_thickest_mm": number(shape.thickest_mm[k, e]),
        "edge_thinnest_mm": number(shape.thinnest_mm[k, e]),
        "edge_thickest_at": place(shape.thickest_deg[k, e]),
        "edge_thinnest_at": place(shape.thinnest_deg[k, e]),
        "weight_g": number(forms.weight_g[k, e]),
        "blank_mm": number(forms.blank_mm[k, e]),
        "colour_fringe_prism_d": number(forms.fringe_prism_d[k, e]),
        "colour_fringe_rim_prism_d": number(forms.rim_fringe_prism_d[k, e]),
        "magnification_percent": number(forms.magnification_percent[k, e]),
        "smaller_frame": {
            "by_mm": SMALLER_BY_MM,
            "edge_thickest_mm": number(forms.smaller_thickest_mm[k, e]) if fits else None,
            "weight_g": number(forms.smaller_weight_g[k, e]) if fits else None,
        },
    }


PLACE_WORDS = ("nose", "nose up", "up", "temple up", "temple", "temple down", "down", "nose down")


def place(local_deg: float) -> Content:
    """Return a place on the rim: degrees from the nose side, upwards first, and a word."""
    angle = float(local_deg) % 360.0
    return {"angle_deg": angle, "word": PLACE_WORDS[round(angle / 45.0) % 8]}


def _light(option: Laid, *, figures: Figures) -> Content:
    """Return the figures of light; both lenses of a pair have the same faces."""
    k, light = option.index, figures.light
    fronts, backs, both = as_made_spreads(option)
    whole = as_made_whole(option)
    front, back = option.front_face, option.back_face
    content: Content = {
        "luminous_reflectance": {
            "front": float(light.front[k]),
            "back": float(light.back[k]),
            "first_pass_loss": float(light.first_pass_loss[k]),
            "whole_lens": float(light.whole_lens[k]),
            "as_made": {
                name: None if points is None else points.tolist()
                for name, points in (
                    ("front", fronts),
                    ("back", backs),
                    ("first_pass_loss", both),
                    ("whole_lens", whole),
                )
            },
            "estimated": front.is_estimated or back.is_estimated,
        },
        "second_image": _second_image(option, light=light),
        "uncoated": _uncoated(option, uncoated=figures.uncoated),
        "luminous_transmittance": float(light.transmittance[k]),
        "observer_contrast": number(
            observer_contrast(
                light.whole_lens[k],
                transmittance=max(float(light.transmittance[k]), 1e-9),
                window_luminance_cd_m2=WINDOW_CD_M2,
                face_luminance_cd_m2=FACE_CD_M2,
            ).item()
        ),
        "residual_colour": {name: residual_colour(face) for name, face in (("front", front), ("back", back))},
    }
    if option.tint is not None and option.tint.luminous_transmittance_dark is not None:
        content["luminous_transmittance_dark"] = float(light.transmittance_dark[k])
    return content


def _ghosts(option: Laid, e: int, *, figures: Figures) -> list[Content]:
    """Return the ghosts of the paths that light of each scene can take."""
    ranges = estimated_ranges(option, figures.scenes)
    k, found = option.index, []
    strengths, least, greatest = (
        part[k].tolist()
        for part in (figures.light.strengths, figures.ghosts.least_verdict, figures.ghosts.greatest_verdict)
    )
    seen = _listed(figures.ghosts.seen, k, e)
    for s, scene in enumerate(figures.scenes):
        if not option.is_met_in(scene):
            continue
        for p, path in enumerate(PATHS):
            if not seen["applies"][s][p]:
                continue
            ghost: Content = {"path": path, "scene": scene.key, "strength": strengths[s][p]}
            if ranges is not None:
                ghost["strength_range"] = ranges[:, s, p].tolist()
            ghost |= _seen(seen, s, p, behind=scene.where == "behind")
            ghost["verdict_range"] = [VERDICTS[least[e][s][p]], VERDICTS[greatest[e][s][p]]]
            found.append(ghost)
    return found


def _listed(part: Ghosts | GhostView, k: int, e: int) -> Content:
    """Return the ghosts of one lens as plain lists (scene, path): reading them one by one from arrays is slow."""
    values = {name: getattr(part, name) for name in part.__dataclass_fields__}
    return {
        name: _listed(value, k, e) if isinstance(value, GhostView) else value[k, e].tolist()
        for name, value in values.items()
    }


def _seen(seen: Content, s: int, p: int, *, behind: bool) -> Content:
    """Return where one ghost lies and whether it is seen, relaxed and accommodated."""
    spread, relaxed = seen["spread"][s][p], seen["relaxed"]
    return {
        "vergence_d": seen["vergence_d"][s][p],
        "pupil_mm": seen["pupil_mm"][s][p],
        "separation_deg": None if behind or spread else seen["separation_deg"][s][p],
        "spread": spread,
        "background_cd_m2": seen["background_cd_m2"][s][p],
        "contrast": relaxed["contrast"][s][p],
        "haze": relaxed["haze"][s][p],
        "past_range": seen["past_range"][s][p],
        "accommodated": _view(seen["accommodated"], s, p),
        **_view(relaxed, s, p),
    }


def _view(view: Content, s: int, p: int) -> Content:
    figures = {name: view[name][s][p] for name in VIEW_FIGURES}
    return figures | {"verdict": VERDICTS[view["verdict"][s][p]]}


VIEW_FIGURES = ("defocus_d", "size_deg", "luminance_cd_m2", "threshold_cd_m2", "visibility_level")
