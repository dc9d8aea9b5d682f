"""From arrays to the answer's plain content, which the one model of ``comparison.py`` then checks."""

import math
from collections.abc import Mapping, Sequence
from typing import Any

from advisor.counsel.faces import residual_colour
from advisor.counsel.laid_out import NOTE_TEXTS, REFUSAL_TEXTS, Laid
from advisor.counsel.light import Light, as_made_spreads, estimated_ranges
from advisor.counsel.phrases import Figure, Phrase, Translator, mark, say
from advisor.counsel.prescription import EYES, Eye
from advisor.counsel.stock_items import Scene
from advisor.optics.ghost_strength import PATHS

Content = dict[str, Any]


def number(value: float) -> float | None:
    """Return a plain number, or None for one that is not finite; the answer never holds NaN or Infinity."""
    return float(value) if math.isfinite(value) else None


def notice(phrase: Phrase, texts: Mapping[str, str], translator: Translator) -> Content:
    """Return a phrase as the answer writes it: code, text and figures."""
    return {"code": phrase.code, "text": say(phrase, texts, translator), "figures": dict(phrase.figures)}


def label_of(option: Laid, translator: Translator) -> str:
    """Return a short name of an option: material, coatings and tint, as the shop calls them."""
    front, back = (coating.label or coating.key for coating in (option.front, option.back))
    words = [option.material.label or option.material.key]
    words.append(front if front == back else translator.gettext(mark("%(front)s in front, %(back)s behind")) % {"front": front, "back": back})
    if option.tint is not None:
        words.append(option.tint.label or f"{translator.number(100 * option.tint.luminous_transmittance, digits=0)} %")
    if option.design.kind != "single-vision":
        words.insert(0, option.design.label or option.design.key)
    return ", ".join(words)


def option_answer(
    option: Laid, *, light: Light, uncoated: Light, scenes: Sequence[Scene], translator: Translator
) -> Content:
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
    if not refused:
        for eye in EYES:
            content[eye] = _eye(option, eye, light=light, uncoated=uncoated, scenes=scenes)
    return content


def _uncoated(option: Laid, *, uncoated: Light, scenes: Sequence[Scene]) -> Content:
    """Return what the same lens would mirror without a film."""
    k = option.index
    ahead = [s for s, scene in enumerate(scenes) if scene.where == "ahead"]
    strengths = uncoated.strengths[k, ahead, PATHS.index("ahead-inner")]
    return {
        "hard_coat_only": option.material.hard_coat == "always",
        "first_pass_loss": float(uncoated.first_pass_loss[k]),
        "whole_lens": float(uncoated.whole_lens[k]),
        "second_image": float(strengths.max()) if ahead else None,
    }


def _eye(option: Laid, _eye: Eye, *, light: Light, uncoated: Light, scenes: Sequence[Scene]) -> Content:
    k = option.index
    fronts, backs, both = as_made_spreads(option)
    front, back = option.front_face, option.back_face
    content: Content = {
        "luminous_reflectance": {
            "front": float(light.front[k]),
            "back": float(light.back[k]),
            "first_pass_loss": float(light.first_pass_loss[k]),
            "whole_lens": float(light.whole_lens[k]),
            "as_made": {
                name: None if points is None else points.tolist()
                for name, points in (("front", fronts), ("back", backs), ("first_pass_loss", both))
            },
            "estimated": front.is_estimated or back.is_estimated,
        },
        "uncoated": _uncoated(option, uncoated=uncoated, scenes=scenes),
        "luminous_transmittance": float(light.transmittance[k]),
        "residual_colour": {
            name: dict(zip(("hue", "srgb", "xy"), residual_colour(face), strict=True))
            for name, face in (("front", front), ("back", back))
        },
        "ghosts": _ghosts(option, light=light, scenes=scenes),
    }
    if option.tint is not None and option.tint.luminous_transmittance_dark is not None:
        content["luminous_transmittance_dark"] = float(light.transmittance_dark[k])
    return content


def _ghosts(option: Laid, *, light: Light, scenes: Sequence[Scene]) -> list[Content]:
    """Return the ghosts of the paths that light of each scene can take."""
    ranges = estimated_ranges(option, scenes)
    found = []
    for s, scene in enumerate(scenes):
        for p, path in enumerate(PATHS):
            if path.startswith("behind") != (scene.where == "behind"):
                continue
            ghost: Content = {"path": path, "scene": scene.key, "strength": float(light.strengths[option.index, s, p])}
            if ranges is not None:
                ghost["strength_range"] = ranges[:, s, p].tolist()
            found.append(ghost)
    return found
