"""What is found of some complaints on one lens: causes ranked, who is referred, and what must be said beside them."""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property

from advisor.counsel.measured import Measured
from advisor.counsel.phrases import Phrase
from advisor.counsel.recheck_answer import AsMade, Cause, Offer, Refer, Test
from advisor.counsel.recheck_lens import OnFile, worst_second
from advisor.counsel.recheck_remedies import NOT_SEEN_LEVEL
from advisor.counsel.recheck_shown import cause_of, wrong_as_made
from advisor.counsel.recheck_table import CAUSES, CAUSES_OF, OWN_KINDS
from advisor.counsel.recheck_texts import TESTS
from advisor.counsel.recheck_worn import worn_pair

REFLECTIONS = frozenset({"second-light", "behind", "glare", "dark-mirror"})
DOUBLED = frozenset({"second-light", "near-double"})  # told from eyes that do not work together by the cover test alone
TO_MEASURE = DOUBLED | {"fringes", "not-right", "steps", "near"}  # what wrong powers, prism, centres or heights may do
OF_A_SECOND_LIGHT = frozenset({"moves", "car-only", "pinhole", "old-pair"})
SCORES = {"likely": 3, "possible": 2, "not worked out": 1, "unlikely": 0}
TOLD_SCORE = 4  # a quick test counts for more than any figure


@dataclass(frozen=True)
class Found:
    """What is found of one complaint set on one lens; ``answers`` are those to the quick tests as they were given."""

    lens: OnFile
    complaints: Sequence[str]
    answers: Mapping[str, str]
    measured: Measured | None
    made: AsMade

    @cached_property
    def keys(self) -> tuple[str, ...]:
        """The causes that may lie behind the words."""
        keys = dict.fromkeys(key for complaint in self.complaints for key in CAUSES_OF[complaint])
        return tuple(key for key in keys if key != "not-measured" or self.measured is None)

    @cached_property
    def telling(self) -> Mapping[str, str]:
        """The answers that tell something of this wearer and lens."""
        mute = set()
        if self.old_pair == "old-pair-same":
            mute.add("old-pair")  # it tells nothing of the eye
        if self.lens.prescribes_prism and self.answers.get("side-only") == "no":
            mute.add("side-only")  # prism spreads colour straight ahead as well
        return {key: answer for key, answer in self.answers.items() if key not in mute}

    @cached_property
    def old_pair(self) -> str | None:
        """What is to be said of the old pair, where the second light is seen in it too."""
        if self.answers.get("old-pair") != "yes":
            return None
        worn = worn_pair(self.lens)
        if worn is None:
            return "old-pair-unknown"
        ghost = worst_second(worn, self.lens.night_scenes())
        same = ghost is not None and (ghost.visibility_level or 0.0) >= NOT_SEEN_LEVEL
        return "old-pair-same" if same else None

    @property
    def is_doubled(self) -> bool:
        """Whether the words may mean double sight, which the cover test tells."""
        return bool(DOUBLED & set(self.complaints))

    @property
    def awaits_cover_test(self) -> bool:
        """Whether the cover test has still to be done before any lens."""
        return self.is_doubled and "cover-eye" not in self.answers

    @property
    def sees_double(self) -> bool:
        """Whether it goes with either eye covered."""
        return "eyes-not-together" in self.keys and self.answers.get("cover-eye") == "yes"

    @property
    def looks_new(self) -> bool:
        """Whether double sight may be new; not asked is not never."""
        return self.sees_double and self.answers.get("new") != "no"

    def tests(self) -> list[Test]:
        """Return the quick tests that tell these causes apart."""
        wanted = {test for key in self.keys for test in CAUSES[key].tells}
        wanted = wanted | {"new"} if self.is_doubled else wanted - {"cover-eye"}
        wanted -= OF_A_SECOND_LIGHT if "second-light" not in self.complaints else set()
        gettext = self.lens.translator.gettext
        return [
            Test.model_validate({"key": key, "text": gettext(text), "answer": self.answers.get(key)})
            for key, text in TESTS.items()
            if key in wanted
        ]

    @cached_property
    def _judged(self) -> list[Cause]:
        return [cause for key in self.keys if (cause := cause_of(self.lens, key, self.telling)) is not None]

    @cached_property
    def _points_elsewhere(self) -> bool:
        """Whether a quick test points to the eyes or the surroundings."""
        return any(cause.kind not in OWN_KINDS and cause.told == "for" for cause in self._judged)

    @cached_property
    def causes(self) -> list[Cause]:
        """The causes, the likeliest first; what is wrong as made comes before any."""
        wrong = wrong_as_made(self.lens, self.made)
        listed = sorted((cause for cause in self._judged if not _is_out(cause)), key=self._score, reverse=True)
        bare = self._points_elsewhere or wrong is not None or not explains(listed)
        listed = [_without_lenses(cause) if bare or cause.level == "unlikely" else cause for cause in listed]
        if wrong is None:
            return listed
        return [_without_lenses(wrong) if self.looks_new else wrong, *listed]

    def _score(self, cause: Cause) -> int:
        if cause.key == "not-measured" and not self._points_elsewhere:
            return SCORES["possible"] + TOLD_SCORE  # prism is measured before a face is blamed
        return SCORES[cause.level] + (TOLD_SCORE if cause.told == "for" else 0)

    @property
    def ruled_out(self) -> list[Cause]:
        """The causes that the quick tests or the figures rule out."""
        return [cause.model_copy(update={"remedies": []}) for cause in self._judged if _is_out(cause)]

    @cached_property
    def refer(self) -> Refer | None:
        """How soon an eye doctor is to look, from the quick tests and from what the lens can explain."""
        told = {cause.key for cause in self.causes if cause.told == "for"}
        if "eyes-not-together" in told:
            return "today" if self.looks_new else "soon"
        if "eye-itself" in told:
            return "refer"
        if "windscreen" in told or not self.complaints:
            return None
        return None if explains(self.causes) else "refer"

    def offer(self, *, signs_asked: bool) -> Offer:
        """Return what may be offered: no lens before all is asked, none but the ordered one if that is wrong."""
        remakes = {remedy.key for cause in self.causes for remedy in cause.remedies if remedy.outcome == "remake"}
        if not remakes:
            return "nothing"
        if not signs_asked or self.awaits_cover_test:
            return "after-asking"
        return "remake-as-ordered" if "remake-as-ordered" in remakes else "open"

    def notes(self) -> Iterator[Phrase]:
        """Yield what must be said beside the causes."""
        remedies = {remedy.key: remedy for cause in self.causes for remedy in cause.remedies}
        remake = "remake-as-ordered" in remedies
        if self.refer is not None and not remake:
            told = any(cause.told == "for" for cause in self.causes)
            yield Phrase("no-lens-before" if told else "lens-cannot-explain")
        if self.awaits_cover_test:
            yield Phrase("cover-eye-first")
        if remake:
            yield Phrase("remake-first")
        if self.measured is None and TO_MEASURE & set(self.complaints):
            yield Phrase("measure-first")
        if "steps" in self.complaints:
            yield Phrase("falls")
        if self.old_pair:
            yield Phrase(self.old_pair)
        if REFLECTIONS & set(self.complaints) and any(remedy.figures for remedy in remedies.values()):
            yield Phrase("never-gone")
        if self.lens.prescribes_prism and "second-light" in self.complaints:
            yield Phrase("prism-may-stay")


def explains(causes: Iterable[Cause]) -> bool:
    """Tell whether anything that the shop can look at may lie behind the words; what was not measured explains none."""
    return any(
        cause.kind in OWN_KINDS and cause.level != "unlikely" and cause.key != "not-measured" for cause in causes
    )


def _is_out(cause: Cause) -> bool:
    return cause.told == "against" or (cause.level == "unlikely" and cause.told is None)


def _without_lenses(cause: Cause) -> Cause:
    kept = [remedy for remedy in cause.remedies if remedy.outcome != "remake"]
    return cause.model_copy(update={"remedies": kept})
