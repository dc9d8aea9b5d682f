"""Which causes may lie behind which words, what each quick test tells of them, and what may help. One table."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Literal

from advisor.counsel import recheck_light_causes as light
from advisor.counsel import recheck_wear_causes as wear
from advisor.counsel.recheck_lens import OnFile
from advisor.counsel.recheck_light_causes import Rating
from advisor.counsel.recheck_remedies import (
    Work,
    closer_fit_behind,
    closer_fit_fringe,
    coat_back_dark,
    coat_both_ahead,
    coat_both_behind,
    higher_abbe,
    other_form,
    other_material_ahead,
    plain,
    shade_light,
    thinner_material,
    turn_desk,
)
from advisor.counsel.recheck_wear_remedies import (
    check_coating,
    film_on_faces,
    keep_curve,
    near_pair,
    remake_as_pair,
    replace_same,
    smaller_frame,
    top_layer,
)

Kind = Literal["lens", "made", "eye", "surroundings", "use", "fit"]
# of a quick test: its answers, "yes+" for, "yes-" against, "yes!" for whatever else tells against it; parted by a space
Tells = Mapping[str, str]
OWN_KINDS = frozenset({"lens", "made", "use", "fit"})  # what the shop can look at and mend


@dataclass(frozen=True)
class CauseRule:
    """One cause: its kind, how likely the lens on file makes it, what tests tell, and the remedies in order."""

    kind: Kind
    rate: Callable[[OnFile], Rating | None]
    tells: Tells = field(default_factory=dict)
    remedies: tuple[tuple[str, Work], ...] = ()


def _plainly(*keys: str) -> tuple[tuple[str, Work], ...]:
    return tuple((key, plain) for key in keys)


_NOT_THE_LENS = {"cover-eye": "yes-", "car-only": "yes-", "pinhole": "yes-", "old-pair": "yes-"}
_SECOND = _NOT_THE_LENS | {"moves": "yes+ no-"}
_BEHIND = {"shade": "yes+ no-"}
_FINE_WEB = {"fine-web": "yes+ no-"}
_AHEAD = (("coat-both", coat_both_ahead), ("other-form", other_form), ("other-material", other_material_ahead))
_FROM_BEHIND = (
    ("turn-desk", turn_desk),
    ("shade-light", shade_light),
    ("closer-fit", closer_fit_behind),
    ("coat-both", coat_both_behind),
)
_ASK = _plainly("adjust-fit", "ask-prescriber")

CAUSES: Mapping[str, CauseRule] = {
    "ahead-ghost": CauseRule("lens", light.ahead_ghost, _SECOND, _AHEAD),
    "bare-face": CauseRule("lens", light.bare_face, _SECOND, (("check-coating", check_coating),)),
    "windscreen": CauseRule(
        "surroundings", wear.only_asking_tells, {"cover-eye": "yes-", "car-only": "yes+ no-"}, _plainly("explain")
    ),
    "eyes-not-together": CauseRule("eye", wear.only_asking_tells, {"cover-eye": "yes+ no-"}, _plainly("refer-eyes")),
    "not-measured": CauseRule("fit", wear.not_measured, {}, _plainly("measure-now")),
    "eye-itself": CauseRule(
        "eye",
        wear.only_asking_tells,
        # an image that goes through a pinhole, glasses off, is the eye's own optics: "no" tells nothing against the eye
        {"pinhole": "yes!", "old-pair": "yes!", "moves": "yes-", "cover-eye": "yes-"},
        _plainly("refer-eye"),
    ),
    "behind-front": CauseRule("lens", light.behind_front, _BEHIND, _FROM_BEHIND),
    "behind-back": CauseRule("lens", light.behind_back, _BEHIND, _FROM_BEHIND),
    "edge-rings": CauseRule(
        "lens",
        light.edge_rings,
        {"rings-follow-edge": "yes+ no-"},
        (
            *_plainly("matt-edge"),
            ("smaller-frame", smaller_frame),
            *_plainly("rolled-edge"),
            ("thinner-material", thinner_material),
            ("film-on-faces", film_on_faces),
        ),
    ),
    "chromatic": CauseRule(
        "lens",
        light.chromatic,
        {"side-only": "yes+ no-"},
        (*_plainly("adjust-fit"), ("closer-fit", closer_fit_fringe), ("higher-abbe", higher_abbe)),
    ),
    "soap-film": CauseRule(
        "use", wear.soap_film, {"washed-clear": "yes+ no-", "fog-only": "yes-"}, _plainly("clean-right")
    ),
    "top-layer-worn": CauseRule(
        "lens",
        wear.top_layer_worn,
        {"washed-clear": "yes- no+", "fog-only": "yes-"},
        (*_plainly("clean-right"), ("replace-same", replace_same), ("top-layer", top_layer)),
    ),
    "breath-fog": CauseRule("use", wear.breath_fog, {"fog-only": "yes+ no-"}, _plainly("explain")),
    "solvent": CauseRule("use", wear.solvent, _FINE_WEB, (("replace-same", replace_same),)),
    "heat-stress": CauseRule("use", wear.heat_stress, _FINE_WEB, (("replace-same", replace_same),)),
    "tight-rim": CauseRule(
        "fit", wear.tight_rim, {"fine-web": "no-"}, (*_plainly("loosen-rim"), ("replace-same", replace_same))
    ),
    "adhesion": CauseRule(
        "lens", wear.adhesion, {"edge-flakes": "yes+ no-", "fine-web": "yes-"}, (("replace-same", replace_same),)
    ),
    "different-batch": CauseRule(
        "lens", light.different_batch, {"one-face-white": "yes-"}, (("remake-as-pair", remake_as_pair),)
    ),
    "one-bare-face": CauseRule(
        "lens", light.one_bare_face, {"one-face-white": "yes+ no-"}, (("remake-as-pair", remake_as_pair),)
    ),
    "changed-curve": CauseRule("lens", wear.changed_curve, {}, (*_plainly("adjust-fit"), ("keep-curve", keep_curve))),
    "changed-cylinder": CauseRule("lens", wear.changed_cylinder, {}, _ASK),
    "changed-power": CauseRule("lens", wear.changed_power, {}, _ASK),
    "changed-size": CauseRule("lens", wear.changed_size, {}, (*_plainly("adjust-fit"), ("keep-curve", keep_curve))),
    "changed-index": CauseRule("lens", wear.changed_index, {}, (("higher-abbe", higher_abbe),)),
    "how-it-sits": CauseRule("fit", wear.how_it_sits, {"marks-off": "yes+ no-"}, _plainly("adjust-fit")),
    "heights": CauseRule("fit", wear.heights, {"marks-off": "yes+ no-"}, _plainly("adjust-heights")),
    "wrong-design": CauseRule("lens", wear.wrong_design, {}, _plainly("other-design")),
    "near-imbalance": CauseRule(
        "lens", wear.near_imbalance, {"cover-eye": "no-"}, (*_plainly("ask-prescriber"), ("near-pair", near_pair))
    ),
    "near-pd": CauseRule("fit", wear.near_pd, {"cover-eye": "no-"}, _plainly("measure-now", "ask-prescriber")),
    "near-part-on-steps": CauseRule("lens", wear.near_part_on_steps, {}, _plainly("head-down", "walking-pair")),
    "near-power": CauseRule("lens", wear.near_power, {}, _plainly("ask-prescriber")),
    "frame-fit": CauseRule("fit", wear.frame_fit, {}, _plainly("adjust-fit")),
    "bare-back-tint": CauseRule(
        "lens", light.bare_back_tint, {"shade-behind": "yes+ no-"}, (("coat-back", coat_back_dark),)
    ),
    "polariser": CauseRule("lens", light.polariser, {"tilt-head": "yes+ no-"}, _plainly("explain", "another-pair")),
    "windscreen-uv": CauseRule("lens", light.windscreen_uv, {}, _plainly("explain", "another-pair")),
    "film-or-tint": CauseRule("lens", light.film_or_tint, {}, _plainly("explain", "another-pair")),
}

CAUSES_OF: Mapping[str, tuple[str, ...]] = {
    "second-light": ("not-measured", "ahead-ghost", "bare-face", "windscreen", "eyes-not-together", "eye-itself"),
    "behind": ("behind-front", "behind-back"),
    "rings": ("eye-itself",),
    "glare": ("eye-itself", "ahead-ghost"),
    "edge-rings": ("edge-rings",),
    "fringes": ("chromatic",),
    "smears": ("soap-film", "top-layer-worn", "breath-fog"),
    "crazed": ("heat-stress", "solvent", "tight-rim", "adhesion"),
    "colours-differ": ("different-batch", "one-bare-face"),
    "not-right": (
        "changed-curve", "changed-cylinder", "changed-power", "changed-size", "how-it-sits", "changed-index",
    ),
    "steps": (
        "near-part-on-steps", "heights", "changed-curve", "changed-cylinder", "changed-power", "changed-size",
        "how-it-sits",
    ),
    "near-double": ("near-imbalance", "near-pd", "eyes-not-together", "heights", "near-power", "eye-itself"),
    "near": ("near-imbalance", "wrong-design", "heights", "near-power"),
    "fit": ("frame-fit",),
    "dark-mirror": ("bare-back-tint",),
    "black-screens": ("polariser",),
    "not-dark": ("windscreen-uv",),
    "yellow": ("film-or-tint",),
}  # fmt: skip


def told(rule: CauseRule, answers: Mapping[str, str]) -> Literal["for", "against"] | None:
    """Return what the quick tests say of a cause; one against it outweighs any for it but the strongest."""
    marks = {
        part[-1] for test, answer in answers.items() for part in rule.tells.get(test, "").split() if part[:-1] == answer
    }
    if "!" in marks:
        return "for"
    return "against" if "-" in marks else "for" if "+" in marks else None
