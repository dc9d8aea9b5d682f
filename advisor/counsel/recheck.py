"""The return visit: signs for an eye doctor first, then verify as made, then causes ranked, then what would help.

Ranked by what this very lens makes likely and by the answers to the quick tests. Where a sign is there, or the lens
cannot explain the words, no lens is offered. Nothing is ever said to be gone, and prescribed prism is never touched.
The signs are told whatever the words, the measurements or the lens on file.
"""

import datetime as dt
from collections.abc import Iterable, Mapping, Sequence

from advisor import __version__
from advisor.counsel.as_made_check import verify
from advisor.counsel.faults import Faults, nearest_name
from advisor.counsel.measured import Measured
from advisor.counsel.phrases import Phrase, Translator, mark
from advisor.counsel.recheck_answer import AsMade, Named, RecheckAnswer, Refer, Sign
from advisor.counsel.recheck_found import Found
from advisor.counsel.recheck_lens import OnFile, on_file
from advisor.counsel.recheck_shown import reason, the_eye_itself
from advisor.counsel.recheck_texts import COMPLAINTS, NOTES, SIGNS, TESTS, TODAY
from advisor.counsel.recheck_words import Heard, hear
from advisor.counsel.regions import region_of
from advisor.counsel.sheet import NoSuchOption
from advisor.counsel.stock import Range
from advisor.counsel.tolerances import tolerances_of
from advisor.counsel.visit import Visit
from advisor.errors import TwolightError

THERE = ("yes", "heard")


class UnknownAnswer(TwolightError):
    """An answer was given to a question that nobody asks, or is neither yes nor no."""

    text = mark("“%(key)s” is no question of ours, or its answer is neither yes nor no; did you mean “%(nearest)s”?")

    def __init__(self, key: str) -> None:
        known = [*SIGNS, *TESTS]
        super().__init__(key=key[:60], nearest=nearest_name(key, names=known) or known[0])


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
    UnknownAnswer
        If an answer's key is not known.
    Faults, advisor.counsel.sheet.NoSuchOption
        If the visit names what the range does not hold, or the option is not known; never where a sign is there.
    """
    answers = dict(tests or {})
    for key, answer in answers.items():
        if key not in SIGNS | TESTS or answer not in ("yes", "no"):
            raise UnknownAnswer(key)
    heard = hear(says, translator, languages=[visit.wearer.language if visit.wearer else None])
    signs = _signs(answers, heard.signs, translator)
    urgent = _urgency(signs)
    lens = _lens(visit, stock, number, translator, today, needed=urgent is None)
    if lens is None:
        rules = tolerances_of(stock.shop.region)
        made = AsMade(tolerances=rules.key, source=translator.gettext(rules.source))
    else:
        made = verify(lens, measured)
    found = None if urgent or lens is None else Found(lens, heard.complaints, answers, measured, made)
    refer = urgent if found is None else found.refer
    asked = all(sign.answer in ("yes", "no") for sign in signs)
    notes = [*_notes(signs, heard, translator, urgent=urgent, found=found)]
    if made.findings:
        notes.append(Phrase("tolerances", {"source": made.source}))
    return RecheckAnswer(
        twolight=__version__,
        reference=visit.reference,
        option=None if lens is None else lens.index,
        lens="" if lens is None else lens.option.label,
        says=says,
        complaints=[Named(key=key, text=translator.gettext(COMPLAINTS[key])) for key in heard.complaints],
        refer=refer,
        urgent_help=translator.gettext(region_of(stock.shop.region).urgent_help) if refer == "today" else None,
        offer="nothing" if found is None else found.offer(signs_asked=asked),
        signs=signs,
        as_made=made,
        tests=[] if found is None else found.tests(),
        causes=found.causes if found else [the_eye_itself(translator)] if urgent == "soon" else [],
        ruled_out=found.ruled_out if found else [],
        notes=[reason(phrase, NOTES, translator) for phrase in notes],
    )


def _lens(
    visit: Visit, stock: Range, number: int | None, translator: Translator, today: dt.date | None, *, needed: bool
) -> OnFile | None:
    """Return the lens on file; one that is not needed may be missing, for a sign waits for no lens."""
    try:
        return on_file(visit, stock, number=number, translator=translator, today=today)
    except (Faults, NoSuchOption):
        if needed:
            raise
        return None


def _signs(answers: Mapping[str, str], heard: Iterable[str], translator: Translator) -> list[Sign]:
    """Return every sign with its answer; heard in the wearer's words it stands until it is asked and answered."""
    said = set(heard)
    return [
        Sign.model_validate(
            {
                "key": key,
                "when": "today" if key in TODAY else "soon",
                "text": translator.gettext(text),
                "answer": answers.get(key, "heard" if key in said else "not-asked"),
            }
        )
        for key, text in SIGNS.items()
    ]


def _urgency(signs: Iterable[Sign]) -> Refer | None:
    there = {sign.when for sign in signs if sign.answer in THERE}
    return "today" if "today" in there else "soon" if "soon" in there else None


def _notes(
    signs: Sequence[Sign], heard: Heard, translator: Translator, *, urgent: Refer | None, found: Found | None
) -> Iterable[Phrase]:
    """Yield what must be said, the gravest first."""
    if any(sign.key == "today-double" and sign.answer in THERE for sign in signs) or (found and found.sees_double):
        yield Phrase("do-not-drive")
    if urgent is None and any(sign.answer == "not-asked" for sign in signs):
        yield Phrase("ask-signs-first")
    denied = [sign.text for sign in signs if sign.answer == "no" and sign.key in heard.signs]
    if denied:
        yield Phrase("heard-but-no", {"signs": "; ".join(denied)})
    if urgent is not None:
        yield Phrase("no-lens-before")
        return
    if not heard.complaints:
        known = "; ".join(translator.gettext(text) for text in COMPLAINTS.values())
        yield Phrase("not-understood", {"complaints": known})
    if found is not None:
        yield from found.notes()
