"""The return visit: signs for an eye doctor first, then verify as made, then causes ranked, then what would help.

Ranked by what this very lens makes likely and by the answers to the quick tests. Where a sign is there, or the lens
cannot explain the words, no lens is offered. Nothing is ever said to be gone, and prescribed prism is never touched.
"""

import datetime as dt
from collections.abc import Iterable, Mapping, Sequence

from advisor import __version__
from advisor.counsel.as_made_check import verify
from advisor.counsel.faults import nearest_name
from advisor.counsel.measured import Measured
from advisor.counsel.phrases import Phrase, Translator, mark
from advisor.counsel.recheck_answer import AsMade, Cause, Named, Offer, RecheckAnswer, Refer, Sign, Test
from advisor.counsel.recheck_lens import OnFile, on_file, worst_second
from advisor.counsel.recheck_shown import cause_of, reason, wrong_as_made
from advisor.counsel.recheck_table import CAUSES, CAUSES_OF, OWN_KINDS
from advisor.counsel.recheck_texts import COMPLAINTS, NOTES, SIGNS, TESTS, TODAY
from advisor.counsel.recheck_words import hear
from advisor.counsel.recheck_worn import worn_pair
from advisor.counsel.regions import region_of
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit
from advisor.errors import TwolightError

REFLECTIONS = frozenset({"second-light", "behind", "glare", "dark-mirror"})
SCORES = {"likely": 3, "possible": 2, "not worked out": 1, "unlikely": 0}
TOLD_SCORE = 4  # a quick test counts for more than any figure
GHOST_POSSIBLE_LEVEL = 0.4


class NotUnderstood(TwolightError):
    """No complaint is known in the wearer's words."""

    text = mark("These words are not understood; say one of: %(keys)s.")

    def __init__(self) -> None:
        self.figures = {"keys": ", ".join(COMPLAINTS)}
        super().__init__(self.text % self.figures)


class UnknownAnswer(TwolightError):
    """An answer was given to a question that nobody asks, or is neither yes nor no."""

    text = mark("“%(key)s” is no question of ours, or its answer is neither yes nor no; did you mean “%(nearest)s”?")

    def __init__(self, key: str) -> None:
        known = [*SIGNS, *TESTS]
        self.figures = {"key": key[:60], "nearest": nearest_name(key, names=known) or known[0]}
        super().__init__(self.text % self.figures)


def recheck(
    visit: Visit,
    stock: Range,
    *,
    says: str,
    tests: Mapping[str, str] | None = None,
    measured: Measured | None = None,
    number: int | None = None,
    translator: Translator,
    today: dt.date | None = None,
) -> RecheckAnswer:
    """Work out a return visit; ``tests`` holds the answers to signs and quick tests, each yes or no.

    Raises
    ------
    Faults
        If the visit names what the range does not hold.
    NotUnderstood, UnknownAnswer, advisor.counsel.sheet.NoSuchOption
        If the words, an answer's key or the option are not known.
    """
    answers = dict(tests or {})
    for key, answer in answers.items():
        if key not in SIGNS | TESTS or answer not in ("yes", "no"):
            raise UnknownAnswer(key)
    heard = hear(says)
    signs = _signs(answers, heard.signs, translator)
    urgent = _urgency(signs)
    if not heard.complaints and urgent is None and measured is None:
        raise NotUnderstood
    lens = on_file(visit, stock, number=number, translator=translator, today=today)
    made = verify(lens, measured)
    found = _Found(lens, heard.complaints, answers)
    refer: Refer | None
    if urgent is not None:
        causes, ruled_out, refer = found.eye_alone(urgent), list[Cause](), urgent
        notes = [Phrase("no-lens-before")]
    else:
        causes, ruled_out = found.ranked(made)
        refer = found.referral(causes)
        notes = list(found.notes(causes, refer, measured))
    if any(sign.key == "today-double" and sign.answer in ("yes", "heard") for sign in signs) or found.looks_double:
        notes.insert(0, Phrase("do-not-drive"))
    offer = _offer(causes, signs, urgent)
    if urgent is None and any(sign.answer == "not-asked" for sign in signs):
        notes.insert(0, Phrase("ask-signs-first"))
    if made.findings:
        notes.append(Phrase("tolerances", {"source": made.source}))
    return RecheckAnswer(
        twolight=__version__,
        reference=visit.reference,
        option=lens.index,
        lens=lens.option.label,
        says=says,
        complaints=[Named(key=key, text=translator.gettext(COMPLAINTS[key])) for key in heard.complaints],
        refer=refer,
        urgent_help=translator.gettext(region_of(stock.shop.region).urgent_help) if refer == "today" else None,
        offer=offer,
        signs=signs,
        as_made=made,
        tests=[] if urgent else found.tests(),
        causes=causes,
        ruled_out=ruled_out,
        notes=[reason(phrase, NOTES, translator) for phrase in notes],
    )


def _signs(answers: Mapping[str, str], heard: Iterable[str], translator: Translator) -> list[Sign]:
    """Return every sign with its answer; what was heard in the wearer's own words stands, whatever was ticked."""
    said = set(heard)
    return [
        Sign.model_validate(
            {
                "key": key,
                "when": "today" if key in TODAY else "soon",
                "text": translator.gettext(text),
                "answer": "heard" if key in said and answers.get(key) != "yes" else answers.get(key, "not-asked"),
            }
        )
        for key, text in SIGNS.items()
    ]


def _urgency(signs: Iterable[Sign]) -> Refer | None:
    there = {sign.when for sign in signs if sign.answer in ("yes", "heard")}
    return "today" if "today" in there else "soon" if "soon" in there else None


def _offer(causes: Sequence[Cause], signs: Sequence[Sign], urgent: Refer | None) -> Offer:
    """Return what may be offered: no lens before every sign is answered, none but the ordered one if that is wrong."""
    remakes = {remedy.key for cause in causes for remedy in cause.remedies if remedy.outcome == "remake"}
    if urgent is not None or not remakes:
        return "nothing"
    if any(sign.answer == "not-asked" for sign in signs):
        return "after-asking"
    return "remake-as-ordered" if "remake-as-ordered" in remakes else "open"


class _Found:
    """What is found of one complaint set on one lens."""

    def __init__(self, lens: OnFile, complaints: Sequence[str], answers: Mapping[str, str]) -> None:
        self.lens, self.complaints, self.given, self.answers = lens, complaints, answers, dict(answers)
        self.keys = tuple(dict.fromkeys(key for complaint in complaints for key in CAUSES_OF[complaint]))
        self.old_pair = self._old_pair() if answers.get("old-pair") == "yes" else None
        if self.old_pair == "old-pair-same":  # then it tells nothing of the eye
            del self.answers["old-pair"]
        if lens.prescribes_prism and answers.get("side-only") == "no":
            del self.answers["side-only"]  # prism spreads colour straight ahead as well

    @property
    def looks_double(self) -> bool:
        """Whether the light goes with either eye covered and this may be new; not asked is not never."""
        together = "eyes-not-together" in self.keys and self.answers.get("cover-eye") == "yes"
        return together and self.answers.get("new") != "no"

    def _old_pair(self) -> str:
        worn = worn_pair(self.lens)
        if worn is None:
            return "old-pair-unknown"
        ghost = worst_second(worn, self.lens.night_scenes())
        same = ghost is not None and (ghost.visibility_level or 0.0) >= GHOST_POSSIBLE_LEVEL
        return "old-pair-same" if same else ""

    def tests(self) -> list[Test]:
        """Return the quick tests that tell these causes apart."""
        wanted = {test for key in self.keys for test in CAUSES[key].tells}
        wanted |= {"new"} if "cover-eye" in wanted and "second-light" in self.complaints else set()
        if "second-light" not in self.complaints:
            wanted -= {"cover-eye", "moves", "car-only", "pinhole", "old-pair"}
        gettext = self.lens.translator.gettext
        return [
            Test.model_validate({"key": key, "text": gettext(text), "answer": self.given.get(key)})
            for key, text in TESTS.items()
            if key in wanted
        ]

    def eye_alone(self, urgent: Refer) -> list[Cause]:
        """Return what is left where a sign is there: nothing for today, the eye alone for soon."""
        return [] if urgent == "today" else [_unweighed(cause_of(self.lens, "eye-itself", {}))]

    def ranked(self, made: AsMade) -> tuple[list[Cause], list[Cause]]:
        """Return the causes, the likeliest first, and those ruled out; what is wrong as made comes before any."""
        wrong = wrong_as_made(self.lens, made)
        judged = [cause for key in self.keys if (cause := cause_of(self.lens, key, self.answers)) is not None]
        listed = [cause for cause in judged if not _is_out(cause)]
        listed.sort(key=lambda cause: -(SCORES[cause.level] + (TOLD_SCORE if cause.told == "for" else 0)))
        elsewhere = any(cause.kind not in OWN_KINDS and cause.told == "for" for cause in listed)
        if elsewhere or wrong is not None or not self.explains(listed):
            listed = [_without_lenses(cause) for cause in listed]
        listed = [_without_lenses(cause) if cause.level == "unlikely" else cause for cause in listed]
        return ([wrong, *listed] if wrong else listed), [_without_remedies(cause) for cause in judged if _is_out(cause)]

    def explains(self, causes: Iterable[Cause]) -> bool:
        """Whether anything that the shop can look at may lie behind the words."""
        return any(cause.kind in OWN_KINDS and cause.level != "unlikely" for cause in causes)

    def referral(self, causes: Sequence[Cause]) -> Refer | None:
        """Return how soon an eye doctor is to look, from the quick tests and from what the lens can explain."""
        told = {cause.key for cause in causes if cause.told == "for"}
        if "eyes-not-together" in told:
            return "today" if self.looks_double else "soon"
        if "eye-itself" in told:
            return "refer"
        if "windscreen" in told or not self.complaints:
            return None
        return None if self.explains(causes) else "refer"

    def notes(self, causes: Sequence[Cause], refer: Refer | None, measured: Measured | None) -> Iterable[Phrase]:
        """Return what must be said beside the causes."""
        remedies = {remedy.key: remedy for cause in causes for remedy in cause.remedies}
        told = any(cause.told == "for" for cause in causes)
        if refer is not None:
            yield Phrase("no-lens-before" if told else "lens-cannot-explain")
            if not told and "eyes-not-together" in self.keys and "cover-eye" not in self.given:
                yield Phrase("cover-eye-first")
        if "remake-as-ordered" in remedies:
            yield Phrase("remake-first")
        if refer is None and measured is None:
            yield Phrase("measure-first")
        if self.old_pair:
            yield Phrase(self.old_pair)
        if REFLECTIONS & set(self.complaints) and any(remedy.figures for remedy in remedies.values()):
            yield Phrase("never-gone")
        if self.lens.prescribes_prism and "second-light" in self.complaints:
            yield Phrase("prism-may-stay")


def _is_out(cause: Cause) -> bool:
    return cause.told == "against" or (cause.level == "unlikely" and cause.told is None)


def _without_lenses(cause: Cause) -> Cause:
    kept = [remedy for remedy in cause.remedies if remedy.outcome != "remake"]
    return cause.model_copy(update={"remedies": kept})


def _without_remedies(cause: Cause) -> Cause:
    return cause.model_copy(update={"remedies": []})


def _unweighed(cause: Cause | None) -> Cause:
    if cause is None:
        raise LookupError("the eye itself applies to every lens")
    return cause
